package num

import "strconv"

// Side tells on which side of a boundary a value lies: below it, at it within a
// derived bound, or above it.
type Side int8

// The three sides of a boundary.
const (
	Below Side = -1
	At    Side = 0
	Above Side = 1
)

// SideOf returns the side of zero on which value lies when it is known within
// +-bound: Below if value < -bound, Above if value > bound, else At. NaN gives At,
// since nothing is decided.
func SideOf(value, bound float64) Side {
	switch {
	case value < -bound:
		return Below
	case value > bound:
		return Above
	}
	return At
}

// String returns "below", "at" or "above".
func (s Side) String() string {
	switch s {
	case Below:
		return "below"
	case At:
		return "at"
	case Above:
		return "above"
	}
	return "Side(" + strconv.Itoa(int(s)) + ")"
}
