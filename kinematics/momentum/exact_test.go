package momentum

import (
	"math"
	"math/big"
	"math/rand/v2"
	"testing"

	"example.org/kinegate/kinematics/num"
)

// The tests of this file compare with math/big at 800 bits, in which the sums and products
// of the formulas are exact and roots are rounded far below a double.

func big0() *big.Float               { return new(big.Float).SetPrec(800) }
func bigOf(x float64) *big.Float     { return big0().SetFloat64(x) }
func add(a, b *big.Float) *big.Float { return big0().Add(a, b) }
func sub(a, b *big.Float) *big.Float { return big0().Sub(a, b) }
func mul(a, b *big.Float) *big.Float { return big0().Mul(a, b) }
func div(a, b *big.Float) *big.Float { return big0().Quo(a, b) }
func root(a *big.Float) *big.Float   { return big0().Sqrt(a) }

// rounded returns a as a double.
func rounded(a *big.Float) float64 {
	x, _ := a.Float64()
	return x
}

// sampler draws test points.
type sampler struct{ *rand.Rand }

func newSampler() sampler {
	return sampler{rand.New(rand.NewPCG(17, 19))} //nolint:gosec // test points
}

// magnitude draws logarithmically between two powers of ten.
func (s sampler) magnitude(low, high float64) float64 {
	return math.Pow(10, low+(high-low)*s.Float64())
}

// direction draws an isotropic unit vector.
func (s sampler) direction() Three {
	return FromAngles(1, num.Acos(2*s.Float64()-1), 2*math.Pi*s.Float64())
}

// vector draws a vector with a length over ten decades.
func (s sampler) vector() Three { return s.direction().Scale(s.magnitude(-5, 5)) }

// mass draws a mass that is sometimes 0.
func (s sampler) mass() float64 {
	if s.IntN(4) == 0 {
		return 0
	}
	return s.magnitude(-6, 3)
}

// nudged returns a close to the given vector.
func (s sampler) nudged(a Three) Three {
	size := s.magnitude(-17, -1) * a.Norm()
	return a.Add(s.direction().Scale(size))
}

// bigMassSquared returns the exact invariant mass squared.
func bigMassSquared(momenta []Four) *big.Float {
	e, x, y, z := big0(), big0(), big0(), big0()
	for _, p := range momenta {
		e, x, y, z = add(e, bigOf(p.E)), add(x, bigOf(p.P.X)), add(y, bigOf(p.P.Y)), add(z, bigOf(p.P.Z))
	}
	return sub(mul(e, e), add(mul(x, x), add(mul(y, y), mul(z, z))))
}

// worstOf runs n draws of a value against its exact answer and holds the relative error to the
// bound.
func worstOf(t *testing.T, n int, bound float64, draw func(s sampler) (got float64, want *big.Float)) {
	t.Helper()
	s, worst := newSampler(), 0.0
	for range n {
		got, want := draw(s)
		off := relative(got, want)
		worst = math.Max(worst, off)
		if !(off <= bound) {
			t.Fatalf("got %.17g, want %.17g: relative error %.3g, bound %.3g", got, rounded(want), off, bound)
		}
	}
	t.Logf("%d draws, worst relative error %.3g, bound %.3g", n, worst, bound)
}

// relative returns |got - want|/|want|; a zero must be met exactly.
func relative(got float64, want *big.Float) float64 {
	switch {
	case math.IsNaN(got) || math.IsInf(got, 0):
		return math.Inf(1)
	case want.Sign() == 0 && got == 0:
		return 0
	case want.Sign() == 0:
		return math.Inf(1)
	}
	return math.Abs(rounded(div(sub(bigOf(got), want), want)))
}

// withoutNoise returns 0 for a value so small that it can only be the rounding of the
// roots at 800 bits, and the value otherwise.
func withoutNoise(a *big.Float) *big.Float {
	if a.Sign() != 0 && a.MantExp(nil) < -650 {
		return big0()
	}
	return a
}

// oneRounding is the relative error of an answer that is exact before it is rounded to a
// double, where the step before adds at most 2^-54.
const oneRounding = 0x1p-53 + 0x1p-54

