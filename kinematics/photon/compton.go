package photon

import (
	"math"

	"example.org/kinegate/kinematics/num"
)

// Compton is the scattering of a photon on a free particle at rest, such as an
// electron: a point of spin 1/2 and unit charge. Make one with NewCompton. It is
// immutable.
type Compton struct {
	energy, mass, ratio float64
}

// NewCompton returns the scattering of a photon of photonEnergyGeV on a particle of
// massGeV at rest. Domain: photonEnergyGeV >= 0, massGeV > 0, both in range, energy at
// most 1e100 masses.
func NewCompton(photonEnergyGeV, massGeV float64) (Compton, error) {
	const op = "photon.NewCompton"
	if err := first(
		notNegative(op, "photon_energy_gev", photonEnergyGeV),
		positive(op, "mass_gev", massGeV),
		within(op, "photon_energy_gev", photonEnergyGeV/massGeV, 0, greatestEnergyRatio, "at most 1e100 masses"),
	); err != nil {
		return Compton{}, err
	}
	return Compton{photonEnergyGeV, massGeV, photonEnergyGeV / massGeV}, nil
}

// ComptonPoint is one scattering angle of a Compton.
type ComptonPoint struct {
	// PhotonEnergyGeV is the energy of the scattered photon.
	PhotonEnergyGeV float64
	// RecoilKineticGeV is the kinetic energy of the recoil.
	RecoilKineticGeV float64
	// RecoilAngleRad is the angle of the recoil to the photon before, on the other
	// side of it, from pi/2 (forward photon) to 0 (backward photon).
	RecoilAngleRad float64
	// DifferentialBarn is the Klein-Nishina cross-section per steradian of the
	// scattered photon.
	DifferentialBarn float64
}

// At returns what happens at the scattering angle thetaRad, 0 <= thetaRad <= pi:
//
//	P = 1/(1 + 2 k h),  h = sin(theta/2)^2,  w' = P w,  T = w 2 k h P
//	tan(recoil angle) = 1/((1 + k) tan(theta/2))
//
// and the cross-section of KleinNishinaDifferential in barn. The half angle keeps the
// smallest recoil. Accuracy: 4e-15. Source: as the functions named.
func (c Compton) At(thetaRad float64) (ComptonPoint, error) {
	if err := within("photon.Compton.At", "theta_rad", thetaRad, 0, math.Pi, "0 <= theta <= pi"); err != nil {
		return ComptonPoint{}, err
	}
	sine, cosine := num.Sincos(thetaRad / 2)
	if thetaRad == math.Pi {
		sine, cosine = 1, 0
	}
	shift := float64(2 * c.ratio * (sine * sine))
	p := 1 / (1 + shift)
	// cos(theta) = (cos + sin)(cos - sin) of the half angle.
	differential := kleinNishina(p, shift, (cosine-sine)*(cosine+sine))
	return ComptonPoint{
		PhotonEnergyGeV:  c.energy * p,
		RecoilKineticGeV: c.energy * (shift * p),
		RecoilAngleRad:   num.Atan2(cosine, (1+c.ratio)*sine),
		DifferentialBarn: ClassicalRadiusSquared(c.mass) * differential,
	}, nil
}

// Backscattered returns the smallest energy of the scattered photon, at 180 degrees:
// w/(1 + 2 k). A calibration source shows it as the backscatter peak.
func (c Compton) Backscattered() float64 {
	return c.energy / (1 + float64(2*c.ratio))
}

// Edge returns the largest kinetic energy of the recoil, w 2 k/(1 + 2 k): the Compton
// edge in the spectrum of a calibration source.
func (c Compton) Edge() float64 {
	twice := 2 * c.ratio
	return c.energy * (twice / (1 + twice))
}

// ThomsonBarn returns the limit of the total for a photon of no energy,
// 8 pi r^2/3 in barn.
func (c Compton) ThomsonBarn() float64 {
	ratio := ElectronMassGeV / c.mass
	return ThomsonBarn * (ratio * ratio)
}

// TotalBarn returns the total cross-section in barn, see KleinNishinaTotal.
func (c Compton) TotalBarn() float64 {
	return c.ThomsonBarn() * KleinNishinaTotal(c.ratio)
}

// TransferBarn returns the cross-section weighted with the recoil's share of the
// energy, in barn, see KleinNishinaTransfer. Times the photon's energy and the density
// of electrons it is the energy given to electrons per metre.
func (c Compton) TransferBarn() float64 {
	return c.ThomsonBarn() * KleinNishinaTransfer(c.ratio)
}

// MeanScattered returns the mean energy of the scattered photon, see
// MeanScatteredShare.
func (c Compton) MeanScattered() float64 {
	return c.energy * MeanScatteredShare(c.ratio)
}

// MeanRecoil returns the mean kinetic energy of the recoil,
// w sigma_tr/sigma, without the loss of w - MeanScattered for soft photons.
func (c Compton) MeanRecoil() float64 {
	return c.energy * (KleinNishinaTransfer(c.ratio) / KleinNishinaTotal(c.ratio))
}
