package main

import (
	"context"
	"errors"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"strconv"
	"strings"
)

// pairMasses compares the time of six-photon pair masses elsewhere with our own, on the
// same events: "plain" and "in-place" are numpy, "loop" is a plain C++ loop compiled with
// -O2. All are the least processor time of many passes on one core.
func pairMasses(reference string) measure {
	return func(ctx context.Context) (float64, error) {
		folder, err := os.MkdirTemp("", "bench")
		if err != nil {
			return 0, err
		}
		defer os.RemoveAll(folder) //nolint:errcheck // left to the system otherwise
		events := filepath.Join(folder, "events")
		own, err := ownPairMasses(ctx, events)
		if err != nil {
			return 0, err
		}
		var output string
		if reference == "loop" {
			output, err = pairLoop(ctx, folder, events)
		} else {
			output, err = pairNumpy(ctx, events)
		}
		if err != nil {
			return 0, err
		}
		other, err := named(output, reference)
		if err != nil {
			return 0, err
		}
		return other / own, nil
	}
}

// ownPairMasses runs our benchmark, which leaves its events in a file.
func ownPairMasses(ctx context.Context, events string) (float64, error) {
	command := exec.CommandContext(ctx, "go", "test", "-run", "^$", "-bench", "^BenchmarkSixPhotonPairMasses$", "./kinematics/momentum")
	command.Env = append(os.Environ(), "KINEGATE_BENCH_EVENTS="+events)
	output, err := command.CombinedOutput()
	if err != nil {
		return 0, fmt.Errorf("pair masses: %w: %s", err, lastLine(string(output)))
	}
	return readMetric(string(output), "ns-cpu/op")
}

func pairNumpy(ctx context.Context, events string) (string, error) {
	python, err := pythonWithNumpy(ctx)
	if err != nil {
		return "", err
	}
	return output(ctx, python, "testdata/bench/pair_masses.py", events)
}

func pairLoop(ctx context.Context, folder, events string) (string, error) {
	program := filepath.Join(folder, "loop")
	if _, err := output(ctx, "g++", "-O2", "-o", program, "testdata/bench/pair_masses.cpp"); err != nil {
		return "", err
	}
	return output(ctx, program, events)
}

// pythonWithNumpy is a Python with numpy: the system's, or else one of our own in the
// user's cache, made on first use.
func pythonWithNumpy(ctx context.Context) (string, error) {
	if _, err := output(ctx, "python3", "-c", "import numpy"); err == nil {
		return "python3", nil
	}
	cache, err := os.UserCacheDir()
	if err != nil {
		return "", err
	}
	home := filepath.Join(cache, "kinegate", "bench-python")
	python := filepath.Join(home, "bin", "python")
	if _, err := os.Stat(python); err == nil {
		return python, nil
	} else if !errors.Is(err, os.ErrNotExist) {
		return "", err
	}
	if _, err := output(ctx, "python3", "-m", "venv", home); err != nil {
		return "", err
	}
	_, err = output(ctx, python, "-m", "pip", "install", "-q", "numpy==2.3.5")
	return python, err
}

// output is what a command prints.
func output(ctx context.Context, name string, arguments ...string) (string, error) {
	out, err := exec.CommandContext(ctx, name, arguments...).CombinedOutput() //nolint:gosec // the commands of the rows
	if err != nil {
		return "", fmt.Errorf("%s: %w: %s", name, err, lastLine(string(out)))
	}
	return string(out), nil
}

// named reads a number from lines "name number".
func named(output, name string) (float64, error) {
	for line := range strings.Lines(output) {
		if number, found := strings.CutPrefix(line, name+" "); found {
			return strconv.ParseFloat(strings.TrimSpace(number), 64)
		}
	}
	return 0, fmt.Errorf("no line %q in the output", name)
}
