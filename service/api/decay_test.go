package api

import (
	"math"
	"slices"
	"strings"
	"testing"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

func describeDecay(t *testing.T, request *kinegatev1.DescribeDecayRequest) (*kinegatev1.DescribeDecayResponse, error) {
	t.Helper()
	return (&decayService{table: newTestTable(t)}).DescribeDecay(t.Context(), request)
}

func TestDescribeDecay(t *testing.T) {
	cases := []struct {
		name, text string
		state      kinegatev1.ChannelState
		class      kinegatev1.DecayClass
		daughters  int
		opening    bool
	}{
		{"two bodies", "Lambda -> p pi-", kinegatev1.ChannelState_CHANNEL_STATE_OPEN, kinegatev1.DecayClass_DECAY_CLASS_WEAK, 2, true},
		{"two photons", "pi0 -> gamma gamma", kinegatev1.ChannelState_CHANNEL_STATE_OPEN,
			kinegatev1.DecayClass_DECAY_CLASS_ELECTROMAGNETIC, 2, true},
		{"three bodies", "omega -> pi+ pi- pi0", kinegatev1.ChannelState_CHANNEL_STATE_OPEN,
			kinegatev1.DecayClass_DECAY_CLASS_STRONG, 3, false},
		{"of a wide state", "f0(980) -> K+ K-", kinegatev1.ChannelState_CHANNEL_STATE_OPEN, kinegatev1.DecayClass_DECAY_CLASS_STRONG, 2, true},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			m, err := describeDecay(t, &kinegatev1.DescribeDecayRequest{Form: &kinegatev1.DescribeDecayRequest_Decay{Decay: c.text}, Parent: total(2)})
			if err != nil {
				t.Fatal(err)
			}
			if m.GetState() != c.state || m.GetDecayClass() != c.class || len(m.GetDaughters()) != c.daughters ||
				(m.GetOpeningAngle() != nil) != c.opening {
				t.Errorf("got %v", m)
			}
			if p := m.GetParent(); math.Abs(p.GetTotalEnergyGev()-2) > 1e-15 || p.GetBeta() <= 0 || p.GetGamma() <= 1 {
				t.Errorf("parent %v", p)
			}
			if m.GetReleasedEnergyUncertaintyGev() <= 0 {
				t.Errorf("uncertainty %g", m.GetReleasedEnergyUncertaintyGev())
			}
		})
	}
}

// TestKaonInFlight holds the daughters' momentum and the flight against the handbook:
// p* = 206 MeV and c tau = 2.6844 cm (Review of Particle Physics, from memory).
func TestKaonInFlight(t *testing.T) {
	const decay = "K0_S -> pi+ pi-"
	m, err := describeDecay(t, &kinegatev1.DescribeDecayRequest{Form: &kinegatev1.DescribeDecayRequest_Decay{Decay: decay}, DistancesM: []float64{0, 0.1}})
	if err != nil {
		t.Fatal(err)
	}
	if p := m.GetDaughters()[0].GetRestFrameMomentum().GetMaxGev(); math.Abs(p-0.206) > 5e-4 {
		t.Errorf("p* %g", p)
	}
	if !slices.Equal(m.GetSurvivingFractions(), []float64{1, 0}) || m.GetParent().GetMeanFlightM() != 0 {
		t.Errorf("at rest: %v", m)
	}
	// As fast as it is heavy, it flies c tau in the mean.
	m, err = describeDecay(t, &kinegatev1.DescribeDecayRequest{
		Form: &kinegatev1.DescribeDecayRequest_Decay{Decay: decay}, DistancesM: []float64{0.026844},
		Parent: &kinegatev1.BeamMotion{Value: &kinegatev1.BeamMotion_MomentumGev{MomentumGev: 0.497611}},
	})
	if err != nil {
		t.Fatal(err)
	}
	if f := m.GetParent().GetMeanFlightM(); math.Abs(f-0.026844) > 3e-5 {
		t.Errorf("mean flight %g", f)
	}
	if s := m.GetSurvivingFractions()[0]; math.Abs(s-math.Exp(-1)) > 1e-3 {
		t.Errorf("surviving %g", s)
	}
}

