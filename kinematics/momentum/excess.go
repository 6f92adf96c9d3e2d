package momentum

import (
	"math"

	"example.org/kinegate/kinematics/num"
)

// Excess returns the energy above threshold of a total mass m and a set of masses,
// and on which side of the threshold m lies:
//
//	q = m - sum mi
//
// in GeV. The sum is exact and rounded once; At means equal exactly.
func Excess(m float64, masses ...float64) (float64, num.Side) {
	exact := num.Expansion{}.Add(m)
	for _, mi := range masses {
		exact = exact.Add(-mi)
	}
	return exact.Float(), exact.Side()
}

// ExcessS returns the same as Excess for a total mass squared s > 0 in GeV^2:
//
//	q = (s - (sum mi)^2) / (sqrt(s) + sum mi)
//
// within 5 x 2^-53 relative, with the right sign and an exact zero. The numerator
// comes from double-double where its bound leaves all digits, else from an exact
// expansion. Bound: the sum of n masses errs by at most 2n u^2 relative, its square
// by (4n+4)u^2, the difference by 2u^2 of itself; 4n+8 covers terms in u^3.
func ExcessS(s float64, masses ...float64) (float64, num.Side) {
	var sum num.DD
	for _, mi := range masses {
		sum = sum.AddFloat(mi)
	}
	square := sum.Square()
	gap := square.Neg().AddFloat(s)
	over := gap.Float()
	if !decided(gap.Hi, float64(4*len(masses)+8)*unit*unit*(square.Hi+s)) {
		over = gapExact(s, masses)
	}
	return over / (math.Sqrt(s) + sum.Hi), num.SideOf(over, 0)
}

// gapExact returns s - (sum mi)^2 by exact expansions.
func gapExact(s float64, masses []float64) float64 {
	var sum num.Expansion
	for _, mi := range masses {
		sum = sum.Add(mi)
	}
	return sum.Mul(sum).Neg().Add(s).Float()
}
