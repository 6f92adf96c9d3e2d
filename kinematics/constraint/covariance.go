package constraint

import (
	"math"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/momentum"
)

// Covariances are those of linear propagation at the fitted point: with the matrix of
// a step without second derivatives,
//
//	( W  A' )^-1   ( C  . )
//	( A  0  )    = ( .  . )
//
// C is the covariance of the fitted variables, 1 - C that of the distance of the measured
// ones from them.

// propagate computes the covariance of the variables; false if there is none.
func (f *Fitter) propagate() bool {
	if f.propagated {
		return f.covariance.n > 0
	}
	f.propagated = true
	p, s := f.problem, &f.system
	f.covariance.n = 0
	if f.result.Status != Converged {
		return false
	}
	f.assemble(0)
	if !f.factor(true) {
		f.assemble(0)
		if !f.factorWhole() {
			return false
		}
	}
	n := p.variables
	f.covariance.n = n
	for v := range n {
		clear(s.right)
		s.right[v] = 1
		f.solve()
		for w := range v + 1 {
			f.covariance.entries[v*n+w] = s.right[w]
			f.covariance.entries[w*n+v] = s.right[w]
		}
	}
	return true
}

// ParameterCovariance returns the covariance of an object's fitted parameters, packed
// 11 12 13 22 23 33: those of its coordinate set, for form Along the size of the momentum
// and zeros, for missing momenta the components. All are NaN unless the fit Converged.
func (f *Fitter) ParameterCovariance(object int) [event.CovarianceSize]float64 {
	return f.packed(object, func(c, _ float64) float64 { return c })
}

// packed returns L g(C) L' for an object's parameters; g is given the entry of C and of
// the unit matrix.
func (f *Fitter) packed(object int, g func(c, unit float64) float64) [event.CovarianceSize]float64 {
	var out [event.CovarianceSize]float64
	ok := f.propagate()
	b := &f.bodies[object]
	n := f.problem.variables
	size := min(b.count, 3)
	for a := range 3 {
		for c := a; c < 3; c++ {
			sum := 0.0
			for d := range min(a+1, size) {
				for e := range min(c+1, size) {
					unit := 0.0
					if d == e {
						unit = 1
					}
					entry := g(f.covariance.entries[b.vars[d]*n+b.vars[e]], unit)
					sum += float64(b.spread[a][d] * entry * b.spread[c][e])
				}
			}
			if !ok {
				sum = math.NaN()
			}
			out[packedIndex(a, c)] = sum
		}
	}
	return out
}

// vanishing is the least variance, as a part of the measured one, of the distance of a
// parameter from its measured value that counts: less is rounding.
const vanishing = 1e-11

// Pull returns the distance of the measured from the fitted value of a parameter of
// an object, over the standard deviation of that distance. It is NaN for a parameter
// that is not measured, is known exactly or is left alone by the constraints, and
// unless the fit Converged.
func (f *Fitter) Pull(object, parameter int) float64 {
	b := &f.bodies[object]
	if parameter < 0 || parameter >= b.count || b.mask>>parameter&1 == 0 {
		return math.NaN()
	}
	variance := 0.0
	for _, l := range b.spread[parameter] {
		variance += float64(l * l)
	}
	left := f.packed(object, func(c, unit float64) float64 { return unit - c })[packedIndex(parameter, parameter)]
	if !(left > vanishing*variance) {
		return math.NaN()
	}
	return (b.start[parameter] - b.theta[parameter]) / math.Sqrt(left)
}

// MomentumCovariance returns the covariance of the fitted four-momenta of two objects,
// the rows of the first: px, py, pz, E in GeV^2. All are NaN unless the fit Converged.
func (f *Fitter) MomentumCovariance(first, second int) [4][4]float64 {
	var out [4][4]float64
	ok := f.propagate()
	n := f.problem.variables
	left, right := f.derivatives(first), f.derivatives(second)
	for a, v := range left.vars[:left.count] {
		for b, w := range right.vars[:right.count] {
			c := f.covariance.entries[v*n+w]
			for i := range 4 {
				for j := range 4 {
					out[i][j] += float64(left.columns[a][i] * c * right.columns[b][j])
				}
			}
		}
	}
	if !ok {
		for i := range out {
			for j := range out[i] {
				out[i][j] = math.NaN()
			}
		}
	}
	return out
}

// derivatives are those of an object's four-momentum.
type derivatives struct {
	vars    [maxParameters + 1]int
	columns [maxParameters + 1]vector
	count   int
}

func (f *Fitter) derivatives(object int) derivatives {
	b := &f.bodies[object]
	d := derivatives{count: b.count}
	for a, v := range b.vars[:b.count] {
		d.vars[a], d.columns[a] = v, f.columns[v]
	}
	if b.repointed && f.problem.z != none {
		d.vars[d.count] = f.problem.z
		d.columns[d.count].add(f.spreadZ, &b.alongZ)
		d.count++
	}
	return d
}

// VertexZ returns the fitted z of the vertex in metres and its standard deviation, which
// is 0 where it is known exactly and NaN unless the fit Converged.
func (f *Fitter) VertexZ() (z, sigma float64) {
	v := f.problem.z
	if v == none {
		return f.Vertex.Position.Z, 0
	}
	sigma = math.NaN()
	if f.propagate() {
		sigma = f.spreadZ * math.Sqrt(f.covariance.entries[v*f.problem.variables+v])
	}
	return f.vertex[2] + float64(f.spreadZ*f.x[v]), sigma
}

// Momentum returns the fitted four-momentum of an object in GeV.
func (f *Fitter) Momentum(object int) momentum.Four {
	v := &f.bodies[object].momentum
	return momentum.Four{P: momentum.Three{X: v[0], Y: v[1], Z: v[2]}, E: v[3]}
}

// Unfolded returns the same as Parameters with angles as the fit reached them from the
// measured values, so that differences from those make sense.
func (f *Fitter) Unfolded(object int) [3]float64 {
	t := &f.bodies[object].theta
	return [3]float64{t[0], t[1], t[2]}
}

// Parameters returns the fitted parameters of an object in its coordinate set, angles
// folded to theta within 0..pi and phi within (-pi, pi]; for form Along the size of the
// momentum and zeros, for missing momenta the components.
func (f *Fitter) Parameters(object int) [3]float64 {
	b := &f.bodies[object]
	t := f.Unfolded(object)
	if b.form != Coordinates {
		return t
	}
	switch b.kind {
	case event.MomentumAngles:
		t[1] = turned(t[1])
		if t[1] < 0 {
			t[1], t[2] = -t[1], t[2]+math.Pi
		}
		t[2] = turned(t[2])
	case event.TransverseMomentum:
		t[2] = turned(t[2])
	case event.EnergyMomentum, event.MomentumMass, event.MomentumSlopes:
	}
	return t
}

// turned brings an angle to (-pi, pi] by whole turns; one that is there stays as it is.
func turned(angle float64) float64 {
	if angle > -math.Pi && angle <= math.Pi {
		return angle
	}
	return angle - float64(2*math.Pi*math.Ceil((angle-math.Pi)/(2*math.Pi)))
}
