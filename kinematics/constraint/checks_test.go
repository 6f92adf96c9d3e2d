package constraint_test

import (
	"math"
	"strconv"
	"strings"
	"testing"

	"example.org/kinegate/kinematics/constraint"
	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/internal/reference"
	"example.org/kinegate/kinematics/momentum"
)

// TestChecksConstrainedFit compares closed forms: measurements forced to a sum, as x
// components of momenta of which nothing else is conserved, and pairs of photons at a
// known angle forced to a mass.
func TestChecksConstrainedFit(t *testing.T) {
	reference.Checks(t, "constrained-fit", func(c reference.Check) (any, bool) {
		f := photonsAtAngle
		if !c.Has("mass_GeV") {
			f = forcedToSum
		}
		fitted, result := f(t, c)
		if result.Status != constraint.Converged || result.DegreesOfFreedom != 1 {
			t.Fatalf("%s: %+v", c.ID, result)
		}
		if strings.HasPrefix(c.Quantity, "chi-square") {
			return result.ChiSquare, true
		}
		// "fitted angle 2 of ...", "component 3 of ...", "fitted first photon energy, ...".
		for word := range strings.FieldsSeq(c.Quantity) {
			if k, err := strconv.Atoi(word); err == nil {
				return fitted[k-1], true
			}
		}
		return fitted[0], strings.Contains(c.Quantity, "first photon energy")
	})
}

// forcedToSum fits measurements whose sum is known.
func forcedToSum(t *testing.T, c reference.Check) ([]float64, constraint.Result) {
	t.Helper()
	suffix, sum := "", 60.0
	if c.Has("measured_deg") {
		suffix, sum = "_deg", 180
	}
	measured, sigma := c.Floats("measured"+suffix), c.Floats("sigma"+suffix)
	spec := &constraint.Spec{Conserved: constraint.X, Known: momentum.Four{P: momentum.Three{X: sum}}}
	for range measured {
		spec.Objects = append(spec.Objects, object(0))
	}
	f := fitter(t, spec)
	for i, x := range measured {
		f.Measurements[i] = constraint.Measurement{
			Kind: event.MomentumMass, Values: [3]float64{x}, Covariance: [6]float64{sigma[i] * sigma[i]},
		}
	}
	r := f.Fit()
	var fitted []float64
	for i := range measured {
		fitted = append(fitted, f.Parameters(i)[0])
	}
	return fitted, r
}

// photonsAtAngle fits the energies of two photons with known directions.
func photonsAtAngle(t *testing.T, c reference.Check) ([]float64, constraint.Result) {
	t.Helper()
	f := fitter(t, &constraint.Spec{
		Objects: photons(2), Masses: []constraint.Mass{{Objects: []int{0, 1}, GeV: c.Float("mass_GeV")}},
	})
	for i, name := range []string{"1", "2"} {
		sigma := c.Float("sigma" + name + "_GeV")
		f.Measurements[i] = constraint.Measurement{
			Kind:       event.MomentumAngles,
			Values:     [3]float64{c.Float("E" + name + "_GeV"), math.Pi / 2, float64(i) * c.Float("theta_rad")},
			Covariance: [6]float64{sigma * sigma},
		}
	}
	r := f.Fit()
	return []float64{f.Parameters(0)[0], f.Parameters(1)[0]}, r
}
