package api

import (
	"math"
	"strings"
	"testing"

	"google.golang.org/grpc/codes"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

func brems(m *kinegatev1.BremsstrahlungSpectrum) *kinegatev1.BeamSpectrum {
	return &kinegatev1.BeamSpectrum{Kind: &kinegatev1.BeamSpectrum_Bremsstrahlung{Bremsstrahlung: m}}
}

// TestGenerationFaults breaks one thing a row and wants its field and code.
func TestGenerationFaults(t *testing.T) {
	s := newServices(t)
	for name, c := range map[string]struct {
		spoil func(g *kinegatev1.Generation)
		code  codes.Code
		field string
		says  string
	}{
		"closed": {func(g *kinegatev1.Generation) { g.InitialState = tagged(0.2, 0.5) }, codes.FailedPrecondition, "channels[0]", "lightest final state needs 1.503932 GeV, 0.1553674 GeV more"},
		"thirteen products": {func(g *kinegatev1.Generation) {
			g.Channels = reactions("gamma p -> p" + strings.Repeat(" pi0", 12))
			g.InitialState = tagged(20, 21)
		}, codes.InvalidArgument, "channels[0].reaction", `"13 products": invalid, allowed: 2 to 12 products`},
		"line shape that no mass fits": {func(g *kinegatev1.Generation) {
			g.Channels = reactions("gamma p -> p rho0, rho0 -> pi+ pi-")
			g.Channels[0].Decays = []*kinegatev1.DecayOptions{{Product: "rho0", LineShape: &kinegatev1.LineShape{MinGev: 0.1, MaxGev: 0.2}}}
		}, codes.InvalidArgument, "channels[0].decays[0].line_shape.max_gev", "lowest mass"},
		"mass range beyond the energy": {func(g *kinegatev1.Generation) {
			g.Channels = reactions("gamma p -> p rho0, rho0 -> pi+ pi-")
			g.Channels[0].Decays = []*kinegatev1.DecayOptions{{Product: "rho0", LineShape: &kinegatev1.LineShape{MinGev: 1.5}}}
		}, codes.FailedPrecondition, "channels[0]", "closed"},
		"decay of too much mass": {func(g *kinegatev1.Generation) { g.Channels = reactions("gamma p -> p pi0, pi0 -> mu+ mu-") },
			codes.InvalidArgument, "channels[0].reaction", "energy is not conserved in pi0 -> mu+ mu-"},
		"structured decay of too much mass": {func(g *kinegatev1.Generation) {
			g.Channels[0] = &kinegatev1.GenerationChannel{StructuredReaction: &kinegatev1.Reaction{
				Initial: []string{"gamma", "p"}, Products: []*kinegatev1.Product{
					{Particle: "p"}, {Particle: "pi0", Daughters: []*kinegatev1.Product{{Particle: "mu+"}, {Particle: "mu-"}}},
				},
			}}
		}, codes.InvalidArgument, "channels[0].structured_reaction.products[1]", "energy is not conserved in pi0 -> mu+ mu-"},
		"no channel":       {func(g *kinegatev1.Generation) { g.Channels = nil }, codes.InvalidArgument, "channels", "1 to 64"},
		"text":             {func(g *kinegatev1.Generation) { g.Channels[0].Reaction = "gamma p -> p omga" }, codes.InvalidArgument, "channels[0].reaction", "omega"},
		"no text":          {func(g *kinegatev1.Generation) { g.Channels[1].Reaction = "" }, codes.InvalidArgument, "channels[1].reaction", "exactly one"},
		"other beam":       {func(g *kinegatev1.Generation) { g.Channels[1].Reaction = "gamma n -> n pi0" }, codes.InvalidArgument, "channels[1].reaction", "same initial"},
		"inclusive":        {func(g *kinegatev1.Generation) { g.Channels[1].Reaction = "gamma p -> K+ X" }, codes.Unimplemented, "channels[1].reaction", "no products"},
		"negative share":   {func(g *kinegatev1.Generation) { g.Channels[1].Fraction = new(-1.0) }, codes.InvalidArgument, "channels[1].fraction", ">= 0"},
		"bound":            {func(g *kinegatev1.Generation) { g.Channels[0].Bound = new(math.NaN()) }, codes.InvalidArgument, "channels[0].bound", "finite"},
		"weighted mixture": {func(g *kinegatev1.Generation) { g.Weighted = true }, codes.InvalidArgument, "weighted", "mixture"},
		"no beam":          {func(g *kinegatev1.Generation) { g.InitialState = nil }, codes.InvalidArgument, "initial_state", "only a decay"},
		"range":            {func(g *kinegatev1.Generation) { g.InitialState = tagged(2, 1) }, codes.InvalidArgument, "initial_state.beam_on_target.beam.even.max_gev", "> min_gev"},
		"bremsstrahlung": {func(g *kinegatev1.Generation) {
			g.InitialState.GetBeamOnTarget().Beam = brems(&kinegatev1.BremsstrahlungSpectrum{ElectronGev: 1, MinGev: 1.2, MaxGev: 2})
		}, codes.InvalidArgument, "initial_state.beam_on_target.beam.bremsstrahlung.electron_gev", "max_gev"},
		"light": {func(g *kinegatev1.Generation) {
			g.InitialState.GetBeamOnTarget().Beam = &kinegatev1.BeamSpectrum{Kind: &kinegatev1.BeamSpectrum_Backscatter{
				Backscatter: &kinegatev1.BackscatterSpectrum{
					Beam: &kinegatev1.BeamMotion{Value: &kinegatev1.BeamMotion_TotalEnergyGev{TotalEnergyGev: 8}}, LightEnergyGev: -1,
				},
			}}
		}, codes.InvalidArgument, "initial_state.beam_on_target.beam.backscatter.light_energy_gev", "0"},
		"nucleus": {func(g *kinegatev1.Generation) {
			g.InitialState.GetBeamOnTarget().BoundNucleon = &kinegatev1.BoundNucleon{Nucleus: "e-", FermiMomentumGev: 0.1}
		}, codes.InvalidArgument, "initial_state.beam_on_target.bound_nucleon.nucleus", "nucleus"},
		"angle of a daughter": {func(g *kinegatev1.Generation) {
			g.Channels[0].Angle = &kinegatev1.ProductionAngle{Product: "pi0"}
		}, codes.InvalidArgument, "channels[0].angle.product", "reaction itself"},
		"cosine": {func(g *kinegatev1.Generation) {
			g.Channels[0].Angle = &kinegatev1.ProductionAngle{Product: "omega", Polar: &kinegatev1.ProductionAngle_Cosine{
				Cosine: &kinegatev1.CosineTable{Cosines: []float64{-1, 2}, Densities: []float64{1, 1}},
			}}
		}, codes.InvalidArgument, "channels[0].angle.cosine.cosines[1]", "-1 to 1"},
		"law": {func(g *kinegatev1.Generation) {
			g.Channels[0].Angle = &kinegatev1.ProductionAngle{Product: "omega", Polar: &kinegatev1.ProductionAngle_Law{
				Law: kinegatev1.AngularLaw_ANGULAR_LAW_COMPTON,
			}}
		}, codes.InvalidArgument, "channels[0].angle.law", "gamma e-"},
		"decay that is none": {func(g *kinegatev1.Generation) {
			g.Channels[0].Decays = []*kinegatev1.DecayOptions{{Product: "p"}}
		}, codes.InvalidArgument, "channels[0].decays[0].product", "decays"},
		"points": {func(g *kinegatev1.Generation) {
			g.Channels[0].Energy = &kinegatev1.EnergyDependence{Kind: &kinegatev1.EnergyDependence_Table{
				Table: &kinegatev1.EnergyTable{SqrtSGev: []float64{1, 2, 3}, Rates: []float64{1, 1}},
			}}
		}, codes.InvalidArgument, "channels[0].energy.table.sqrt_s_gev", "as many as values beside them, at least 2"},
		"density": {func(g *kinegatev1.Generation) {
			g.Channels[0].Decays = []*kinegatev1.DecayOptions{{Product: "omega", Density: &kinegatev1.DecayOptions_VectorToThree{}}}
		}, codes.InvalidArgument, "channels[0].decays[0].vector_to_three", "3 daughters"},
		"accidentals": {func(g *kinegatev1.Generation) { g.Accidentals.RateHz = 1e12 }, codes.InvalidArgument, "accidentals.rate_hz", "100"},
		"target":      {func(g *kinegatev1.Generation) { g.Target.LengthM = math.Inf(1) }, codes.InvalidArgument, "target.length_m", "finite"},
		"detector":    {func(g *kinegatev1.Generation) { g.Detector.Tracker.Efficiency = new(1.5) }, codes.InvalidArgument, "detector.tracker.efficiency", "0 to 1"},
		"species": {func(g *kinegatev1.Generation) { g.Detector.Tracker.Confusions[0].Species = 99 },
			codes.InvalidArgument, "detector.tracker.confusions[0].species", "contract"},
	} {
		t.Run(name, func(t *testing.T) {
			g := sample()
			c.spoil(g)
			_, err := generate(t, s, &kinegatev1.GenerateEventsRequest{Generation: g, EventCount: 10})
			if err == nil {
				t.Fatal("events were made")
			}
			f := Explain(err)
			if got := MeaningOf(f.Reason).Code; got != c.code {
				t.Errorf("code %v, want %v: %v", got, c.code, err)
			}
			if len(f.Violations) == 0 || f.Violations[0].Field != "generation."+c.field {
				t.Errorf("violations %+v, want one of generation.%s", f.Violations, c.field)
			}
			if text := err.Error(); !strings.Contains(text, c.says) {
				t.Errorf("%q does not say %q", text, c.says)
			}
		})
	}
}

func TestGenerateEventsSliceFaults(t *testing.T) {
	s := newServices(t)
	for field, request := range map[string]*kinegatev1.GenerateEventsRequest{
		"first_event":         {Generation: sample(), FirstEvent: -1},
		"event_count":         {Generation: sample(), FirstEvent: 2, EventCount: math.MaxInt64},
		"block_event_count":   {Generation: sample(), BlockEventCount: 5000},
		"without_truth":       {Generation: &kinegatev1.Generation{InitialState: tagged(2, 3), Channels: reactions(omegaText)}, WithoutTruth: true},
		"generation.channels": {},
	} {
		out, err := generate(t, s, request)
		if err == nil || Explain(err).Violations[0].Field != field || len(out.frames) > 0 {
			t.Errorf("%s: %v", field, err)
		}
	}
}

// TestGenerateEventsUnseen is a detector that nothing reaches: an answer that says so.
func TestGenerateEventsUnseen(t *testing.T) {
	g := sample()
	g.Detector = &kinegatev1.Detector{Tracker: &kinegatev1.Tracker{
		Theta: &kinegatev1.PolarRange{MinRad: 0.1, MaxRad: 2}, MinMomentumGev: 100, Constant: 0.01, AngleSigmaRad: 0.01,
	}}
	summary := mustGenerate(t, newServices(t), &kinegatev1.GenerateEventsRequest{Generation: g, EventCount: 100}).summary()
	if summary.GetSeenEventCount() != 0 || len(summary.GetRemarks()) != 1 || !strings.Contains(summary.GetRemarks()[0], "acceptance") {
		t.Errorf("summary %v", summary)
	}
}

const generationFile = `name: "two words"
seed: 3
initial_state:
  beam_on_target:
    beam: {even: {min_gev: 2.4, max_gev: 1.2}}
channels:
  - reaction: "gamma p -> p omega, omega -> pi0 gamma"
    fraction: yes
  - reaction: "gamma p -> p etha"
    bound: -1
    anle: {product: p}
detector:
  tracker:
    theta: {min_rad: 0.1, max_rad: 4}
    constant: 0.01
    angle_sigma_rad: 0
`

// TestCheckGenerationPlaces wants each seeded fault at its line.
func TestCheckGenerationPlaces(t *testing.T) {
	reply, err := newServices(t).generation.CheckGeneration(t.Context(), &kinegatev1.CheckGenerationRequest{
		Form: &kinegatev1.CheckGenerationRequest_Yaml{Yaml: generationFile},
	})
	if err != nil {
		t.Fatal(err)
	}
	for _, want := range []struct {
		line  int32
		field string
	}{
		{1, "name"}, {8, "channels[0].fraction"}, {9, "channels[1].reaction"}, {11, "channels[1].anle"},
		{14, "detector.tracker.theta.max_rad"}, {16, "detector.tracker.angle_sigma_rad"},
	} {
		found := false
		for _, f := range reply.GetFaults() {
			found = found || f.GetLine() == want.line && f.GetField() == want.field && f.GetColumn() > 0
		}
		if !found {
			t.Errorf("no fault of %s at line %d: %v", want.field, want.line, reply.GetFaults())
		}
	}
	if reply.GetGenerationDigest() != "" {
		t.Error("a faulty generation has a digest")
	}
}

func TestCheckDetector(t *testing.T) {
	s := newServices(t).generation
	for yaml, want := range map[string]int{
		"name: hall\ncalorimeter: {theta: {min_rad: 0.1, max_rad: 2}, stochastic: 0.03, theta_sigma_rad: 0.01, phi_sigma_rad: 0.01, threshold_gev: 0.03}\n": 0,
		"neutrals: {theta: {min_rad: 0.1, max_rad: 2}, angle_sigma_rad: 0.1, efficiency: 2}\ntagger: {edges_gev: [2, 1]}\n":                                 2,
		"tagger: &a {time_sigma_ns: 1}\n": 1,
	} {
		reply, err := s.CheckDetector(t.Context(), &kinegatev1.CheckDetectorRequest{Form: &kinegatev1.CheckDetectorRequest_Yaml{Yaml: yaml}})
		if err != nil || len(reply.GetFaults()) != want {
			t.Errorf("%s: %v, %v; want %d faults", yaml, reply.GetFaults(), err, want)
		}
	}
}

// TestFileFaultsOnce wants one fault for one mistake: neither the missing value of a field that
// could not be read, nor the missing field whose name is mistyped.
func TestFileFaultsOnce(t *testing.T) {
	s := newServices(t).generation
	const tracker = "tracker:\n  theta: {min_rad: 0.1, max_rad: 2}\n  constant: 0.01\n  angle_sigma_rad: 0.01\n  identify: true\n"
	for yaml, want := range map[string]string{
		tracker + "  confusions: [{species: SPECIES_PION, taken_for: SPECIES_PIN, probability: 0.1}]\n": "6:51 tracker.confusions[0].taken_for",
		tracker + "  confusions: [{species: SPECIES_PION, probability: 0.1}]\n":                         "6:16 tracker.confusions[0].taken_for",
		strings.Replace(tracker, "theta:", "thata:", 1):                                                 "2:3 tracker.thata",
		strings.Replace(tracker, "max_rad", "max_deg", 1):                                               "2:25 tracker.theta.max_deg",
		strings.Replace(tracker, "angle_sigma_rad: 0.01", "angle_sigma_rad: -1", 1) + "name: a b\n":     "4:3 tracker.angle_sigma_rad, 6:1 name",
	} {
		reply, err := s.CheckDetector(t.Context(), &kinegatev1.CheckDetectorRequest{Form: &kinegatev1.CheckDetectorRequest_Yaml{Yaml: yaml}})
		if err != nil {
			t.Fatal(err)
		}
		var got []string
		for _, f := range reply.GetFaults() {
			got = append(got, decimal(int64(f.GetLine()))+":"+decimal(int64(f.GetColumn()))+" "+f.GetField())
		}
		if strings.Join(got, ", ") != want {
			t.Errorf("faults %v, want %s in\n%s", reply.GetFaults(), want, yaml)
		}
	}
}

// FuzzGeneration reads any text as a generation file: it is refused with faults, or makes
// events in sound blocks.
func FuzzGeneration(f *testing.F) {
	f.Add(generationFile)
	f.Add("channels: [{reaction: \"gamma p -> p pi0, pi0 -> gamma gamma\"}]\ninitial_state: {beam_on_target: {beam: {fixed: {total_energy_gev: 1}}}}\n")
	f.Add("channels: [{reaction: \"omega -> pi+ pi- pi0\", decays: [{product: pi0, branching_fraction: 0.5}]}]\nweighted: true\n")
	f.Add("channels: [{reaction: \"gamma gamma -> e+ e-\", angle: {product: \"e-\", law: ANGULAR_LAW_PAIR_CREATION}}]\n" +
		"initial_state: {two_beams: {beam1: {even: {min_gev: 1, max_gev: 2}}, beam2: {fixed: {total_energy_gev: 1e-3}}}}\n")
	f.Add("channels: [{reaction: \"gamma n -> n pi0\"}]\ninitial_state: {beam_on_target: {bound_nucleon: {nucleus: d, fermi_momentum_gev: 0.2}, " +
		"beam: {bremsstrahlung: {electron_gev: 3, min_gev: 1, max_gev: 2, channel_count: 10}}}}\n")
	s := newServices(f)
	f.Fuzz(func(t *testing.T, text string) {
		reply, err := s.generation.CheckGeneration(t.Context(), &kinegatev1.CheckGenerationRequest{
			Form: &kinegatev1.CheckGenerationRequest_Yaml{Yaml: text},
		})
		if err != nil {
			t.Fatal(err)
		}
		if len(reply.GetFaults()) > 0 {
			return
		}
		out := mustGenerate(t, s, &kinegatev1.GenerateEventsRequest{Generation: reply.GetGeneration(), EventCount: 3})
		for _, b := range out.blocks() {
			if b.GetEvents() == nil {
				continue
			}
			if _, err := eventBlock(b.GetEvents(), &columns{}); err != nil {
				t.Error(err)
			}
		}
	})
}
