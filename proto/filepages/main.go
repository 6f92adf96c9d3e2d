// Command filepages prints the reference page of a kind of files: every field that a Selection,
// a Generation or a Detector can hold, with the comment that the contract gives it.
// `.ci/generate` writes the pages to proto/selection.md, proto/generation.md and
// proto/detector.md; a test holds that they are current.
//
//	go run ./proto/filepages selection|generation|detector
package main

import (
	"errors"
	"fmt"
	"os"
)

func main() {
	if err := run(os.Args[1:]); err != nil {
		fmt.Fprintln(os.Stderr, "filepages:", err)
		os.Exit(1)
	}
}

// run prints the page that the one argument names.
func run(arguments []string) error {
	for _, k := range kinds() {
		if len(arguments) == 1 && arguments[0] == k.name {
			text, err := k.page(".")
			if err != nil {
				return err
			}
			_, err = os.Stdout.WriteString(text)
			return err
		}
	}
	return errors.New("name one page: selection, generation or detector")
}
