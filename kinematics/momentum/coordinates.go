package momentum

import (
	"math"

	"example.org/kinegate/kinematics/num"
)

// FromAngles returns the vector of length p along polar angle theta and azimuth phi
// in radians, each component within 3 x 2^-53 relative:
//
//	p (sin theta cos phi, sin theta sin phi, cos theta)
func FromAngles(p, theta, phi float64) Three {
	sinTheta, cosTheta := num.Sincos(theta)
	sinPhi, cosPhi := num.Sincos(phi)
	across := p * sinTheta
	return Three{across * cosPhi, across * sinPhi, p * cosTheta}
}

// FromSlopes returns the vector of length p >= 0 with the slopes sx = px/pz and
// sy = py/pz and pz > 0:
//
//	p (sx, sy, 1)/sqrt(1 + sx^2 + sy^2)
//
// Slopes stay regular on the z axis, where an azimuth is not defined.
func FromSlopes(p, sx, sy float64) Three {
	z := p / math.Sqrt(1+(float64(sx*sx)+float64(sy*sy)))
	return Three{z * sx, z * sy, z}
}

// FromPseudorapidity returns the vector of transverse momentum pt, pseudorapidity
// eta and azimuth phi in radians:
//
//	pt (cos phi, sin phi, sinh eta)
//
// Domain: |eta| < 700, so that sinh does not overflow.
func FromPseudorapidity(pt, eta, phi float64) Three {
	sinPhi, cosPhi := num.Sincos(phi)
	return Three{pt * cosPhi, pt * sinPhi, pt * num.Sinh(eta)}
}

// Slopes returns px/pz and py/pz of a vector with pz > 0. Special cases: pz = 0
// gives infinities or NaN, pz < 0 the slopes of the opposite vector.
func (a Three) Slopes() (sx, sy float64) { return a.X / a.Z, a.Y / a.Z }
