package api

import (
	"math"
	"strings"
	"testing"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

func total(e float64) *kinegatev1.BeamMotion {
	return &kinegatev1.BeamMotion{Value: &kinegatev1.BeamMotion_TotalEnergyGev{TotalEnergyGev: e}}
}

func onTarget(e float64) *kinegatev1.InitialState {
	return &kinegatev1.InitialState{Kind: &kinegatev1.InitialState_BeamOnTarget{
		BeamOnTarget: &kinegatev1.BeamOnTarget{Beam: total(e)},
	}}
}

func beams(e1, e2 float64, angle *float64) *kinegatev1.InitialState {
	return &kinegatev1.InitialState{Kind: &kinegatev1.InitialState_TwoBeams{TwoBeams: &kinegatev1.TwoBeams{
		Beam1: total(e1), Beam2: total(e2), AngleBetweenBeamsRad: angle,
	}}}
}

func describe(t *testing.T, text string, in *kinegatev1.InitialState) (*kinegatev1.DescribeReactionResponse, error) {
	t.Helper()
	s := &reactionService{table: newTestTable(t)}
	return s.DescribeReaction(t.Context(), &kinegatev1.DescribeReactionRequest{
		Form: &kinegatev1.DescribeReactionRequest_Reaction{Reaction: text}, InitialState: in,
	})
}

func TestDescribeReaction(t *testing.T) {
	const kLambda = "gamma p -> K+ Lambda, Lambda -> p pi-"
	ten := 10 * math.Pi / 180
	cases := []struct {
		name, text string
		in         *kinegatev1.InitialState
		state      kinegatev1.ChannelState
		products   int
	}{
		{"open", kLambda, onTarget(1.3), kinegatev1.ChannelState_CHANNEL_STATE_OPEN, 2},
		{"closed", kLambda, onTarget(0.9), kinegatev1.ChannelState_CHANNEL_STATE_CLOSED, 0},
		{"no energy", kLambda, nil, kinegatev1.ChannelState_CHANNEL_STATE_UNSPECIFIED, 0},
		{"two photons head on", "gamma gamma -> e+ e-", beams(1.0e-3, 0.5e-3, nil), kinegatev1.ChannelState_CHANNEL_STATE_OPEN, 2},
		{"two photons at ten degrees", "gamma gamma -> e+ e-", beams(1.0e-3, 0.5e-3, &ten), kinegatev1.ChannelState_CHANNEL_STATE_CLOSED, 0},
		{"through width", "gamma p -> p rho0, rho0 -> pi+ pi-", onTarget(1.0), kinegatev1.ChannelState_CHANNEL_STATE_OPEN_THROUGH_WIDTH, 2},
		{"one body", "gamma gamma -> eta", beams(0.3, 0.3, nil), kinegatev1.ChannelState_CHANNEL_STATE_OFF_POINT, 0},
		{"three bodies", "gamma p -> p pi+ pi-", onTarget(2), kinegatev1.ChannelState_CHANNEL_STATE_OPEN, 3},
		{"inclusive", "gamma p -> K+ X", onTarget(2), kinegatev1.ChannelState_CHANNEL_STATE_OPEN, 1},
		{"sqrt(s)", "e+ e- -> mu+ mu-", &kinegatev1.InitialState{Kind: &kinegatev1.InitialState_SqrtSGev{SqrtSGev: 10}},
			kinegatev1.ChannelState_CHANNEL_STATE_OPEN, 2},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			r, err := describe(t, c.text, c.in)
			if err != nil {
				t.Fatal(err)
			}
			if r.GetState() != c.state || len(r.GetProducts()) != c.products {
				t.Errorf("state %v with %d products", r.GetState(), len(r.GetProducts()))
			}
			closed := c.state == kinegatev1.ChannelState_CHANNEL_STATE_CLOSED
			if closed != (r.BeamEnergyDeficitGev != nil) || closed && *r.BeamEnergyDeficitGev <= 0 {
				t.Errorf("deficit %v", r.BeamEnergyDeficitGev)
			}
			if (c.in == nil) != (r.GetCentreOfMass() == nil) {
				t.Errorf("centre of mass %v", r.GetCentreOfMass())
			}
		})
	}
}

