package generation

import (
	"example.org/kinegate/kinematics/photon"
)

// lawPoints is the number of points of a law's curve. The cross-sections rise
// with the square root of the excess energy at threshold and are smooth above,
// so over points that are quadratic in the excess straight lines between them
// are good to 1e-6 where the highest energy is up to ten times the lowest.
const lawPoints = 4000

// lawCurve is the total cross-section of a law against sqrt(s) in units of its
// own, for a charged lepton of the given mass: PairEnergy.Total,
// PairEnergy.AnnihilationTotal and KleinNishinaTotal of the package photon.
func lawCurve(law AngularLaw, mass, low, high float64, stop func() bool) *Curve {
	c := &Curve{}
	if high <= low {
		low = high * (1 - 0x1p-20) // one energy: any curve does
	}
	for i := range lawPoints + 1 {
		if i%stopEvery == 0 && stop() {
			break
		}
		x := float64(i) / lawPoints
		m := between(low, high, x*x)
		if i == lawPoints {
			m = high
		}
		c.X = append(c.X, m)
		c.Y = append(c.Y, lawTotal(law, mass, m))
	}
	return c
}

// lawTotal is the total cross-section at an energy, 0 at and below threshold.
func lawTotal(law AngularLaw, mass, m float64) float64 {
	switch law {
	case PairCreation, Annihilation:
		pair, err := photon.PairEnergyFromSqrtS(m, mass)
		if err != nil || !(pair.Excess() > 0) {
			return 0
		}
		if law == Annihilation {
			return pair.AnnihilationTotal()
		}
		return pair.Total(photon.Lepton).Unpolarised
	case ComptonScattering:
		if !(m > mass) {
			return 0
		}
		return photon.KleinNishinaTotal((m - mass) * (m + mass) / (2 * mass * mass))
	case NoLaw, angularLaws:
	}
	return 0
}

// leptonOf is the mass of the charged lepton of a law: that of the products, or
// of the beams in annihilation, which makes photons.
func leptonOf(c *Channel, initial Initial) float64 {
	mass := 0.0
	for i := range c.Products {
		mass = max(mass, c.Products[i].MassGeV)
	}
	if b, ok := initial.(CollidingBeams); ok && c.Angle.Law == Annihilation {
		mass = b.First.MassGeV
	}
	if b, ok := initial.(FixedTarget); ok && c.Angle.Law == Annihilation {
		mass = b.TargetMassGeV
	}
	return mass
}
