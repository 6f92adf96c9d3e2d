package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"math"
	"strconv"
	"strings"
	"time"

	kinegate "example.org/kinegate/clients/go"
	"example.org/kinegate/proto/column"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/cmd/kinegate/internal/text"
)

// generated receives simulated events.
type generated struct {
	*environment

	sink  eventSink // nil for none
	show  int
	drawn *observableSample // nil for none
	// bounds are those that were measured.
	bounds []measuredBound

	header  *kinegatev1.GenerationHeader
	summary *kinegatev1.GenerationSummary
	shown   []simulated
	// measured tells that there is a detector.
	measured bool
	elapsed  time.Duration
}

// simulated is one event as it was and as it was measured.
type simulated struct {
	id      int64
	channel int
	weight  float64
	beam    float64 // energy of the particle that interacted; 0 where there is no beam
	// particles are all of the event, depth first.
	particles []trueParticle
	// seen is the measurement, in coordinates; nil without a detector.
	seen        *kinegate.Measured
	coordinates kinegate.Coordinates
}

// trueParticle is one particle of an event.
type trueParticle struct {
	number     int64
	energy     float64
	px, py, pz float64
	mass       float64
	decayed    bool
}

// momentum is the size of the momentum and its angles.
func (p *trueParticle) momentum() (size, theta, phi float64) {
	across := math.Hypot(p.px, p.py)
	return math.Hypot(across, p.pz), math.Atan2(across, p.pz), math.Atan2(p.py, p.px)
}

// receive asks for the events and hands them on as they come.
func (g *generated) receive(ctx context.Context, client *kinegate.Client, request *kinegatev1.GenerateEventsRequest) error {
	ctx, cancel := context.WithCancel(ctx)
	defer cancel()
	start := time.Now()
	stream, err := client.Generation.GenerateEvents(ctx, request)
	if err != nil {
		return err
	}
	progress := text.NewProgress(g.err, g.terminal, "generating", request.GetEventCount())
	defer progress.Done()
	made := int64(0)
	for {
		m, err := stream.Recv()
		if errors.Is(err, io.EOF) {
			break
		}
		if err != nil {
			return err
		}
		switch frame := m.GetFrame().(type) {
		case *kinegatev1.GenerateEventsResponse_Header:
			g.header = frame.Header
			if g.drawn != nil {
				err = g.drawn.choose(frame.Header.GetChannels())
			}
		case *kinegatev1.GenerateEventsResponse_Block:
			made += frame.Block.GetEventCount()
			progress.Set(made)
			err = g.take(frame.Block)
		case *kinegatev1.GenerateEventsResponse_Progress:
			progress.Set(frame.Progress.GetEventCount())
		case *kinegatev1.GenerateEventsResponse_Summary:
			g.summary = frame.Summary
		}
		if err != nil {
			return err
		}
		if err := g.tell(m, nil); err != nil {
			return err
		}
	}
	g.elapsed = time.Since(start)
	if g.sink != nil {
		return g.sink.finish()
	}
	return nil
}

// take hands a block on.
func (g *generated) take(block *kinegatev1.GeneratedBlock) error {
	events, err := readGenerated(block)
	if err != nil {
		return err
	}
	g.measured = block.GetEvents() != nil
	if room := g.show - len(g.shown); room > 0 {
		g.shown = append(g.shown, events[:min(room, len(events))]...)
	}
	if g.drawn != nil {
		if err := g.drawn.add(events); err != nil {
			return err
		}
	}
	if g.sink != nil {
		return g.sink.add(g.header, block, events)
	}
	return nil
}

// readGenerated takes a block apart.
func readGenerated(block *kinegatev1.GeneratedBlock) ([]simulated, error) {
	t := block.GetTruth()
	var failed error
	floats := func(raw []byte) []float64 {
		xs, err := column.Float64s(raw)
		failed = errors.Join(failed, err)
		return xs
	}
	ids, err := column.Int64s(t.GetEventIds())
	failed = errors.Join(failed, err)
	channels, err := column.Int16s(t.GetChannels())
	failed = errors.Join(failed, err)
	offsets, err := column.Int32s(t.GetParticleOffsets())
	failed = errors.Join(failed, err)
	numbers, err := column.Int64s(t.GetParticleNumbers())
	failed = errors.Join(failed, err)
	beamOffsets, err := column.Int32s(t.GetBeamOffsets())
	failed = errors.Join(failed, err)
	weights, mass, beams := floats(t.GetWeights()), floats(t.GetMassGev()), floats(t.GetBeamEnergyGev())
	p := t.GetMomentum()
	energy, px, py, pz := floats(p.GetEnergyGev()), floats(p.GetPxGev()), floats(p.GetPyGev()), floats(p.GetPzGev())
	decayed := t.GetDecayed()
	rows, n := len(numbers), len(ids)
	if failed != nil || len(offsets) != n+1 || len(beamOffsets) != n+1 || len(channels) != n || len(weights) != n ||
		len(mass) != rows || len(energy) != rows || len(px) != rows || len(py) != rows || len(pz) != rows || len(decayed) != rows {
		return nil, errors.Join(errors.New("the server sent columns that do not fit"), failed)
	}
	var measured []kinegate.Measured
	var coordinates kinegate.Coordinates
	if block.GetEvents() != nil {
		if coordinates, measured, err = kinegate.ReadEvents(block.GetEvents()); err != nil {
			return nil, err
		}
	}
	events := make([]simulated, n)
	for i := range events {
		e := simulated{id: ids[i], channel: int(channels[i]), weight: weights[i]}
		if first := int(beamOffsets[i]); first < len(beams) {
			e.beam = beams[first]
		}
		for row := int(offsets[i]); row < min(int(offsets[i+1]), rows); row++ {
			e.particles = append(e.particles, trueParticle{
				number: numbers[row], energy: energy[row], px: px[row], py: py[row], pz: pz[row], mass: mass[row], decayed: decayed[row] != 0,
			})
		}
		if i < len(measured) {
			e.seen, e.coordinates = &measured[i], coordinates
		}
		events[i] = e
	}
	return events, nil
}

