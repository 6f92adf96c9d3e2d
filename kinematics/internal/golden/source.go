package golden

import (
	"math"

	"example.org/kinegate/kinematics/num/random"
)

// Source makes the seeded arguments of a computation.
type Source struct {
	stream random.Stream
}

// NewSource returns the source of a seed.
func NewSource(seed uint64) *Source {
	return &Source{random.New(seed, random.Generation, 0)}
}

// Between returns a number in [low, high], evenly spread.
func (s *Source) Between(low, high float64) float64 {
	return low + float64(s.stream.Uniform()*(high-low))
}

// Magnitude returns a positive number with a binary exponent evenly spread over [low, high) and
// a mantissa evenly spread over [1, 2): arguments over many decades.
func (s *Source) Magnitude(low, high int) float64 {
	exponent := low + s.stream.Below(high-low)

	return math.Ldexp(1+s.stream.Uniform(), exponent)
}

// Sign returns -1 or 1.
func (s *Source) Sign() float64 {
	return math.Copysign(1, s.stream.Uniform()-0.5)
}
