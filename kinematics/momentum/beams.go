package momentum

import (
	"math"

	"example.org/kinegate/kinematics/num"
)

// CollisionState is the total mass of two colliding particles.
type CollisionState struct {
	// S is the total mass squared in GeV^2, SqrtS its root in GeV.
	S, SqrtS float64
	// Excess is SqrtS - m1 - m2 in GeV, never rebuilt from S.
	Excess float64
}

// CollideBeams returns the state of two particles of masses m1, m2 >= 0 and momenta
// p1, p2 >= 0 in GeV whose directions differ by angle in radians (pi is head on):
//
//	s = (m1+m2)^2 + 2D,  excess = 2D/(sqrt(s) + m1 + m2)
//	D = E1 E2 - p1 p2 cos(angle) - m1 m2
//	  = ((p1 m2 - p2 m1)(p1 m2 + p2 m1)/(p1 E2 + p2 E1))^2 / (E1 E2 - p1 p2 + m1 m2)
//	    + 2 p1 p2 sin^2(angle/2)
//	E1 E2 - p1 p2 = (m1^2 E2^2 + m2^2 p1^2)/(E1 E2 + p1 p2)
//
// Every term is positive and the one difference, p1 m2 - p2 m1, is that of exact
// products (num.DiffOfProducts), so all fields are within 4e-15 relative whatever
// the angle and the velocities.
//
// Domain: all 0 or within 1e-35..1e35 GeV. Source: the identities
// (E1 E2 - p1 p2)^2 - (m1 m2)^2 = (p1 E2 - p2 E1)^2 and
// (p1 E2)^2 - (p2 E1)^2 = (p1 m2)^2 - (p2 m1)^2, which follow from E^2 = m^2 + p^2.
func CollideBeams(m1, p1, m2, p2, angle float64) CollisionState {
	e1 := math.Sqrt(float64(m1*m1) + float64(p1*p1))
	e2 := math.Sqrt(float64(m2*m2) + float64(p2*p2))
	sine := num.Sin(angle / 2)
	gap := float64(2 * p1 * p2 * float64(sine*sine))
	if momenta := float64(p1*e2) + float64(p2*e1); momenta > 0 && e1*e2 > 0 {
		a, b := m1*e2, m2*p1
		collinear := (float64(a*a)+float64(b*b))/(float64(e1*e2)+float64(p1*p2)) + float64(m1*m2)
		if collinear > 0 {
			c := num.DiffOfProducts(p1, m2, p2, m1) * ((float64(p1*m2) + float64(p2*m1)) / momenta)
			gap += float64(c*c) / collinear
		}
	}
	return stateFromGap(m1, m2, gap)
}

// CollideTarget returns the state of a beam particle of mass m1 and kinetic energy
// t1 on a target of mass m2 at rest, all in GeV and >= 0:
//
//	s = (m1+m2)^2 + 2 t1 m2,  excess = 2 t1 m2/(sqrt(s) + m1 + m2)
//
// within 6 x 2^-53 relative.
func CollideTarget(m1, t1, m2 float64) CollisionState {
	return stateFromGap(m1, m2, float64(t1*m2))
}

// stateFromGap puts s = (m1+m2)^2 + 2 gap and its parts together.
func stateFromGap(m1, m2, gap float64) CollisionState {
	m := m1 + m2
	over := float64(2 * gap)
	s := float64(m*m) + over
	root := math.Sqrt(s)
	state := CollisionState{S: s, SqrtS: root}
	if over > 0 {
		state.Excess = over / (root + m)
	}
	return state
}

// BeamsAtAngle returns two four-momenta in the frame of two beams (see BeamFrame)
// for masses and momenta in GeV and the angle between their directions:
//
//	p1 = |p1| (cos(angle/2), 0, sin(angle/2)),  p2 = |p2| (cos(angle/2), 0, -sin(angle/2))
//
// so that z is along unit(p1) - unit(p2) and x along unit(p1) + unit(p2). At angle 0,
// where the first is undefined, both run along z.
func BeamsAtAngle(m1, p1, m2, p2, angle float64) (a, b Four) {
	sine, cosine := num.Sincos(angle / 2)
	if angle == 0 {
		return WithMass(Three{Z: p1}, m1), WithMass(Three{Z: p2}, m2)
	}
	return WithMass(Three{X: p1 * cosine, Z: p1 * sine}, m1),
		WithMass(Three{X: p2 * cosine, Z: -p2 * sine}, m2)
}
