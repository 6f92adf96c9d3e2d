package momentum

import (
	"math"

	"example.org/kinegate/kinematics/num"
)

// Three is a three-momentum in GeV, or a direction without unit.
//
// Components are 0 or within 1e-75..1e75 in magnitude wherever squares are taken,
// so that nothing overflows or loses digits to underflow.
type Three struct{ X, Y, Z float64 }

// Add returns a + b.
func (a Three) Add(b Three) Three { return Three{a.X + b.X, a.Y + b.Y, a.Z + b.Z} }

// Sub returns a - b.
func (a Three) Sub(b Three) Three { return Three{a.X - b.X, a.Y - b.Y, a.Z - b.Z} }

// Neg returns -a.
func (a Three) Neg() Three { return Three{-a.X, -a.Y, -a.Z} }

// Scale returns k * a.
func (a Three) Scale(k float64) Three {
	return Three{float64(k * a.X), float64(k * a.Y), float64(k * a.Z)}
}

// Dot returns the scalar product of a and b, with an error of at most
// 3 x 2^-53 x (|ax bx| + |ay by| + |az bz|).
func (a Three) Dot(b Three) float64 {
	return float64(a.X*b.X) + float64(a.Y*b.Y) + float64(a.Z*b.Z)
}

// Cross returns the vector product of a and b, each component within 1.5 ulp also
// where it cancels (see num.DiffOfProducts).
func (a Three) Cross(b Three) Three {
	return Three{
		num.DiffOfProducts(a.Y, b.Z, a.Z, b.Y),
		num.DiffOfProducts(a.Z, b.X, a.X, b.Z),
		num.DiffOfProducts(a.X, b.Y, a.Y, b.X),
	}
}

// Square returns the squared length of a, within 3 x 2^-53 relative.
func (a Three) Square() float64 { return a.Dot(a) }

// Norm returns the length of a, within 2.5 x 2^-53 relative.
func (a Three) Norm() float64 { return math.Sqrt(a.Square()) }

// Transverse returns the length of the part of a across the z axis.
func (a Three) Transverse() float64 {
	return math.Sqrt(float64(a.X*a.X) + float64(a.Y*a.Y))
}

// Unit returns a over its length, and the zero vector for the zero vector.
func (a Three) Unit() Three {
	norm := a.Norm()
	if norm == 0 {
		return Three{}
	}
	return Three{a.X / norm, a.Y / norm, a.Z / norm}
}

// Angle returns the angle between a and b in radians, within 0..pi:
//
//	atan2(|a x b|, a.b)
//
// It is accurate to a few 2^-53 relative near 0, where an arc cosine would lose
// half the digits, and to the same absolute amount near pi. A zero vector gives 0.
func (a Three) Angle(b Three) float64 {
	return num.Atan2(a.Cross(b).Norm(), a.Dot(b))
}

// Theta returns the polar angle of a from the z axis, within 0..pi; 0 for the zero
// vector.
func (a Three) Theta() float64 { return num.Atan2(a.Transverse(), a.Z) }

// Phi returns the azimuth of a about the z axis from the x axis, within (-pi, pi];
// 0 on the z axis.
func (a Three) Phi() float64 {
	if a.X == 0 && a.Y == 0 {
		return 0
	}
	// -0 would give -pi, which is the same direction as pi; adding 0 makes it +0.
	return num.Atan2(a.Y+0, a.X)
}
