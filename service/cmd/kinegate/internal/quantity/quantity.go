// Package quantity reads and writes numbers with units, such as "1.3 GeV",
// "351.1 nm" or "25 deg". Inside the program a quantity is a plain number in the
// base unit of its dimension: GeV, radian, metre, second, hertz and so on.
package quantity

import (
	"fmt"
	"math"
	"regexp"
	"strconv"
	"strings"
)

// Dimension is what kind of quantity a number is.
type Dimension int

// The dimensions with their base units.
const (
	Energy       Dimension = iota // GeV; mass and momentum with c = 1 too
	Angle                         // radian
	Length                        // metre
	Time                          // second
	Frequency                     // hertz
	CrossSection                  // barn
	Temperature                   // kelvin
	Density                       // particles per cubic metre
	Square                        // GeV squared; squared masses and momentum transfers
	Rigidity                      // gigavolt; momentum over charge
)

// String names the dimension.
func (d Dimension) String() string {
	return [...]string{"energy", "angle", "length", "time", "frequency", "cross-section", "temperature", "density",
		"energy squared", "rigidity"}[d]
}

// unit is a power of ten of a base unit, or a factor on top of it.
type unit struct {
	name      string
	dimension Dimension
	exponent  int
	factor    float64 // 0 means 1
}

// units of every dimension, small to large; those with a factor are read and not written.
var units = []unit{ //nolint:gochecknoglobals // a table that nothing writes
	{"eV", Energy, -9, 0}, {"keV", Energy, -6, 0}, {"MeV", Energy, -3, 0}, {"GeV", Energy, 0, 0},
	{"TeV", Energy, 3, 0}, {"PeV", Energy, 6, 0}, {"EeV", Energy, 9, 0},
	{"urad", Angle, -6, 0}, {"mrad", Angle, -3, 0}, {"rad", Angle, 0, 0}, {"deg", Angle, 0, math.Pi / 180},
	{"fm", Length, -15, 0}, {"pm", Length, -12, 0}, {"nm", Length, -9, 0}, {"um", Length, -6, 0},
	{"mm", Length, -3, 0}, {"cm", Length, -2, 0}, {"m", Length, 0, 0}, {"km", Length, 3, 0},
	{"pc", Length, 0, MetrePerParsec}, {"kpc", Length, 3, MetrePerParsec}, {"Mpc", Length, 6, MetrePerParsec},
	{"Gpc", Length, 9, MetrePerParsec},
	{"as", Time, -18, 0}, {"fs", Time, -15, 0}, {"ps", Time, -12, 0}, {"ns", Time, -9, 0},
	{"us", Time, -6, 0}, {"ms", Time, -3, 0}, {"s", Time, 0, 0},
	{"Hz", Frequency, 0, 0}, {"kHz", Frequency, 3, 0}, {"MHz", Frequency, 6, 0}, {"GHz", Frequency, 9, 0},
	{"THz", Frequency, 12, 0}, {"PHz", Frequency, 15, 0},
	{"fb", CrossSection, -15, 0}, {"pb", CrossSection, -12, 0}, {"nb", CrossSection, -9, 0},
	{"ub", CrossSection, -6, 0}, {"mb", CrossSection, -3, 0}, {"b", CrossSection, 0, 0},
	{"K", Temperature, 0, 0}, {"/m3", Density, 0, 0}, {"/cm3", Density, 6, 0},
	{"eV^2", Square, -18, 0}, {"keV^2", Square, -12, 0}, {"MeV^2", Square, -6, 0}, {"GeV^2", Square, 0, 0},
	{"TeV^2", Square, 6, 0},
	{"V", Rigidity, -9, 0}, {"kV", Rigidity, -6, 0}, {"MV", Rigidity, -3, 0}, {"GV", Rigidity, 0, 0}, {"TV", Rigidity, 3, 0},
}

