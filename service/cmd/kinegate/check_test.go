package main

import (
	"strings"
	"testing"
)

// TestCheckRemarksOnFits wants a remark where any fit that converges is accepted, and only there.
func TestCheckRemarksOnFits(t *testing.T) {
	t.Parallel()
	const remark = "has a fit and no fit_probability window"
	for file, want := range map[string]int{
		leptonsFit:     4,
		pionsSelection: 0,
		"../../../testdata/selections/fit-energies-unknown.yaml": 2,
		"../../../testdata/selections/dimuon.yaml":               0,
	} {
		code, out, errs := command(t, "check", file)
		if got := strings.Count(out, remark); code != exitWell || got != want {
			t.Errorf("%s: code %d, %d remarks, want %d:\n%s%s", file, code, got, want, out, errs)
		}
	}
}
