package num

import "math"

// SincosTurn returns the sine and the cosine of an angle given in turns:
//
//	sin = sin(2 pi u), cos = cos(2 pi u)
//
// Domain: |u| < 2^48. The part of a quarter turn is split off exactly, so both
// are within 2 ulp of the result for every u, their zeros exact. Outside the
// domain and for NaN both are NaN.
//
// A random direction needs no larger angles and no other reduction than this
// one, and it has no branches that such angles would mispredict.
func SincosTurn(u float64) (sin, cos float64) {
	if !(math.Abs(u) < 1<<48) {
		return math.NaN(), math.NaN()
	}
	// 4u = k + f with |f| <= 1/2: multiplying by four and removing k are exact.
	// Adding 3 2^51 rounds to the whole number k, whose last bits are then those
	// of the sum.
	const shift = 3 << 51
	quarters := float64(4 * u)
	shifted := quarters + shift
	k := math.Float64bits(shifted)
	x := float64((quarters - (shifted - shift)) * (math.Pi / 2))
	// The polynomials of sinKernel and cosKernel, in plain products and sums, as a
	// joined product costs a test of the processor wherever it may lack the
	// instruction; three pairs of terms each, which it works on side by side.
	const (
		s1 = -1.66666666666666324348e-01
		s2 = 8.33333333332248946124e-03
		s3 = -1.98412698298579493134e-04
		s4 = 2.75573137070700676789e-06
		s5 = -2.50507602534068634195e-08
		s6 = 1.58969099521155010221e-10
		c1 = 4.16666666666666019037e-02
		c2 = -1.38888888888741095749e-03
		c3 = 2.48015872894767294178e-05
		c4 = -2.75573143513906633035e-07
		c5 = 2.08757232129817482790e-09
		c6 = -1.13596475577881948265e-11
	)
	z := float64(x * x)
	square := float64(z * z)
	fourth := float64(square * square)
	a := s1 + float64(z*s2) + float64(square*(s3+float64(z*s4))) + float64(fourth*(s5+float64(z*s6)))
	b := c1 + float64(z*c2) + float64(square*(c3+float64(z*c4))) + float64(fourth*(c5+float64(z*c6)))
	half := float64(0.5 * z)
	near := 1 - half
	// 1 - half is rounded; the bracket has its exact error.
	s := math.Float64bits(x + float64(x*z*a))
	c := math.Float64bits(near + ((1 - near - half) + float64(square*b)))
	// Odd quarters swap sine and cosine; quarters 2, 3 turn the sine's sign and
	// 1, 2 that of the cosine.
	swap := (s ^ c) & -(k & 1)
	s ^= swap
	c ^= swap
	return math.Float64frombits(s ^ k&2<<62), math.Float64frombits(c ^ (k+1)&2<<62)
}
