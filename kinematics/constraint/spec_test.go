package constraint_test

import (
	"math"
	"strings"
	"testing"

	"example.org/kinegate/kinematics/constraint"
	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/num/random"
)

// Each fault of a specification is found by the field's name.
func TestCompileRefuses(t *testing.T) {
	good := func() *constraint.Spec { return &toys()[7].spec }
	if _, err := constraint.Compile(good()); err != nil {
		t.Fatal(err)
	}
	for field, spoil := range map[string]func(s *constraint.Spec){
		"objects.length":        func(s *constraint.Spec) { s.Objects = nil },
		"masses.length":         func(s *constraint.Spec) { s.Masses = make([]constraint.Mass, constraint.MaxMasses+1) },
		"conserved":             func(s *constraint.Spec) { s.Conserved = 16 },
		"vertex":                func(s *constraint.Spec) { s.Vertex = 3 },
		"known":                 func(s *constraint.Spec) { s.Known.E = math.NaN() },
		"objects[0].form":       func(s *constraint.Spec) { s.Objects[0].Form = 0 },
		"objects[1].measured":   func(s *constraint.Spec) { s.Objects[1].Measured = 8 },
		"objects[5].measured":   func(s *constraint.Spec) { s.Objects[5].Measured = event.AllMeasured },
		"objects[5].along":      func(s *constraint.Spec) { s.Objects[5].Along = momentum.Three{} },
		"objects[5].repointed":  func(s *constraint.Spec) { s.Objects[5].Repointed = true },
		"objects[4].mass_gev":   func(s *constraint.Spec) { s.Objects[4].MassGeV = -1 },
		"masses[0].objects":     func(s *constraint.Spec) { s.Masses[0].Objects = []int{0, 99} },
		"masses[1].as.length":   func(s *constraint.Spec) { s.Masses[1].As = []int{} },
		"masses[1].mass_gev":    func(s *constraint.Spec) { s.Masses[1].GeV = math.Inf(1) },
		"degrees_of_freedom":    func(s *constraint.Spec) { s.Conserved, s.Masses = 0, nil },
		"masses[0].objects ":    func(s *constraint.Spec) { s.Masses[0].Objects = []int{1, 1} },
		"masses[0].objects  -1": func(s *constraint.Spec) { s.Masses[0].Objects = []int{-1} },
	} {
		t.Run(field, func(t *testing.T) {
			s := good()
			spoil(s)
			_, err := constraint.Compile(s)
			if kind, ok := fault.KindOf(err); !ok || kind != fault.Invalid {
				t.Fatalf("got %v", err)
			}
			if name, _, _ := strings.Cut(field, " "); !strings.Contains(err.Error(), name) {
				t.Errorf("%q does not name %s", err, name)
			}
		})
	}
}

// Two spellings of one problem have the same answer: the mass of a missing particle as
// its own mass, or as that of a particle of unknown mass with a mass constraint; and a
// mass of two sets against the mass of each.
func TestEquivalentProblems(t *testing.T) {
	y := toys()[2]
	y.spread = 1
	first := fitter(t, &y.spec)
	other := y.spec
	other.Objects = append([]constraint.Object(nil), y.spec.Objects...)
	other.Objects[4] = constraint.Object{Form: constraint.MissingMass}
	other.Masses = append(pairs(2), constraint.Mass{Objects: []int{4}, GeV: proton})
	other.Masses[1] = constraint.Mass{Objects: []int{2, 3}, As: []int{0, 1}}
	second := fitter(t, &other)
	worst := 0.0
	for i := range 300 {
		s := random.New(3, random.Generation, int64(i))
		y.event(first, &s)
		copy(second.Measurements, first.Measurements)
		a, b := first.Fit(), second.Fit()
		if a.Status != constraint.Converged || b.Status != constraint.Converged || a.DegreesOfFreedom != b.DegreesOfFreedom {
			t.Fatalf("event %d: %+v and %+v", i, a, b)
		}
		worst = max(worst, math.Abs(a.ChiSquare-b.ChiSquare)/max(1, a.ChiSquare))
	}
	if worst > 1e-8 {
		t.Errorf("chi-squares differ by %g", worst)
	}
	t.Logf("chi-squares agree within %.2g", worst)
}

// Without a degree of freedom the unmeasured parameters follow from the constraints, and
// what is measured stays.
func TestNoDegreeOfFreedom(t *testing.T) {
	spec := &constraint.Spec{
		Objects:   []constraint.Object{object(0), beamAlong(1, event.FirstMeasured), {Form: constraint.MissingMass}},
		Known:     momentum.Four{E: proton},
		Conserved: constraint.AllComponents,
	}
	f := fitter(t, spec)
	f.Measurements[0] = constraint.Measurement{
		Kind: event.MomentumMass, Values: [3]float64{0.1, 0.2, 1}, Covariance: [6]float64{0.01, 0, 0, 0.01, 0, 0.02},
	}
	f.Measurements[1] = constraint.Beam(2, 0.01, 0)
	r := f.Fit()
	if r.Status != constraint.Converged || r.ChiSquare > 1e-18 || !math.IsNaN(r.Probability) {
		t.Fatalf("%+v", r)
	}
	got := f.Momentum(2)
	want := momentum.Four{P: momentum.Three{X: -0.1, Y: -0.2, Z: 1}, E: 2 + proton - math.Sqrt(1.05)}
	if d := got.Sub(want); math.Abs(d.E)+d.P.Norm() > 1e-14 {
		t.Errorf("missing momentum %v, want %v", got, want)
	}
	c := f.MomentumCovariance(2, 2)
	if math.Abs(c[0][0]-0.01) > 1e-12 || math.Abs(c[2][2]-(0.02+0.0001)) > 1e-12 {
		t.Errorf("covariance %v", c)
	}
}

// Residuals before and after, by name.
func TestResiduals(t *testing.T) {
	y := toys()[1]
	y.spread = 1
	p, err := constraint.Compile(&y.spec)
	if err != nil {
		t.Fatal(err)
	}
	f := p.NewFitter()
	s := random.New(3, random.Generation, 0)
	y.event(f, &s)
	if r := f.Fit(); r.Status != constraint.Converged {
		t.Fatalf("%+v", r)
	}
	var names []string
	for k := range p.Constraints() {
		names = append(names, p.ConstraintName(k))
		r := f.Residual(k)
		if math.Abs(r.After) > 1e-9 || math.Abs(r.Before) < 1e-6 {
			t.Errorf("%s: %+v", p.ConstraintName(k), r)
		}
	}
	if got := strings.Join(names, " "); got != "px py pz energy mass[0] mass[1]" {
		t.Error(got)
	}
	var sum momentum.Four
	for i := range 5 {
		m := &f.Measurements[i]
		sum = sum.Add(momentum.WithMass(momentum.FromAngles(m.Values[0], m.Values[1], m.Values[2]), m.MassGeV))
	}
	beam := f.Measurements[5].Values[0]
	if got, want := f.Residual(2).Before, sum.P.Z-beam; math.Abs(got-want) > 1e-14 {
		t.Errorf("pz before %g, want %g", got, want)
	}
	if got, want := f.Residual(3).Before, sum.E-beam-proton; math.Abs(got-want) > 1e-14 {
		t.Errorf("energy before %g, want %g", got, want)
	}
}
