package main

import (
	"errors"
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"

	kinegate "example.org/kinegate/clients/go"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/cmd/kinegate/internal/eventfile"
	"example.org/kinegate/service/cmd/kinegate/internal/quantity"
	"example.org/kinegate/service/cmd/kinegate/internal/text"
)

// sink takes judged events, block after block, and says at the end what became of
// them.
type sink interface {
	add(events []eventfile.Event, v *kinegate.Verdicts) error
	finish(e *environment) error
}

// sinks makes the sinks that the flags ask for.
func (j *judgeRun) sinks() ([]sink, error) {
	var sinks []sink
	if j.outFile != "" {
		s, err := j.newVerdictFile()
		if err != nil {
			return nil, err
		}
		sinks = append(sinks, s)
	}
	for _, c := range j.compare {
		column, name, found := strings.Cut(c, "=")
		if !found {
			return nil, badInput("--compare %q: COLUMN=NAME/LABEL is needed", c)
		}
		r, err := j.recorded(name)
		if err != nil {
			return nil, badInput("--compare %q: %w", c, err)
		}
		sinks = append(sinks, &comparison{column: column, recorded: r})
	}
	for _, h := range j.histograms {
		s, err := j.histogram(h)
		if err != nil {
			return nil, badInput("--histogram %q: %w", h, err)
		}
		sinks = append(sinks, s)
	}
	return sinks, nil
}

// recorded is a recorded observable of a hypothesis, or of the best hypothesis of a
// group.
type recorded struct {
	name string
	// group is the index of the group, -1 for a hypothesis.
	group int
	// index is that of the observable by hypothesis, -1 where it has none.
	index []int
}

// recorded finds NAME/LABEL.
func (j *judgeRun) recorded(text string) (recorded, error) {
	name, label, found := strings.Cut(text, "/")
	if !found {
		return recorded{}, fmt.Errorf("%q is not of the form NAME/LABEL", text)
	}
	r := recorded{name: text, group: -1}
	members := map[string]bool{name: true}
	for i, g := range j.checked.GetSelection().GetGroups() {
		if g.GetName() == name {
			r.group = i
			for _, h := range g.GetHypotheses() {
				members[h] = true
			}
		}
	}
	known := 0
	var labels []string
	for _, h := range j.checked.GetHypotheses() {
		index := -1
		for i, o := range h.GetObservables() {
			labels = append(labels, h.GetName()+"/"+o)
			if members[h.GetName()] && o == label {
				index = i
				known++
			}
		}
		r.index = append(r.index, index)
	}
	if known == 0 {
		return r, fmt.Errorf("nothing is recorded as %q; recorded are %s", text, strings.Join(labels, ", "))
	}
	return r, nil
}

// entries are the accepted entries of event i that the name means.
func (r *recorded) entries(v *kinegate.Verdicts, i int) []kinegate.Entry {
	return slices.DeleteFunc(v.Entries(i), func(e kinegate.Entry) bool {
		wanted := r.index[e.Hypothesis] >= 0 && (r.group < 0 || int(v.Best[r.group][i]) == e.Hypothesis)
		return !wanted || e.Status != kinegatev1.EntryStatus_ENTRY_STATUS_ACCEPTED
	})
}

// of is the observable in one of these entries.
func (r *recorded) of(e *kinegate.Entry) float64 { return e.Observables[r.index[e.Hypothesis]] }

// value is the observable of event i: of the accepted entry with the largest weight.
func (r *recorded) value(v *kinegate.Verdicts, i int) (float64, bool) {
	best, weight := math.NaN(), math.Inf(-1)
	entries := r.entries(v, i)
	for k := range entries {
		if e := &entries[k]; e.Weight > weight {
			best, weight = r.of(e), e.Weight
		}
	}
	return best, len(entries) > 0
}

// comparison compares a column of the file with what was recorded.
type comparison struct {
	column   string
	recorded recorded

	compared, missing int
	worst             float64 // relative difference
	where             eventfile.Event
	sum               float64
}

