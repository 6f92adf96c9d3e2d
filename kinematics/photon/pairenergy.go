package photon

import (
	"math"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/num"
)

// PairEnergy is the energy at which two photons make a pair of particles of mass m,
// or the pair makes two photons: the ratio y = s/(4 m^2) together with the excess
// y - 1, each to double-double precision, so that neither the region just above
// threshold nor the highest energies lose digits. The zero value is not useful; make
// one with the functions below. It is immutable.
type PairEnergy struct {
	ratio, excess num.DD
}

// Limits of the ratio y: beyond them products of the closed forms would leave the
// range of doubles.
const (
	greatestRatio  = 1e100
	smallestExcess = 1e-250
)

// PairEnergyFromRatio returns the energy with s/(4 m^2) = y, taken as exactly this
// double. Domain: 0 <= y <= 1e100.
func PairEnergyFromRatio(y float64) (PairEnergy, error) {
	if err := within("photon.PairEnergyFromRatio", "ratio", y, 0, greatestRatio, "0 <= ratio <= 1e100"); err != nil {
		return PairEnergy{}, err
	}
	return PairEnergy{num.FromFloat(y), num.Sum2(y, -1)}, nil
}

// PairEnergyFromExcess returns the energy with s/(4 m^2) - 1 = excess, for energies
// closer to the threshold than a double s can say. Domain: -1 <= excess <= 1e100;
// an excess between -1e-250 and 1e-250 counts as 0.
func PairEnergyFromExcess(excess float64) (PairEnergy, error) {
	if err := within("photon.PairEnergyFromExcess", "excess", excess, -1, greatestRatio,
		"-1 <= excess <= 1e100"); err != nil {
		return PairEnergy{}, err
	}
	if math.Abs(excess) < smallestExcess {
		excess = 0
	}
	return PairEnergy{num.Sum2(1, excess), num.FromFloat(excess)}, nil
}

// PairEnergyFromSqrtS returns the energy sqrtSGeV in the centre of mass, against the
// threshold of a pair of mass massGeV each:
//
//	s/(4 m^2) - 1 = ((sqrt(s) - 2 m)/(2 m))(sqrt(s)/(2 m) + 1)
//
// taken of exactly these doubles. Domain: sqrtSGeV >= 0, massGeV > 0, both in range, and
// sqrt(s)/(2 m) <= 1e50; an excess between -1e-250 and 1e-250 counts as 0.
func PairEnergyFromSqrtS(sqrtSGeV, massGeV float64) (PairEnergy, error) {
	const op = "photon.PairEnergyFromSqrtS"
	if err := first(notNegative(op, "sqrt_s_gev", sqrtSGeV), positive(op, "mass_gev", massGeV)); err != nil {
		return PairEnergy{}, err
	}
	half := float64(sqrtSGeV / 2) // to the compiler a product, which may not be fused
	above := num.Sum2(half, -massGeV).DivFloat(massGeV)
	ratio := num.Quo2(half, massGeV)
	if !(ratio.Hi <= 1e50) {
		return PairEnergy{}, fault.Number("sqrt_s_gev", sqrtSGeV, "<= 2e50 masses").In(op)
	}
	excess := above.Mul(ratio.AddFloat(1))
	if math.Abs(excess.Hi) < smallestExcess {
		excess = num.DD{}
	}
	return PairEnergy{ratio.Square(), excess}, nil
}

