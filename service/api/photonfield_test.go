package api

import (
	"math"
	"testing"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

func crossField(t *testing.T, request *kinegatev1.DescribePhotonFieldRequest) (*kinegatev1.DescribePhotonFieldResponse, error) {
	t.Helper()
	return (&photonService{table: newTestTable(t)}).DescribePhotonField(t.Context(), request)
}

func blackBody(kelvin, redshift float64) *kinegatev1.DescribePhotonFieldRequest_BlackBody {
	return &kinegatev1.DescribePhotonFieldRequest_BlackBody{
		BlackBody: &kinegatev1.BlackBodyField{TemperatureK: kelvin, Redshift: redshift},
	}
}

func powerLaw(index, low, high, density float64) *kinegatev1.DescribePhotonFieldRequest_PowerLaw {
	return &kinegatev1.DescribePhotonFieldRequest_PowerLaw{
		PowerLaw: &kinegatev1.PowerLawField{Index: index, MinGev: low, MaxGev: high, DensityPerM3: density},
	}
}

// TestMicrowaveBackground holds the photons per cubic centimetre (411, Review of Particle
// Physics, from memory) and the smallest mean free path of 7 kpc near 2 PeV (S. Vernetto
// and P. Lipari, Phys. Rev. D 94 (2016) 063009, from memory), to the digits stated.
func TestMicrowaveBackground(t *testing.T) {
	m, err := crossField(t, &kinegatev1.DescribePhotonFieldRequest{
		Particle: "e-", Field: blackBody(2.7255, 0), PhotonEnergiesGev: []float64{1e4, 2e6, 1e12}, DistanceM: 3.0857e20,
	})
	if err != nil {
		t.Fatal(err)
	}
	closeTo(t, "density", m.GetDensityPerM3(), 411e6, 2e-3)
	strongest := m.GetStrongest()
	if l := strongest.GetMeanFreePathKpc(); math.Abs(l-7) > 0.3 || strongest.GetPhotonEnergyGev() < 1e6 || strongest.GetPhotonEnergyGev() > 4e6 {
		t.Errorf("strongest %v", strongest)
	}
	// 10 kpc against a mean free path in kpc; 1e-4 is what the rounded distance carries.
	x := m.GetAbsorptions()[1]
	closeTo(t, "depth", x.GetOpticalDepth(), 10/x.GetMeanFreePathKpc(), 1e-4)
	closeTo(t, "metres", x.GetMeanFreePathM()*x.GetAbsorptionPerM(), 1, 1e-15)
	for i, other := range []int{0, 2} {
		if y := m.GetAbsorptions()[other]; y.GetAbsorptionPerM() >= x.GetAbsorptionPerM() {
			t.Errorf("%d: %v is absorbed more than %v", i, y, x)
		}
	}
	if m.ThresholdGev != nil || len(m.GetOmissions()) == 0 {
		t.Errorf("%v", m)
	}
	// At redshift z the field of temperature T(1 + z) does to E what T does to E (1 + z), (1 + z)^3 times as often.
	far, err := crossField(t, &kinegatev1.DescribePhotonFieldRequest{
		Particle: "e-", Field: blackBody(2.7255, 1), PhotonEnergiesGev: []float64{1e6},
	})
	if err != nil {
		t.Fatal(err)
	}
	closeTo(t, "temperature", far.GetTemperatureK(), 5.451, 1e-15)
	closeTo(t, "redshift", far.GetAbsorptions()[0].GetAbsorptionPerM(), 8*x.GetAbsorptionPerM(), 1e-13)
}

// TestNothingIsAbsorbed holds the cases in which the right answer is none.
func TestNothingIsAbsorbed(t *testing.T) {
	for _, c := range []struct {
		name    string
		request *kinegatev1.DescribePhotonFieldRequest
	}{
		{"0 K", &kinegatev1.DescribePhotonFieldRequest{Field: blackBody(0, 3), DistanceM: 1e20}},
		{"no photons", &kinegatev1.DescribePhotonFieldRequest{Field: powerLaw(2, 1e-12, 1e-9, 0), DistanceM: 1e20}},
		{"below threshold", &kinegatev1.DescribePhotonFieldRequest{Field: powerLaw(2, 1e-12, 1e-9, 1e9), DistanceM: 1e20}},
	} {
		t.Run(c.name, func(t *testing.T) {
			c.request.Particle, c.request.PhotonEnergiesGev = "e-", []float64{200}
			m, err := crossField(t, c.request)
			if err != nil {
				t.Fatal(err)
			}
			x := m.GetAbsorptions()[0]
			if x.GetAbsorptionPerM() != 0 || x.GetOpticalDepth() != 0 || x.MeanFreePathM != nil || x.MeanFreePathKpc != nil || m.GetStrongest() != nil {
				t.Errorf("%v", m)
			}
			if c.name == "below threshold" {
				closeTo(t, "threshold", m.GetThresholdGev(), m.GetMassGev()*m.GetMassGev()/1e-9, 1e-15)
			}
		})
	}
	t.Run("no distance", func(t *testing.T) {
		m, err := crossField(t, &kinegatev1.DescribePhotonFieldRequest{
			Particle: "e-", Field: blackBody(2.7255, 0), PhotonEnergiesGev: []float64{1e6},
		})
		if err != nil {
			t.Fatal(err)
		}
		if x := m.GetAbsorptions()[0]; x.GetOpticalDepth() != 0 || x.GetAbsorptionPerM() <= 0 {
			t.Errorf("%v", x)
		}
	})
	t.Run("no photon asked for", func(t *testing.T) {
		m, err := crossField(t, &kinegatev1.DescribePhotonFieldRequest{Particle: "mu-", Field: blackBody(5772, 0)})
		if err != nil || len(m.GetAbsorptions()) != 0 || m.GetStrongest() == nil {
			t.Errorf("%v %v", m, err)
		}
	})
}

func TestDescribePhotonFieldRefuses(t *testing.T) {
	nan := math.NaN()
	for _, c := range []struct {
		name    string
		request *kinegatev1.DescribePhotonFieldRequest
		field   string
	}{
		{"no lepton", &kinegatev1.DescribePhotonFieldRequest{Field: blackBody(3, 0)}, "particle"},
		{"hadron", &kinegatev1.DescribePhotonFieldRequest{Particle: "p", Field: blackBody(3, 0)}, "particle"},
		{"no field", &kinegatev1.DescribePhotonFieldRequest{Particle: "e-"}, "field"},
		{"cold", &kinegatev1.DescribePhotonFieldRequest{Particle: "e-", Field: blackBody(-1, 0)}, "black_body.temperature_k"},
		{"redshift", &kinegatev1.DescribePhotonFieldRequest{Particle: "e-", Field: blackBody(3, -1)}, "black_body.redshift"},
		{"far too hot", &kinegatev1.DescribePhotonFieldRequest{Particle: "e-", Field: blackBody(1e14, 1e14)}, "black_body.redshift"},
		{"index", &kinegatev1.DescribePhotonFieldRequest{Particle: "e-", Field: powerLaw(30, 1, 2, 1)}, "power_law.index"},
		{"order", &kinegatev1.DescribePhotonFieldRequest{Particle: "e-", Field: powerLaw(2, 2, 1, 1)}, "power_law.max_gev"},
		{"density", &kinegatev1.DescribePhotonFieldRequest{Particle: "e-", Field: powerLaw(2, 1, 2, nan)}, "power_law.density_per_m3"},
		{"distance", &kinegatev1.DescribePhotonFieldRequest{Particle: "e-", Field: blackBody(3, 0), DistanceM: -1}, "distance_m"},
		{"energy", &kinegatev1.DescribePhotonFieldRequest{Particle: "e-", Field: blackBody(3, 0), PhotonEnergiesGev: []float64{1, 0}},
			"photon_energies_gev[1]"},
		{"many", &kinegatev1.DescribePhotonFieldRequest{
			Particle: "e-", Field: blackBody(3, 0), PhotonEnergiesGev: make([]float64, maxPhotonValues+1),
		}, "photon_energies_gev"},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, err := crossField(t, c.request)
			if m := refused(t, err, FieldInvalid); m["field"] != c.field {
				t.Errorf("field %q, want %q (%v)", m["field"], c.field, err)
			}
		})
	}
}
