package constraint

import "math"

// The restoration: the number of steps, the violation in standard deviations at which
// the constraints count as met, the gradient of the violation, per standard deviation of
// it, at which it counts as a minimum, and the damping at its start and its limits.
const (
	restoreSteps  = 100
	restored      = 1e-6
	restoreFlat   = 1e-7
	restoreDamp   = 1e-3
	restoreLeast  = 1e-12
	restoreUtmost = 1e12
)

// restore looks for a point that meets the constraints, from the measured values on, and
// returns Converged if it found one, Infeasible if it found a minimum of the violation
//
//	sum (f/sigma)^2/2
//
// above zero, sigma as at the start, and NotConverged otherwise. Each step minimises
//
//	damp |step|^2/2 + sum ((f + A step)/sigma)^2/2
//
// Source: D. W. Marquardt, "An algorithm for least-squares estimation of nonlinear
// parameters", Journal of the Society for Industrial and Applied Mathematics 11 (1963)
// 431, with damping raised and lowered by factors.
func (f *Fitter) restore() Status {
	p, s := f.problem, &f.system
	clear(f.x)
	f.evaluate()
	f.held = false
	damp := restoreDamp
	f.assemble(0)
	f.held = true
	defer func() { f.held = false }()
	before := f.squares()
	for range restoreSteps {
		f.result.Iterations++
		if f.violation() <= restored {
			return Converged
		}
		if f.flat() {
			return Infeasible
		}
		m := &s.matrix
		for v := p.measured; v < p.variables; v++ {
			m.entries[v*m.n+v] = 1
		}
		clear(s.right)
		for k, r := range f.residual {
			i := p.variables + k
			m.entries[i*m.n+i] = -damp
			s.right[i] = -r
		}
		copy(f.before, f.x)
		accepted := false
		if f.factor(true) {
			f.solve(true)
			copy(f.step, s.right)
			length := f.reach()
			for v, d := range f.step {
				f.x[v] += float64(length * d)
			}
			f.evaluate()
			after := f.squares()
			if accepted = after < before; accepted {
				before = after
			}
		}
		if accepted {
			damp = math.Max(damp/10, restoreLeast)
		} else {
			copy(f.x, f.before)
			f.evaluate()
			if damp *= 10; !(damp <= restoreUtmost) {
				return Infeasible
			}
		}
		f.assemble(0)
	}
	return NotConverged
}

// squares is the sum of the squared constraints in standard deviations.
func (f *Fitter) squares() float64 {
	sum := 0.0
	for k, r := range f.residual {
		sum += float64(r / f.sigma[k] * (r / f.sigma[k]))
	}
	return sum
}

// flat tells whether the violation is stationary. The system is assembled without
// second derivatives.
func (f *Fitter) flat() bool {
	p, s := f.problem, &f.system
	gradient, size := 0.0, math.Sqrt(f.squares())
	for v := range p.variables {
		g := 0.0
		for k, r := range f.residual {
			i := p.variables + k
			g += float64(s.matrix.entries[i*s.matrix.n+v] * r * s.scale[i])
		}
		gradient = worse(gradient, g)
	}
	return gradient <= restoreFlat*size
}
