package api

import (
	"math"
	"math/rand/v2"
	"testing"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// TestPhotonAnswersOverAllMagnitudes asks about photons with numbers of every magnitude:
// each answer is a reply of finite numbers or a refusal with a reason.
func TestPhotonAnswersOverAllMagnitudes(t *testing.T) {
	const rounds = 2000
	s := &photonService{table: newTestTable(t)}
	d := draw{rand.New(rand.NewPCG(5, 13))} //nolint:gosec // the same questions every time
	replies := map[string]int{}
	count := func(kind string, replied bool) {
		if replied {
			replies[kind]++
		}
	}
	for range rounds {
		lepton := []string{"e-", "mu+", "tau-"}[d.IntN(3)]
		pair := &kinegatev1.PairCreation{
			Particle: []string{"e-", "mu-", "pi+", "K-"}[d.IntN(4)],
			Cosines:  []float64{2*d.Float64() - 1, 1}, MaxCosine: new(d.Float64()), TotalsAtSqrtSGev: []float64{d.near()},
		}
		switch d.IntN(3) {
		case 0:
			pair.Energy = twoPhotons(d.near(), d.near(), new(math.Pi*d.Float64()))
		case 1:
			pair.Energy = &kinegatev1.PairCreation_SqrtSGev{SqrtSGev: d.near()}
		case 2:
			pair.Energy = &kinegatev1.PairCreation_RelativeExcess{RelativeExcess: d.number()}
		}
		count("pair", ask(t, s.DescribePhotonProcess, pairCreation(pair)))
		scattering := &kinegatev1.ComptonScattering{
			Particle: lepton, PhotonEnergyGev: d.near(), TotalsAtPhotonEnergiesGev: []float64{d.near()},
			Directions: []*kinegatev1.ScatteringDirection{{ThetaRad: math.Pi * d.Float64()}, {}, {ThetaRad: math.Pi}},
		}
		if d.IntN(2) == 0 {
			scattering.Flight = anyMotion(d)
			scattering.AngleBetweenBeamsRad = new(math.Pi * d.Float64())
			scattering.Directions[0].PhiRad = d.near()
		}
		count("compton", ask(t, s.DescribePhotonProcess, compton(scattering)))
		beam := &kinegatev1.LaserBackscatter{
			Particle: lepton, Beam: anyMotion(d), LightEnergyGev: d.near(), EvenEnergyCount: 5,
			AnglesRad: []float64{0, math.Pi * d.Float64(), 1e-6, math.Pi},
			Windows:   []*kinegatev1.EnergyRange{{MinGev: 0, MaxGev: math.Abs(d.near())}},
		}
		if d.IntN(2) == 0 {
			beam.AngleBetweenBeamsRad = new(math.Pi * d.Float64())
		} else {
			beam.Polarisation = &kinegatev1.BackscatterPolarisation{CircularDegree: 2*d.Float64() - 1, BeamDegree: 2*d.Float64() - 1}
		}
		count("backscatter", ask(t, s.DescribePhotonProcess, backscatter(beam)))
		ends := &kinegatev1.PairAnnihilation{Particle: lepton, Cosines: []float64{0, 1, -1}, MaxCosine: new(d.Float64())}
		ends.Energy = &kinegatev1.PairAnnihilation_KineticEnergyOnRestGev{KineticEnergyOnRestGev: d.near()}
		if d.IntN(2) == 0 {
			ends.Energy = &kinegatev1.PairAnnihilation_SqrtSGev{SqrtSGev: d.near()}
		}
		count("annihilation", ask(t, s.DescribePhotonProcess, annihilation(ends)))
		count("field pair", ask(t, s.DescribePhotonProcess, fieldPair(&kinegatev1.FieldPairCreation{
			Particle: lepton, Target: &kinegatev1.FieldPairCreation_TargetMassGev{TargetMassGev: d.number()},
		})))
		field := &kinegatev1.DescribePhotonFieldRequest{
			Particle: lepton, PhotonEnergiesGev: []float64{math.Abs(d.near())}, DistanceM: math.Abs(d.number()),
			Field: blackBody(math.Abs(d.near()), d.near()-1),
		}
		if d.IntN(2) == 0 {
			low := math.Abs(d.near())
			field.Field = powerLaw(40*d.Float64()-20, low, low*(1+d.near()), math.Abs(d.number()))
		}
		count("field", ask(t, s.DescribePhotonField, field))
	}
	for _, kind := range []string{"pair", "compton", "backscatter", "annihilation", "field pair", "field"} {
		if replies[kind] < rounds/5 {
			t.Errorf("%s: only %d of %d questions were answered", kind, replies[kind], rounds)
		}
	}
}

// anyMotion is a motion of a beam of any magnitude.
func anyMotion(d draw) *kinegatev1.BeamMotion {
	switch d.IntN(3) {
	case 0:
		return total(d.near())
	case 1:
		return &kinegatev1.BeamMotion{Value: &kinegatev1.BeamMotion_KineticEnergyGev{KineticEnergyGev: d.near()}}
	}
	return &kinegatev1.BeamMotion{Value: &kinegatev1.BeamMotion_MomentumGev{MomentumGev: d.near()}}
}
