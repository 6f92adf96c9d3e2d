package main

import (
	"context"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
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
		output, err := referenceOutput(ctx, reference, "pair_masses", folder, events)
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
