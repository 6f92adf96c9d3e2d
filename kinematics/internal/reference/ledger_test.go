package reference

import (
	"encoding/csv"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"regexp"
	"strconv"
	"strings"
	"testing"
)

// ledgerLine says which test covers one precision function or class of checks, or
// why none does.
type ledgerLine struct {
	kind, name, status, pkg, test, reason string
}

// TestLedger holds testdata/reference/ledger.csv against the data files and the
// test sources.
func TestLedger(t *testing.T) {
	root, err := Root()
	if err != nil {
		t.Fatal(err)
	}
	lines, err := readLedger(filepath.Join(root, "testdata", "reference", "ledger.csv"))
	if err != nil {
		t.Fatal(err)
	}
	known := wanted(t)
	covered, pending := map[string]bool{}, map[string]string{}
	uncompared := 0
	for _, line := range lines {
		key := line.kind + " " + line.name
		if _, ok := known[key]; !ok {
			t.Errorf("ledger: %s is in no reference file", key)
		}
		switch line.status {
		case "covered":
			if err := testExists(root, line); err != nil {
				t.Errorf("ledger: %s: %v", key, err)
			}
			covered[key] = true
			left, err := notCompared(line.reason)
			if err != nil {
				t.Errorf("ledger: %s: %v", key, err)
			}
			if left > 0 {
				t.Logf("in part: %s: %s", key, line.reason)
				uncompared += left
			}
		case "pending":
			if line.reason == "" {
				t.Errorf("ledger: %s is pending without a reason", key)
			}
			pending[key] = line.reason
		default:
			t.Errorf("ledger: %s: status %q, want covered or pending", key, line.status)
		}
	}
	total := map[bool]int{}
	for key, count := range known {
		_, waits := pending[key]
		if !covered[key] && !waits {
			t.Errorf("ledger: no line for %s", key)
		}
		total[covered[key] && !waits] += count
		if waits {
			t.Logf("pending: %s (%d cases): %s", key, count, pending[key])
		}
	}
	t.Logf("%d functions and classes with %d cases: %d cases covered, %d pending, %d not compared in covered ones",
		len(known), total[true]+total[false], total[true]-uncompared, total[false], uncompared)
}

// notCompared reads the reason of a covered line: empty, or "N not compared: why".
func notCompared(reason string) (int, error) {
	if reason == "" {
		return 0, nil
	}
	count, why, ok := strings.Cut(reason, " not compared: ")
	left, err := strconv.Atoi(count)
	if !ok || err != nil || left < 1 || why == "" {
		return 0, fmt.Errorf("reason %q of a covered line, want none or N not compared: why", reason)
	}
	return left, nil
}

// wanted returns every function and class with its number of cases.
func wanted(t *testing.T) map[string]int {
	t.Helper()
	counts := map[string]int{}
	for _, c := range loadPrecision(t) {
		counts["precision "+c.Fn]++
	}
	for _, c := range loadChecks(t) {
		counts["check "+c.Class]++
	}
	return counts
}

func readLedger(path string) ([]ledgerLine, error) {
	file, err := os.Open(path)
	if err != nil {
		return nil, fmt.Errorf("opening the ledger: %w", err)
	}
	defer file.Close() //nolint:errcheck // read only
	records, err := csv.NewReader(file).ReadAll()
	if err != nil {
		return nil, fmt.Errorf("reading the ledger: %w", err)
	}
	var lines []ledgerLine
	for _, r := range records[1:] {
		lines = append(lines, ledgerLine{kind: r[0], name: r[1], status: r[2], pkg: r[3], test: r[4], reason: r[5]})
	}
	return lines, nil
}

// testExists checks that the named test function stands in a test source of the
// named package and calls Precision or Checks with the name of the line.
func testExists(root string, line ledgerLine) error {
	if !strings.HasPrefix(line.pkg, "kinematics/") || !strings.HasPrefix(line.test, "Test") {
		return fmt.Errorf("package %q, test %q", line.pkg, line.test)
	}
	call := map[string]string{"precision": "Precision", "check": "Checks"}[line.kind]
	declared := regexp.MustCompile(`(?m)^func ` + regexp.QuoteMeta(line.test) + `\(t \*testing\.T\)`)
	called := regexp.MustCompile(`reference\.` + call + `\(t, "` + regexp.QuoteMeta(line.name) + `"`)
	files, err := filepath.Glob(filepath.Join(root, filepath.FromSlash(line.pkg), "*_test.go"))
	if err != nil {
		return fmt.Errorf("listing %s: %w", line.pkg, err)
	}
	for _, name := range files {
		source, err := os.ReadFile(name)
		if errors.Is(err, fs.ErrNotExist) {
			continue
		}
		if err != nil {
			return fmt.Errorf("reading %s: %w", name, err)
		}
		at := declared.FindIndex(source)
		if at == nil {
			continue
		}
		body := string(source[at[1]:])
		if end := strings.Index(body, "\n}\n"); end >= 0 {
			body = body[:end]
		}
		if !called.MatchString(body) {
			return fmt.Errorf("%s does not call reference.%s(t, %q, ...)", line.test, call, line.name)
		}
		return nil
	}
	return fmt.Errorf("no test %s in %s", line.test, line.pkg)
}
