package reaction

import (
	"math"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/num"
)

// InitialKind tells how the particles on the left of a reaction meet.
type InitialKind uint8

// The kinds of initial state.
const (
	// Unstated: no energy is given. Thresholds are those of a beam on a target at rest.
	Unstated InitialKind = iota
	// BeamOnTarget: a beam along +z on a target at rest.
	BeamOnTarget
	// TwoBeams: two beams whose directions differ by an angle.
	TwoBeams
	// FourMomenta: two four-momenta in the frame of the caller.
	FourMomenta
	// TotalMass: sqrt(s) alone; the laboratory is the centre-of-mass frame.
	TotalMass
)

// InitialState says how the particles on the left of a reaction move. The zero value
// is unstated.
type InitialState struct {
	// Kind tells which of the other fields count.
	Kind InitialKind
	// Beam1 is the motion of the first particle on a target or of the first beam.
	Beam1 BeamMotion
	// Beam2 is the motion of the second beam.
	Beam2 BeamMotion
	// Angle is the angle between the directions of two beams in radians, within
	// [0, pi]; pi is head on.
	Angle float64
	// Momenta are the two four-momenta. The particle's mass wins over the energy, which
	// must agree with it within 1e-5 of its square.
	Momenta [2]momentum.Four
	// SqrtS is the total mass in GeV.
	SqrtS float64
}

// BeamMotion is one quantity of a beam particle's motion, in GeV.
type BeamMotion struct {
	// Given tells which quantity Value is.
	Given Given
	// Value is the quantity in GeV.
	Value float64
}

// body puts a mass to a motion.
func (m BeamMotion) body(mass float64) Body { return Body{Mass: mass, Given: m.Given, Value: m.Value} }

// Frame names the frame of the laboratory quantities, with its axes.
func (in *InitialState) Frame() string {
	switch in.Kind {
	case Unstated, BeamOnTarget:
		return "laboratory: target at rest, z along the beam"
	case TwoBeams:
		if in.Angle == 0 {
			return "laboratory: z along the beams"
		}
		return "laboratory: z along unit(p1) - unit(p2), x along unit(p1) + unit(p2)"
	case FourMomenta:
		return "frame of the given four-momenta"
	case TotalMass:
		return "centre of mass: z along the first particle"
	}
	return ""
}

// collide makes the collision of two particles of the given masses.
func (in *InitialState) collide(m1, m2 float64) (Collision, error) {
	switch in.Kind {
	case BeamOnTarget:
		return OnTarget(in.Beam1.body(m1), m2)
	case TwoBeams:
		return CollideAtAngle(in.Beam1.body(m1), in.Beam2.body(m2), in.Angle)
	case FourMomenta:
		for i, m := range [...]float64{m1, m2} {
			if err := onShell(in.Momenta[i], m, [...]string{"first", "second"}[i]); err != nil {
				return Collision{}, err
			}
		}
		return CollideMomenta(m1, in.Momenta[0].P, m2, in.Momenta[1].P)
	case TotalMass:
		if !(in.SqrtS >= m1+m2) {
			return Collision{}, fault.Number("sqrt_s_gev", in.SqrtS, ">= "+fault.Text(m1+m2)+", the sum of the initial masses").
				In("reaction.Describe")
		}
		return AtMass(m1, m2, in.SqrtS)
	case Unstated:
	}
	return Collision{}, fault.New(fault.Invalid, "initial_state", "none", "a beam on a target, two beams, "+
		"two four-momenta or sqrt(s)").In("reaction.Describe")
}

// onShell refuses a four-momentum whose energy is not that of its particle.
func onShell(p momentum.Four, mass float64, field string) error {
	const tolerance = 1e-5
	want := momentum.WithMass(p.P, mass).E
	if !(math.Abs(p.E-want) <= tolerance*want) {
		return fault.Number(field+".energy_gev", p.E, "within 1e-5 of "+fault.Text(want)+", sqrt(p^2 + m^2) of the particle").
			In("reaction.Describe")
	}
	return nil
}

// geometry is all that the threshold needs: the masses, the motion of the second
// particle, and the angle between the two directions.
type geometry struct {
	m1, m2   float64
	given    Given // how the second particle's motion is given, and so kept fixed
	p, t, e  num.DD
	sin, cos num.DD
	now      num.DD // total energy of the first particle, if stated
}

// geometry returns the fixed part of the initial state. It is false where no energy of
// the first particle can be varied: sqrt(s) alone, or a first particle at rest in given
// four-momenta, which has no direction.
func (in *InitialState) geometry(m1, m2 float64) (geometry, bool) {
	g := geometry{m1: m1, m2: m2, cos: num.FromFloat(1)}
	second := Body{Mass: m2}
	switch in.Kind {
	case Unstated:
	case BeamOnTarget:
		_, _, g.now = in.Beam1.body(m1).motion()
	case TwoBeams:
		_, _, g.now = in.Beam1.body(m1).motion()
		second = in.Beam2.body(m2)
		g.sin, g.cos = num.FromFloat(in.Angle).Sincos()
	case FourMomenta:
		a, b := in.Momenta[0].P, in.Momenta[1].P
		if (a == momentum.Three{}) {
			return g, false
		}
		_, _, g.now = motionOf(m1, a)
		g.p, g.t, g.e = motionOf(m2, b)
		if (b != momentum.Three{}) {
			g.sin, g.cos = angleBetween(a, b)
		}
		return g, g.e.Sign() > 0
	case TotalMass:
		return g, false
	}
	g.given = second.Given
	g.p, g.t, g.e = second.motion()
	return g, g.e.Sign() > 0
}

// motionOf returns momentum, kinetic and total energy of a particle.
func motionOf(mass float64, p momentum.Three) (length, kinetic, energy num.DD) {
	square := num.Prod2(p.X, p.X).Add(num.Prod2(p.Y, p.Y)).Add(num.Prod2(p.Z, p.Z))
	energy = square.Add(num.Prod2(mass, mass)).Sqrt()
	if energy.Sign() > 0 {
		kinetic = square.Div(energy.AddFloat(mass))
	}
	return square.Sqrt(), kinetic, energy
}

// angleBetween returns sine and cosine of the angle between two vectors other than 0.
func angleBetween(a, b momentum.Three) (sin, cos num.DD) {
	difference := func(p, q, r, s float64) num.DD { return num.Prod2(p, q).Sub(num.Prod2(r, s)) }
	x := difference(a.Y, b.Z, a.Z, b.Y)
	y := difference(a.Z, b.X, a.X, b.Z)
	z := difference(a.X, b.Y, a.Y, b.X)
	across := x.Square().Add(y.Square()).Add(z.Square()).Sqrt()
	along := num.Prod2(a.X, b.X).Add(num.Prod2(a.Y, b.Y)).Add(num.Prod2(a.Z, b.Z))
	length := across.Square().Add(along.Square()).Sqrt()
	return across.Div(length), along.Div(length)
}
