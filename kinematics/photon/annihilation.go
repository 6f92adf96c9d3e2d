package photon

import (
	"math"

	"example.org/kinegate/kinematics/num"
)

// AnnihilationTotal returns the cross-section of lepton pair -> gamma gamma,
// unpolarised, in units of pi r^2, the two photons counted once:
//
//	sigma/(pi r^2) = (1/(g + 1)) ((g^2 + 4 g + 1)/(g^2 - 1) L - (g + 3)/sqrt(g^2 - 1))
//	L = ln(g + sqrt(g^2 - 1))
//
// where g = 2 y - 1 is the Lorentz factor of one particle in the rest frame of the
// other. With v = y - 1: g^2 - 1 = 4 v y, g + 1 = 2 y, g + 3 = 4 + 2 v and
// g^2 + 4 g + 1 = 6 + 12 v + 4 v^2, all without cancellation.
//
// Domain: every PairEnergy. At threshold (both at rest) the answer is +Inf, as the
// cross-section goes like 1/velocity; below, where no such pair exists, NaN.
// Accuracy: 4e-15 relative to the exact y. Left out: higher orders, annihilation into
// three photons, the Coulomb attraction of slow pairs and bound states, binding of the
// target electron.
//
// Source: P. A. M. Dirac, Proc. Cambridge Phil. Soc. 26 (1930) 361; W. Heitler, The
// Quantum Theory of Radiation, 3rd ed. (1954), section 27, from memory.
func (e PairEnergy) AnnihilationTotal() float64 {
	switch e.Side() {
	case num.Below:
		return math.NaN()
	case num.At:
		return math.Inf(1)
	case num.Above:
	}
	y, v := e.ratio, e.excess
	vy := v.Mul(y)
	polynomial := v.Square().Scale(2).Add(v.MulFloat(12)).AddFloat(6)
	logarithmic := polynomial.Mul(e.rapidityLogarithm()).Div(vy.Scale(2))
	algebraic := v.Scale(1).AddFloat(4).Div(vy.Sqrt().Scale(1))
	return logarithmic.Sub(algebraic).Div(y.Scale(1)).Float()
}

// AnnihilationWithin returns the part of AnnihilationTotal in which both photons lie
// at |cos(theta)| <= cosMax in the centre of mass, in units of pi r^2, the mass of the
// particles kept. It is the pair creation of TotalWithin in reverse,
//
//	sigma(pair -> gamma gamma) = sigma(gamma gamma -> pair)/(2 beta^2)
//
// by detailed balance: both sides have four spin states, the ratio of momenta squared
// is 1/beta^2 and the two photons are alike.
//
// Domain: 0 <= cosMax <= 1; other values, and energies below the threshold, give NaN;
// at threshold the answer is +Inf, or 0 for cosMax = 0. Accuracy: 4e-15.
func (e PairEnergy) AnnihilationWithin(cosMax float64) float64 {
	if !(cosMax >= 0 && cosMax <= 1) || e.Side() == num.Below {
		return math.NaN()
	}
	if cosMax == 0 {
		return 0
	}
	if e.Side() == num.At {
		return math.Inf(1)
	}
	j := e.integrals(cosMax)
	zero, two := j.weighted(Lepton, j.one, j.sin2, j.sin4)
	// 2 beta/y times the mean of the two states over 2 beta^2.
	return zero.Add(two).Scale(-1).Div(e.velocity().Mul(e.ratio)).Float()
}

// AnnihilationDifferential returns the cross-section of lepton pair -> gamma gamma for
// either photon at the cosine cosTheta in the centre of mass, unpolarised, in units of
// r^2 per steradian. Each event has two photons, so that the integral over the sphere
// is twice AnnihilationTotal. By detailed balance
//
//	d sigma(pair -> gamma gamma)/d Omega = d sigma(gamma gamma -> pair)/d Omega / beta^2
//
// Domain: -1 <= cosTheta <= 1; other values, and energies below the threshold, give
// NaN; +Inf at threshold. Accuracy: 6e-15. Left out: see AnnihilationTotal.
func (e PairEnergy) AnnihilationDifferential(cosTheta float64) float64 {
	if !(cosTheta >= -1 && cosTheta <= 1) || e.Side() == num.Below {
		return math.NaN()
	}
	if e.Side() == num.At {
		return math.Inf(1)
	}
	beta2 := e.excess.Div(e.ratio)
	return num.FromFloat(e.Differential(Lepton, cosTheta).Unpolarised).Div(beta2).Float()
}

// AnnihilationMassless returns the cross-section of e+ e- -> gamma gamma at
// sqrt(s) = sqrtSGeV with both photons at |cos(theta)| <= cosMax in the centre of
// mass, in barn, with the mass of the electron neglected and the two photons counted
// once:
//
//	sigma = (2 pi alpha^2/s) (ln((1 + z)/(1 - z)) - z),  alpha^2 (hbar c)^2 = r_e^2 m_e^2
//
// the integral of (alpha^2/s)(1 + c^2)/(1 - c^2) over half the sphere, for collider
// luminosity. AnnihilationWithin keeps the mass; the two differ by about m^2/s over
// 1 - z.
//
// Domain: 1e-100 <= sqrtSGeV <= 1e100, 0 <= cosMax < 1. Accuracy: 4e-15 on top of the
// constants; the logarithm is at least 2 z, so the difference loses at most a factor
// 3. Left out: higher orders, the weak interaction, the mass.
func AnnihilationMassless(sqrtSGeV, cosMax float64) (float64, error) {
	const op = "photon.AnnihilationMassless"
	if err := first(
		positive(op, "sqrt_s_gev", sqrtSGeV),
		within(op, "cos_max", cosMax, 0, 1-0x1p-53, "0 <= cos_max < 1"),
	); err != nil {
		return 0, err
	}
	ratio := ElectronMassGeV / sqrtSGeV
	bracket := float64(2*num.Atanh(cosMax)) - cosMax
	return 2 * math.Pi * ClassicalRadiusSquared(ElectronMassGeV) * (ratio * ratio) * bracket, nil
}
