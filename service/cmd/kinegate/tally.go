package main

import (
	"fmt"
	"math"

	kinegate "example.org/kinegate/clients/go"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/cmd/kinegate/internal/text"
)

// tally sums up verdicts.
type tally struct {
	outline    []*kinegatev1.HypothesisOutline
	events     int
	gate       int
	statuses   map[kinegatev1.EventStatus]int
	accepted   []int     // by hypothesis
	weighted   []float64 // sum of the weights of the accepted entries
	spreads    [][]spread
	blockCount int
}

// spread is the range and mean of an observable.
type spread struct {
	count, sum, low, high float64
}

func newTally(outline []*kinegatev1.HypothesisOutline) *tally {
	t := &tally{
		outline:  outline,
		statuses: map[kinegatev1.EventStatus]int{},
		accepted: make([]int, len(outline)),
		weighted: make([]float64, len(outline)),
		spreads:  make([][]spread, len(outline)),
	}
	for h, o := range outline {
		t.spreads[h] = make([]spread, len(o.GetObservables()))
		for i := range t.spreads[h] {
			t.spreads[h][i] = spread{low: math.Inf(1), high: math.Inf(-1)}
		}
	}
	return t
}

// add counts a block.
func (t *tally) add(v *kinegate.Verdicts) {
	t.blockCount++
	for i, status := range v.Statuses {
		t.events++
		t.statuses[status]++
		if v.Gate(i) {
			t.gate++
		}
		for h := range t.outline {
			if v.Accepted(h, i) {
				t.accepted[h]++
			}
		}
		for _, e := range v.Entries(i) {
			if e.Status != kinegatev1.EntryStatus_ENTRY_STATUS_ACCEPTED {
				continue
			}
			t.weighted[e.Hypothesis] += e.Weight
			for k, x := range e.Observables {
				t.spreads[e.Hypothesis][k].add(x)
			}
		}
	}
}

func (s *spread) add(x float64) {
	if math.IsNaN(x) {
		return
	}
	s.count++
	s.sum += x
	s.low, s.high = min(s.low, x), max(s.high, x)
}

func share(part, whole int) string {
	if whole == 0 {
		return "-"
	}
	const percent = 100
	return fmt.Sprintf("%.2f %%", percent*float64(part)/float64(whole))
}

// endings say in words how events ended that were not judged, or not to the end.
var endings = []struct { //nolint:gochecknoglobals // a list that nothing writes
	status kinegatev1.EventStatus
	words  string
}{
	{kinegatev1.EventStatus_EVENT_STATUS_NON_FINITE, "not judged: a value is not finite"},
	{kinegatev1.EventStatus_EVENT_STATUS_NEGATIVE_ENERGY, "not judged: an energy or momentum is negative"},
	{kinegatev1.EventStatus_EVENT_STATUS_NEGATIVE_SPREAD, "not judged: a standard deviation or variance is negative"},
	{kinegatev1.EventStatus_EVENT_STATUS_OUT_OF_RANGE, "not judged: an angle, mass or degree of polarisation is out of range"},
	{kinegatev1.EventStatus_EVENT_STATUS_OVERSIZED, "not judged: more objects or beam candidates than an event may have"},
	{kinegatev1.EventStatus_EVENT_STATUS_EXPIRED, "not judged: the latency budget was used up before"},
	{kinegatev1.EventStatus_EVENT_STATUS_BUDGET_USED, "judged in part: the work budget was used up before all was tried"},
}

// write prints the summary.
func (t *tally) write(e *environment) error {
	e.print("%d events judged in %d blocks; the gate accepts %d (%s)", t.events, t.blockCount, t.gate, share(t.gate, t.events))
	for _, ending := range endings {
		if n := t.statuses[ending.status]; n > 0 {
			e.print("  %s %s", plural(int64(n), "event"), ending.words)
		}
	}
	e.print("")
	table := text.NewTable("hypothesis", ">accepted", ">share", ">weighted", "reaction")
	for h, o := range t.outline {
		table.Row(o.GetName(), fmt.Sprint(t.accepted[h]), share(t.accepted[h], t.events),
			trimZeros(fmt.Sprintf("%.2f", t.weighted[h])), o.GetReaction())
	}
	if err := table.Write(e.out); err != nil {
		return err
	}
	return t.writeSpreads(e)
}

// writeSpreads prints mean and range of what the accepted entries record.
func (t *tally) writeSpreads(e *environment) error {
	table := text.NewTable("recorded", ">entries", ">mean", ">lowest", ">highest")
	for h, o := range t.outline {
		for i, name := range o.GetObservables() {
			if s := t.spreads[h][i]; s.count > 0 {
				table.Row(o.GetName()+"/"+name, fmt.Sprintf("%.0f", s.count),
					fmt.Sprintf("%.6g", s.sum/s.count), fmt.Sprintf("%.6g", s.low), fmt.Sprintf("%.6g", s.high))
			}
		}
	}
	if table.Rows() == 0 {
		return nil
	}
	e.print("")
	return table.Write(e.out)
}
