package breakup

import (
	"math"

	"example.org/kinegate/kinematics/num"
)

// Leg is one body of a system that breaks up in two (the other may be several bodies
// taken together).
type Leg struct {
	sys System
	// mass, and momentum, total and kinetic energy in the rest frame of the system.
	mass, momentum, energy, kinetic num.DD
	// carry is 2mE - 2WE*: see Carry.
	carry num.DD
	// front and back are the laboratory momenta along P at theta* = 0 and pi; front
	// is never negative.
	front, back num.DD
}

// NewLeg returns the leg of a body of the given mass where the rest has mass rest and
// over = W^2 - (mass+rest)^2 >= 0.
//
//	T* = q (q + 2m')/(2W),  q = W - m - m' = over/(W + m + m')
//	2mE - 2WE* = 2mT - q (q + 2m'),  T = E - W
func NewLeg(sys System, over, mass, rest num.DD) Leg {
	released := releasedInto(sys, over, mass, rest)
	carry := settle(mass.Mul(sys.T).Scale(1), released.Neg())
	return legFrom(sys, Momentum(over, sys.W, mass, rest), mass, released.Div(sys.W).Scale(-1), carry)
}

// NewLegOnTarget returns the same as NewLeg where the system is a beam of mass beam
// and kinetic energy t on a target at rest; q0 = beam + target - mass - rest exactly.
//
//	2mE - 2WE* = 2t(mass - target) - q0 (beam + target - mass + rest)
//
// It is exactly zero for equal masses, where the general form leaves a rounding.
func NewLegOnTarget(sys System, over, mass, rest num.DD, beam, target float64, t, q0 num.DD) Leg {
	released := releasedInto(sys, over, mass, rest)
	pair := num.Sum2(beam, target)
	carry := settle(mass.SubFloat(target).Mul(t).Scale(1), q0.Mul(pair.Sub(mass).Add(rest)).Neg())
	return legFrom(sys, Momentum(over, sys.W, mass, rest), mass, released.Div(sys.W).Scale(-1), carry)
}

// releasedInto returns 2WT* = q (q + 2m').
func releasedInto(sys System, over, mass, rest num.DD) num.DD {
	q := over.Div(sys.W.Add(mass).Add(rest))
	return q.Mul(q.Add(rest.Scale(1)))
}

// NewLegAt returns the leg of a body of the given mass and rest-frame momentum.
//
//	2mE - 2WE* = 2 (mP - Wp*)(mP + Wp*) / (mE + WE*)
func NewLegAt(sys System, mass, momentum num.DD) Leg {
	square := momentum.Square()
	energy := mass.Square().Add(square).Sqrt()
	kinetic := num.DD{}
	if !energy.IsZero() {
		kinetic = square.Div(energy.Add(mass))
	}
	mp, wp := mass.Mul(sys.P), sys.W.Mul(momentum)
	carry := num.DD{}
	if scale := mass.Mul(sys.E).Add(sys.W.Mul(energy)); !scale.IsZero() {
		carry = settle(mp, wp.Neg()).Mul(mp.Add(wp)).Div(scale).Scale(1)
	}
	return legFrom(sys, momentum, mass, kinetic, carry)
}

// settle returns a + b, and exactly 0 where the sum lies within the bound of what the
// two were rounded by: each comes out of at most 16 operations of relative error
// below 15u^2 + ..., together below 2^-97 of the larger.
func settle(a, b num.DD) num.DD {
	sum := a.Add(b)
	if math.Abs(sum.Hi) <= 0x1p-96*(math.Abs(a.Hi)+math.Abs(b.Hi)) {
		return num.DD{}
	}
	return sum
}

// legFrom fills the ends:
//
//	front = (E p* + P E*)/W
//	back  = (P E* - E p*)/W = (2mE - 2WE*)(2mE + 2WE*) / (4W (P E* + E p*))
//
// the latter by E^2 - P^2 = W^2, which turns its difference into carry.
func legFrom(sys System, momentum, mass, kinetic, carry num.DD) Leg {
	leg := Leg{
		sys: sys, mass: mass, momentum: momentum,
		energy: mass.Add(kinetic), kinetic: kinetic, carry: carry,
	}
	sum := sys.E.Mul(momentum).Add(sys.P.Mul(leg.energy))
	leg.front = sum.Div(sys.W)
	if !sum.IsZero() {
		both := mass.Mul(sys.E).Add(sys.W.Mul(leg.energy))
		leg.back = carry.Mul(both).Div(sum.Mul(sys.W)).Scale(-1)
	}
	return leg
}

