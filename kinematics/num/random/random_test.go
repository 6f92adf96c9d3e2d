package random_test

import (
	"fmt"
	"math"
	"strconv"
	"strings"
	"testing"

	"example.org/kinegate/kinematics/internal/reference"
	"example.org/kinegate/kinematics/num/random"
)

// The published vectors, and the recomputed ones, of testdata/reference. Those
// with 32-bit words belong to a member of the family that is not used here.
func TestChecksPhilox(t *testing.T) {
	reference.Checks(t, "philox", func(c reference.Check) (any, bool) {
		if !strings.HasPrefix(c.Quantity, "Philox4x64") {
			return nil, false
		}
		var counter [4]uint64
		var key [2]uint64
		for i, text := range c.Texts("counter_hex") {
			counter[i] = hex(t, text)
		}
		for i, text := range c.Texts("key_hex") {
			key[i] = hex(t, text)
		}
		words := random.Philox(counter, key)
		return fmt.Sprintf("%016x %016x %016x %016x", words[0], words[1], words[2], words[3]), true
	})
}

func hex(t *testing.T, text string) uint64 {
	t.Helper()
	v, err := strconv.ParseUint(text, 16, 64)
	if err != nil {
		t.Fatal(err)
	}
	return v
}

func TestStreamIsTheCounter(t *testing.T) {
	s := random.New(42, random.Detection, 7)
	for d := range uint64(23) {
		if s.Draws() != d {
			t.Fatalf("%d draws counted before draw %d", s.Draws(), d)
		}
		want := random.Philox([4]uint64{d / 4, 7, 0, 0}, [2]uint64{42, 2})[d%4]
		if got := s.Word(); got != want {
			t.Fatalf("draw %d is %x, want %x", d, got, want)
		}
	}
}

// Uniforms is the same sequence, whatever it is mixed with.
func TestUniforms(t *testing.T) {
	one, many := random.New(5, random.Generation, 3), random.New(5, random.Generation, 3)
	for n := range 15 {
		u := make([]float64, n)
		many.Uniforms(u)
		for i, got := range u {
			if want := one.Uniform(); got != want {
				t.Fatalf("number %d of %d is %v, want %v", i, n, got, want)
			}
		}
		if one.Word() != many.Word() || one.Draws() != many.Draws() {
			t.Fatalf("the sequences part after %d numbers", n)
		}
	}
}

func TestUniformStaysInside(t *testing.T) {
	// The ends of the word's range, by the same arithmetic.
	lowest := (float64(uint64(0)>>12) + 0.5) * (1.0 / (1 << 52))
	highest := (float64(uint64(math.MaxUint64)>>12) + 0.5) * (1.0 / (1 << 52))
	if lowest != 0x1p-53 || highest != 1-0x1p-53 {
		t.Errorf("uniform doubles run from %v to %v", lowest, highest)
	}
}

// The tail probabilities of AS 241 are held against math.Erfc, which this
// project did not make.
func TestNormalQuantile(t *testing.T) {
	worst := 0.0
	for _, x := range []float64{1e-12, 1e-3, 0.3, 1, 1.2, 1.4399999, 1.45, 2, 3, 4, 5, 6, 6.6, 7, 8} {
		p := 0.5 * math.Erfc(x/math.Sqrt2)
		got := -random.NormalQuantile(p)
		// The slope of p turns its rounding and that of Erfc into an error of x.
		density := math.Exp(-x*x/2) / math.Sqrt(2*math.Pi)
		bound := 4*0x1p-52*x + 4*0x1p-53*p/density
		if d := math.Abs(got - x); d > bound {
			t.Errorf("quantile of the tail at %v is %v, off by %.3g, bound %.3g", x, got, d, bound)
		} else {
			worst = math.Max(worst, d/bound)
		}
	}
	t.Logf("worst error %.2f of its bound", worst)
	for _, p := range []float64{0, 1, -1, 2, math.NaN()} {
		if x := random.NormalQuantile(p); !math.IsNaN(x) {
			t.Errorf("quantile of %v is %v, want NaN", p, x)
		}
	}
}

