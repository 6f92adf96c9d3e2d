package api

import (
	"strconv"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/photon"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// backscatter answers for a photon beam made by light on a beam of charged leptons.
func (s *photonService) backscatter(
	work *spell, m *kinegatev1.DescribePhotonProcessResponse, q *kinegatev1.LaserBackscatter,
) error {
	const at = "backscatter"
	p, err := s.lepton(at+".particle", q.GetParticle())
	if err != nil {
		return err
	}
	even := int(q.GetEvenEnergyCount())
	if even < 0 || even == 1 {
		return fault.New(fault.Invalid, at+".even_energy_count", strconv.Itoa(even), "0, or 2 to "+strconv.Itoa(maxPhotonValues))
	}
	if err := tooMany(at, even, len(q.GetEnergiesGev()), len(q.GetAnglesRad()), len(q.GetWindows())); err != nil {
		return err
	}
	total, err := s.totalEnergy(at+".beam", q.GetBeam(), &p)
	if err != nil {
		return err
	}
	b, err := photon.NewBackscatter(total, p.Mass, q.GetLightEnergyGev(), angleOf(q.AngleBetweenBeamsRad != nil, q.GetAngleBetweenBeamsRad()))
	if err != nil {
		return atFields(err, at, map[string]string{
			"energy_gev": "beam", "beam_energy_gev": "beam", "mass_gev": "particle", corePhotonEnergy: "light_energy_gev",
		})
	}
	a := &kinegatev1.BackscatterAnswer{
		Particle: p.Name, MassGev: p.Mass, BeamEnergyGev: total, RelativeExcess: b.Invariant(),
		MinGev: b.Lowest(), MaxGev: b.Highest(), MeanGev: b.MeanEnergy(), TotalBarn: b.TotalBarn(),
	}
	m.Answer = &kinegatev1.DescribePhotonProcessResponse_Backscatter{Backscatter: a}
	m.Omissions = []string{
		"Several laser photons at once: this is linear quantum electrodynamics. Higher orders.",
		"The spread of beam and light in energy and angle; transverse polarisation of the beam.",
	}
	if err := spectrum(work, at, a, q, &b); err != nil {
		return err
	}
	if err := work.each(len(q.GetAnglesRad()), func(i int) error {
		angle := q.GetAnglesRad()[i]
		energy, err := b.EnergyAt(angle)
		if err != nil {
			return atFields(err, at, map[string]string{"theta_rad": index("angles_rad", i)})
		}
		within, err := b.FractionWithin(angle)
		if err != nil {
			return atFields(err, at, map[string]string{"theta_rad": index("angles_rad", i)})
		}
		a.Angles = append(a.Angles, &kinegatev1.BackscatterAngle{AngleRad: angle, EnergyGev: energy, FractionWithin: within})
		return nil
	}); err != nil {
		return err
	}
	return work.each(len(q.GetWindows()), func(i int) error {
		window := q.GetWindows()[i]
		share, err := b.Fraction(window.GetMinGev(), window.GetMaxGev())
		if err != nil {
			return atFields(err, at, map[string]string{"low_gev": index("windows", i) + ".min_gev"})
		}
		a.WindowFractions = append(a.WindowFractions, share)
		return nil
	})
}

// spectrum adds the points of the spectrum: the even energies, then those asked for.
func spectrum(
	work *spell, at string, a *kinegatev1.BackscatterAnswer, q *kinegatev1.LaserBackscatter, b *photon.Backscatter,
) error {
	even := int(q.GetEvenEnergyCount())
	return work.each(even+len(q.GetEnergiesGev()), func(i int) error {
		path := "even_energy_count"
		var energy float64
		if i < even {
			share := float64(i) / float64(even-1)
			energy = min(b.Highest(), b.Lowest()*(1-share)+b.Highest()*share)
			energy = max(energy, b.Lowest())
		} else {
			path = index("energies_gev", i-even)
			energy = q.GetEnergiesGev()[i-even]
		}
		point, err := pointAt(b, energy, q.GetPolarisation())
		if err != nil {
			return atFields(err, at, map[string]string{
				corePhotonEnergy: path, "circular": "polarisation.circular_degree",
				"linear": "polarisation.linear_degree", "beam_helicity": "polarisation.beam_degree",
			})
		}
		a.Points = append(a.Points, point)
		return nil
	})
}

// pointAt is one energy of the spectrum.
func pointAt(b *photon.Backscatter, energy float64, p *kinegatev1.BackscatterPolarisation) (*kinegatev1.BackscatterPoint, error) {
	angle, err := b.AngleAt(energy)
	if err != nil {
		return nil, err
	}
	point := &kinegatev1.BackscatterPoint{EnergyGev: energy, AngleRad: angle}
	if p == nil {
		point.DifferentialBarnPerGev, err = b.DifferentialBarn(energy)
		return point, err
	}
	polarised, err := b.Polarised(energy, photon.LaserPolarisation{
		Circular: p.GetCircularDegree(), Linear: p.GetLinearDegree(), BeamHelicity: p.GetBeamDegree(),
	})
	if err != nil {
		return nil, err
	}
	point.DifferentialBarnPerGev = polarised.DifferentialBarn
	point.CircularDegree, point.LinearDegree = &polarised.Circular, &polarised.Linear
	return point, nil
}
