package generation

import (
	"math"
	"testing"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/fault"
)

// polarised is gamma p -> p pi0 with linearly polarised photons.
func polarised(asymmetry float64) Config {
	return Config{
		Seed:         51,
		Initial:      FixedTarget{Beam: Beam{Spectrum: Fixed{1.5}}, TargetMassGeV: mProton},
		Polarisation: Polarisation{Linear: 0.8, PlaneRad: 0.4, Circular: 0.3},
		Channels: []Channel{{
			Products: []Product{{Number: 2212, MassGeV: mProton}, {Number: 111, MassGeV: 0.1349768}},
			Angle:    &Angle{Product: 1, Asymmetry: asymmetry},
		}},
	}
}

func TestPolarisedAzimuth(t *testing.T) {
	for _, asymmetry := range []float64{0.9, -0.5, 0} {
		follows(t, sample(t, polarised(asymmetry), 20_000, func(truth *event.Truth, i, first int) float64 {
			if p := truth.Polarisation; p.Linear[i] != 0.8 || p.PlaneRad[i] != 0.4 || p.Circular[i] != 0.3 {
				t.Fatal("the polarisation of the event is another one")
			}
			return truth.Momentum[first+1].P.Phi()
		}), cumulated(-math.Pi, math.Pi, func(phi float64) float64 { return 1 - 0.8*asymmetry*math.Cos(2*(phi-0.4)) }))
	}
}

func TestPolarisationFaults(t *testing.T) {
	for _, c := range []struct {
		field string
		spoil func(*Config)
	}{
		{"polarisation.linear_degree", func(c *Config) { c.Polarisation.Linear = 1.1 }},
		{"polarisation.plane_rad", func(c *Config) { c.Polarisation.PlaneRad = math.NaN() }},
		{"polarisation.circular_degree", func(c *Config) { c.Polarisation.Circular = 0.7 }},
		{"channels[0].angle.asymmetry", func(c *Config) { c.Channels[0].Angle.Asymmetry = -2 }},
		{"channels[0].angle.asymmetry", func(c *Config) {
			c.Channels[0].Angle.Phi = &Curve{X: []float64{-1, 1}, Y: []float64{1, 1}}
		}},
		{"channels[0].energy.kind", func(c *Config) { c.Channels[0].Energy.Kind = LawRate }},
	} {
		config := polarised(0.5)
		c.spoil(&config)
		list, ok := config.Validate().(fault.List) //nolint:errorlint // Validate promises the list
		if !ok || len(list) != 1 || list[0].Field != c.field {
			t.Errorf("%v, want a fault of %s", list, c.field)
		}
	}
}
