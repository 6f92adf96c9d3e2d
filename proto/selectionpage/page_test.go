package main

import (
	"os"
	"strings"
	"testing"
)

// TestPageIsCurrent compares the committed page with a fresh one.
func TestPageIsCurrent(t *testing.T) {
	fresh, err := page("../..")
	if err != nil {
		t.Fatal(err)
	}
	committed, err := os.ReadFile("../selection.md")
	if err != nil {
		t.Fatal(err)
	}
	if fresh != string(committed) {
		t.Error("proto/selection.md differs from the comments of the contract or the examples: run `make generate` and commit")
	}
	for _, want := range []string{
		"\n## Selection\n", "| `prescale_count` | whole number |", "| `ROLE_VETO` |", "[Window](#window)", "| left out |",
	} {
		if !strings.Contains(fresh, want) {
			t.Errorf("the page lacks %q", want)
		}
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
