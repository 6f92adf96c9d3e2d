package quantity

import (
	"math"
	"strconv"
	"strings"
)

// Format writes a quantity with the given number of significant digits, in the
// unit that leaves one to three digits before the point where there is one.
// Angles are in degrees.
func Format(x float64, dimension Dimension, digits int) string {
	if dimension == Angle {
		return number(x*180/math.Pi, digits) + " deg"
	}
	u := unitFor(x, dimension)
	scaled := x / math.Pow10(u.exponent)
	if u.exponent < 0 {
		scaled = x * math.Pow10(-u.exponent)
	}
	return number(scaled, digits) + " " + u.name
}

// unitFor chooses the largest unit that the value reaches, the smallest if it
// reaches none, and the base unit for 0 and what is not finite.
func unitFor(x float64, dimension Dimension) unit {
	var chosen unit
	found := false
	for _, u := range units {
		if u.dimension != dimension || u.factor != 0 || u.name == "cm" {
			continue
		}
		if x == 0 || math.IsInf(x, 0) || math.IsNaN(x) {
			if u.exponent == 0 {
				return u
			}
			continue
		}
		// A value that rounds up to the next unit belongs there; a part in 1e12 is
		// far below what is printed.
		if !found || math.Abs(x)*(1+1e-12) >= math.Pow10(u.exponent) {
			chosen, found = u, true
		}
	}
	return chosen
}

// number writes x with significant digits, without an exponent where the number
// stays readable.
func number(x float64, digits int) string {
	scientific := strconv.FormatFloat(x, 'e', digits-1, 64)
	// The exponent of the rounded number: 9.999 with two digits is 10.
	_, after, found := strings.Cut(scientific, "e")
	exponent, err := strconv.Atoi(after)
	if !found || err != nil || exponent >= 6 || exponent < -3 {
		return scientific
	}
	return strconv.FormatFloat(x, 'f', max(digits-1-exponent, 0), 64)
}
