package kinegate_test

import (
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
)

// readme returns the blocks of the page in one language.
func readme(t *testing.T, language string) []string {
	t.Helper()
	page, err := os.ReadFile("README.md")
	if err != nil {
		t.Fatal(err)
	}
	var blocks []string
	for _, part := range strings.Split(string(page), "```"+language+"\n")[1:] {
		block, _, _ := strings.Cut(part, "```")
		blocks = append(blocks, block)
	}
	return blocks
}

// whole reports a block that is a program.
func whole(block string) bool { return strings.HasPrefix(block, "package main") }

// TestReadmeCodeIsTested: every piece of code of the page is a program, which
// TestReadmeFromOutside runs, or stands in an example.
func TestReadmeCodeIsTested(t *testing.T) {
	t.Parallel()
	files, err := filepath.Glob("example*_test.go")
	if err != nil {
		t.Fatal(err)
	}
	var examples strings.Builder
	for _, name := range files {
		text, err := os.ReadFile(name)
		if err != nil {
			t.Fatal(err)
		}
		examples.Write(text)
	}
	const least = 6
	found := 0
	for _, block := range readme(t, "go") {
		if whole(block) || strings.HasPrefix(block, "import (") {
			continue
		}
		found++
		if !strings.Contains(examples.String(), block) {
			t.Errorf("no example has\n%s", block)
		}
	}
	if found < least {
		t.Errorf("%d pieces of code", found)
	}
	// What an example prints stands in it as a comment.
	for _, block := range readme(t, "text") {
		lines := strings.Split(strings.TrimSpace(block), "\n")
		out := "// Output: " + lines[0]
		if len(lines) > 1 {
			out = "// Output:\n\t// " + strings.Join(lines, "\n\t// ")
		}
		if !strings.Contains(examples.String(), out+"\n}") {
			t.Errorf("no example prints\n%s", block)
		}
	}
}

// TestReadmeFromOutside builds the page's program in a module of its own that takes this one
// from a workspace, by a replace directive and from a vendored copy; the last is only looked
// for, since it would be compiled anew.
func TestReadmeFromOutside(t *testing.T) {
	t.Parallel()
	root, err := filepath.Abs("../..")
	if err != nil {
		t.Fatal(err)
	}
	server := startServer()
	defer server.stop()
	folder := t.TempDir()
	for _, block := range readme(t, "go") {
		if whole(block) {
			if err := os.WriteFile(filepath.Join(folder, "main.go"), []byte(block), 0o600); err != nil {
				t.Fatal(err)
			}
		}
	}
	goDo := func(arguments ...string) string {
		t.Helper()
		command := exec.CommandContext(t.Context(), "go", arguments...) //nolint:gosec // commands of the page
		command.Dir = folder
		command.Env = append(os.Environ(), "GOFLAGS=", "GOWORK=")
		out, err := command.CombinedOutput()
		if err != nil {
			t.Fatalf("go %s: %v\n%s", strings.Join(arguments, " "), err, out)
		}
		return string(out)
	}
	runs := func(how string) {
		t.Helper()
		const want = "open from a photon energy of 0.9111 GeV on\n"
		if got := goDo("run", ".", server.general); got != want {
			t.Errorf("%s: it prints %q", how, got)
		}
	}
	goDo("mod", "init", "example.net/shift")
	goDo("work", "init", ".", root)
	runs("workspace")
	if err := os.Remove(filepath.Join(folder, "go.work")); err != nil {
		t.Fatal(err)
	}
	sums, err := os.ReadFile(filepath.Join(root, "go.sum"))
	if err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(filepath.Join(folder, "go.sum"), sums, 0o600); err != nil {
		t.Fatal(err)
	}
	goDo("mod", "edit", "-require=example.org/kinegate@v0.0.0", "-replace=example.org/kinegate="+root)
	goDo("mod", "tidy")
	runs("replace directive")
	goDo("mod", "vendor")
	if got := goDo("list", "-deps", "-f", "{{.Dir}}", "example.org/kinegate/clients/go"); !strings.Contains(got, filepath.Join(folder, "vendor")) {
		t.Errorf("vendored copy: the client is in %s", got)
	}
}
