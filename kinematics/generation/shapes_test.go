package generation

import (
	"math"
	"sort"
	"testing"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/num/random"
)

// follows tests that unweighted values follow a distribution function: the
// Kolmogorov distance of the whole, of halves and of sevenths stays below
// 2.2/sqrt(n), which chance passes with probability 1.3e-4, and the outer
// hundredths hold what they should within five standard deviations.
func follows(t *testing.T, values []float64, cumulative func(float64) float64) {
	t.Helper()
	for _, parts := range []int{1, 2, 7} {
		for k := range parts {
			var part []float64
			for i := k; i < len(values); i += parts {
				part = append(part, cumulative(values[i]))
			}
			sort.Float64s(part)
			n := float64(len(part))
			worst := 0.0
			low, high := 0, 0
			for i, p := range part {
				worst = max(worst, math.Abs(p-float64(i)/n), math.Abs(p-float64(i+1)/n))
				if p < 0.01 {
					low++
				}
				if p > 0.99 {
					high++
				}
			}
			if worst > 2.2/math.Sqrt(n) {
				t.Errorf("part %d of %d: distance %.4f, bound %.4f", k, parts, worst, 2.2/math.Sqrt(n))
			}
			spread := math.Sqrt(0.01 * 0.99 * n)
			if d := math.Abs(float64(low) - 0.01*n); d > 5*spread {
				t.Errorf("part %d of %d: %d values in the lowest hundredth of %v", k, parts, low, n)
			}
			if d := math.Abs(float64(high) - 0.01*n); d > 5*spread {
				t.Errorf("part %d of %d: %d values in the highest hundredth of %v", k, parts, high, n)
			}
		}
	}
}

// cumulated turns a density on [low, high] into its distribution function, by
// the midpoint rule on a fine grid.
func cumulated(low, high float64, density func(float64) float64) func(float64) float64 {
	const cells = 20_000
	sums := make([]float64, cells+1)
	for i := range cells {
		sums[i+1] = sums[i] + density(low+(high-low)*(float64(i)+0.5)/cells)
	}
	return func(x float64) float64 {
		at := (x - low) / (high - low) * cells
		i := min(max(int(at), 0), cells-1)
		return (sums[i] + (at-float64(i))*(sums[i+1]-sums[i])) / sums[cells]
	}
}

// sample collects a quantity of every event of a single channel.
func sample(t *testing.T, c Config, n int, of func(truth *event.Truth, i, first int) float64) []float64 {
	t.Helper()
	truth, stats := fill(t, generator(t, c), 0, n)
	if stats.Empty > 0 || stats.Exhausted > 0 {
		t.Fatalf("stats %+v", stats)
	}
	if a, b := conservation(t, truth); a > 16*0x1p-52 || b > 4*0x1p-52 {
		t.Errorf("imbalance %v, distance from the shell %v", a, b)
	}
	values := make([]float64, n)
	for i := range values {
		first, _ := truth.Particles(i)
		values[i] = of(truth, i, first)
	}
	return values
}

func at(m float64, products ...Product) Config {
	return Config{Seed: 21, Initial: Total{SqrtSGeV: m}, Channels: []Channel{{Products: products}}}
}

func mass(p ...momentum.Four) float64 {
	sum := momentum.Four{}
	for _, q := range p {
		sum = sum.Add(q)
	}
	return math.Sqrt(max(0, sum.Dot(sum)))
}

// A flat Dalitz plot: given the pair's mass the other pair's mass squared is
// uniform, and the pair's mass follows p q.
func TestFlatDalitz(t *testing.T) {
	m := []float64{mKaon, mPion, mPion}
	const total = 1.86966
	c := at(total, Product{Number: -321, MassGeV: m[0]}, pion(1), pion(1))
	values := sample(t, c, 40_000, func(truth *event.Truth, _, first int) float64 {
		return mass(truth.Momentum[first], truth.Momentum[first+1])
	})
	follows(t, values, cumulated(m[0]+m[1], total-m[2], func(x float64) float64 {
		return splitMomentum(x-m[0]-m[1], x, m[0], m[1]) * splitMomentum(total-x-m[2], total, x, m[2])
	}))
	// cos of the helicity angle of the pair is uniform.
	values = sample(t, c, 40_000, func(truth *event.Truth, _, first int) float64 {
		p := truth.Momentum[first : first+3]
		pair := p[0].Add(p[1])
		boost, err := momentum.NewBoost(pair.P, mass(pair))
		if err != nil {
			t.Fatal(err)
		}
		inside, third := boost.ToRest(p[0]).P, boost.ToRest(p[2]).P
		return inside.Unit().Dot(third.Unit())
	})
	follows(t, values, func(x float64) float64 { return (x + 1) / 2 })
}

