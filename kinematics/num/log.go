package num

import "math"

// Log returns the natural logarithm of x, within 1 ulp (0.81 measured).
//
// Special cases: +Inf gives +Inf, 0 gives -Inf, x < 0 and NaN give NaN.
//
// Source: FreeBSD e_log.c by way of the Go standard library, see NOTICE: with
// x = 2^k (1+f), sqrt(1/2) <= 1+f < sqrt(2).
func Log(x float64) float64 {
	switch {
	case math.IsNaN(x) || math.IsInf(x, 1):
		return x
	case x < 0:
		return math.NaN()
	case x == 0:
		return math.Inf(-1)
	}
	f, exponent := math.Frexp(x)
	if f < math.Sqrt2/2 {
		f *= 2
		exponent--
	}
	return logReduced(f-1, float64(exponent), 0)
}

// Log1p returns log(1+x), within 1 ulp (0.79 measured), also for small x.
//
// Special cases: +Inf gives +Inf, +-0 gives +-0, -1 gives -Inf, x < -1 and NaN give NaN.
//
// Source: FreeBSD s_log1p.c by way of the Go standard library, see NOTICE.
func Log1p(x float64) float64 {
	switch {
	case x < -1 || math.IsNaN(x):
		return math.NaN()
	case x == -1:
		return math.Inf(-1)
	case math.IsInf(x, 1) || math.Abs(x) < 0x1p-54:
		return x
	case x > math.Sqrt2/2-1 && x < math.Sqrt2-1:
		return logReduced(x, 0, 0)
	}
	// 1+x = u + low; log(1+x) = log u + low/u to first order.
	u, low := TwoSum(1, x)
	f, exponent := math.Frexp(u)
	if f < math.Sqrt2/2 {
		f *= 2
		exponent--
	}
	return logReduced(f-1, float64(exponent), low/u)
}

// logReduced returns k ln2 + log(1+f) + c for sqrt(1/2) <= 1+f < sqrt(2) and |c| of an
// ulp at most:
//
//	log(1+f) = f - f^2/2 + s (f^2/2 + R), s = f/(2+f), R a polynomial in s^2.
func logReduced(f, k, c float64) float64 {
	const (
		l1 = 6.666666666666735130e-01
		l2 = 3.999999999940941908e-01
		l3 = 2.857142874366239149e-01
		l4 = 2.222219843214978396e-01
		l5 = 1.818357216161805012e-01
		l6 = 1.531383769920937332e-01
		l7 = 1.479819860511658591e-01
	)
	s := f / (2 + f)
	z := s * s
	r := float64(z * math.FMA(z, math.FMA(z, math.FMA(z, math.FMA(z, math.FMA(z, math.FMA(z, l7, l6), l5), l4), l3), l2), l1))
	half := float64(0.5 * f * f)
	if k == 0 {
		return f - (half - (float64(s*(half+r)) + c))
	}
	return float64(k*ln2Hi) - ((half - (float64(s*(half+r)) + (float64(k*ln2Lo) + c))) - f)
}
