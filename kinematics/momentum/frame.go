package momentum

import (
	"math"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/num"
)

// Frame is a right-handed set of three orthogonal unit axes, given by their
// components in the frame from which it is seen.
type Frame struct{ X, Y, Z Three }

// Laboratory is the frame whose axes are the laboratory's own.
func Laboratory() Frame {
	return Frame{X: Three{X: 1}, Y: Three{Y: 1}, Z: Three{Z: 1}}
}

// Into returns the components of a along the axes of f.
func (f Frame) Into(a Three) Three { return Three{f.X.Dot(a), f.Y.Dot(a), f.Z.Dot(a)} }

// OutOf returns the vector whose components along the axes of f are a; it undoes
// Into.
func (f Frame) OutOf(a Three) Three {
	return Three{
		float64(f.X.X*a.X) + float64(f.Y.X*a.Y) + float64(f.Z.X*a.Z),
		float64(f.X.Y*a.X) + float64(f.Y.Y*a.Y) + float64(f.Z.Y*a.Z),
		float64(f.X.Z*a.X) + float64(f.Y.Z*a.Y) + float64(f.Z.Z*a.Z),
	}
}

// headOn is the length of unit(p1) + unit(p2) below which two beams count as head
// on. Each component of a unit vector errs by at most 4 x 2^-53, so the sum of two
// by 8 x 2^-53 per component and 14 x 2^-53 in length; below that its direction says
// nothing.
const headOn = 14 * unit

// BeamFrame returns the frame of two beams with momenta p1 and p2: z along
// unit(p1) - unit(p2), x along unit(p1) + unit(p2), y = z cross x. Beams that are head on
// within 14 x 2^-53 rad have x along the part of the laboratory's x axis across z, or
// of its y axis where z is within about 26 degrees of the x axis. Parallel beams, where
// unit(p1) - unit(p2) vanishes, have z along the beams and x chosen in the same way.
//
// Domain: p1 and p2 not zero; else an Invalid fault.
func BeamFrame(p1, p2 Three) (Frame, error) {
	u1, u2 := p1.Unit(), p2.Unit()
	for _, beam := range [...]struct {
		field string
		u     Three
	}{{"momentum_1", u1}, {"momentum_2", u2}} {
		if n := beam.u.Norm(); !(n > 0.5) {
			return Frame{}, fault.Number(beam.field, n, "a finite vector other than 0").In("momentum.BeamFrame")
		}
	}
	sum, difference := u1.Add(u2), u1.Sub(u2)
	switch {
	case difference.Norm() <= headOn:
		return frameAlong(u1), nil
	case sum.Norm() <= headOn:
		return frameAlong(difference.Unit()), nil
	}
	return frameFrom(difference.Unit(), sum), nil
}

// frameAlong returns the frame with the given z axis and x from the laboratory's x
// axis, or from its y axis where z is nearly along x.
func frameAlong(z Three) Frame {
	guide := Three{X: 1}
	if math.Abs(z.X) > 0.9 {
		guide = Three{Y: 1}
	}
	return frameFrom(z, guide)
}

// frameFrom returns the frame with the given unit z axis and x along the part of
// guide across it. y comes first: as a vector product it is across both.
func frameFrom(z, guide Three) Frame {
	y := z.Cross(guide).Unit()
	return Frame{X: y.Cross(z).Unit(), Y: y, Z: z}
}

// HelicityFrame returns the axes of the helicity frame of a body with momentum p:
// z along p, y along across cross z (the normal of the plane of production when
// across is the beam direction), x = y cross z.
//
// Domain: p and across not zero and not parallel; else an Invalid fault.
func HelicityFrame(p, across Three) (Frame, error) {
	z := p.Unit()
	normal := across.Unit().Cross(z)
	if n := normal.Norm(); !(n > headOn) {
		return Frame{}, fault.Number("normal", n, "the two directions must not be parallel").In("momentum.HelicityFrame")
	}
	y := normal.Unit()
	return Frame{X: y.Cross(z).Unit(), Y: y, Z: z}, nil
}

// Rotate returns a turned by angle in radians about the direction of the unit
// vector axis, counter-clockwise as seen from its tip (Rodrigues' formula, with
// 1 - cos written as 2 sin^2 of the half angle):
//
//	a + (axis x a) sin(angle) + (axis x (axis x a)) 2 sin^2(angle/2)
func (a Three) Rotate(axis Three, angle float64) Three {
	half, cosHalf := num.Sincos(angle / 2)
	across := axis.Cross(a)
	return a.Add(across.Scale(2 * half * cosHalf)).Add(axis.Cross(across).Scale(2 * half * half))
}
