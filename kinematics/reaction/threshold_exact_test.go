package reaction

import (
	"math"
	"math/big"
	"math/rand/v2"
	"testing"

	"example.org/kinegate/kinematics/momentum"
)

// wide is a number of 600 bits, far beyond what any cancellation in these tests takes.
func wide(x float64) *big.Float { return new(big.Float).SetPrec(600).SetFloat64(x) }

func plus(xs ...*big.Float) *big.Float {
	sum := wide(0)
	for _, x := range xs {
		sum.Add(sum, x)
	}
	return sum
}

func times(xs ...*big.Float) *big.Float {
	product := wide(1)
	for _, x := range xs {
		product.Mul(product, x)
	}
	return product
}

func minus(x, y *big.Float) *big.Float { return wide(0).Sub(x, y) }

func over(x, y *big.Float) *big.Float { return wide(0).Quo(x, y) }

func root(x *big.Float) *big.Float { return wide(0).Sqrt(x) }

// exactThreshold solves E1 E2 - p1.p2 = (M^2 - m1^2 - m2^2)/2 for p1 by the textbook
// quadratic, which cancels, in 600 bits. It is nil if the channel is open at rest or
// never.
func exactThreshold(m1, m2 float64, a, b momentum.Three, products []float64) (p, kinetic, total *big.Float) {
	square := func(x momentum.Three) *big.Float {
		return plus(times(wide(x.X), wide(x.X)), times(wide(x.Y), wide(x.Y)), times(wide(x.Z), wide(x.Z)))
	}
	dot := plus(times(wide(a.X), wide(b.X)), times(wide(a.Y), wide(b.Y)), times(wide(a.Z), wide(b.Z)))
	along := over(dot, root(square(a))) // p2 cos theta
	e2 := root(plus(square(b), times(wide(m2), wide(m2))))
	mass := wide(0)
	for _, m := range products {
		mass.Add(mass, wide(m))
	}
	g := over(minus(minus(times(mass, mass), times(wide(m1), wide(m1))), times(wide(m2), wide(m2))), wide(2))
	if g.Cmp(times(wide(m1), e2)) <= 0 {
		return nil, nil, nil
	}
	bottom := minus(times(e2, e2), times(along, along))
	if bottom.Sign() <= 0 {
		return nil, nil, nil
	}
	inner := minus(times(g, g), times(bottom, wide(m1), wide(m1)))
	p = over(plus(times(g, along), times(e2, root(inner))), bottom)
	total = root(plus(times(p, p), times(wide(m1), wide(m1))))
	return p, minus(total, wide(m1)), total
}

// TestThresholdAgainstWideArithmetic holds thresholds on moving targets to 4e-15
// whatever the condition: far and near threshold, massless and heavy, along, against and
// across.
func TestThresholdAgainstWideArithmetic(t *testing.T) {
	random := rand.New(rand.NewPCG(11, 13)) //nolint:gosec // test points
	log := func(low, high float64) float64 { return math.Pow(10, low+(high-low)*random.Float64()) }
	mass := func() float64 {
		if random.IntN(3) == 0 {
			return 0
		}
		return log(-12, 6)
	}
	vector := func() momentum.Three {
		switch random.IntN(4) {
		case 0:
			return momentum.Three{Z: log(-12, 12)}
		case 1:
			return momentum.Three{Z: -log(-12, 12)}
		}
		size := log(-12, 12)
		return momentum.Three{X: size * random.NormFloat64(), Y: size * random.NormFloat64(), Z: size * random.NormFloat64()}
	}
	worst, compared, near := 0.0, 0, 0
	for range 20_000 {
		m1, m2 := mass(), mass()
		in := InitialState{Kind: FourMomenta}
		in.Momenta[0].P, in.Momenta[1].P = vector(), vector()
		products := []float64{m1 * (1 + log(-17, 1)), m2, mass()}
		if m1 > 0 && random.IntN(2) == 0 { // just above the initial masses
			products = []float64{math.Nextafter(m1, 1e9), m2}
			near++
		}
		g, variable := in.geometry(m1, m2)
		p, kinetic, total := exactThreshold(m1, m2, in.Momenta[0].P, in.Momenta[1].P, products)
		if !variable || p == nil {
			continue
		}
		th, _ := g.threshold(products)
		if !th.Reached || th.OpenAtRest {
			t.Fatalf("m1 %v m2 %v %+v %v: %+v", m1, m2, in.Momenta, products, th)
		}
		compared++
		for i, want := range []*big.Float{p, kinetic, total} {
			got := []float64{th.Beam.Momentum, th.Beam.Kinetic, th.Beam.Total}[i]
			relative, _ := over(minus(wide(got), want), want).Float64()
			worst = max(worst, math.Abs(relative))
			if !(math.Abs(relative) <= 4e-15) {
				t.Fatalf("value %d is %v, off by %.3g: m1 %v m2 %v %+v %v", i, got, relative, m1, m2, in.Momenta, products)
			}
		}
	}
	t.Logf("%d of 20000 have a threshold, %d tried near the masses, worst relative error %.3g", compared, near, worst)
	if compared < 3000 {
		t.Error("too few thresholds were compared")
	}
}
