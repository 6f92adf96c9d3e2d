package num

import (
	"math"
	"testing"
)

// alike tells +0 from -0 and takes any NaN for any other.
func alike(a, b float64) bool {
	if math.IsNaN(a) || math.IsNaN(b) {
		return math.IsNaN(a) && math.IsNaN(b)
	}
	return a == b && math.Signbit(a) == math.Signbit(b)
}

func TestSpecialCases(t *testing.T) {
	inf, nan, zero := math.Inf(1), math.NaN(), math.Copysign(0, -1)
	tiny := math.SmallestNonzeroFloat64
	functions := map[string]struct {
		f    func(float64) float64
		rows [][2]float64
	}{
		"Exp":   {Exp, [][2]float64{{inf, inf}, {-inf, 0}, {nan, nan}, {0, 1}, {710, inf}, {-746, 0}, {1e300, inf}, {-1e300, 0}}},
		"Exp2":  {Exp2, [][2]float64{{inf, inf}, {-inf, 0}, {nan, nan}, {0, 1}, {10, 1024}, {-1074, tiny}, {1024, inf}, {-1e300, 0}}},
		"Expm1": {Expm1, [][2]float64{{inf, inf}, {-inf, -1}, {nan, nan}, {zero, zero}, {0, 0}, {tiny, tiny}, {710, inf}, {-100, -1}}},
		"Log":   {Log, [][2]float64{{inf, inf}, {0, -inf}, {zero, -inf}, {-1, nan}, {nan, nan}, {1, 0}, {-inf, nan}}},
		"Log1p": {Log1p, [][2]float64{{inf, inf}, {-1, -inf}, {-2, nan}, {nan, nan}, {zero, zero}, {0, 0}, {-inf, nan}}},
		"Sin":   {Sin, [][2]float64{{inf, nan}, {-inf, nan}, {nan, nan}, {zero, zero}, {0, 0}, {tiny, tiny}}},
		"Cos":   {Cos, [][2]float64{{inf, nan}, {-inf, nan}, {nan, nan}, {zero, 1}, {0, 1}}},
		"Tan":   {Tan, [][2]float64{{inf, nan}, {-inf, nan}, {nan, nan}, {zero, zero}, {0, 0}, {tiny, tiny}}},
		"Asin":  {Asin, [][2]float64{{1.1, nan}, {-1.1, nan}, {nan, nan}, {zero, zero}, {0, 0}, {1, math.Pi / 2}, {-1, -math.Pi / 2}, {inf, nan}}},
		"Acos":  {Acos, [][2]float64{{1.1, nan}, {-1.1, nan}, {nan, nan}, {1, 0}, {-1, math.Pi}, {0, math.Pi / 2}, {inf, nan}}},
		"Atan":  {Atan, [][2]float64{{inf, math.Pi / 2}, {-inf, -math.Pi / 2}, {nan, nan}, {zero, zero}, {0, 0}, {1, math.Pi / 4}}},
		"Sinh":  {Sinh, [][2]float64{{inf, inf}, {-inf, -inf}, {nan, nan}, {zero, zero}, {0, 0}, {711, inf}, {-711, -inf}}},
		"Cosh":  {Cosh, [][2]float64{{inf, inf}, {-inf, inf}, {nan, nan}, {0, 1}, {711, inf}}},
		"Tanh":  {Tanh, [][2]float64{{inf, 1}, {-inf, -1}, {nan, nan}, {zero, zero}, {0, 0}, {100, 1}}},
		"Asinh": {Asinh, [][2]float64{{inf, inf}, {-inf, -inf}, {nan, nan}, {zero, zero}, {0, 0}}},
		"Acosh": {Acosh, [][2]float64{{inf, inf}, {0.9, nan}, {nan, nan}, {1, 0}}},
		"Atanh": {Atanh, [][2]float64{{1, inf}, {-1, -inf}, {1.1, nan}, {nan, nan}, {zero, zero}, {0, 0}}},
		"Cbrt":  {Cbrt, [][2]float64{{inf, inf}, {-inf, -inf}, {nan, nan}, {zero, zero}, {0, 0}, {27, 3}, {-8, -2}, {0x1p-1074, 0x1p-358}}},
		"Erf":   {Erf, [][2]float64{{inf, 1}, {-inf, -1}, {nan, nan}, {zero, zero}, {0, 0}, {7, 1}}},
		"Erfc":  {Erfc, [][2]float64{{inf, 0}, {-inf, 2}, {nan, nan}, {0, 1}, {30, 0}, {-7, 2}}},
	}
	for name, function := range functions {
		t.Run(name, func(t *testing.T) {
			for _, row := range function.rows {
				if got := function.f(row[0]); !alike(got, row[1]) {
					t.Errorf("%s(%v) = %v, want %v", name, row[0], got, row[1])
				}
			}
		})
	}
}

