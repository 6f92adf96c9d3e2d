package golden

import "math"

// Source makes the seeded arguments of a computation: a small generator (SplitMix64: Steele,
// Lea and Flood 2014, figure 14) whose numbers are the same on every processor.
type Source struct {
	state uint64
}

// NewSource returns the source of a seed.
func NewSource(seed uint64) *Source {
	return &Source{state: seed}
}

// Uint64 returns 64 bits.
func (s *Source) Uint64() uint64 {
	s.state += 0x9e3779b97f4a7c15
	z := s.state
	z = (z ^ z>>30) * 0xbf58476d1ce4e5b9
	z = (z ^ z>>27) * 0x94d049bb133111eb

	return z ^ z>>31
}

// Unit returns a number in [0, 1), a multiple of 2^-53.
func (s *Source) Unit() float64 {
	const fractionBits = 53

	return math.Ldexp(float64(s.Uint64()>>(64-fractionBits)), -fractionBits)
}

// Between returns a number in [low, high), up to the rounding of its last step.
func (s *Source) Between(low, high float64) float64 {
	return low + float64(s.Unit()*(high-low))
}

// Magnitude returns a positive number whose binary exponent is even in [low, high) and whose
// mantissa is even in [1, 2), for arguments over many decades.
func (s *Source) Magnitude(low, high int) float64 {
	exponent := low + int(s.Uint64()%uint64(high-low)) //nolint:gosec // high is above low.

	return math.Ldexp(1+s.Unit(), exponent)
}
