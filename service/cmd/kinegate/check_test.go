package main

import (
	"os"
	"path/filepath"
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

// TestCheckFindsWhatCannotWork wants the place of every fault that would leave a selection
// without an event.
func TestCheckFindsWhatCannotWork(t *testing.T) {
	t.Parallel()
	name := filepath.Join(t.TempDir(), "bad.yaml")
	selection := `name: bad
hypotheses:
  - name: twice
    reaction: "gamma p -> p pi0, pi0 -> gamma gamma"
    beam: {tagged: {}}
    fit:
      masses:
        - {products: [pi0]}
        - {products: [pi0], mass_gev: 0.5}
    condition: {window: {fit_probability: {min: 0.1, max: 2}}}
  - name: no-beam
    reaction: "gamma p -> p pi0, pi0 -> gamma gamma"
    fit: {}
  - name: below
    reaction: "gamma p -> p omega"
    beam: {fixed: {beam_on_target: {beam: {total_energy_gev: 1}}}}
`
	if err := os.WriteFile(name, []byte(selection), 0o600); err != nil {
		t.Fatal(err)
	}
	code, out, _ := command(t, "check", name)
	for _, want := range []string{
		`:9:11: hypotheses[0].fit.masses[1]: "pi0": the mass is bound already, by masses[0]`,
		`:10:54: hypotheses[0].condition.window.fit_probability.max: "2"`,
		`:13:5: hypotheses[1].fit: "no constraints": beam is missing`,
		`:16:20: hypotheses[2].beam.fixed.beam_on_target: "total energy 1 GeV": below the threshold of the reaction, allowed: total energy >= 1.109`,
		": 4 faults",
	} {
		if code != exitNo || !strings.Contains(out, want) {
			t.Errorf("code %d, want %q in\n%s", code, want, out)
		}
	}
}
