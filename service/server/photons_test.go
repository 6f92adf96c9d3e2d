package server

import (
	"errors"
	"io"
	"math"
	"math/rand/v2"
	"testing"

	"google.golang.org/protobuf/proto"

	kinegate "example.org/kinegate/clients/go"
	"example.org/kinegate/clients/go/history"
	"example.org/kinegate/proto/column"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// photonEvents are events [from, from+count) of an invented sample: two to six photons
// each, one event in 50 with a NaN. Event i is the same in whatever block it comes.
func photonEvents(from, count int) *kinegatev1.EventBlock {
	var ids []int64
	var energies, theta, phi []float64
	offsets := []int32{0}
	for i := from; i < from+count; i++ {
		r := rand.New(rand.NewPCG(7, uint64(i))) //nolint:gosec // a test needs a seed, no secret
		ids = append(ids, int64(i))
		n := 2 + r.IntN(5)
		for range n {
			energies = append(energies, 0.05+0.4*r.Float64())
			theta = append(theta, math.Acos(2*r.Float64()-1))
			phi = append(phi, math.Pi*(2*r.Float64()-1))
		}
		if i%50 == 49 {
			energies[len(energies)-1] = math.NaN()
		}
		offsets = append(offsets, offsets[len(offsets)-1]+int32(n)) //nolint:gosec // small
	}
	classes := make([]byte, len(energies))
	for i := range classes {
		classes[i] = byte(kinegatev1.ObjectClass_OBJECT_CLASS_PHOTON)
	}
	return &kinegatev1.EventBlock{
		EventIds: column.Int64(ids), ObjectOffsets: column.Int32(offsets), ObjectClasses: classes,
		Coordinates: &kinegatev1.EventBlock_MomentumAngles{MomentumAngles: &kinegatev1.MomentumAnglesColumns{
			MomentumGev: column.Float64(energies), ThetaRad: column.Float64(theta), PhiRad: column.Float64(phi),
		}},
	}
}

// photonSelection has two hypotheses in a group, one with several assignments.
func photonSelection() *kinegatev1.Selection {
	mass := func(minimum, maximum float64, products ...string) *kinegatev1.Window {
		return &kinegatev1.Window{Observable: &kinegatev1.Window_InvariantMass{InvariantMass: &kinegatev1.MassWindow{
			Products: products, MinGev: proto.Float64(minimum), MaxGev: proto.Float64(maximum),
		}}}
	}
	record := func(products ...string) []*kinegatev1.Window {
		return []*kinegatev1.Window{{Name: "mass", Observable: &kinegatev1.Window_InvariantMass{
			InvariantMass: &kinegatev1.MassWindow{Products: products},
		}}}
	}
	extra := &kinegatev1.ExtraObjects{Rule: &kinegatev1.ExtraObjects_Any{Any: &kinegatev1.AnyExtraObjects{}}}
	return &kinegatev1.Selection{
		Name: "photons",
		Hypotheses: []*kinegatev1.Hypothesis{
			{
				Name: "pair", Reaction: "pi0 -> gamma gamma", ExtraObjects: extra, PrescaleCount: 3,
				Condition: &kinegatev1.Condition{Window: mass(0.1, 0.2, "gamma[0]", "gamma[1]")}, Record: record("gamma[0]", "gamma[1]"),
			},
			{
				Name: "pairs", Reaction: "eta -> pi0 pi0, pi0 -> gamma gamma", ExtraObjects: extra,
				Condition: &kinegatev1.Condition{Window: mass(0.05, 0.4, "pi0[0]")}, Record: record("pi0[0]", "pi0[1]"),
			},
		},
	}
}

// allEntries opens a stream that tells everything.
func allEntries() *kinegatev1.JudgeOpen {
	return &kinegatev1.JudgeOpen{
		Selection: inline(photonSelection()), Entries: kinegatev1.EntryDetail_ENTRY_DETAIL_ALL,
		Limits: &kinegatev1.Limits{BlockEventCount: 4096, BlockObjectCount: 32768},
	}
}

// learned returns a checker that knows the sample, from one uninterrupted stream with
// blocks of a size that no test uses.
func learned(t testing.TB, r *running, open *kinegatev1.JudgeOpen, events int) *history.Checker {
	t.Helper()
	const perBlock = 311
	c := history.New(open.GetFirstSequence())
	stream, err := r.client(t).Judge(t.Context(), open, kinegate.JudgeOptions{})
	if err != nil {
		t.Fatal(err)
	}
	defer stream.Close()
	for from := 0; from < events; from += perBlock {
		block := photonEvents(from, min(perBlock, events-from))
		if err := stream.Send(block); err != nil {
			t.Fatal(err)
		}
		v, err := stream.Recv()
		if err == nil {
			err = c.Learn(block, v)
		}
		if err != nil {
			t.Fatal(err)
		}
	}
	return c
}

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

// stream runs the sample through a stream in blocks of perBlock and checks it; during is
// called before each block.
func (r *running) stream(
	t testing.TB, client *kinegate.Client, open *kinegatev1.JudgeOpen, options kinegate.JudgeOptions,
	c *history.Checker, events, perBlock int, during func(from int),
) {
	t.Helper()
	stream, err := client.Judge(t.Context(), open, options)
	if err != nil {
		t.Fatal(err)
	}
	defer stream.Close()
	sent := make(chan error, 1)
	go func() {
		for from := 0; from < events; from += perBlock {
			during(from)
			block := photonEvents(from, min(perBlock, events-from))
			block.Sequence = open.GetFirstSequence() + int64(from/perBlock)
			c.Sent(block)
			if err := stream.Send(block); err != nil {
				sent <- err
				return
			}
		}
		sent <- stream.CloseSend()
	}()
	for {
		v, err := stream.Recv()
		if err != nil {
			if sendErr := <-sent; sendErr != nil {
				t.Errorf("Send: %v", sendErr)
			}
			if !errors.Is(err, io.EOF) {
				t.Errorf("Recv: %v", err)
			}
			break
		}
		c.Answered(v)
	}
	for _, fault := range c.Faults(true) {
		t.Error(fault)
	}
}
