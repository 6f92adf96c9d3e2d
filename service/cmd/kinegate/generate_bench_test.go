package main

import (
	"errors"
	"io"
	"testing"
	"time"

	kinegate "example.org/kinegate/clients/go"
	"example.org/kinegate/kinematics/detector"
	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/generation"
	"example.org/kinegate/kinematics/particle"
	"example.org/kinegate/kinematics/reaction"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// omegaInProcess is the generator and the detector of detectorText in this process.
func omegaInProcess(b *testing.B) (*generation.Generator, *detector.Detector) {
	b.Helper()
	table, err := particle.New()
	if err != nil {
		b.Fatal(err)
	}
	r, err := reaction.Parse(table, omegaExample)
	if err != nil {
		b.Fatal(err)
	}
	products, _, err := generation.ProductsOf(r, 0)
	if err != nil {
		b.Fatal(err)
	}
	g, err := generation.New(generation.Config{
		Seed: 1, Channels: []generation.Channel{{Products: products}},
		Initial: generation.FixedTarget{
			Beam: generation.Beam{Spectrum: generation.Flat{LowGeV: 1.2, HighGeV: 2.4}}, TargetMassGeV: r.Initial[1].Mass,
		},
	})
	if err != nil {
		b.Fatal(err)
	}
	theta := detector.Polar{MinRad: 0.1, MaxRad: 2.6}
	d, err := detector.New(detector.Config{
		Seed: 1,
		Calorimeter: &detector.Calorimeter{
			Theta: theta, Stochastic: 0.03, ThetaSigmaRad: 0.01, PhiSigmaRad: 0.01, ThresholdGeV: 0.03, Efficiency: 1,
		},
		Recoil: &detector.Recoil{Theta: theta, AngleSigmaRad: 0.01, Efficiency: 1},
		Tagger: &detector.Tagger{SigmaGeV: 0.0015, TimeSigmaNS: 1},
	})
	if err != nil {
		b.Fatal(err)
	}
	return g, d
}

// omegaGeneration is the generator as a server is asked for it, with a detector or none.
func omegaGeneration(d *kinegatev1.Detector) *kinegatev1.Generation {
	return &kinegatev1.Generation{
		Seed: 1, Channels: []*kinegatev1.GenerationChannel{{Reaction: omegaExample}}, Detector: d,
		InitialState: &kinegatev1.GenerationInitialState{Kind: &kinegatev1.GenerationInitialState_BeamOnTarget{
			BeamOnTarget: &kinegatev1.SpectrumOnTarget{Beam: &kinegatev1.BeamSpectrum{
				Kind: &kinegatev1.BeamSpectrum_Even{Even: &kinegatev1.EnergyRange{MinGev: 1.2, MaxGev: 2.4}},
			}},
		}},
	}
}

// BenchmarkGenerateEvents compares the rate at which events with truth and measurement
// reach a client in this process from a server in another with the rate at which one
// goroutine makes them here. The two alternate, so that both see the same machine.
func BenchmarkGenerateEvents(b *testing.B) {
	const events, perFill = 50000, 1000
	g := startGate(b)
	client, err := kinegate.Dial(g.where["general"], kinegate.Options{})
	if err != nil {
		b.Fatal(err)
	}
	defer func() { _ = client.Close() }()
	reply, err := client.Generation.CheckDetector(b.Context(), &kinegatev1.CheckDetectorRequest{
		Form: &kinegatev1.CheckDetectorRequest_Yaml{Yaml: detectorText},
	})
	if err != nil {
		b.Fatal(err)
	}
	request := &kinegatev1.GenerateEventsRequest{EventCount: events, Generation: omegaGeneration(reply.GetDetector())}
	generator, measuring := omegaInProcess(b)
	var truth event.Truth
	var block event.Block
	var labels detector.Labels
	var streamed, inProcess time.Duration
	for b.Loop() {
		start := time.Now()
		if got := countStreamed(b, client, request); got != events {
			b.Fatalf("%d events came", got)
		}
		streamed += time.Since(start)
		start = time.Now()
		for first := int64(0); first < events; first += perFill {
			if _, err := generator.Fill(first, perFill, &truth); err != nil {
				b.Fatal(err)
			}
			measuring.Measure(&truth, &block, &labels)
		}
		inProcess += time.Since(start)
	}
	all := float64(b.N) * events
	b.ReportMetric(inProcess.Seconds()/streamed.Seconds(), "of-in-process-rate")
	b.ReportMetric(all/streamed.Seconds(), "streamed/s")
	b.ReportMetric(all/inProcess.Seconds(), "in-process/s")
}

// countStreamed takes all events of a request.
func countStreamed(b *testing.B, client *kinegate.Client, request *kinegatev1.GenerateEventsRequest) int64 {
	b.Helper()
	stream, err := client.Generation.GenerateEvents(b.Context(), request)
	if err != nil {
		b.Fatal(err)
	}
	count := int64(0)
	for {
		m, err := stream.Recv()
		if errors.Is(err, io.EOF) {
			return count
		}
		if err != nil {
			b.Fatal(err)
		}
		count += m.GetBlock().GetEventCount()
	}
}
