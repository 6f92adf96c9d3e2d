package server

import (
	"testing"

	kinegate "example.org/kinegate/clients/go"
	"example.org/kinegate/clients/go/history"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// client is a client of the gate that makes connections of its own.
func (r *running) client(t testing.TB, options ...func(*kinegate.Options)) *kinegate.Client {
	t.Helper()
	var o kinegate.Options
	o.DialOptions = append(o.DialOptions, r.inMemory(r.options.GateAddress))
	for _, change := range options {
		change(&o)
	}
	c, err := kinegate.Dial("passthrough:memory", o)
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { _ = c.Close() })
	return c
}

// learned returns a checker that knows the sample.
func learned(t testing.TB, r *running, open *kinegatev1.JudgeOpen, events int) *history.Checker {
	t.Helper()
	c, err := history.LearnSample(t.Context(), r.client(t), open, events)
	if err != nil {
		t.Fatal(err)
	}
	return c
}

// verify does a run of the sample and reports what was wrong with it.
func verify(t testing.TB, c *history.Checker, run history.Run) {
	t.Helper()
	if err := c.Check(t.Context(), run); err != nil {
		t.Error(err)
	}
}
