package reaction

import (
	"math"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/momentum/breakup"
	"example.org/kinegate/kinematics/num"
)

// Given says which quantity of a body's motion a number is.
type Given = breakup.Given

// The three ways to give the motion of a body, all in GeV.
const (
	ByMomentum = breakup.ByMomentum
	ByKinetic  = breakup.ByKinetic
	ByTotal    = breakup.ByTotal
)

// Body is an initial body: its mass and one quantity of its motion, in GeV. The zero
// values of Given and Value stand for a body at rest.
type Body breakup.Body

func (b Body) motion() (p, t, e num.DD) { return breakup.Body(b).Motion() }

func (b Body) check(op, field string) error { return breakup.Body(b).Check(op, field) }

// Collision is two initial bodies and how they meet, held so that the energy above any
// threshold keeps all its digits. Its functions make it; the zero value is not useful.
type Collision struct {
	mass [2]float64
	// How the total mass is known: see over.
	known knowledge
	body  Body
	terms []float64
	// gap is (s - (m1+m2)^2)/2.
	gap num.DD
	sys breakup.System
	// tilt is the angle of the total momentum from z.
	tilt float64
	// collinear tells whether both bodies move along z in the laboratory, and
	// reversed whether the first then moves against z in the centre-of-mass frame.
	collinear, reversed bool
	// beam is the kinetic energy of the first body where the second is at rest.
	beam         num.DD
	targetAtRest bool
}

// knowledge is the quantity that carries the exact value of the total mass.
type knowledge uint8

const (
	// byGap: from the gap as a double-double.
	byGap knowledge = iota
	// byBody: from the motion of the first body on the second at rest.
	byBody
	// bySquare: terms[0] is s exactly.
	bySquare
	// bySum: sqrt(s) is the sum of terms exactly.
	bySum
)

// The magnitudes of masses, energies and momenta.
const (
	smallest = breakup.Smallest
	largest  = breakup.Largest
)

// checkSize refuses a number that is neither 0 nor within smallest..largest.
func checkSize(op, field string, x float64) error { return breakup.CheckSize(op, field, x) }

// OnTarget returns the collision of a beam along z with a target at rest. The frame of
// the laboratory is that of the target.
//
// Domain: masses 0 or within 1e-30..1e30 GeV, target > 0; energies and momenta
// likewise. Source of all that follows from a Collision: Review of Particle Physics
// (2024), Kinematics, two-body scattering; E. Byckling and K. Kajantie, Particle
// Kinematics (1973), chapters II to IV (section and equation numbers from memory).
func OnTarget(beam Body, target float64) (Collision, error) {
	const op = "reaction.OnTarget"
	if err := beam.check(op, "beam"); err != nil {
		return Collision{}, err
	}
	if !(target >= smallest && target <= largest) {
		return Collision{}, fault.Number("target.mass_gev", target, "within 1e-30..1e30").In(op)
	}
	p, t, _ := beam.motion()
	c := Collision{mass: [2]float64{beam.Mass, target}, known: byBody, body: beam, gap: t.MulFloat(target)}
	c.collinear, c.targetAtRest, c.beam = true, true, t
	return c.withMomentum(op, p)
}

// HeadOn returns the collision of a beam along z with one against z.
func HeadOn(beam1, beam2 Body) (Collision, error) {
	return CollideAtAngle(beam1, beam2, math.Pi)
}

// CollideAtAngle returns the collision of two beams whose directions differ by angle
// within 0..pi (pi, within 1e-15, is head on). The axes are those of
// momentum.BeamsAtAngle: z along unit(p1) - unit(p2), at angle 0 along the beams.
//
//	s = (m1+m2)^2 + 2D,  D = T1 T2 + T1 m2 + T2 m1 - p1 p2 cos(angle)
//
// Beams in the same direction lose up to the ratio of T1 T2 and D out of 2^100.
func CollideAtAngle(beam1, beam2 Body, angle float64) (Collision, error) {
	const op = "reaction.CollideAtAngle"
	for i, b := range [...]Body{beam1, beam2} {
		if err := b.check(op, [...]string{"beam_1", "beam_2"}[i]); err != nil {
			return Collision{}, err
		}
	}
	if !(angle >= 0 && angle <= math.Pi) {
		return Collision{}, fault.Number("angle_between_beams_rad", angle, ">= 0 and <= pi").In(op)
	}
	p1, _, _ := beam1.motion()
	p2, _, _ := beam2.motion()
	sin, cos := num.FromFloat(angle / 2).Sincos()
	switch {
	case math.Pi-angle <= 1e-15:
		sin, cos = num.FromFloat(1), num.DD{}
	case angle == 0:
		return collide(op, beam1, beam2, vector{z: p1}, vector{z: p2})
	}
	return collide(op, beam1, beam2,
		vector{x: p1.Mul(cos), z: p1.Mul(sin)}, vector{x: p2.Mul(cos), z: p2.Mul(sin).Neg()})
}

