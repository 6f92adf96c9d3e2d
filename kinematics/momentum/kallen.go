package momentum

import (
	"example.org/kinegate/kinematics/num"
)

// Kallen returns the Kallen triangle function of three masses in four factors, in
// GeV^4:
//
//	lambda(M^2, a^2, b^2) = (M-a-b)(M+a+b)(M-a+b)(M+a-b)
//
// Each factor is exact to one rounding also where it cancels (see num.Sum3), so the
// answer is within 8 x 2^-53 relative whatever the masses, and exactly 0 at M = a+b.
// It is negative where the masses form a triangle with a non-zero area, that is
// below threshold. The expanded form M^4 + a^4 + ... would lose all digits there.
//
// Domain: masses 0 or within 1e-75..1e75 GeV.
// Source: G. Kallen, Elementary Particle Physics (1964), appendix; E. Byckling and
// K. Kajantie, Particle Kinematics (1973), equations II.6.2 and II.6.8.
func Kallen(M, a, b float64) float64 { //nolint:gocritic // the trade's letters
	return num.Sum3(M, -a, -b) * num.Sum3(M, a, b) * (num.Sum3(M, -a, b) * num.Sum3(M, a, -b))
}

// KallenSquares returns the Kallen function of three squares, in the unit of their
// square:
//
//	lambda(a, b, c) = (a - b - c)^2 - 4bc
//
// The answer is that of the exact inputs, rounded: its relative error is below
// 2^-53 + 2^-54, its sign is right and a zero is exact.
//
// Domain: |a|, |b|, |c| 0 or within 1e-60..1e75.
//
// The ladder: double-double; where its bound does not leave all digits of a double,
// an exact expansion. Bound: a-b is exact, a-b-c has relative error 2u^2, its square
// (2*2 + 4)u^2 = 8u^2, 4bc none, the difference 3u^2 of itself: at most
// 11u^2 ((a-b-c)^2 + 4|bc|) altogether; 12 covers terms in u^3.
func KallenSquares(a, b, c float64) float64 {
	square := num.Sum2(a, -b).SubFloat(c).Square()
	product := num.Prod2(b, 4*c)
	lambda := square.Sub(product)
	if decided(lambda.Hi, 12*unit*unit*(square.Hi+product.Abs().Hi)) {
		return lambda.Float()
	}
	return num.Expansion{}.AddProduct(a, a).AddProduct(b, b).AddProduct(c, c).
		AddProduct(-2*a, b).AddProduct(-2*a, c).AddProduct(-2*b, c).Float()
}