// MetrePerParsec is the length of a parsec: 648000/pi astronomical units of 149597870700 m (resolutions B2 of
// 2012 and B2 of 2015 of the International Astronomical Union).
const MetrePerParsec = 648000 / math.Pi * 149597870700

var form = regexp.MustCompile(`^([-+]?(?:[0-9]+\.?[0-9]*|\.[0-9]+))(?:[eE]([-+]?[0-9]{1,4}))?\s*([A-Za-z]+(?:\^2)?|/c?m3)$`)

// Parse reads a quantity of the dimension. The decimal that is meant is rounded
// once: "850 MeV" is the double nearest to 0.850 GeV.
func Parse(text string, dimension Dimension) (float64, error) {
	value, found, err := parse(text, dimension)
	if err != nil {
		return 0, err
	}
	if found.dimension != dimension {
		return 0, fmt.Errorf("%q is a quantity of %s; %s is needed here, in %s",
			text, found.dimension, dimension, names(dimension))
	}
	return value, nil
}

// hcGeVMetre is the Planck constant times the speed of light in GeV m: exact in the SI
// of 2019, 6.62607015e-34 J s times 299792458 m/s over 1.602176634e-10 J.
const hcGeVMetre = 6.62607015e-34 * 299792458 / 1.602176634e-10

// hGeVSecond is the Planck constant in GeV s, likewise exact.
const hGeVSecond = 6.62607015e-34 / 1.602176634e-10

// ParsePhotonEnergy reads the energy of a photon, which may also be given by its
// wavelength in vacuum or its frequency.
func ParsePhotonEnergy(text string) (float64, error) {
	value, found, err := parse(text, Energy)
	if err != nil {
		return 0, err
	}
	switch found.dimension {
	case Energy:
		return value, nil
	case Length:
		if value <= 0 {
			return 0, fmt.Errorf("%q: a wavelength must be above 0", text)
		}
		return hcGeVMetre / value, nil
	case Frequency:
		return hGeVSecond * value, nil
	case Angle, Time, CrossSection, Temperature, Density, Square, Rigidity:
	}
	return 0, fmt.Errorf("%q is a quantity of %s; a photon energy, wavelength or frequency is needed here",
		text, found.dimension)
}

// parse reads a quantity of any dimension; wanted serves the message for a number
// without a unit.
func parse(text string, wanted Dimension) (float64, unit, error) {
	parts := form.FindStringSubmatch(strings.TrimSpace(text))
	if parts == nil {
		return 0, unit{}, fmt.Errorf("%q is not a number with a unit; write for example %s", text, example(wanted))
	}
	number, exponent, name := parts[1], parts[2], parts[3]
	for _, u := range units {
		if u.name != name {
			continue
		}
		power := u.exponent
		if exponent != "" {
			e, err := strconv.Atoi(exponent)
			if err != nil {
				return 0, unit{}, fmt.Errorf("%q: the exponent is no whole number", text)
			}
			power += e
		}
		value, err := strconv.ParseFloat(number+"e"+strconv.Itoa(power), 64)
		if err != nil {
			return 0, unit{}, fmt.Errorf("%q is out of range", text)
		}
		if u.factor != 0 {
			value *= u.factor
		}
		return value, u, nil
	}
	return 0, unit{}, fmt.Errorf("unknown unit %q; units of %s are %s", name, wanted, names(wanted))
}

// names lists the units of a dimension.
func names(dimension Dimension) string {
	var list []string
	for _, u := range units {
		if u.dimension == dimension {
			list = append(list, u.name)
		}
	}
	return strings.Join(list, ", ")
}

func example(dimension Dimension) string {
	return [...]string{`"1.3 GeV"`, `"25 deg"`, `"20 cm"`, `"1.5 ns"`, `"400 Hz"`, `"0.5 mb"`, `"2.7255 K"`, `"411 /cm3"`,
		`"-0.3 GeV^2"`, `"2 GV"`}[dimension]
}
