package generation

import (
	"math"

	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/num"
	"example.org/kinegate/kinematics/num/random"
)

// AngularLaw is a lowest-order angular distribution of quantum electrodynamics,
// unpolarised, for a reaction with two products.
type AngularLaw uint8

// The angular laws. With the velocity b of the massive pair and c = cos theta in
// the centre of mass,
//
//	dN/dc = (1 - b^4 c^4 + 2 b^2 (1 - b^2)(1 - c^2)) / (1 - b^2 c^2)^2
//
// for pairs and annihilation (G. Breit and J. A. Wheeler, Phys. Rev. 46 (1934)
// 1087), and for Compton scattering in r = 1 - (1 - c)(s - m^2)/(2s), which is
// the ratio of the photon's energies in the rest frame of the target,
//
//	dN/dr = r + 1/r - sin^2 theta_r,  1 - cos theta_r = (1/r - 1) 2 m^2/(s - m^2)
//
// (O. Klein and Y. Nishina, Z. Phys. 52 (1929) 853; both from memory).
const (
	// NoLaw leaves the direction to the other fields.
	NoLaw AngularLaw = iota
	// PairCreation is gamma gamma -> l+ l-.
	PairCreation
	// Annihilation is e+ e- -> gamma gamma.
	Annihilation
	// ComptonScattering is gamma e- -> gamma e-; the angle's product is the
	// photon.
	ComptonScattering
	angularLaws
)

// angle is an Angle made ready.
type angle struct {
	cosTheta, phi *inverse
	slope         float64
	law           AngularLaw
	// analysed is the product of polarisation and asymmetry, plane that of the
	// polarisation.
	analysed, plane float64
}

func newAngle(a *Angle) *angle {
	made := &angle{slope: a.SlopePerGeV2, law: a.Law}
	if a.CosTheta != nil {
		made.cosTheta = newInverse(a.CosTheta)
	}
	if a.Phi != nil {
		made.phi = newInverse(a.Phi)
	}
	return made
}

// analyse sets the polarisation that the azimuth shows.
func (a *angle) analyse(p Polarisation, asymmetry float64) {
	a.analysed, a.plane = p.Linear*asymmetry, p.PlaneRad
}

// azimuth draws the product's azimuth.
func (a *angle) azimuth(s *random.Stream) float64 {
	u := s.Uniform()
	switch {
	case a.phi != nil:
		return a.phi.at(u)
	case a.analysed == 0:
		return azimuth(u)
	}
	top := 1 + math.Abs(a.analysed)
	for range MaxAttempts {
		phi := azimuth(u)
		if float64(s.Uniform()*top) < 1-float64(a.analysed*num.Cos(2*(phi-a.plane))) {
			return phi
		}
		u = s.Uniform()
	}
	return azimuth(u) // not reached: at least half are accepted
}

// acceptance is the integral of exp(b t') over the sphere relative to an
// isotropic distribution, (1 - exp(-2a))/(2a) with a = 2 b p p', 1 for a = 0. It
// belongs to the weight of three and more bodies, where p' varies.
func (a *angle) acceptance(p, pOut float64) float64 {
	x := 4 * a.slope * p * pOut
	if x == 0 {
		return 1
	}
	return -num.Expm1(-x) / x
}

// direction draws the product's direction in the centre of mass for the
// momentum pOut: the azimuth first.
func (a *angle) direction(s *random.Stream, st *state, pOut float64) momentum.Three {
	phi := a.azimuth(s)
	versine := a.versine(s, st, pOut)
	return around(st.axis, 1-versine, math.Sqrt(max(0, versine*(2-versine))), phi)
}

// versine draws 1 - cos theta. For the slope,
//
//	1 - cos theta = -ln(1 - u (1 - exp(-2a)))/a,  a = 2 b p p'
func (a *angle) versine(s *random.Stream, st *state, pOut float64) float64 {
	switch a.law {
	case PairCreation:
		return pairVersine(s, 2*pOut/st.m)
	case Annihilation:
		return pairVersine(s, 2*st.momentum/st.m)
	case ComptonScattering:
		return comptonVersine(s, 1-2*st.momentum/st.m)
	case NoLaw, angularLaws:
	}
	u := s.Uniform()
	switch x := 2 * a.slope * st.momentum * pOut; {
	case a.cosTheta != nil:
		return 1 - a.cosTheta.at(u)
	case x > 1e-9: // below, the exponential is flat to 2e-9
		return -num.Log1p(u*num.Expm1(-2*x)) / x
	}
	return u + u
}

// pairVersine draws from the law of pairs for a velocity b: c from the density
// 1/(1 - b^2 c^2) by its inverse, accepted by the rest of the law, which is at
// most 5/2:
//
//	1 + b^2 c^2 + 2 b^2 (1 - b^2)(1 - c^2)/(1 - b^2 c^2)
func pairVersine(s *random.Stream, b float64) float64 {
	b = min(b, 1-0x1p-53)
	rapidity := num.Atanh(b)
	square := float64(b * b)
	for range MaxAttempts {
		c := 0.0
		if b > 0 {
			c = num.Tanh(2*rapidity*(s.Uniform()-0.5)) / b
		}
		cc := float64(c * c)
		rest := (1 - square) * (1 - cc) / (1 - float64(square*cc))
		if s.Uniform()*2.5 < 1+float64(square*cc)+float64(2*square*rest) {
			return 1 - c
		}
	}
	return 1 // not reached: at least two fifths are accepted
}

// comptonVersine draws from the law of Compton scattering with the lowest ratio
// m^2/s: r from 1/r by its inverse, accepted by r times the law, which is at
// most 2.
func comptonVersine(s *random.Stream, lowest float64) float64 {
	lowest = max(lowest, 0x1p-1000)
	logarithm := num.Log(lowest)
	for range MaxAttempts {
		r := num.Exp(float64(s.Uniform() * logarithm))
		versine := (1 - r) / r * 2 * lowest / (1 - lowest)
		sin2 := float64(versine * (2 - versine))
		if s.Uniform()*2 < 1+float64(r*r)-float64(r*sin2) {
			return min(2, 2*(1-r)/(1-lowest))
		}
	}
	return 1 // not reached: about half are accepted
}

// azimuth is the angle in (-pi, pi) at the fraction u of a turn.
func azimuth(u float64) float64 { return float64(2 * math.Pi * (u - 0.5)) }

// around is the direction at polar angle theta and azimuth phi around an axis.
// The azimuth counts from the x axis of the frame, projected across the axis,
// or from the y axis where the axis is x.
func around(axis momentum.Three, cos, sin, phi float64) momentum.Three {
	sinPhi, cosPhi := num.Sincos(phi)
	if axis.X == 0 && axis.Y == 0 && axis.Z > 0 {
		return momentum.Three{X: sin * cosPhi, Y: sin * sinPhi, Z: cos}
	}
	from := momentum.Three{X: 1}
	if axis.X*axis.X > 0.999 {
		from = momentum.Three{Y: 1}
	}
	y := axis.Cross(from).Unit()
	x := y.Cross(axis)
	return x.Scale(sin * cosPhi).Add(y.Scale(sin * sinPhi)).Add(axis.Scale(cos))
}
