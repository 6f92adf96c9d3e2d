package num

import "math"

// Sincos returns the sine and cosine of x in radians, |x| <= 2^30, each within
// 2^-96 relative, also near their zeros. Beyond that range both are NaN.
func (x DD) Sincos() (sin, cos DD) {
	if !(math.Abs(x.Hi) <= 0x1p30) {
		return FromFloat(math.NaN()), FromFloat(math.NaN())
	}
	k, r := reduceHalfPi(x)
	s, c := sinReduced(r), cosReduced(r)
	switch k & 3 {
	case 0:
		return s, c
	case 1:
		return c, s.Neg()
	case 2:
		return s.Neg(), c.Neg()
	default:
		return c.Neg(), s
	}
}

// Sin returns the sine of x with the domain and accuracy of Sincos.
func (x DD) Sin() DD {
	s, _ := x.Sincos()
	return s
}

// Cos returns the cosine of x with the domain and accuracy of Sincos.
func (x DD) Cos() DD {
	_, c := x.Sincos()
	return c
}

// Tan returns the tangent of x with the domain of Sincos, within 2^-95 relative.
func (x DD) Tan() DD {
	s, c := x.Sincos()
	return s.Div(c)
}

// reduceHalfPi returns k and r = x - k pi/2 with |r| <= pi/4 about. The difference is
// formed exactly with pi/2 in five words (its error is k 2^-270), so r keeps its
// digits however near x lies to a multiple of pi/2.
func reduceHalfPi(x DD) (int, DD) {
	k := math.Floor(float64(x.Hi/HalfPi().Hi) + 0.5)
	if k == 0 {
		return 0, x
	}
	var words [16]float64
	r := append(Expansion(words[:0]), x.Lo).Add(x.Hi)
	if x.Lo == 0 {
		r = append(Expansion(words[:0]), x.Hi)
	}
	for _, word := range [...]float64{
		0x1.31d89cd9128a5p-218, 0x1.4cf98e804177dp-164, -0x1.f1976b7ed8fbcp-110,
		HalfPi().Lo, HalfPi().Hi,
	} {
		r = r.AddProduct(-k, word)
	}
	return int(k), r.DD()
}

// sinReduced returns sin r for |r| <= 0.8 by its Taylor series to the 29th power; the
// next term is 1e-36 of the first.
func sinReduced(r DD) DD {
	z := r.Square().Neg()
	sum := inverseFactorial(29)
	for k := 27; k >= 3; k -= 2 {
		sum = sum.Mul(z).Add(inverseFactorial(k))
	}
	return r.Add(sum.Mul(z).Mul(r))
}

// cosReduced returns cos r for |r| <= 0.8 by its Taylor series to the 28th power.
func cosReduced(r DD) DD {
	z := r.Square().Neg()
	sum := inverseFactorial(28)
	for k := 26; k >= 2; k -= 2 {
		sum = sum.Mul(z).Add(inverseFactorial(k))
	}
	return sum.Mul(z).AddFloat(1)
}

// Atan2 returns the angle of the point (abscissa, x) from the first axis within -pi..pi,
// within 2^-94 relative.
//
// One Newton step from the double t: sin(angle - t) = (x cos t - abscissa sin t)/length
// is at most 2^-51 or so, and equals its arc to the third order.
//
// Domain: both 0 or within 1e-100..1e100 in magnitude. Special cases: those of
// Atan2 for a zero, infinite or NaN argument, with pi and pi/2 to two words.
func (x DD) Atan2(abscissa DD) DD {
	t := Atan2(x.Hi, abscissa.Hi)
	switch {
	case math.IsNaN(t) || math.IsInf(abscissa.Hi, 0) || math.IsInf(x.Hi, 0):
		return FromFloat(t)
	case x.Hi == 0:
		if t == 0 {
			return FromFloat(t)
		}
		return withSign(Pi(), t)
	case abscissa.Hi == 0:
		return withSign(HalfPi(), t)
	}
	s, c := FromFloat(t).Sincos()
	length := abscissa.Square().Add(x.Square()).Sqrt()
	return x.Mul(c).Sub(abscissa.Mul(s)).Div(length).AddFloat(t)
}

// Atan returns the arc tangent of |x| <= 1e100 within 2^-94 relative.
func (x DD) Atan() DD { return x.Atan2(FromFloat(1)) }

// Asin returns the arc sine of |x| <= 1 within 2^-93 relative, by
// atan2(x, sqrt((1-x)(1+x))). |x| > 1 gives NaN.
func (x DD) Asin() DD { return x.Atan2(cofactor(x)) }

// Acos returns the arc cosine of |x| <= 1 within 2^-93 relative, also near 1, by
// atan2(sqrt((1-x)(1+x)), x). |x| > 1 gives NaN.
func (x DD) Acos() DD { return cofactor(x).Atan2(x) }

// cofactor returns sqrt((1-x)(1+x)), NaN for |x| > 1.
func cofactor(x DD) DD {
	return x.AddFloat(1).Mul(x.Neg().AddFloat(1)).Sqrt()
}

// withSign returns |x| with the sign of s.
func withSign(x DD, s float64) DD {
	if s < 0 {
		return x.Neg()
	}
	return x
}
