package constraint

import "math"

// The restoration: the number of steps, the violation in standard deviations at which
// the constraints count as met, the gradient of the violation, in units of the violation,
// at which it counts as a minimum, and the damping with its limits. It also counts as one
// where no step lowers F, and where restoreStall steps together lower it by less than a
// hundredth: an energy that goes to zero leaves no gradient of zero.
const (
	restoreSteps  = 200
	restored      = 1e-6
	restoredFlat  = 1e-7
	restoreStall  = 10
	restoreDamp   = 1e-3
	restoreLeast  = 1e-12
	restoreUtmost = 1e12
)

// restore looks for a point that meets the constraints, from the start of the fit on, and
// returns Converged if it found one, Infeasible if it found a minimum of the violation
//
//	F = sum (f/sigma)^2/2
//
// above zero, sigma as at the start, and NotConverged otherwise. Each step is Newton's with
// a damping d, in the form of a step of the fit with the multipliers f/sigma^2:
//
//	( d W + H  A'       ) ( step       )   (  0 )
//	( A        -sigma^2 ) ( multiplier ) = ( -f )
//
// H being the second derivatives of the constraints times the multipliers; it is left out
// where the matrix is not that of a minimum. The damping rises until F falls.
//
// Source: D. W. Marquardt, "An algorithm for least-squares estimation of nonlinear
// parameters", Journal of the Society for Industrial and Applied Mathematics 11 (1963)
// 431, here with second derivatives.
func (f *Fitter) restore() Status {
	clear(f.x)
	f.evaluate()
	f.write(0)
	f.rescale()
	f.held = true
	defer func() { f.held = false }()
	damp, before := restoreDamp, f.squares()
	earlier := before
	for step := range restoreSteps {
		f.result.Iterations++
		if f.violation() <= restored {
			return Converged
		}
		for k, r := range f.residual {
			f.multiplier[k] = r / f.sigma[k] / f.sigma[k]
		}
		f.pull(f.multiplier)
		if f.flat() {
			return Infeasible
		}
		if step%restoreStall == restoreStall-1 {
			if before > 0.99*earlier {
				return Infeasible
			}
			earlier = before
		}
		copy(f.before, f.x)
		for !f.dampedStep(1, damp) && !f.dampedStep(0, damp) || !(f.squares() < before) {
			copy(f.x, f.before)
			f.evaluate()
			if damp *= 10; !(damp <= restoreUtmost) {
				return Infeasible
			}
		}
		before = f.squares()
		damp = math.Max(damp/10, restoreLeast)
	}
	return NotConverged
}

// dampedStep takes one step with a part of the second derivatives and tells whether its
// matrix was that of a minimum.
func (f *Fitter) dampedStep(part, damp float64) bool {
	p, s := f.problem, &f.system
	f.assemble(part)
	for v := range p.variables {
		scale := s.scale[v]
		s.matrix.entries[v*s.matrix.n+v] += damp/(scale*scale) - p.weight[v]
	}
	clear(s.right)
	for k, r := range f.residual {
		i := p.variables + k
		s.matrix.entries[i*s.matrix.n+i] = -f.sigma[k] * f.sigma[k]
		s.right[i] = -r
	}
	if !f.factorWhole() {
		return false
	}
	f.solve()
	copy(f.step, s.right)
	length := f.reach()
	for v, d := range f.step {
		f.x[v] += float64(length * d)
	}
	f.evaluate()
	return true
}

// squares is the sum of the squared constraints in standard deviations.
func (f *Fitter) squares() float64 {
	sum := 0.0
	for k, r := range f.residual {
		pull := r / f.sigma[k]
		sum += float64(pull * pull)
	}
	return sum
}

// flat tells whether the violation is stationary; the pulls are those of its
// multipliers.
func (f *Fitter) flat() bool {
	f.stationarity()
	largest := 0.0
	for v, g := range f.gradient {
		g -= float64(f.problem.weight[v] * f.x[v])
		largest = worse(largest, g*f.system.scale[v])
	}
	return largest <= restoredFlat*math.Sqrt(f.squares())
}
