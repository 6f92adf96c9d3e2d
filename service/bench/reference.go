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

// referenceOutput is what a program of testdata/bench prints about a file of events: "loop"
// compiles the C++ of that name with -O2 in the folder, everything else is the script.
func referenceOutput(ctx context.Context, reference, name, folder, events string) (string, error) {
	if reference != "loop" {
		return script(ctx, name+".py", events)
	}
	program := filepath.Join(folder, "loop")
	if _, err := output(ctx, "g++", "-O2", "-o", program, "testdata/bench/"+name+".cpp"); err != nil {
		return "", err
	}
	return output(ctx, program, events)
}

// script is what a Python script of testdata/bench prints.
func script(ctx context.Context, name string, arguments ...string) (string, error) {
	python, err := pythonWithScipy(ctx)
	if err != nil {
		return "", err
	}
	return output(ctx, python, append([]string{"testdata/bench/" + name}, arguments...)...)
}

// pythonWithScipy is a Python with numpy and scipy: the system's, or else one of our own in
// the user's cache, made on first use.
func pythonWithScipy(ctx context.Context) (string, error) {
	if _, err := output(ctx, "python3", "-c", "import numpy, scipy"); err == nil {
		return "python3", nil
	}
	cache, err := os.UserCacheDir()
	if err != nil {
		return "", err
	}
	home := filepath.Join(cache, "kinegate", "bench-python-2")
	python := filepath.Join(home, "bin", "python")
	if _, err := os.Stat(filepath.Join(home, "complete")); err == nil {
		return python, nil
	} else if !errors.Is(err, os.ErrNotExist) {
		return "", err
	}
	if _, err := output(ctx, "python3", "-m", "venv", "--clear", home); err != nil {
		return "", err
	}
	if _, err := output(ctx, python, "-m", "pip", "install", "-q", "numpy==2.3.5", "scipy==1.16.3"); err != nil {
		return "", err
	}
	return python, os.WriteFile(filepath.Join(home, "complete"), nil, 0o600)
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
