package photon

import (
	"math"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/num"
)

// Field is an isotropic field of soft photons: a BlackBody or a PowerLaw. The list is
// closed.
type Field interface {
	// check returns the first fault of the field's parameters.
	check(op string) error
	// opacity returns the absorption per metre of a photon of energyGeV into pairs of
	// massGeV, divided by pi r^2 in square metre; the parameters are valid.
	opacity(energyGeV, massGeV float64) float64
}

// Absorption is what a field does to a photon of one energy.
type Absorption struct {
	// PhotonEnergyGeV is the energy asked for.
	PhotonEnergyGeV float64
	// PerMetre is the probability of absorption per metre of path.
	PerMetre float64
	// MeanFreePathMetre and MeanFreePathKiloparsec are its inverse; +Inf where
	// nothing absorbs.
	MeanFreePathMetre, MeanFreePathKiloparsec float64
	// OpticalDepth is PerMetre times the distance asked for; the photon survives with
	// probability exp(-OpticalDepth).
	OpticalDepth float64
}

// Absorb returns the absorption of photons by creation of lepton pairs of massGeV each
// in the field, for each of the photon energies, and the optical depth over
// distanceMetre. The directions of the field's photons are isotropic, and each pair of
// photons counts with the rate of its relative motion 1 - cos(theta):
//
//	kappa = integral of n(e) de 1/2 integral of (1 - cos) sigma(s) dcos,  s = 2 E e (1 - cos)
//	      = (2 m^4/E^2) integral of y sigma(y) F(m^2 y/E) dy over y >= 1,  y = s/(4 m^2)
//	F(e)  = integral of n(e')/e'^2 de' over e' >= e
//
// sigma is PairEnergy.Total for unpolarised photons. The depth is local: field and
// energy stay the same over the distance, with no expansion of space and no cascade.
//
// The y integral runs over the logarithm of y - 1 in Gauss-Legendre panels of length
// 2 at most, see the fields. Accuracy: 1e-14 relative to the exact inputs times the
// condition number, which grows like m^2/(E k T) for photons far below the peak of
// absorption on a black body. A kappa below 1e-290 per metre may be rounded to 0.
//
// Domain: 0 < energies <= 1e30 GeV, massGeV > 0, distanceMetre >= 0, all in range. A
// photon below threshold, an empty field and a field at 0 K absorb nothing: PerMetre
// and OpticalDepth are 0 and the mean free path is +Inf. Left out: higher orders,
// creation of two pairs (which takes over above about 1e20 eV on the microwave
// background), absorption by matter, magnetic or anisotropic fields.
//
// Source: R. J. Gould and G. P. Schreder, Phys. Rev. 155 (1967) 1404, equations (7) to
// (10), from memory; the order of integration is exchanged here.
func Absorb(field Field, massGeV float64, energiesGeV []float64, distanceMetre float64) ([]Absorption, error) {
	const op = "photon.Absorb"
	if field == nil {
		return nil, fault.New(fault.Invalid, "field", "", "a black body or a power law").In(op)
	}
	if err := first(
		field.check(op),
		positive(op, "mass_gev", massGeV),
		notNegative(op, "distance_m", distanceMetre),
	); err != nil {
		return nil, err
	}
	area := math.Pi * ClassicalRadiusSquared(massGeV) * SquareMetrePerBarn
	absorptions := make([]Absorption, len(energiesGeV))
	for i, energy := range energiesGeV {
		if !(energy > 0 && energy <= greatestFieldEnergy) {
			return nil, fault.Number("photon_energies_gev", energy, "0 < energy <= 1e30").In(op)
		}
		kappa := area * field.opacity(energy, massGeV)
		absorptions[i] = Absorption{
			PhotonEnergyGeV:        energy,
			PerMetre:               kappa,
			MeanFreePathMetre:      1 / kappa,
			MeanFreePathKiloparsec: 1 / kappa / MetrePerKiloparsec,
			OpticalDepth:           kappa * distanceMetre,
		}
	}
	return absorptions, nil
}

// greatestFieldEnergy bounds photon energies in a field.
const greatestFieldEnergy = 1e30

// lowestShare is where the y integrals begin, as a share of the scale of v = y - 1 on
// which their weight varies. Below it y sigma is at most of order sqrt(v), so that the
// part left out is of order lowestShare^(3/2) = 1e-18 of the whole.
const lowestShare = 1e-12

// longestPanel is the length of the quadrature panels in ln(v). Seen from the middle
// of a panel, the nearest singularities lie at v = -1, a distance pi, and for a black
// body at v + 1 = 2 pi i k T E/m^2, never nearer than pi/2. The half axes of the
// ellipse through them sum to rho >= pi/2 + sqrt(pi^2/4 + 1) = 3.43 for panels of
// length 2, so that the error is of order 3.43^-32 = 7e-18.
const longestPanel = 2

// weightedPairs integrates y s(y) weight(v) dv over v = y - 1 from low to high, with
// s the unpolarised pair cross-section in units of pi r^2.
func weightedPairs(low, high float64, weight func(excess float64) float64) float64 {
	if !(low < high) {
		return 0
	}
	return panels(num.Log(low), num.Log(high), longestPanel, func(t float64) float64 {
		v := num.Exp(t)
		return v * scaledPairTotal(v) * weight(v)
	})
}
