package api

import (
	"math"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/momentum/breakup"
	"example.org/kinegate/kinematics/particle"
	"example.org/kinegate/kinematics/photon"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// compton answers for a photon scattered by a charged lepton.
func (s *photonService) compton(
	work *spell, m *kinegatev1.DescribePhotonProcessResponse, q *kinegatev1.ComptonScattering,
) error {
	const at = "compton"
	p, err := s.lepton(at+".particle", q.GetParticle())
	if err != nil {
		return err
	}
	if err := tooMany(at, len(q.GetDirections()), len(q.GetTotalsAtPhotonEnergiesGev())); err != nil {
		return err
	}
	a := &kinegatev1.ComptonAnswer{Particle: p.Name, MassGev: p.Mass}
	m.Answer = &kinegatev1.DescribePhotonProcessResponse_Compton{Compton: a}
	m.Omissions = []string{
		"Binding of the electron, double scattering, higher orders.",
		"Polarisation: beams without, final states summed.",
	}
	if q.GetFlight() == nil {
		return comptonAtRest(work, at, a, q)
	}
	return s.comptonInFlight(work, at, a, q, &p)
}

// comptonAtRest answers for a lepton at rest.
func comptonAtRest(work *spell, at string, a *kinegatev1.ComptonAnswer, q *kinegatev1.ComptonScattering) error {
	if q.AngleBetweenBeamsRad != nil {
		return fault.Number(at+".angle_between_beams_rad", q.GetAngleBetweenBeamsRad(), "absent without flight").
			Because("a lepton at rest has no direction")
	}
	c, err := photon.NewCompton(q.GetPhotonEnergyGev(), a.GetMassGev())
	if err != nil {
		return atFields(err, at, nil)
	}
	a.RestEnergyRatio = q.GetPhotonEnergyGev() / a.GetMassGev()
	a.TotalBarn, a.ThomsonBarn = c.TotalBarn(), c.ThomsonBarn()
	a.AtRest = &kinegatev1.ComptonAtRest{
		EdgeGev: c.Edge(), BackscatteredGev: c.Backscattered(), MeanScatteredGev: c.MeanScattered(),
		MeanRecoilGev: c.MeanRecoil(), EnergyTransferBarn: c.TransferBarn(),
	}
	if err := work.each(len(q.GetDirections()), func(i int) error {
		to := q.GetDirections()[i]
		path := index("directions", i)
		if to.GetPhiRad() != 0 {
			return fault.Number(at+"."+path+".phi_rad", to.GetPhiRad(), "0 for a lepton at rest")
		}
		x, err := c.At(to.GetThetaRad())
		if err != nil {
			return atFields(err, at, map[string]string{"theta_rad": path + ".theta_rad"})
		}
		a.Points = append(a.Points, &kinegatev1.ComptonPoint{
			Direction: to, PhotonEnergyGev: x.PhotonEnergyGeV, DifferentialBarnPerSr: x.DifferentialBarn,
			RecoilKineticEnergyGev: &x.RecoilKineticGeV, RecoilAngleRad: &x.RecoilAngleRad,
			RestFrameCosine: math.Cos(to.GetThetaRad()),
		})
		return nil
	}); err != nil {
		return err
	}
	return work.each(len(q.GetTotalsAtPhotonEnergiesGev()), func(i int) error {
		c, err := photon.NewCompton(q.GetTotalsAtPhotonEnergiesGev()[i], a.GetMassGev())
		if err != nil {
			return atFields(err, at, map[string]string{corePhotonEnergy: index("totals_at_photon_energies_gev", i)})
		}
		a.TotalsBarn = append(a.TotalsBarn, c.TotalBarn())
		return nil
	})
}

// comptonInFlight answers for a moving lepton.
func (s *photonService) comptonInFlight(
	work *spell, at string, a *kinegatev1.ComptonAnswer, q *kinegatev1.ComptonScattering, p *particle.Particle,
) error {
	total, err := s.totalEnergy(at+".flight", q.GetFlight(), p)
	if err != nil {
		return err
	}
	flight := photon.Flight{
		EnergyGeV: total, MassGeV: p.Mass,
		PhotonEnergyGeV: q.GetPhotonEnergyGev(), AngleBetweenBeamsRad: angleOf(q.AngleBetweenBeamsRad != nil, q.GetAngleBetweenBeamsRad()),
	}
	paths := map[string]string{"energy_gev": "flight", "mass_gev": "particle"}
	if a.TotalBarn, err = flight.TotalBarn(); err != nil {
		return atFields(err, at, paths)
	}
	// The energy in the lepton's rest frame is the same for every direction.
	ahead, err := flight.Scatter(photon.Direction{})
	if err != nil {
		return atFields(err, at, paths)
	}
	a.RestEnergyRatio = ahead.RestEnergyRatio
	thomson, err := photon.NewCompton(0, p.Mass)
	if err != nil {
		return err
	}
	a.ThomsonBarn = thomson.ThomsonBarn()
	if err := work.each(len(q.GetDirections()), func(i int) error {
		to := q.GetDirections()[i]
		path := index("directions", i)
		x, err := flight.Scatter(photon.Direction{ThetaRad: to.GetThetaRad(), PhiRad: to.GetPhiRad()})
		if err != nil {
			return atFields(err, at, map[string]string{"theta_rad": path + ".theta_rad", "phi_rad": path + ".phi_rad"})
		}
		a.Points = append(a.Points, &kinegatev1.ComptonPoint{
			Direction: to, PhotonEnergyGev: x.PhotonEnergyGeV, DifferentialBarnPerSr: x.DifferentialBarn,
			RestFrameCosine: x.RestCosTheta,
		})
		return nil
	}); err != nil {
		return err
	}
	return work.each(len(q.GetTotalsAtPhotonEnergiesGev()), func(i int) error {
		flight.PhotonEnergyGeV = q.GetTotalsAtPhotonEnergiesGev()[i]
		barn, err := flight.TotalBarn()
		if err != nil {
			return atFields(err, at, map[string]string{corePhotonEnergy: index("totals_at_photon_energies_gev", i)})
		}
		a.TotalsBarn = append(a.TotalsBarn, barn)
		return nil
	})
}

// totalEnergy reads the motion of a beam particle.
func (*photonService) totalEnergy(at string, m *kinegatev1.BeamMotion, p *particle.Particle) (float64, error) {
	f := &former{}
	given := f.motionOf(at, m)
	if err := f.faults.Err(); err != nil {
		return 0, err
	}
	motion, err := motionOfBody(breakup.Body{Mass: p.Mass, Given: given.Given, Value: given.Value})
	if err != nil {
		return 0, In(at, err)
	}
	return motion.Total, nil
}
