package constraint_test

import (
	"math"
	"testing"

	"example.org/kinegate/kinematics/constraint"
	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/num/random"
)

// An angle that the fit carries past +-pi or past a pole goes on from the measured value and
// is folded when reported.
func TestAnglesAreFolded(t *testing.T) {
	spec := &constraint.Spec{
		Objects: photons(2), Masses: []constraint.Mass{{Objects: []int{0, 1}, GeV: 0.2}},
	}
	for name, c := range map[string]struct {
		first, second [3]float64
		folded        int
	}{
		"phi":   {[3]float64{1, math.Pi / 2, math.Pi - 0.001}, [3]float64{1, math.Pi / 2, math.Pi - 0.19}, 2},
		"theta": {[3]float64{1, 0.001, 1}, [3]float64{1, 0.19, 1}, 1},
	} {
		t.Run(name, func(t *testing.T) {
			f := fitter(t, spec)
			for i, v := range [][3]float64{c.first, c.second} {
				f.Measurements[i] = constraint.Measurement{
					Kind: event.MomentumAngles, Values: v, Covariance: [6]float64{0, 0, 0, 1e-4, 0, 1e-4},
				}
			}
			if r := f.Fit(); r.Status != constraint.Converged {
				t.Fatalf("%+v", r)
			}
			free, folded := f.Unfolded(0), f.Parameters(0)
			if free == folded {
				t.Fatalf("nothing to fold: %v", free)
			}
			if !(folded[1] >= 0 && folded[1] <= math.Pi && folded[2] > -math.Pi && folded[2] <= math.Pi) {
				t.Errorf("folded to %v", folded)
			}
			a, b := momentum.FromAngles(free[0], free[1], free[2]), momentum.FromAngles(folded[0], folded[1], folded[2])
			if d := a.Sub(b).Norm(); d > 1e-15 {
				t.Errorf("%v and %v differ by %g", free, folded, d)
			}
			if m := momentum.MassSquared(f.Momentum(0), f.Momentum(1)); math.Abs(m-0.04) > 1e-12 {
				t.Errorf("mass squared %g", m)
			}
		})
	}
}

// Twelve photons into six pi0 converge in the time of one fit.
func TestTwelvePhotons(t *testing.T) {
	spec := &constraint.Spec{
		Objects: append(photons(12), beamAlong(1, event.FirstMeasured), constraint.Object{Form: constraint.Missing, MassGeV: proton}),
		Known:   momentum.Four{E: proton}, Conserved: constraint.AllComponents, Masses: pairs(6),
	}
	y := toy{spec: *spec, spread: 1}
	y.truth = func(s *random.Stream) []momentum.Four {
		b, total, w := collision(6)
		var out []momentum.Four
		rest, mass := total, w
		for k := range 6 {
			// A chain of two-body decays: pi0 and a lighter rest, the proton last.
			next := proton + float64(float64(5-k)*pion)
			m := next + float64((mass-next-pion)*0.6)
			if k == 5 {
				m = proton
			}
			var pi momentum.Four
			pi, rest = decayed(s, rest, mass, pion, m)
			g1, g2 := decayed(s, pi, pion, 0, 0)
			out = append(out, g1, g2)
			mass = m
		}
		return append(out, b, rest)
	}
	f := fitter(t, spec)
	steps := 0
	for i := range 200 {
		s := random.New(8, random.Generation, int64(i))
		y.event(f, &s)
		r := f.Fit()
		if r.Status != constraint.Converged || r.DegreesOfFreedom != 7 {
			t.Fatalf("event %d: %+v", i, r)
		}
		steps = max(steps, r.Iterations)
	}
	t.Logf("200 events, at most %d steps", steps)
}

// A variance of zero keeps a parameter where it is; a correlation of one keeps two of them
// on a line; one that no covariance has is refused.
func TestDegenerateCovariances(t *testing.T) {
	spec := &constraint.Spec{
		Objects: photons(2), Masses: []constraint.Mass{{Objects: []int{0, 1}, GeV: pion}},
	}
	fit := func(covariance [6]float64) (*constraint.Fitter, constraint.Result) {
		f := fitter(t, spec)
		for i, phi := range []float64{0, 0.3} {
			f.Measurements[i] = constraint.Measurement{
				Kind: event.MomentumAngles, Values: [3]float64{0.5, 1.2, phi}, Covariance: covariance,
			}
		}
		return f, f.Fit()
	}
	f, r := fit([6]float64{0.0025, 0, 0, 0, 0, 1e-5})
	if got := f.Parameters(0); r.Status != constraint.Converged || got[1] != 1.2 || got[0] == 0.5 {
		t.Errorf("%+v at %v", r, got)
	}
	if pull := f.Pull(0, 1); !math.IsNaN(pull) {
		t.Errorf("a parameter that is known exactly has the pull %g", pull)
	}
	f, r = fit([6]float64{0.0025, 0, 0.05 * 0.003, 1e-5, 0, 0.003 * 0.003})
	got := f.Parameters(0)
	if r.Status != constraint.Converged || math.Abs((got[0]-0.5)/0.05-got[2]/0.003) > 1e-9 {
		t.Errorf("%+v at %v: off the line", r, got)
	}
	nan := math.NaN()
	for name, covariance := range map[string][6]float64{
		"no covariance":    {0.0025, 0, 0.0005, 1e-5, 0, 1e-5},
		"negative":         {-1, 0, 0, 1, 0, 1},
		"not a number":     {1, nan, 0, 1, 0, 1},
		"infinite":         {math.Inf(1), 0, 0, 1, 0, 1},
		"known, yet mixed": {0, 0.1, 0, 1, 0, 1},
	} {
		if _, r := fit(covariance); r.Status != constraint.Singular || !math.IsNaN(r.ChiSquare) {
			t.Errorf("%s: %+v", name, r)
		}
	}
	if _, r := fit([6]float64{}); r.Status != constraint.Infeasible {
		t.Errorf("nothing can move: %+v", r)
	}
}

