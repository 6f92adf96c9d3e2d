package reaction

import (
	"math"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/momentum/breakup"
	"example.org/kinegate/kinematics/num"
)

// Threshold is the smallest energy of the first particle, all else fixed, at which
// the total mass reaches that of a final state.
type Threshold struct {
	// Mass is the sum of the masses of the final state in GeV.
	Mass float64
	// SqrtS is sqrt(s) at threshold: Mass, or what the initial state has anyway where the
	// channel is open at rest.
	SqrtS float64
	// Reached is false where no energy of the first particle opens the channel, such
	// as for two photons in one direction, and where there is no such energy to vary.
	// The other fields are then 0.
	Reached bool
	// OpenAtRest says that the channel is open with the first particle at rest.
	OpenAtRest bool
	// Beam is the motion of the first particle at threshold.
	Beam BeamPoint
	// Closed is set where the second particle moves so that the channel is open at
	// rest, closes as the first particle comes to move along with the second, and opens
	// again: the range of the first particle in which it is closed.
	Closed *ClosedRange
	// MassError and BeamError are the uncertainties of Mass and Beam from the
	// particles' masses: one total derivative per mass of the table, shared by particle
	// and antiparticle, both sides of the reaction counted; different masses in
	// quadrature, correlations neglected.
	MassError float64
	BeamError BeamPoint
}

// BeamPoint is a motion of the first particle, or its uncertainty, in GeV.
type BeamPoint struct{ Total, Kinetic, Momentum float64 }

// ClosedRange is a range of the first particle's motion; Above is +Inf where the channel
// does not open again.
type ClosedRange struct{ Below, Above BeamPoint }

// ThresholdOnTarget returns the threshold of a beam of mass beam >= 0 on a target at
// rest of mass target > 0 for products of the given masses, in GeV.
//
//	M = sum of the products' masses
//	T1 = (M - m1 - m2)(M + m1 + m2)/(2 m2),  p1 = sqrt(T1 (T1 + 2 m1)),  E1 = m1 + T1
//
// The general form, for a second particle of energy E2 = m2 + T2 and momentum p2 whose
// direction differs by theta from that of the first, is
//
//	K = (M - m1 - m2)(M + m1 + m2)/2,  G = m1 m2 + K = E1 E2 - p1 p2 cos theta
//	N = (K - m1 T2)(G + m1 E2) = G^2 - (m1 E2)^2,  R = sqrt(N + (m1 p2 cos theta)^2)
//	p1 = N/(E2 R - G p2 cos theta)                              for cos theta <= 0
//	p1 = (G p2 cos theta + E2 R)/(m2^2 + (p2 sin theta)^2)      for cos theta > 0
//
// The channel is open at rest if K <= m1 T2. M - m1 - m2 is an exact sum, and nothing
// else cancels, so all values are within 4e-15 relative however near the masses are, for
// masses 0 or within 1e-30..1e30 GeV. A target without mass or a value outside is an
// Invalid fault.
//
// Source: E. Byckling and K. Kajantie, Particle Kinematics (1973), section II.4 (from
// memory); the quadratic for p1 follows from E1^2 = m1^2 + p1^2.
func ThresholdOnTarget(beam, target float64, products ...float64) (Threshold, error) {
	const op = "reaction.ThresholdOnTarget"
	if err := (Body{Mass: beam}).check(op, "beam"); err != nil {
		return Threshold{}, err
	}
	if !(target >= smallest && target <= largest) {
		return Threshold{}, fault.Number("target.mass_gev", target, "within 1e-30..1e30").In(op)
	}
	for _, m := range products {
		if err := checkSize(op, "products.mass_gev", m); err != nil {
			return Threshold{}, err
		}
	}
	in := InitialState{}
	g, _ := in.geometry(beam, target)
	t, _ := g.threshold(products)
	return t, nil
}

// threshold solves for the first particle, see ThresholdOnTarget. The total energy at
// threshold is also returned as a double-double, for differences from a beam's.
func (g *geometry) threshold(products []float64) (Threshold, num.DD) {
	sum := breakup.Sum(products...)
	t := Threshold{Mass: sum.Float(), SqrtS: sum.Float(), Reached: true}
	pair := num.Sum2(g.m1, g.m2)
	above := breakup.Sum(append([]float64{-g.m1, -g.m2}, products...)...)
	k := above.Mul(above.Add(pair.Scale(1))).Scale(-1)
	m1e2 := g.e.MulFloat(g.m1)
	over := num.Prod2(g.m1, g.m2).Add(k)
	need := k.Sub(g.t.MulFloat(g.m1))
	n := need.Mul(over.Add(m1e2))
	along := g.p.Mul(g.cos)
	square := n.Add(along.MulFloat(g.m1).Square())
	if need.Sign() <= 0 {
		t.OpenAtRest = true
		t.Beam.Total = g.m1
		t.SqrtS = pair.Square().Add(g.t.MulFloat(g.m1).Scale(1)).Sqrt().Float()
		if along.Sign() > 0 && over.Sign() > 0 && square.Sign() > 0 {
			t.Closed = g.closedRange(over, n, along, square.Sqrt())
		}
		return t, num.FromFloat(g.m1)
	}
	root := g.e.Mul(square.Sqrt())
	top, bottom := n, root.Sub(over.Mul(along))
	if along.Sign() > 0 {
		top, bottom = over.Mul(along).Add(root), g.invariant()
	}
	p := top.Div(bottom)
	if !(p.Hi <= math.MaxFloat64) {
		return Threshold{Mass: t.Mass}, num.DD{}
	}
	var total num.DD
	t.Beam, total = g.point(p)
	return t, total
}

// invariant returns m2^2 + (p2 sin theta)^2 = E2^2 - (p2 cos theta)^2.
func (g *geometry) invariant() num.DD {
	return num.Prod2(g.m2, g.m2).Add(g.p.Mul(g.sin).Square())
}

// point returns the motion of the first particle for its momentum.
func (g *geometry) point(p num.DD) (BeamPoint, num.DD) {
	m := num.FromFloat(g.m1)
	e := p
	if g.m1 > 0 {
		e = p.Square().Add(m.Square()).Sqrt()
	}
	kinetic := num.DD{}
	if e.Sign() > 0 {
		kinetic = p.Square().Div(e.Add(m))
	}
	return BeamPoint{Total: e.Float(), Kinetic: kinetic.Float(), Momentum: p.Float()}, e
}

// closedRange returns the range between the two positive roots, whose product is
// -N/(m2^2 + (p2 sin theta)^2).
func (g *geometry) closedRange(over, n, along, root num.DD) *ClosedRange {
	top := over.Mul(along).Add(g.e.Mul(root))
	var r ClosedRange
	r.Below, _ = g.point(n.Neg().Div(top))
	r.Above, _ = g.point(top.Div(g.invariant()))
	if !(r.Above.Momentum <= math.MaxFloat64) {
		r.Above = BeamPoint{math.Inf(1), math.Inf(1), math.Inf(1)}
	}
	return &r
}
