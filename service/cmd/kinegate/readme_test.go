package main

import (
	"bytes"
	"flag"
	"os"
	"slices"
	"strings"
	"testing"
)

var update = flag.Bool("update", false, "write what the commands print into the pages")

// TestReadmeIsTrue runs every "$ kinegate ..." of the README's console blocks in the
// top folder and compares what is printed with what follows it. A line "..." stands
// for any lines, for what differs from run to run. With -update, examples without
// such a line are written anew.
func TestReadmeIsTrue(t *testing.T) {
	t.Chdir("../../..")
	for _, page := range []string{"README.md", "DEVELOPERS.md"} {
		text, err := os.ReadFile(page)
		if err != nil {
			t.Fatal(err)
		}
		before := bytes.Clone(text)
		examples := consoleExamples(string(text))
		if page == "README.md" && len(examples) < 5 {
			t.Errorf("%s has %d examples; the reader of blocks may be broken", page, len(examples))
		}
		for _, e := range examples {
			t.Run(page+"/"+e.command, func(t *testing.T) {
				arguments := shellWords(e.command)
				var out bytes.Buffer
				run(t.Context(), program{in: strings.NewReader(""), out: &out, err: &out}, arguments[1:])
				got := strings.Split(strings.TrimRight(out.String(), "\n"), "\n")
				if *update && !slices.Contains(e.output, "...") {
					text = bytes.Replace(text, []byte(e.text(e.output)), []byte(e.text(got)), 1)
					return
				}
				if !matches(got, e.output) {
					t.Errorf("prints\n%s\nbut the page says\n%s", out.String(), strings.Join(e.output, "\n"))
				}
			})
		}
		if !bytes.Equal(before, text) {
			if err := os.WriteFile(page, text, 0o644); err != nil { //nolint:gosec // a page for all to read
				t.Fatal(err)
			}
		}
	}
}

// example is a command with what it prints.
type example struct {
	command string
	output  []string
}

// text is the example with an output as it stands in the page.
func (e example) text(output []string) string {
	return "$ " + e.command + "\n" + strings.Join(output, "\n") + "\n"
}

// consoleExamples reads the blocks fenced as console.
func consoleExamples(page string) []example {
	var examples []example
	inside := false
	for line := range strings.Lines(page) {
		line = strings.TrimRight(line, "\n")
		switch {
		case line == "```console":
			inside = true
		case line == "```":
			inside = false
		case !inside:
		case strings.HasPrefix(line, "$ kinegate "):
			examples = append(examples, example{command: strings.TrimPrefix(line, "$ ")})
		case len(examples) > 0:
			last := &examples[len(examples)-1]
			last.output = append(last.output, line)
		}
	}
	for i := range examples {
		// An empty line before the next command belongs to the page, not the output.
		for n := len(examples[i].output); n > 0 && examples[i].output[n-1] == ""; n-- {
			examples[i].output = examples[i].output[:n-1]
		}
	}
	return examples
}

// matches compares lines, with "..." for any number of them.
func matches(got, want []string) bool {
	for i, line := range want {
		if line == "..." {
			for skip := range len(got) - i + 1 {
				if matches(got[i+skip:], want[i+1:]) {
					return true
				}
			}
			return false
		}
		if i >= len(got) || got[i] != line {
			return false
		}
	}
	return len(got) == len(want)
}

func TestMatches(t *testing.T) {
	lines := func(s string) []string { return strings.Split(s, "|") }
	for _, c := range []struct {
		got, want string
		match     bool
	}{
		{"a|b", "a|b", true},
		{"a|b", "a", false},
		{"a", "a|b", false},
		{"a|b|c", "a|...|c", true},
		{"a|c", "a|...|c", true},
		{"a|b", "a|...|c", false},
		{"a|b|c", "...", true},
		{"a|b", "b|...", false},
	} {
		if matches(lines(c.got), lines(c.want)) != c.match {
			t.Errorf("%q against %q is not %v", c.got, c.want, c.match)
		}
	}
}

// shellWords splits a command line as a shell does, for the quotes that the pages use.
func shellWords(line string) []string {
	var words []string
	var word strings.Builder
	quote, open := rune(0), false
	for _, r := range line {
		switch {
		case quote == 0 && (r == '"' || r == '\''):
			quote, open = r, true
		case quote != 0 && r == quote:
			quote = 0
		case quote == 0 && r == ' ':
			if open || word.Len() > 0 {
				words = append(words, word.String())
			}
			word.Reset()
			open = false
		default:
			word.WriteRune(r)
		}
	}
	if open || word.Len() > 0 {
		words = append(words, word.String())
	}
	return words
}
