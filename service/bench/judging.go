package main

import (
	"context"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
)

// judgingAgainst compares the time of judging six photons in windows on pair masses with
// that of a reference on the same events: "loop" is a plain C++ loop compiled with -O2,
// "numpy" works on whole arrays. All are the least processor time of many passes on one
// core, and must accept the same number of events.
func judgingAgainst(reference string) measure {
	return func(ctx context.Context) (float64, error) {
		folder, err := os.MkdirTemp("", "bench")
		if err != nil {
			return 0, err
		}
		defer os.RemoveAll(folder) //nolint:errcheck // left to the system otherwise
		events := filepath.Join(folder, "events")
		command := exec.CommandContext(ctx, "go", "test", "-run", "^$", "-bench", "^BenchmarkJudgeInProcess$", "./service/cmd/kinegate")
		command.Env = append(os.Environ(), "KINEGATE_BENCH_EVENTS="+events)
		own, err := command.CombinedOutput()
		if err != nil {
			return 0, fmt.Errorf("judging in process: %w: %s", err, lastLine(string(own)))
		}
		other, err := referenceOutput(ctx, reference, "judging", folder, events)
		if err != nil {
			return 0, err
		}
		ours, err := readMetric(string(own), "ns-cpu/event")
		if err != nil {
			return 0, err
		}
		theirs, err := named(other, reference)
		if err != nil {
			return 0, err
		}
		return theirs / ours, sameAccepted(string(own), other)
	}
}

// sameAccepted refuses to compare two that do not judge alike.
func sameAccepted(own, other string) error {
	ours, err := readMetric(own, "accepted")
	if err != nil {
		return err
	}
	theirs, err := named(other, "accepted")
	if err != nil {
		return err
	}
	if ours != theirs {
		return fmt.Errorf("%g events are accepted, %g by the reference", ours, theirs)
	}
	return nil
}
