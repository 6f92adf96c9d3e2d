package num

import "math"

// Pow returns x^y, within 1 ulp: e^(y log x) in double-double. It costs about a
// microsecond; where the exponent is fixed, Sqrt, Cbrt and products are cheaper.
//
// Special cases, as in the C standard: Pow(x, +-0) and Pow(1, y) are 1 for any x and y;
// a negative x needs a whole y and gives NaN otherwise; zeros and infinities give the
// limits; NaN gives NaN.
func Pow(x, y float64) float64 {
	switch {
	case y == 0 || x == 1:
		return 1
	case math.IsNaN(x) || math.IsNaN(y):
		return math.NaN()
	case math.IsInf(y, 0):
		return powInfinite(math.Abs(x), y > 0)
	}
	whole := math.Floor(y) == y
	odd := whole && math.Abs(y) < 0x1p53 && math.Floor(y/2)*2 != y
	size := math.Abs(x)
	var result float64
	switch {
	case x < 0 && !whole && !math.IsInf(x, 0):
		return math.NaN()
	case size == 0 || math.IsInf(size, 1):
		if (size == 0) != (y > 0) {
			result = math.Inf(1)
		}
	default:
		result = powPositive(size, y)
	}
	if odd && math.Signbit(x) {
		return -result
	}
	return result
}

// powPositive returns x^y for finite x > 0 and finite y.
func powPositive(x, y float64) float64 {
	exponent := FromFloat(x).Log().MulFloat(y)
	switch {
	case exponent.Hi > 710:
		return math.Inf(1)
	case exponent.Hi < -746:
		return 0
	}
	// The scale is applied last, so that a subnormal result is rounded once.
	k, reduced := reduceLn2(exponent)
	return math.Ldexp(expm1Reduced(reduced).AddFloat(1).Float(), k)
}

// powInfinite returns the limit of x^y for x >= 0 and y to +Inf, or to -Inf.
func powInfinite(x float64, up bool) float64 {
	switch {
	case x == 1:
		return 1
	case (x > 1) == up:
		return math.Inf(1)
	}
	return 0
}