func TestSpecialCasesOfTwo(t *testing.T) {
	inf, nan, zero := math.Inf(1), math.NaN(), math.Copysign(0, -1)
	functions := map[string]struct {
		f    func(x, y float64) float64
		rows [][3]float64
	}{
		"Atan2": {Atan2, [][3]float64{
			{0, 1, 0},
			{zero, 1, zero},
			{0, -1, math.Pi},
			{zero, -1, -math.Pi},
			{0, 0, 0},
			{zero, 0, zero},
			{0, zero, math.Pi},
			{zero, zero, -math.Pi},
			{1, 0, math.Pi / 2},
			{-1, zero, -math.Pi / 2},
			{inf, inf, math.Pi / 4},
			{-inf, -inf, -3 * math.Pi / 4},
			{inf, -inf, 3 * math.Pi / 4},
			{1, inf, 0},
			{-1, inf, zero},
			{1, -inf, math.Pi},
			{inf, 1, math.Pi / 2},
			{-inf, 1, -math.Pi / 2},
			{nan, 1, nan},
			{1, nan, nan},
			{5e-324, 1e300, 0},
			{5e-324, -1e300, math.Pi},
		}},
		"Hypot": {Hypot, [][3]float64{
			{inf, nan, inf},
			{nan, -inf, inf},
			{nan, 1, nan},
			{0, 0, 0},
			{3, -4, 5},
			{1e308, 1e308, 1.4142135623730951e308},
			{5e-324, 0, 5e-324},
		}},
		"Pow": {Pow, [][3]float64{
			{2, 0, 1},
			{nan, 0, 1},
			{1, nan, 1},
			{nan, 2, nan},
			{2, nan, nan},
			{0, 3, 0},
			{zero, 3, zero},
			{zero, 2, 0},
			{0, -1, inf},
			{zero, -1, -inf},
			{zero, -2, inf},
			{inf, 2, inf},
			{inf, -2, 0},
			{-inf, 3, -inf},
			{-inf, 2, inf},
			{-inf, -3, zero},
			{0.5, inf, 0},
			{2, inf, inf},
			{2, -inf, 0},
			{0.5, -inf, inf},
			{-1, inf, 1},
			{-8, 1.0 / 3, nan},
			{-2, 3, -8},
			{-2, -2, 0.25},
			{10, 400, inf},
			{10, -400, 0},
		}},
		"GammaQ": {GammaQ, [][3]float64{{1, 0, 1}, {1, inf, 0}, {0, 1, nan}, {1, -1, nan}, {nan, 1, nan}}},
		"GammaP": {GammaP, [][3]float64{{1, 0, 0}, {1, inf, 1}, {0, 1, nan}, {1, -1, nan}, {nan, 1, nan}}},
	}
	for name, function := range functions {
		t.Run(name, func(t *testing.T) {
			for _, row := range function.rows {
				if got := function.f(row[0], row[1]); !alike(got, row[2]) {
					t.Errorf("%s(%v, %v) = %v, want %v", name, row[0], row[1], got, row[2])
				}
			}
		})
	}
}

// TestSincosAgrees holds the joint function to the bits of the separate ones.
func TestSincosAgrees(t *testing.T) {
	s := newSampler()
	for range 50_000 {
		x := s.double()
		sin, cos := Sincos(x)
		if sin != Sin(x) || cos != Cos(x) {
			t.Fatalf("Sincos(%v) = %v, %v, want %v, %v", x, sin, cos, Sin(x), Cos(x))
		}
	}
}

// TestChiSquareRoundTrip holds tail and quantile to each other where both are well
// conditioned, and the closed sum to the continued fraction where they meet.
func TestChiSquareRoundTrip(t *testing.T) {
	for _, ndf := range []int{1, 2, 3, 4, 7, 10, 33, 100, 101, 250, 3000} {
		for _, tail := range []float64{1e-300, 1e-30, 1e-6, 0.01, 0.3, 0.5, 0.50001, 0.7, 0.99, 0.9999999} {
			chi2 := ChiSquareQuantile(tail, ndf)
			back := ChiSquareTail(chi2, ndf)
			// One ulp of chi2 moves the tail by chi2 x density x 2^-53.
			slope := gammaPower(float64(ndf)/2, chi2/2) / tail
			if off := RelativeError(back, tail); !(off <= 1e-13+slope*1e-13) {
				t.Errorf("ndf %d, tail %v: chi2 %v gives back %v, relative error %.3g", ndf, tail, chi2, back, off)
			}
		}
	}
	for _, ndf := range []int{1, 2, 5, 30, 99, 100} {
		for _, chi2 := range []float64{1e-9, 0.3, 2, 40, 150, 1390} {
			if off := RelativeError(ChiSquareTail(chi2, ndf), GammaQ(float64(ndf)/2, chi2/2)); !(off <= 1e-13) {
				t.Errorf("ndf %d, chi2 %v: sum and fraction differ by %.3g", ndf, chi2, off)
			}
		}
	}
	for _, bad := range []float64{ChiSquareTail(-1, 2), ChiSquareTail(1, 0), ChiSquareTail(math.NaN(), 2), ChiSquareQuantile(1.5, 2), ChiSquareQuantile(0.5, 0)} {
		if !math.IsNaN(bad) {
			t.Errorf("got %v outside the domain, want NaN", bad)
		}
	}
}
