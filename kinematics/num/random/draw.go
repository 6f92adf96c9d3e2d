package random

import (
	"math"

	"example.org/kinegate/kinematics/num"
)

// MaxPoissonMean is the largest mean that Poisson takes: beyond it exp(-mean)
// leaves the normal doubles.
const MaxPoissonMean = 700

// Normal returns a standard normal deviate from one word, by the inverse of the
// distribution function; |Normal| < 8.3.
func (s *Stream) Normal() float64 { return NormalQuantile(s.Uniform()) }

// Exponential returns a deviate of density exp(-x), x > 0, from one word.
func (s *Stream) Exponential() float64 { return -num.Log(s.Uniform()) }

// Poisson returns a count with the given mean from one word, by summing
// probabilities up to it. Domain: 0 <= mean <= MaxPoissonMean; outside it
// returns 0. The rounding of the sum shifts a probability by less than 1e-13.
func (s *Stream) Poisson(mean float64) int {
	u := s.Uniform()
	if !(mean > 0 && mean <= MaxPoissonMean) {
		return 0
	}
	term := num.Exp(-mean)
	sum := term
	k := 0
	// The last bit of the sum may stay below u: stop where terms no longer count.
	for u > sum && (float64(k) < mean || term > sum*0x1p-60) {
		k++
		term = float64(term * (mean / float64(k)))
		sum += term
	}
	return k
}

// NormalQuantile returns the x at which the standard normal distribution
// function is p. Domain 0 < p < 1; it returns NaN elsewhere. Relative accuracy
// about 1e-15, by algorithm PPND16 of M. J. Wichura, "The percentage points of
// the normal distribution" (AS 241), Applied Statistics 37 (1988) 477.
func NormalQuantile(p float64) float64 {
	if !(p > 0 && p < 1) {
		return math.NaN()
	}
	q := p - 0.5
	if math.Abs(q) <= 0.425 {
		r := 0.180625 - float64(q*q)
		return q * ratio(r, &centreTop, &centreBottom)
	}
	tail := p
	if q > 0 {
		tail = 1 - p
	}
	r := math.Sqrt(-num.Log(tail))
	var x float64
	if r <= 5 {
		x = ratio(r-1.6, &middleTop, &middleBottom)
	} else {
		x = ratio(r-5, &farTop, &farBottom)
	}
	return math.Copysign(x, q)
}

// ratio evaluates two polynomials of degree seven, lowest power first, and
// divides them.
func ratio(x float64, top, bottom *[8]float64) float64 {
	a, b := top[7], bottom[7]
	for i := 6; i >= 0; i-- {
		a = math.FMA(a, x, top[i])
		b = math.FMA(b, x, bottom[i])
	}
	return a / b
}

// Coefficients of AS 241 for |p - 1/2| <= 0.425, sqrt(-ln tail) <= 5 and beyond.
//
//nolint:gochecknoglobals // constant tables
var (
	centreTop = [8]float64{
		3.3871328727963666080e0, 1.3314166789178437745e2, 1.9715909503065514427e3, 1.3731693765509461125e4,
		4.5921953931549871457e4, 6.7265770927008700853e4, 3.3430575583588128105e4, 2.5090809287301226727e3,
	}
	centreBottom = [8]float64{
		1, 4.2313330701600911252e1, 6.8718700749205790830e2, 5.3941960214247511077e3,
		2.1213794301586595867e4, 3.9307895800092710610e4, 2.8729085735721942674e4, 5.2264952788528545610e3,
	}
	middleTop = [8]float64{
		1.42343711074968357734e0, 4.63033784615654529590e0, 5.76949722146069140550e0, 3.64784832476320460504e0,
		1.27045825245236838258e0, 2.41780725177450611770e-1, 2.27238449892691845833e-2, 7.74545014278341407640e-4,
	}
	middleBottom = [8]float64{
		1, 2.05319162663775882187e0, 1.67638483018380384940e0, 6.89767334985100004550e-1,
		1.48103976427480074590e-1, 1.51986665636164571966e-2, 5.47593808499534494600e-4, 1.05075007164441684324e-9,
	}
	farTop = [8]float64{
		6.65790464350110377720e0, 5.46378491116411436990e0, 1.78482653991729133580e0, 2.96560571828504891230e-1,
		2.65321895265761230930e-2, 1.24266094738807843860e-3, 2.71155556874348757815e-5, 2.01033439929228813265e-7,
	}
	farBottom = [8]float64{
		1, 5.99832206555887937690e-1, 1.36929880922735805310e-1, 1.48753612908506148525e-2,
		7.86869131145613259100e-4, 1.84631831751005468180e-5, 1.42151175831644588870e-7, 2.04426310338993978564e-15,
	}
)
