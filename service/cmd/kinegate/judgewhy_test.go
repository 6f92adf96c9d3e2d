package main

import (
	"os"
	"path/filepath"
	"strings"
	"testing"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
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
  - name: groups
    reaction: "` + two + `"
    measurements: [{product: p, measurement: MEASUREMENT_DIRECTION}]
    beam: {tagged: {}}
    condition:
      all_of:
        - any_of:
            - window: {name: low, invariant_mass: {products: ["pi0[0]"], max_gev: 0.001}}
            - window: {name: high, invariant_mass: {products: ["pi0[0]"], min_gev: 0.002}}
        - none_of: [{window: {name: forbidden, energy: {products: ["pi0[0]"], min_gev: 0}}}]
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
		"condition not met: inside the window on forbidden",
		"no assignment: no object can stand for K+",
		"fit failed: ",
	} {
		if code != exitWell || !strings.Contains(out, want) {
			t.Errorf("code %d, want %q in\n%s%s", code, want, out, errs)
		}
	}
	wantCommand(t, "judge --selection "+name+" "+pionsEvents+" --explain 4", exitWell, "    condition not met: inside the window on forbidden\n")
	if strings.Contains(out, "all accepts nothing") {
		t.Errorf("a reason against what is accepted:\n%s", out)
	}
}

// TestUnmetConditions: the windows named are those that decide, also in groups and under none_of,
// where a window outside may do no harm and one inside may.
func TestUnmetConditions(t *testing.T) {
	t.Parallel()
	window := &kinegatev1.Condition{Window: &kinegatev1.Window{}}
	anyOf := func(of ...*kinegatev1.Condition) *kinegatev1.Condition { return &kinegatev1.Condition{AnyOf: of} }
	allOf := func(of ...*kinegatev1.Condition) *kinegatev1.Condition { return &kinegatev1.Condition{AllOf: of} }
	noneOf := func(of ...*kinegatev1.Condition) *kinegatev1.Condition { return &kinegatev1.Condition{NoneOf: of} }
	// Windows are a, b, c in the order of the text; a capital is inside, a dot was not looked at.
	for _, c := range []struct {
		name      string
		condition *kinegatev1.Condition
		paths     []string
		answers   map[string]string
	}{
		{"none", nil, nil, map[string]string{"": ""}},
		{"window", window, []string{"window"}, map[string]string{"a": "outside a", "A": "", ".": ""}},
		{"none of one", noneOf(window), []string{"none_of[0].window"}, map[string]string{"a": "", "A": "inside a", ".": ""}},
		{"group of two and one", allOf(anyOf(window, window), window),
			[]string{"all_of[0].any_of[0].window", "all_of[0].any_of[1].window", "all_of[1].window"},
			map[string]string{
				"ABC": "", "aBc": "outside c", "Abc": "outside c", "abc": "outside a and outside b", "ab.": "outside a and outside b",
				"a..": "", "a.c": "outside c", "aBC": "",
			}},
		{"not both", noneOf(allOf(window, window)), []string{"none_of[0].all_of[0].window", "none_of[0].all_of[1].window"},
			map[string]string{"AB": "inside a and inside b", "aB": "", "ab": "", "A.": "", "a.": ""}},
		{"none of two", noneOf(window, window), []string{"none_of[0].window", "none_of[1].window"},
			map[string]string{"ab": "", "aB": "inside b", "Ab": "inside a", ".B": "inside b", "a.": ""}},
	} {
		for seen, want := range c.answers {
			a := &kinegatev1.AssignmentExplanation{}
			for k, letter := range strings.Split(seen, "") {
				if letter != "." {
					a.Windows = append(a.Windows, &kinegatev1.WindowExplanation{
						Path: "condition." + c.paths[k], Label: strings.ToLower(letter), Inside: letter < "a",
					})
				}
			}
			if want != "" {
				want = "condition not met: " + want
			}
			if got := strings.ReplaceAll(unmet(c.condition, a), "side the window on ", "side "); got != want {
				t.Errorf("%s, %s: %q, want %q", c.name, seen, got, want)
			}
		}
	}
}
