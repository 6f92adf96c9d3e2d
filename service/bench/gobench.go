package main

import (
	"context"
	"errors"
	"fmt"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"strconv"
	"strings"
	"time"
)

// measure is one measurement of a row, or a part of one.
type measure = func(ctx context.Context) (float64, error)

// benchmarkMetric runs one Go benchmark of the commands and reads a metric of it.
func benchmarkMetric(name, metric string) measure {
	const folder = "./service/cmd/kinegate"
	return func(ctx context.Context) (float64, error) {
		//nolint:gosec // the arguments are those of the rows
		output, err := exec.CommandContext(ctx, "go", "test", "-run", "^$", "-bench", anchored(name), folder).CombinedOutput()
		if err != nil {
			return 0, fmt.Errorf("%s: %w: %s", name, err, lastLine(string(output)))
		}
		return readMetric(string(output), metric)
	}
}

// tries is how often a time is measured; the least counts, as in the numpy scripts.
const tries = 10

// processorTime runs one Go benchmark with no and with many operations and returns the
// nanoseconds of processor time of one: what starts the benchmark falls out.
func processorTime(folder, name string, operations int) measure {
	return func(ctx context.Context) (float64, error) {
		temporary, err := os.MkdirTemp("", "bench")
		if err != nil {
			return 0, err
		}
		defer os.RemoveAll(temporary) //nolint:errcheck // left to the system otherwise
		program := filepath.Join(temporary, "benchmark")
		//nolint:gosec // the arguments are those of the rows
		if output, err := exec.CommandContext(ctx, "go", "test", "-c", "-o", program, folder).CombinedOutput(); err != nil {
			return 0, fmt.Errorf("%s: %w: %s", folder, err, lastLine(string(output)))
		}
		least := [2]time.Duration{math.MaxInt64, math.MaxInt64}
		for range tries {
			for i, n := range [2]int{1, operations} {
				//nolint:gosec // the program is our own
				command := exec.CommandContext(ctx, program, "-test.run", "^$", "-test.bench", anchored(name),
					"-test.benchtime", strconv.Itoa(n)+"x", "-test.cpu", "1")
				command.Dir = folder // where its test data lies
				output, err := command.CombinedOutput()
				if err != nil {
					return 0, fmt.Errorf("%s: %w: %s", name, err, lastLine(string(output)))
				}
				if _, err := readMetric(string(output), "ns/op"); err != nil {
					return 0, err // it ran no benchmark
				}
				least[i] = min(least[i], command.ProcessState.UserTime()+command.ProcessState.SystemTime())
			}
		}
		return float64(least[1]-least[0]) / float64(operations-1), nil
	}
}

// anchored is the pattern of one benchmark alone.
func anchored(name string) string { return "^" + strings.ReplaceAll(name, "/", "$/^") + "$" }

// readMetric finds a number with its unit in the output of a benchmark.
func readMetric(output, metric string) (float64, error) {
	for line := range strings.Lines(output) {
		if !strings.HasPrefix(line, "Benchmark") {
			continue
		}
		fields := strings.Fields(line)
		for i := 1; i < len(fields); i++ {
			if fields[i] == metric {
				return strconv.ParseFloat(fields[i-1], 64)
			}
		}
	}
	return 0, fmt.Errorf("the benchmark prints no %s", metric)
}

// perEvent is what the numpy scripts print for each size of their arrays.
var perEvent = regexp.MustCompile(`([0-9.]+) ns an event`)

// numpy runs a script of testdata/bench and returns the least time that it prints: its
// arrays are then as large as suits numpy best.
func numpy(name string, arguments ...string) measure {
	return func(ctx context.Context) (float64, error) {
		output, err := script(ctx, name, arguments...)
		if err != nil {
			return 0, err
		}
		least := 0.0
		for _, found := range perEvent.FindAllStringSubmatch(output, -1) {
			if x, err := strconv.ParseFloat(found[1], 64); err == nil && (least == 0 || x < least) {
				least = x
			}
		}
		if least == 0 {
			return 0, errors.New(name + " prints no time")
		}
		return least, nil
	}
}

// timesFaster is the ratio of two times: that of the other over our own.
func timesFaster(own, other measure) measure {
	return func(ctx context.Context) (float64, error) {
		a, err := own(ctx)
		if err != nil {
			return 0, err
		}
		b, err := other(ctx)
		if err != nil {
			return 0, err
		}
		return b / a, nil
	}
}

func lastLine(text string) string {
	lines := strings.Split(strings.TrimSpace(text), "\n")
	return lines[len(lines)-1]
}