// One broad state beside a sharp one: the line shape times the momentum.
func TestLineShape(t *testing.T) {
	for _, total := range []float64{2.2, mProton + mRho - 0.1} { // open, and through the width alone
		c := at(total, proton(), rho())
		values := sample(t, c, 40_000, func(truth *event.Truth, _, first int) float64 { return truth.Mass[first+1] })
		width := func(m float64) float64 {
			q := math.Sqrt(m*m/4 - mPion*mPion)
			q0 := math.Sqrt(mRho*mRho/4 - mPion*mPion)
			return wRho * mRho / m * (q / q0) * (q / q0) * (q / q0)
		}
		low, high := 2*mPion, min(total-mProton, mRho+DefaultReach*wRho)
		follows(t, values, cumulated(low, high, func(m float64) float64 {
			g := mRho * width(m)
			d := m*m - mRho*mRho
			return 2 * m * g / (d*d + g*g) * splitMomentum(total-m-mProton, total, m, mProton)
		}))
	}
}

// Two broad states near their common limit: the sum of their masses runs up to
// the limit without a step or a hole, because they are drawn jointly.
func TestTwoResonancesNearTheLimit(t *testing.T) {
	const total = 2*mRho + 0.02
	density := func(m float64) float64 {
		q := math.Sqrt(max(0, m*m/4-mPion*mPion))
		q0 := math.Sqrt(mRho*mRho/4 - mPion*mPion)
		g := mRho * wRho * mRho / m * (q / q0) * (q / q0) * (q / q0)
		d := m*m - mRho*mRho
		return 2 * m * g / (d*d + g*g)
	}
	// Both orders, since the first drawn must not matter: compare each state's
	// mass with the same marginal, integrated over the other one.
	low, high := 2*mPion, total-2*mPion
	marginal := cumulated(low, high, func(a float64) float64 {
		sum := 0.0
		const cells = 400
		for i := range cells {
			b := low + (total-a-low)*(float64(i)+0.5)/cells
			sum += density(b) * splitMomentum(max(0, total-a-b), total, a, b) * (total - a - low)
		}
		return density(a) * sum
	})
	for k := range 2 {
		row := 3 * k
		follows(t, sample(t, at(total, rho(), rho()), 10_000, func(truth *event.Truth, _, first int) float64 {
			return truth.Mass[first+row]
		}), marginal)
	}
}

