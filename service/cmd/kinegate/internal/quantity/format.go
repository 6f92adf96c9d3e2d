package quantity

import (
	"math"
	"strconv"
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
	switch size := math.Abs(x); {
	case x == 0:
		return "0"
	case size >= 1e6 || size < 1e-3:
		return strconv.FormatFloat(x, 'e', digits-1, 64)
	default:
		whole := int(math.Floor(math.Log10(size))) + 1
		return strconv.FormatFloat(x, 'f', max(digits-whole, 0), 64)
	}
}
