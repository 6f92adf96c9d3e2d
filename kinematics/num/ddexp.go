package num

import "math"

// Exp returns e^x for |x| <= 700 within 2^-96 relative; beyond that range it
// rounds as the function Exp does.
func (x DD) Exp() DD {
	if !(math.Abs(x.Hi) <= 700) {
		return FromFloat(Exp(x.Hi))
	}
	k, reduced := reduceLn2(x)
	return expm1Reduced(reduced).AddFloat(1).Scale(k)
}

// Expm1 returns e^x - 1 for |x| <= 700 within 2^-96 relative, also for small x; beyond
// that range it rounds as the function Expm1 does.
//
// With x = k ln2 + r, |r| <= ln2/2, the answer is 2^k (1 + expm1 r) - 1; for k = 0
// nothing is subtracted.
func (x DD) Expm1() DD {
	if !(math.Abs(x.Hi) <= 700) {
		return FromFloat(Expm1(x.Hi))
	}
	k, reduced := reduceLn2(x)
	m := expm1Reduced(reduced)
	if k == 0 {
		return m
	}
	return m.AddFloat(1).Scale(k).SubFloat(1)
}

// reduceLn2 returns k and x - k ln2, |x - k ln2| <= ln2/2 about. ln2 stands in three
// words, so that the error is k 2^-163 and the additions' 3u^2 of the result.
func reduceLn2(x DD) (int, DD) {
	k := math.Floor(float64(x.Hi/Ln2().Hi) + 0.5)
	if k == 0 {
		return 0, x
	}
	// k times the first word is within 2^-53 of x.Hi, so that the difference of the
	// two exact values keeps all digits.
	r := x.Sub(Prod2(k, Ln2().Hi)).Sub(Prod2(k, Ln2().Lo)).SubFloat(float64(k * 0x1.7b57a079a1934p-111))
	return int(k), r
}

// expm1Reduced returns e^r - 1 for |r| <= 0.36: the Taylor series of r/32 (|r/32| <= 0.0113,
// terms to the 14th power: the next is 1e-41 of the first) and five doublings
// expm1(2t) = expm1(t)(2 + expm1(t)), which keep the relative error.
func expm1Reduced(r DD) DD {
	const doublings, terms = 5, 14
	t := r.Scale(-doublings)
	sum := inverseFactorial(terms)
	for k := terms - 1; k >= 2; k-- {
		sum = sum.Mul(t).Add(inverseFactorial(k))
	}
	m := sum.Mul(t).Mul(t).Add(t)
	for range doublings {
		m = m.Mul(m.AddFloat(2))
	}
	return m
}

// Asinh returns the inverse hyperbolic sine of |x| <= 1e150 within 2^-92 relative:
//
//	asinh x = log1p(x + x^2/(1 + sqrt(1+x^2))), odd in x.
func (x DD) Asinh() DD {
	if x.Hi < 0 {
		return x.Neg().Asinh().Neg()
	}
	square := x.Square()
	root := square.AddFloat(1).Sqrt()
	return x.Add(square.Div(root.AddFloat(1))).Log1p()
}

// Atanh returns the inverse hyperbolic tangent of |x| < 1 within 2^-92 relative:
//
//	atanh x = log1p(2x/(1-x))/2, odd in x.
//
// Special cases: +-1 gives +-Inf, |x| > 1 gives NaN.
func (x DD) Atanh() DD {
	if x.Hi < 0 {
		return x.Neg().Atanh().Neg()
	}
	rest := x.Neg().AddFloat(1)
	if rest.Sign() <= 0 {
		return FromFloat(Atanh(x.Hi))
	}
	return x.Scale(1).Div(rest).Log1p().Scale(-1)
}
