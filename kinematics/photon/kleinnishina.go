package photon

import (
	"math"

	"example.org/kinegate/kinematics/num"
)

// The functions of this file are the pure scalars of Compton scattering on a particle
// of mass m at rest, in the energy k = w/m of the photon. A Compton carries the units.

// Limits of k: beyond the greatest, products would leave the range of doubles.
const greatestEnergyRatio = 1e100

// softEnergyRatio is the k below which the totals are summed as power series in k.
// Above it the closed forms cancel by at most a factor 1/k^3 = 2^27 (two terms of
// 2/k^2 against a transfer of order k), and double-double carries 2^-98 or better.
// Below it the term of order n of a series is, relative to the first, less than
//
//	(2 k)^n (n + 2)^2 <= 2^(-8 n) (n + 2)^2,
//
// which for n = softTerms = 8 is below 2^-57.
const (
	softEnergyRatio = 0x1p-9
	softTerms       = 8
)

// ScatteredRatio returns the energy of a photon after Compton scattering over its
// energy before, at the cosine cosTheta of the scattering angle:
//
//	P = 1/(1 + k (1 - cosTheta))
//
// Domain: 0 <= k <= 1e100, -1 <= cosTheta <= 1, taken as exactly these doubles; other
// values give NaN. Accuracy: 3 roundings, 4e-16. For small angles use a Compton with
// the angle itself.
//
// Source: A. H. Compton, Phys. Rev. 21 (1923) 483, equation (5), from memory.
func ScatteredRatio(k, cosTheta float64) float64 {
	if !validCompton(k) || !(cosTheta >= -1 && cosTheta <= 1) {
		return math.NaN()
	}
	return 1 / (1 + float64(k*(1-cosTheta)))
}

// KleinNishinaDifferential returns the cross-section of Compton scattering,
// unpolarised and summed over final polarisations, in units of r^2 per steradian of
// the scattered photon:
//
//	d sigma/d Omega / r^2 = (P^2/2)(P + 1/P - sin(theta)^2)
//	                      = (P^2/2)(1 + cos(theta)^2 + P (k (1 - cos(theta)))^2)
//
// with P of ScatteredRatio; the second form is a sum of positive terms.
//
// Domain and special cases: as ScatteredRatio. Accuracy: 2e-15. Left out: binding and
// motion of the electron, double scattering, higher orders.
//
// Source: O. Klein and Y. Nishina, Z. Phys. 52 (1929) 853; J. M. Jauch and F. Rohrlich,
// The Theory of Photons and Electrons (1976), section 11, from memory.
func KleinNishinaDifferential(k, cosTheta float64) float64 {
	p := ScatteredRatio(k, cosTheta)
	return kleinNishina(p, k*(1-cosTheta), cosTheta)
}

// kleinNishina is the bracket of KleinNishinaDifferential from P, k (1 - cos) and cos.
func kleinNishina(p, shift, cosTheta float64) float64 {
	// p*shift is 1 - P, at most 1, so that the square cannot overflow.
	loss := p * shift
	onePlusSquare := math.FMA(cosTheta, cosTheta, 1)
	return p * float64(float64(p*onePlusSquare)+float64(loss*shift*p)) / 2
}

// KleinNishinaTotal returns the total cross-section of Compton scattering over the
// Thomson cross-section 8 pi r^2/3:
//
//	sigma/sigma_T = (3/4) ((1 + k)/k^3 (2 k (1 + k)/(1 + 2 k) - ln(1 + 2 k))
//	                       + ln(1 + 2 k)/(2 k) - (1 + 3 k)/(1 + 2 k)^2)
//
// which tends to 1 (Thomson) for small and to 3 (ln(2 k) + 1/2)/(8 k) for large k.
//
// Domain: 0 <= k <= 1e100; other values give NaN. Accuracy: 2e-15 for every k, in
// double-double above k = 2^-9 and by a series below. Left out: see
// KleinNishinaDifferential. Source: as there, for the total.
func KleinNishinaTotal(k float64) float64 {
	switch {
	case !validCompton(k):
		return math.NaN()
	case k < softEnergyRatio:
		return softSeries(k, totalCoefficient)
	}
	return hardTotal(k).MulFloat(0.75).Float()
}

