package decay

import (
	"math"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/momentum/breakup"
	"example.org/kinegate/kinematics/num"
)

// PhotonPair is the decay of a parent into two photons.
type PhotonPair struct {
	parent breakup.System
	// least is the smallest opening angle.
	least num.DD
}

// NewPhotonPair returns the decay of the parent into two photons. A parent without mass
// or with a motion out of range is an Invalid fault.
func NewPhotonPair(parent Parent) (PhotonPair, error) {
	if err := checkParent("decay.NewPhotonPair", parent); err != nil {
		return PhotonPair{}, err
	}
	sys := system(parent)
	return PhotonPair{parent: sys, least: sys.W.Atan2(sys.P).Scale(1)}, nil
}

// OpeningRange returns the range of the angle between the photons, in radians:
//
//	min = 2 atan(m/p),  max = pi
func (g *PhotonPair) OpeningRange() breakup.Range {
	return breakup.Range{Min: g.least.Float(), Max: math.Pi}
}

// EnergyRange returns the range of the energy of either photon, in GeV:
//
//	max = (E + p)/2,  min = m^2/(2 (E + p))
//
// Between them the spectrum is constant (a box).
func (g *PhotonPair) EnergyRange() breakup.Range {
	most := g.parent.E.Add(g.parent.P).Scale(-1)
	least := g.parent.W.Square().Div(most).Scale(-2)
	return breakup.Range{Min: least.Float(), Max: most.Float()}
}

// OpeningDensity returns the probability per radian of the opening angle psi, for a
// parent that decays without preferred direction:
//
//	m^2 cos(psi/2) / (2 p E sin^2(psi/2) sqrt(sin((psi-min)/2) sin((psi+min)/2)))
//
// It is 0 outside min..pi, +Inf at min and, for a parent at rest, at pi. The root is
// that of sin^2(psi/2) - sin^2(min/2), which is never formed.
//
// Accuracy: max(4e-15, 4 x 2^-52 x condition number). A psi outside 0..pi is an Invalid
// fault. Source: the uniform distribution of the rest-frame cosine c, with
// sin^2(psi/2) = m^2/(E^2 - p^2 c^2); the form is common (from memory).
func (g *PhotonPair) OpeningDensity(psi float64) (float64, error) {
	if !(psi >= 0 && psi <= math.Pi) {
		return 0, fault.Number("opening_angle_rad", psi, ">= 0 and <= pi").In("decay.OpeningDensity")
	}
	root := g.aboveLeast(psi)
	switch {
	case root.Sign() < 0:
		return 0, nil
	case root.IsZero() || (g.parent.P.IsZero() && psi == math.Pi):
		return math.Inf(1), nil
	}
	sin, cos := num.FromFloat(psi / 2).Sincos()
	flat := g.parent.P.Mul(g.parent.E).Mul(sin.Square()).Mul(root.Sqrt()).Scale(1)
	return math.Max(0, g.parent.W.Square().Mul(cos).Div(flat).Float()), nil
}

// OpeningFraction returns the fraction of decays with an opening angle below psi, the
// magnitude of the rest-frame cosine that leads to psi:
//
//	(E/p) sqrt(sin((psi-min)/2) sin((psi+min)/2))/sin(psi/2)
//
// 0 below min and 1 at pi. A psi outside 0..pi is an Invalid fault.
func (g *PhotonPair) OpeningFraction(psi float64) (float64, error) {
	if !(psi >= 0 && psi <= math.Pi) {
		return 0, fault.Number("opening_angle_rad", psi, ">= 0 and <= pi").In("decay.OpeningFraction")
	}
	if psi == math.Pi {
		return 1, nil
	}
	root := g.aboveLeast(psi)
	if root.Sign() <= 0 || g.parent.P.IsZero() {
		return 0, nil
	}
	sin := num.FromFloat(psi / 2).Sin()
	fraction := g.parent.E.Mul(root.Sqrt()).Div(g.parent.P.Mul(sin)).Float()
	// The double next to pi is below pi, so the true value stays below 1; its rounding
	// may reach 1 + 2^-52.
	return math.Min(1, fraction), nil
}

// aboveLeast returns sin((psi-min)/2) sin((psi+min)/2) for 0 <= psi <= pi. A psi that is
// the smallest angle as a double counts as that angle.
func (g *PhotonPair) aboveLeast(psi float64) num.DD {
	if psi == g.least.Float() {
		return num.DD{}
	}
	below := num.FromFloat(psi).Sub(g.least).Scale(-1)
	above := num.FromFloat(psi).Add(g.least).Scale(-1)
	return below.Sin().Mul(above.Sin())
}
