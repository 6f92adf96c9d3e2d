package main

import (
	"encoding/csv"
	"errors"
	"fmt"
	"math"
	"os"
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
		s, err := newVerdictFile(j.outFile, j.checked.GetHypotheses())
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

// value is the observable of event i: of the accepted entry with the largest weight.
func (r *recorded) value(v *kinegate.Verdicts, i int) (float64, bool) {
	best := kinegate.Entry{Hypothesis: -1, Weight: math.Inf(-1)}
	for _, e := range v.Entries(i) {
		wanted := r.index[e.Hypothesis] >= 0 && (r.group < 0 || int(v.Best[r.group][i]) == e.Hypothesis)
		if wanted && e.Status == kinegatev1.EntryStatus_ENTRY_STATUS_ACCEPTED && e.Weight > best.Weight {
			best = e
		}
	}
	if best.Hypothesis < 0 {
		return 0, false
	}
	return best.Observables[r.index[best.Hypothesis]], true
}

// verdictFile writes one line per event.
type verdictFile struct {
	file    *os.File
	csv     *csv.Writer
	outline []*kinegatev1.HypothesisOutline
	lines   int
}

func newVerdictFile(name string, outline []*kinegatev1.HypothesisOutline) (*verdictFile, error) {
	file, err := os.Create(name)
	if err != nil {
		return nil, badInput("--out: %w", err)
	}
	heading := []string{"run", "event", "status", "gate"}
	for _, h := range outline {
		heading = append(heading, h.GetName())
		for _, o := range h.GetObservables() {
			heading = append(heading, h.GetName()+"/"+o)
		}
	}
	f := &verdictFile{file: file, csv: csv.NewWriter(file), outline: outline}
	return f, f.csv.Write(heading)
}

func (f *verdictFile) add(events []eventfile.Event, v *kinegate.Verdicts) error {
	for i, event := range events {
		status := strings.ToLower(strings.TrimPrefix(v.Statuses[i].String(), "EVENT_STATUS_"))
		row := []string{strconv.FormatInt(event.Run, 10), strconv.FormatInt(event.ID, 10), status, digit(v.Gate(i))}
		for h, o := range f.outline {
			row = append(row, digit(v.Accepted(h, i)))
			for k := range o.GetObservables() {
				r := recorded{group: -1, index: make([]int, len(f.outline))}
				for other := range r.index {
					r.index[other] = -1
				}
				r.index[h] = k
				cell := ""
				if x, ok := r.value(v, i); ok && !math.IsNaN(x) {
					cell = strconv.FormatFloat(x, 'g', -1, 64)
				}
				row = append(row, cell)
			}
		}
		f.lines++
		if err := f.csv.Write(row); err != nil {
			return err
		}
	}
	return nil
}

func digit(b bool) string {
	if b {
		return "1"
	}
	return "0"
}

func (f *verdictFile) finish(e *environment) error {
	f.csv.Flush()
	if err := errors.Join(f.csv.Error(), f.file.Close()); err != nil {
		return err
	}
	if !e.json {
		e.print("\n  %d lines written to %s", f.lines, f.file.Name())
	}
	return nil
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
		edge = func(x float64) string { return trimZeros(quantity.Format(x, dimension, 6)) }
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
		if x, ok := h.recorded.value(v, i); ok {
			h.histogram.Add(x, 1)
		}
	}
	return nil
}

func (h *histogramSink) finish(e *environment) error {
	e.print("")
	return h.histogram.Write(e.out, h.recorded.name+": accepted events, each counted once whatever its weight", h.edge)
}
