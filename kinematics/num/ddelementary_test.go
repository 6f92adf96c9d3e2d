package num

import (
	"maps"
	"math"
	"math/big"
	"math/rand/v2"
	"slices"
	"testing"
)

// toBig returns x exactly.
func toBig(x DD) *big.Float {
	sum := new(big.Float).SetPrec(2200).SetFloat64(x.Hi)
	return sum.Add(sum, new(big.Float).SetFloat64(x.Lo))
}

// bitsOff returns log2 of the relative error of got, -Inf for none.
func bitsOff(got DD, want *big.Float) float64 {
	if math.IsNaN(got.Hi) || math.IsInf(got.Hi, 0) {
		return math.Inf(1)
	}
	difference := toBig(got)
	difference.Sub(difference, want)
	if difference.Sign() == 0 {
		return math.Inf(-1)
	}
	ratio, _ := difference.Quo(difference, want).Float64()
	return math.Log2(math.Abs(ratio))
}

// doubleDoubles lists the elementary functions of double-doubles, each with the
// largest relative error, as a power of two, that its doc promises.
func doubleDoubles() map[string]struct {
	limit float64
	f     func(x, y DD) DD
} {
	one := func(f func(DD) DD) func(x, y DD) DD {
		return func(x, _ DD) DD { return f(x) }
	}
	return map[string]struct {
		limit float64
		f     func(x, y DD) DD
	}{
		"exp": {-96, one(DD.Exp)}, "expm1": {-96, one(DD.Expm1)},
		"log": {-98, one(DD.Log)}, "log1p": {-98, one(DD.Log1p)},
		"sin": {-96, one(DD.Sin)}, "cos": {-96, one(DD.Cos)}, "tan": {-95, one(DD.Tan)},
		"asin": {-93, one(DD.Asin)}, "acos": {-93, one(DD.Acos)}, "atan": {-94, one(DD.Atan)},
		"asinh": {-92, one(DD.Asinh)}, "atanh": {-92, one(DD.Atanh)}, "atan2": {-94, DD.Atan2},
	}
}

// inDomainDD reports whether the documented domain of the double-double function
// covers the row.
func inDomainDD(row tableRow) bool {
	size := math.Abs(row.x)
	switch row.function {
	case "exp", "expm1":
		return size <= 700 && size > 1e-300
	case "sin", "cos", "tan":
		return size <= 0x1p30
	case "log":
		return size > 1e-280
	case "asinh":
		return size <= 1e150
	case "atan2":
		return math.Abs(row.y) >= 1e-100 && size >= 1e-100
	}
	return true
}

func TestDoubleDoubleAgainstTable(t *testing.T) {
	worst, count := map[string]float64{}, map[string]int{}
	functions := doubleDoubles()
	for _, row := range table(t) {
		entry, ok := functions[row.function]
		if !ok || !inDomainDD(row) {
			continue
		}
		count[row.function]++
		off := bitsOff(entry.f(FromFloat(row.x), FromFloat(row.y)), row.want)
		if off > entry.limit {
			t.Errorf("%s: relative error 2^%.1f at x = %v, y = %v, limit 2^%v", row.function, off, row.x, row.y, entry.limit)
		}
		if count[row.function] == 1 || off > worst[row.function] {
			worst[row.function] = off
		}
	}
	for name := range functions {
		if count[name] < 60 {
			t.Errorf("%s: only %d values", name, count[name])
		}
		t.Logf("%s: %d values, worst relative error 2^%.1f", name, count[name], worst[name])
	}
}

// TestElementaryAgainstDoubleDouble measures the functions of doubles densely. The
// double-double functions it measures against are themselves held to the mpmath
// table by TestDoubleDoubleAgainstTable.
func TestElementaryAgainstDoubleDouble(t *testing.T) {
	n := 200_000
	if testing.Short() {
		n = 20_000
	}
	random := rand.New(rand.NewPCG(1, 2)) //nolint:gosec // test points
	logarithmic := func(low, high float64) float64 {
		x := math.Exp(math.Log(low) + (math.Log(high)-math.Log(low))*random.Float64())
		if random.IntN(2) == 0 {
			return -x
		}
		return x
	}
	draw := map[string]func() (x, y float64){
		"exp":   func() (float64, float64) { return logarithmic(1e-5, 700), 0 },
		"expm1": func() (float64, float64) { return logarithmic(1e-5, 700), 0 },
		"log":   func() (float64, float64) { return math.Abs(logarithmic(0.01, 100)), 0 },
		"log1p": func() (float64, float64) { return math.Max(-0.999, logarithmic(1e-5, 100)), 0 },
		"sin":   func() (float64, float64) { return logarithmic(1e-3, 100), 0 },
		"cos":   func() (float64, float64) { return logarithmic(1e-3, 100), 0 },
		"tan":   func() (float64, float64) { return logarithmic(1e-3, 100), 0 },
		"asin":  func() (float64, float64) { return 2*random.Float64() - 1, 0 },
		"acos":  func() (float64, float64) { return 2*random.Float64() - 1, 0 },
		"atan":  func() (float64, float64) { return logarithmic(1e-3, 1e3), 0 },
		"atan2": func() (float64, float64) { return logarithmic(1e-3, 1), logarithmic(1e-3, 1) },
		"asinh": func() (float64, float64) { return logarithmic(1e-3, 1e3), 0 },
		"atanh": func() (float64, float64) { return 2*random.Float64() - 1, 0 },
	}
	precise, functions := doubleDoubles(), doubles()
	for _, name := range slices.Sorted(maps.Keys(draw)) {
		at := draw[name]
		worst, worstX, worstY := 0.0, 0.0, 0.0
		for range n {
			x, y := at()
			want := precise[name].f(FromFloat(x), FromFloat(y))
			_, exponent := math.Frexp(want.Hi)
			off := math.Abs(math.Ldexp(want.SubFloat(functions[name].f(x, y)).Hi, 53-exponent))
			if off > worst {
				worst, worstX, worstY = off, x, y
			}
		}
		if worst > functions[name].limit {
			t.Errorf("%s: %.3f ulp at %v %v, limit %v", name, worst, worstX, worstY, functions[name].limit)
		}
		t.Logf("%s: %d points, worst %.3f ulp at %v %v", name, n, worst, worstX, worstY)
	}
}