func TestDecayDensities(t *testing.T) {
	const mMuon, mElectron, mNeutron = 0.1056583755, 0.00051099895069, 0.93956542194
	electron := Product{Number: 11, MassGeV: mElectron}
	neutrinos := []Product{{Number: -12}, {Number: 14}}
	t.Run("muon", func(t *testing.T) {
		c := at(0.5, Product{Number: 13, MassGeV: mMuon, Decay: &Decay{
			Products: append([]Product{electron}, neutrinos...), Density: LeptonDecay{},
		}}, gamma())
		values := sample(t, c, 40_000, func(truth *event.Truth, _, first int) float64 {
			return restEnergy(truth, first, first+1) * 2 / mMuon
		})
		// x^2 (3 - 2x) for a massless electron; its mass changes the distribution
		// by the order of its square over the muon's, 2e-5.
		follows(t, values, func(x float64) float64 { return min(1, x*x*x*(2-x)) })
	})
	t.Run("neutron", func(t *testing.T) {
		c := at(1.5, Product{Number: 2112, MassGeV: mNeutron, Decay: &Decay{
			Products: []Product{proton(), electron, {Number: -12}}, Density: BetaDecay{},
		}}, gamma())
		values := sample(t, c, 40_000, func(truth *event.Truth, _, first int) float64 { return restEnergy(truth, first, first+2) })
		// p E (E0 - E)^2 up to recoil, of the order of E/M = 1e-3.
		end := (mNeutron*mNeutron + mElectron*mElectron - mProton*mProton) / (2 * mNeutron)
		follows(t, values, cumulated(mElectron, end, func(e float64) float64 {
			return math.Sqrt(e*e-mElectron*mElectron) * e * (end - e) * (end - e)
		}))
	})
	t.Run("Dalitz polynomial", func(t *testing.T) {
		// The eta's decay with a slope in Y alone: T3 follows 1 + a Y + b Y^2 times
		// the width of the plot at T3.
		const a, b = -1.1, 0.1
		density := DalitzPolynomial{Terms: []DalitzTerm{{1, 0, 0}, {a, 0, 1}, {b, 0, 2}}}
		c := at(1, Product{Number: 221, MassGeV: mEta, Decay: &Decay{
			Products: []Product{pion(1), pion(-1), pi0()}, Density: density,
		}}, gamma())
		values := sample(t, c, 40_000, func(truth *event.Truth, _, first int) float64 { return restEnergy(truth, first, first+3) })
		q := mEta - 2*mPion - mPi0
		top := (mEta*mEta + mPi0*mPi0 - 4*mPion*mPion) / (2 * mEta)
		follows(t, values, cumulated(mPi0, top, func(e float64) float64 {
			pair := math.Sqrt(mEta*mEta + mPi0*mPi0 - 2*mEta*e)
			y := 3*(e-mPi0)/q - 1
			return (1 + a*y + b*y*y) * math.Sqrt(e*e-mPi0*mPi0) * splitMomentum(max(0, pair-2*mPion), pair, mPion, mPion) / pair
		}))
	})
	t.Run("omega to three pions", func(t *testing.T) {
		sharp := Product{Number: 223, MassGeV: mOmega, Decay: &Decay{
			Products: []Product{pion(1), pion(-1), pi0()}, Density: VectorToThree{},
		}}
		values := sample(t, at(1.5, sharp, gamma()), 40_000, func(truth *event.Truth, _, first int) float64 {
			return restEnergy(truth, first, first+3)
		})
		// |p1 x p2|^2 at given E3 integrates over the pair's helicity angle to
		// (p3 q)^2 times its phase space p3 q/m12 (m12^2 dropped: constant factors
		// of the boost cancel in p3 x q).
		top := (mOmega*mOmega + mPi0*mPi0 - 4*mPion*mPion) / (2 * mOmega)
		follows(t, values, cumulated(mPi0, top, func(e float64) float64 {
			pair := math.Sqrt(mOmega*mOmega + mPi0*mPi0 - 2*mOmega*e)
			k := math.Sqrt(e*e-mPi0*mPi0) * splitMomentum(max(0, pair-2*mPion), pair, mPion, mPion)
			return k * k * k / pair
		}))
	})
}

// restEnergy is the energy of a particle in the rest frame of another.
func restEnergy(truth *event.Truth, parent, row int) float64 {
	return truth.Momentum[parent].Dot(truth.Momentum[row]) / truth.Mass[parent]
}

func TestFlights(t *testing.T) {
	c := Config{Seed: 22, Initial: tagged(), Channels: []Channel{{Products: []Product{{Number: 321, MassGeV: mKaon}, lambda()}}}}
	follows(t, sample(t, c, 30_000, func(truth *event.Truth, _, first int) float64 {
		return truth.ProperTimeS[first+1]
	}), func(x float64) float64 { return -math.Expm1(-x / tauLambda) })
	// The proton starts where the Lambda ended: p/m c tau from its origin.
	truth, _ := fill(t, generator(t, c), 0, 1000)
	for i := range truth.EventIDs {
		first, _ := truth.Particles(i)
		p := truth.Momentum[first+1].P
		want := p.Norm() / mLambda * 299_792_458 * truth.ProperTimeS[first+1]
		d := momentum.Three{
			X: truth.Origin.X[first+2] - truth.Origin.X[first+1], Y: truth.Origin.Y[first+2] - truth.Origin.Y[first+1],
			Z: truth.Origin.Z[first+2] - truth.Origin.Z[first+1],
		}
		if math.Abs(d.Norm()-want) > 1e-14*(1+want) || d.Angle(p) > 1e-6 {
			t.Fatalf("a flight of %v m, want %v, at an angle of %v", d.Norm(), want, d.Angle(p))
		}
	}
}