// PairEnergyFromPhotons returns the energy of two photons whose directions differ by
// angleRad (pi = head on), against the threshold of a pair of mass massGeV each:
//
//	s/(4 m^2) = (w1/m) (w2/m) sin(angle/2)^2
//
// The sine is rounded once, which near threshold is the uncertainty of the excess;
// head on it is exactly 1. Domain: energies and mass in range,
// 0 <= angleRad <= pi, ratio at most 1e100.
func PairEnergyFromPhotons(firstGeV, secondGeV, angleRad, massGeV float64) (PairEnergy, error) {
	const op = "photon.PairEnergyFromPhotons"
	if err := first(
		positive(op, "first_photon_energy_gev", firstGeV),
		positive(op, "second_photon_energy_gev", secondGeV),
		positive(op, "mass_gev", massGeV),
		within(op, "angle_between_beams_rad", angleRad, 0, math.Pi, "0 <= angle <= pi"),
	); err != nil {
		return PairEnergy{}, err
	}
	sine := 1.0
	if angleRad < math.Pi {
		sine = num.Sin(angleRad / 2)
	}
	ratio := num.Quo2(firstGeV, massGeV).Mul(num.Quo2(secondGeV, massGeV)).MulFloat(sine).MulFloat(sine)
	if !(ratio.Hi <= greatestRatio) {
		return PairEnergy{}, fault.Number("ratio", ratio.Hi, "s/(4 m^2) <= 1e100").In(op)
	}
	return PairEnergy{ratio, ratio.SubFloat(1)}, nil
}

// PairEnergyFromLorentzFactor returns the energy of a particle of Lorentz factor gamma
// that meets its antiparticle at rest, s/(4 m^2) = (gamma + 1)/2.
// Domain: 1 <= gamma <= 1e100.
func PairEnergyFromLorentzFactor(gamma float64) (PairEnergy, error) {
	if err := within("photon.PairEnergyFromLorentzFactor", "gamma", gamma, 1, greatestRatio,
		"1 <= gamma <= 1e100"); err != nil {
		return PairEnergy{}, err
	}
	return PairEnergy{num.Sum2(gamma, 1).Scale(-1), num.Sum2(gamma, -1).Scale(-1)}, nil
}

// PairEnergyFromKinetic returns the energy of a particle of kinetic energy kineticGeV
// and mass massGeV that meets its antiparticle at rest: the excess is T/(2 m), so slow
// particles lose nothing. Domain: kineticGeV >= 0, massGeV > 0, both in range, and
// T/m <= 1e100; T/m below 2e-250 counts as 0.
func PairEnergyFromKinetic(kineticGeV, massGeV float64) (PairEnergy, error) {
	const op = "photon.PairEnergyFromKinetic"
	if err := first(
		notNegative(op, "kinetic_energy_gev", kineticGeV),
		positive(op, "mass_gev", massGeV),
	); err != nil {
		return PairEnergy{}, err
	}
	excess := num.Quo2(kineticGeV, massGeV).Scale(-1)
	switch {
	case !(excess.Hi <= greatestRatio):
		return PairEnergy{}, fault.Number("kinetic_energy_gev", kineticGeV, "<= 1e100 masses").In(op)
	case excess.Hi < smallestExcess:
		excess = num.DD{}
	}
	return PairEnergy{excess.AddFloat(1), excess}, nil
}

// Ratio returns s/(4 m^2).
func (e PairEnergy) Ratio() float64 { return e.ratio.Float() }

// Excess returns s/(4 m^2) - 1, negative below the threshold.
func (e PairEnergy) Excess() float64 { return e.excess.Float() }

// Side tells whether the energy is below, at or above the threshold of the pair. The
// excess is carried exactly or to double-double precision, so At means equality.
func (e PairEnergy) Side() num.Side { return num.SideOf(e.excess.Hi, 0) }

// Velocity returns the velocity of each particle of the pair in its centre of mass,
//
//	beta = sqrt((y - 1)/y)
//
// and 0 at or below the threshold. Accuracy: one rounding.
func (e PairEnergy) Velocity() float64 { return e.velocity().Float() }

func (e PairEnergy) velocity() num.DD {
	if e.Side() != num.Above {
		return num.DD{}
	}
	return e.excess.Div(e.ratio).Sqrt()
}

// rapidityLogarithm returns
//
//	L = ln((1 + beta)/(1 - beta)) = ln(1 + 2 v + 2 sqrt(v y)), v = y - 1,
//
// the logarithm of all closed forms here, as a sum of positive terms: neither
// 1 - beta at high energies nor the small logarithm near threshold loses digits.
func (e PairEnergy) rapidityLogarithm() num.DD {
	return e.excess.Add(e.excess.Mul(e.ratio).Sqrt()).Scale(1).Log1p()
}
