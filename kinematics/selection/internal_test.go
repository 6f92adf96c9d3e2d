package selection

import (
	"math"
	"math/rand/v2"
	"testing"
)

// TestHashes compares with known answers: the first outputs of SplitMix64 from seed 0,
// whose state rises by 0x9e3779b97f4a7c15, and the published FNV-1a vectors (both from
// memory).
func TestHashes(t *testing.T) {
	const step = 0x9e3779b97f4a7c15
	state := uint64(0)
	for i, want := range []uint64{0xe220a8397b1dcdaf, 0x6e789e6aa1b965f4, 0x06c45d188009454f} {
		if state += step; mix(state) != want {
			t.Errorf("output %d is %#x, want %#x", i, mix(state), want)
		}
	}
	for text, want := range map[string]uint64{"": 0xcbf29ce484222325, "a": 0xaf63dc4c8601ec8c, "foobar": 0x85944171f73967e8} {
		if salt(text) != want {
			t.Errorf("hash of %q is %#x, want %#x", text, salt(text), want)
		}
	}
}

// TestLeastSquare checks that comparing squares is comparing roots: the answer's root
// reaches m and that of the double below does not.
func TestLeastSquare(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2)) //nolint:gosec // a test needs a seed, no secret
	masses := []float64{
		1, 0.1, 0.5, 1e-3, 91.188, 1e-160, 1e-200, math.SmallestNonzeroFloat64, 1e154, 1.3407807929942596e154, 1e200, math.MaxFloat64,
	}
	for range 100_000 {
		masses = append(masses, math.Exp(20*r.NormFloat64()))
	}
	for _, m := range masses {
		s := leastSquare(m)
		if math.Sqrt(s) < m {
			t.Fatalf("m = %v: the root of %v is below", m, s)
		}
		if below := math.Nextafter(s, 0); math.Sqrt(below) >= m {
			t.Fatalf("m = %v: %v is not the least", m, s)
		}
	}
	if leastSquare(0) != 0 || leastSquare(-1) != 0 || leastSquare(math.Inf(-1)) != 0 || !math.IsInf(leastSquare(math.Inf(1)), 1) {
		t.Error("special cases")
	}
}
