package selection

import "math/bits"

// kept reports whether the prescale keeps an accepted event. An event is kept where
//
//	hash(id xor salt) < 2^64 / N
//
// for a prescale of N, so that one in N of all ids is kept, which ones depends on
// the id and the hypothesis' name alone, and two hypotheses choose independently.
// The hash is the output function of SplitMix64 (G. L. Steele, D. Lea, C. H. Flood, Fast
// splittable pseudorandom number generators, OOPSLA 2014), the salt the 64-bit FNV-1a
// hash of the name (G. Fowler, L. C. Noll, K.-P. Vo).
func (h *hypothesis) kept(id int64) bool {
	if h.prescale <= 1 {
		return true
	}
	bucket, _ := bits.Mul64(mix(uint64(id)^h.salt), h.prescale) //nolint:gosec // the bits are what is wanted
	return bucket == 0
}

// mix is the output function of SplitMix64 without its increment.
func mix(z uint64) uint64 {
	z = (z ^ z>>30) * 0xbf58476d1ce4e5b9
	z = (z ^ z>>27) * 0x94d049bb133111eb
	return z ^ z>>31
}

// salt is the 64-bit FNV-1a hash of a name.
func salt(name string) uint64 {
	hash := uint64(0xcbf29ce484222325)
	for i := range len(name) {
		hash ^= uint64(name[i])
		hash *= 0x100000001b3
	}
	return hash
}
