// Package momentum holds three- and four-momenta and what follows from them
// without losing digits: invariant masses, the Kallen function, two-body momenta,
// boosts, rotations, frames, and conversions between energy, momentum and
// velocity.
//
// Units are GeV with c = 1 and radians. Inputs are taken as exact doubles. Where a
// textbook form subtracts nearly equal numbers, the form used here is factored, and
// the comment says which subtraction it avoids.
package momentum

import (
	"math"

	"example.org/kinegate/kinematics/num"
)

// Four is a four-momentum with its energy E, in GeV.
type Four struct {
	P Three
	E float64
}

// WithMass returns the four-momentum of a particle of mass m >= 0 and momentum p:
//
//	E = sqrt(p^2 + m^2), within 3 x 2^-53 relative.
func WithMass(p Three, m float64) Four {
	return Four{p, math.Sqrt(p.Square() + float64(m*m))}
}

// Add returns a + b.
func (a Four) Add(b Four) Four { return Four{a.P.Add(b.P), a.E + b.E} }

// Sub returns a - b.
func (a Four) Sub(b Four) Four { return Four{a.P.Sub(b.P), a.E - b.E} }

// Neg returns -a.
func (a Four) Neg() Four { return Four{a.P.Neg(), -a.E} }

// Dot returns the invariant product a.b = Ea Eb - pa.pb as the correctly signed
// exact value rounded once where double-double suffices; see MassSquared for the
// ladder and the domain.
func (a Four) Dot(b Four) float64 {
	sum := num.Prod2(a.E, b.E).
		Sub(num.Prod2(a.P.X, b.P.X)).
		Sub(num.Prod2(a.P.Y, b.P.Y)).
		Sub(num.Prod2(a.P.Z, b.P.Z))
	// The products are exact; three additions of relative error 3u^2 each work on
	// partial sums of at most size.
	size := math.Abs(float64(a.E*b.E)) + math.Abs(float64(a.P.X*b.P.X)) +
		math.Abs(float64(a.P.Y*b.P.Y)) + math.Abs(float64(a.P.Z*b.P.Z))
	if decided(sum.Hi, 10*unit*unit*size) {
		return sum.Float()
	}
	return num.Expansion{}.AddProduct(a.E, b.E).AddProduct(-a.P.X, b.P.X).
		AddProduct(-a.P.Y, b.P.Y).AddProduct(-a.P.Z, b.P.Z).Float()
}

// unit is the unit roundoff 2^-53 of a double, written u in the error bounds.
const unit = 0x1p-53

// decided reports whether a value with the given absolute error bound has all the
// digits of a double: the bound is at most 2^-54 of it.
func decided(value, bound float64) bool { return math.Abs(value) >= 0x1p54*bound }
