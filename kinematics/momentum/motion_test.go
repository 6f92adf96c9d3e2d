package momentum

import (
	"errors"
	"math"
	"math/big"
	"testing"

	"example.org/kinegate/kinematics/fault"
)

// TestMotionAgainstExact holds every field of every constructor to the exact relations.
func TestMotionAgainstExact(t *testing.T) {
	one := bigOf(1)
	constructors := []struct {
		name string
		// draw returns the motion with the exact mass, energy and momentum.
		draw func(s sampler) (got Motion, e, p *big.Float, err error)
	}{
		{"momentum", func(s sampler) (Motion, *big.Float, *big.Float, error) {
			m, p := s.mass(), s.magnitude(-12, 12)
			got, err := MotionFromMomentum(m, p)
			return got, bigEnergy(Three{Z: p}, m), bigOf(p), err
		}},
		{"kinetic", func(s sampler) (Motion, *big.Float, *big.Float, error) {
			m, kinetic := s.mass(), s.magnitude(-12, 12)
			got, err := MotionFromKinetic(m, kinetic)
			e := add(bigOf(m), bigOf(kinetic))
			return got, e, root(mul(bigOf(kinetic), add(e, bigOf(m)))), err
		}},
		{"total", func(s sampler) (Motion, *big.Float, *big.Float, error) {
			m := s.magnitude(-6, 3)
			e := math.Nextafter(m, math.Inf(1)) * (1 + s.magnitude(-15, 9))
			got, err := MotionFromTotal(m, e)
			return got, bigOf(e), root(mul(sub(bigOf(e), bigOf(m)), add(bigOf(e), bigOf(m)))), err
		}},
		{"beta", func(s sampler) (Motion, *big.Float, *big.Float, error) {
			m, beta := s.magnitude(-6, 3), s.magnitude(-12, 0)
			if s.IntN(2) == 0 {
				beta = 1 - s.magnitude(-15.9, 0)
			}
			got, err := MotionFromBeta(m, beta)
			e := div(bigOf(m), root(sub(one, mul(bigOf(beta), bigOf(beta)))))
			return got, e, mul(e, bigOf(beta)), err
		}},
		{"gamma", func(s sampler) (Motion, *big.Float, *big.Float, error) {
			m, gamma := s.magnitude(-6, 3), 1+s.magnitude(-15, 9)
			got, err := MotionFromGamma(m, gamma)
			return got, mul(bigOf(m), bigOf(gamma)), mul(bigOf(m), root(sub(mul(bigOf(gamma), bigOf(gamma)), one))), err
		}},
	}
	for _, c := range constructors {
		t.Run(c.name, func(t *testing.T) {
			s, worst := newSampler(), 0.0
			for range 5000 {
				got, e, p, err := c.draw(s)
				if err != nil {
					t.Fatal(err)
				}
				m := bigOf(got.Mass)
				beta := div(p, e)
				fields := []struct {
					name string
					got  float64
					want *big.Float
				}{
					{"total", got.Total, e},
					{"momentum", got.Momentum, p},
					{"kinetic", got.Kinetic, sub(e, m)},
					{"beta", got.Beta, beta},
					{"1-beta", got.OneMinusBeta, sub(one, beta)},
				}
				if got.Mass > 0 {
					fields = append(fields, []struct {
						name string
						got  float64
						want *big.Float
					}{
						{"gamma", got.Gamma, div(e, m)},
						{"gamma-1", got.GammaMinusOne, div(sub(e, m), m)},
						{"beta gamma", got.BetaGamma, div(p, m)},
					}...)
				}
				for _, field := range fields {
					off := relative(field.got, withoutNoise(field.want))
					worst = math.Max(worst, off)
					if !(off <= closedForm) {
						t.Fatalf("%+v: %s: relative error %.3g", got, field.name, off)
					}
				}
			}
			t.Logf("worst relative error %.3g", worst)
		})
	}
}

