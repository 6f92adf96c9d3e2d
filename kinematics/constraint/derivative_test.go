package constraint

import (
	"math"
	"testing"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/internal/golden"
	"example.org/kinegate/kinematics/momentum"
)

// derivativeProblem has an object of every form, in every coordinate set, and every
// kind of constraint.
func derivativeProblem(t *testing.T, vertex VertexZ) *Fitter {
	t.Helper()
	spec := &Spec{Known: momentum.Four{E: 0.9}, Conserved: AllComponents, Vertex: vertex}
	kinds := []event.Kind{
		event.EnergyMomentum, event.MomentumMass, event.TransverseMomentum, event.MomentumAngles, event.MomentumSlopes,
	}
	for range kinds {
		spec.Objects = append(spec.Objects,
			Object{Form: Coordinates, Measured: event.AllMeasured},
			Object{Form: Coordinates, Measured: event.AllMeasured, MassGeV: 0.4},
			Object{Form: Coordinates, Measured: event.DirectionMeasured, Repointed: true},
			Object{Form: Coordinates, Measured: event.AllMeasured, MassGeV: 0.5, Repointed: true})
	}
	n := len(spec.Objects)
	spec.Objects = append(spec.Objects,
		Object{Form: Along, Measured: event.FirstMeasured, Along: momentum.Three{X: 0.1, Z: 1}, Beam: true},
		Object{Form: Along, MassGeV: 0.3, Along: momentum.Three{Y: 1}, Beam: true},
		Object{Form: Missing, MassGeV: 0.9}, Object{Form: MissingMass})
	spec.Masses = []Mass{
		{Objects: []int{0, 1, 2}, GeV: 0.5},
		{Objects: []int{3, n + 2, 6}, As: []int{9, 10, n + 1, n + 3}},
		{Objects: []int{2, 6, 7, 11, 14}, GeV: 1},
	}
	for range 10 { // Constraints enough for all that is unmeasured here.
		spec.Masses = append(spec.Masses, Mass{Objects: []int{4, 8, 12, 16}, GeV: 2})
	}
	p, err := Compile(spec)
	if err != nil {
		t.Fatal(err)
	}
	return p.NewFitter()
}

// fill gives the fitter random measurements with full covariances.
func fill(f *Fitter, s *golden.Source) {
	kinds := []event.Kind{
		event.EnergyMomentum, event.MomentumMass, event.TransverseMomentum, event.MomentumAngles, event.MomentumSlopes,
	}
	for i := range f.Measurements {
		m := &f.Measurements[i]
		m.Kind = kinds[i/4%len(kinds)]
		m.Values = [3]float64{s.Between(0.3, 2), s.Between(0.3, 2.5), s.Between(-3, 3)}
		var l [3][3]float64
		for a := range 3 {
			for c := range a + 1 {
				l[a][c] = s.Between(0.05, 0.2)
				if a != c && i%2 == 0 {
					l[a][c] = 0
				}
			}
		}
		for a := range 3 {
			for c := a; c < 3; c++ {
				sum := 0.0
				for d := range 3 {
					sum += l[a][d] * l[c][d]
				}
				m.Covariance[packedIndex(a, c)] = sum
			}
		}
		m.Origin = momentum.Three{X: 0.01, Y: -0.02, Z: 0.1}
		m.Cluster = momentum.Three{X: 0.3, Y: 0.5, Z: 1}
	}
	f.Vertex = Vertex{Position: momentum.Three{X: 0.02, Z: -0.1}, SigmaZ: 0.2}
}

// lagrangian returns lambda'f.
func (f *Fitter) lagrangian() float64 {
	sum := 0.0
	for k, r := range f.residual {
		sum += f.multiplier[k] * r
	}
	return sum
}

// slopes returns the derivatives of lambda'f as the fit sees them.
func (f *Fitter) slopes() []float64 {
	p := f.problem
	f.pull(f.multiplier)
	out := make([]float64, p.variables)
	for i := range f.bodies {
		for _, v := range p.parts[i].vars[:p.parts[i].count] {
			out[v] = f.pulls[i].on(&f.columns[v])
		}
		if p.parts[i].repointed && p.z != none {
			out[p.z] += f.spreadZ * f.pulls[i].on(&f.bodies[i].alongZ)
		}
	}
	return out
}

// Gradients, constraint rows and second derivatives against central differences of
// fourth order: their truncation is h^4 times the fifth derivative, their rounding
// 2^-52/h of the terms, both below 1e-9 for h = 1e-3.
func TestDerivatives(t *testing.T) {
	const h = 1e-3
	for name, vertex := range map[string]VertexZ{"known": VertexKnown, "measured": VertexMeasured, "free": VertexFree} {
		t.Run(name, func(t *testing.T) {
			s := golden.NewSource(11)
			f := derivativeProblem(t, vertex)
			worst, entries := [3]float64{}, 0
			for range 5 {
				fill(f, s)
				if !f.load() {
					t.Fatal("measurements refused")
				}
				f.begin()
				for v := range f.x {
					f.x[v] = s.Between(-0.5, 0.5)
				}
				for k := range f.multiplier {
					f.multiplier[k] = s.Between(-1, 1)
				}
				p := f.problem
				f.evaluate()
				gradient := f.slopes()
				f.write(1)
				m := append([]float64(nil), f.system.matrix.entries...)
				n := f.system.matrix.n
				for v := range f.x {
					var sum float64
					row := make([]float64, p.variables)
					slopes := make([]float64, p.constraints())
					for j, w := range [4]float64{1, -8, 8, -1} {
						at := f.x[v]
						f.x[v] = at + h*[4]float64{-2, -1, 1, 2}[j]
						f.evaluate()
						f.x[v] = at
						sum += w * f.lagrangian()
						for k, r := range f.residual {
							slopes[k] += w * r / (12 * h)
						}
						for c, g := range f.slopes() {
							row[c] += w * g / (12 * h)
						}
					}
					note(&worst[0], gradient[v], sum/(12*h))
					for k, want := range slopes {
						note(&worst[1], m[(p.variables+k)*n+v], want)
					}
					for c := range v + 1 {
						got := m[v*n+c]
						if c == v {
							got -= p.weight[v]
						}
						note(&worst[2], got, row[c])
						entries++
					}
					f.evaluate()
				}
			}
			for i, what := range []string{"gradient", "constraint rows", "second derivatives"} {
				if worst[i] > 1e-9 {
					t.Errorf("%s: worst error %g", what, worst[i])
				}
			}
			t.Logf("%d second derivatives, worst errors %.2g", entries, worst)
		})
	}
}

// note keeps the largest error relative to one plus the value.
func note(worst *float64, got, want float64) {
	if e := math.Abs(got-want) / (1 + math.Abs(want)); !(e <= *worst) {
		*worst = e
	}
}
