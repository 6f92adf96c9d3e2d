package api

import (
	"math"
	"testing"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

func convert(t *testing.T, request *kinegatev1.ConvertMotionRequest) (*kinegatev1.ConvertMotionResponse, error) {
	t.Helper()
	return (&reactionService{table: newTestTable(t)}).ConvertMotion(t.Context(), request)
}

func ofParticle(name string) *kinegatev1.ConvertMotionRequest {
	return &kinegatev1.ConvertMotionRequest{Body: &kinegatev1.ConvertMotionRequest_Particle{Particle: name}}
}

// TestConvertMotionAnyToAll starts from one motion and asks for it by each of its forms.
func TestConvertMotionAnyToAll(t *testing.T) {
	request := ofParticle("He4")
	request.Value = &kinegatev1.ConvertMotionRequest_MomentumGev{MomentumGev: 3}
	want, err := convert(t, request)
	if err != nil {
		t.Fatal(err)
	}
	if want.GetRigidityGv() != 1.5 || want.Gamma == nil || want.WavelengthM != nil || want.GetChargeThirds() != 6 {
		t.Errorf("%v", want)
	}
	for name, set := range map[string]func(*kinegatev1.ConvertMotionRequest){
		"total": func(r *kinegatev1.ConvertMotionRequest) {
			r.Value = &kinegatev1.ConvertMotionRequest_TotalEnergyGev{TotalEnergyGev: want.GetTotalEnergyGev()}
		},
		"kinetic": func(r *kinegatev1.ConvertMotionRequest) {
			r.Value = &kinegatev1.ConvertMotionRequest_KineticEnergyGev{KineticEnergyGev: want.GetKineticEnergyGev()}
		},
		"beta": func(r *kinegatev1.ConvertMotionRequest) {
			r.Value = &kinegatev1.ConvertMotionRequest_Beta{Beta: want.GetBeta()}
		},
		"gamma": func(r *kinegatev1.ConvertMotionRequest) {
			r.Value = &kinegatev1.ConvertMotionRequest_Gamma{Gamma: want.GetGamma()}
		},
		"rigidity": func(r *kinegatev1.ConvertMotionRequest) {
			r.Value = &kinegatev1.ConvertMotionRequest_RigidityGv{RigidityGv: want.GetRigidityGv()}
		},
	} {
		t.Run(name, func(t *testing.T) {
			request := ofParticle("He4")
			set(request)
			got, err := convert(t, request)
			if err != nil {
				t.Fatal(err)
			}
			for _, pair := range [][2]float64{
				{got.GetTotalEnergyGev(), want.GetTotalEnergyGev()}, {got.GetKineticEnergyGev(), want.GetKineticEnergyGev()},
				{got.GetMomentumGev(), want.GetMomentumGev()}, {got.GetBeta(), want.GetBeta()},
				{got.GetOneMinusBeta(), want.GetOneMinusBeta()}, {got.GetGamma(), want.GetGamma()},
				{got.GetGammaMinusOne(), want.GetGammaMinusOne()}, {got.GetBetaGamma(), want.GetBetaGamma()},
			} {
				if !near(pair[0], pair[1], 1e-14) {
					t.Errorf("got %v, want %v", got, want)
				}
			}
		})
	}
}

// TestConvertMotionOfLight holds a photon against 1 eV = 1239.84198 nm = 241.798924 THz,
// exact in the International System of Units of 2019, and beta = 1 exactly.
func TestConvertMotionOfLight(t *testing.T) {
	for _, set := range []func(*kinegatev1.ConvertMotionRequest){
		func(r *kinegatev1.ConvertMotionRequest) {
			r.Value = &kinegatev1.ConvertMotionRequest_WavelengthM{WavelengthM: 1239.8419843320026e-9}
		},
		func(r *kinegatev1.ConvertMotionRequest) {
			r.Value = &kinegatev1.ConvertMotionRequest_FrequencyHz{FrequencyHz: 241.79892420849183e12}
		},
	} {
		request := ofParticle("gamma")
		set(request)
		request.DistancesM = []float64{299792458, 0}
		request.RefractiveIndices = []float64{1.5}
		m, err := convert(t, request)
		if err != nil {
			t.Fatal(err)
		}
		if !near(m.GetTotalEnergyGev(), 1e-9, 1e-15) || !near(m.GetWavelengthM(), 1239.8419843320026e-9, 1e-15) ||
			!near(m.GetFrequencyHz(), 241.79892420849183e12, 1e-15) {
			t.Errorf("%v", m)
		}
		if m.GetBeta() != 1 || m.GetOneMinusBeta() != 0 || m.Gamma != nil || m.RigidityGv != nil {
			t.Errorf("%v", m)
		}
		if f := m.GetFlights()[0]; f.GetTimeS() != 1 || f.DelayAfterLightS == nil || f.GetDelayAfterLightS() != 0 {
			t.Errorf("%v", f)
		}
		if c := m.GetCherenkovLights()[0]; c.GetRadiates() || c.AngleRad != nil || c.ThresholdBeta != nil {
			t.Errorf("a photon is neutral: %v", c)
		}
	}
}

func TestConvertMotionFlightAndLight(t *testing.T) {
	request := ofParticle("pi+")
	request.Value = &kinegatev1.ConvertMotionRequest_MomentumGev{MomentumGev: 2}
	request.DistancesM = []float64{3}
	request.RefractiveIndices = []float64{1.33, 1, 0.9, 1.0001}
	m, err := convert(t, request)
	if err != nil {
		t.Fatal(err)
	}
	const lightSpeed = 299792458.0
	flight := m.GetFlights()[0]
	if !near(flight.GetTimeS(), 3/(m.GetBeta()*lightSpeed), 1e-15) || !near(flight.GetDelayAfterLightS(), flight.GetTimeS()-3/lightSpeed, 1e-11) {
		t.Errorf("%v", flight)
	}
	lights := m.GetCherenkovLights()
	if c := lights[0]; !c.GetRadiates() || !near(math.Cos(c.GetAngleRad()), 1/(1.33*m.GetBeta()), 1e-14) || c.GetThresholdKineticEnergyGev() <= 0 {
		t.Errorf("%v", c)
	}
	for _, c := range lights[1:3] {
		if c.GetRadiates() || c.AngleRad != nil || c.ThresholdBeta != nil {
			t.Errorf("index of at most 1: %v", c)
		}
	}
	if c := lights[3]; c.GetRadiates() || c.GetThresholdMomentumGev() < 2 {
		t.Errorf("below threshold: %v", c)
	}
	rest := ofParticle("pi+")
	rest.Value = &kinegatev1.ConvertMotionRequest_KineticEnergyGev{}
	rest.DistancesM = []float64{1}
	m, err = convert(t, rest)
	if err != nil || m.GetFlights()[0].TimeS != nil || m.GetGamma() != 1 {
		t.Errorf("at rest: %v, %v", m, err)
	}
}

func TestConvertMotionRefuses(t *testing.T) {
	with := func(name string, change func(*kinegatev1.ConvertMotionRequest)) *kinegatev1.ConvertMotionRequest {
		r := ofParticle(name)
		r.Value = &kinegatev1.ConvertMotionRequest_MomentumGev{MomentumGev: 1}
		change(r)
		return r
	}
	type request = kinegatev1.ConvertMotionRequest
	mass := func(m float64) *request {
		return &request{
			Body:  &kinegatev1.ConvertMotionRequest_MassGev{MassGev: m},
			Value: &kinegatev1.ConvertMotionRequest_MomentumGev{MomentumGev: 1},
		}
	}
	cases := []struct {
		name    string
		request *request
		reason  Reason
		field   string
	}{
		{"nothing", &request{}, FieldInvalid, "body"},
		{"no value", ofParticle("p"), FieldInvalid, "value"},
		{"unknown", with("protn", func(*request) {}), NameUnknown, "particle"},
		{"charge beside a particle", with("p", func(r *request) { r.ChargeThirds = 3 }), FieldInvalid, "charge_thirds"},
		{"negative mass", mass(-1), FieldInvalid, "mass_gev"},
		{"mass that is none", mass(math.NaN()), FieldInvalid, "mass_gev"},
		{"energy below the mass", with("p", func(r *request) { r.Value = &kinegatev1.ConvertMotionRequest_TotalEnergyGev{TotalEnergyGev: 0.9} }),
			FieldInvalid, "total_energy_gev"},
		{"negative momentum", with("p", func(r *request) { r.Value = &kinegatev1.ConvertMotionRequest_MomentumGev{MomentumGev: -1} }),
			FieldInvalid, "momentum_gev"},
		{"beta of 1", with("p", func(r *request) { r.Value = &kinegatev1.ConvertMotionRequest_Beta{Beta: 1} }), FieldInvalid, "beta"},
		{"beta of a photon", with("gamma", func(r *request) { r.Value = &kinegatev1.ConvertMotionRequest_Beta{Beta: 1} }), FieldInvalid, "beta"},
		{"gamma below 1", with("p", func(r *request) { r.Value = &kinegatev1.ConvertMotionRequest_Gamma{Gamma: 0.5} }), FieldInvalid, "gamma"},
		{"gamma of a photon", with("gamma", func(r *request) { r.Value = &kinegatev1.ConvertMotionRequest_Gamma{Gamma: 5} }), FieldInvalid, "gamma"},
		{"rigidity of a neutron", with("n", func(r *request) { r.Value = &kinegatev1.ConvertMotionRequest_RigidityGv{RigidityGv: 5} }),
			FieldInvalid, "rigidity_gv"},
		{"negative rigidity", with("p", func(r *request) { r.Value = &kinegatev1.ConvertMotionRequest_RigidityGv{RigidityGv: -5} }),
			FieldInvalid, "rigidity_gv"},
		{"wavelength of a proton", with("p", func(r *request) { r.Value = &kinegatev1.ConvertMotionRequest_WavelengthM{WavelengthM: 1} }),
			FieldInvalid, "wavelength_m"},
		{"wavelength of 0", with("gamma", func(r *request) { r.Value = &kinegatev1.ConvertMotionRequest_WavelengthM{} }),
			FieldInvalid, "wavelength_m"},
		{"frequency that is none", with("gamma", func(r *request) { r.Value = &kinegatev1.ConvertMotionRequest_FrequencyHz{FrequencyHz: math.NaN()} }),
			FieldInvalid, "frequency_hz"},
		{"photon at rest", with("gamma", func(r *request) { r.Value = &kinegatev1.ConvertMotionRequest_KineticEnergyGev{} }),
			FieldInvalid, "kinetic_energy_gev"},
		{"distance", with("p", func(r *request) { r.DistancesM = []float64{1, -1} }), FieldInvalid, "distances_m[1]"},
		{"distances", with("p", func(r *request) { r.DistancesM = make([]float64, 1001) }), FieldInvalid, "distances_m"},
		{"index", with("p", func(r *request) { r.RefractiveIndices = []float64{1.5, 0} }), FieldInvalid, "refractive_indices[1]"},
		{"indices", with("p", func(r *request) { r.RefractiveIndices = make([]float64, 1001) }), FieldInvalid, "refractive_indices"},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			_, err := convert(t, c.request)
			if m := refused(t, err, c.reason); m["field"] != c.field {
				t.Errorf("field %q, want %q: %v", m["field"], c.field, err)
			}
		})
	}
}