func TestDescribeReactionNumbers(t *testing.T) {
	r, err := describe(t, "gamma p -> K+ Lambda, Lambda -> p pi-", onTarget(1.3))
	if err != nil {
		t.Fatal(err)
	}
	// 0.911 GeV: common knowledge of the trade, to the digits stated.
	if e := r.GetThreshold().GetTotalEnergyGev(); math.Abs(e-0.911) > 5e-4 {
		t.Errorf("threshold %g", e)
	}
	if r.GetThreshold().GetEnergyUncertaintyGev() <= 0 || r.GetExcessEnergyGev() <= 0 {
		t.Errorf("%v", r)
	}
	if len(r.GetDecays()) != 1 || r.GetDecays()[0].GetDecayClass() != kinegatev1.DecayClass_DECAY_CLASS_WEAK {
		t.Errorf("decays %v", r.GetDecays())
	}
	if len(r.GetMomentumTransfers()) != 4 || r.GetCentreOfMass().FinalMomentumGev == nil {
		t.Errorf("transfers %v", r.GetMomentumTransfers())
	}
	if r.GetProducts()[1].GetProduct() != "Lambda[0]" && r.GetProducts()[1].GetProduct() != "Lambda" {
		t.Errorf("product %q", r.GetProducts()[1].GetProduct())
	}
	three, err := describe(t, "gamma p -> p pi+ pi-", onTarget(2))
	if err != nil || len(three.GetSubsetMasses()) != 3 {
		t.Errorf("subsets %v %v", three.GetSubsetMasses(), err)
	}
}

func TestDescribeReactionRefuses(t *testing.T) {
	nan := math.NaN()
	cases := []struct {
		name, text string
		in         *kinegatev1.InitialState
		reason     Reason
		field      string
		holds      string
	}{
		{"typo", "gamma p -> K+ Lamda", onTarget(1), FieldInvalid, "reaction", "Lambda"},
		{"broken law", "gamma p -> K+ n", onTarget(1), LawBroken, "reaction", "strangeness"},
		{"empty", "", nil, FieldInvalid, "reaction", ""},
		{"negative energy", "gamma p -> p pi0", onTarget(-1), FieldInvalid, "initial_state.beam_on_target.beam.total_energy_gev", ""},
		{"NaN", "gamma p -> p pi0", onTarget(nan), FieldInvalid, "initial_state.beam_on_target.beam.total_energy_gev", ""},
		{"no beam", "gamma p -> p pi0", &kinegatev1.InitialState{}, FieldInvalid, "initial_state", ""},
		{"angle", "gamma gamma -> e+ e-", beams(1, 1, &nan), FieldInvalid, "initial_state.two_beams.angle_between_beams_rad", ""},
		{"no left side", "-> mu+ mu-", onTarget(1), FieldInvalid, "reaction", "left side"},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			_, err := describe(t, c.text, c.in)
			m := refused(t, err, c.reason)
			if m["field"] != c.field {
				t.Errorf("field %q, want %q (%v)", m["field"], c.field, err)
			}
			if all := err.Error() + m["nearest"]; !strings.Contains(all, c.holds) {
				t.Errorf("%q lacks %q", all, c.holds)
			}
		})
	}
	t.Run("no form", func(t *testing.T) {
		s := &reactionService{table: newTestTable(t)}
		_, err := s.DescribeReaction(t.Context(), &kinegatev1.DescribeReactionRequest{})
		refused(t, err, FieldInvalid)
	})
	t.Run("structured", func(t *testing.T) {
		s := &reactionService{table: newTestTable(t)}
		_, err := s.DescribeReaction(t.Context(), &kinegatev1.DescribeReactionRequest{
			Form: &kinegatev1.DescribeReactionRequest_StructuredReaction{StructuredReaction: &kinegatev1.Reaction{
				Initial: []string{"gamma", "p"}, Products: []*kinegatev1.Product{{Particle: "p"}, {Particle: "pi9"}},
			}},
		})
		if m := refused(t, err, FieldInvalid); m["field"] != "structured_reaction.products[1].particle" {
			t.Errorf("metadata %v", m)
		}
	})
}

func TestSelfTest(t *testing.T) {
	if err := SelfTest(); err != nil {
		t.Error(err)
	}
}

// TestReactionTextsAreKept: a text is read once, within the bound, and a faulty one never.
func TestReactionTextsAreKept(t *testing.T) {
	table := newTestTable(t)
	var k reactionTexts
	read := func(text string) (*parsedReaction, error) {
		return k.read(table, processForm{name: "reaction", text: text})
	}
	first, err := read("gamma p -> p pi0")
	if err != nil {
		t.Fatal(err)
	}
	if again, err := read("gamma p -> p pi0"); err != nil || again != first {
		t.Errorf("read again: %v", err)
	}
	if _, err := read("gamma p -> p pi9"); err == nil || len(k.byText) != 1 {
		t.Errorf("a faulty text: %v, %d kept", err, len(k.byText))
	}
	for i := range 3 * keptReactions {
		if _, err := read("gamma p -> p pi0" + strings.Repeat(" ", i)); err != nil {
			t.Fatal(err)
		}
		if len(k.byText) > keptReactions {
			t.Fatalf("%d kept", len(k.byText))
		}
	}
}
