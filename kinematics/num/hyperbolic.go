package num

import "math"

// Sinh returns the hyperbolic sine of x, within 2 ulp (1.04 measured).
//
// Special cases: +-0 gives +-0, +-Inf gives +-Inf, NaN gives NaN; |x| > 710.48 overflows.
func Sinh(x float64) float64 {
	size := math.Abs(x)
	if size > 22 {
		return math.Copysign(halfExp(size), x)
	}
	t := Expm1(size)
	if size < 1 {
		return math.Copysign(0.5*(float64(2*t)-t*t/(t+1)), x)
	}
	return math.Copysign(0.5*(t+t/(t+1)), x)
}

// Cosh returns the hyperbolic cosine of x, within 2 ulp (1.04 measured).
//
// Special cases: +-Inf gives +Inf, NaN gives NaN; |x| > 710.48 overflows.
func Cosh(x float64) float64 {
	size := math.Abs(x)
	switch {
	case size > 22:
		return halfExp(size)
	case size < math.Ln2/2:
		t := Expm1(size)
		return 1 + t*t/(2*(1+t))
	}
	t := Exp(size)
	return float64(0.5*t) + 0.5/t
}

// halfExp returns e^x/2 without overflow of e^x.
func halfExp(x float64) float64 {
	if x <= 709 {
		return 0.5 * Exp(x)
	}
	t := Exp(x / 2)
	return 0.5 * t * t
}

// Tanh returns the hyperbolic tangent of x, within 2 ulp (1.27 measured).
//
// Special cases: +-0 gives +-0, +-Inf gives +-1, NaN gives NaN.
func Tanh(x float64) float64 {
	size := math.Abs(x)
	var z float64
	switch {
	case math.IsNaN(x) || size < 0x1p-55:
		return x
	case size > 22:
		z = 1
	case size >= 1:
		z = 1 - 2/(Expm1(2*size)+2)
	default:
		t := Expm1(-2 * size)
		z = -t / (t + 2)
	}
	return math.Copysign(z, x)
}

// Asinh returns the inverse hyperbolic sine of x, within 2 ulp (1.67 measured):
//
//	log1p(x + x^2/(1 + sqrt(1+x^2))), odd in x.
//
// Special cases: +-0 gives +-0, +-Inf gives +-Inf, NaN gives NaN.
func Asinh(x float64) float64 {
	size := math.Abs(x)
	switch {
	case math.IsNaN(x) || math.IsInf(x, 0) || size < 0x1p-28:
		return x
	case size > 0x1p28:
		return math.Copysign(Log(size)+math.Ln2, x)
	}
	square := float64(size * size)
	return math.Copysign(Log1p(size+square/(1+math.Sqrt(1+square))), x)
}

// Acosh returns the inverse hyperbolic cosine of x, within 2 ulp (1.21 measured):
//
//	log1p(t + sqrt(2t + t^2)), t = x - 1.
//
// Special cases: +Inf gives +Inf, x < 1 and NaN give NaN.
func Acosh(x float64) float64 {
	switch {
	case !(x >= 1):
		return math.NaN()
	case x > 0x1p28:
		return Log(x) + math.Ln2
	}
	t := x - 1
	return Log1p(t + math.Sqrt(t*(2+t)))
}

// Atanh returns the inverse hyperbolic tangent of x, within 2 ulp (1.50 measured):
//
//	log1p(2x/(1-x))/2, odd in x.
//
// Special cases: +-0 gives +-0, +-1 gives +-Inf, |x| > 1 and NaN give NaN.
func Atanh(x float64) float64 {
	size := math.Abs(x)
	switch {
	case !(size <= 1):
		return math.NaN()
	case size < 0x1p-28:
		return x
	}
	return math.Copysign(0.5*Log1p(float64(2*size)/(1-size)), x)
}
