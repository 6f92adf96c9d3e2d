// Package breakup holds the kinematics of a system that breaks up into bodies: a
// decaying particle, or a beam with its target. It works in double-double (see
// num.DD) from exact inputs, so that what packages reaction and decay round at the
// end has all the digits of a double also near threshold, at the largest angle and
// for a body nearly at rest in the laboratory.
//
// In formulas: W, E, P are the mass, laboratory energy and laboratory momentum of the
// system; m is the mass of the body in question and m' that of the rest; p*, E*, T*
// are its momentum, total and kinetic energy in the rest frame of the system and
// theta* its angle there from the direction of P.
//
// Units are GeV with c = 1 and radians. Masses are 0 or within 1e-30..1e30; so are
// momenta and energies. Callers check that.
package breakup

import "example.org/kinegate/kinematics/num"

// Range is a closed range.
type Range struct{ Min, Max float64 }

// System is a body, or several, as a whole.
type System struct {
	// W is the mass, E the laboratory energy and P >= 0 the laboratory momentum.
	W, E, P num.DD
	// T is the laboratory kinetic energy E - W.
	T num.DD
}

// NewSystem returns the system of mass w > 0 and momentum p >= 0:
//
//	E = sqrt(W^2 + P^2),  T = P^2/(E + W)
//
// so that E - W is never formed.
func NewSystem(w, p num.DD) System {
	square := p.Square()
	e := w.Square().Add(square).Sqrt()
	return System{W: w, E: e, P: p, T: square.Div(e.Add(w))}
}

// Sum returns the exact sum of doubles, rounded to a double-double: its relative
// error is below 2^-100 however the terms cancel, and a zero is exact.
func Sum(terms ...float64) num.DD {
	var words [16]float64
	sum := num.Expansion(words[:0])
	for _, x := range terms {
		sum = sum.Add(x)
	}
	return sum.DD()
}

// Momentum returns the momentum of two bodies of masses a and b in the rest frame of
// their total mass w > 0, from over = w^2 - (a+b)^2:
//
//	p* = sqrt(over (over + 4ab)) / (2w)
//
// The Kallen function in this form has only positive factors. over < 0 gives NaN.
//
// Source: E. Byckling and K. Kajantie, Particle Kinematics (1973), section II.6
// (from memory); Review of Particle Physics (2024), Kinematics, two-body decays.
func Momentum(over, w, a, b num.DD) num.DD {
	return over.Mul(over.Add(a.Mul(b).Scale(2))).Sqrt().Div(w).Scale(-1)
}

// Over returns w^2 - (a + b)^2 for the excess w - a - b, exactly signed: the product
// excess (w + a + b).
func Over(excess, w, a, b num.DD) num.DD { return excess.Mul(w.Add(a).Add(b)) }
