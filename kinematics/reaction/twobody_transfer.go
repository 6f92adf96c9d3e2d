package reaction

import (
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

// ends returns the ends of t = (p1 - p3)^2 of m1 m2 -> m3 m4 at the total mass w, with
// the momenta of the initial and the final bodies in the centre-of-mass frame:
//
//	t = (E1* - E3*)^2 - (p1* -+ p3*)^2 = (a - b)(a + b)
//	a = E1* - E3* = (m1^2 - m3^2 - m2^2 + m4^2)/(2 sqrt(s))
//	b = p1* + p3*  (backward),  b = (p1*^2 - p3*^2)/(p1* + p3*)  (forward)
//	4s (p1*^2 - p3*^2) = 2s (m3^2 + m4^2 - m1^2 - m2^2)
//	                     + (m1^2 - m2^2 - m3^2 + m4^2)(m1^2 - m2^2 + m3^2 - m4^2)
//
// with every difference of squares in factors: elastic scattering gives a forward end
// of exactly 0.
//
// The last difference or sum can cancel: a +- b is known to 2^-94 of a, which leaves
// less than 2^-48 where t is below 2^-44 a^2 (high energy, different masses). There
//
//	t_forward t_backward = (m1^2 - m3^2)(m2^2 - m4^2)
//	    + (m1 m4 - m2 m3)(m1 m4 + m2 m3)(m1^2 + m4^2 - m2^2 - m3^2)/s
//
// gives the smaller end from the larger one, with an error of 2^-94 of the terms on
// the right over s t. Source of the latter: E. Byckling and K. Kajantie, Particle
// Kinematics (1973), chapter IV (from memory; it follows from the equation of the
// boundary of the physical region, which is quadratic in t).
func ends(w, m1, m2, m3, m4, initial, final num.DD) transferEnds {
	d13, d24 := squaresDifference(m1, m3), squaresDifference(m2, m4)
	d12, d34 := squaresDifference(m1, m2), squaresDifference(m3, m4)
	s := w.Square()
	top := d13.Sub(d24)
	a := top.Div(w).Scale(-1)
	far := initial.Add(final)
	backward := a.Sub(far).Mul(a.Add(far))
	var near num.DD
	if !far.IsZero() {
		gap := s.Mul(d13.Add(d24).Neg()).Scale(1).Add(top.Mul(d12.Add(d34)))
		near = gap.Div(s.Mul(far)).Scale(-2)
	}
	out := transferEnds{forward: a.Sub(near).Mul(a.Add(near)), backward: backward}
	cross, other := m1.Mul(m4), m2.Mul(m3)
	product := d13.Mul(d24).Add(squaresDifference(cross, other).Mul(d12.Sub(d34)).Div(s))
	size := a.Square().Hi
	switch {
	case undecided(out.forward.Hi, size) && !out.backward.IsZero():
		out.forward = product.Div(out.backward)
	case undecided(out.backward.Hi, size) && !out.forward.IsZero():
		out.backward = product.Div(out.forward)
	}
	return out
}

// squaresDifference returns a^2 - b^2 = (a-b)(a+b).
func squaresDifference(a, b num.DD) num.DD { return a.Sub(b).Mul(a.Add(b)) }
