package api

import (
	"context"
	"strconv"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/photon"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// DescribePhotonField says how a field of photons absorbs photons.
func (s *photonService) DescribePhotonField(
	ctx context.Context, request *kinegatev1.DescribePhotonFieldRequest,
) (*kinegatev1.DescribePhotonFieldResponse, error) {
	p, err := s.lepton("particle", request.GetParticle())
	if err != nil {
		return nil, err
	}
	energies := request.GetPhotonEnergiesGev()
	if n := len(energies); n > maxPhotonValues {
		return nil, fault.New(fault.Invalid, "photon_energies_gev", strconv.Itoa(n)+" energies", "at most "+strconv.Itoa(maxPhotonValues))
	}
	m := &kinegatev1.DescribePhotonFieldResponse{
		Particle: p.Name, MassGev: p.Mass, TableVersion: s.table.Version(),
		Omissions: []string{
			"Higher orders and two pairs at once, which take over above about 1e20 eV on the microwave background.",
			"Anisotropic and magnetic fields, matter, expansion of space along the way, and cascades.",
		},
	}
	field, err := photonFieldOf(m, request)
	if err != nil {
		return nil, err
	}
	// The list may be empty: the distance is checked all the same.
	if _, err := photon.Absorb(field, p.Mass, nil, request.GetDistanceM()); err != nil {
		return nil, err
	}
	work := s.turns.begin(ctx)
	defer work.end()
	return m, work.each(len(energies), func(i int) error {
		list, err := photon.Absorb(field, p.Mass, energies[i:i+1], request.GetDistanceM())
		if err != nil {
			return atField(index("photon_energies_gev", i), Explain(err))
		}
		x := &list[0]
		m.Absorptions = append(m.Absorptions, &kinegatev1.PhotonAbsorption{
			PhotonEnergyGev: x.PhotonEnergyGeV, AbsorptionPerM: x.PerMetre, OpticalDepth: x.OpticalDepth,
			MeanFreePathM: finite(x.MeanFreePathMetre), MeanFreePathKpc: finite(x.MeanFreePathKiloparsec),
		})
		return nil
	})
}

// photonFieldOf reads the field and adds what is known of the field itself.
func photonFieldOf(
	m *kinegatev1.DescribePhotonFieldResponse, request *kinegatev1.DescribePhotonFieldRequest,
) (photon.Field, error) {
	switch field := request.GetField().(type) {
	case *kinegatev1.DescribePhotonFieldRequest_BlackBody:
		b := photon.BlackBody{TemperatureKelvin: field.BlackBody.GetTemperatureK(), Redshift: field.BlackBody.GetRedshift()}
		return b, atFields(describeBlackBody(m, b), "black_body", map[string]string{"temperature_k times 1 + redshift": "redshift"})
	case *kinegatev1.DescribePhotonFieldRequest_PowerLaw:
		p := photon.PowerLaw{
			Index: field.PowerLaw.GetIndex(), MinGeV: field.PowerLaw.GetMinGev(), MaxGeV: field.PowerLaw.GetMaxGev(),
			PerCubicMetre: field.PowerLaw.GetDensityPerM3(),
		}
		if _, err := p.DensityPerGeV(p.MinGeV); err != nil {
			return nil, atFields(err, "power_law", map[string]string{"per_cubic_metre": "density_per_m3"})
		}
		m.DensityPerM3 = p.PerCubicMetre
		if p.PerCubicMetre > 0 {
			m.ThresholdGev = new(m.GetMassGev() / p.MaxGeV * m.GetMassGev())
		}
		return p, nil
	}
	return nil, fault.New(fault.Invalid, "field", "", "black_body or power_law").Because("neither is set")
}

// describeBlackBody adds density, temperature and where it absorbs most.
func describeBlackBody(m *kinegatev1.DescribePhotonFieldResponse, b photon.BlackBody) error {
	var err error
	if m.DensityPerM3, err = b.DensityPerCubicMetre(); err != nil {
		return err
	}
	m.TemperatureK = new(b.TemperatureKelvin * (1 + b.Redshift))
	peak, err := b.SmallestMeanFreePath(m.GetMassGev())
	if err != nil {
		return err
	}
	if finite(peak.MeanFreePathMetre) == nil {
		return nil // at 0 K, and so near to it that nothing is absorbed
	}
	m.Strongest = &kinegatev1.StrongestAbsorption{
		PhotonEnergyGev: peak.PhotonEnergyGeV, MeanFreePathM: peak.MeanFreePathMetre, MeanFreePathKpc: peak.MeanFreePathKiloparsec,
	}
	return nil
}
