package api

import (
	"context"
	"math"
	"strings"
	"testing"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

func twoBody(t *testing.T, request *kinegatev1.SolveTwoBodyRequest) (*kinegatev1.SolveTwoBodyResponse, error) {
	t.Helper()
	return (&reactionService{table: newTestTable(t)}).SolveTwoBody(t.Context(), request)
}

// solve is twoBody for a reaction in text that must be answered.
func solve(
	t *testing.T, text string, in *kinegatev1.InitialState, change func(*kinegatev1.SolveTwoBodyRequest),
) *kinegatev1.SolveTwoBodyResponse {
	t.Helper()
	request := &kinegatev1.SolveTwoBodyRequest{Form: &kinegatev1.SolveTwoBodyRequest_Reaction{Reaction: text}, InitialState: in}
	change(request)
	m, err := twoBody(t, request)
	if err != nil {
		t.Fatal(err)
	}
	return m
}

func atSqrtS(w float64) *kinegatev1.InitialState {
	return &kinegatev1.InitialState{Kind: &kinegatev1.InitialState_SqrtSGev{SqrtSGev: w}}
}

func near(got, want, relative float64) bool { return math.Abs(got-want) <= relative*math.Abs(want) }

// TestTwoBodyConserves checks energy and momentum of every branch, both ratios of solid
// angles and t + u, which is the sum of the masses squared less s.
func TestTwoBodyConserves(t *testing.T) {
	const energy, proton = 1.5, 0.93827208943
	m := solve(t, "gamma p -> K+ Lambda", onTarget(energy), func(r *kinegatev1.SolveTwoBodyRequest) {
		r.Product, r.LaboratoryAnglesRad = "Lambda", []float64{0, 0.1, 0.2, 0.3}
	})
	if m.GetState() != kinegatev1.ChannelState_CHANNEL_STATE_OPEN || !m.GetProducts()[1].GetDoubleValued() {
		t.Fatalf("%v", m)
	}
	masses := 0.0
	for _, p := range m.GetProducts() {
		masses += p.GetLimits().GetMassGev() * p.GetLimits().GetMassGev()
	}
	branches := 0
	for i, s := range m.GetSolutions() {
		for _, b := range s.GetBranches() {
			branches++
			k, l := b.GetProducts()[0], b.GetProducts()[1]
			sum := k.GetLaboratoryTotalEnergyGev() + l.GetLaboratoryTotalEnergyGev()
			along := k.GetLaboratoryMomentumGev()*math.Cos(k.GetLaboratoryAngleRad()) + l.GetLaboratoryMomentumGev()*math.Cos(l.GetLaboratoryAngleRad())
			across := k.GetLaboratoryMomentumGev()*math.Sin(k.GetLaboratoryAngleRad()) - l.GetLaboratoryMomentumGev()*math.Sin(l.GetLaboratoryAngleRad())
			if !near(sum, m.GetCentreOfMass().GetTotal().GetEnergyGev(), 1e-14) || !near(along, energy, 1e-14) || math.Abs(across) > 1e-14 {
				t.Errorf("value %d: energy %g, momentum %g along and %g across", i, sum, along, across)
			}
			if !near(b.GetTGev2()+b.GetUGev2(), masses+proton*proton-m.GetCentreOfMass().GetSGev2(), 1e-12) {
				t.Errorf("value %d: t + u = %g", i, b.GetTGev2()+b.GetUGev2())
			}
			for _, p := range b.GetProducts() {
				if product := p.GetCentreOfMassPerLaboratory() * p.GetLaboratoryPerCentreOfMass(); !near(product, 1, 1e-14) {
					t.Errorf("value %d: the ratios of solid angles have the product %g", i, product)
				}
			}
		}
	}
	if branches != 8 {
		t.Errorf("%d branches for 4 angles below the largest, %g", branches, m.GetProducts()[1].GetMaxLaboratoryAngleRad())
	}
}

// TestTwoBodyForbiddenAngle asks at the largest angle, below and beyond it.
func TestTwoBodyForbiddenAngle(t *testing.T) {
	const text = "gamma p -> K+ Lambda"
	largest := solve(t, text, onTarget(1.2), func(*kinegatev1.SolveTwoBodyRequest) {}).GetProducts()[1].GetMaxLaboratoryAngleRad()
	m := solve(t, text, onTarget(1.2), func(r *kinegatev1.SolveTwoBodyRequest) {
		r.Product = "Lambda"
		r.LaboratoryAnglesRad = []float64{largest * (1 - 1e-9), largest, largest * (1 + 1e-9), math.Pi}
	})
	for i, want := range []int{2, 1, 0, 0} {
		if got := len(m.GetSolutions()[i].GetBranches()); got != want {
			t.Errorf("value %d: %d branches, want %d", i, got, want)
		}
	}
	if edge := m.GetSolutions()[1].GetBranches()[0].GetProducts()[1]; edge.GetLaboratoryPerCentreOfMass() > 1e-12 {
		t.Errorf("at the largest angle: %v", edge)
	}
}

// TestTwoBodyMassless holds Compton scattering against A. H. Compton, Phys. Rev. 21 (1923)
// 483: E' = E/(1 + (E/m)(1 - cos)).
func TestTwoBodyMassless(t *testing.T) {
	const energy = 1.5e-3
	angles := []float64{0, 0.01, 1, math.Pi / 2, 3, math.Pi}
	m := solve(t, "gamma e- -> gamma e-", onTarget(energy), func(r *kinegatev1.SolveTwoBodyRequest) { r.LaboratoryAnglesRad = angles })
	electron := m.GetProducts()[1].GetLimits().GetMassGev()
	for i, angle := range angles {
		want := energy / (1 + energy/electron*2*math.Pow(math.Sin(angle/2), 2))
		branches := m.GetSolutions()[i].GetBranches()
		if len(branches) != 1 || !near(branches[0].GetProducts()[0].GetLaboratoryTotalEnergyGev(), want, 1e-14) {
			t.Errorf("angle %g: %v, want %g", angle, branches, want)
		}
	}
}

// TestTwoBodyElastic holds equal and inverse masses against relations of textbooks, from
// memory: tan(theta1) tan(theta2) = 2/(gamma+1), and sin(largest) = m(target)/m(beam).
func TestTwoBodyElastic(t *testing.T) {
	m := solve(t, "p p -> p p", onTarget(2), func(r *kinegatev1.SolveTwoBodyRequest) {
		r.Product, r.CentreOfMassAnglesRad = "p[1]", []float64{0.2, 1, math.Pi / 2, 3}
	})
	mass := m.GetProducts()[0].GetLimits().GetMassGev()
	for i, s := range m.GetSolutions() {
		a, b := s.GetBranches()[0].GetProducts()[0], s.GetBranches()[0].GetProducts()[1]
		if got := math.Tan(a.GetLaboratoryAngleRad()) * math.Tan(b.GetLaboratoryAngleRad()); !near(got, 2/(2/mass+1), 1e-13) {
			t.Errorf("value %d: %g", i, got)
		}
	}
	if largest := m.GetProducts()[0].GetMaxLaboratoryAngleRad(); largest != math.Pi/2 {
		t.Errorf("equal masses: largest angle %g", largest)
	}
	inverse := solve(t, "He4 p -> He4 p", onTarget(5), func(*kinegatev1.SolveTwoBodyRequest) {})
	heavy := inverse.GetProducts()[0]
	if want := math.Asin(mass / heavy.GetLimits().GetMassGev()); !near(heavy.GetMaxLaboratoryAngleRad(), want, 1e-14) || !heavy.GetDoubleValued() {
		t.Errorf("inverse masses: %v, want %g", heavy, want)
	}
}

func TestTwoBodyByEveryVariable(t *testing.T) {
	m := solve(t, "gamma p -> p eta", onTarget(1), func(r *kinegatev1.SolveTwoBodyRequest) { r.CentreOfMassCosines = []float64{-0.25} })
	b := m.GetSolutions()[0].GetBranches()[0]
	p := b.GetProducts()[0]
	for name, change := range map[string]func(*kinegatev1.SolveTwoBodyRequest){
		"laboratory angle": func(r *kinegatev1.SolveTwoBodyRequest) { r.LaboratoryAnglesRad = []float64{p.GetLaboratoryAngleRad()} },
		"centre-of-mass angle": func(r *kinegatev1.SolveTwoBodyRequest) {
			r.CentreOfMassAnglesRad = []float64{p.GetCentreOfMassAngleRad()}
		},
		"total energy": func(r *kinegatev1.SolveTwoBodyRequest) {
			r.LaboratoryTotalEnergiesGev = []float64{p.GetLaboratoryTotalEnergyGev()}
		},
		"kinetic energy": func(r *kinegatev1.SolveTwoBodyRequest) {
			r.LaboratoryKineticEnergiesGev = []float64{p.GetLaboratoryKineticEnergyGev()}
		},
		"momentum": func(r *kinegatev1.SolveTwoBodyRequest) {
			r.LaboratoryMomentaGev = []float64{p.GetLaboratoryMomentumGev()}
		},
		"t":       func(r *kinegatev1.SolveTwoBodyRequest) { r.TValuesGev2 = []float64{b.GetTGev2()} },
		"t prime": func(r *kinegatev1.SolveTwoBodyRequest) { r.TPrimeValuesGev2 = []float64{b.GetTPrimeGev2()} },
	} {
		t.Run(name, func(t *testing.T) {
			m := solve(t, "gamma p -> p eta", onTarget(1), change)
			found := false
			for _, branch := range m.GetSolutions()[0].GetBranches() {
				found = found || near(branch.GetProducts()[0].GetCentreOfMassCosine(), -0.25, 1e-13)
			}
			if !found {
				t.Errorf("%v", m.GetSolutions())
			}
		})
	}
}

func TestTwoBodyWithoutSolutions(t *testing.T) {
	angles := func(r *kinegatev1.SolveTwoBodyRequest) { r.CentreOfMassAnglesRad = []float64{1} }
	closed := solve(t, "gamma p -> K+ Lambda", onTarget(0.9), angles)
	if closed.GetState() != kinegatev1.ChannelState_CHANNEL_STATE_CLOSED || closed.GetExcessEnergyGev() >= 0 ||
		!near(closed.GetBeamEnergyDeficitGev(), 0.0111, 0.02) || len(closed.GetSolutions())+len(closed.GetProducts()) != 0 {
		t.Errorf("closed: %v", closed)
	}
	zero := 0.0
	parallel := solve(t, "gamma gamma -> e+ e-", beams(1, 1, &zero), angles)
	if parallel.GetState() != kinegatev1.ChannelState_CHANNEL_STATE_CLOSED || parallel.GetCentreOfMass() != nil {
		t.Errorf("parallel photons: %v", parallel)
	}
	one := 1.0
	crossing := solve(t, "gamma gamma -> e+ e-", beams(1, 1, &one), angles)
	if p := crossing.GetSolutions()[0].GetBranches()[0].GetProducts()[0]; p.LaboratoryAngleRad != nil || p.GetCentreOfMassMomentumGev() <= 0 {
		t.Errorf("crossing beams: %v", p)
	}
	rest := solve(t, "e+ e- -> mu+ mu-", atSqrtS(1), func(r *kinegatev1.SolveTwoBodyRequest) { r.LaboratoryAnglesRad = []float64{0.5} })
	if p := rest.GetSolutions()[0].GetBranches()[0].GetProducts()[0]; !near(p.GetCentreOfMassAngleRad(), 0.5, 1e-15) {
		t.Errorf("centre of mass at rest: %v", p)
	}
}

func TestSolveTwoBodyRefuses(t *testing.T) {
	form := func(text string) *kinegatev1.SolveTwoBodyRequest {
		return &kinegatev1.SolveTwoBodyRequest{Form: &kinegatev1.SolveTwoBodyRequest_Reaction{Reaction: text}, InitialState: onTarget(1.5)}
	}
	with := func(change func(*kinegatev1.SolveTwoBodyRequest)) *kinegatev1.SolveTwoBodyRequest {
		r := form("gamma p -> K+ Lambda, Lambda -> p pi-")
		change(r)
		return r
	}
	angles := make([]float64, 100)
	angles[99] = math.NaN()
	one := 1.0
	cases := []struct {
		name    string
		request *kinegatev1.SolveTwoBodyRequest
		reason  Reason
		field   string
	}{
		{"no form", &kinegatev1.SolveTwoBodyRequest{}, FieldInvalid, "form"},
		{"typo", form("gamma p -> K+ Lamda"), FieldInvalid, "reaction"},
		{"three products", form("gamma p -> p pi+ pi-"), FieldInvalid, "reaction"},
		{"inclusive", form("gamma p -> K+ Lambda X"), FieldInvalid, "reaction"},
		{"decay", form("Lambda -> p pi-"), FieldInvalid, "reaction"},
		{"no state", with(func(r *kinegatev1.SolveTwoBodyRequest) { r.InitialState = nil }), FieldInvalid, "initial_state"},
		{"negative beam", with(func(r *kinegatev1.SolveTwoBodyRequest) { r.InitialState = onTarget(-1) }),
			FieldInvalid, "initial_state.beam_on_target.beam.total_energy_gev"},
		{"unknown product", with(func(r *kinegatev1.SolveTwoBodyRequest) { r.Product = "eta" }), FieldInvalid, "product"},
		{"product of a decay", with(func(r *kinegatev1.SolveTwoBodyRequest) { r.Product = "p" }), FieldInvalid, "product"},
		{"not a number", with(func(r *kinegatev1.SolveTwoBodyRequest) { r.LaboratoryAnglesRad = angles }), FieldInvalid, "laboratory_angles_rad[99]"},
		{"angle", with(func(r *kinegatev1.SolveTwoBodyRequest) { r.CentreOfMassAnglesRad = []float64{1, 4} }), FieldInvalid, "centre_of_mass_angles_rad[1]"},
		{"cosine", with(func(r *kinegatev1.SolveTwoBodyRequest) { r.CentreOfMassCosines = []float64{1.1} }), FieldInvalid, "centre_of_mass_cosines[0]"},
		{"two lists", with(func(r *kinegatev1.SolveTwoBodyRequest) {
			r.CentreOfMassCosines, r.TValuesGev2 = []float64{1}, []float64{1}
		}),
			FieldInvalid, "t_values_gev2"},
		{"too many", with(func(r *kinegatev1.SolveTwoBodyRequest) { r.TValuesGev2 = make([]float64, 4001) }), FieldInvalid, "t_values_gev2"},
		{"energy without a boost", with(func(r *kinegatev1.SolveTwoBodyRequest) {
			r.InitialState, r.LaboratoryTotalEnergiesGev = atSqrtS(2), []float64{1}
		}), Unsupported, "laboratory_total_energies_gev"},
		{"laboratory angle of crossing beams", &kinegatev1.SolveTwoBodyRequest{
			Form:         &kinegatev1.SolveTwoBodyRequest_Reaction{Reaction: "gamma gamma -> e+ e-"},
			InitialState: beams(1, 1, &one), LaboratoryAnglesRad: []float64{1},
		}, Unsupported, "laboratory_angles_rad"},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			_, err := twoBody(t, c.request)
			if m := refused(t, err, c.reason); m["field"] != c.field {
				t.Errorf("field %q, want %q: %v", m["field"], c.field, err)
			}
		})
	}
	t.Run("cancelled", func(t *testing.T) {
		ctx, cancel := context.WithCancel(t.Context())
		cancel()
		request := with(func(r *kinegatev1.SolveTwoBodyRequest) { r.CentreOfMassAnglesRad = []float64{1} })
		_, err := (&reactionService{table: newTestTable(t)}).SolveTwoBody(ctx, request)
		if refused(t, err, CallCancelled); !strings.Contains(err.Error(), "cancel") {
			t.Errorf("%v", err)
		}
	})
}