func TestAngles(t *testing.T) {
	build := func(a *Angle, e float64) Config {
		return Config{
			Seed: 23, Initial: FixedTarget{Beam: Beam{Spectrum: Fixed{e}}, TargetMassGeV: mProton},
			Channels: []Channel{{Products: []Product{proton(), {Number: 221, MassGeV: mEta}}, Angle: a}},
		}
	}
	cosine := func(row int) func(truth *event.Truth, i, first int) float64 {
		return func(truth *event.Truth, i, first int) float64 {
			boost, err := momentum.NewBoost(truth.Initial[i].P, mass(truth.Initial[i]))
			if err != nil {
				t.Fatal(err)
			}
			p := boost.ToRest(truth.Momentum[first+row]).P
			return p.Z / p.Norm()
		}
	}
	curve := &Curve{X: []float64{-1, 0, 1}, Y: []float64{0, 1, 3}}
	t.Run("curve in cos theta", func(t *testing.T) {
		follows(t, sample(t, build(&Angle{Product: 1, CosTheta: curve}, 1.5), 30_000, cosine(1)), cumulated(-1, 1, curve.At))
		follows(t, sample(t, build(&Angle{Product: 0, CosTheta: curve}, 1.5), 30_000, cosine(0)), cumulated(-1, 1, curve.At))
	})
	t.Run("slope in t", func(t *testing.T) {
		for _, slope := range []float64{1e-12, 3, 50} {
			const e = 2.0
			s := mProton*mProton + 2*mProton*e
			p := mProton * e / math.Sqrt(s)
			m := math.Sqrt(s)
			k := splitMomentum(m-mProton-mEta, m, mProton, mEta)
			follows(t, sample(t, build(&Angle{Product: 1, SlopePerGeV2: slope}, e), 30_000, cosine(1)),
				cumulated(-1, 1, func(x float64) float64 { return math.Exp(-2 * slope * p * k * (1 - x)) }))
		}
	})
	t.Run("curve in phi", func(t *testing.T) {
		phi := &Curve{X: []float64{-math.Pi, math.Pi}, Y: []float64{0, 1}}
		follows(t, sample(t, build(&Angle{Product: 1, Phi: phi}, 1.5), 30_000, func(truth *event.Truth, _, first int) float64 {
			return truth.Momentum[first+1].P.Phi()
		}), cumulated(-math.Pi, math.Pi, phi.At))
	})
	t.Run("helicity angle of a decay", func(t *testing.T) {
		c := build(nil, 1.6)
		hyperon := lambda()
		hyperon.Decay.CosTheta = &Curve{X: []float64{-1, 1}, Y: []float64{0, 1}}
		c.Channels[0].Products = []Product{{Number: 321, MassGeV: mKaon}, hyperon}
		follows(t, sample(t, c, 30_000, func(truth *event.Truth, i, first int) float64 {
			boost, err := momentum.NewBoost(truth.Momentum[first+1].P, mLambda)
			if err != nil {
				t.Fatal(err)
			}
			daughter := boost.ToRest(truth.Momentum[first+2]).P
			axis := boost.ToRest(truth.Initial[i]).P.Neg()
			return daughter.Unit().Dot(axis.Unit())
		}), func(x float64) float64 { return (x + 1) * (x + 1) / 4 })
	})
	t.Run("slope in t with three bodies", func(t *testing.T) {
		// The two-pion system recoils with exp(b t'); its mass spectrum carries the
		// integral of the exponential.
		const e, slope = 2.0, 5.0
		c := build(&Angle{Product: 0, SlopePerGeV2: slope}, e)
		c.Channels[0].Products = []Product{proton(), pion(1), pion(-1)}
		m := math.Sqrt(mProton*mProton + 2*mProton*e)
		p := mProton * e / m
		follows(t, sample(t, c, 30_000, func(truth *event.Truth, _, first int) float64 {
			return mass(truth.Momentum[first+1], truth.Momentum[first+2])
		}), cumulated(2*mPion, m-mProton, func(x float64) float64 {
			k := splitMomentum(max(0, m-mProton-x), m, mProton, x)
			a := 4 * slope * p * k
			return splitMomentum(x-2*mPion, x, mPion, mPion) * k * -math.Expm1(-a) / a
		}))
	})
}

func TestCurve(t *testing.T) {
	c := &Curve{X: []float64{-1, -0.5, 0.25, 2}, Y: []float64{0, 2, 0, 1}}
	inv := newInverse(c)
	s := random.New(4, random.Generation, 0)
	values := make([]float64, 50_000)
	for i := range values {
		values[i] = inv.at(s.Uniform())
	}
	follows(t, values, cumulated(-1, 2, c.At))
	if v := c.At(3); v != 0 {
		t.Errorf("outside the curve: %v", v)
	}
}
