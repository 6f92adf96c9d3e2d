package num

import "math"

// atanhTerms is the number of terms of the series of atanh in Log and Log1p. With
// |z| <= 3 - 2 sqrt(2) = 0.17158 the first term left out is, relative to the sum,
//
//	z^42/43 / (1 - z^2) < 2^-112,
//
// far below the rounding of the sum itself.
const atanhTerms = 21

// Log returns the natural logarithm of x with relative error below 2^-98.
//
//	x = 2^e m, m in [sqrt(1/2), sqrt(2)): log(x) = e ln 2 + 2 atanh((m - 1)/(m + 1))
//
// Near x = 1 the exponent e is 0 and m - 1 is formed without loss, so the relative
// accuracy holds there too. Where e is not 0 the sum is at least half of its larger
// part, which bounds the loss of the addition.
//
// Domain: 2^-900 <= x <= 2^900, in which no intermediate word underflows. Special
// cases: log(1) = 0; x <= 0, NaN and infinities give NaN, except that 0 gives -Inf.
//
// Source: M. Abramowitz and I. A. Stegun, Handbook of Mathematical Functions (1964),
// 4.1.27 and 4.6.33.
func (x DD) Log() DD {
	switch {
	case x.Hi == 0:
		return DD{Hi: math.Inf(-1)}
	case !(x.Hi > 0) || math.IsInf(x.Hi, 1):
		return DD{Hi: math.NaN()}
	}
	fraction, exponent := math.Frexp(x.Hi)
	if fraction < 1/math.Sqrt2 {
		exponent--
	}
	m := x.Scale(-exponent)
	mantissa := twiceAtanh(m.SubFloat(1).Div(m.AddFloat(1)))
	if exponent == 0 {
		return mantissa
	}
	return Ln2().MulFloat(float64(exponent)).Add(mantissa)
}

// Log1p returns log(1 + w) with relative error below 2^-98, also for small w.
//
//	|w| <= 1/4: 2 atanh(w/(2 + w)); else Log of the rounded sum 1 + w
//
// A rounding of 1 + w by 2^-105 changes a logarithm of at least log(5/4) by less than
// 2^-102 of it.
//
// Domain: -1 < w <= 2^900, and |w| >= 2^-900 or w = 0. Special cases: log1p(0) = 0;
// w < -1 and NaN give NaN; w = -1 gives -Inf.
func (x DD) Log1p() DD {
	if math.Abs(x.Hi) <= 0.25 {
		return twiceAtanh(x.Div(x.AddFloat(2)))
	}
	return x.AddFloat(1).Log()
}

// twiceAtanh returns 2 atanh(z) for |z| <= 3 - 2 sqrt(2) by its power series
// 2 z (1 + z^2/3 + z^4/5 + ...), all terms of one sign.
func twiceAtanh(z DD) DD {
	square := z.Square()
	sum := Quo2(1, 2*atanhTerms-1)
	for n := atanhTerms - 2; n >= 0; n-- {
		sum = sum.Mul(square).Add(Quo2(1, float64(n+n+1)))
	}
	return sum.Mul(z).Scale(1)
}
