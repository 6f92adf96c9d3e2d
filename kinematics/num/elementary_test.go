package num

import (
	"encoding/csv"
	"maps"
	"math"
	"math/big"
	"os"
	"slices"
	"strconv"
	"testing"
)

// tableRow is one line of testdata/elementary.csv.
type tableRow struct {
	function string
	x, y     float64
	want     *big.Float
}

// precise is the precision in bits of the 50-digit values and of comparisons.
const precise = 200

// table reads testdata/elementary.csv, which elementary.py beside it made with mpmath.
func table(tb testing.TB) []tableRow {
	tb.Helper()
	file, err := os.Open("testdata/elementary.csv")
	if err != nil {
		tb.Fatal(err)
	}
	defer file.Close() //nolint:errcheck // read only
	records, err := csv.NewReader(file).ReadAll()
	if err != nil {
		tb.Fatal(err)
	}
	var rows []tableRow
	for _, r := range records[1:] {
		row := tableRow{function: r[0], x: parseHex(tb, r[1])}
		if r[2] != "" {
			row.y = parseHex(tb, r[2])
		}
		row.want, _, err = big.ParseFloat(r[3], 10, precise, big.ToNearestEven)
		if err != nil {
			tb.Fatal(err)
		}
		rows = append(rows, row)
	}
	return rows
}

func parseHex(tb testing.TB, text string) float64 {
	tb.Helper()
	x, err := strconv.ParseFloat(text, 64)
	if err != nil {
		tb.Fatal(err)
	}
	return x
}

// ulpsOff returns |got - want| in units of the last place of want as a double, where
// subnormal numbers keep the smallest unit.
func ulpsOff(got float64, want *big.Float) float64 {
	if math.IsNaN(got) || math.IsInf(got, 0) {
		return math.Inf(1)
	}
	exponent := max(want.MantExp(nil), -1021)
	difference := new(big.Float).SetPrec(precise).SetFloat64(got)
	difference.Sub(difference, want)
	off, _ := difference.SetMantExp(difference, 53-exponent).Float64()
	return math.Abs(off)
}

// doubles lists the portable functions of doubles, each with the worst error in ulp
// that it may have on the table.
func doubles() map[string]struct {
	limit float64
	f     func(x, y float64) float64
} {
	one := func(f func(float64) float64) func(x, y float64) float64 {
		return func(x, _ float64) float64 { return f(x) }
	}
	return map[string]struct {
		limit float64
		f     func(x, y float64) float64
	}{
		"exp": {1, one(Exp)}, "expm1": {1, one(Expm1)}, "log": {1, one(Log)}, "log1p": {1, one(Log1p)},
		"sin": {1, one(Sin)}, "cos": {1, one(Cos)}, "tan": {1, one(Tan)},
		"asin": {1.2, one(Asin)}, "acos": {1, one(Acos)}, "atan": {1, one(Atan)},
		"sinh": {2, one(Sinh)}, "cosh": {2, one(Cosh)}, "tanh": {2, one(Tanh)},
		"asinh": {2, one(Asinh)}, "acosh": {2, one(Acosh)}, "atanh": {2, one(Atanh)},
		"erf": {1, one(Erf)}, "erfc": {2, one(Erfc)}, "exp2": {1, one(Exp2)},
		// 1e-13 relative is 450 ulp at most; the exponent of a = 1e5 costs what the doc says.
		"gammaq": {450, GammaQ},
		"cbrt":   {1, one(Cbrt)}, "atan2": {1.4, Atan2}, "hypot": {1, Hypot}, "pow": {1, Pow},
	}
}

func TestElementaryAgainstTable(t *testing.T) {
	worst, at, count := map[string]float64{}, map[string]tableRow{}, map[string]int{}
	functions := doubles()
	for _, row := range table(t) {
		entry, ok := functions[row.function]
		if !ok {
			t.Fatalf("no function %q", row.function)
		}
		count[row.function]++
		off := ulpsOff(entry.f(row.x, row.y), row.want)
		if off > worst[row.function] {
			worst[row.function], at[row.function] = off, row
		}
	}
	for _, name := range slices.Sorted(maps.Keys(functions)) {
		entry := functions[name]
		if count[name] < 30 {
			t.Errorf("%s: only %d values", name, count[name])
		}
		if worst[name] > entry.limit {
			t.Errorf("%s: %.3f ulp at x = %v, y = %v, limit %v", name, worst[name], at[name].x, at[name].y, entry.limit)
		}
		t.Logf("%s: %d values, worst %.3f ulp at %v %v", name, count[name], worst[name], at[name].x, at[name].y)
	}
}