// closedForm is the bound of closed-form scalars.
const closedForm = 4e-15

func TestMassSquaredIsExact(t *testing.T) {
	worstOf(t, 20_000, oneRounding, func(s sampler) (float64, *big.Float) {
		p := WithMass(s.vector(), s.mass())
		momenta := []Four{p}
		for range s.IntN(4) {
			next := WithMass(s.nudged(p.P), s.mass())
			if s.IntN(3) == 0 {
				next = next.Neg()
			}
			momenta = append(momenta, next)
		}
		return MassSquared(momenta...), bigMassSquared(momenta)
	})
}

func TestMassSquaredDegenerate(t *testing.T) {
	photon := Four{Three{3, 0, 4}, 5}
	for _, c := range []struct {
		name    string
		momenta []Four
		want    float64
	}{
		{"none", nil, 0},
		{"zero", []Four{{}}, 0},
		{"light-like", []Four{photon}, 0},
		{"collinear light-like", []Four{photon, photon}, 0},
		{"cancelled", []Four{photon, photon.Neg()}, 0},
		{"one ulp inside", []Four{{Three{3, 0, 4}, math.Nextafter(5, 6)}}, rounded(bigMassSquared([]Four{{Three{3, 0, 4}, math.Nextafter(5, 6)}}))},
		{"space-like by one ulp", []Four{{Three{3, 0, 4}, math.Nextafter(5, 4)}}, rounded(bigMassSquared([]Four{{Three{3, 0, 4}, math.Nextafter(5, 4)}}))},
		{"energy 1e12 and mass 1e-4", []Four{{Three{Z: 1e12}, math.Nextafter(1e12, 2e12)}}, rounded(bigMassSquared([]Four{{Three{Z: 1e12}, math.Nextafter(1e12, 2e12)}}))},
	} {
		t.Run(c.name, func(t *testing.T) {
			if got := MassSquared(c.momenta...); got != c.want {
				t.Errorf("got %v, want %v", got, c.want)
			}
		})
	}
}

func TestDotIsExact(t *testing.T) {
	worstOf(t, 20_000, oneRounding, func(s sampler) (float64, *big.Float) {
		a := WithMass(s.vector(), s.mass())
		b := WithMass(s.nudged(a.P), s.mass())
		want := mul(bigOf(a.E), bigOf(b.E))
		want = sub(want, mul(bigOf(a.P.X), bigOf(b.P.X)))
		want = sub(want, mul(bigOf(a.P.Y), bigOf(b.P.Y)))
		return a.Dot(b), sub(want, mul(bigOf(a.P.Z), bigOf(b.P.Z)))
	})
}

// bigEnergy returns sqrt(p^2 + m^2).
func bigEnergy(p Three, m float64) *big.Float {
	square := mul(bigOf(m), bigOf(m))
	for _, x := range []float64{p.X, p.Y, p.Z} {
		square = add(square, mul(bigOf(x), bigOf(x)))
	}
	return root(square)
}

func TestMassSquaredOnShell(t *testing.T) {
	worstOf(t, 20_000, closedForm, func(s sampler) (float64, *big.Float) {
		p := s.vector()
		var particles []OnShell
		e, x, y, z := big0(), big0(), big0(), big0()
		for i := range 2 + s.IntN(5) {
			m := s.mass()
			if i > 0 {
				p = s.nudged(p)
			}
			particles = append(particles, NewOnShell(p, m))
			e, x, y, z = add(e, bigEnergy(p, m)), add(x, bigOf(p.X)), add(y, bigOf(p.Y)), add(z, bigOf(p.Z))
		}
		return MassSquaredOnShell(particles...), withoutNoise(sub(mul(e, e), add(mul(x, x), add(mul(y, y), mul(z, z)))))
	})
}

func TestOnShellKinetic(t *testing.T) {
	worstOf(t, 20_000, closedForm, func(s sampler) (float64, *big.Float) {
		p, m := s.vector(), s.mass()
		a := NewOnShell(p, m)
		return a.Kinetic(), sub(bigEnergy(p, m), bigOf(m))
	})
	if at := NewOnShell(Three{}, 0); at.Kinetic() != 0 {
		t.Errorf("a massless particle at rest: %v, want 0", at.Kinetic())
	}
}

