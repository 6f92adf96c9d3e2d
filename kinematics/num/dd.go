package num

import "math"

// DD is a double-double: the unevaluated sum Hi + Lo of two doubles, with
// |Lo| <= ulp(Hi)/2, about 106 significand bits. The zero value is 0.
//
// In the bounds below u = 2^-53. They hold while no intermediate value overflows
// or falls under 2^-969 (see TwoProd); results are relative to the exact value.
// Each bound is that of the cited theorem, proven for round to nearest.
//
// Sources: T. J. Dekker, Numer. Math. 18 (1971) 224; M. Joldes, J.-M. Muller,
// V. Popescu, Tight and rigorous error bounds for basic building blocks of
// double-word arithmetic, ACM Trans. Math. Softw. 44 (2017) 15, here [JMP].
type DD struct{ Hi, Lo float64 }

// FromFloat returns x as a double-double, exactly.
func FromFloat(x float64) DD { return DD{Hi: x} }

// Sum2 returns a + b exactly (see TwoSum).
func Sum2(a, b float64) DD {
	s, e := TwoSum(a, b)
	return DD{s, e}
}

// Prod2 returns a * b exactly in the domain of TwoProd.
func Prod2(a, b float64) DD {
	p, e := TwoProd(a, b)
	return DD{p, e}
}

// Quo2 returns a / b with relative error below 2u^2 ([JMP] algorithm 15 with a
// one-word dividend: the remainder is exact and its quotient is rounded once).
// b = 0 gives an infinite or NaN Hi.
func Quo2(a, b float64) DD {
	q := a / b
	r := math.FMA(-q, b, a)
	h, l := FastTwoSum(q, r/b)
	return DD{h, l}
}

// Sqrt2 returns the square root of x >= 0 with relative error below 2u^2; x < 0
// gives NaN, 0 gives 0.
func Sqrt2(x float64) DD { return FromFloat(x).Sqrt() }

// Float returns x rounded to the nearest double.
func (x DD) Float() float64 { return x.Hi + x.Lo }

// IsZero reports whether x is exactly zero.
func (x DD) IsZero() bool { return x.Hi == 0 }

// Sign returns -1, 0 or +1 with the sign of x. NaN gives 0.
func (x DD) Sign() int {
	switch {
	case x.Hi > 0:
		return 1
	case x.Hi < 0:
		return -1
	}
	return 0
}

// Cmp compares x and y exactly and returns -1, 0 or +1. Both must be normalised,
// as all results of this package are.
func (x DD) Cmp(y DD) int {
	switch {
	case x.Hi < y.Hi || (x.Hi == y.Hi && x.Lo < y.Lo):
		return -1
	case x.Hi > y.Hi || (x.Hi == y.Hi && x.Lo > y.Lo):
		return 1
	}
	return 0
}

// Neg returns -x, exactly.
func (x DD) Neg() DD { return DD{-x.Hi, -x.Lo} }

// Abs returns |x|, exactly.
func (x DD) Abs() DD {
	if x.Hi < 0 {
		return x.Neg()
	}
	return x
}

// Scale returns x * 2^n, exactly while neither word underflows or overflows.
func (x DD) Scale(n int) DD { return DD{math.Ldexp(x.Hi, n), math.Ldexp(x.Lo, n)} }

// Add returns x + y with relative error below 3u^2 + 13u^3, also where the sum
// cancels ([JMP] algorithm 6, theorem 3.1).
func (x DD) Add(y DD) DD {
	sh, sl := TwoSum(x.Hi, y.Hi)
	th, tl := TwoSum(x.Lo, y.Lo)
	vh, vl := FastTwoSum(sh, sl+th)
	zh, zl := FastTwoSum(vh, tl+vl)
	return DD{zh, zl}
}

// Sub returns x - y with the bound of Add.
func (x DD) Sub(y DD) DD { return x.Add(y.Neg()) }

// AddFloat returns x + y with relative error below 2u^2 ([JMP] algorithm 4,
// theorem 2.2).
func (x DD) AddFloat(y float64) DD {
	sh, sl := TwoSum(x.Hi, y)
	zh, zl := FastTwoSum(sh, x.Lo+sl)
	return DD{zh, zl}
}

// SubFloat returns x - y with the bound of AddFloat.
func (x DD) SubFloat(y float64) DD { return x.AddFloat(-y) }

// Mul returns x * y with relative error below 4u^2 ([JMP] algorithm 12; the bound
// as sharpened by Muller and Rideau, ACM Trans. Math. Softw. 48 (2022) 9).
func (x DD) Mul(y DD) DD {
	ch, c1 := TwoProd(x.Hi, y.Hi)
	t := float64(x.Lo * y.Lo)
	t = math.FMA(x.Hi, y.Lo, t)
	t = math.FMA(x.Lo, y.Hi, t)
	zh, zl := FastTwoSum(ch, c1+t)
	return DD{zh, zl}
}

// Square returns x * x with the bound of Mul.
func (x DD) Square() DD { return x.Mul(x) }

// MulFloat returns x * y with relative error below 2u^2 ([JMP] algorithm 9,
// theorem 4.3).
func (x DD) MulFloat(y float64) DD {
	ch, c1 := TwoProd(x.Hi, y)
	zh, zl := FastTwoSum(ch, math.FMA(x.Lo, y, c1))
	return DD{zh, zl}
}

// Div returns x / y with relative error below 15u^2 + 56u^3 ([JMP] algorithm 17,
// theorem 6.1). y = 0 gives an infinite or NaN Hi.
func (x DD) Div(y DD) DD {
	th := x.Hi / y.Hi
	r := y.MulFloat(th)
	d := (x.Hi - r.Hi) + (x.Lo - r.Lo)
	zh, zl := FastTwoSum(th, d/y.Hi)
	return DD{zh, zl}
}

// DivFloat returns x / y with relative error below 3u^2 ([JMP] algorithm 15,
// theorem 5.1). y = 0 gives an infinite or NaN Hi.
func (x DD) DivFloat(y float64) DD {
	th := x.Hi / y
	ph, pl := TwoProd(th, y)
	d := (x.Hi - ph) - pl + x.Lo
	zh, zl := FastTwoSum(th, d/y)
	return DD{zh, zl}
}

// Sqrt returns the square root of x with relative error below 25/8 u^2
// (V. Lefevre, N. Louvet, J.-M. Muller, J. Picot, L. Rideau, Accurate calculation
// of Euclidean norms using double-word arithmetic, ACM Trans. Math. Softw. 49
// (2023) 1, algorithm 5). x < 0 gives NaN, 0 gives 0.
func (x DD) Sqrt() DD {
	if x.Hi == 0 {
		return DD{}
	}
	s := math.Sqrt(x.Hi)
	r := math.FMA(-s, s, x.Hi)
	zh, zl := FastTwoSum(s, (x.Lo+r)/(2*s))
	return DD{zh, zl}
}
