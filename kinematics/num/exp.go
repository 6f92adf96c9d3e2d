package num

import "math"

// Words of ln 2: ln2Hi has 32 significant bits, so that k*ln2Hi is exact for the
// exponents k of doubles.
const (
	ln2Hi  = 6.93147180369123816490e-01
	ln2Lo  = 1.90821492927058770002e-10
	invLn2 = 1.44269504088896338700e+00
)

// Thresholds beyond which e^x overflows, and underflows to 0.
const (
	expOverflow  = 7.09782712893383973096e+02
	expUnderflow = -7.45133219101941108420e+02
)

// Exp returns e^x, within 1 ulp (0.94 measured).
//
// Special cases: +Inf gives +Inf, -Inf gives 0, NaN gives NaN; x > 709.78 gives +Inf,
// x < -745.13 gives 0.
//
// Source: FreeBSD e_exp.c by way of the Go standard library, see NOTICE: with
// x = k ln2 + r, e^r = 1 + 2r/(R - r), R = r (e^r+1)/(e^r-1) by a polynomial in r^2.
func Exp(x float64) float64 {
	switch {
	case math.IsNaN(x):
		return x
	case x > expOverflow:
		return math.Inf(1)
	case x < expUnderflow:
		return 0
	case math.Abs(x) < 0x1p-28:
		return 1 + x
	}
	k := math.Floor(float64(invLn2*x) + 0.5)
	return expReduced(x-float64(k*ln2Hi), k*ln2Lo, int(k))
}

// Exp2 returns 2^x, within 1 ulp.
//
// Special cases: +Inf gives +Inf, -Inf gives 0, NaN gives NaN; x >= 1024 gives +Inf,
// x < -1075 gives 0.
func Exp2(x float64) float64 {
	switch {
	case math.IsNaN(x):
		return x
	case x >= 1024:
		return math.Inf(1)
	case x < -1075:
		return 0
	}
	k := math.Floor(x + 0.5)
	t := x - k
	return expReduced(float64(t*ln2Hi), float64(-t*ln2Lo), int(k))
}

// expReduced returns 2^k e^(hi-lo) for |hi-lo| <= 0.36.
func expReduced(hi, lo float64, k int) float64 {
	r := hi - lo
	c := r - expRemainder(r*r)
	y := 1 - ((lo - (r*c)/(2-c)) - hi)
	return math.Ldexp(y, k)
}

// expRemainder returns R - 2 of Exp as a function of r^2, |r| <= ln2/2.
func expRemainder(t float64) float64 {
	const (
		p1 = 1.66666666666666657415e-01
		p2 = -2.77777777770155933842e-03
		p3 = 6.61375632143793436117e-05
		p4 = -1.65339022054652515390e-06
		p5 = 4.13813679705723846039e-08
	)
	return float64(t * math.FMA(t, math.FMA(t, math.FMA(t, math.FMA(t, p5, p4), p3), p2), p1))
}

// Expm1 returns e^x - 1, within 1 ulp (0.78 measured), also for small x.
//
// Special cases: +Inf gives +Inf, -Inf gives -1, +-0 gives +-0, NaN gives NaN.
//
// Source: FreeBSD s_expm1.c by way of the Go standard library, see NOTICE.
func Expm1(x float64) float64 {
	switch {
	case math.IsNaN(x) || math.Abs(x) < 0x1p-54:
		return x
	case x > expOverflow:
		return math.Inf(1)
	case x < -56*math.Ln2:
		return -1
	}
	// x = k ln2 + r with r in two words, r and c.
	k, r, c := 0.0, x, 0.0
	if math.Abs(x) > math.Ln2/2 {
		k = math.Floor(float64(invLn2*x) + 0.5)
		hi := x - float64(k*ln2Hi)
		lo := float64(k * ln2Lo)
		r = hi - lo
		c = (hi - r) - lo
	}
	half := float64(0.5 * r)
	square := float64(r * half)
	r1 := expm1Remainder(square)
	t := 3 - float64(r1*half)
	e := float64(square * ((r1 - t) / (6 - float64(r*t))))
	if k == 0 {
		return r - (float64(r*e) - square)
	}
	e = (float64(r*(e-c)) - c) - square
	// e^x - 1 = 2^k (1 + r - e) - 1; the order of additions depends on which is large.
	switch {
	case k == -1:
		return float64(0.5*(r-e)) - 0.5
	case k == 1 && r < -0.25:
		return -2 * (e - (r + 0.5))
	case k == 1:
		return 1 + float64(2*(r-e))
	case k < -1 || k > 56:
		return math.Ldexp(1-(e-r), int(k)) - 1
	case k < 20:
		return math.Ldexp((1-math.Ldexp(1, -int(k)))-(e-r), int(k))
	}
	return math.Ldexp((r-(e+math.Ldexp(1, -int(k))))+1, int(k))
}

// expm1Remainder is the rational part's polynomial of Expm1 in r^2/2.
func expm1Remainder(z float64) float64 {
	const (
		q1 = -3.33333333333331316428e-02
		q2 = 1.58730158725481460165e-03
		q3 = -7.93650757867487942473e-05
		q4 = 4.00821782732936239552e-06
		q5 = -2.01099218183624371326e-07
	)
	return math.FMA(z, math.FMA(z, math.FMA(z, math.FMA(z, math.FMA(z, q5, q4), q3), q2), q1), 1)
}
