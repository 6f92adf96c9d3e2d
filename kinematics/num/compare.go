package num

import "math"

// RelativeError returns |got - want|/|want|. For want = 0 it is 0 if got is 0 and +Inf
// else; equal infinities give 0, and any NaN gives +Inf, so that a bound is never
// met by accident.
func RelativeError(got, want float64) float64 {
	switch {
	case got == want:
		return 0
	case math.IsNaN(got) || math.IsNaN(want) || want == 0 || math.IsInf(got, 0) || math.IsInf(want, 0):
		return math.Inf(1)
	}
	return math.Abs(got/want - 1)
}

// ULPDistance returns how many doubles lie between a and b: 0 for equal values (also
// for 0 and -0), 1 for neighbours. A NaN, or an infinity with a finite number, gives
// the largest uint64.
func ULPDistance(a, b float64) uint64 {
	switch {
	case a == b:
		return 0
	case math.IsNaN(a) || math.IsNaN(b) || math.IsInf(a, 0) || math.IsInf(b, 0):
		return math.MaxUint64
	}
	rankA, rankB := rank(a), rank(b)
	if rankA < rankB {
		rankA, rankB = rankB, rankA
	}
	// The difference of two ranks can exceed an int64, but not a uint64, in which it wraps
	// to the right value.
	return uint64(rankA) - uint64(rankB) //nolint:gosec // see above
}

// rank numbers the doubles in ascending order, 0 and -0 both 0.
func rank(x float64) int64 {
	bits := int64(math.Float64bits(math.Abs(x))) //nolint:gosec // the sign bit is clear
	if x < 0 {
		return -bits
	}
	return bits
}
