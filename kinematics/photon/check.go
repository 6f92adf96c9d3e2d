package photon

import (
	"math"

	"example.org/kinegate/kinematics/fault"
)

// positive returns a fault unless x is finite and > 0.
func positive(op, field string, x float64) error {
	if x > 0 && !math.IsInf(x, 1) {
		return nil
	}
	return fault.Number(field, x, "> 0 and finite").In(op)
}

// notNegative returns a fault unless x is finite and >= 0.
func notNegative(op, field string, x float64) error {
	if x >= 0 && !math.IsInf(x, 1) {
		return nil
	}
	return fault.Number(field, x, ">= 0 and finite").In(op)
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
