package api

import (
	"context"
	"errors"
	"math"
	"strings"
	"testing"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// process asks for one process.
func process(t *testing.T, request *kinegatev1.DescribePhotonProcessRequest) (*kinegatev1.DescribePhotonProcessResponse, error) {
	t.Helper()
	return (&photonService{table: newTestTable(t)}).DescribePhotonProcess(t.Context(), request)
}

func pairCreation(q *kinegatev1.PairCreation) *kinegatev1.DescribePhotonProcessRequest {
	return &kinegatev1.DescribePhotonProcessRequest{Process: &kinegatev1.DescribePhotonProcessRequest_PairCreation{PairCreation: q}}
}

func twoPhotons(first, second float64, angle *float64) *kinegatev1.PairCreation_TwoPhotons {
	return &kinegatev1.PairCreation_TwoPhotons{TwoPhotons: &kinegatev1.TwoPhotons{
		FirstEnergyGev: first, SecondEnergyGev: second, AngleBetweenPhotonsRad: angle,
	}}
}

func compton(q *kinegatev1.ComptonScattering) *kinegatev1.DescribePhotonProcessRequest {
	return &kinegatev1.DescribePhotonProcessRequest{Process: &kinegatev1.DescribePhotonProcessRequest_Compton{Compton: q}}
}

func backscatter(q *kinegatev1.LaserBackscatter) *kinegatev1.DescribePhotonProcessRequest {
	return &kinegatev1.DescribePhotonProcessRequest{Process: &kinegatev1.DescribePhotonProcessRequest_Backscatter{Backscatter: q}}
}

func annihilation(q *kinegatev1.PairAnnihilation) *kinegatev1.DescribePhotonProcessRequest {
	return &kinegatev1.DescribePhotonProcessRequest{Process: &kinegatev1.DescribePhotonProcessRequest_Annihilation{Annihilation: q}}
}

func fieldPair(q *kinegatev1.FieldPairCreation) *kinegatev1.DescribePhotonProcessRequest {
	return &kinegatev1.DescribePhotonProcessRequest{Process: &kinegatev1.DescribePhotonProcessRequest_FieldPair{FieldPair: q}}
}

// closeTo reports a relative difference above the bound.
func closeTo(t *testing.T, what string, got, want, bound float64) {
	t.Helper()
	if !(math.Abs(got-want) <= bound*math.Abs(want)) {
		t.Errorf("%s is %.17g, want %.17g within %g", what, got, want, bound)
	}
}

// TestPairCreation holds the published peak of gamma gamma -> e+ e-: the cross-section
// is largest at beta = 0.7, where it is 0.26 of the Thomson cross-section of
// 0.665 barn (R. J. Gould and G. P. Schreder, Phys. Rev. 155 (1967) 1404, from memory).
func TestPairCreation(t *testing.T) {
	t.Run("peak", func(t *testing.T) {
		m, err := process(t, pairCreation(&kinegatev1.PairCreation{
			Particle: "e-", Energy: &kinegatev1.PairCreation_SqrtSGev{SqrtSGev: 1e-3},
		}))
		if err != nil {
			t.Fatal(err)
		}
		peak := m.GetPairCreation().GetPeak()
		closeTo(t, "beta", peak.GetBeta(), 0.70, 0.005)
		closeTo(t, "cross-section", peak.GetUnpolarisedBarn(), 0.26*0.665, 0.02)
		if m.GetPairCreation().GetTotal().GetUnpolarisedBarn() != 0 || m.GetPairCreation().GetRelativeExcess() >= 0 {
			t.Errorf("0.022 MeV below the threshold: %v", m.GetPairCreation())
		}
		if len(m.GetOmissions()) == 0 || m.GetTableVersion() == "" {
			t.Error("nothing is said of what is left out")
		}
		again, err := process(t, pairCreation(&kinegatev1.PairCreation{
			Particle: "e+", Energy: &kinegatev1.PairCreation_SqrtSGev{SqrtSGev: peak.GetSqrtSGev()},
			TotalsAtSqrtSGev: []float64{1e-3, peak.GetSqrtSGev(), 2 * peak.GetSqrtSGev()},
		}))
		if err != nil {
			t.Fatal(err)
		}
		a := again.GetPairCreation()
		closeTo(t, "total at the peak", a.GetTotal().GetUnpolarisedBarn(), peak.GetUnpolarisedBarn(), 1e-14)
		closeTo(t, "half sum", (a.GetTotal().GetEqualBarn()+a.GetTotal().GetOppositeBarn())/2, peak.GetUnpolarisedBarn(), 1e-14)
		if list := a.GetTotals(); list[0].GetUnpolarisedBarn() != 0 || list[1].GetUnpolarisedBarn() != a.GetTotal().GetUnpolarisedBarn() ||
			list[2].GetUnpolarisedBarn() >= list[1].GetUnpolarisedBarn() {
			t.Errorf("totals %v", list)
		}
	})
	t.Run("two photons", func(t *testing.T) {
		sideways := math.Pi / 2
		m, err := process(t, pairCreation(&kinegatev1.PairCreation{
			Particle: "mu-", Energy: twoPhotons(1, 0.05, &sideways), MaxCosine: new(0.5), Cosines: []float64{0, 1},
		}))
		if err != nil {
			t.Fatal(err)
		}
		a := m.GetPairCreation()
		// s = 2 w1 w2 (1 - cos): w1 = 2 m^2/(w2 (1 - cos)) at threshold.
		closeTo(t, "threshold", a.GetFirstEnergyThresholdGev(), 2*a.GetMassGev()*a.GetMassGev()/0.05, 1e-15)
		closeTo(t, "sqrt(s)", a.GetSqrtSGev(), math.Sqrt(0.1), 1e-15)
		if w := a.GetWithinMaxCosine().GetUnpolarisedBarn(); !(w > 0 && w < a.GetTotal().GetUnpolarisedBarn()) {
			t.Errorf("within %g", w)
		}
		if d := a.GetDifferentials(); len(d) != 2 || d[1].GetOppositeBarnPerSr() != 0 || d[0].GetUnpolarisedBarnPerSr() <= 0 {
			t.Errorf("differentials %v", d)
		}
	})
	t.Run("parallel", func(t *testing.T) {
		m, err := process(t, pairCreation(&kinegatev1.PairCreation{Particle: "e-", Energy: twoPhotons(1, 1, new(0.0))}))
		if err != nil {
			t.Fatal(err)
		}
		if a := m.GetPairCreation(); a.FirstEnergyThresholdGev != nil || a.GetRelativeExcess() != -1 || a.GetMeanCosineSquared() != nil {
			t.Errorf("%v", a)
		}
	})
	t.Run("scalars close to threshold", func(t *testing.T) {
		m, err := process(t, pairCreation(&kinegatev1.PairCreation{
			Particle: "pi+", Energy: &kinegatev1.PairCreation_RelativeExcess{RelativeExcess: 1e-20},
		}))
		if err != nil {
			t.Fatal(err)
		}
		a := m.GetPairCreation()
		closeTo(t, "beta", a.GetBeta(), 1e-10, 1e-15)
		closeTo(t, "mean for equal helicities", a.GetMeanCosineSquared().GetEqual(), 1.0/3, 1e-14)
		if a.GetPeak() != nil || a.GetTotal().GetEqualBarn() <= 0 {
			t.Errorf("%v", a)
		}
	})
	t.Run("at 1e12 of the threshold", func(t *testing.T) {
		m, err := process(t, pairCreation(&kinegatev1.PairCreation{
			Particle: "e-", Energy: &kinegatev1.PairCreation_RelativeExcess{RelativeExcess: 1e12},
		}))
		if err != nil {
			t.Fatal(err)
		}
		// The limit (pi r^2/y) (ln(4 y) - 1) from the closed form.
		a := m.GetPairCreation()
		want := math.Pi * 0.0794078 / 1e12 * (math.Log(4e12) - 1)
		closeTo(t, "total", a.GetTotal().GetUnpolarisedBarn(), want, 1e-5)
	})
}

// TestCompton holds the Compton edges of calibration sources: 477 keV for the 662 keV
// line of caesium 137 and 1118 keV for the 1333 keV line of cobalt 60 (G. F. Knoll,
// Radiation Detection and Measurement, from memory).
func TestCompton(t *testing.T) {
	for _, c := range []struct {
		name             string
		photonKeV, edgeK float64
	}{{"caesium 137", 661.657, 477.3}, {"cobalt 60", 1332.492, 1118.1}, {"sodium 22", 1274.537, 1061.7}} {
		t.Run(c.name, func(t *testing.T) {
			m, err := process(t, compton(&kinegatev1.ComptonScattering{
				Particle: "e-", PhotonEnergyGev: c.photonKeV * 1e-6,
				Directions:                []*kinegatev1.ScatteringDirection{{}, {ThetaRad: math.Pi}},
				TotalsAtPhotonEnergiesGev: []float64{0, 1e-9},
			}))
			if err != nil {
				t.Fatal(err)
			}
			a := m.GetCompton()
			closeTo(t, "edge", a.GetAtRest().GetEdgeGev()*1e6, c.edgeK, 1e-4)
			closeTo(t, "sum", a.GetAtRest().GetEdgeGev()+a.GetAtRest().GetBackscatteredGev(), c.photonKeV*1e-6, 1e-15)
			closeTo(t, "recoil backwards", a.GetPoints()[1].GetRecoilKineticEnergyGev(), a.GetAtRest().GetEdgeGev(), 1e-15)
			closeTo(t, "forward", a.GetPoints()[0].GetPhotonEnergyGev(), c.photonKeV*1e-6, 1e-15)
			// The Thomson cross-section of CODATA 2022.
			closeTo(t, "Thomson", a.GetTotalsBarn()[0], 0.66524587051, 1e-12)
			closeTo(t, "soft", a.GetTotalsBarn()[1], a.GetThomsonBarn(), 1e-5)
		})
	}
	t.Run("in flight", func(t *testing.T) {
		m, err := process(t, compton(&kinegatev1.ComptonScattering{
			Particle: "e-", PhotonEnergyGev: 3.5e-9, Flight: total(2.4),
			Directions:                []*kinegatev1.ScatteringDirection{{}},
			TotalsAtPhotonEnergiesGev: []float64{3.5e-9},
		}))
		if err != nil {
			t.Fatal(err)
		}
		b, err := process(t, backscatter(&kinegatev1.LaserBackscatter{Particle: "e-", Beam: total(2.4), LightEnergyGev: 3.5e-9}))
		if err != nil {
			t.Fatal(err)
		}
		a := m.GetCompton()
		closeTo(t, "straight back", a.GetPoints()[0].GetPhotonEnergyGev(), b.GetBackscatter().GetMaxGev(), 1e-14)
		closeTo(t, "total", a.GetTotalBarn(), b.GetBackscatter().GetTotalBarn(), 1e-14)
		closeTo(t, "list", a.GetTotalsBarn()[0], a.GetTotalBarn(), 0)
		if a.GetAtRest() != nil || a.GetPoints()[0].RecoilAngleRad != nil {
			t.Errorf("%v", a)
		}
	})
}

// TestBackscatter holds published edges: 300 MeV from 2.5 GeV and light of 351.1 nm
// (A. M. Sandorfi et al., IEEE Trans. Nucl. Sci. 30 (1983) 3083, abstract) and 848 MeV
// from 6 GeV and a ruby laser of 1.79 eV (R. H. Milburn, Phys. Rev. Lett. 10 (1963) 75),
// both from memory, to the digits stated.
func TestBackscatter(t *testing.T) {
	for _, c := range []struct {
		name              string
		beam, light, edge float64
		bound             float64
	}{
		{"2.5 GeV, ultraviolet", 2.5, 1.2398419843320026e-15 / 351.1e-9, 0.300, 0.02},
		{"6 GeV, ruby", 6, 1.79e-9, 0.848, 1e-3},
	} {
		t.Run(c.name, func(t *testing.T) {
			m, err := process(t, backscatter(&kinegatev1.LaserBackscatter{
				Particle: "e-", Beam: total(c.beam), LightEnergyGev: c.light, EvenEnergyCount: 11,
				AnglesRad: []float64{0, math.Pi}, Polarisation: &kinegatev1.BackscatterPolarisation{CircularDegree: 1},
				Windows: []*kinegatev1.EnergyRange{{MinGev: 0, MaxGev: 0.2}, {MinGev: 0.2, MaxGev: 10}},
			}))
			if err != nil {
				t.Fatal(err)
			}
			a := m.GetBackscatter()
			closeTo(t, "edge", a.GetMaxGev(), c.edge, c.bound)
			points := a.GetPoints()
			if len(points) != 11 || points[0].GetEnergyGev() != a.GetMinGev() || points[10].GetEnergyGev() != a.GetMaxGev() {
				t.Fatalf("points %v", points)
			}
			// The helicity of the light is turned round at the edge.
			closeTo(t, "helicity at the edge", points[10].GetCircularDegree(), -1, 1e-9)
			closeTo(t, "forward", a.GetAngles()[0].GetEnergyGev(), a.GetMaxGev(), 1e-14)
			closeTo(t, "everything", a.GetAngles()[1].GetFractionWithin(), 1, 1e-13)
			closeTo(t, "windows", a.GetWindowFractions()[0]+a.GetWindowFractions()[1], 1, 1e-13)
			if mean := a.GetMeanGev(); !(mean > a.GetMaxGev()/3 && mean < a.GetMaxGev()*2/3) {
				t.Errorf("mean %g", mean)
			}
		})
	}
}

func TestAnnihilation(t *testing.T) {
	m, err := process(t, annihilation(&kinegatev1.PairAnnihilation{
		Particle: "e+", Energy: &kinegatev1.PairAnnihilation_SqrtSGev{SqrtSGev: 1}, MaxCosine: new(0.8),
		Cosines: []float64{0, 0.5}, TotalsAtSqrtSGev: []float64{1},
	}))
	if err != nil {
		t.Fatal(err)
	}
	a := m.GetAnnihilation()
	closeTo(t, "massless", a.GetMasslessWithinBarn(), a.GetWithinBarn(), 1e-5)
	closeTo(t, "list", a.GetTotals()[0].GetTotalBarn(), a.GetTotalBarn(), 0)
	// Detailed balance: both sides have four spin states, d sigma = d sigma(reverse)/beta^2.
	r, err := process(t, pairCreation(&kinegatev1.PairCreation{
		Particle: "e-", Energy: &kinegatev1.PairCreation_SqrtSGev{SqrtSGev: 1}, Cosines: []float64{0, 0.5},
	}))
	if err != nil {
		t.Fatal(err)
	}
	for i, d := range a.GetDifferentials() {
		reverse := r.GetPairCreation().GetDifferentials()[i].GetUnpolarisedBarnPerSr()
		closeTo(t, "reverse", d.GetDifferentialBarnPerSr(), reverse/(a.GetBeta()*a.GetBeta()), 1e-14)
	}
	rest, err := process(t, annihilation(&kinegatev1.PairAnnihilation{
		Particle: "e+", Energy: &kinegatev1.PairAnnihilation_KineticEnergyOnRestGev{}, Cosines: []float64{0}, MaxCosine: new(1.0),
	}))
	if err != nil {
		t.Fatal(err)
	}
	if a := rest.GetAnnihilation(); a.TotalBarn != nil || a.WithinBarn != nil || len(a.GetDifferentials()) != 0 || a.GetBeta() != 0 {
		t.Errorf("a pair at rest has %v", a)
	}
}

// TestFieldPair holds 4 m in an electron's field and 2 m in a heavy one (R. D. Evans,
// The Atomic Nucleus (1955), chapter 24).
func TestFieldPair(t *testing.T) {
	for _, c := range []struct {
		name   string
		q      *kinegatev1.FieldPairCreation
		masses float64
	}{
		{"electron", &kinegatev1.FieldPairCreation{
			Particle: "e+", Target: &kinegatev1.FieldPairCreation_TargetParticle{TargetParticle: "e-"},
		}, 4},
		{"heavy", &kinegatev1.FieldPairCreation{
			Particle: "e+", Target: &kinegatev1.FieldPairCreation_TargetMassGev{TargetMassGev: 1e20},
		}, 2},
	} {
		t.Run(c.name, func(t *testing.T) {
			m, err := process(t, fieldPair(c.q))
			if err != nil {
				t.Fatal(err)
			}
			a := m.GetFieldPair()
			closeTo(t, "threshold", a.GetPhotonEnergyThresholdGev(), c.masses*a.GetMassGev(), 1e-15)
		})
	}
}

func TestDescribePhotonProcessRefuses(t *testing.T) {
	nan, inf, four := math.NaN(), math.Inf(1), 4.0
	long := make([]float64, maxPhotonValues+1)
	sqrtS := func(x float64) *kinegatev1.PairCreation_SqrtSGev {
		return &kinegatev1.PairCreation_SqrtSGev{SqrtSGev: x}
	}
	onRest := func(x float64) *kinegatev1.PairAnnihilation_KineticEnergyOnRestGev {
		return &kinegatev1.PairAnnihilation_KineticEnergyOnRestGev{KineticEnergyOnRestGev: x}
	}
	beam := func(q *kinegatev1.LaserBackscatter) *kinegatev1.DescribePhotonProcessRequest {
		q.Particle, q.Beam = "e-", total(2)
		if q.GetLightEnergyGev() == 0 {
			q.LightEnergyGev = 3e-9
		}
		return backscatter(q)
	}
	for _, c := range []struct {
		name    string
		request *kinegatev1.DescribePhotonProcessRequest
		reason  Reason
		field   string
	}{
		{"nothing", &kinegatev1.DescribePhotonProcessRequest{}, FieldInvalid, "process"},
		{"empty pair", pairCreation(&kinegatev1.PairCreation{}), FieldInvalid, "pair_creation.particle"},
		{"unknown", pairCreation(&kinegatev1.PairCreation{Particle: "ee"}), NameUnknown, "pair_creation.particle"},
		{"neutral", pairCreation(&kinegatev1.PairCreation{Particle: "pi0"}), FieldInvalid, "pair_creation.particle"},
		{"proton", pairCreation(&kinegatev1.PairCreation{Particle: "p"}), FieldInvalid, "pair_creation.particle"},
		{"no energy", pairCreation(&kinegatev1.PairCreation{Particle: "e-"}), FieldInvalid, "pair_creation.energy"},
		{"zero sqrt(s)", pairCreation(&kinegatev1.PairCreation{Particle: "e-", Energy: sqrtS(0)}), FieldInvalid, "pair_creation.sqrt_s_gev"},
		{"NaN", pairCreation(&kinegatev1.PairCreation{Particle: "e-", Energy: sqrtS(nan)}), FieldInvalid, "pair_creation.sqrt_s_gev"},
		{"photon of no energy", pairCreation(&kinegatev1.PairCreation{Particle: "e-", Energy: twoPhotons(0, 1, nil)}),
			FieldInvalid, "pair_creation.two_photons.first_energy_gev"},
		{"angle", pairCreation(&kinegatev1.PairCreation{Particle: "e-", Energy: twoPhotons(1, 1, &four)}),
			FieldInvalid, "pair_creation.two_photons.angle_between_photons_rad"},
		{"cosine", pairCreation(&kinegatev1.PairCreation{Particle: "e-", Energy: sqrtS(1), Cosines: []float64{0, 2}}),
			FieldInvalid, "pair_creation.cosines[1]"},
		{"max cosine", pairCreation(&kinegatev1.PairCreation{Particle: "e-", Energy: sqrtS(1), MaxCosine: &nan}),
			FieldInvalid, "pair_creation.max_cosine"},
		{"list", pairCreation(&kinegatev1.PairCreation{Particle: "e-", Energy: sqrtS(1), TotalsAtSqrtSGev: []float64{1, -1}}),
			FieldInvalid, "pair_creation.totals_at_sqrt_s_gev[1]"},
		{"long list", pairCreation(&kinegatev1.PairCreation{Particle: "e-", Energy: sqrtS(1), TotalsAtSqrtSGev: long}),
			FieldInvalid, "pair_creation"},
		{"excess", pairCreation(&kinegatev1.PairCreation{
			Particle: "e-", Energy: &kinegatev1.PairCreation_RelativeExcess{RelativeExcess: -2},
		}), FieldInvalid, "pair_creation.relative_excess"},
		{"no lepton", compton(&kinegatev1.ComptonScattering{Particle: "pi+"}), FieldInvalid, "compton.particle"},
		{"negative photon", compton(&kinegatev1.ComptonScattering{Particle: "e-", PhotonEnergyGev: -1}), FieldInvalid, "compton.photon_energy_gev"},
		{"angle at rest", compton(&kinegatev1.ComptonScattering{Particle: "e-", PhotonEnergyGev: 1, AngleBetweenBeamsRad: &four}),
			FieldInvalid, "compton.angle_between_beams_rad"},
		{"azimuth at rest", compton(&kinegatev1.ComptonScattering{
			Particle: "e-", PhotonEnergyGev: 1, Directions: []*kinegatev1.ScatteringDirection{{PhiRad: 1}},
		}), FieldInvalid, "compton.directions[0].phi_rad"},
		{"theta", compton(&kinegatev1.ComptonScattering{
			Particle: "e-", PhotonEnergyGev: 1, Directions: []*kinegatev1.ScatteringDirection{{}, {ThetaRad: 4}},
		}), FieldInvalid, "compton.directions[1].theta_rad"},
		{"below the mass", compton(&kinegatev1.ComptonScattering{Particle: "e-", PhotonEnergyGev: 1, Flight: total(1e-4)}),
			FieldInvalid, "compton.flight.total_energy_gev"},
		{"no motion", compton(&kinegatev1.ComptonScattering{Particle: "e-", PhotonEnergyGev: 1, Flight: &kinegatev1.BeamMotion{}}),
			FieldInvalid, "compton.flight"},
		{"azimuth in flight", compton(&kinegatev1.ComptonScattering{
			Particle: "e-", PhotonEnergyGev: 1, Flight: total(1), Directions: []*kinegatev1.ScatteringDirection{{PhiRad: inf}},
		}), FieldInvalid, "compton.directions[0].phi_rad"},
		{"photon list in flight", compton(&kinegatev1.ComptonScattering{
			Particle: "e-", PhotonEnergyGev: 1, Flight: total(1), TotalsAtPhotonEnergiesGev: []float64{0},
		}), FieldInvalid, "compton.totals_at_photon_energies_gev[0]"},
		{"no beam", backscatter(&kinegatev1.LaserBackscatter{Particle: "e-", LightEnergyGev: 3e-9}), FieldInvalid, "backscatter.beam"},
		{"light", beam(&kinegatev1.LaserBackscatter{LightEnergyGev: inf}), FieldInvalid, "backscatter.light_energy_gev"},
		{"one even energy", beam(&kinegatev1.LaserBackscatter{EvenEnergyCount: 1}), FieldInvalid, "backscatter.even_energy_count"},
		{"too many even energies", beam(&kinegatev1.LaserBackscatter{EvenEnergyCount: math.MaxInt32}), FieldInvalid, "backscatter"},
		{"beyond the edge", beam(&kinegatev1.LaserBackscatter{EnergiesGev: []float64{2}}), OutsideRegion, "backscatter.energies_gev[0]"},
		{"angle of a photon", beam(&kinegatev1.LaserBackscatter{AnglesRad: []float64{-1}}), FieldInvalid, "backscatter.angles_rad[0]"},
		{"window", beam(&kinegatev1.LaserBackscatter{Windows: []*kinegatev1.EnergyRange{{MinGev: 2, MaxGev: 1}}}),
			FieldInvalid, "backscatter.windows[0].min_gev"},
		{"degree", beam(&kinegatev1.LaserBackscatter{
			EvenEnergyCount: 2, Polarisation: &kinegatev1.BackscatterPolarisation{LinearDegree: 2},
		}), FieldInvalid, "backscatter.polarisation.linear_degree"},
		{"closed annihilation", annihilation(&kinegatev1.PairAnnihilation{
			Particle: "mu+", Energy: &kinegatev1.PairAnnihilation_SqrtSGev{SqrtSGev: 0.2},
		}), FieldInvalid, "annihilation.sqrt_s_gev"},
		{"negative kinetic energy", annihilation(&kinegatev1.PairAnnihilation{Particle: "mu+", Energy: onRest(-1)}),
			FieldInvalid, "annihilation.kinetic_energy_on_rest_gev"},
		{"closed list", annihilation(&kinegatev1.PairAnnihilation{Particle: "mu+", Energy: onRest(1), TotalsAtSqrtSGev: []float64{0.2}}),
			FieldInvalid, "annihilation.totals_at_sqrt_s_gev[0]"},
		{"annihilation without energy", annihilation(&kinegatev1.PairAnnihilation{Particle: "mu+"}), FieldInvalid, "annihilation.energy"},
		{"no target", fieldPair(&kinegatev1.FieldPairCreation{Particle: "e-"}), FieldInvalid, "field_pair.target"},
		{"massless target", fieldPair(&kinegatev1.FieldPairCreation{
			Particle: "e-", Target: &kinegatev1.FieldPairCreation_TargetParticle{TargetParticle: "gamma"},
		}), FieldInvalid, "field_pair.target_particle"},
		{"target mass", fieldPair(&kinegatev1.FieldPairCreation{
			Particle: "e-", Target: &kinegatev1.FieldPairCreation_TargetMassGev{TargetMassGev: -1},
		}), FieldInvalid, "field_pair.target_mass_gev"},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, err := process(t, c.request)
			if m := refused(t, err, c.reason); m["field"] != c.field || !strings.Contains(err.Error(), ":") {
				t.Errorf("field %q, want %q (%v)", m["field"], c.field, err)
			}
		})
	}
	t.Run("oblique polarisation", func(t *testing.T) {
		_, err := process(t, beam(&kinegatev1.LaserBackscatter{
			AngleBetweenBeamsRad: new(3.0), EvenEnergyCount: 2, Polarisation: &kinegatev1.BackscatterPolarisation{},
		}))
		refused(t, err, Unsupported)
	})
	t.Run("cancelled", func(t *testing.T) {
		ctx, cancel := context.WithCancel(t.Context())
		cancel()
		s := &photonService{table: newTestTable(t)}
		if _, err := s.DescribePhotonProcess(ctx, beam(&kinegatev1.LaserBackscatter{EvenEnergyCount: 2})); !errors.Is(err, context.Canceled) {
			t.Errorf("got %v", err)
		}
	})
}
