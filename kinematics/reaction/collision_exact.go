package reaction

import "example.org/kinegate/kinematics/num"

// overSquare returns s - (sum of masses)^2 exactly, rounded to a double-double.
func overSquare(s float64, masses []float64) num.DD {
	var sum num.Expansion
	for _, m := range masses {
		sum = sum.Add(m)
	}
	return sum.Mul(sum).Neg().Add(s).DD()
}

// overBody returns s - (sum of masses)^2 for a body on a target at rest, by exact
// expansions. With q = m1 + m2 - sum of masses and r = m1 + m2 + sum of masses:
//
//	2 m2 T1 + q r                                        for a kinetic or total energy
//	(4 m2^2 (p1^2 + m1^2) - c^2)/(2 m2 E1 - c),  c = q r - 2 m1 m2   for a momentum
//
// The latter is 2 m2 E1 + c times its conjugate; c < 0 where this is called, since the
// sum has nearly cancelled.
func overBody(body Body, target float64, masses []float64) num.DD {
	q := num.Expansion{}.Add(body.Mass).Add(target)
	r := num.Expansion{}.Add(body.Mass).Add(target)
	for _, m := range masses {
		q, r = q.Add(-m), r.Add(m)
	}
	shift := q.Mul(r)
	switch body.Given {
	case ByKinetic:
		return shift.AddProduct(2*target, body.Value).DD()
	case ByTotal:
		return shift.AddProduct(2*target, body.Value).AddProduct(-2*target, body.Mass).DD()
	case ByMomentum:
	}
	c := shift.AddProduct(-2*target, body.Mass)
	energySquare := num.Expansion{}.AddProduct(body.Value, body.Value).AddProduct(body.Mass, body.Mass)
	top := energySquare.Scale(2 * target).Scale(2 * target).Sum(c.Mul(c).Neg())
	_, _, energy := body.motion()
	return top.DD().Div(energy.MulFloat(2 * target).Sub(c.DD()))
}
