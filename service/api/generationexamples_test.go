package api

import (
	"os"
	"path/filepath"
	"strings"
	"testing"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// exampleTexts are the texts of the example files in a folder of testdata, by name.
func exampleTexts(t *testing.T, folder string) map[string]string {
	t.Helper()
	files, err := filepath.Glob(filepath.Join("../../testdata", folder, "*.yaml"))
	if err != nil || len(files) == 0 {
		t.Fatalf("no examples in %s: %v", folder, err)
	}
	texts := map[string]string{}
	for _, file := range files {
		yaml, err := os.ReadFile(file)
		if err != nil {
			t.Fatal(err)
		}
		name := filepath.Base(file)
		if texts[name] = string(yaml); !strings.HasPrefix(string(yaml), "# ") {
			t.Errorf("%s does not begin with what it shows", name)
		}
	}
	return texts
}

// readGenerationExamples reads the example generations, which have no faults.
func readGenerationExamples(t *testing.T, s *Services) map[string]*kinegatev1.Generation {
	t.Helper()
	examples := map[string]*kinegatev1.Generation{}
	for name, yaml := range exampleTexts(t, "generation") {
		reply, err := s.generation.CheckGeneration(t.Context(), &kinegatev1.CheckGenerationRequest{
			Form: &kinegatev1.CheckGenerationRequest_Yaml{Yaml: yaml},
		})
		if err != nil || len(reply.GetFaults()) > 0 {
			t.Fatalf("%s: %v, %v", name, reply.GetFaults(), err)
		}
		if got := reply.GetGeneration().GetName() + ".yaml"; got != name {
			t.Errorf("%s has the name of %s", name, got)
		}
		examples[name] = reply.GetGeneration()
	}
	return examples
}

// readDetectorExamples reads the example detectors, which have no faults.
func readDetectorExamples(t *testing.T, s *Services) map[string]*kinegatev1.Detector {
	t.Helper()
	examples := map[string]*kinegatev1.Detector{}
	for name, yaml := range exampleTexts(t, "detectors") {
		reply, err := s.generation.CheckDetector(t.Context(), &kinegatev1.CheckDetectorRequest{
			Form: &kinegatev1.CheckDetectorRequest_Yaml{Yaml: yaml},
		})
		if err != nil || len(reply.GetFaults()) > 0 {
			t.Fatalf("%s: %v, %v", name, reply.GetFaults(), err)
		}
		examples[name] = reply.GetDetector()
	}
	return examples
}

// TestExamplesOfGenerations makes events with each example.
func TestExamplesOfGenerations(t *testing.T) {
	t.Parallel()
	s := newServices(t)
	const events = 300
	for name, g := range readGenerationExamples(t, s) {
		t.Run(name, func(t *testing.T) {
			t.Parallel()
			summary := mustGenerate(t, s, &kinegatev1.GenerateEventsRequest{Generation: g, EventCount: events}).summary()
			if summary.GetEventCount() != events || summary.GetEmptyCount() > 0 || len(summary.GetRemarks()) > 0 {
				t.Errorf("summary %v", summary)
			}
		})
	}
}

// TestExamplesOfDetectors measures a mixture in which each detector has something to see.
func TestExamplesOfDetectors(t *testing.T) {
	t.Parallel()
	s := newServices(t)
	for name, d := range readDetectorExamples(t, s) {
		t.Run(name, func(t *testing.T) {
			t.Parallel()
			g := &kinegatev1.Generation{
				Seed: 1, InitialState: tagged(1.2, 2.4), Detector: d,
				Channels: reactions("gamma p -> K+ Lambda, Lambda -> p pi-", "gamma p -> p pi0, pi0 -> gamma gamma", "gamma p -> n pi+"),
			}
			summary := mustGenerate(t, s, &kinegatev1.GenerateEventsRequest{Generation: g, EventCount: 300}).summary()
			if summary.GetSeenEventCount() < 75 || len(summary.GetRemarks()) > 0 {
				t.Errorf("summary %v", summary)
			}
		})
	}
}

// TestGenerationExamplesShowEveryField holds that every field that a generation or a detector
// can have, and every value of its enums, stands in an example.
func TestGenerationExamplesShowEveryField(t *testing.T) {
	t.Parallel()
	s := newServices(t)
	shown, all := map[string]bool{}, map[string]bool{}
	for _, g := range readGenerationExamples(t, s) {
		noteFields(g.ProtoReflect(), shown)
	}
	for _, d := range readDetectorExamples(t, s) {
		noteFields(d.ProtoReflect(), shown)
	}
	everyField((&kinegatev1.Generation{}).ProtoReflect().Descriptor(), all)
	delete(all, "kinegate.v1.Reaction.inclusive") // a fault here: there would be no products
	for name := range all {
		if !shown[name] {
			t.Errorf("no example has %s", name)
		}
	}
	t.Logf("%d fields and values of enums", len(all))
}

// TestFractionRemark holds that a decay whose branching fraction is not known is told by the check
// and by the header of the events, and one that is given is not.
func TestFractionRemark(t *testing.T) {
	t.Parallel()
	s := newServices(t)
	for _, given := range []*float64{nil, new(4.7e-5)} {
		g := &kinegatev1.Generation{InitialState: tagged(1.6, 2), Channels: reactions("gamma p -> p rho0, rho0 -> e+ e-")}
		if given != nil {
			g.Channels[0].Decays = []*kinegatev1.DecayOptions{{Product: "rho0", BranchingFraction: given}}
		}
		reply, err := s.generation.CheckGeneration(t.Context(), &kinegatev1.CheckGenerationRequest{
			Form: &kinegatev1.CheckGenerationRequest_Generation{Generation: g},
		})
		if err != nil {
			t.Fatal(err)
		}
		header := mustGenerate(t, s, &kinegatev1.GenerateEventsRequest{Generation: g, EventCount: 1}).frames[0].GetHeader()
		for _, channels := range [][]*kinegatev1.GenerationOutline{reply.GetChannels(), header.GetChannels()} {
			remarks := strings.Join(channels[0].GetRemarks(), "; ")
			if told := strings.Contains(remarks, "rho0 -> e+ e-: its branching fraction is not known and counts as 1"); told != (given == nil) {
				t.Errorf("fraction %v: remarks %q", given, remarks)
			}
		}
	}
}

// TestThroughWidthRemark holds that a constant rate below the threshold of the nominal masses is
// told, and neither one that starts above it nor a rate that falls there by itself is.
func TestThroughWidthRemark(t *testing.T) {
	t.Parallel()
	s := newServices(t)
	falling := &kinegatev1.EnergyDependence{Kind: &kinegatev1.EnergyDependence_PhaseSpace{PhaseSpace: &kinegatev1.PhaseSpaceRate{}}}
	for i, c := range []struct {
		from, to float64
		energy   *kinegatev1.EnergyDependence
		told     bool
	}{
		{0.9, 1.3, nil, true}, {0.9, 1.09, nil, true}, {1.1, 1.3, nil, false}, {0.9, 1.3, falling, false},
	} {
		g := &kinegatev1.Generation{InitialState: tagged(c.from, c.to), Channels: reactions("gamma p -> p rho0, rho0 -> pi+ pi-")}
		g.Channels[0].Energy = c.energy
		header := mustGenerate(t, s, &kinegatev1.GenerateEventsRequest{Generation: g, EventCount: 1}).frames[0].GetHeader()
		remarks := strings.Join(header.GetChannels()[0].GetRemarks(), "; ")
		// m_p + m_rho0, the threshold that kinegate reaction gives.
		if told := strings.Contains(remarks, "below sqrt(s) = 1.713532 GeV"); told != c.told {
			t.Errorf("case %d: remarks %q", i, remarks)
		}
	}
}

// TestLawRemark holds that a channel which is made isotropic although a law for it exists says
// so, and no other.
func TestLawRemark(t *testing.T) {
	t.Parallel()
	s := newServices(t)
	total := &kinegatev1.GenerationInitialState{Kind: &kinegatev1.GenerationInitialState_Total{
		Total: &kinegatev1.TotalMotion{SqrtSGev: new(3.0)},
	}}
	for text, law := range map[string]string{
		"gamma gamma -> e+ e-": "ANGULAR_LAW_PAIR_CREATION", "e+ e- -> gamma gamma": "ANGULAR_LAW_ANNIHILATION",
		"gamma e- -> gamma e-": "ANGULAR_LAW_COMPTON", "gamma p -> p eta": "", "e+ e- -> pi+ pi-": "", "gamma gamma -> pi+ pi-": "",
	} {
		for _, angle := range []*kinegatev1.ProductionAngle{nil, {Product: "products[0]", Polar: &kinegatev1.ProductionAngle_SlopePerGev2{SlopePerGev2: 1}}} {
			g := &kinegatev1.Generation{InitialState: total, Channels: []*kinegatev1.GenerationChannel{{Reaction: text, Angle: angle}}}
			reply, err := s.generation.CheckGeneration(t.Context(), &kinegatev1.CheckGenerationRequest{
				Form: &kinegatev1.CheckGenerationRequest_Generation{Generation: g},
			})
			if err != nil || len(reply.GetFaults()) > 0 {
				t.Fatalf("%s: %v, %v", text, reply.GetFaults(), err)
			}
			remarks := strings.Join(reply.GetChannels()[0].GetRemarks(), "; ")
			if told := law != "" && angle == nil; told != strings.Contains(remarks, "isotropic") || told && !strings.Contains(remarks, law) {
				t.Errorf("%s with angle %v: remarks %q", text, angle, remarks)
			}
		}
	}
}
