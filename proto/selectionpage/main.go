// Command selectionpage prints the reference page of selection files: every field that a
// Selection can hold, with the comment that the contract gives it. `.ci/generate` writes the
// page to proto/selection.md; a test holds that it is current.
//
//	go run ./proto/selectionpage
package main

import (
	"fmt"
	"os"
)

func main() {
	text, err := page(".")
	if err == nil {
		_, err = os.Stdout.WriteString(text)
	}
	if err != nil {
		fmt.Fprintln(os.Stderr, "selectionpage:", err)
		os.Exit(1)
	}
}
