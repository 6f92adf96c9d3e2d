// Command kinegate answers for the event selection of a photon-beam experiment: which
// channels are open, where their products go, and which events to keep.
package main

import (
	"context"
	"os"
	"os/signal"
	"syscall"
)

func main() {
	// A burst of signals beyond the second says nothing new.
	signals := make(chan os.Signal, 2)
	signal.Notify(signals, os.Interrupt, syscall.SIGTERM)
	os.Exit(run(context.Background(), program{
		in: os.Stdin, out: os.Stdout, err: os.Stderr, environ: os.Environ(), signals: signals,
	}, os.Args[1:]))
}
