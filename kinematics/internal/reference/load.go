package reference

import (
	"encoding/json"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"testing"
)

// errNoRoot says that no go.mod lies above the working directory of the test.
var errNoRoot = errors.New("no go.mod in any parent directory")

// Root returns the directory of the module, found upwards from the directory in
// which the test runs.
func Root() (string, error) {
	dir, err := os.Getwd()
	if err != nil {
		return "", fmt.Errorf("working directory: %w", err)
	}
	for {
		if _, err := os.Stat(filepath.Join(dir, "go.mod")); err == nil {
			return dir, nil
		}
		parent := filepath.Dir(dir)
		if parent == dir {
			return "", errNoRoot
		}
		dir = parent
	}
}

// precisionCase is one element of precision-cases.json or own-cases.json.
type precisionCase struct {
	ID    string                     `json:"id"`
	Fn    string                     `json:"fn"`
	Tags  []string                   `json:"tags"`
	In    map[string]json.RawMessage `json:"in"`
	Out   map[string]json.RawMessage `json:"out"`
	Error string                     `json:"error"`
	Cond  map[string]*float64        `json:"cond"`
	// accuracy is the bound of a well-conditioned answer, from the file's meta block;
	// flatBound where the function has none there.
	accuracy float64
}

// quantity is a printed value with its unit and, for recomputed values, the
// tolerance that a program in double precision should meet.
type quantity struct {
	Value     string    `json:"value"`
	Unit      string    `json:"unit"`
	Tolerance tolerance `json:"tolerance"`
}

// tolerance is absolute, relative or exact; only one is set.
type tolerance struct {
	Abs   string `json:"abs"`
	Rel   string `json:"rel"`
	Exact bool   `json:"exact"`
}

// checkRecord is one element of checks.json.
type checkRecord struct {
	ID         string                     `json:"id"`
	Class      string                     `json:"class"`
	Quantity   string                     `json:"quantity"`
	Inputs     map[string]json.RawMessage `json:"inputs"`
	Expected   quantity                   `json:"expected"`
	Tolerance  tolerance                  `json:"tolerance"`
	Recomputed quantity                   `json:"recomputed"`
	Agrees     *bool                      `json:"agrees"`
}

// load decodes one file of testdata/reference.
func load(tb testing.TB, name string, into any) {
	tb.Helper()
	root, err := Root()
	if err != nil {
		tb.Fatalf("finding the module: %v", err)
	}
	data, err := os.ReadFile(filepath.Join(root, "testdata", "reference", name)) //nolint:gosec // fixed names under the module
	if err != nil {
		tb.Fatalf("reading reference data: %v", err)
	}
	if err := json.Unmarshal(data, into); err != nil {
		tb.Fatalf("decoding %s: %v", name, err)
	}
}

// loadPrecision returns all precision cases: those made outside the project first,
// then those of testdata/reference/more_cases.py.
func loadPrecision(tb testing.TB) []precisionCase {
	tb.Helper()
	var all []precisionCase
	for _, name := range []string{"precision-cases.json", "own-cases.json"} {
		var file struct {
			Meta struct {
				Accuracy map[string]float64 `json:"accuracy"`
			} `json:"meta"`
			Cases []precisionCase `json:"cases"`
		}
		load(tb, name, &file)
		for _, c := range file.Cases {
			c.accuracy = flatBound
			if own, ok := file.Meta.Accuracy[c.Fn]; ok {
				c.accuracy = own
			}
			all = append(all, c)
		}
	}
	return all
}

// loadChecks returns all checks.
func loadChecks(tb testing.TB) []checkRecord {
	tb.Helper()
	var records []checkRecord
	load(tb, "checks.json", &records)
	return records
}
