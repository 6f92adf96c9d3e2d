package api

import (
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"google.golang.org/protobuf/proto"
	"google.golang.org/protobuf/reflect/protoreflect"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// The examples of selections are the files of testdata/selections; this one shows faults.
const (
	exampleFolder = "../../testdata/selections"
	faultyExample = "faulty.yaml"
)

// exampleSample is a simulated sample to judge an example with.
type exampleSample struct {
	state    *kinegatev1.GenerationInitialState // nil for the decay of a particle at rest
	channel  *kinegatev1.GenerationChannel
	detector *kinegatev1.Detector
}

// exampleSamples has the samples for each example but those that are judged with measured
// events.
func exampleSamples() map[string][]exampleSample {
	text := func(reaction string) *kinegatev1.GenerationChannel {
		return &kinegatev1.GenerationChannel{Reaction: reaction}
	}
	all, photons, recoil := exampleDetector(), exampleDetector(), exampleDetector()
	photons.Tracker, photons.Displaced = nil, nil
	recoil.Tracker, recoil.Displaced = nil, nil
	recoil.Recoil = &kinegatev1.DirectionDetector{Theta: proto.CloneOf(all.GetTracker().GetTheta()), AngleSigmaRad: 0.02}
	merging := proto.CloneOf(photons)
	merging.Calorimeter.MergeAngleRad = 0.2
	even := func(low, high float64) *kinegatev1.BeamSpectrum {
		return &kinegatev1.BeamSpectrum{Kind: &kinegatev1.BeamSpectrum_Even{Even: &kinegatev1.EnergyRange{MinGev: low, MaxGev: high}}}
	}
	twoPhotons := &kinegatev1.GenerationInitialState{Kind: &kinegatev1.GenerationInitialState_TwoBeams{
		TwoBeams: &kinegatev1.TwoSpectra{Beam1: even(0.98, 1.02), Beam2: even(0.98, 1.02)},
	}}
	daughters := func(names ...string) []*kinegatev1.Product {
		var list []*kinegatev1.Product
		for _, name := range names {
			list = append(list, &kinegatev1.Product{Particle: name})
		}
		return list
	}
	pair := &kinegatev1.GenerationChannel{StructuredReaction: &kinegatev1.Reaction{
		Initial: []string{"gamma", "p"},
		Products: []*kinegatev1.Product{
			{Particle: "p"},
			{Particle: "pi0", Daughters: daughters("gamma", "gamma")},
			{Particle: "pi0", Daughters: daughters("e+", "e-", "gamma")},
		},
	}}
	pi0, kaon := text("gamma p -> p pi0, pi0 -> gamma gamma"), text("gamma p -> K+ Lambda, Lambda -> p pi-")
	return map[string][]exampleSample{
		"missing-proton.yaml":       {{tagged(1.2, 2.4), pi0, photons}},
		"recoil-direction.yaml":     {{tagged(1.2, 2.4), pi0, recoil}},
		"fit-missing-proton.yaml":   {{tagged(1.2, 2.4), text("gamma p -> p pi0 pi0, pi0 -> gamma gamma"), photons}},
		"two-pions.yaml":            {{tagged(1.2, 2.4), text("gamma p -> p pi0 pi0, pi0 -> gamma gamma"), recoil}},
		"fit-vertex.yaml":           {{tagged(1.2, 2.4), text("gamma p -> p eta, eta -> gamma gamma"), all}},
		"fit-energies-unknown.yaml": {{twoPhotons, text("gamma gamma -> e+ e-"), all}},
		"fit-equal-masses.yaml":     {{nil, text("eta -> pi0 pi0 pi0, pi0 -> gamma gamma"), all}},
		"displaced-decay.yaml":      {{tagged(1.2, 2.4), kaon, all}},
		"merged-photons.yaml":       {{tagged(4, 5), pi0, merging}},
		"conditions.yaml":           {{tagged(1.2, 2.4), text(omegaText), photons}},
		"gate.yaml": {
			{nil, text("eta -> gamma gamma"), all},
			{nil, text("rho(770)+ -> pi+ pi0, pi0 -> gamma gamma"), all},
			{nil, text("rho(770)0 -> pi+ pi-"), all},
		},
		"structured-reaction.yaml": {{tagged(1.2, 2.4), pair, all}, {tagged(1.2, 2.4), kaon, all}},
		"initial-states.yaml":      {{tagged(1.499, 1.501), pi0, all}},
	}
}

// exampleDetector sees everything but what flies nearly along the beam.
func exampleDetector() *kinegatev1.Detector {
	theta := &kinegatev1.PolarRange{MinRad: 0.02, MaxRad: 3.12}
	return &kinegatev1.Detector{
		Name: "example",
		Calorimeter: &kinegatev1.Calorimeter{
			Theta: theta, RadiusM: 1, Stochastic: 0.02, ThetaSigmaRad: 0.005, PhiSigmaRad: 0.005, ThresholdGev: 0.02,
		},
		Tracker: &kinegatev1.Tracker{
			Theta: proto.CloneOf(theta), MinMomentumGev: 0.05, Constant: 0.01, AngleSigmaRad: 0.003, Identify: true,
		},
		Tagger:    &kinegatev1.Tagger{SigmaGev: 0.005, TimeSigmaNs: 0.5},
		Vertex:    &kinegatev1.VertexDetector{SigmaXM: 1e-4, SigmaYM: 1e-4, SigmaZM: 1e-3},
		Displaced: &kinegatev1.DisplacedVertexDetector{MinDistanceM: 0.002, SigmaXM: 5e-4, SigmaYM: 5e-4, SigmaZM: 1e-3},
	}
}

// readExample returns the selection of an example, which has no faults.
func readExample(t *testing.T, name string) *kinegatev1.Selection {
	t.Helper()
	yaml, err := os.ReadFile(filepath.Join(exampleFolder, name))
	if err != nil {
		t.Fatal(err)
	}
	if !strings.HasPrefix(string(yaml), "# ") {
		t.Errorf("%s does not begin with what it shows", name)
	}
	reply := checkText(t, string(yaml))
	for _, f := range reply.GetFaults() {
		t.Errorf("%s:%d:%d: %s: %s", name, f.GetLine(), f.GetColumn(), f.GetField(), f.GetMessage())
	}
	return reply.GetSelection()
}

// TestExamplesOfSelections judges a sample with each example: every hypothesis accepts some of
// its events.
func TestExamplesOfSelections(t *testing.T) {
	t.Parallel()
	for name, samples := range exampleSamples() {
		t.Run(name, func(t *testing.T) {
			t.Parallel()
			s := newServices(t)
			chosen := readExample(t, name)
			accepted := make([]int, len(chosen.GetHypotheses()))
			for _, sample := range samples {
				made := mustGenerate(t, s, &kinegatev1.GenerateEventsRequest{
					Generation: &kinegatev1.Generation{
						Seed: 4, InitialState: sample.state, Channels: []*kinegatev1.GenerationChannel{sample.channel}, Detector: sample.detector,
					},
					EventCount: 100, WithoutTruth: true,
				})
				for _, block := range made.blocks() {
					reply, err := s.bulk.JudgeBlock(t.Context(), &kinegatev1.JudgeBlockRequest{
						Selection: &kinegatev1.SelectionSource{Source: &kinegatev1.SelectionSource_Given{Given: chosen}},
						Block:     block.GetEvents(),
					})
					if err != nil {
						t.Fatal(err)
					}
					for i, h := range reply.GetVerdict().GetHypotheses() {
						accepted[i] += onesCount(h.GetAccepted())
					}
				}
			}
			for i, h := range chosen.GetHypotheses() {
				if accepted[i] == 0 {
					t.Errorf("%s accepts no event", h.GetName())
				}
			}
			t.Logf("accepted: %d of %d", accepted, 100*len(samples))
		})
	}
}

// TestExampleOfMassesFromEvents judges a measured event.
func TestExampleOfMassesFromEvents(t *testing.T) {
	t.Parallel()
	block, _ := dimuon()
	reply, err := newServices(t).bulk.JudgeBlock(t.Context(), &kinegatev1.JudgeBlockRequest{
		Selection: &kinegatev1.SelectionSource{Source: &kinegatev1.SelectionSource_Given{
			Given: readExample(t, "mass-from-event.yaml"),
		}},
		Block: block,
	})
	if err != nil || onesCount(reply.GetVerdict().GetGate()) != 1 {
		t.Errorf("verdict %v, %v", reply, err)
	}
}

// TestExamplesShowEveryField holds that every field that a selection can have, and every value
// of its enums, stands in an example, and that every example is judged by a test.
func TestExamplesShowEveryField(t *testing.T) {
	t.Parallel()
	files, err := filepath.Glob(filepath.Join(exampleFolder, "*.yaml"))
	if err != nil || len(files) == 0 {
		t.Fatalf("no examples: %v", err)
	}
	// These are judged with measured events, here and by the examples of README.md.
	judged := []string{"mass-from-event.yaml", "dimuon.yaml", "four-lepton.yaml", "four-lepton-fit.yaml"}
	for name := range exampleSamples() {
		judged = append(judged, name)
	}
	shown := map[string]bool{}
	for _, file := range files {
		name := filepath.Base(file)
		if name == faultyExample {
			continue
		}
		if !slices.Contains(judged, name) {
			t.Errorf("%s is judged by no test", name)
		}
		noteFields(readExample(t, name).ProtoReflect(), shown)
	}
	all := map[string]bool{}
	everyField((&kinegatev1.Selection{}).ProtoReflect().Descriptor(), all)
	for name := range all {
		if !shown[name] {
			t.Errorf("no example has %s", name)
		}
	}
	t.Logf("%d fields and values of enums", len(all))
}

// noteFields notes the fields that are set and the values of enums.
func noteFields(m protoreflect.Message, shown map[string]bool) {
	m.Range(func(f protoreflect.FieldDescriptor, v protoreflect.Value) bool {
		shown[string(f.FullName())] = true
		note := func(v protoreflect.Value) {
			switch {
			case f.Message() != nil:
				noteFields(v.Message(), shown)
			case f.Enum() != nil:
				shown[string(f.Enum().Values().ByNumber(v.Enum()).FullName())] = true
			}
		}
		if !f.IsList() {
			note(v)
			return true
		}
		for i := range v.List().Len() {
			note(v.List().Get(i))
		}
		return true
	})
}

// everyField adds the fields of a message and of those within it, and the values of enums that
// a file can hold.
func everyField(d protoreflect.MessageDescriptor, all map[string]bool) {
	for i := range d.Fields().Len() {
		f := d.Fields().Get(i)
		if all[string(f.FullName())] {
			continue
		}
		all[string(f.FullName())] = true
		if f.Message() != nil {
			everyField(f.Message(), all)
		}
		if f.Enum() != nil {
			for k := range f.Enum().Values().Len() {
				if v := f.Enum().Values().Get(k); v.Number() != 0 {
					all[string(v.FullName())] = true
				}
			}
		}
	}
}
