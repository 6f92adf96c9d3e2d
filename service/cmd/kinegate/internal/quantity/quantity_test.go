package quantity_test

import (
	"math"
	"strings"
	"testing"

	"example.org/kinegate/service/cmd/kinegate/internal/quantity"
)

func TestParse(t *testing.T) {
	t.Parallel()
	for _, c := range []struct {
		text      string
		dimension quantity.Dimension
		want      float64
	}{
		{"1.3 GeV", quantity.Energy, 1.3},
		{"850 MeV", quantity.Energy, 0.850},
		{"850MeV", quantity.Energy, 0.850},
		{" 1e3 keV ", quantity.Energy, 1e-3},
		{"6.02E-1 TeV", quantity.Energy, 602},
		{"-.5 eV", quantity.Energy, -0.5e-9},
		{"180 deg", quantity.Angle, math.Pi},
		{"3 mrad", quantity.Angle, 0.003},
		{"351.1 nm", quantity.Length, 351.1e-9},
		{"20 cm", quantity.Length, 0.20},
		{"1.5 ns", quantity.Time, 1.5e-9},
		{"400 Hz", quantity.Frequency, 400},
		{"-0.3 GeV^2", quantity.Square, -0.3},
		{"600 MeV^2", quantity.Square, 600e-6},
		{"2 GV", quantity.Rigidity, 2},
		{"150MV", quantity.Rigidity, 0.150},
		{"2 kpc", quantity.Length, 6.1713551629827345e19},
		{"17 mb", quantity.CrossSection, 0.017},
		{"2.7255 K", quantity.Temperature, 2.7255},
		{"411 /cm3", quantity.Density, 411e6},
	} {
		if got, err := quantity.Parse(c.text, c.dimension); err != nil || got != c.want {
			t.Errorf("%q is %v, %v; want %v", c.text, got, err, c.want)
		}
	}
}

func TestParseRefuses(t *testing.T) {
	t.Parallel()
	for _, c := range []struct {
		text      string
		dimension quantity.Dimension
		message   string
	}{
		{"1.3", quantity.Energy, "not a number with a unit"},
		{"GeV", quantity.Energy, "not a number with a unit"},
		{"1.3 gev", quantity.Energy, "unknown unit"},
		{"1.3 GeV^2", quantity.Energy, "quantity of energy squared; energy is needed"},
		{"1.3 m^2", quantity.Length, "unknown unit"},
		{"25 deg", quantity.Energy, "quantity of angle; energy is needed"},
		{"1.3 GeV", quantity.Angle, "quantity of energy; angle is needed"},
		{"1e999 GeV", quantity.Energy, "out of range"},
		{"1,3 GeV", quantity.Energy, "not a number with a unit"},
		{"0x10 GeV", quantity.Energy, "not a number with a unit"},
	} {
		if _, err := quantity.Parse(c.text, c.dimension); err == nil || !strings.Contains(err.Error(), c.message) {
			t.Errorf("%q: %v, want %q", c.text, err, c.message)
		}
	}
}

// TestParsePhotonEnergy checks hc against the value printed with the check values
// for laser backscattering, 1239.8419843320026 eV nm, exact in the SI of 2019.
func TestParsePhotonEnergy(t *testing.T) {
	t.Parallel()
	got, err := quantity.ParsePhotonEnergy("1239.8419843320026 nm")
	if err != nil || math.Abs(got/1e-9-1) > 4e-16 {
		t.Errorf("1239.84 nm is %v GeV, %v; want 1 eV", got, err)
	}
	// 1 eV over h, exact in the SI of 2019.
	got, err = quantity.ParsePhotonEnergy("241.79892420849183 THz")
	if err != nil || math.Abs(got/1e-9-1) > 4e-16 {
		t.Errorf("241.8 THz is %v GeV, %v; want 1 eV", got, err)
	}
	if _, err := quantity.ParsePhotonEnergy("3 ns"); err == nil {
		t.Error("a time is taken for a photon energy")
	}
}

func TestFormat(t *testing.T) {
	t.Parallel()
	for _, c := range []struct {
		x         float64
		dimension quantity.Dimension
		digits    int
		want      string
	}{
		{0.9110817, quantity.Energy, 6, "911.082 MeV"},
		{1.2, quantity.Energy, 4, "1.200 GeV"},
		{0.99999999999999, quantity.Energy, 4, "1.000 GeV"},
		{1e-12, quantity.Energy, 3, "0.00100 eV"},
		{0, quantity.Energy, 4, "0.000 GeV"},
		{5e-19, quantity.Energy, 3, "5.00e-10 eV"},
		{math.Inf(1), quantity.Energy, 3, "+Inf GeV"},
		{-0.0255, quantity.Energy, 3, "-25.5 MeV"},
		{math.Pi / 2, quantity.Angle, 4, "90.00 deg"},
		{0.078, quantity.Length, 3, "78.0 mm"},
		{2.617e-10, quantity.Time, 4, "261.7 ps"},
		{400, quantity.Frequency, 3, "400 Hz"},
		{-2.5, quantity.Square, 4, "-2.500 GeV^2"},
		{2.5, quantity.Rigidity, 3, "2.50 GV"},
	} {
		if got := quantity.Format(c.x, c.dimension, c.digits); got != c.want {
			t.Errorf("%v is written %q, want %q", c.x, got, c.want)
		}
	}
}
