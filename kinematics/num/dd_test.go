package num

import (
	"math"
	"math/big"
	"math/rand/v2"
	"testing"
)

// sampler draws doubles with all 53 bits set at random and magnitudes over some decades.
type sampler struct{ *rand.Rand }

func newSampler() sampler {
	return sampler{rand.New(rand.NewPCG(7, 11))} //nolint:gosec // test points
}

func (s sampler) double() float64 {
	x := math.Ldexp(1+s.Float64(), s.IntN(80)-40)
	if s.IntN(2) == 0 {
		return -x
	}
	return x
}

func (s sampler) dd() DD {
	hi := s.double()
	return Sum2(hi, hi*0x1p-53*(s.Float64()-0.5))
}

// near returns a double-double close to x, so that sums cancel.
func (s sampler) near(x DD) DD {
	return x.Neg().MulFloat(1 + math.Ldexp(s.Float64(), -s.IntN(60)))
}

func exact(x float64) *big.Float { return new(big.Float).SetPrec(2200).SetFloat64(x) }

func TestErrorFreeTransformations(t *testing.T) {
	s := newSampler()
	for range 20_000 {
		a, b := s.double(), s.double()
		sum, low := TwoSum(a, b)
		if exact(0).Add(exact(sum), exact(low)).Cmp(exact(0).Add(exact(a), exact(b))) != 0 || sum != a+b {
			t.Fatalf("TwoSum(%v, %v) = %v, %v is not exact", a, b, sum, low)
		}
		if math.Abs(a) < math.Abs(b) {
			a, b = b, a
		}
		if fast, fastLow := FastTwoSum(a, b); fast != sum || fastLow != low {
			t.Fatalf("FastTwoSum(%v, %v) = %v, %v, want %v, %v", a, b, fast, fastLow, sum, low)
		}
		product, low := TwoProd(a, b)
		if exact(0).Add(exact(product), exact(low)).Cmp(exact(0).Mul(exact(a), exact(b))) != 0 {
			t.Fatalf("TwoProd(%v, %v) = %v, %v is not exact", a, b, product, low)
		}
	}
}

// TestDoubleDoubleBounds holds every operation to its documented bound in units of u^2 on
// random and on cancelling operands.
func TestDoubleDoubleBounds(t *testing.T) {
	const slack = 1 + 1e-12 // terms in u^3
	operations := []struct {
		name  string
		bound float64
		got   func(x, y DD) DD
		want  func(x, y *big.Float) *big.Float
	}{
		{"Add", 3, DD.Add, func(x, y *big.Float) *big.Float { return exact(0).Add(x, y) }},
		{"Sub", 3, DD.Sub, func(x, y *big.Float) *big.Float { return exact(0).Sub(x, y) }},
		{"Mul", 4, DD.Mul, func(x, y *big.Float) *big.Float { return exact(0).Mul(x, y) }},
		{"Div", 15, DD.Div, func(x, y *big.Float) *big.Float { return exact(0).Quo(x, y) }},
		{
			"Square", 4, func(x, _ DD) DD { return x.Square() },
			func(x, _ *big.Float) *big.Float { return exact(0).Mul(x, x) },
		},
		{
			"Sqrt", 25.0 / 8, func(x, _ DD) DD { return x.Abs().Sqrt() },
			func(x, _ *big.Float) *big.Float { return exact(0).Sqrt(exact(0).Abs(x)) },
		},
		{
			"AddFloat", 2, func(x, y DD) DD { return x.AddFloat(y.Hi) },
			func(x, y *big.Float) *big.Float { hi, _ := y.Float64(); return exact(0).Add(x, exact(hi)) },
		},
		{
			"MulFloat", 2, func(x, y DD) DD { return x.MulFloat(y.Hi) },
			func(x, y *big.Float) *big.Float { hi, _ := y.Float64(); return exact(0).Mul(x, exact(hi)) },
		},
		{
			"DivFloat", 3, func(x, y DD) DD { return x.DivFloat(y.Hi) },
			func(x, y *big.Float) *big.Float { hi, _ := y.Float64(); return exact(0).Quo(x, exact(hi)) },
		},
		{
			"Quo2", 2, func(x, y DD) DD { return Quo2(x.Hi, y.Hi) },
			func(x, y *big.Float) *big.Float {
				a, _ := x.Float64()
				b, _ := y.Float64()
				return exact(0).Quo(exact(a), exact(b))
			},
		},
	}
	for _, operation := range operations {
		t.Run(operation.name, func(t *testing.T) {
			s := newSampler()
			worst := 0.0
			for i := range 20_000 {
				x, y := s.dd(), s.dd()
				if i%2 == 0 {
					y = s.near(x)
				}
				got, want := operation.got(x, y), operation.want(toBig(x), toBig(y))
				if want.Sign() == 0 {
					if !got.IsZero() {
						t.Fatalf("%v, %v: got %v, want 0", x, y, got)
					}
					continue
				}
				difference := toBig(got)
				ratio, _ := difference.Quo(difference.Sub(difference, want), want).Float64()
				worst = math.Max(worst, math.Abs(ratio)*0x1p106)
			}
			t.Logf("worst %.2f u^2, bound %v u^2", worst, operation.bound)
			if worst > operation.bound*slack {
				t.Errorf("worst error %.3f u^2, bound %v u^2", worst, operation.bound)
			}
		})
	}
}

