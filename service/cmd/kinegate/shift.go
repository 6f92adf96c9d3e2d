package main

import (
	"fmt"
	"slices"
	"time"

	kinegate "example.org/kinegate/clients/go"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/cmd/kinegate/internal/hall"
	"example.org/kinegate/service/cmd/kinegate/internal/quantity"
	"example.org/kinegate/service/cmd/kinegate/internal/text"
)

// shift is what a shift physicist wants to know of the demo's events.
type shift struct {
	tally   *tally
	names   []string // of the hypotheses
	mix     []hall.Channel
	truth   []int   // events by true channel
	by      [][]int // accepted by hypothesis and true channel
	gate    []int   // events that the gate accepts, by true channel
	peaks   []*peak
	latency []time.Duration // of each block
	elapsed time.Duration
}

// peak is a histogram of one recorded observable.
type peak struct {
	hypothesis string
	title      string
	histogram  *text.Histogram
}

func newShift(selection *kinegatev1.CheckSelectionResponse, events []hall.Event) *shift {
	s := &shift{tally: newTally(selection.GetHypotheses()), mix: hall.Mix()}
	s.truth, s.gate = make([]int, len(s.mix)), make([]int, len(s.mix))
	for _, h := range selection.GetHypotheses() {
		s.names = append(s.names, h.GetName())
		s.by = append(s.by, make([]int, len(s.mix)))
	}
	for _, e := range events {
		s.truth[e.Channel]++
	}
	const bins = 24
	s.peaks = []*peak{
		{"two-photons", "mass of the photon pair nearest the pi0, every event with two photons", text.NewHistogram(bins, 0.05, 0.29)},
		{"eta", "eta: mass of the photon pair", text.NewHistogram(bins, 0.50, 0.596)},
		{"omega", "omega: mass of pi0 gamma", text.NewHistogram(bins, 0.70, 0.868)},
		{"K-Lambda", "K-Lambda: mass of p pi-", text.NewHistogram(bins, 1.104, 1.128)},
	}
	return s
}

// add counts a block.
func (s *shift) add(b *batch[hall.Event], v *kinegate.Verdicts) {
	s.latency = append(s.latency, time.Since(b.sent))
	s.tally.add(nil, v)
	for i, e := range b.events {
		if v.Gate(i) {
			s.gate[e.Channel]++
		}
		for h := range s.names {
			if v.Accepted(h, i) {
				s.by[h][e.Channel]++
			}
		}
		for _, entry := range v.Entries(i) {
			for _, p := range s.peaks {
				if s.names[entry.Hypothesis] == p.hypothesis {
					p.histogram.Add(entry.Observables[0], entry.Weight)
				}
			}
		}
	}
}

// own is the true channel that a hypothesis is meant for, -1 for none.
func (s *shift) own(h int) int {
	reaction := s.tally.outline[h].GetReaction()
	return slices.IndexFunc(s.mix, func(c hall.Channel) bool { return c.Reaction == reaction })
}

func (s *shift) write(e *environment) error {
	seconds := float64(s.tally.events) / hall.RateHz
	hertz := func(n int) string { return fmt.Sprintf("%.2f", float64(n)/seconds) }
	e.print("%d verdicts on %d events; the gate accepts %d (%s), %s Hz of %d Hz\n",
		s.tally.events, sum(s.truth), s.tally.gate, share(s.tally.gate, s.tally.events), hertz(s.tally.gate), hall.RateHz)
	t := text.NewTable("hypothesis", ">accepted", ">Hz", ">true", ">kept", ">pure", "largest feed from elsewhere")
	for h, name := range s.names {
		own := s.own(h)
		if own < 0 {
			continue
		}
		t.Row(name, fmt.Sprint(s.tally.accepted[h]), hertz(s.tally.accepted[h]), fmt.Sprint(s.truth[own]),
			share(s.by[h][own], s.truth[own]), share(s.by[h][own], s.tally.accepted[h]), s.feed(h, own))
	}
	if err := t.Write(e.out); err != nil {
		return err
	}
	e.print("  kept: accepted share of the true events after the pre-trigger; pure: true share of the accepted")
	e.print("  eta-prime is a shadow: it is reported and never opens the gate")
	e.print("")
	t = text.NewTable("true channel", ">events", ">Hz", ">through the gate")
	for c, channel := range s.mix {
		t.Row(channel.Name, fmt.Sprint(s.truth[c]), hertz(s.truth[c]), share(s.gate[c], s.truth[c]))
	}
	if err := t.Write(e.out); err != nil {
		return err
	}
	for _, p := range s.peaks {
		e.print("")
		edge := func(x float64) string { return quantity.Format(x, quantity.Energy, 4) }
		if err := p.histogram.Write(e.out, p.title+" (side bands taken off)", edge); err != nil {
			return err
		}
	}
	slices.Sort(s.latency)
	e.print("\nBlocks of %d events at full speed, answered within %s (median), %s (99 %%); %.0f events/s through the stream",
		demoBlockEvents, percentile(s.latency, 50), percentile(s.latency, 99), float64(s.tally.events)/s.elapsed.Seconds())
	return nil
}

// feed is the true channel that most wrongly accepted events come from.
func (s *shift) feed(h, own int) string {
	worst := -1
	for c, n := range s.by[h] {
		if c != own && n > 0 && (worst < 0 || n > s.by[h][worst]) {
			worst = c
		}
	}
	if worst < 0 {
		return "none"
	}
	return fmt.Sprintf("%s: %d, %s of it", s.mix[worst].Name, s.by[h][worst], share(s.by[h][worst], s.truth[worst]))
}

func sum(ns []int) int {
	total := 0
	for _, n := range ns {
		total += n
	}
	return total
}

// percentile of sorted durations, rounded for print.
func percentile(sorted []time.Duration, percent int) time.Duration {
	if len(sorted) == 0 {
		return 0
	}
	const whole = 100
	return sorted[min(len(sorted)*percent/whole, len(sorted)-1)].Round(10 * time.Microsecond)
}