// report prints the first events and the summary.
func (g *generated) report(file string) error {
	if g.json {
		return nil
	}
	if g.header == nil || g.summary == nil {
		return errors.New("the server ended the stream without a summary")
	}
	for _, c := range g.header.GetChannels() {
		g.print("%s", c.GetReaction())
		for _, r := range c.GetRemarks() {
			g.print("  %s", r)
		}
	}
	if err := g.table(); err != nil {
		return err
	}
	s := g.summary
	g.print("")
	t := text.NewTable("", "")
	t.Row("events", fmt.Sprintf("%d, from %d on, seed %d", s.GetEventCount(), g.header.GetFirstEvent(), g.header.GetSeed()))
	if s.GetEmptyCount() > 0 {
		t.Row("of weight 0", strconv.FormatInt(s.GetEmptyCount(), 10))
	}
	t.Row("effective events", fmt.Sprintf("%.6g", s.GetEffectiveEventCount()))
	t.Row("efficiency", fmt.Sprintf("%.4g, %d draws", s.GetEfficiency(), s.GetAttemptCount()))
	overflows := strconv.FormatInt(s.GetOverflowCount(), 10)
	if s.GetOverflowCount() > 0 {
		overflows += fmt.Sprintf(", largest weight %.4g", s.GetLargestWeight())
	}
	t.Row("overflows", overflows)
	for _, b := range g.bounds {
		t.Row("measured bound", b.bound+", "+b.channel)
	}
	if g.measured {
		t.Row("with an object seen", strconv.FormatInt(s.GetSeenEventCount(), 10))
	}
	for _, c := range g.header.GetChannels() {
		// Told wherever something is said to decay, since also 1 is a claim.
		if strings.Count(c.GetReaction(), "->") > 1 {
			t.Row("branching fraction", fmt.Sprintf("%.6g, %s", c.GetBranchingFraction(), c.GetName()))
		}
	}
	t.Row("digest of the sample", g.header.GetGenerationDigest())
	if err := t.Write(g.out); err != nil {
		return err
	}
	for _, r := range s.GetRemarks() {
		g.print("  %s", r)
	}
	if file != "" {
		g.print("  written: %s", file)
	}
	return nil
}

// givenUp is the fault of a sample that lacks events.
func (g *generated) givenUp() error {
	lost := g.summary.GetExhaustedCount()
	if lost == 0 {
		return nil
	}
	return fmt.Errorf("%d of %d events were given up and have weight 0: the sample lacks what is hard to draw, and is biased",
		lost, g.summary.GetEventCount())
}

// table prints the particles of the first events and what the detector saw of them.
func (g *generated) table() error {
	t := text.NewTable(">event", "particle", ">energy", ">momentum", ">theta", ">phi", ">mass")
	for _, e := range g.shown {
		products := g.header.GetChannels()[e.channel].GetProducts()
		for i := range e.particles {
			p := &e.particles[i]
			size, theta, phi := p.momentum()
			name := "spectator"
			if i < len(products) {
				name = products[i]
			}
			id := ""
			if i == 0 {
				id = strconv.FormatInt(e.id, 10)
			}
			t.Row(id, name, gevs(p.energy), gevs(size), degrees(theta), degrees(phi), gevs(p.mass))
		}
		if e.seen == nil || e.coordinates != kinegate.MomentumAngles {
			continue // a detector measures in these coordinates
		}
		for i := range e.seen.Objects {
			t.Row(seenRow(&e.seen.Objects[i])...)
		}
	}
	if t.Rows() == 0 {
		return nil
	}
	return t.Write(g.out)
}

// seenRow is a measured object: its mass and, but for photons, its energy are no measurement, and
// without a momentum there is the direction alone.
func seenRow(o *kinegate.Object) []string {
	class := enumWord(o.Class, "OBJECT_CLASS_")
	value := func(k int, show func(float64) string) string {
		if o.Measured != 0 && o.Measured>>k&1 == 0 {
			return "-"
		}
		return show(o.Values[k])
	}
	size, energy := value(0, gevs), "-"
	if o.Class == kinegatev1.ObjectClass_OBJECT_CLASS_PHOTON {
		energy = size
	}
	return []string{"", "seen: " + class, energy, size, value(1, degrees), value(2, degrees), "-"}
}
