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
	sum := 0.0
	for v, w := range f.problem.weight {
		sum += float64(w * f.x[v] * f.x[v])
	}
	return sum
}

// descend iterates to the minimum.
func (f *Fitter) descend() Status {
	clear(f.multiplier)
	f.penalty = 1
	for range maxSteps {
		if !f.direction() {
			return Singular
		}
		f.result.Iterations++
		if !f.search() {
			return NotConverged
		}
		f.pull(f.multiplier)
		f.result.Stationarity, f.result.Violation = f.stationarity(), f.violation()
		if f.result.Stationarity <= Bound && f.result.Violation <= Bound {
			return Converged
		}
	}
	return NotConverged
}

// direction finds the step and the next multipliers.
func (f *Fitter) direction() bool {
	part := 1.0
	plain := true
	for _, l := range f.multiplier {
		plain = plain && l == 0
	}
	for {
		if plain {
			part = 0
		}
		f.assemble(part)
		ok := f.factor(plain)
		if !ok && !plain {
			f.assemble(part)
			ok = f.factorWhole()
		}
		if ok {
			break
		}
		if plain {
			return false
		}
		part /= 4
		plain = part < 0.05
	}
	p := f.problem
	for v, w := range p.weight {
		f.system.right[v] = -w * f.x[v]
	}
	for k, r := range f.residual {
		f.system.right[p.variables+k] = -r
	}
	f.solve(plain)
	copy(f.step, f.system.right)
	copy(f.next, f.system.right[p.variables:])
	return true
}

// The line search: the part of the expected gain that a step must bring, and the
// shortest one.
const (
	sufficient = 1e-4
	shortest   = 1e-8
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
	gain, squares := 0.0, 0.0
	for v, w := range p.weight {
		gain += float64(w * f.x[v] * f.step[v])
	}
	for k, r := range f.residual {
		gain -= float64(f.next[k] * r)
		pull := r / f.sigma[k]
		squares += float64(pull * pull)
	}
	if gain > 0.5*f.penalty*squares && squares > 0 {
		f.penalty = math.Max(2*f.penalty, 4*gain/squares)
	}
	slope := gain - float64(f.penalty*squares)
	start := f.merit()
	length := f.reach()
	for length > shortest {
		for v, d := range f.step {
			f.x[v] = f.before[v] + float64(length*d)
		}
		f.evaluate()
		if got := f.merit(); got <= start+float64(sufficient*length*slope) || -slope < 1e-10 {
			copy(f.multiplier, f.next)
			return true
		}
		length /= 3
	}
	return false
}

// merit is what a step lowers.
func (f *Fitter) merit() float64 {
	sum := f.chiSquare() / 2
	for k, r := range f.residual {
		pull := r / f.sigma[k]
		sum += float64(f.next[k]*r) + float64(f.penalty/2*pull*pull)
	}
	return sum
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
