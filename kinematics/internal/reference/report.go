package reference

import (
	"encoding/json"
	"os"
	"path/filepath"
	"testing"
)

// reportVariable names the environment variable with the folder for reports. Without
// it no report is written.
const reportVariable = "KINEGATE_PRECISION_REPORTS"

// measurement is what one test of a precision function measured, as the precision
// statement prints it.
type measurement struct {
	Fn       string `json:"fn"`
	Cases    int    `json:"cases"`
	Values   int    `json:"values"`
	Untested int    `json:"untested"`
	// Worst is the largest relative error, WorstRatio the largest error over its bound.
	Worst      float64 `json:"worst"`
	WorstRatio float64 `json:"worst_ratio"`
}

// report writes what a test of fn measured into the folder for reports, if there is
// one, under the name of the test.
func report(t *testing.T, fn string, sum tally) {
	t.Helper()
	folder := os.Getenv(reportVariable)
	if folder == "" {
		return
	}
	data, err := json.Marshal(measurement{fn, sum.cases, sum.values, sum.untested, sum.worst, sum.worstRatio})
	if err != nil {
		t.Fatalf("report of %s: %v", fn, err)
	}
	path := filepath.Join(folder, t.Name()+".json")
	if err := os.WriteFile(path, data, 0o600); err != nil { //nolint:gosec // the folder is TestPrecisionStatement's own
		t.Fatalf("report of %s: %v", fn, err)
	}
}
