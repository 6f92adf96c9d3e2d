// Package random makes random numbers from a counter instead of a state: the
// draws of event i depend on the seed, the purpose and i alone, whoever makes
// them and in whatever order. It stands beside the arithmetic because both the
// generation of events and their smearing draw from it.
package random

import "math/bits"

// The multipliers and key increments of Philox4x64, Salmon, Moraes, Dror and
// Shaw, "Parallel random numbers: as easy as 1, 2, 3", SC11 (2011), table 2 and
// section 4.3: the increments are the golden ratio and sqrt(3)-1 in 64 bits.
const (
	multiplier0 = 0xD2E7470EE14C6C93
	multiplier1 = 0xCA5A826395121157
	increment0  = 0x9E3779B97F4A7C15
	increment1  = 0xBB67AE8584CAA73B
)

// Philox returns the four words of Philox4x64 with ten rounds for a counter and
// a key (the source above, section 3.3). Every counter and key is allowed.
func Philox(counter [4]uint64, key [2]uint64) [4]uint64 {
	s := newSchedule(key[0], key[1])
	w0, w1, w2, w3 := s.rounds(counter[0], counter[1], counter[2], counter[3])
	return [4]uint64{w0, w1, w2, w3}
}

// schedule is the keys of the ten rounds, two rounds a row. Made once for a key
// it spares every counter the additions.
type schedule [5][4]uint64

func newSchedule(k0, k1 uint64) schedule {
	var s schedule
	for i := range s {
		s[i][0], s[i][1] = k0, k1
		k0 += increment0
		k1 += increment1
		s[i][2], s[i][3] = k0, k1
		k0 += increment0
		k1 += increment1
	}
	return s
}

// round is one round with two words of the key.
func round(c0, c1, c2, c3, k0, k1 uint64) (w0, w1, w2, w3 uint64) {
	hi0, lo0 := bits.Mul64(multiplier0, c0)
	hi1, lo1 := bits.Mul64(multiplier1, c2)
	return hi1 ^ c1 ^ k0, lo1, hi0 ^ c3 ^ k1, lo0
}

// rounds is Philox with all words in registers.
func (s *schedule) rounds(c0, c1, c2, c3 uint64) (w0, w1, w2, w3 uint64) {
	for i := range s {
		k := &s[i]
		c0, c1, c2, c3 = round(c0, c1, c2, c3, k[0], k[1])
		c0, c1, c2, c3 = round(c0, c1, c2, c3, k[2], k[3])
	}
	return c0, c1, c2, c3
}

// pair is rounds for the counters (block, event, 0, 0) and (block+1, event, 0, 0) side by
// side: the processor multiplies for the one while it waits for the other. The first two
// rounds are written out, as zeros leave little of them and half of that is the same for
// both.
func (s *schedule) pair(block, event uint64) (a0, a1, a2, a3, b0, b1, b2, b3 uint64) {
	k := &s[0]
	hi, lo := bits.Mul64(multiplier0, event^k[0])
	ah, al := bits.Mul64(multiplier0, block)
	bh, bl := bits.Mul64(multiplier0, block+1)
	ah, a1 = bits.Mul64(multiplier1, ah^k[1])
	bh, b1 = bits.Mul64(multiplier1, bh^k[1])
	a0, a2, a3 = ah^k[2], hi^al^k[3], lo
	b0, b2, b3 = bh^k[2], hi^bl^k[3], lo
	for i := 1; i < len(s); i++ {
		k := &s[i]
		a0, a1, a2, a3 = round(a0, a1, a2, a3, k[0], k[1])
		b0, b1, b2, b3 = round(b0, b1, b2, b3, k[0], k[1])
		a0, a1, a2, a3 = round(a0, a1, a2, a3, k[2], k[3])
		b0, b1, b2, b3 = round(b0, b1, b2, b3, k[2], k[3])
	}
	return a0, a1, a2, a3, b0, b1, b2, b3
}
