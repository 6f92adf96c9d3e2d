package constraint

import (
	"math"

	"example.org/kinegate/kinematics/num"
)

// Bound is what Converged means: every component of the gradient of the Lagrangian and
// every constraint is at most this many standard deviations. A chi-square is then
// within about 2 x Bound x its root, beyond the rounding.
const Bound = 1e-9

// maxSteps bounds the number of steps of a fit.
const maxSteps = 60

// Fit fits what stands in Measurements and Vertex. It returns the result, which
// the other methods of the Fitter refer to until the next fit.
func (f *Fitter) Fit() Result {
	f.result = Result{DegreesOfFreedom: f.problem.DegreesOfFreedom(), Probability: math.NaN()}
	if !f.load() {
		f.result.Status = Singular
		f.result.ChiSquare = math.NaN()
		return f.result
	}
	f.begin()
	copy(f.initial, f.residual)
	f.result.Status = f.descend()
	if f.result.Status != Converged {
		if f.result.Status = f.restore(); f.result.Status == Converged {
			f.result.Status = f.descend()
		}
	}
	f.result.ChiSquare = f.chiSquare()
	if f.result.Status == Converged && f.result.DegreesOfFreedom > 0 {
		f.result.Probability = num.ChiSquareTail(f.result.ChiSquare, f.result.DegreesOfFreedom)
	}
	return f.result
}

// chiSquare is the square of the distance from the measurement.
func (f *Fitter) chiSquare() float64 {
	p := f.problem
	x := f.x[:p.measured]
	sum := dot(x, x)
	if p.z != none {
		sum += float64(p.weight[p.z] * f.x[p.z] * f.x[p.z])
	}
	return sum
}

// descend iterates to the minimum.
func (f *Fitter) descend() Status {
	clear(f.multiplier)
	f.penalty = 1
	for v, w := range f.problem.weight {
		f.gradient[v] = w * f.x[v]
	}
	for range maxSteps {
		if !f.direction() {
			return Singular
		}
		if !f.search() {
			return NotConverged
		}
		if f.measure() {
			return Converged
		}
		if f.repeat() {
			return Converged
		}
	}
	return NotConverged
}

// measure counts a step and tells whether the fit has converged.
func (f *Fitter) measure() bool {
	f.result.Iterations++
	f.pull(f.multiplier)
	f.result.Stationarity, f.result.Violation = f.stationarity(), f.violation()
	return f.left() <= Bound
}

// left is what is left of the conditions of the minimum.
func (f *Fitter) left() float64 { return worse(f.result.Stationarity, f.result.Violation) }

// repeat takes more steps with the same matrix where at most two will do, which cost less
// than one with a new one, and tells whether the fit has converged. A step of Newton's of
// size h leaves a residual r = C h^2, where 2 C h is how much the matrix changed; so a step
// with the old matrix leaves the part 2 C h = 2 r/h of the residual. The estimate is
// doubled, and then taken from what such a step left.
func (f *Fitter) repeat() bool {
	left, size := f.left(), 0.0
	for v, d := range f.step {
		size = worse(size, d/f.system.scale[v])
	}
	part := 4 * left / size
	for allowed := 2; allowed > 0 && left*part*part <= Bound; allowed-- {
		f.solveStep()
		subtract(f.x, -1, f.step)
		f.evaluate()
		copy(f.multiplier, f.next)
		if f.measure() {
			return true
		}
		part = f.left() / left
		left = f.left()
	}
	return false
}

// direction finds the step and the next multipliers. A matrix that is not that of a
// minimum is tried again with less of the second derivatives, at last with none.
func (f *Fitter) direction() bool {
	part := 0.0
	for _, l := range f.multiplier {
		if l != 0 {
			part = 1
		}
	}
	for {
		f.assemble(part)
		if f.factor(part == 0) {
			break
		}
		f.assemble(part)
		if f.factorWhole() {
			break
		}
		if part == 0 {
			return false
		}
		if part /= 4; part < 0.05 {
			part = 0
		}
	}
	f.solveStep()
	return true
}

// solveStep solves the factored system for the step and the next multipliers.
func (f *Fitter) solveStep() {
	right, n := f.system.right, len(f.x)
	for v, g := range f.gradient {
		right[v] = -g
	}
	for k, r := range f.residual {
		right[n+k] = -r
	}
	f.solve()
	copy(f.step, right)
	for k, l := range f.multiplier {
		f.next[k] = l + right[n+k]
	}
}

// The line search: the part of the expected gain that a step must bring, the shortest
// step, and the expected gain below which the step is near enough to the minimum, and its
// gain near enough to the rounding of the merit, to be taken without a test.
const (
	sufficient = 1e-4
	shortest   = 1e-8
	certain    = 1e-9
)

// search goes along the step as far as it lowers the merit
//
//	x'W x/2 + lambda'f + penalty/2 sum (f/sigma)^2
//
// with the new multipliers. By the equations of the step its slope there is
// x'W step - lambda'f - penalty sum (f/sigma)^2.
func (f *Fitter) search() bool {
	p := f.problem
	copy(f.before, f.x)
	gain := dot(f.x[:p.measured], f.step) - dot(f.next, f.residual)
	if p.z != none {
		gain += float64(p.weight[p.z] * f.x[p.z] * f.step[p.z])
	}
	squares := f.squares()
	if gain > 0.5*f.penalty*squares && squares > 0 {
		f.penalty = math.Max(2*f.penalty, 4*gain/squares)
	}
	slope := gain - float64(f.penalty*squares)
	start := f.merit()
	for length := f.reach(); length > shortest; length /= 3 {
		copy(f.x, f.before)
		subtract(f.x, -length, f.step)
		f.evaluate()
		if -slope < certain || f.merit() <= start+float64(sufficient*length*slope) {
			copy(f.multiplier, f.next)
			return true
		}
	}
	return false
}

// merit is what a step lowers.
func (f *Fitter) merit() float64 {
	return float64(f.chiSquare()/2) + dot(f.next, f.residual) + float64(f.penalty/2*f.squares())
}

// reach is the part of the step, at most one, that leaves every size above zero: none
// shrinks below a tenth.
func (f *Fitter) reach() float64 {
	length := 1.0
	for i := range f.bodies {
		b := &f.bodies[i]
		if !b.sized() {
			continue
		}
		// The first parameter is the first row of the spread.
		change := b.spread[0][0] * f.step[b.vars[0]]
		if change < -0.9*b.theta[0] {
			length = math.Min(length, -0.9*b.theta[0]/change)
		}
	}
	return length
}
