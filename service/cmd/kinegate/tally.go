package main

import (
	"fmt"
	"math"

	kinegate "example.org/kinegate/clients/go"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/cmd/kinegate/internal/eventfile"
	"example.org/kinegate/service/cmd/kinegate/internal/text"
)

// tally sums up verdicts.
type tally struct {
	outline    []*kinegatev1.HypothesisOutline
	events     int
	gate       int
	statuses   map[kinegatev1.EventStatus]int
	accepted   []int // by hypothesis
	blockCount int

	// stated tells that files state weights of their events: all is their sum, through that of
	// the events that the gate accepts, and taken that of those that each hypothesis does.
	stated       bool
	empty        int // events of weight 0
	all, through weightSum
	taken        []weightSum
	// weighted are the accepted entries by hypothesis, each with its weight: that of its event
	// times that of its time window. plain tells that all of these are 1.
	weighted []weightSum
	plain    bool
	spreads  [][]spread
}

// spread is the range and the weighted mean of an observable.
type spread struct {
	count     int
	weights   weightSum
	products  float64 // of weight and value
	low, high float64
}

func newTally(outline []*kinegatev1.HypothesisOutline) *tally {
	t := &tally{
		outline:  outline,
		statuses: map[kinegatev1.EventStatus]int{},
		accepted: make([]int, len(outline)),
		taken:    make([]weightSum, len(outline)),
		weighted: make([]weightSum, len(outline)),
		plain:    true,
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

// add counts a block of events, which may be nil where no file states weights.
func (t *tally) add(events []eventfile.Event, v *kinegate.Verdicts) {
	t.blockCount++
	for i, status := range v.Statuses {
		t.events++
		t.statuses[status]++
		weight := eventWeight(events, i)
		t.stated = t.stated || i < len(events) && events[i].Weighted
		t.all.add(weight)
		if weight == 0 {
			t.empty++
		}
		if v.Gate(i) {
			t.gate++
			t.through.add(weight)
		}
		for h := range t.outline {
			if v.Accepted(h, i) {
				t.accepted[h]++
				t.taken[h].add(weight)
			}
		}
		for _, e := range v.Entries(i) {
			if e.Status != kinegatev1.EntryStatus_ENTRY_STATUS_ACCEPTED {
				continue
			}
			whole := weight * e.Weight
			t.plain = t.plain && whole == 1
			t.weighted[e.Hypothesis].add(whole)
			for k, x := range e.Observables {
				t.spreads[e.Hypothesis][k].add(x, whole)
			}
		}
	}
}

func (s *spread) add(x, weight float64) {
	if math.IsNaN(x) {
		return
	}
	s.count++
	s.weights.add(weight)
	s.products += weight * x
	s.low, s.high = min(s.low, x), max(s.high, x)
}

// mean is the weighted mean; there is none where the weights add up to nothing.
func (s *spread) mean() string {
	if !(s.weights.sum > 0) {
		return "-"
	}
	return fmt.Sprintf("%.6g", s.products/s.weights.sum)
}

func share(part, whole int) string { return portion(float64(part), float64(whole)) }

func portion(part, whole float64) string {
	if !(whole > 0) {
		return "-"
	}
	const percent = 100
	return fmt.Sprintf("%.2f %%", percent*part/whole)
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
	if t.stated {
		e.print("  the files state weights: %s for all events, %s for those that the gate accepts (%s); %s of weight 0",
			t.all.text(), t.through.text(), portion(t.through.sum, t.all.sum), plural(int64(t.empty), "event"))
	}
	e.print("")
	if err := t.writeHypotheses(e); err != nil {
		return err
	}
	if err := t.writeSpreads(e); err != nil || t.plain && !t.stated {
		return err
	}
	e.print("")
	e.print("  weighted: accepted entries with their weights, so that side bands are taken off;")
	e.print("  +-: the root of the sum of the squares of the weights")
	if t.stated {
		e.print("  share: by the weights of the events")
	}
	return nil
}

func (t *tally) writeHypotheses(e *environment) error {
	table := text.NewTable("hypothesis", ">accepted", ">share", ">weighted", ">+-", "reaction")
	for h, o := range t.outline {
		sum, spread := t.weighted[h].cells()
		accepted := share(t.accepted[h], t.events)
		if t.stated {
			accepted = portion(t.taken[h].sum, t.all.sum)
		}
		table.Row(o.GetName(), fmt.Sprint(t.accepted[h]), accepted, sum, spread, o.GetReaction())
	}
	return table.Write(e.out)
}

// writeSpreads prints mean and range of what the accepted entries record.
func (t *tally) writeSpreads(e *environment) error {
	mean := ">mean"
	if !t.plain {
		mean = ">weighted mean"
	}
	table := text.NewTable("recorded", ">entries", mean, ">lowest", ">highest")
	for h, o := range t.outline {
		for i, name := range o.GetObservables() {
			if s := t.spreads[h][i]; s.count > 0 {
				table.Row(o.GetName()+"/"+name, fmt.Sprint(s.count), s.mean(), fmt.Sprintf("%.6g", s.low), fmt.Sprintf("%.6g", s.high))
			}
		}
	}
	if table.Rows() == 0 {
		return nil
	}
	e.print("")
	return table.Write(e.out)
}