// bigKallen is the expanded form, exact here.
func bigKallen(a, b, c *big.Float) *big.Float {
	difference := sub(sub(a, b), c)
	return sub(mul(difference, difference), mul(bigOf(4), mul(b, c)))
}

func TestKallen(t *testing.T) {
	nearThreshold := func(s sampler) (m, m1, m2 float64) {
		m1, m2 = s.mass(), s.magnitude(-3, 3)
		return (m1 + m2) * (1 + s.magnitude(-16, 1)*float64(s.IntN(3)-1)), m1, m2
	}
	t.Run("masses", func(t *testing.T) {
		worstOf(t, 20_000, closedForm, func(s sampler) (float64, *big.Float) {
			m, a, b := nearThreshold(s)
			square := func(x float64) *big.Float { return mul(bigOf(x), bigOf(x)) }
			return Kallen(m, a, b), bigKallen(square(m), square(a), square(b))
		})
	})
	t.Run("squares", func(t *testing.T) {
		worstOf(t, 20_000, oneRounding, func(s sampler) (float64, *big.Float) {
			m, a, b := nearThreshold(s)
			m, a, b = m*m, a*a, b*b
			return KallenSquares(m, a, b), bigKallen(bigOf(m), bigOf(a), bigOf(b))
		})
	})
	for _, c := range []struct{ a, b, c, want float64 }{{4, 1, 1, 0}, {1, 1, 0, 0}, {0, 0, 0, 0}, {0, 2, 3, 1}, {1, 1, 1, -3}} {
		if got := KallenSquares(c.a, c.b, c.c); got != c.want {
			t.Errorf("KallenSquares(%v, %v, %v) = %v, want %v", c.a, c.b, c.c, got, c.want)
		}
	}
}

func TestTwoBodyAgainstExact(t *testing.T) {
	draw := func(s sampler) (m, m1, m2 float64) {
		m1, m2 = s.mass(), s.magnitude(-3, 3)
		return (m1 + m2) * (1 + s.magnitude(-15, 3)), m1, m2
	}
	square := func(x float64) *big.Float { return mul(bigOf(x), bigOf(x)) }
	momentum := func(s, m1, m2 *big.Float) *big.Float {
		return root(div(bigKallen(s, mul(m1, m1), mul(m2, m2)), mul(bigOf(4), s)))
	}
	for _, c := range []struct {
		name string
		draw func(s sampler) (float64, *big.Float)
	}{
		{"momentum", func(s sampler) (float64, *big.Float) {
			m, m1, m2 := draw(s)
			r, err := TwoBodyMomentum(m, m1, m2)
			if err != nil {
				t.Fatal(err)
			}
			return r.P, momentum(square(m), bigOf(m1), bigOf(m2))
		}},
		{"momentum from s", func(s sampler) (float64, *big.Float) {
			m, m1, m2 := draw(s)
			r, err := TwoBodyMomentumS(m*m*(1+0x1p-51), m1, m2)
			if err != nil {
				t.Fatal(err)
			}
			return r.P, momentum(bigOf(m*m*(1+0x1p-51)), bigOf(m1), bigOf(m2))
		}},
		{"momentum from excess", func(s sampler) (float64, *big.Float) {
			m1, m2, q := s.mass(), s.magnitude(-3, 3), s.magnitude(-30, 3)
			r, err := TwoBodyFromExcess(q, m1, m2)
			if err != nil {
				t.Fatal(err)
			}
			m := add(bigOf(q), add(bigOf(m1), bigOf(m2)))
			return r.P, momentum(mul(m, m), bigOf(m1), bigOf(m2))
		}},
		{"energy", func(s sampler) (float64, *big.Float) {
			m, m1, m2 := draw(s)
			r, err := TwoBodyMomentum(m, m1, m2)
			if err != nil {
				t.Fatal(err)
			}
			return r.E1, div(add(sub(square(m), square(m2)), square(m1)), mul(bigOf(2), bigOf(m)))
		}},
		{"kinetic energy", func(s sampler) (float64, *big.Float) {
			m, m1, m2 := draw(s)
			r, err := TwoBodyMomentum(m, m1, m2)
			if err != nil {
				t.Fatal(err)
			}
			return r.T2, sub(div(add(sub(square(m), square(m1)), square(m2)), mul(bigOf(2), bigOf(m))), bigOf(m2))
		}},
	} {
		t.Run(c.name, func(t *testing.T) { worstOf(t, 10_000, closedForm, c.draw) })
	}
}

