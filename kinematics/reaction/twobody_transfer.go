package reaction

import (
	"math"

	"example.org/kinegate/kinematics/momentum/breakup"
	"example.org/kinegate/kinematics/num"
)

// TransferLimits are the ends of a squared four-momentum transfer t, in GeV^2, with
// its physical sign.
type TransferLimits struct {
	// Forward is the end where the products go along the initial body in the
	// centre-of-mass frame, the largest t; Backward is the other end.
	Forward, Backward float64
}

// transferEnds are the ends in double-double.
type transferEnds struct{ forward, backward num.DD }

func (e transferEnds) limits() TransferLimits {
	return TransferLimits{Forward: e.forward.Float(), Backward: e.backward.Float()}
}

// at returns t and t_forward - t at a direction from the initial body:
//
//	t = t_forward - 4 p p' sin^2(theta*/2) = t_backward + 4 p p' cos^2(theta*/2)
//
// from the nearer end; scale is 4 p p'.
func (e transferEnds) at(d breakup.Direction, scale num.DD) (t, prime float64) {
	distance := scale.Mul(d.Aft)
	if d.Forward() {
		return e.forward.Sub(distance).Float(), distance.Float()
	}
	return e.backward.Add(scale.Mul(d.Fore)).Float(), distance.Float()
}

// known is a value with a bound of its error.
type known struct {
	value num.DD
	bound float64
}

// better returns the one with the smaller bound, a in doubt.
func better(a, b known) known {
	if b.bound < a.bound {
		return b
	}
	return a
}

// factor bounds the relative error of what the forms of ends add and subtract: at most
// sixteen operations of 15u^2 or less, u = 2^-53, each.
const factor = 0x1p-98

// ends returns the ends of t = (p1 - p3)^2 of m1 m2 -> m3 m4 at the total mass w, with
// the momenta p and p' of the initial and the final bodies in the centre-of-mass frame.
// Three forms are compared by the bounds of their errors:
//
//	t = a^2 - b^2 = (a - b)(a + b)
//	  a = E1* - E3* = (m1^2 - m3^2 - m2^2 + m4^2)/(2w)
//	  b = p + p'  (backward),  b = (p^2 - p'^2)/(p + p')  (forward)
//	  4w^2 (p^2 - p'^2) = 2w^2 (m3^2 + m4^2 - m1^2 - m2^2)
//	                      + (m1^2 - m2^2 - m3^2 + m4^2)(m1^2 - m2^2 + m3^2 - m4^2)
//	t = m1^2 + m3^2 - 2(E1* E3* -+ p p'), the same with bodies 2 and 4
//	  E1* E3* - p p' = (m1^2 E3*^2 + m3^2 p^2)/(E1* E3* + p p')
//
// Differences of squares are in factors, so that elastic scattering has a forward end of
// exactly 0. Where one end is small beside the terms of all three, as at high energy for
// different masses, the other end gives it:
//
//	t_forward t_backward = (m1^2 - m3^2)(m2^2 - m4^2)
//	    + (m1 m4 - m2 m3)(m1 m4 + m2 m3)(m1^2 + m4^2 - m2^2 - m3^2)/w^2
//
// Source: Review of Particle Physics (2024), Kinematics, two-body scattering; the
// product: E. Byckling and K. Kajantie, Particle Kinematics (1973), chapter IV (from
// memory; it follows from the equation of the boundary, which is quadratic in t).
func ends(w, m1, m2, m3, m4, initial, final num.DD) transferEnds {
	d13, d24 := squaresDifference(m1, m3), squaresDifference(m2, m4)
	d12, d34 := squaresDifference(m1, m2), squaresDifference(m3, m4)
	s := w.Square()
	top := d13.Sub(d24)
	a := top.Div(w).Scale(-1)
	far := initial.Add(final)
	var near num.DD
	if !far.IsZero() {
		gap := s.Mul(d13.Add(d24).Neg()).Scale(1).Add(top.Mul(d12.Add(d34)))
		near = gap.Div(s.Mul(far)).Scale(-2)
	}
	forward, backward := squaresKnown(a, near), squaresKnown(a, far)
	for _, side := range [...][2]num.DD{{m1, m3}, {m2, m4}} {
		f, b := energiesKnown(side[0], side[1], initial, final)
		forward, backward = better(forward, f), better(backward, b)
	}
	cross := squaresDifference(m1.Mul(m4), m2.Mul(m3)).Mul(top).Div(s)
	straight := d13.Mul(d24)
	product := known{
		value: straight.Add(cross),
		bound: factor * (math.Abs(straight.Hi) + math.Abs(cross.Hi)),
	}
	return transferEnds{
		forward:  better(forward, product.over(backward)).value,
		backward: better(backward, product.over(forward)).value,
	}
}

// squaresKnown returns a^2 - b^2.
func squaresKnown(a, b num.DD) known {
	size := math.Abs(a.Hi) + math.Abs(b.Hi)
	return known{value: squaresDifference(a, b), bound: factor * size * size}
}

// energiesKnown returns the forward and the backward t from energies and momenta.
func energiesKnown(m, n, initial, final num.DD) (forward, backward known) {
	squareM, squareN := m.Square(), n.Square()
	squareP := initial.Square()
	energyM := squareM.Add(squareP)
	energyN := squareN.Add(final.Square())
	base := squareM.Add(squareN)
	sum := energyM.Mul(energyN).Sqrt().Add(initial.Mul(final))
	backward = known{value: base.Sub(sum.Scale(1)), bound: factor * (base.Hi + float64(2*sum.Hi))}
	if sum.IsZero() {
		return backward, backward
	}
	difference := squareM.Mul(energyN).Add(squareN.Mul(squareP)).Div(sum)
	forward = known{value: base.Sub(difference.Scale(1)), bound: factor * (base.Hi + float64(2*difference.Hi))}
	return forward, backward
}

// over returns the quotient, known no better than infinitely badly for a divisor that is
// not.
func (k known) over(other known) known {
	size := math.Abs(other.value.Hi)
	if !(size > 2*other.bound) {
		return known{bound: math.Inf(1)}
	}
	value := k.value.Div(other.value)
	return known{value: value, bound: k.bound/size + float64(math.Abs(value.Hi)*float64(2*other.bound/size+factor))}
}

// squaresDifference returns a^2 - b^2 = (a-b)(a+b).
func squaresDifference(a, b num.DD) num.DD { return a.Sub(b).Mul(a.Add(b)) }
