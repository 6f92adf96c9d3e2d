package momentum

import (
	"math"

	"example.org/kinegate/kinematics/num"
)

// Rapidity returns the rapidity along z of a particle of mass m with momentum p:
//
//	y = ln((E+pz)/(E-pz))/2 = asinh(pz/sqrt(m^2 + px^2 + py^2))
//
// The second form does not subtract. Accuracy 4e-15 relative. Domain: m >= 0.
// Special cases: m and pT both 0 give +-Inf with the sign of pz, NaN for pz = 0.
func Rapidity(p Three, m float64) float64 {
	return num.Asinh(p.Z / math.Sqrt(float64(m*m)+float64(p.X*p.X)+float64(p.Y*p.Y)))
}

// Pseudorapidity returns the pseudorapidity of p along z:
//
//	eta = -ln tan(theta/2) = asinh(pz/pT)
//
// Accuracy 4e-15 relative. Special cases: on the z axis +-Inf with the sign of pz,
// NaN for the zero vector.
func Pseudorapidity(p Three) float64 { return Rapidity(p, 0) }