func TestDoubleDoubleOrder(t *testing.T) {
	one, more := FromFloat(1), Sum2(1, 0x1p-60)
	for _, c := range []struct {
		name string
		got  int
		want int
	}{
		{"equal", one.Cmp(one), 0},
		{"low word above", more.Cmp(one), 1},
		{"low word below", one.Cmp(more), -1},
		{"high word", one.Cmp(FromFloat(2)), -1},
		{"sign of zero", DD{}.Sign(), 0},
		{"sign", more.Neg().Sign(), -1},
		{"sign of NaN", FromFloat(math.NaN()).Sign(), 0},
	} {
		if c.got != c.want {
			t.Errorf("%s: got %d, want %d", c.name, c.got, c.want)
		}
	}
}

// bigExpansion returns the exact value of e.
func bigExpansion(e Expansion) *big.Float {
	sum := exact(0)
	for _, component := range e {
		sum.Add(sum, exact(component))
	}
	return sum
}

func TestExpansionIsExact(t *testing.T) {
	s := newSampler()
	for range 2000 {
		var e, f Expansion
		want, wantF := exact(0), exact(0)
		for range 1 + s.IntN(6) {
			a, b, c := s.double(), s.double(), s.double()
			e = e.AddProduct(a, b).Add(c)
			want.Add(want, exact(0).Mul(exact(a), exact(b))).Add(want, exact(c))
			f = f.AddProduct3(a, c, b)
			wantF.Add(wantF, exact(0).Mul(exact(0).Mul(exact(a), exact(b)), exact(c)))
		}
		x := s.double()
		for _, c := range []struct {
			name string
			got  Expansion
			want *big.Float
		}{
			{"AddProduct", e, want},
			{"AddProduct3", f, wantF},
			{"Sum", e.Sum(f), exact(0).Add(want, wantF)},
			{"Neg", e.Neg(), exact(0).Neg(want)},
			{"Scale", e.Scale(x), exact(0).Mul(want, exact(x))},
			{"Mul", e.Mul(f), exact(0).Mul(want, wantF)},
			{"Sum with itself negated", e.Sum(e.Neg()), exact(0)},
		} {
			if bigExpansion(c.got).Cmp(c.want) != 0 {
				t.Fatalf("%s is not exact", c.name)
			}
			if c.got.Sign() != c.want.Sign() {
				t.Fatalf("%s: sign %d, want %d", c.name, c.got.Sign(), c.want.Sign())
			}
			if rounded, _ := c.want.Float64(); c.got.Float() != rounded {
				t.Fatalf("%s: rounded to %v, want %v", c.name, c.got.Float(), rounded)
			}
			for i := 1; i < len(c.got); i++ {
				if math.Abs(c.got[i-1]) >= math.Abs(c.got[i]) || c.got[i-1] == 0 {
					t.Fatalf("%s: components %v do not grow", c.name, c.got)
				}
			}
		}
	}
}

func TestCompensatedSums(t *testing.T) {
	s := newSampler()
	for range 20_000 {
		a, b := s.double(), s.double()
		c := -(a + b) * (1 + math.Ldexp(s.Float64(), -s.IntN(60)))
		want, _ := exact(0).Add(exact(0).Add(exact(a), exact(b)), exact(c)).Float64()
		if off := RelativeError(Sum3(a, b, c), want); off > 0x1p-53*(1+1e-15) && ULPDistance(Sum3(a, b, c), want) > 1 {
			t.Fatalf("Sum3(%v, %v, %v): relative error %v", a, b, c, off)
		}
		d := a * b / c * (1 + math.Ldexp(s.Float64(), -s.IntN(60)))
		want, _ = exact(0).Sub(exact(0).Mul(exact(a), exact(b)), exact(0).Mul(exact(c), exact(d))).Float64()
		if off := ULPDistance(DiffOfProducts(a, b, c, d), want); off > 2 {
			t.Fatalf("DiffOfProducts(%v, %v, %v, %v): %d ulp", a, b, c, d, off)
		}
	}
	// 1e20 cancels; the plain loop gives 0.
	if got := Dot([]float64{1e10, 1, -1e10}, []float64{1e10, 1, 1e10}); got != 1 {
		t.Errorf("Dot: got %v, want 1", got)
	}
}

func TestComparisons(t *testing.T) {
	inf, nan := math.Inf(1), math.NaN()
	for _, c := range []struct {
		name      string
		a, b      float64
		ulps      uint64
		unbounded bool
	}{
		{"equal", 1, 1, 0, false},
		{"neighbours", 1, math.Nextafter(1, 2), 1, false},
		{"signed zeros", 0, math.Copysign(0, -1), 0, false},
		{"across zero", math.SmallestNonzeroFloat64, -math.SmallestNonzeroFloat64, 2, false},
		{"equal infinities", inf, inf, 0, false},
		{"infinity", inf, 1, math.MaxUint64, true},
		{"NaN", nan, nan, math.MaxUint64, true},
	} {
		if got := ULPDistance(c.a, c.b); got != c.ulps {
			t.Errorf("%s: %d ulp, want %d", c.name, got, c.ulps)
		}
		if got := RelativeError(c.a, c.b); math.IsInf(got, 1) != c.unbounded {
			t.Errorf("%s: relative error %v", c.name, got)
		}
	}
	if got := RelativeError(1e-300, 0); !math.IsInf(got, 1) {
		t.Errorf("a zero expected: relative error %v, want +Inf", got)
	}
	if got := RelativeError(2, 1); got != 1 {
		t.Errorf("relative error %v, want 1", got)
	}
}

func TestSideOf(t *testing.T) {
	for _, c := range []struct {
		value, bound float64
		want         Side
		text         string
	}{
		{1, 0.5, Above, "above"},
		{-1, 0.5, Below, "below"},
		{0.5, 0.5, At, "at"},
		{math.NaN(), 0, At, "at"},
	} {
		if got := SideOf(c.value, c.bound); got != c.want || got.String() != c.text {
			t.Errorf("SideOf(%v, %v) = %v, want %v", c.value, c.bound, got, c.want)
		}
	}
}
