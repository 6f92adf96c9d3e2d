package reaction

import (
	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/momentum/breakup"
	"example.org/kinegate/kinematics/num"
)

// TwoBody is a collision with two products.
type TwoBody struct {
	collision Collision
	legs      [2]breakup.Leg
	// initial and final are the momenta in the centre-of-mass frame.
	initial, final num.DD
	// ends of t(beam, first) and of t(beam, second).
	ends [2]transferEnds
	// over is s - (m3+m4)^2.
	over num.DD
}

// TwoBody returns the collision with two products of the given masses in GeV, 0 or
// within 1e-30..1e30. A closed channel is a BelowThreshold fault with the deficit.
func (c Collision) TwoBody(first, second float64) (TwoBody, error) {
	const op = "reaction.TwoBody"
	for i, m := range [...]float64{first, second} {
		if err := checkSize(op, [...]string{"products[0].mass_gev", "products[1].mass_gev"}[i], m); err != nil {
			return TwoBody{}, err
		}
	}
	if err := c.closed(op, first, second); err != nil {
		return TwoBody{}, err
	}
	m3, m4 := num.FromFloat(first), num.FromFloat(second)
	r := TwoBody{collision: c, over: c.over(first, second)}
	r.legs[0] = c.leg(r.over, m3, m4, first, second)
	r.legs[1] = c.leg(r.over, m4, m3, first, second)
	r.initial = c.initialMomentum()
	r.final = r.legs[0].Momentum()
	m1, m2 := num.FromFloat(c.mass[0]), num.FromFloat(c.mass[1])
	r.ends[0] = ends(c.sys.W, m1, m2, m3, m4, r.initial, r.final)
	r.ends[1] = ends(c.sys.W, m1, m2, m4, m3, r.initial, r.final)
	return r, nil
}

// leg returns the leg of a product of the given mass against the rest; all are the
// masses of the final state, which mass and rest add up to.
func (c *Collision) leg(over, mass, rest num.DD, all ...float64) breakup.Leg {
	if !c.targetAtRest {
		return breakup.NewLeg(c.sys, over, mass, rest)
	}
	q0 := breakup.Sum(append(negated(all), c.mass[0], c.mass[1])...)
	return breakup.NewLegOnTarget(c.sys, over, mass, rest, c.mass[0], c.mass[1], c.beam, q0)
}

// initialMomentum returns the momentum of either initial body in the centre-of-mass
// frame.
func (c *Collision) initialMomentum() num.DD {
	return breakup.Momentum(c.gap.Scale(1), c.sys.W, num.FromFloat(c.mass[0]), num.FromFloat(c.mass[1]))
}

// CentreOfMass is the energy and motion of a collision as a whole, in GeV with c = 1.
type CentreOfMass struct {
	// S is the total mass squared in GeV^2 and SqrtS the total mass.
	S, SqrtS float64
	// Energy and Momentum are the laboratory totals, and Tilt is the angle of the
	// total momentum from z in radians.
	Energy, Momentum, Tilt float64
	// Beta, OneMinusBeta and Gamma belong to the centre of mass in the laboratory.
	Beta, OneMinusBeta, Gamma float64
	// InitialMomentum is that of either initial body in the centre-of-mass frame.
	InitialMomentum float64
}

// CentreOfMass returns the energy and motion of the collision, all fields within
// 4e-16 relative where the total mass is known exactly.
//
//	beta = P/E,  1 - beta = s/(E (E + P)),  gamma = E/sqrt(s)
func (c *Collision) CentreOfMass() CentreOfMass {
	s := c.sys.W.Square()
	return CentreOfMass{
		S: s.Float(), SqrtS: c.sys.W.Float(),
		Energy: c.sys.E.Float(), Momentum: c.sys.P.Float(), Tilt: c.tilt,
		Beta:            c.sys.P.Div(c.sys.E).Float(),
		OneMinusBeta:    s.Div(c.sys.E.Mul(c.sys.E.Add(c.sys.P))).Float(),
		Gamma:           c.sys.E.Div(c.sys.W).Float(),
		InitialMomentum: c.initialMomentum().Float(),
	}
}

// TwoBodyLimits is what holds for every direction of the two products.
type TwoBodyLimits struct {
	// FinalMomentum is that of either product in the centre-of-mass frame and Excess
	// is sqrt(s) - m3 - m4, in GeV.
	FinalMomentum, Excess float64
	// Products are the limits of the two products; angles are from z. Where
	// Laboratory is false, the two bodies meet at an angle.
	Products [2]breakup.Limits
	// TwoBranch tells for each product whether two momenta share every laboratory
	// angle below the largest.
	TwoBranch [2]bool
	// MaxAngle is the largest laboratory angle of each product from the direction of
	// the total momentum.
	MaxAngle [2]float64
	// Transfer are the ends of t(beam, product) for each product, in GeV^2.
	Transfer [2]TransferLimits
	// Laboratory tells whether both initial bodies move along z, so that laboratory
	// angles and momenta follow from the polar angle alone.
	Laboratory bool
}

