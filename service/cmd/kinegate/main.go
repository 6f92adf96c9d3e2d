// Command kinegate answers for the event selection of a photon-beam experiment: which
// channels are open, where their products go, and which events to keep.
package main

import (
	"context"
	"os"
)

func main() {
	os.Exit(run(context.Background(), program{
		in: os.Stdin, out: os.Stdout, err: os.Stderr, environ: os.Environ(),
	}, os.Args[1:]))
}
