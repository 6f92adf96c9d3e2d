package main

import (
	"context"
	"errors"
	"strings"
	"testing"
)

func fixed(ratios ...float64) measure {
	i := 0
	return func(context.Context) (float64, error) {
		i++
		return ratios[i-1], nil
	}
}

// TestReport prints rows that are within, outside, without a limit and without a result.
func TestReport(t *testing.T) {
	list := []row{
		{name: "small", limit: 1.3, aim: 1.1, measure: fixed(1.2, 1.4, 1.1)},
		{name: "large", limit: 3, aim: 5, atLeast: true, measure: fixed(2, 2.5, 9)},
		{name: "shown", measure: fixed(7, 7, 7)},
		{name: "broken", limit: 1, measure: func(context.Context) (float64, error) { return 0, errors.New("no tool") }},
	}
	for _, c := range []struct {
		json bool
		want []string
	}{
		{false, []string{"small", "1.20  limit <= 1.3, aim 1.1: within  (3 runs: 1.10 to 1.40)", "2.50  limit >= 3, aim 5: OUTSIDE", "7.00  (3", "not measured: no tool"}},
		{true, []string{`"name":"small","ratio":1.2,"limit":1.3,"aim":1.1,"within":true`, `"at_least":true,"within":false`, `"problem":"no tool"`}},
	} {
		for i := range list[:3] {
			list[i].measure = [](measure){fixed(1.2, 1.4, 1.1), fixed(2, 2.5, 9), fixed(7, 7, 7)}[i]
		}
		var out strings.Builder
		if err := report(t.Context(), &out, list, 3, "", c.json); err != nil {
			t.Fatal(err)
		}
		for _, want := range c.want {
			if !strings.Contains(out.String(), want) {
				t.Errorf("%q is not in\n%s", want, out.String())
			}
		}
	}
	var out strings.Builder
	if err := report(t.Context(), &out, list, 1, "broken", false); err != nil || strings.Count(out.String(), "\n") != 1 {
		t.Errorf("%v, %q", err, out.String())
	}
}

func TestReadMetric(t *testing.T) {
	const output = "goos: linux\nBenchmarkA/n=04-2   \t 100\t 243.1 ns/op\t 1.31 x-in-process\t 0 B/op\nPASS\n"
	for metric, want := range map[string]float64{"ns/op": 243.1, "x-in-process": 1.31} {
		if got, err := readMetric(output, metric); err != nil || got != want {
			t.Errorf("%s: %g, %v", metric, got, err)
		}
	}
	if _, err := readMetric(output, "events/s"); err == nil {
		t.Error("a metric that is not there was read")
	}
}
