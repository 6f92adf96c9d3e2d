package photon

import "math"

// Constants of nature. CODATA 2022: P. J. Mohr, D. B. Newell, B. N. Taylor and
// E. Tiesinga, CODATA recommended values of the fundamental physical constants: 2022,
// Rev. Mod. Phys. 97 (2025) 025002. SI: the defining constants of the International
// System of Units, 9th brochure (2019), which are exact.
const (
	// ThomsonBarn is the Thomson cross-section of the electron, 8 pi r_e^2/3, in
	// barn: CODATA 2022, relative uncertainty 9.4e-10. It carries every cross-section
	// here; the fine-structure constant is not needed beside it.
	ThomsonBarn = 0.66524587051
	// ElectronMassGeV is the mass of the electron in GeV: CODATA 2022, relative
	// uncertainty 3.1e-10.
	ElectronMassGeV = 0.51099895069e-3
	// HBarCGeVMetre is hbar c in GeV metre: exact from the SI values
	// h = 6.62607015e-34 J s, c = 299792458 m/s and e = 1.602176634e-19 C.
	HBarCGeVMetre = planckJouleSecond * lightMetrePerSecond / (2 * math.Pi * joulePerGeV)
	// BoltzmannGeVPerKelvin is the Boltzmann constant in GeV per kelvin: exact from
	// the SI value k = 1.380649e-23 J/K.
	BoltzmannGeVPerKelvin = 1.380649e-23 / joulePerGeV
	// MetrePerKiloparsec is the length of a kiloparsec in metre: 648000/pi
	// astronomical units of 149597870700 m each (resolutions B2 of 2012 and B2 of
	// 2015 of the International Astronomical Union).
	MetrePerKiloparsec = 1000 * 648000 / math.Pi * 149597870700
	// SquareMetrePerBarn is the barn in square metre, exact.
	SquareMetrePerBarn = 1e-28
	// MicrowaveBackgroundKelvin is the present temperature of the cosmic microwave
	// background: 2.7255 +- 0.0006 K, D. J. Fixsen, Astrophys. J. 707 (2009) 916.
	MicrowaveBackgroundKelvin = 2.7255

	planckJouleSecond   = 6.62607015e-34
	lightMetrePerSecond = 299792458
	joulePerGeV         = 1.602176634e-10
)

// ClassicalRadiusSquared returns the square of the classical radius of a particle of
// unit charge and mass massGeV, in barn:
//
//	r^2 = (3/(8 pi)) sigma_T (m_e/m)^2
//
// Multiply a cross-section in units of pi r^2 by pi times this, one in r^2 per
// steradian by this.
//
// Domain: massGeV > 0; other values give NaN. Accuracy: 4 roundings, on top of the
// 1e-9 of the constants.
func ClassicalRadiusSquared(massGeV float64) float64 {
	if !(massGeV > 0) {
		return math.NaN()
	}
	ratio := ElectronMassGeV / massGeV
	return 3 / (8 * math.Pi) * ThomsonBarn * (ratio * ratio)
}
