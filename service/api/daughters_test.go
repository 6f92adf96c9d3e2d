package api

import (
	"math"
	"slices"
	"testing"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// TestPhotonPair holds the opening angle of pi0 -> gamma gamma against textbooks: least
// 2 asin(m/E); half of the decays open by less than 2 asin(m/sqrt(E^2 - p^2/4)), since the
// cosine in the rest frame is uniform.
func TestPhotonPair(t *testing.T) {
	const energy = 2.0
	request := &kinegatev1.DescribeDecayRequest{Form: &kinegatev1.DescribeDecayRequest_Decay{Decay: "pi0 -> gamma gamma"}, Parent: total(energy)}
	m, err := describeDecay(t, request)
	if err != nil {
		t.Fatal(err)
	}
	mass, momentum := m.GetParent().GetMassGev(), m.GetParent().GetMomentumGev()
	least := 2 * math.Asin(mass/energy)
	if o := m.GetOpeningAngle(); !near(o.GetMinRad(), least, 1e-14) || o.GetMaxRad() != math.Pi {
		t.Errorf("opening angle %v, want from %g", o, least)
	}
	d := m.GetDaughters()[0]
	width := d.GetLaboratoryEnergy().GetMaxGev() - d.GetLaboratoryEnergy().GetMinGev()
	if !near(width, momentum, 1e-13) || !near(d.GetLaboratoryEnergyDensityPerGev(), 1/momentum, 1e-13) {
		t.Errorf("the energies fill %g, density %g, momentum %g", width, d.GetLaboratoryEnergyDensityPerGev(), momentum)
	}
	middle := 2 * math.Asin(mass/math.Sqrt(energy*energy-momentum*momentum/4))
	request.OpeningAnglesRad = []float64{0, m.GetOpeningAngle().GetMinRad(), middle, math.Pi}
	if m, err = describeDecay(t, request); err != nil {
		t.Fatal(err)
	}
	at := m.GetOpeningAngles()
	if at[0].GetDensityPerRad() != 0 || at[0].GetFractionBelow() != 0 || at[1].DensityPerRad != nil || at[3].GetFractionBelow() != 1 {
		t.Errorf("%v", at)
	}
	if !near(at[2].GetFractionBelow(), 0.5, 1e-12) || at[2].GetDensityPerRad() <= 0 {
		t.Errorf("middle: %v", at[2])
	}
}

// TestDecayPairs checks energy and momentum of both daughters for directions in either
// frame, and a forbidden angle.
func TestDecayPairs(t *testing.T) {
	m, err := describeDecay(t, &kinegatev1.DescribeDecayRequest{
		Form: &kinegatev1.DescribeDecayRequest_Decay{Decay: "Lambda -> p pi-"}, Parent: total(3), RestFrameCosines: []float64{-1, 0.3, 1}, LaboratoryAnglesRad: []float64{0.02, 1},
	})
	if err != nil {
		t.Fatal(err)
	}
	if !m.GetDaughters()[0].GetDoubleValued() || len(m.GetLaboratorySolutions()[0].GetPairs()) != 2 || len(m.GetLaboratorySolutions()[1].GetPairs()) != 0 {
		t.Errorf("%v", m.GetLaboratorySolutions())
	}
	for _, pair := range slices.Concat(m.GetRestFramePairs(), m.GetLaboratorySolutions()[0].GetPairs()) {
		a, b := pair.GetDaughters()[0], pair.GetDaughters()[1]
		if sum := a.GetLaboratoryTotalEnergyGev() + b.GetLaboratoryTotalEnergyGev(); !near(sum, 3, 1e-14) {
			t.Errorf("energy %g", sum)
		}
		if opening := a.GetLaboratoryAngleRad() + b.GetLaboratoryAngleRad(); math.Abs(opening-pair.GetOpeningAngleRad()) > 1e-13 {
			t.Errorf("opening angle %g, want %g", pair.GetOpeningAngleRad(), opening)
		}
	}
}

// TestGranddaughters holds the photons of Sigma0 -> Lambda gamma, Lambda -> n pi0 and the
// box spectrum of the pi0 against the limits of both steps together.
func TestGranddaughters(t *testing.T) {
	m, err := describeDecay(t, &kinegatev1.DescribeDecayRequest{Form: &kinegatev1.DescribeDecayRequest_Decay{Decay: "Sigma0 -> Lambda gamma, Lambda -> p pi-"}, Parent: total(2)})
	if err != nil {
		t.Fatal(err)
	}
	if len(m.GetGranddaughters()) != 2 {
		t.Fatalf("%v", m.GetGranddaughters())
	}
	for _, g := range m.GetGranddaughters() {
		r := g.GetLimits().GetRestFrameEnergy()
		if g.GetParent() != "Lambda" || !near(g.GetRestFrameEnergyDensityPerGev()*(r.GetMaxGev()-r.GetMinGev()), 1, 1e-12) {
			t.Errorf("%v", g)
		}
	}
	// The proton and the pion share the energy of the Lambda, fixed in the Sigma0's frame.
	p, pi := m.GetGranddaughters()[0].GetLimits().GetRestFrameEnergy(), m.GetGranddaughters()[1].GetLimits().GetRestFrameEnergy()
	lambda := m.GetDaughters()[0].GetRestFrameEnergy().GetMaxGev()
	if !near(p.GetMaxGev()+pi.GetMinGev(), lambda, 1e-14) || !near(p.GetMinGev()+pi.GetMaxGev(), lambda, 1e-14) {
		t.Errorf("%v and %v do not share %g", p, pi, lambda)
	}
	three, err := describeDecay(t, &kinegatev1.DescribeDecayRequest{Form: &kinegatev1.DescribeDecayRequest_Decay{Decay: "eta -> pi0 pi0 pi0, pi0 -> gamma gamma"}})
	if err != nil || len(three.GetGranddaughters()) != 6 || three.GetGranddaughters()[0].RestFrameEnergyDensityPerGev != nil {
		t.Errorf("%v, %v", three.GetGranddaughters(), err)
	}
	wide, err := describeDecay(t, &kinegatev1.DescribeDecayRequest{Form: &kinegatev1.DescribeDecayRequest_Decay{Decay: "omega -> rho0 pi0, rho0 -> pi+ pi-"}})
	if err != nil || wide.GetState() != kinegatev1.ChannelState_CHANNEL_STATE_OPEN_THROUGH_WIDTH ||
		wide.GetLimitMasses() != kinegatev1.LimitMasses_LIMIT_MASSES_LIGHTEST || len(wide.GetDaughters()) != 2 {
		t.Errorf("%v, %v", wide, err)
	}
}

func TestDecayAtRestAndStretches(t *testing.T) {
	end := 0.1
	m, err := describeDecay(t, &kinegatev1.DescribeDecayRequest{
		Form: &kinegatev1.DescribeDecayRequest_Decay{Decay: "K0_S -> pi+ pi-"}, Intervals: []*kinegatev1.DistanceInterval{{FromM: 0, ToM: &end}, {FromM: 1}},
	})
	if err != nil || !slices.Equal(m.GetDecayingFractions(), []float64{1, 0}) || m.GetDaughters()[0].LaboratoryEnergyDensityPerGev != nil ||
		m.GetOpeningAngle().GetMinRad() != math.Pi {
		t.Errorf("at rest: %v, %v", m, err)
	}
	m, err = describeDecay(t, &kinegatev1.DescribeDecayRequest{
		Form: &kinegatev1.DescribeDecayRequest_Decay{Decay: "K0_S -> pi+ pi-"}, Parent: total(2), DistancesM: []float64{0.05, 0.1},
		Intervals: []*kinegatev1.DistanceInterval{{FromM: 0.05, ToM: &end}, {FromM: 0}},
	})
	if err != nil {
		t.Fatal(err)
	}
	s, f := m.GetSurvivingFractions(), m.GetDecayingFractions()
	if !near(f[0], s[0]-s[1], 1e-12) || f[1] != 1 {
		t.Errorf("surviving %v, decaying %v", s, f)
	}
	structured, err := describeDecay(t, &kinegatev1.DescribeDecayRequest{Form: &kinegatev1.DescribeDecayRequest_StructuredDecay{StructuredDecay: &kinegatev1.Reaction{
		Initial: []string{"eta"}, Products: []*kinegatev1.Product{
			{Particle: "pi0", Daughters: []*kinegatev1.Product{{Particle: "gamma"}, {Particle: "gamma"}}}, {Particle: "pi0"}, {Particle: "pi0"},
		},
	}}})
	if err != nil || len(structured.GetGranddaughters()) != 2 {
		t.Errorf("structured: %v, %v", structured, err)
	}
}

func TestDescribeDecayRefusesLists(t *testing.T) {
	type request = kinegatev1.DescribeDecayRequest
	end := 0.1
	cases := []struct {
		name    string
		request *request
		field   string
	}{
		{"no form", &request{}, "decay"},
		{"structured typo", &request{Form: &kinegatev1.DescribeDecayRequest_StructuredDecay{StructuredDecay: &kinegatev1.Reaction{Initial: []string{"Lamda"}}}}, "structured_decay.initial[0]"},
		{"opening angle of no photons", &request{Form: &kinegatev1.DescribeDecayRequest_Decay{Decay: "Lambda -> p pi-"}, OpeningAnglesRad: []float64{1}}, "opening_angles_rad"},
		{"opening angle", &request{Form: &kinegatev1.DescribeDecayRequest_Decay{Decay: "pi0 -> gamma gamma"}, OpeningAnglesRad: []float64{1, 4}}, "opening_angles_rad[1]"},
		{"opening angles", &request{Form: &kinegatev1.DescribeDecayRequest_Decay{Decay: "pi0 -> gamma gamma"}, OpeningAnglesRad: make([]float64, 1001)}, "opening_angles_rad"},
		{"cosine of three", &request{Form: &kinegatev1.DescribeDecayRequest_Decay{Decay: "eta -> pi0 pi0 pi0"}, RestFrameCosines: []float64{1}}, "rest_frame_cosines"},
		{"cosine", &request{Form: &kinegatev1.DescribeDecayRequest_Decay{Decay: "Lambda -> p pi-"}, RestFrameCosines: []float64{math.NaN()}}, "rest_frame_cosines[0]"},
		{"angle of three", &request{Form: &kinegatev1.DescribeDecayRequest_Decay{Decay: "eta -> pi0 pi0 pi0"}, LaboratoryAnglesRad: []float64{1}}, "laboratory_angles_rad"},
		{"angle", &request{Form: &kinegatev1.DescribeDecayRequest_Decay{Decay: "Lambda -> p pi-"}, LaboratoryAnglesRad: []float64{-1}}, "laboratory_angles_rad[0]"},
		{"stretch before the start", &request{Form: &kinegatev1.DescribeDecayRequest_Decay{Decay: "Lambda -> p pi-"}, Intervals: []*kinegatev1.DistanceInterval{{FromM: -1}}}, "intervals[0].from_m"},
		{"stretch backward", &request{Form: &kinegatev1.DescribeDecayRequest_Decay{Decay: "Lambda -> p pi-"}, Intervals: []*kinegatev1.DistanceInterval{{}, {FromM: 1, ToM: &end}}}, "intervals[1].to_m"},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			_, err := describeDecay(t, c.request)
			if m := refused(t, err, FieldInvalid); m["field"] != c.field {
				t.Errorf("field %q, want %q: %v", m["field"], c.field, err)
			}
		})
	}
}
