package main

import (
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// TestJudgeTellsWhyNothingIsAccepted counts the reasons against hypotheses that no event can
// meet: a window, objects that no event has, a mass that no fit reaches.
func TestJudgeTellsWhyNothingIsAccepted(t *testing.T) {
	t.Parallel()
	name := filepath.Join(t.TempDir(), "none.yaml")
	const two = `gamma p -> p pi0 pi0, pi0 -> gamma gamma`
	selection := `name: none
hypotheses:
  - name: heavy
    reaction: "` + two + `"
    measurements: [{product: p, measurement: MEASUREMENT_DIRECTION}]
    beam: {tagged: {}}
    condition: {window: {invariant_mass: {products: ["pi0[0]"], min_gev: 7}}}
  - name: kaons
    reaction: "gamma p -> K+ Lambda, Lambda -> p pi-"
    beam: {tagged: {}}
    extra_objects: {any: {}}
  - name: out-of-reach
    reaction: "-> gamma gamma gamma gamma"
    extra_objects: {any: {}}
    fit:
      masses:
        - {products: ["gamma[0]", "gamma[1]"], mass_gev: 9}
        - {products: ["gamma[0]", "gamma[1]", "gamma[2]", "gamma[3]"], mass_gev: 0.1}
  - name: all
    reaction: "-> gamma gamma"
    extra_objects: {any: {}}
`
	if err := os.WriteFile(name, []byte(selection), 0o600); err != nil {
		t.Fatal(err)
	}
	code, out, errs := command(t, "judge", "--selection", name, pionsEvents)
	for _, want := range []string{
		"heavy accepts nothing; of all 60 events",
		"condition not met: outside the window on invariant_mass(pi0[0])",
		"no assignment: no object can stand for K+",
		"fit failed: ",
	} {
		if code != exitWell || !strings.Contains(out, want) {
			t.Errorf("code %d, want %q in\n%s%s", code, want, out, errs)
		}
	}
	if strings.Contains(out, "all accepts nothing") {
		t.Errorf("a reason against what is accepted:\n%s", out)
	}
}
