package photon

import (
	"example.org/kinegate/kinematics/fault"
)

// Magnitudes of energies, masses, densities and lengths: beyond them products of the
// formulas would leave the range of doubles.
const (
	leastMagnitude    = 1e-100
	greatestMagnitude = 1e100
)

// positive returns a fault unless 1e-100 <= x <= 1e100.
func positive(op, field string, x float64) error {
	return within(op, field, x, leastMagnitude, greatestMagnitude, "1e-100 to 1e100")
}

// notNegative returns a fault unless 0 <= x <= 1e100.
func notNegative(op, field string, x float64) error {
	return within(op, field, x, 0, greatestMagnitude, "0 to 1e100")
}

// within returns a fault unless low <= x <= high; allowed says so in words.
func within(op, field string, x, low, high float64, allowed string) error {
	if x >= low && x <= high {
		return nil
	}
	return fault.Number(field, x, allowed).In(op)
}

// first returns the first fault of a list of checks, or nil.
func first(checks ...error) error {
	for _, err := range checks {
		if err != nil {
			return err
		}
	}
	return nil
}