func (c *comparison) add(events []eventfile.Event, v *kinegate.Verdicts) error {
	for i, event := range events {
		cell, ok := event.Other[c.column]
		if !ok {
			return badInput("--compare: the file has no column %q", c.column)
		}
		printed, err := strconv.ParseFloat(strings.TrimSpace(cell), 64)
		if err != nil {
			return badInput("--compare: event %d: column %s: %q is not a number", event.ID, c.column, cell)
		}
		x, ok := c.recorded.value(v, i)
		if !ok || printed == 0 {
			c.missing++
			continue
		}
		c.compared++
		difference := math.Abs(x/printed - 1)
		c.sum += difference
		if difference > c.worst || math.IsNaN(difference) {
			c.worst, c.where = difference, event
		}
	}
	return nil
}

func (c *comparison) finish(e *environment) error {
	mean := c.sum / max(float64(c.compared), 1)
	e.print("\n  %s against column %s: %d events compared, %d not accepted; relative difference %.2g at most (run %d, event %d), %.2g on average",
		c.recorded.name, c.column, c.compared, c.missing, c.worst, c.where.Run, c.where.ID, mean)
	return nil
}

// histogramSink draws a recorded observable.
type histogramSink struct {
	recorded  recorded
	histogram *text.Histogram
	edge      func(float64) string
}

// histogram reads NAME/LABEL=LOW:HIGH:BINS.
func (j *judgeRun) histogram(form string) (*histogramSink, error) {
	name, axis, found := strings.Cut(form, "=")
	parts := strings.Split(axis, ":")
	const partCount = 3
	if !found || len(parts) != partCount {
		return nil, errors.New("NAME/LABEL=LOW:HIGH:BINS is needed")
	}
	r, err := j.recorded(name)
	if err != nil {
		return nil, err
	}
	low, dimension, err := edgeValue(parts[0])
	if err != nil {
		return nil, err
	}
	high, highDimension, err := edgeValue(parts[1])
	if err != nil {
		return nil, err
	}
	bins, err := strconv.Atoi(strings.TrimSpace(parts[2]))
	if err != nil || bins < 1 || bins > 200 || !(low < high) || dimension != highDimension {
		return nil, errors.New("LOW must be below HIGH, both of one kind, and BINS from 1 to 200")
	}
	edge := func(x float64) string { return strconv.FormatFloat(x, 'g', 6, 64) }
	if dimension >= 0 {
		unit := 1.0
		if dimension == quantity.Time { // observables have nanoseconds
			unit = 1e-9
		}
		low, high = low/unit, high/unit
		edge = func(x float64) string { return trimZeros(quantity.Format(x*unit, dimension, 6)) }
	}
	return &histogramSink{recorded: r, histogram: text.NewHistogram(bins, low, high), edge: edge}, nil
}

// edgeValue reads a quantity of any dimension, or a plain number with dimension -1.
func edgeValue(s string) (float64, quantity.Dimension, error) {
	if x, err := strconv.ParseFloat(strings.TrimSpace(s), 64); err == nil {
		return x, -1, nil
	}
	var first error
	for _, d := range []quantity.Dimension{quantity.Energy, quantity.Angle, quantity.Length, quantity.Time} {
		x, err := quantity.Parse(s, d)
		if err == nil {
			return x, d, nil
		}
		if first == nil {
			first = err
		}
	}
	return 0, -1, first
}

func (h *histogramSink) add(events []eventfile.Event, v *kinegate.Verdicts) error {
	for i := range events {
		entries := h.recorded.entries(v, i)
		for k := range entries {
			h.histogram.Add(h.recorded.of(&entries[k]), events[i].Weight*entries[k].Weight)
		}
	}
	return nil
}

func (h *histogramSink) finish(e *environment) error {
	e.print("")
	title := h.recorded.name + ": accepted entries"
	if h.histogram.Weighted {
		title += " with their weights, so that side bands are taken off"
	}
	return h.histogram.Write(e.out, title, h.edge)
}