// Mass returns the mass of the body.
func (l *Leg) Mass() num.DD { return l.mass }

// Momentum returns p*.
func (l *Leg) Momentum() num.DD { return l.momentum }

// Energy returns E*.
func (l *Leg) Energy() num.DD { return l.energy }

// Kinetic returns T*.
func (l *Leg) Kinetic() num.DD { return l.kinetic }

// Carry tells whether the motion of the system outruns the body: Above where the body
// goes along P even when thrown backward (then its laboratory angle has a maximum
// below pi/2 and two momenta share each angle), At where it then comes to rest, Below
// where it then goes backward.
//
//	the sign of 2mE - 2WE*, which is that of P/E - p*/E*
func (l *Leg) Carry() num.Side { return num.SideOf(l.carry.Hi, 0) }

// Lab is the motion of a body in the laboratory.
type Lab struct {
	// Along and Across are the momentum along P and across it.
	Along, Across num.DD
	// Momentum, Kinetic and Energy.
	Momentum, Kinetic, Energy num.DD
}

// Angle returns the angle from P in radians. A body at rest has none; the limit along
// the curve of all directions, pi/2, stands for it.
func (l *Lab) Angle() float64 {
	if l.Momentum.IsZero() {
		return math.Pi / 2
	}
	return num.Atan2(l.Across.Float(), l.Along.Float())
}

// Lab returns the motion in the laboratory of the body thrown at d:
//
//	along  = back + 2 E p* cos^2(theta*/2)/W = front - 2 E p* sin^2(theta*/2)/W
//	across = p* sin(theta*)
//	T      = p^2/(E + m)
//
// The end is the nearer one, so that a body thrown backward keeps its digits.
func (l *Leg) Lab(d Direction) Lab {
	across := l.momentum.Mul(d.Sine())
	along := l.along(d)
	square := along.Square().Add(across.Square())
	energy := l.mass.Square().Add(square).Sqrt()
	lab := Lab{Along: along, Across: across, Energy: energy, Momentum: square.Sqrt()}
	if !energy.IsZero() {
		lab.Kinetic = square.Div(energy.Add(l.mass))
	}
	return lab
}

func (l *Leg) along(d Direction) num.DD {
	swing := l.sys.E.Mul(l.momentum).Div(l.sys.W).Scale(1)
	if d.Forward() {
		return l.front.Sub(swing.Mul(d.Aft))
	}
	return l.back.Add(swing.Mul(d.Fore))
}

// Jacobian returns the ratio of solid angles rest frame over laboratory at d,
//
//	dOmega*/dOmega = p^3 W / (p*^2 |E p* + P E* cos(theta*)|)
//
// where p is the laboratory momentum. Special cases: +Inf at the largest laboratory
// angle and at threshold of a moving system, 0 for a body at rest in the laboratory.
//
// Source: E. Byckling and K. Kajantie, Particle Kinematics (1973), section III.4
// (from memory).
func (l *Leg) Jacobian(d Direction) float64 {
	if l.momentum.IsZero() && l.sys.P.IsZero() {
		return 1
	}
	p := l.Lab(d).Momentum
	flat := l.momentum.Square().Mul(l.slope(d)).Abs()
	switch {
	case p.IsZero():
		return 0
	case flat.IsZero():
		return math.Inf(1)
	}
	return p.Square().Mul(p).Mul(l.sys.W).Div(flat).Float()
}

// slope returns E p* + P E* cos(theta*), again from the nearer end:
//
//	W front - 2 P E* sin^2(theta*/2) = 2 P E* cos^2(theta*/2) - W back
func (l *Leg) slope(d Direction) num.DD {
	swing := l.sys.P.Mul(l.energy).Scale(1)
	if d.Forward() {
		return l.sys.W.Mul(l.front).Sub(swing.Mul(d.Aft))
	}
	return swing.Mul(d.Fore).Sub(l.sys.W.Mul(l.back))
}