// TestDescribeDecayClosed: between sharp states a decay that lacks energy is an answer.
func TestDescribeDecayClosed(t *testing.T) {
	m, err := describeDecay(t, &kinegatev1.DescribeDecayRequest{Form: &kinegatev1.DescribeDecayRequest_Decay{Decay: "pi0 -> mu+ mu-"}})
	if err != nil {
		t.Fatal(err)
	}
	if m.GetState() != kinegatev1.ChannelState_CHANNEL_STATE_CLOSED || len(m.GetDaughters()) != 0 || len(m.GetRemarks()) != 0 {
		t.Errorf("%v", m)
	}
	if r := m.GetReleasedEnergyGev(); math.Abs(r-(0.1349768-2*0.1056583755)) > 1e-9 {
		t.Errorf("released %g", r)
	}
}

func TestDescribeDecayRefuses(t *testing.T) {
	cases := []struct {
		name    string
		request *kinegatev1.DescribeDecayRequest
		reason  Reason
		field   string
		holds   string
	}{
		{"empty", &kinegatev1.DescribeDecayRequest{}, FieldInvalid, "decay", ""},
		{"reaction", &kinegatev1.DescribeDecayRequest{Form: &kinegatev1.DescribeDecayRequest_Decay{Decay: "gamma p -> p pi0"}}, FieldInvalid, "decay", "one particle"},
		{"typo", &kinegatev1.DescribeDecayRequest{Form: &kinegatev1.DescribeDecayRequest_Decay{Decay: "Lamda -> p pi-"}}, FieldInvalid, "decay", "Lambda"},
		{"too heavy inside", &kinegatev1.DescribeDecayRequest{Form: &kinegatev1.DescribeDecayRequest_Decay{Decay: "eta -> gamma pi0, pi0 -> mu+ mu-"}}, LawBroken, "decay", "energy"},
		{"broken law", &kinegatev1.DescribeDecayRequest{Form: &kinegatev1.DescribeDecayRequest_Decay{Decay: "Lambda -> p pi0"}}, LawBroken, "decay", "charge"},
		{"motion not set", &kinegatev1.DescribeDecayRequest{Form: &kinegatev1.DescribeDecayRequest_Decay{Decay: "Lambda -> p pi-"}, Parent: &kinegatev1.BeamMotion{}}, FieldInvalid, "parent", ""},
		{"energy below mass", &kinegatev1.DescribeDecayRequest{Form: &kinegatev1.DescribeDecayRequest_Decay{Decay: "Lambda -> p pi-"}, Parent: total(1)}, FieldInvalid, "parent.total_energy_gev", ">="},
		{"NaN", &kinegatev1.DescribeDecayRequest{Form: &kinegatev1.DescribeDecayRequest_Decay{Decay: "Lambda -> p pi-"}, Parent: total(math.NaN())}, FieldInvalid, "parent.total_energy_gev", ""},
		{"distance", &kinegatev1.DescribeDecayRequest{Form: &kinegatev1.DescribeDecayRequest_Decay{Decay: "Lambda -> p pi-"}, DistancesM: []float64{1, -1}}, FieldInvalid, "distances_m[1]", ">= 0"},
		{"distance NaN", &kinegatev1.DescribeDecayRequest{Form: &kinegatev1.DescribeDecayRequest_Decay{Decay: "rho0 -> pi+ pi-"}, DistancesM: []float64{math.NaN()}}, FieldInvalid, "distances_m[0]", ""},
		{"distances", &kinegatev1.DescribeDecayRequest{Form: &kinegatev1.DescribeDecayRequest_Decay{Decay: "Lambda -> p pi-"}, DistancesM: make([]float64, 1001)}, FieldInvalid, "distances_m", "1000"},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			_, err := describeDecay(t, c.request)
			m := refused(t, err, c.reason)
			if m["field"] != c.field || !strings.Contains(err.Error()+m["nearest"]+m["allowed"], c.holds) {
				t.Errorf("field %q, %v, %v", m["field"], m, err)
			}
		})
	}
}