// Limits returns what holds for every direction of the two products. Momenta, energies
// and ends of t are within 4e-15 relative; angles within max(4e-15, 4 x 2^-52 x their
// condition number). See breakup.Leg for the formulas.
func (r *TwoBody) Limits() TwoBodyLimits {
	limits := TwoBodyLimits{FinalMomentum: r.final.Float(), Laboratory: r.collision.collinear}
	masses := r.legs[0].Mass().Add(r.legs[1].Mass())
	limits.Excess = r.over.Div(r.collision.sys.W.Add(masses)).Float()
	for i := range r.legs {
		leg := &r.legs[i]
		limits.Products[i] = breakup.LimitsBetween(leg, leg)
		limits.Products[i].Angle = breakup.Tilted(limits.Products[i].Angle, r.collision.tilt)
		limits.MaxAngle[i] = leg.MaxAngle()
		limits.TwoBranch[i] = leg.Carry() == num.Above
		limits.Transfer[i] = r.ends[i].limits()
	}
	return limits
}

// Outgoing is one product in both frames, in GeV and radians, angles from z.
type Outgoing struct {
	// In the centre-of-mass frame.
	CMAngle, CMCosine, CMEnergy, CMKinetic, CMMomentum float64
	// In the laboratory; zero where TwoBodyLimits.Laboratory is false.
	LabAngle, LabEnergy, LabKinetic, LabMomentum float64
	// CMPerLab is dOmega(centre of mass)/dOmega(laboratory), LabPerCM its inverse;
	// +Inf and 0 at the largest laboratory angle.
	CMPerLab, LabPerCM float64
}

// Branch is one way in which the products can go.
type Branch struct {
	// T is t(beam, first product) and U is t(beam, second product), which is also
	// t(target, first product), in GeV^2; TPrime and UPrime are their distances from
	// the forward end, t_forward - t >= 0.
	T, TPrime, U, UPrime float64
	// Products are the first and the second product.
	Products [2]Outgoing
}

// branch returns the branch in which the first product goes at d from the direction of
// the first initial body in the centre-of-mass frame.
func (r *TwoBody) branch(d breakup.Direction) Branch {
	var b Branch
	scale := r.initial.Mul(r.final).Scale(2)
	b.T, b.TPrime = r.ends[0].at(d, scale)
	b.U, b.UPrime = r.ends[1].at(d.Opposite(), scale)
	for i := range r.legs {
		b.Products[i] = r.outgoing(&r.legs[i], d)
		d = d.Opposite()
	}
	return b
}

func (r *TwoBody) outgoing(leg *breakup.Leg, d breakup.Direction) Outgoing {
	if r.collision.reversed {
		d = d.Opposite()
	}
	energy, kinetic, final := leg.Energy(), leg.Kinetic(), leg.Momentum()
	out := Outgoing{
		CMAngle: d.Angle(), CMCosine: d.Cosine().Float(),
		CMEnergy: energy.Float(), CMKinetic: kinetic.Float(), CMMomentum: final.Float(),
	}
	if !r.collision.collinear {
		return out
	}
	d = r.collision.fromAxis(d)
	lab := leg.Lab(d)
	if r.collision.tilt != 0 {
		lab.Along = lab.Along.Neg()
	}
	out.LabAngle, out.LabEnergy = lab.Angle(), lab.Energy.Float()
	out.LabKinetic, out.LabMomentum = lab.Kinetic.Float(), lab.Momentum.Float()
	out.CMPerLab = leg.Jacobian(d)
	out.LabPerCM = 1 / out.CMPerLab
	return out
}

// fromAxis turns a direction from z into one from the total momentum, and back. Where
// all moves along z, the tilt of the total momentum is 0 or pi.
func (c *Collision) fromAxis(d breakup.Direction) breakup.Direction {
	if c.tilt != 0 {
		return d.Opposite()
	}
	return d
}

// requireLaboratory refuses what needs laboratory angles of beams that cross.
func (r *TwoBody) requireLaboratory(op string) error {
	if r.collision.collinear {
		return nil
	}
	return fault.New(fault.Unsupported, "query.variable", "", "centre-of-mass angles and t").In(op).
		Because("the beams cross, so laboratory quantities depend on the azimuth")
}