func TestMotionOfPhoton(t *testing.T) {
	got, err := MotionFromMomentum(0, 2)
	if err != nil {
		t.Fatal(err)
	}
	inf := math.Inf(1)
	want := Motion{Total: 2, Kinetic: 2, Momentum: 2, Beta: 1, Gamma: inf, GammaMinusOne: inf, BetaGamma: inf}
	if got != want {
		t.Errorf("got %+v, want %+v", got, want)
	}
}

func TestMotionRefusals(t *testing.T) {
	inf, nan := math.Inf(1), math.NaN()
	for _, c := range []struct {
		name  string
		f     func(m, value float64) (Motion, error)
		m, v  float64
		field string
	}{
		{"negative mass", MotionFromMomentum, -1, 1, "mass_gev"},
		{"NaN mass", MotionFromTotal, nan, 1, "mass_gev"},
		{"negative momentum", MotionFromMomentum, 1, -1, "momentum_gev"},
		{"infinite momentum", MotionFromMomentum, 1, inf, "momentum_gev"},
		{"photon at rest", MotionFromMomentum, 0, 0, "momentum_gev"},
		{"negative kinetic energy", MotionFromKinetic, 1, -1, "kinetic_energy_gev"},
		{"energy below the mass", MotionFromTotal, 1, 0.5, "total_energy_gev"},
		{"photon from its velocity", MotionFromBeta, 0, 0.5, "mass_gev"},
		{"faster than light", MotionFromBeta, 1, 1, "beta"},
		{"gamma below 1", MotionFromGamma, 1, 0.5, "gamma"},
		{"gamma NaN", MotionFromGamma, 1, nan, "gamma"},
		{"photon from gamma", MotionFromGamma, 0, 2, "mass_gev"},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, err := c.f(c.m, c.v)
			checkFault(t, err, fault.Invalid, c.field)
		})
	}
}

// checkFault holds an error to its kind and field.
func checkFault(t *testing.T, err error, kind fault.Kind, field string) {
	t.Helper()
	var found *fault.Error
	if !errors.As(err, &found) {
		t.Fatalf("got %v, want a fault", err)
	}
	if found.Kind != kind || found.Field != field {
		t.Errorf("got kind %v, field %q, want %v, %q", found.Kind, found.Field, kind, field)
	}
}

func TestTwoBodyRefusals(t *testing.T) {
	for _, c := range []struct {
		name      string
		f         func(a, m1, m2 float64) (TwoBody, error)
		a, m1, m2 float64
		kind      fault.Kind
		field     string
	}{
		{"mass 0", TwoBodyMomentum, 0, 0, 0, fault.Invalid, "mass_gev"},
		{"negative daughter", TwoBodyMomentum, 1, -0.1, 0, fault.Invalid, "mass_1_gev"},
		{"NaN daughter", TwoBodyMomentum, 1, 0.1, math.NaN(), fault.Invalid, "mass_2_gev"},
		{"below", TwoBodyMomentum, 1, 0.5, 0.6, fault.BelowThreshold, "deficit_gev"},
		{"below in s", TwoBodyMomentumS, 1, 0.5, 0.6, fault.BelowThreshold, "deficit_gev"},
		{"s negative", TwoBodyMomentumS, -1, 0.5, 0.6, fault.Invalid, "s_gev2"},
		{"below in excess", TwoBodyFromExcess, -1e-9, 0.5, 0.6, fault.BelowThreshold, "deficit_gev"},
		{"nothing", TwoBodyFromExcess, 0, 0, 0, fault.Invalid, "excess_gev"},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, err := c.f(c.a, c.m1, c.m2)
			checkFault(t, err, c.kind, c.field)
		})
	}
	at, err := TwoBodyMomentum(0.75, 0.25, 0.5)
	if err != nil || at != (TwoBody{E1: 0.25, E2: 0.5}) {
		t.Errorf("at the threshold: %+v, %v", at, err)
	}
}
