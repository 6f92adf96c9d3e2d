package num

import "math"

// ExpDD returns e^x for |x| <= 700 within 2^-96 relative; beyond that range it
// rounds to 0 or overflows as Exp does.
func ExpDD(x DD) DD {
	k, reduced := reduceLn2(x)
	return expm1Reduced(reduced).AddFloat(1).Scale(k)
}

// Expm1DD returns e^x - 1 for -700 <= x <= 700 within 2^-96 relative, also for small x.
//
// With x = k ln2 + r, |r| <= ln2/2, the answer is 2^k (1 + expm1 r) - 1; for k = 0
// nothing is subtracted.
func Expm1DD(x DD) DD {
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
	r := x.Sub(Prod2(k, Ln2().Hi)).Sub(Prod2(k, Ln2().Lo)).SubFloat(k * 0x1.7b57a079a1934p-111)
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

// LogDD returns the natural logarithm of x > 0 within 2^-94 relative, also near 1.
// Special cases: 0 gives -Inf, x < 0 gives NaN.
func LogDD(x DD) DD {
	if !(x.Hi > 0) || math.IsInf(x.Hi, 1) {
		return FromFloat(Log(x.Hi))
	}
	if x.Hi > 0.5 && x.Hi < 2 {
		return Log1pDD(x.SubFloat(1))
	}
	// With x = 2^e f, log x = e ln2 + log1p(f-1) with sqrt(1/2) <= f < sqrt(2).
	f, e := math.Frexp(x.Hi)
	if f < math.Sqrt2/2 {
		e--
	}
	rest := Log1pDD(x.Scale(-e).SubFloat(1))
	k := float64(e)
	return Prod2(k, Ln2().Hi).Add(Prod2(k, Ln2().Lo)).Add(rest)
}

// Log1pDD returns log(1+x) for x > -1 within 2^-94 relative, also for small x.
// Special cases: -1 gives -Inf, x < -1 gives NaN.
//
// One Newton step from the double y: with d = (x - expm1 y)/(1 + expm1 y), which is at
// most 2^-51 |y| or so, log(1+x) = y + log1p(d) = y + d - d^2/2 up to d^3.
func Log1pDD(x DD) DD {
	y := Log1p(x.Hi)
	if x.Hi == 0 || math.IsInf(y, 0) || math.IsNaN(y) {
		return FromFloat(y)
	}
	m := Expm1DD(FromFloat(y))
	d := x.Sub(m).Div(m.AddFloat(1))
	return d.SubFloat(float64(d.Hi*d.Hi) / 2).AddFloat(y)
}

// AsinhDD returns the inverse hyperbolic sine of |x| <= 1e150 within 2^-92 relative:
//
//	asinh x = log1p(x + x^2/(1 + sqrt(1+x^2))), odd in x.
func AsinhDD(x DD) DD {
	if x.Hi < 0 {
		return AsinhDD(x.Neg()).Neg()
	}
	square := x.Square()
	root := square.AddFloat(1).Sqrt()
	return Log1pDD(x.Add(square.Div(root.AddFloat(1))))
}

// AtanhDD returns the inverse hyperbolic tangent of |x| < 1 within 2^-92 relative:
//
//	atanh x = log1p(2x/(1-x))/2, odd in x.
//
// Special cases: +-1 gives +-Inf, |x| > 1 gives NaN.
func AtanhDD(x DD) DD {
	if x.Hi < 0 {
		return AtanhDD(x.Neg()).Neg()
	}
	rest := x.Neg().AddFloat(1)
	if !(rest.Sign() > 0) {
		return FromFloat(Atanh(x.Hi))
	}
	return Log1pDD(x.Scale(1).Div(rest)).Scale(-1)
}
