package momentum

import (
	"math"

	"example.org/kinegate/kinematics/num"
)

// MassSquared returns the invariant mass squared of the sum of four-momenta with
// given energies, in GeV^2:
//
//	m^2 = (sum E)^2 - (sum px)^2 - (sum py)^2 - (sum pz)^2
//
// The answer is that of the exact inputs, rounded: its relative error is below
// 2^-53 + 2^-54, its sign is right and a zero is exact, whatever cancels. It is
// negative for a space-like sum.
//
// Domain: components 0 or within 1e-60..1e75 GeV in magnitude.
//
// The ladder: double-double first; where its bound does not leave all digits of a
// double, exact expansions (see num.Expansion).
//
//	Bound: n terms summed as double-double err by at most 2(n-1)u^2 A, A the sum of
//	magnitudes; a square adds 2A times that and 4u^2 A^2; the three subtractions add
//	9u^2 of the sum of squares. With B = sum of the four A^2, the total is at most
//	(4n + 9)u^2 B; 4n + 10 covers terms in u^3 and the rounding of B.
func MassSquared(momenta ...Four) float64 {
	var e, x, y, z num.DD
	var size Four
	for i := range momenta {
		p := &momenta[i]
		e, x, y, z = e.AddFloat(p.E), x.AddFloat(p.P.X), y.AddFloat(p.P.Y), z.AddFloat(p.P.Z)
		size.E += math.Abs(p.E)
		size.P.X += math.Abs(p.P.X)
		size.P.Y += math.Abs(p.P.Y)
		size.P.Z += math.Abs(p.P.Z)
	}
	m2 := e.Square().Sub(x.Square()).Sub(y.Square()).Sub(z.Square())
	squares := float64(size.E*size.E) + size.P.Square()
	bound := float64(4*len(momenta)+10) * unit * unit * squares
	if decided(m2.Hi, bound) || squares == 0 {
		return m2.Float()
	}
	return massSquaredExact(momenta)
}

// massSquaredExact is MassSquared by exact expansions.
func massSquaredExact(momenta []Four) float64 {
	var e, x, y, z num.Expansion
	for i := range momenta {
		p := &momenta[i]
		e, x, y, z = e.Add(p.E), x.Add(p.P.X), y.Add(p.P.Y), z.Add(p.P.Z)
	}
	return e.Mul(e).Sum(x.Mul(x).Neg()).Sum(y.Mul(y).Neg()).Sum(z.Mul(z).Neg()).Float()
}

// Mass returns the square root of a mass squared and whether there is one; it is
// absent where the square is negative.
func Mass(squared float64) (m float64, ok bool) {
	if squared >= 0 {
		return math.Sqrt(squared), true
	}
	return 0, false
}
