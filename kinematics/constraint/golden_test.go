package constraint_test

import (
	"math"
	"testing"

	"example.org/kinegate/kinematics/constraint"
	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/internal/golden"
	"example.org/kinegate/kinematics/num"
	"example.org/kinegate/kinematics/num/random"
)

// TestGoldenFits holds fits to the same bits on every processor: the toy channels, each
// object in a coordinate set of its own, and channels with a mass that cannot be met.
func TestGoldenFits(t *testing.T) {
	const events = 60
	golden.Check(t, "fits", func(d *golden.Digest) {
		for _, infeasible := range []bool{false, true} {
			for n, y := range toys() {
				name := "toy_" + string(rune('0'+n))
				if infeasible {
					name += "_infeasible"
					spec := y.spec
					spec.Masses = append(append([]constraint.Mass(nil), spec.Masses...), constraint.Mass{Objects: []int{0, 1}, GeV: 0.05})
					y.spec = spec
				}
				d.Section(name)
				y.spread = 1
				f := fitter(t, &y.spec)
				for i := range events {
					s := random.New(12, random.Generation, int64(i))
					y.event(f, &s)
					for o := range y.spec.Objects {
						inSet(&f.Measurements[o], &y.spec.Objects[o], i+o)
					}
					digest(d, f, len(y.spec.Objects))
				}
			}
		}
	})
}

// inSet writes a fully measured photon in another coordinate set, with the covariance
// as it stands for three other parameters.
func inSet(m *constraint.Measurement, o *constraint.Object, which int) {
	if o.Form != constraint.Coordinates || o.Measured != event.AllMeasured {
		return
	}
	size, theta, phi := m.Values[0], m.Values[1], m.Values[2]
	st, ct := num.Sincos(theta)
	sp, cp := num.Sincos(phi)
	switch which % 4 {
	case 1:
		m.Kind = event.TransverseMomentum
		m.Values = [3]float64{size * st, num.Asinh(ct / st), phi}
	case 2:
		m.Kind = event.MomentumMass
		m.Values = [3]float64{size * st * cp, size * st * sp, size * ct}
	case 3:
		if ct > 0.2 {
			m.Kind = event.MomentumSlopes
			m.Values = [3]float64{size, st * cp / ct, st * sp / ct}
		}
	}
}

// digest adds everything that a fit returns; what is not a number is said in words.
func digest(d *golden.Digest, f *constraint.Fitter, objects int) {
	r := f.Fit()
	d.Text(r.Status.String())
	d.Int(int64(r.Iterations), int64(r.DegreesOfFreedom))
	add := func(x float64) {
		if math.IsNaN(x) {
			d.Text("not a number")
			return
		}
		d.Float(x)
	}
	add(r.ChiSquare)
	add(r.Probability)
	add(r.Stationarity)
	add(r.Violation)
	for o := range objects {
		p := f.Momentum(o)
		d.Float(p.P.X, p.P.Y, p.P.Z, p.E)
		for a, v := range f.Parameters(o) {
			add(v)
			add(f.Pull(o, a))
		}
		for _, row := range f.MomentumCovariance(o, 0) {
			for _, v := range row {
				add(v)
			}
		}
	}
}