// Constraints that repeat each other are called singular, and those that contradict each
// other infeasible.
func TestDependentConstraints(t *testing.T) {
	y := toys()[1]
	y.spread = 1
	for name, c := range map[string]struct {
		mass float64
		want constraint.Status
	}{"repeated": {pion, constraint.Singular}, "contradicted": {0.2, constraint.Infeasible}} {
		t.Run(name, func(t *testing.T) {
			spec := y.spec
			spec.Masses = append(pairs(2), constraint.Mass{Objects: []int{0, 1}, GeV: c.mass})
			f := fitter(t, &spec)
			for i := range 20 {
				s := random.New(8, random.Generation, int64(i))
				y.event(f, &s)
				if r := f.Fit(); r.Status != c.want {
					t.Fatalf("event %d: %+v, want %v", i, r, c.want)
				}
			}
		})
	}
}

// Fits and what is asked of them allocate nothing.
func TestNoAllocation(t *testing.T) {
	for _, y := range toys() {
		t.Run(y.name, func(t *testing.T) {
			y.spread = 1
			f := fitter(t, &y.spec)
			s := random.New(8, random.Generation, 1)
			y.event(f, &s)
			sum := 0.0
			allocations := testing.AllocsPerRun(20, func() {
				sum += f.Fit().ChiSquare + f.Pull(0, 0) + f.MomentumCovariance(0, 1)[0][0] +
					f.ParameterCovariance(0)[0] + f.Parameters(0)[0] + f.Residual(0).Before
			})
			if allocations > 0 {
				t.Errorf("%g allocations", allocations)
			}
		})
	}
}

// FuzzFit holds that any measurement ends in a status, and that a fit that says it
// converged has finite results with the constraints met.
func FuzzFit(f *testing.F) {
	f.Add(uint8(0), 0.5, 1.0, 0.3, 0.01, 0.0, 0.0, 1e-5, 0.0, 1e-5, 0.1)
	f.Add(uint8(7), 0.5, 0.0, 0.3, 0.01, 0.0, 0.0, 1e-5, 0.0, 1e-5, 0.1)
	f.Add(uint8(19), 0.5, math.Pi, -math.Pi, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0)
	f.Add(uint8(35), 1e-300, 1e300, math.NaN(), math.Inf(1), 1.0, -1.0, 1e-300, 1e300, 1.0, -0.1)
	f.Add(uint8(28), 1.0, 1.0, 1.0, 1.0, 1.0, 1.0, 1.0, 1.0, 1.0, 1.0)
	all := toys()
	f.Fuzz(func(t *testing.T, which uint8, a, b, c, aa, ab, ac, bb, bc, cc, mass float64) {
		y := &all[int(which)%len(all)]
		y.spread = 1
		fit := fitter(t, &y.spec)
		s := random.New(8, random.Generation, int64(which))
		y.event(fit, &s)
		m := &fit.Measurements[0]
		m.Kind = event.Kind(which / 8 % 6)
		m.Values = [3]float64{a, b, c}
		m.Covariance = [6]float64{aa, ab, ac, bb, bc, cc}
		if which >= 128 {
			m.MassGeV = mass
		}
		r := fit.Fit()
		if !r.Status.Valid() {
			t.Fatalf("%+v", r)
		}
		if r.Status != constraint.Converged {
			return
		}
		if !(r.ChiSquare >= 0) || !(r.Probability >= 0 && r.Probability <= 1) ||
			!(r.Stationarity <= constraint.Bound) || !(r.Violation <= constraint.Bound) {
			t.Errorf("%+v", r)
		}
		for i := range y.spec.Objects {
			p := fit.Momentum(i)
			if !(math.Abs(p.E)+p.P.Norm() < math.Inf(1)) {
				t.Errorf("object %d at %v", i, p)
			}
			fit.MomentumCovariance(i, 0)
			fit.Pull(i, 0)
		}
	})
}
