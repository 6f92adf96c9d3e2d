package reference

import (
	"encoding/json"
	"flag"
	"fmt"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"
)

var update = flag.Bool("update", false, "rewrite testdata/reference/precision.md from what the tests measure")

// TestPrecisionStatement runs every test of a precision function in the packages that
// the ledger names, makes the table of
// what they measured and compares it with testdata/reference/precision.md.
//
//	go test ./kinematics/internal/reference -run TestPrecisionStatement -update
func TestPrecisionStatement(t *testing.T) {
	if testing.Short() {
		t.Skip("runs the tests of other packages")
	}
	root, err := Root()
	if err != nil {
		t.Fatal(err)
	}
	measured := measureAll(t, root)
	got := statement(t, measured)
	path := filepath.Join(root, "testdata", "reference", "precision.md")
	if *update {
		if err := os.WriteFile(path, []byte(got), 0o600); err != nil {
			t.Fatal(err)
		}
	}
	want, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	if got != string(want) {
		t.Errorf("testdata/reference/precision.md is not what the tests measure; rerun with -update. Measured:\n%s", got)
	}
}

// measureAll runs the tests of all precision functions and returns what they measured,
// by the name of the function.
func measureAll(t *testing.T, root string) map[string]measurement {
	t.Helper()
	lines, err := readLedger(filepath.Join(root, "testdata", "reference", "ledger.csv"))
	if err != nil {
		t.Fatal(err)
	}
	arguments := []string{"test", "-count=1", "-run", "^TestPrecision"}
	for _, line := range lines {
		if name := "./" + line.pkg; line.kind == "precision" && line.pkg != "" && !slices.Contains(arguments, name) {
			arguments = append(arguments, name)
		}
	}
	folder := t.TempDir()
	command := exec.CommandContext(t.Context(), "go", arguments...)
	command.Dir = root
	command.Env = append(command.Environ(), reportVariable+"="+folder)
	if output, err := command.CombinedOutput(); err != nil {
		t.Fatalf("go test: %v\n%s", err, output)
	}
	files, err := filepath.Glob(filepath.Join(folder, "*.json"))
	if err != nil {
		t.Fatal(err)
	}
	measured := map[string]measurement{}
	for _, name := range files {
		data, err := os.ReadFile(name)
		if err != nil {
			t.Fatal(err)
		}
		var m measurement
		if err := json.Unmarshal(data, &m); err != nil {
			t.Fatal(err)
		}
		if _, twice := measured[m.Fn]; twice {
			t.Errorf("two tests named TestPrecision... measure %s", m.Fn)
		}
		measured[m.Fn] = m
	}
	return measured
}

// statement renders the table, one line a function in the order of the reference
// files, and fails for a function that no test measured.
func statement(t *testing.T, measured map[string]measurement) string {
	t.Helper()
	var b strings.Builder
	b.WriteString(`# The precision statement

Made by a test from the cases of precision-cases.json and own-cases.json; do not edit.

    go test ./kinematics/internal/reference -run TestPrecisionStatement -update

Inputs are exact doubles, answers have 25 digits or more. "Worst error" is the largest
relative error of any value, "over bound" the largest error in units of the bound of its
own case. Where the bound says cond, it is max(first number, cond x 4 x 2^-52) with the
condition number of the case. "Untested" counts the values whose bound exceeds 1e-3; the
tests say nothing of them. The domain is the range of each input's magnitude over the
cases; zeros are named apart.

| function | cases | values | untested | worst error | over bound | bound | domain of the cases |
|---|---|---|---|---|---|---|---|
`)
	var names []string
	cases := map[string][]precisionCase{}
	for _, c := range loadPrecision(t) {
		if !slices.Contains(names, c.Fn) {
			names = append(names, c.Fn)
		}
		cases[c.Fn] = append(cases[c.Fn], c)
	}
	slices.Sort(names)
	for _, fn := range names {
		m, ok := measured[fn]
		if !ok {
			t.Errorf("no test measures %s", fn)
			continue
		}
		all := cases[fn]
		bound := strconv.FormatFloat(all[0].accuracy, 'g', 2, 64)
		if !flat(fn) {
			bound += ", cond"
		}
		fmt.Fprintf(&b, "| %s | %d | %d | %d | %s | %s | %s | %s |\n", fn, m.Cases, m.Values, m.Untested,
			short(m.Worst), short(m.WorstRatio), bound, domain(t, all))
	}
	return b.String()
}

// short prints a number with two digits.
func short(x float64) string { return strconv.FormatFloat(x, 'g', 2, 64) }

// domain lists the range of every input over the cases, in order of the names.
func domain(t *testing.T, cases []precisionCase) string {
	t.Helper()
	spans := map[string]*span{}
	var names []string
	for _, c := range cases {
		for name, raw := range c.In {
			var value any
			if err := json.Unmarshal(raw, &value); err != nil {
				t.Fatalf("%s: input %s: %v", c.ID, name, err)
			}
			if _, ok := spans[name]; !ok {
				spans[name] = &span{low: math.Inf(1)}
				names = append(names, name)
			}
			spans[name].add(value)
		}
	}
	slices.Sort(names)
	var parts []string
	for _, name := range names {
		parts = append(parts, name+" "+spans[name].String())
	}
	return strings.Join(parts, "; ")
}

// span is the range of one input's magnitude, zeros and words apart.
type span struct {
	low, high float64
	zero      bool
	words     []string
}

func (s *span) add(value any) {
	switch value := value.(type) {
	case []any:
		for _, v := range value {
			s.add(v)
		}
	case string:
		if !slices.Contains(s.words, value) {
			s.words = append(s.words, value)
		}
	case float64:
		size := math.Abs(value)
		if size == 0 {
			s.zero = true
			return
		}
		s.low, s.high = math.Min(s.low, size), math.Max(s.high, size)
	}
}

func (s *span) String() string {
	if len(s.words) > 0 {
		slices.Sort(s.words)
		return strings.Join(s.words, " or ")
	}
	text := ""
	if s.high > 0 {
		text = short(s.low) + " to " + short(s.high)
	}
	if s.zero {
		text = strings.TrimSuffix("0, "+text, ", ")
	}
	return text
}
