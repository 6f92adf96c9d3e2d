package main

import (
	"fmt"
	"os"
	"path/filepath"
	"strings"
)

// examples lists the example files of a folder of testdata with the sentence that each begins
// with.
func examples(top, folder string) (string, error) {
	files, err := filepath.Glob(filepath.Join(top, "testdata", folder, "*.yaml"))
	if err != nil {
		return "", err
	}
	if len(files) == 0 {
		return "", fmt.Errorf("%s holds no examples", folder)
	}
	var list strings.Builder
	for _, name := range files {
		text, err := os.ReadFile(name) //nolint:gosec // a file of the project
		if err != nil {
			return "", err
		}
		base := filepath.Base(name)
		fmt.Fprintf(&list, "- [`%s`](../testdata/%s/%s): %s\n", base, folder, base, firstSentence(string(text)))
	}
	return list.String(), nil
}

// firstSentence is that of the comment at the head of a file.
func firstSentence(text string) string {
	var words []string
	for line := range strings.Lines(text) {
		comment, ok := strings.CutPrefix(strings.TrimSpace(line), "# ")
		if !ok {
			break
		}
		words = append(words, comment)
	}
	sentence, _, more := strings.Cut(strings.Join(words, " "), ". ")
	if more {
		sentence += "."
	}
	return sentence
}
