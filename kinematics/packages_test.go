package kinematics_test

import (
	"bytes"
	"encoding/json"
	"errors"
	"io"
	"io/fs"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"strings"
	"testing"
)

// module is the path of this module; every package of it starts so.
const module = "example.org/kinegate"

// listed is what the go command says of one package.
type listed struct {
	ImportPath   string
	Dir          string
	Export       string
	Standard     bool
	GoFiles      []string
	Imports      []string
	TestImports  []string
	XTestImports []string
}

// complaint matches what the go command itself says among the lines of a compiler's listing.
var complaint = regexp.MustCompile(`(?m)^(#|go: |package |\S+\.go:\d+).*$`)

// watch looks at every folder and source file of the module from within the test. The go command
// that a test starts is a process of its own, and without this look a result would be taken from
// the test cache though the sources have changed.
func watch(t *testing.T) {
	t.Helper()

	err := filepath.WalkDir("..", func(path string, entry fs.DirEntry, err error) error {
		if err != nil {
			return err
		}

		if entry.IsDir() && strings.HasPrefix(entry.Name(), ".") && entry.Name() != ".." {
			return filepath.SkipDir
		}

		if entry.IsDir() || filepath.Ext(path) == ".go" {
			_, err = os.Stat(path)
		}

		return err
	})
	if err != nil {
		t.Fatalf("looking at the sources: %v", err)
	}
}

// goCommand runs the go command at the root of the module and returns what it printed on
// standard output. Environment settings such as GOARCH=arm64 come first.
func goCommand(t *testing.T, environment []string, arguments ...string) (stdout, stderr string) {
	t.Helper()
	watch(t)

	command := exec.CommandContext(t.Context(), "go", arguments...) //nolint:gosec // The arguments are the tests' own.
	command.Dir = ".."
	command.Env = append(command.Environ(), environment...)

	var out, problems bytes.Buffer

	command.Stdout, command.Stderr = &out, &problems
	if err := command.Run(); err != nil {
		t.Fatalf("go %s: %v\n%s", strings.Join(arguments, " "), err,
			strings.Join(complaint.FindAllString(problems.String(), -1), "\n"))
	}

	return out.String(), problems.String()
}

// listPackages returns what `go list` says of the packages that match the patterns.
func listPackages(t *testing.T, arguments ...string) []listed {
	t.Helper()

	stdout, _ := goCommand(t, nil, append([]string{"list", "-json"}, arguments...)...)
	decoder := json.NewDecoder(strings.NewReader(stdout))

	var packages []listed

	for {
		var next listed

		err := decoder.Decode(&next)
		if errors.Is(err, io.EOF) {
			return packages
		}

		if err != nil {
			t.Fatalf("reading the answer of go list: %v", err)
		}

		packages = append(packages, next)
	}
}