// CollideMomenta returns the collision of two bodies with the given masses and momenta
// in the frame of the caller.
func CollideMomenta(mass1 float64, p1 momentum.Three, mass2 float64, p2 momentum.Three) (Collision, error) {
	const op = "reaction.CollideMomenta"
	var bodies [2]Body
	var vectors [2]vector
	for i, p := range [...]momentum.Three{p1, p2} {
		field := [...]string{"first", "second"}[i]
		bodies[i] = Body{Mass: [...]float64{mass1, mass2}[i]}
		if err := bodies[i].check(op, field); err != nil {
			return Collision{}, err
		}
		for _, part := range [...]float64{p.X, p.Y, p.Z} {
			if err := checkSize(op, field+".momentum_gev", math.Abs(part)); err != nil {
				return Collision{}, err
			}
		}
		vectors[i] = vector{x: num.FromFloat(p.X), y: num.FromFloat(p.Y), z: num.FromFloat(p.Z)}
	}
	return collide(op, bodies[0], bodies[1], vectors[0], vectors[1])
}

// vector is a momentum in double-double.
type vector struct{ x, y, z num.DD }

func (a vector) dot(b vector) num.DD {
	return a.x.Mul(b.x).Add(a.y.Mul(b.y)).Add(a.z.Mul(b.z))
}

func (a vector) alongZ() bool { return a.x.IsZero() && a.y.IsZero() }

// collide puts two moving bodies together. A body's kinetic energy comes from its
// momentum unless the body itself gives it.
func collide(op string, b1, b2 Body, p1, p2 vector) (Collision, error) {
	t1, t2 := kineticOf(b1, p1), kineticOf(b2, p2)
	gap := t1.Mul(t2).Add(t1.MulFloat(b2.Mass)).Add(t2.MulFloat(b1.Mass)).Sub(p1.dot(p2))
	c := Collision{mass: [2]float64{b1.Mass, b2.Mass}, gap: gap}
	if gap.Sign() < 0 { // Rounding of exactly parallel, equally fast bodies.
		c.gap = num.DD{}
	}
	total := vector{x: p1.x.Add(p2.x), y: p1.y.Add(p2.y), z: p1.z.Add(p2.z)}
	across := total.x.Square().Add(total.y.Square())
	c.tilt = num.Atan2(across.Sqrt().Float(), total.z.Float())
	c.collinear = p1.alongZ() && p2.alongZ()
	if c.collinear {
		e1, e2 := t1.AddFloat(b1.Mass), t2.AddFloat(b2.Mass)
		c.reversed = p1.z.Mul(e2).Sub(p2.z.Mul(e1)).Sign() < 0
	}
	if p2.alongZ() && p2.z.IsZero() && b2.Mass > 0 && !c.reversed {
		c.targetAtRest, c.beam = true, t1
	}
	return c.withMomentum(op, across.Add(total.z.Square()).Sqrt())
}

func kineticOf(b Body, p vector) num.DD {
	if b.Value != 0 {
		_, t, _ := b.motion()
		return t
	}
	square := p.dot(p)
	m := num.FromFloat(b.Mass)
	e := square.Add(m.Square()).Sqrt()
	if e.IsZero() {
		return num.DD{}
	}
	return square.Div(e.Add(m))
}

// AtSquare returns the collision of two bodies with s = (total mass)^2 in GeV^2, seen
// in their centre-of-mass frame, the first along z.
func AtSquare(mass1, mass2, s float64) (Collision, error) {
	return inCentreOfMass("reaction.AtSquare", "s_gev2", mass1, mass2, bySquare, s)
}

// AtMass returns the same as AtSquare for sqrt(s) in GeV.
func AtMass(mass1, mass2, sqrtS float64) (Collision, error) {
	return inCentreOfMass("reaction.AtMass", "sqrt_s_gev", mass1, mass2, bySum, sqrtS)
}

// AtExcess returns the same as AtSquare for an energy above the sum of some masses,
//
//	sqrt(s) = excess + sum of above
//
// which keeps all its digits however small it is beside the masses.
func AtExcess(mass1, mass2, excess float64, above ...float64) (Collision, error) {
	const op = "reaction.AtExcess"
	for _, m := range above {
		if err := checkSize(op, "masses_gev", m); err != nil {
			return Collision{}, err
		}
	}
	terms := append([]float64{excess}, above...)
	return inCentreOfMass(op, "excess_energy_gev", mass1, mass2, bySum, terms...)
}

