package photon

import (
	"math"

	"example.org/kinegate/kinematics/num"
)

// BlackBody is thermal radiation in equilibrium.
type BlackBody struct {
	// TemperatureKelvin is the temperature at redshift 0, 0 or above.
	TemperatureKelvin float64
	// Redshift scales the temperature to TemperatureKelvin (1 + Redshift), as the
	// expansion of space does; > -1. Photon energies are those at that redshift.
	Redshift float64
}

// greatestTemperature bounds k T (1 + z) in kelvin.
const greatestTemperature = 1e15

func (b BlackBody) check(op string) error {
	return first(
		within(op, "temperature_k", b.TemperatureKelvin, 0, greatestTemperature, "0 <= temperature <= 1e15"),
		within(op, "redshift", b.Redshift, -1+0x1p-53, greatestTemperature, "-1 < redshift <= 1e15"),
		within(op, "temperature_k times 1 + redshift", b.TemperatureKelvin*(1+b.Redshift), 0, greatestTemperature,
			"<= 1e15"),
	)
}

// thermalEnergy returns k T (1 + z) in GeV.
func (b BlackBody) thermalEnergy() float64 {
	return BoltzmannGeVPerKelvin * b.TemperatureKelvin * (1 + b.Redshift)
}

// DensityPerCubicMetre returns the number of photons per cubic metre,
//
//	n = (2 zeta(3)/pi^2) (k T/(hbar c))^3
//
// with T scaled to the redshift. Domain: see BlackBody, else a fault. Accuracy: 2e-15.
func (b BlackBody) DensityPerCubicMetre() (float64, error) {
	if err := b.check("photon.BlackBody.DensityPerCubicMetre"); err != nil {
		return 0, err
	}
	const zeta3 = 1.2020569031595942853997381615114499907649862923405 // Apery's constant
	wave := b.thermalEnergy() / HBarCGeVMetre
	return 2 * zeta3 / (math.Pi * math.Pi) * (wave * wave * wave), nil
}

// opacity is kappa/(pi r^2) of Absorb. With n(e) = e^2/(pi^2 (hbar c)^3 (exp(e/kT) - 1)),
// F(e) = (k T/(pi^2 (hbar c)^3)) l(e/kT), l(t) = -ln(1 - exp(-t)), and X = m^2/(E k T),
//
//	kappa/(pi r^2) = (2/pi^2) (k T/(hbar c))^3 X^2 integral of y s(y) l(X y) dy
//
// The integral ends where X v = 50: the rest is below 1e-19 of it.
func (b BlackBody) opacity(energyGeV, massGeV float64) float64 {
	thermal := b.thermalEnergy()
	if thermal <= 0 {
		return 0
	}
	scale := massGeV / energyGeV * (massGeV / thermal)
	if scale > 800 { // exp(-800) underflows, and so does every term
		return 0
	}
	wave := thermal / HBarCGeVMetre
	return 2 / (math.Pi * math.Pi) * (wave * wave * wave) * thermalIntegral(scale)
}

// thermalIntegral returns X^2 times the integral of opacity at X = scale.
func thermalIntegral(scale float64) float64 {
	const end = 50
	return scale * scale * weightedPairs(lowestShare/scale, end/scale, func(excess float64) float64 {
		return boseLogarithm(scale + float64(scale*excess))
	})
}

// boseLogarithm returns -ln(1 - exp(-t)) for t > 0 without cancellation on either
// side of t = ln 2.
func boseLogarithm(t float64) float64 {
	if t < math.Ln2 {
		return -num.Log(-num.Expm1(-t))
	}
	return -num.Log1p(-num.Exp(-t))
}

// Peak is the energy at which a field absorbs most.
type Peak struct {
	// PhotonEnergyGeV is that energy; as the place of a maximum it is known to about
	// the square root of the accuracy of Absorb.
	PhotonEnergyGeV float64
	// MeanFreePathMetre and MeanFreePathKiloparsec are the smallest mean free path.
	MeanFreePathMetre, MeanFreePathKiloparsec float64
}

// SmallestMeanFreePath returns where the black body absorbs photons most strongly by
// creation of pairs of massGeV each, and the mean free path there. By the formula of
// Absorb the absorption at fixed temperature depends on X = m^2/(E k T) alone. It has one
// maximum, between X = 0.1 and X = 10, which is found by golden-section search in
// ln(X) down to 1e-8.
//
// Domain: see BlackBody, massGeV > 0. At 0 K nothing absorbs: the energy is NaN and the
// paths are +Inf. Accuracy: 1e-13 for the paths, 1e-7 for the energy.
func (b BlackBody) SmallestMeanFreePath(massGeV float64) (Peak, error) {
	const op = "photon.BlackBody.SmallestMeanFreePath"
	if err := first(b.check(op), positive(op, "mass_gev", massGeV)); err != nil {
		return Peak{}, err
	}
	thermal := b.thermalEnergy()
	if thermal <= 0 {
		return Peak{PhotonEnergyGeV: math.NaN(), MeanFreePathMetre: math.Inf(1), MeanFreePathKiloparsec: math.Inf(1)}, nil
	}
	const golden = 0.6180339887498949 // (sqrt(5) - 1)/2
	at := func(t float64) float64 { return thermalIntegral(num.Exp(t)) }
	low, high := num.Log(0.1), num.Log(10)
	left, right := high-float64(golden*(high-low)), low+float64(golden*(high-low))
	leftValue, rightValue := at(left), at(right)
	for high-low > 1e-8 {
		if leftValue > rightValue {
			high, right, rightValue = right, left, leftValue
			left = high - float64(golden*(high-low))
			leftValue = at(left)
		} else {
			low, left, leftValue = left, right, rightValue
			right = low + float64(golden*(high-low))
			rightValue = at(right)
		}
	}
	energy := massGeV / num.Exp(low+float64((high-low)/2)) * (massGeV / thermal)
	there, err := Absorb(b, massGeV, []float64{energy}, 0)
	if err != nil {
		return Peak{}, err
	}
	return Peak{energy, there[0].MeanFreePathMetre, there[0].MeanFreePathKiloparsec}, nil
}
