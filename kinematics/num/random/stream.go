package random

import (
	"math"
	"math/bits"
)

// Purpose separates the streams of one seed. Its values are frozen: they are
// part of the key.
type Purpose uint64

// The purposes. Their numbers never change and are never used again.
const (
	// Generation draws what happens: beam, production, decays.
	Generation Purpose = 1
	// Detection draws what is measured of it.
	Detection Purpose = 2
	// Bounds draws the samples that measure an unweighting bound.
	Bounds Purpose = 3
	// Judging draws the prescale decisions of a selection.
	Judging Purpose = 4
)

// Stream is the sequence of draws of one event. The key is (seed, purpose), the
// counter of draw d is (d/4, event, 0, 0) and its word is d mod 4. A Stream is a
// value; copying it forks the sequence.
type Stream struct {
	keys    schedule
	event   uint64
	block   uint64
	pending int
	words   [4]uint64
}

// New returns the stream of an event.
func New(seed uint64, purpose Purpose, event int64) Stream {
	return Stream{keys: newSchedule(seed, uint64(purpose)), event: uint64(event)} //nolint:gosec // the bits of the id
}

// Start begins the sequence of another event with the seed and the purpose of s,
// the same sequence as that of New, in less time.
func (s *Stream) Start(event int64) {
	s.event, s.block, s.pending = uint64(event), 0, 0 //nolint:gosec // the bits of the id
}

// Draws is the number of words drawn so far.
func (s *Stream) Draws() uint64 { return 4*s.block - uint64(s.pending) } //nolint:gosec // 0 to 3

// Word returns the next 64 random bits.
func (s *Stream) Word() uint64 {
	if s.pending == 0 {
		s.refill()
	}
	s.pending--
	return s.words[3-s.pending]
}

func (s *Stream) refill() {
	s.words[0], s.words[1], s.words[2], s.words[3] = s.keys.rounds(s.block, s.event, 0, 0)
	s.block++
	s.pending = 4
}

// Uniform returns a double u from one word, 0 < u < 1, equally likely each of
// the 2^52 values (k + 1/2) 2^-52: exact, symmetric about 1/2, and neither end
// is ever reached. (With one bit more the largest k + 1/2 would round to 1.)
func (s *Stream) Uniform() float64 {
	return fraction(s.Word())
}

// Uniforms fills u with what as many calls of Uniform would return, faster.
func (s *Stream) Uniforms(u []float64) {
	for len(u) > 0 && s.pending > 0 {
		u[0] = s.Uniform()
		u = u[1:]
	}
	for len(u) >= 8 {
		a0, a1, a2, a3, b0, b1, b2, b3 := s.keys.pair(s.block, s.event)
		s.block += 2
		u[0], u[1], u[2], u[3] = fraction(a0), fraction(a1), fraction(a2), fraction(a3)
		u[4], u[5], u[6], u[7] = fraction(b0), fraction(b1), fraction(b2), fraction(b3)
		u = u[8:]
	}
	for len(u) >= 4 {
		w0, w1, w2, w3 := s.keys.rounds(s.block, s.event, 0, 0)
		s.block++
		u[0], u[1], u[2], u[3] = fraction(w0), fraction(w1), fraction(w2), fraction(w3)
		u = u[4:]
	}
	for i := range u {
		u[i] = s.Uniform()
	}
}

// fraction is the uniform double of a word: its upper 52 bits behind the point of
// 1.xxx make 1 + k 2^-52, and taking 1 - 2^-53 away is exact.
func fraction(word uint64) float64 {
	return math.Float64frombits(0x3FF<<52|word>>12) - (1 - 0x1p-53)
}

// Below returns a whole number k, 0 <= k < n, from one word: the high half of
// word times n, whose bias is below n 2^-64. It returns 0 for n < 1.
func (s *Stream) Below(n int) int {
	if n < 1 {
		return 0
	}
	k, _ := bits.Mul64(s.Word(), uint64(n))
	return int(k) //nolint:gosec // below n
}

// Chance reports true with probability p, from one word. For p <= 0 it is never
// true, for p >= 1 always; the word is drawn all the same.
func (s *Stream) Chance(p float64) bool { return s.Uniform() < p }