func inCentreOfMass(op, field string, mass1, mass2 float64, known knowledge, terms ...float64) (Collision, error) {
	for i, m := range [...]float64{mass1, mass2} {
		if err := checkSize(op, [...]string{"first.mass_gev", "second.mass_gev"}[i], m); err != nil {
			return Collision{}, err
		}
	}
	if size := math.Abs(terms[0]); size != 0 && !(size >= smallest*smallest && size <= largest*largest) {
		return Collision{}, fault.Number(field, terms[0], "0 or within 1e-60..1e60").In(op)
	}
	c := Collision{mass: [2]float64{mass1, mass2}, known: known, terms: terms, collinear: true}
	over := c.over(mass1, mass2)
	if over.Sign() < 0 {
		return Collision{}, fault.New(fault.BelowThreshold, field, fault.Text(terms[0]),
			"at least what the masses of the two initial bodies need").In(op)
	}
	c.gap = over.Scale(-1)
	return c.withMomentum(op, num.DD{})
}

// withMomentum fills the system from the gap and the total momentum in the laboratory.
func (c Collision) withMomentum(op string, p num.DD) (Collision, error) {
	pair := num.Sum2(c.mass[0], c.mass[1])
	w := pair.Square().Add(c.gap.Scale(1)).Sqrt()
	if !(w.Hi > 0) {
		return Collision{}, fault.Number("sqrt_s_gev", w.Hi, "> 0").In(op).
			Because("two massless bodies in one direction have no centre-of-mass frame")
	}
	c.sys = breakup.NewSystem(w, p)
	return c, nil
}

// SeenFromTarget returns the same collision seen in the rest frame of the second body,
// with the first along z; the second must have a mass.
//
//	T1 = D/m2,  p1 = sqrt(T1 (T1 + 2 m1)),  s = (m1+m2)^2 + 2D
func (c Collision) SeenFromTarget() (Collision, error) {
	const op = "reaction.SeenFromTarget"
	target := c.mass[1]
	if target == 0 {
		return Collision{}, fault.Number("target.mass_gev", target, "> 0").In(op)
	}
	t := c.gap.DivFloat(target)
	c.beam, c.targetAtRest, c.collinear, c.reversed, c.tilt = t, true, true, false, 0
	return c.withMomentum(op, t.Mul(t.AddFloat(2*c.mass[0])).Sqrt())
}

// over returns s - (sum of masses)^2 with relative error below 2^-50 whatever the
// cancellation, and exactly 0 where it is 0, if the total mass is known exactly: by a
// beam on a target at rest, by s, by sqrt(s) or by an excess energy. Where it is known
// as a double-double gap, its absolute error is below 2^-96 s.
func (c *Collision) over(masses ...float64) num.DD {
	sum := breakup.Sum(masses...)
	switch c.known {
	case bySquare:
		over := sum.Square().Neg().AddFloat(c.terms[0])
		if undecided(over.Hi, c.terms[0]) {
			return overSquare(c.terms[0], masses)
		}
		return over
	case bySum:
		excess := breakup.Sum(append(negated(masses), c.terms...)...)
		return excess.Mul(breakup.Sum(c.terms...).Add(sum))
	case byBody, byGap:
	}
	q := breakup.Sum(append(negated(masses), c.mass[0], c.mass[1])...)
	shift := q.Mul(num.Sum2(c.mass[0], c.mass[1]).Add(sum))
	over := c.gap.Scale(1).Add(shift)
	if c.known == byBody && undecided(over.Hi, shift.Hi) {
		return overBody(c.body, c.mass[1], masses)
	}
	return over
}

// undecided reports whether a difference of numbers of the given size, each with
// relative error below 2^-96, has lost so much that less than 2^-52 remains.
func undecided(difference, size float64) bool {
	return math.Abs(difference) < 0x1p-44*math.Abs(size)
}

func negated(xs []float64) []float64 {
	out := make([]float64, len(xs), len(xs)+10)
	for i, x := range xs {
		out[i] = -x
	}
	return out
}

// Excess returns sqrt(s) less the sum of the masses, in GeV, and on which side of the
// threshold that lies; see over for its accuracy.
//
//	(s - (sum m)^2)/(sqrt(s) + sum m)
func (c *Collision) Excess(masses ...float64) (float64, num.Side) {
	over := c.over(masses...)
	excess := over.Div(c.sys.W.Add(breakup.Sum(masses...)))
	return excess.Float(), num.SideOf(over.Hi, 0)
}

// closed returns the fault for a final state that the energy does not reach.
func (c *Collision) closed(op string, masses ...float64) error {
	excess, side := c.Excess(masses...)
	if side != num.Below {
		return nil
	}
	return fault.New(fault.BelowThreshold, "sqrt_s_gev", fault.Text(c.sys.W.Float()),
		">= "+fault.Text(breakup.Sum(masses...).Float())).In(op).
		Because("the channel is closed, short of its threshold by " + fault.Text(-excess) + " GeV")
}
