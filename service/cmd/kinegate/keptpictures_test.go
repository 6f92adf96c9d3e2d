package main

import (
	"os"
	"path/filepath"
	"regexp"
	"strings"
	"testing"
)

const keptPictures = "../../../testdata/pictures/"

// drawn finds the texts of a picture.
var drawn = regexp.MustCompile(`>([^<>\n]+)</text>`)

// TestKeptPictures draws the kept pictures again by the commands of their page and
// compares their texts and the number of lines; the last digits of coordinates are left
// to the processor. With KEEP_PICTURES=1 it keeps them anew.
func TestKeptPictures(t *testing.T) {
	page, err := os.ReadFile(keptPictures + "README.md")
	if err != nil {
		t.Fatal(err)
	}
	folder := t.TempDir()
	if os.Getenv("KEEP_PICTURES") != "" {
		folder = keptPictures
	}
	pictures := 0
	for line := range strings.Lines(string(page)) {
		arguments := shellWords(strings.TrimSpace(line))
		if !strings.HasPrefix(line, "kinegate ") {
			continue
		}
		name := arguments[len(arguments)-1]
		pictures++
		t.Run(name, func(t *testing.T) {
			arguments[len(arguments)-1] = filepath.Join(folder, name)
			if code, _, errs := command(t, arguments[1:]...); code != exitWell {
				t.Fatal(errs)
			}
			was, is := contents(t, keptPictures+name), contents(t, filepath.Join(folder, name))
			if was != is {
				t.Errorf("draws\n%s\nbut the kept picture has\n%s", is, was)
			}
		})
	}
	if pictures < 3 {
		t.Errorf("%d pictures; the page may have changed its form", pictures)
	}
}

// contents is the texts and the number of lines of a picture.
func contents(t *testing.T, name string) string {
	t.Helper()
	picture, err := os.ReadFile(name)
	if err != nil {
		t.Fatal(err)
	}
	const small = 100_000
	if len(picture) > small {
		t.Errorf("%s has %d bytes, more than %d", name, len(picture), small)
	}
	var texts []string
	for _, found := range drawn.FindAllStringSubmatch(string(picture), -1) {
		texts = append(texts, found[1])
	}
	if len(texts) < 5 {
		t.Errorf("%s has the texts %q only", name, texts)
	}
	return strings.Join(texts, "\n") + strings.Repeat("\nline", strings.Count(string(picture), "<path"))
}