// moments tests sample mean and variance of the whole and of interleaved parts
// (halves and sevenths) against the known ones, at six standard errors.
func moments(t *testing.T, name string, n int, mean, variance, fourth float64, draw func() float64) {
	t.Helper()
	for _, parts := range []int{1, 2, 7} {
		count := make([]float64, parts)
		sum := make([]float64, parts)
		square := make([]float64, parts)
		for i := range n {
			x := draw() - mean
			count[i%parts]++
			sum[i%parts] += x
			square[i%parts] += x * x
		}
		for k := range parts {
			if d := sum[k] / math.Sqrt(variance*count[k]); math.Abs(d) > 6 {
				t.Errorf("%s: mean of part %d of %d is off by %.1f standard errors", name, k, parts, d)
			}
			spread := math.Sqrt((fourth - variance*variance) / count[k])
			if d := (square[k]/count[k] - variance) / spread; math.Abs(d) > 6 {
				t.Errorf("%s: variance of part %d of %d is off by %.1f standard errors", name, k, parts, d)
			}
		}
	}
}

func TestMoments(t *testing.T) {
	s := random.New(1, random.Generation, 0)
	const n = 400_000
	moments(t, "uniform", n, 0.5, 1.0/12, 1.0/80, s.Uniform)
	moments(t, "normal", n, 0, 1, 3, s.Normal)
	moments(t, "exponential", n, 1, 1, 9, s.Exponential)
	for _, m := range []float64{0.2, 3, 40, 650} {
		moments(t, "Poisson "+strconv.FormatFloat(m, 'g', -1, 64), n/4, m, m, m+3*m*m, func() float64 { return float64(s.Poisson(m)) })
	}
	// Across events instead of along one stream: the counter's other word.
	event := int64(0)
	moments(t, "first draw of each event", n, 0.5, 1.0/12, 1.0/80, func() float64 {
		event++
		one := random.New(1, random.Generation, event)
		return one.Uniform()
	})
}

func TestTails(t *testing.T) {
	s := random.New(2, random.Generation, 0)
	const n = 1_000_000
	beyond := map[float64]int{2: 0, 3: 0, 4: 0}
	for range n {
		x := math.Abs(s.Normal())
		for cut := range beyond {
			if x > cut {
				beyond[cut]++
			}
		}
	}
	for cut, got := range beyond {
		want := n * math.Erfc(cut/math.Sqrt2)
		if d := (float64(got) - want) / math.Sqrt(want); math.Abs(d) > 5 {
			t.Errorf("%d normals beyond %v, want %.1f: %.1f standard deviations", got, cut, want, d)
		}
	}
}

func TestOutsideTheDomain(t *testing.T) {
	s := random.New(3, random.Generation, 0)
	for _, mean := range []float64{0, -1, 701, math.NaN(), math.Inf(1)} {
		if k := s.Poisson(mean); k != 0 {
			t.Errorf("Poisson(%v) is %d", mean, k)
		}
	}
	for range 1000 {
		if k := s.Below(3); k < 0 || k > 2 {
			t.Fatalf("Below(3) is %d", k)
		}
		if s.Below(0) != 0 || s.Below(-4) != 0 {
			t.Fatal("Below of nothing is not 0")
		}
		if s.Chance(0) || !s.Chance(1) || s.Chance(math.NaN()) {
			t.Fatal("Chance of 0, 1 or NaN")
		}
	}
}

var sink float64

func BenchmarkUniform(b *testing.B) {
	s := random.New(1, random.Generation, 0)
	for b.Loop() {
		sink = s.Uniform()
	}
}

func BenchmarkUniforms(b *testing.B) {
	s := random.New(1, random.Generation, 0)
	var u [8]float64
	for b.Loop() {
		s.Uniforms(u[:])
	}
	sink = u[7]
}

func BenchmarkNormal(b *testing.B) {
	s := random.New(1, random.Generation, 0)
	for b.Loop() {
		sink = s.Normal()
	}
}

// Start gives the same sequence as New, whatever was drawn before.
func TestStart(t *testing.T) {
	s := random.New(9, random.Detection, 4)
	s.Word()
	for _, event := range []int64{4, 0, -7, math.MaxInt64} {
		s.Start(event)
		fresh := random.New(9, random.Detection, event)
		for range 9 {
			if got, want := s.Word(), fresh.Word(); got != want {
				t.Fatalf("event %d: %x, want %x", event, got, want)
			}
		}
	}
}
