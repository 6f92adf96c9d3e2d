package photon

import (
	"math"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/num"
)

// Flight is a photon that meets a moving particle of spin 1/2 and unit charge, seen in
// the laboratory.
type Flight struct {
	// EnergyGeV and MassGeV are the total energy and mass of the particle.
	EnergyGeV, MassGeV float64
	// PhotonEnergyGeV is the energy of the photon before.
	PhotonEnergyGeV float64
	// AngleBetweenBeamsRad is the angle between the two directions; pi is head on.
	AngleBetweenBeamsRad float64
}

// Direction is a direction of the scattered photon: the polar angle to the direction
// of the particle and the azimuth about it, 0 on the side of the photon before.
type Direction struct {
	ThetaRad, PhiRad float64
}

// FlightPoint is one direction of the scattered photon.
type FlightPoint struct {
	// PhotonEnergyGeV is the energy of the scattered photon.
	PhotonEnergyGeV float64
	// RestEnergyRatio is the energy of the photon before in the rest frame of the
	// particle, over its mass.
	RestEnergyRatio float64
	// RestCosTheta is the cosine of the scattering angle in that frame.
	RestCosTheta float64
	// DifferentialBarn is the cross-section per steradian of the laboratory.
	DifferentialBarn float64
}

// Scatter returns the scattered photon in one direction of the laboratory:
//
//	w' = p.k/(p.n + k.n),  p.k = w (E - p cos(alpha)),  p.n = E - p cos(theta),  k.n = w (1 - cos(k, n))
//
// n = (1, direction); every E - p cos is written m^2/(E + p) + 2 p sin(angle/2)^2 and
// every 1 - cos as 2 sin(angle/2)^2, so that nothing cancels at any energy. The
// cross-section is that of the rest frame times the Jacobian of photon solid angles,
//
//	d sigma/d Omega = d sigma/d Omega_rest (w'/w'_rest)^2,  w'/w'_rest = m/(p.n)
//	1 - cos(theta_rest) = m^2 w (k.n/w)/((p.k)(p.n))
//
// and unpolarised.
//
// Domain: EnergyGeV >= MassGeV, masses and energies within 1e-100 to 1e100 GeV;
// 0 <= angles <= pi, any finite azimuth. Accuracy: 6e-15 times the condition number.
// Rates in the laboratory carry the flux factor 1 - beta cos(alpha) on top of the
// cross-section. Left out: see KleinNishinaDifferential; polarisation.
//
// Source: J. M. Jauch and F. Rohrlich, The Theory of Photons and Electrons (1976),
// section 11, from memory.
func (f Flight) Scatter(to Direction) (FlightPoint, error) {
	const op = "photon.Flight.Scatter"
	if err := f.check(op); err != nil {
		return FlightPoint{}, err
	}
	if err := within(op, "theta_rad", to.ThetaRad, 0, math.Pi, "0 <= theta <= pi"); err != nil {
		return FlightPoint{}, err
	}
	if math.IsNaN(to.PhiRad) || math.IsInf(to.PhiRad, 0) {
		return FlightPoint{}, fault.Number("phi_rad", to.PhiRad, "finite").In(op)
	}
	momentum := float64(math.Sqrt(f.EnergyGeV-f.MassGeV) * math.Sqrt(f.EnergyGeV+f.MassGeV))
	before := f.againstParticle(momentum, haversine(f.AngleBetweenBeamsRad))
	after := f.againstParticle(momentum, haversine(to.ThetaRad))
	turn := haversineBetween(f.AngleBetweenBeamsRad, to.ThetaRad, to.PhiRad)

	energy := f.PhotonEnergyGeV * (before / (after + float64(2*f.PhotonEnergyGeV*turn)))
	ratio := float64(f.PhotonEnergyGeV / f.MassGeV * (before / f.MassGeV)) // 2 ratio is a sum to the compiler
	// The haversine of the scattering angle in the rest frame; rounding can pass 1 by
	// a few units of the last place, where the angle is pi.
	rest := math.Min(1, f.MassGeV/before*(f.MassGeV/after)*turn)
	shift := float64(2 * ratio * rest)
	p := 1 / (1 + shift)
	cosine := 1 - float64(2*rest)
	jacobian := f.MassGeV / after
	return FlightPoint{
		PhotonEnergyGeV:  energy,
		RestEnergyRatio:  ratio,
		RestCosTheta:     cosine,
		DifferentialBarn: ClassicalRadiusSquared(f.MassGeV) * kleinNishina(p, shift, cosine) * (jacobian * jacobian),
	}, nil
}

// TotalBarn returns the total cross-section in barn, which depends on the energy of
// the photon in the rest frame of the particle alone: KleinNishinaTotal at
//
//	k = (w/m)(E - p cos(alpha))/m
//
// Domain and what is left out: see Scatter. Accuracy: 6e-15.
func (f Flight) TotalBarn() (float64, error) {
	const op = "photon.Flight.TotalBarn"
	if err := f.check(op); err != nil {
		return 0, err
	}
	momentum := float64(math.Sqrt(f.EnergyGeV-f.MassGeV) * math.Sqrt(f.EnergyGeV+f.MassGeV))
	before := f.againstParticle(momentum, haversine(f.AngleBetweenBeamsRad))
	c, err := NewCompton(f.PhotonEnergyGeV*(before/f.MassGeV), f.MassGeV)
	if err != nil {
		return 0, err
	}
	return c.TotalBarn(), nil
}

func (f Flight) check(op string) error {
	return first(
		positive(op, "mass_gev", f.MassGeV),
		within(op, "energy_gev", f.EnergyGeV, f.MassGeV, greatestMagnitude, "mass_gev to 1e100"),
		positive(op, "photon_energy_gev", f.PhotonEnergyGeV),
		within(op, "angle_between_beams_rad", f.AngleBetweenBeamsRad, 0, math.Pi, "0 <= angle <= pi"),
	)
}

// againstParticle returns E - p cos(angle) for the haversine of the angle.
func (f Flight) againstParticle(momentum, haversine float64) float64 {
	return float64(f.MassGeV/(f.EnergyGeV+momentum)*f.MassGeV) + float64(2*momentum*haversine)
}

// haversine returns sin(angle/2)^2, exactly 1 at the double pi, which stands for
// opposite directions.
func haversine(angle float64) float64 {
	if angle == math.Pi {
		return 1
	}
	sine := num.Sin(angle / 2)
	return sine * sine
}

// haversineBetween returns sin(gamma/2)^2 of the angle gamma between two directions at
// the polar angles a and b whose azimuths differ by phi, a sum of positive terms:
//
//	sin(gamma/2)^2 = sin((a - b)/2)^2 + sin(a) sin(b) sin(phi/2)^2
func haversineBetween(a, b, phi float64) float64 {
	return haversine(a-b) + float64(sineOf(a)*sineOf(b)*haversine(phi))
}

// sineOf returns sin(angle), exactly 0 at the double pi.
func sineOf(angle float64) float64 {
	if angle == math.Pi {
		return 0
	}
	return num.Sin(angle)
}
