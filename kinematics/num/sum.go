package num

import "math"

// Sum3 returns a + b + c with a relative error of at most u + 3u^2, u = 2^-53, also
// where the sum cancels, and exactly 0 if the sum is 0.
//
// With s + e = a + b and t + f = s + c exactly, the answer is t + (e + f). If s and
// c cancel by more than half, f = 0 (Sterbenz' lemma) and e + f is exact, so that
// only the last addition rounds. Otherwise |t| >= |s|/2 and |e + f| <= 3u|t|, whose
// rounding adds at most 3u^2|t|.
//
// Overflow of an intermediate sum gives NaN or an infinity.
func Sum3(a, b, c float64) float64 {
	s, e := TwoSum(a, b)
	t, f := TwoSum(s, c)
	return t + (e + f)
}

// DiffOfProducts returns a*b - c*d with an error of at most 1.5 ulp of the result,
// also where the products cancel, and exactly 0 if they are equal. The domain is
// that of TwoProd for c*d.
//
// Source: C.-P. Jeannerod, N. Louvet, J.-M. Muller, Further analysis of Kahan's
// algorithm for the accurate computation of 2x2 determinants, Math. Comp. 82
// (2013) 2245, theorem 1.2.
func DiffOfProducts(a, b, c, d float64) float64 {
	w := float64(c * d)
	e := math.FMA(-c, d, w)
	f := math.FMA(a, b, -w)
	return f + e
}

// Dot returns the sum of x[i]*y[i] over the shorter of the two, as if computed in
// twice the working precision and then rounded:
//
//	|Dot - exact| <= u |exact| + (n u)^2 sum |x[i] y[i]|, approximately, u = 2^-53.
//
// Source: T. Ogita, S. M. Rump, S. Oishi, Accurate sum and dot product, SIAM J. Sci.
// Comput. 26 (2005) 1955, algorithm 5.3 and proposition 5.5.
func Dot(x, y []float64) float64 {
	n := min(len(x), len(y))
	var p, s float64
	for i := range n {
		h, r := TwoProd(x[i], y[i])
		var q float64
		p, q = TwoSum(p, h)
		s += q + r
	}
	return p + s
}