func TestCollideBeamsAgainstExact(t *testing.T) {
	// At angles 0 and pi the cosine is exact; sin(pi/2) rounds to 1.
	state := func(s sampler) (got CollisionState, sqrtS, excess *big.Float) {
		m1, m2, p1 := s.mass(), s.mass(), s.magnitude(-5, 6)
		p2 := p1 * (1 + s.magnitude(-16, 1)*float64(s.IntN(2)))
		if s.IntN(2) == 0 {
			m2 = m1
		}
		angle, sign := 0.0, bigOf(1)
		if s.IntN(2) == 0 {
			angle, sign = math.Pi, bigOf(-1)
		}
		energies := add(bigEnergy(Three{Z: p1}, m1), bigEnergy(Three{Z: p2}, m2))
		total := add(bigOf(p1), mul(sign, bigOf(p2)))
		sqrtS = root(sub(mul(energies, energies), mul(total, total)))
		return CollideBeams(m1, p1, m2, p2, angle), sqrtS, sub(sqrtS, add(bigOf(m1), bigOf(m2)))
	}
	t.Run("sqrt(s)", func(t *testing.T) {
		worstOf(t, 20_000, closedForm, func(s sampler) (float64, *big.Float) {
			got, want, _ := state(s)
			return got.SqrtS, want
		})
	})
	t.Run("excess", func(t *testing.T) {
		worstOf(t, 20_000, closedForm, func(s sampler) (float64, *big.Float) {
			got, _, want := state(s)
			return got.Excess, withoutNoise(want)
		})
	})
}

func TestExcessAgainstExact(t *testing.T) {
	draw := func(s sampler) ([]float64, *big.Float) {
		masses, sum := []float64{s.magnitude(-3, 3)}, big0()
		for range 1 + s.IntN(4) {
			masses = append(masses, s.mass())
		}
		for _, m := range masses {
			sum = add(sum, bigOf(m))
		}
		return masses, sum
	}
	t.Run("from the mass", func(t *testing.T) {
		worstOf(t, 10_000, 0x1p-53, func(s sampler) (float64, *big.Float) {
			masses, sum := draw(s)
			m := rounded(sum) * (1 + s.magnitude(-17, 1)*float64(s.IntN(3)-1))
			q, side := Excess(m, masses...)
			want := sub(bigOf(m), sum)
			if int(side) != want.Sign() {
				t.Fatalf("side %v, want sign %d", side, want.Sign())
			}
			return q, want
		})
	})
	// A third of the draws has s = (sum m)^2 rounded, where the gap is below one ulp of s.
	t.Run("from s", func(t *testing.T) {
		worstOf(t, 10_000, closedForm, func(s sampler) (float64, *big.Float) {
			masses, sum := draw(s)
			square := rounded(mul(sum, sum)) * (1 + s.magnitude(-17, -0.5)*float64(s.IntN(3)-1))
			q, side := ExcessS(square, masses...)
			want := withoutNoise(sub(root(bigOf(square)), sum))
			if int(side) != want.Sign() {
				t.Fatalf("side %v, want sign %d", side, want.Sign())
			}
			return q, want
		})
	})
	if q, side := Excess(0.75, 0.25, 0.5); q != 0 || side != num.At {
		t.Errorf("at the threshold: %v, %v", q, side)
	}
	if q, side := ExcessS(1.5625, 0.25, 0.5, 0.5); q != 0 || side != num.At {
		t.Errorf("at the threshold in s: %v, %v", q, side)
	}
}
