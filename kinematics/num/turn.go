package num

import "math"

// SincosTurn returns the sine and the cosine of an angle given in turns:
//
//	sin = sin(2 pi u), cos = cos(2 pi u)
//
// Domain: |u| < 2^50. The part of a quarter turn is split off exactly, so both
// are within 2 ulp of the result for every u, their zeros exact. Outside the
// domain and for NaN both are NaN.
//
// A random direction needs no larger angles and no other reduction than this
// one, and it has no branches that such angles would mispredict.
func SincosTurn(u float64) (sin, cos float64) {
	if !(math.Abs(u) < 1<<50) {
		return math.NaN(), math.NaN()
	}
	// 4u = k + f with |f| <= 1/2: multiplying by four and removing k are exact.
	quarters := float64(4 * u)
	whole := math.Floor(quarters + 0.5)
	x := float64((quarters - whole) * (math.Pi / 2))
	k := uint64(int64(whole)) //nolint:gosec // only its last two bits count
	s, c := math.Float64bits(sinKernel(x, 0)), math.Float64bits(cosKernel(x, 0))
	// Odd quarters swap sine and cosine; quarters 2, 3 turn the sine's sign and
	// 1, 2 that of the cosine.
	swap := (s ^ c) & -(k & 1)
	s ^= swap
	c ^= swap
	return math.Float64frombits(s ^ k&2<<62), math.Float64frombits(c ^ (k+1)&2<<62)
}
