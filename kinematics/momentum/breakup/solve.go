package breakup

import (
	"math"

	"example.org/kinegate/kinematics/num"
)

// MaxAngle returns the largest laboratory angle from P of the body:
//
//	sin = W p*/(m P) where Carry is Above,  pi/2 where At,  pi where Below
//	tan = W p*/sqrt((mP)^2 - (Wp*)^2),  (mP)^2 - (Wp*)^2 = carry (mE + WE*)/2
//
// within 4e-16 relative: the difference under the root is never formed.
func (l *Leg) MaxAngle() float64 {
	switch l.Carry() {
	case num.Above:
		beside := l.carry.Mul(l.mass.Mul(l.sys.E).Add(l.sys.W.Mul(l.energy))).Scale(-1).Sqrt()
		return num.Atan2(l.sys.W.Mul(l.momentum).Float(), beside.Float())
	case num.At:
		if !l.mass.IsZero() && !l.sys.P.IsZero() {
			return math.Pi / 2
		}
	case num.Below:
	}
	return math.Pi
}

// AtLabAngle returns the directions in the rest frame that lead to the laboratory
// angle theta within 0..pi, from P or, if against, from -P: none beyond the largest
// angle, one or two, the one with the largest laboratory momentum first.
//
// The laboratory momentum solves
//
//	(W^2 + P^2 sin^2) p^2 - 2 W E* P cos p + carry (mE + WE*)/2 = 0
//	p = (W E* P cos +- E sqrt(D)) / (W^2 + P^2 sin^2),  D = (Wp*)^2 - (m P sin)^2
//
// with the root of smaller magnitude from the product of both. D is a product of two
// factors where Carry is Above and else the sum
// (m P cos)^2 - carry (mE + WE*)/2 of positive terms. An angle that equals MaxAngle as
// a double counts as the largest one itself, where D = 0.
//
// Source: E. Byckling and K. Kajantie, Particle Kinematics (1973), section III.4
// (from memory).
func (l *Leg) AtLabAngle(theta float64, against bool) []Direction {
	sin, cos := num.FromFloat(theta).Sincos()
	if theta == math.Pi { // The double next to pi stands for pi.
		sin, cos = num.DD{}, num.FromFloat(-1)
	}
	if against {
		cos, theta = cos.Neg(), math.Pi-theta
	}
	if l.momentum.IsZero() {
		return l.atThreshold(theta, sin, cos)
	}
	product := l.carry.Mul(l.mass.Mul(l.sys.E).Add(l.sys.W.Mul(l.energy))).Scale(-1)
	mp, wp := l.mass.Mul(l.sys.P), l.sys.W.Mul(l.momentum)
	var square num.DD
	if l.Carry() == num.Above {
		if cos.Sign() <= 0 {
			return nil
		}
		across := mp.Mul(sin)
		square = wp.Sub(across).Mul(wp.Add(across))
		if square.Sign() < 0 && theta == l.MaxAngle() {
			square = num.DD{}
		}
	} else {
		square = mp.Mul(cos).Square().Sub(product)
	}
	if square.Sign() < 0 {
		return nil
	}
	middle := l.sys.W.Mul(l.energy).Mul(l.sys.P).Mul(cos)
	root := l.sys.E.Mul(square.Sqrt())
	leading := l.sys.W.Square().Add(l.sys.P.Mul(sin).Square())
	if middle.Sign() < 0 { // Only Below leads here: the roots differ in sign.
		return l.withMomenta(sin, cos, product.Div(middle.Sub(root)))
	}
	sum := middle.Add(root)
	large := sum.Div(leading)
	if l.Carry() != num.Above || root.IsZero() {
		return l.withMomenta(sin, cos, large)
	}
	return l.withMomenta(sin, cos, large, product.Div(sum))
}

// atThreshold answers AtLabAngle for p* = 0: the body moves with the system, and
// all directions in the rest frame lead to the same motion.
func (l *Leg) atThreshold(theta float64, sin, cos num.DD) []Direction {
	switch {
	case l.sys.P.IsZero():
		return []Direction{AtAngle(theta)}
	case sin.IsZero() && cos.Sign() > 0:
		return []Direction{Along()}
	}
	return nil
}

// withMomenta returns the directions of the bodies with the given positive laboratory
// momenta at one laboratory angle:
//
//	cos(theta*) = (W p cos - P E*)/(E p*),  sin(theta*) = p sin/p*
//
// of which the smaller half comes from the sine.
func (l *Leg) withMomenta(sin, cos num.DD, momenta ...num.DD) []Direction {
	out := make([]Direction, 0, 2)
	for _, p := range momenta {
		if p.Sign() <= 0 {
			continue
		}
		cosine := l.sys.W.Mul(p).Mul(cos).Sub(l.sys.P.Mul(l.energy)).Div(l.sys.E.Mul(l.momentum))
		quarter := p.Mul(sin).Div(l.momentum).Square().Scale(-2)
		large := cosine.Abs().AddFloat(1).Scale(-1)
		fore, aft := large, quarter.Div(large)
		if cosine.Sign() < 0 {
			fore, aft = aft, fore
		}
		if d, ok := Between(fore, aft); ok {
			out = append(out, d)
		}
	}
	return out
}

// AtLabKinetic returns the direction in the rest frame that leads to the laboratory
// kinetic energy t; ok is false where none does, and where the system is at rest so
// that all do.
//
//	cos^2(theta*/2) = (t - Tmin) W/(2Pp*),  sin^2(theta*/2) = (Tmax - t) W/(2Pp*)
//
// A value that rounds to the same double as an end of the range is that end.
func (l *Leg) AtLabKinetic(t num.DD) (d Direction, ok bool) {
	spread := l.sys.P.Mul(l.momentum).Div(l.sys.W).Scale(1)
	if spread.IsZero() {
		return Direction{}, false
	}
	least, most := l.Lab(Against()).Kinetic, l.Lab(Along()).Kinetic
	switch {
	case t.Float() == least.Float():
		return Against(), true
	case t.Float() == most.Float():
		return Along(), true
	}
	return Between(t.Sub(least).Div(spread), most.Sub(t).Div(spread))
}