// KleinNishinaTransfer returns the cross-section of Compton scattering weighted with
// the share of the photon's energy that the recoil takes, over the Thomson
// cross-section:
//
//	sigma_tr/sigma_T = (integral of (1 - P) d sigma)/sigma_T = sigma/sigma_T - sigma_s/sigma_T
//	sigma_s/(pi r^2) = ln(1 + 2 k)/k^3 + 2 (1 + k)(2 k^2 - 2 k - 1)/(k^2 (1 + 2 k)^2)
//	                   + 8 k^2/(3 (1 + 2 k)^3)
//
// Domain: 0 <= k <= 1e100; other values give NaN. It tends to k for small k.
// Accuracy: 2e-15 for every k, as KleinNishinaTotal.
//
// Source: the integral of KleinNishinaDifferential; R. D. Evans, The Atomic Nucleus
// (1955), chapter 23, gives the same form, from memory.
func KleinNishinaTransfer(k float64) float64 {
	switch {
	case !validCompton(k):
		return math.NaN()
	case k < softEnergyRatio:
		return k * softSeries(k, transferCoefficient)
	}
	return hardTotal(k).Scale(1).Sub(hardScattered(k)).MulFloat(3).Scale(-3).Float()
}

// MeanScatteredShare returns the mean energy of the scattered photon over the energy
// before, <P> = 1 - sigma_tr/sigma. Domain: as KleinNishinaTotal. Accuracy: 4e-15.
func MeanScatteredShare(k float64) float64 {
	switch {
	case !validCompton(k):
		return math.NaN()
	case k < softEnergyRatio:
		return 1 - k*softSeries(k, transferCoefficient)/softSeries(k, totalCoefficient)
	}
	return hardScattered(k).Div(hardTotal(k)).Scale(-1).Float()
}

func validCompton(k float64) bool { return k >= 0 && k <= greatestEnergyRatio }

// hardTotal returns sigma/(2 pi r^2) for k >= softEnergyRatio, written in q = 1/k so
// that no power of k overflows:
//
//	q (1 + q)(2 (1 + q)/(2 + q) - q L) + q L/2 - q (3 + q)/(2 + q)^2,  L = ln(1 + 2 k)
func hardTotal(k float64) num.DD {
	q := num.Quo2(1, k)
	one, two := q.AddFloat(1), q.AddFloat(2)
	ql := q.Mul(num.FromFloat(2 * k).Log1p())
	bracket := one.Scale(1).Div(two).Sub(ql)
	sum := q.Mul(one).Mul(bracket).Add(ql.Scale(-1))
	return sum.Sub(q.Mul(q.AddFloat(3)).Div(two.Square()))
}

// hardScattered returns sigma_s/(pi r^2) of KleinNishinaTransfer for
// k >= softEnergyRatio, in q = 1/k:
//
//	q^3 L + 2 q (1 + q)(2 - 2 q - q^2)/(2 + q)^2 + 8 q/(3 (2 + q)^3)
func hardScattered(k float64) num.DD {
	q := num.Quo2(1, k)
	two := q.AddFloat(2)
	square := two.Square()
	logarithmic := q.Square().Mul(q).Mul(num.FromFloat(2 * k).Log1p())
	polynomial := num.FromFloat(2).Sub(q.Scale(1)).Sub(q.Square())
	middle := q.Scale(1).Mul(q.AddFloat(1)).Mul(polynomial).Div(square)
	last := q.Scale(3).Div(square.Mul(two).MulFloat(3))
	return logarithmic.Add(middle).Add(last)
}

// softSeries sums 1 + sum over n >= 1 of c(n) (-2 k)^n for 0 <= k < softEnergyRatio.
func softSeries(k float64, coefficient func(n float64) float64) float64 {
	sum := 0.0
	for n := softTerms - 1; n >= 1; n-- {
		sum = float64(-2 * k * (sum + coefficient(float64(n))))
	}
	return 1 + sum
}

// totalCoefficient returns the coefficient of (-2 k)^n in sigma/sigma_T. With
// u = 1 - cos(theta), d sigma = pi r^2 (P^3 + P - P^2 u (2 - u)) du over 0 <= u <= 2 and
// P^j = sum of binomial(j + n - 1, n)(-k u)^n,
//
//	c(n) = (3/4)((n + 2)/2 + 1/(n + 1) - 4 (n + 1)/((n + 2)(n + 3)))
func totalCoefficient(n float64) float64 {
	return float64(0.75 * (float64((n+2)/2) + 1/(n+1) - float64(4*(n+1))/((n+2)*(n+3))))
}

// scatteredCoefficient is the same for sigma_s, whose integrand has one more power
// of P:
//
//	c(n) = (3/4)((n + 2)(n + 3)/6 + 1 - 2 (n + 1)/(n + 3))
func scatteredCoefficient(n float64) float64 {
	return float64(0.75 * (float64((n+2)*(n+3))/6 + 1 - float64(2*(n+1))/(n+3)))
}

// transferCoefficient is the coefficient of k (-2 k)^n in sigma_tr/sigma_T: the two
// series differ first at order 1, by -2 k (totalCoefficient - scatteredCoefficient).
func transferCoefficient(n float64) float64 {
	return float64(2 * (scatteredCoefficient(n+1) - totalCoefficient(n+1)))
}
