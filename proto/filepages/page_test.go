package main

import (
	"os"
	"strings"
	"testing"
)

// TestPagesAreCurrent compares the committed pages with fresh ones.
func TestPagesAreCurrent(t *testing.T) {
	wanted := map[string][]string{
		"selection": {
			"\n## Selection\n", "| `prescale_count` | whole number |", "| `ROLE_VETO` |", "[Window](#window)", "| left out |",
		},
		"generation": {"\n## Generation\n", "[Detector](detector.md#detector)", "| `ANGULAR_LAW_COMPTON` |", "(../testdata/generation/mixture.yaml)"},
		"detector":   {"\n## Detector\n", "| `SPECIES_KAON` |", "(../testdata/detectors/tracker.yaml)"},
	}
	for _, k := range kinds() {
		fresh, err := k.page("../..")
		if err != nil {
			t.Fatal(err)
		}
		committed, err := os.ReadFile("../" + k.name + ".md")
		if err != nil {
			t.Fatal(err)
		}
		if fresh != string(committed) {
			t.Errorf("proto/%s.md differs from the comments of the contract or the examples: run `make generate` and commit", k.name)
		}
		for _, want := range wanted[k.name] {
			if !strings.Contains(fresh, want) {
				t.Errorf("the page of %s files lacks %q", k.name, want)
			}
		}
		if k.name == "generation" && strings.Contains(fresh, "\n## Calorimeter\n") {
			t.Error("the page of generation files repeats that of detectors")
		}
	}
	if run(nil) == nil || run([]string{"nothing"}) == nil {
		t.Error("a page that is none was printed")
	}
}

// TestMissingCommentIsAFault takes one comment away.
func TestMissingCommentIsAFault(t *testing.T) {
	found := map[string]string{}
	read("// A.\nmessage A {\n  // Lost.\n\n  string b = 1;\n  oneof c {\n    // D.\n    D d = 2;\n  }\n}\nmessage E {}\n", found)
	want := map[string]string{"A": "A.", "A.b": "", "A.c": "", "A.d": "D.", "E": ""}
	for name, comment := range want {
		if got, ok := found[name]; !ok || got != comment {
			t.Errorf("%s has the comment %q, want %q", name, got, comment)
		}
	}
	p := writer{comments: found}
	if p.comment("A"); len(p.problems) != 0 {
		t.Errorf("problems %v", p.problems)
	}
	if p.comment("A.b"); len(p.problems) != 1 {
		t.Errorf("problems %v", p.problems)
	}
}
