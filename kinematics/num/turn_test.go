package num

import (
	"math"
	"math/big"
	"testing"
)

// The angle 2 pi u is formed to 200 bits, reduced and handed to the Taylor
// series there.
func TestSincosTurn(t *testing.T) {
	worst := 0.0
	check := func(u float64) {
		sin, cos := SincosTurn(u)
		wantSin, wantCos := bigSincosTurn(u)
		for _, pair := range [][2]float64{{sin, wantSin}, {cos, wantCos}} {
			if pair[1] == 0 {
				if pair[0] != 0 {
					t.Fatalf("u = %v: %v, want 0", u, pair[0])
				}
				continue
			}
			ulp := math.Nextafter(math.Abs(pair[1]), 2) - math.Abs(pair[1])
			worst = math.Max(worst, math.Abs(pair[0]-pair[1])/ulp)
		}
	}
	for i := range 800 {
		check(float64(i) / 800)
		check(-float64(i) / 777)
		check(0.25 + math.Ldexp(1, -i%60))
		check(math.Ldexp(1, -i%1000))
	}
	t.Logf("worst error %.2f ulp", worst)
	if worst > 2 {
		t.Errorf("worst error %v ulp", worst)
	}
	for _, u := range []float64{math.NaN(), math.Inf(1), 1 << 44} {
		if s, c := SincosTurn(u); !math.IsNaN(s) || !math.IsNaN(c) {
			t.Errorf("SincosTurn(%v) is %v, %v", u, s, c)
		}
	}
	for k, want := range [][2]float64{{0, 1}, {1, 0}, {0, -1}, {-1, 0}} {
		if s, c := SincosTurn(float64(k) / 4); s != want[0] || c != want[1] {
			t.Errorf("a turn of %d/4 gives %v, %v", k, s, c)
		}
	}
}

// bigSincosTurn sums the series of sin and cos for |x| <= pi/4 and turns them.
func bigSincosTurn(u float64) (sin, cos float64) {
	const precision = 200
	pi, _, err := big.ParseFloat("3.14159265358979323846264338327950288419716939937510582097494459230781640628620899862803482534211706798214808651", 10, precision, big.ToNearestEven)
	if err != nil {
		return math.NaN(), math.NaN()
	}
	whole := math.Floor(4*u + 0.5)
	f := new(big.Float).SetPrec(precision).SetFloat64(4 * u)
	f.Sub(f, big.NewFloat(whole))
	x := f.Mul(f, pi)
	x.Quo(x, big.NewFloat(2))
	square := new(big.Float).Mul(x, x)
	series := func(term *big.Float, from int) float64 {
		sum := new(big.Float).Set(term)
		for n := from; n < from+40; n += 2 {
			term = new(big.Float).Mul(term, square)
			term.Quo(term, big.NewFloat(float64(n*(n+1))))
			term.Neg(term)
			sum.Add(sum, term)
		}
		v, _ := sum.Float64()
		return v
	}
	s := series(new(big.Float).Set(x), 2)
	c := series(new(big.Float).SetPrec(precision).SetInt64(1), 1)
	switch int64(whole) & 3 {
	case 1:
		return c, -s
	case 2:
		return -s, -c
	case 3:
		return -c, s
	}
	return s, c
}

func BenchmarkSincosTurn(b *testing.B) {
	u, sum := 0.1, 0.0
	for b.Loop() {
		s, c := SincosTurn(u)
		sum += s + c
		u = 0.7*u + 0.1
	}
	if math.IsNaN(sum) {
		b.Fatal("not a number")
	}
}
