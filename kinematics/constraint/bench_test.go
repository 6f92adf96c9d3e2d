package constraint_test

import (
	"slices"
	"testing"

	"example.org/kinegate/kinematics/constraint"
	"example.org/kinegate/kinematics/num/random"
)

// BenchmarkFit fits toy events of every channel.
func BenchmarkFit(b *testing.B) {
	for _, y := range toys() {
		b.Run(y.name, func(b *testing.B) {
			y.spread = 1
			f := fitter(b, &y.spec)
			const events = 256
			var all [events][]constraint.Measurement
			for i := range all {
				s := random.New(9, random.Generation, int64(i))
				y.event(f, &s)
				all[i] = slices.Clone(f.Measurements)
			}
			steps, i := 0, 0
			b.ReportAllocs()
			for b.Loop() {
				copy(f.Measurements, all[i%events])
				r := f.Fit()
				steps += r.Iterations
				i++
			}
			b.ReportMetric(float64(steps)/float64(i), "steps/op")
		})
	}
}

// BenchmarkFourPhotons fits the same events as testdata/bench/constrained_fit.py: those
// of testdata/fit with two pi0 and all objects given by momentum and angles.
func BenchmarkFourPhotons(b *testing.B) {
	for name, which := range map[string]string{"missing": "p_pi0_pi0_missing_proton", "measured": "p_pi0_pi0"} {
		b.Run(name, func(b *testing.B) {
			all := loadOutside(b)
			top := all.Topologies[which]
			var fitters []*constraint.Fitter
			for i := range all.Events {
				if e := &all.Events[i]; e.Topology == which && e.Case == "across_pi" {
					fitters = append(fitters, fitterOf(b, &top, e))
				}
			}
			i := 0
			b.ReportAllocs()
			for b.Loop() {
				if r := fitters[i%len(fitters)].Fit(); r.Status != constraint.Converged {
					b.Fatalf("%+v", r)
				}
				i++
			}
		})
	}
}
