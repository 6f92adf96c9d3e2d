package api

import (
	"math"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/num"
	"example.org/kinegate/kinematics/photon"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// pairCreation answers for gamma gamma -> a pair.
func (s *photonService) pairCreation(
	work *spell, m *kinegatev1.DescribePhotonProcessResponse, q *kinegatev1.PairCreation,
) error {
	const at = "pair_creation"
	p, spin, err := s.pairOf(at+".particle", q.GetParticle())
	if err != nil {
		return err
	}
	if err := anglesFault(at, q.GetCosines(), q.GetMaxCosine(), q.GetTotalsAtSqrtSGev()); err != nil {
		return err
	}
	e, err := createdAt(at, q, p.Mass)
	if err != nil {
		return err
	}
	area := photon.ClassicalRadiusSquared(p.Mass)
	a := &kinegatev1.PairCreationAnswer{
		Particle: p.Name, MassGev: p.Mass, ThresholdSqrtSGev: 2 * p.Mass,
		SqrtSGev: restEnergy(e, p.Mass), RelativeExcess: e.Excess(), Beta: e.Velocity(),
		Total: helicityMessage(e.Total(spin), math.Pi*area),
	}
	if two := q.GetTwoPhotons(); two != nil {
		a.FirstEnergyThresholdGev = finite(two.GetFirstEnergyGev() / e.Ratio())
	}
	if q.MaxCosine != nil {
		a.WithinMaxCosine = helicityMessage(e.TotalWithin(spin, q.GetMaxCosine()), math.Pi*area)
	}
	if e.Side() == num.Above {
		mean := e.MeanCosineSquared(spin)
		a.MeanCosineSquared = &kinegatev1.HelicityMean{Unpolarised: mean.Unpolarised, Equal: mean.Zero, Opposite: mean.Two}
	}
	if spin == photon.Lepton {
		beta, peak := photon.PairCreationPeak()
		a.Peak = &kinegatev1.PairCreationPeak{
			SqrtSGev: 2 * p.Mass / math.Sqrt((1-beta)*(1+beta)), Beta: beta, UnpolarisedBarn: peak * math.Pi * area,
		}
	}
	if err := work.each(len(q.GetCosines()), func(i int) error {
		d := e.Differential(spin, q.GetCosines()[i])
		a.Differentials = append(a.Differentials, &kinegatev1.HelicityAngle{
			Cosine: q.GetCosines()[i], UnpolarisedBarnPerSr: d.Unpolarised * area,
			EqualBarnPerSr: d.Zero * area, OppositeBarnPerSr: d.Two * area,
		})
		return nil
	}); err != nil {
		return err
	}
	m.Answer = &kinegatev1.DescribePhotonProcessResponse_PairCreation{PairCreation: a}
	m.Omissions = []string{
		"Higher orders and the attraction of the two charges, which matters for speeds of the order of alpha.",
		"Linear polarisation of the photons, and structure and resonances: the particles are points.",
	}
	return work.each(len(q.GetTotalsAtSqrtSGev()), func(i int) error {
		e, err := energyAt(at, i, q.GetTotalsAtSqrtSGev()[i], p.Mass)
		if err != nil {
			return err
		}
		a.Totals = append(a.Totals, helicityMessage(e.Total(spin), math.Pi*area))
		return nil
	})
}

// createdAt reads the energy of gamma gamma -> a pair.
func createdAt(at string, q *kinegatev1.PairCreation, mass float64) (photon.PairEnergy, error) {
	var e photon.PairEnergy
	var err error
	switch energy := q.GetEnergy().(type) {
	case *kinegatev1.PairCreation_TwoPhotons:
		two := energy.TwoPhotons
		e, err = photon.PairEnergyFromPhotons(
			two.GetFirstEnergyGev(), two.GetSecondEnergyGev(),
			angleOf(two.AngleBetweenPhotonsRad != nil, two.GetAngleBetweenPhotonsRad()), mass)
		return e, atFields(err, at, map[string]string{
			"first_photon_energy_gev":  "two_photons.first_energy_gev",
			"second_photon_energy_gev": "two_photons.second_energy_gev",
			"angle_between_beams_rad":  "two_photons.angle_between_photons_rad",
			"ratio":                    "two_photons",
		})
	case *kinegatev1.PairCreation_SqrtSGev:
		if energy.SqrtSGev == 0 {
			return e, fault.Number(at+".sqrt_s_gev", 0, "> 0 and finite")
		}
		e, err = photon.PairEnergyFromSqrtS(energy.SqrtSGev, mass)
		return e, atFields(err, at, nil)
	case *kinegatev1.PairCreation_RelativeExcess:
		e, err = photon.PairEnergyFromExcess(energy.RelativeExcess)
		return e, atFields(err, at, map[string]string{"excess": "relative_excess"})
	}
	return e, fault.New(fault.Invalid, at+".energy", "", "two_photons, sqrt_s_gev or relative_excess").Because("none is set")
}

// energyAt reads one energy of totals_at_sqrt_s_gev.
func energyAt(at string, i int, sqrtS, mass float64) (photon.PairEnergy, error) {
	path := index("totals_at_sqrt_s_gev", i)
	if sqrtS == 0 {
		return photon.PairEnergy{}, fault.Number(at+"."+path, 0, "> 0 and finite")
	}
	e, err := photon.PairEnergyFromSqrtS(sqrtS, mass)
	return e, atFields(err, at, map[string]string{"sqrt_s_gev": path})
}

// helicityMessage converts cross-sections in units of area.
func helicityMessage(b photon.ByHelicity, area float64) *kinegatev1.HelicityCrossSection {
	return &kinegatev1.HelicityCrossSection{
		UnpolarisedBarn: b.Unpolarised * area, EqualBarn: b.Zero * area, OppositeBarn: b.Two * area,
	}
}

// annihilation answers for a pair -> gamma gamma.
func (s *photonService) annihilation(
	work *spell, m *kinegatev1.DescribePhotonProcessResponse, q *kinegatev1.PairAnnihilation,
) error {
	const at = "annihilation"
	p, err := s.lepton(at+".particle", q.GetParticle())
	if err != nil {
		return err
	}
	if err := anglesFault(at, q.GetCosines(), q.GetMaxCosine(), q.GetTotalsAtSqrtSGev()); err != nil {
		return err
	}
	e, err := annihilatedAt(at, q, p.Mass)
	if err != nil {
		return err
	}
	area := photon.ClassicalRadiusSquared(p.Mass)
	a := &kinegatev1.AnnihilationAnswer{
		Particle: p.Name, MassGev: p.Mass, SqrtSGev: restEnergy(e, p.Mass), Beta: e.Velocity(),
		TotalBarn: finite(e.AnnihilationTotal() * math.Pi * area),
	}
	if q.MaxCosine != nil {
		a.WithinBarn = finite(e.AnnihilationWithin(q.GetMaxCosine()) * math.Pi * area)
		if a.WithinBarn != nil && q.GetMaxCosine() < 1 {
			massless, err := photon.AnnihilationMassless(a.GetSqrtSGev(), q.GetMaxCosine())
			if err != nil {
				return atFields(err, at, map[string]string{"cos_max": "max_cosine"})
			}
			a.MasslessWithinBarn = &massless
		}
	}
	if a.TotalBarn != nil {
		if err := work.each(len(q.GetCosines()), func(i int) error {
			c := q.GetCosines()[i]
			a.Differentials = append(a.Differentials, &kinegatev1.AnnihilationAngle{
				Cosine: c, DifferentialBarnPerSr: e.AnnihilationDifferential(c) * area,
			})
			return nil
		}); err != nil {
			return err
		}
	}
	m.Answer = &kinegatev1.DescribePhotonProcessResponse_Annihilation{Annihilation: a}
	m.Omissions = []string{
		"Higher orders, annihilation to three photons, the weak interaction.",
		"The attraction of slow pairs, bound states, and binding of the target electron.",
	}
	return work.each(len(q.GetTotalsAtSqrtSGev()), func(i int) error {
		sqrtS := q.GetTotalsAtSqrtSGev()[i]
		e, err := energyAt(at, i, sqrtS, p.Mass)
		if err != nil {
			return err
		}
		if e.Side() == num.Below {
			return fault.Number(at+"."+index("totals_at_sqrt_s_gev", i), sqrtS, ">= "+fault.Text(2*p.Mass))
		}
		a.Totals = append(a.Totals, &kinegatev1.AnnihilationTotal{
			SqrtSGev: sqrtS, TotalBarn: finite(e.AnnihilationTotal() * math.Pi * area),
		})
		return nil
	})
}

// annihilatedAt reads the energy of a pair -> gamma gamma.
func annihilatedAt(at string, q *kinegatev1.PairAnnihilation, mass float64) (photon.PairEnergy, error) {
	var e photon.PairEnergy
	var err error
	switch energy := q.GetEnergy().(type) {
	case *kinegatev1.PairAnnihilation_SqrtSGev:
		if e, err = photon.PairEnergyFromSqrtS(energy.SqrtSGev, mass); err == nil && e.Side() == num.Below {
			err = fault.Number("sqrt_s_gev", energy.SqrtSGev, ">= "+fault.Text(2*mass)).Because("below the mass of the pair")
		}
		return e, atFields(err, at, nil)
	case *kinegatev1.PairAnnihilation_KineticEnergyOnRestGev:
		e, err = photon.PairEnergyFromKinetic(energy.KineticEnergyOnRestGev, mass)
		return e, atFields(err, at, map[string]string{"kinetic_energy_gev": "kinetic_energy_on_rest_gev"})
	}
	return e, fault.New(fault.Invalid, at+".energy", "", "sqrt_s_gev or kinetic_energy_on_rest_gev").Because("none is set")
}

// fieldPair answers for a pair in the field of a target at rest.
func (s *photonService) fieldPair(m *kinegatev1.DescribePhotonProcessResponse, q *kinegatev1.FieldPairCreation) error {
	const at = "field_pair"
	p, err := s.named(at+".particle", q.GetParticle())
	if err != nil {
		return err
	}
	var mass float64
	switch target := q.GetTarget().(type) {
	case *kinegatev1.FieldPairCreation_TargetParticle:
		t, err := s.named(at+".target_particle", target.TargetParticle)
		if err != nil {
			return err
		}
		mass = t.Mass
	case *kinegatev1.FieldPairCreation_TargetMassGev:
		mass = target.TargetMassGev
	default:
		return fault.New(fault.Invalid, at+".target", "", "target_particle or target_mass_gev").Because("neither is set")
	}
	threshold, err := photon.FieldPairThreshold(p.Mass, mass)
	if err != nil {
		return atFields(err, at, nil)
	}
	m.Answer = &kinegatev1.DescribePhotonProcessResponse_FieldPair{FieldPair: &kinegatev1.FieldPairAnswer{
		Particle: p.Name, MassGev: p.Mass, TargetMassGev: mass, PhotonEnergyThresholdGev: threshold,
	}}
	m.Omissions = []string{
		"Cross-sections; near the threshold in an electron's field they are very small.",
		"Binding of an atomic electron, excitation and break-up of a nucleus.",
	}
	return nil
}
