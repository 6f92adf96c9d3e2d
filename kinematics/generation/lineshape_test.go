package generation

import (
	"math"
	"testing"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/num/random"
)

// Masses and widths of broad states for the tests, in GeV.
const (
	mDelta, wDelta = 1.232, 0.117
	mRoper, wRoper = 1.44, 0.35 // N(1440)
	mA1, wA1       = 1.23, 0.425
	mB1, wB1       = 1.2295, 0.142
	mLight, wLight = 1.4051, 0.0505 // Lambda(1405)
	mPrime         = 0.95778        // eta'
)

func broad(m, w float64, shape LineShape, daughters ...Product) Product {
	return Product{Number: 9, MassGeV: m, WidthGeV: w, Shape: shape, Decay: &Decay{Products: daughters}}
}

func delta() Product { return broad(mDelta, wDelta, LineShape{L: 1}, proton(), pion(1)) }
func roper() Product { return broad(mRoper, wRoper, LineShape{L: 1}, delta(), pion(-1)) }
func a1() Product    { return broad(mA1, wA1, LineShape{}, rho(), pion(1)) }
func omegaPi() Product {
	return broad(mB1, wB1, LineShape{}, omega(), pion(1))
}

// What the line shapes should be, by the midpoint rule in the masses, without a line
// of the package.

// peak is a Breit-Wigner in the mass for a width g at that mass.
func peak(m, m0, g float64) float64 {
	d := m*m - m0*m0
	return 2 * m * m0 * g / math.Pi / (d*d + m0*m0*g*g)
}

// away is the momentum of two parts, 0 where they do not fit.
func away(m, a, b float64) float64 {
	if m <= a+b {
		return 0
	}
	return math.Sqrt((m*m-(a+b)*(a+b))*(m*m-(a-b)*(a-b))) / (2 * m)
}

// midpoint integrates by the midpoint rule.
func midpoint(low, high float64, cells int, f func(float64) float64) float64 {
	if !(high > low) {
		return 0
	}
	sum, h := 0.0, (high-low)/float64(cells)
	for i := range cells {
		sum += f(low + h*(float64(i)+0.5))
	}
	return sum * h
}

// smooth holds a function at points and interpolates, as integrals are slow.
func smooth(low, high float64, f func(float64) float64) func(float64) float64 {
	const cells = 2000
	y := make([]float64, cells+1)
	for i := range y {
		y[i] = f(low + (high-low)*float64(i)/cells)
	}
	return func(x float64) float64 {
		at := (x - low) / (high - low) * cells
		i := min(max(int(at), 0), cells-1)
		return y[i] + (at-float64(i))*(y[i+1]-y[i])
	}
}

// sharpWidth is the width to two sharp daughters at a mass.
func sharpWidth(m, m0, w, a, b float64, l int) float64 {
	q, q0 := away(m, a, b), away(m0, a, b)
	return w * m0 / m * math.Pow(q/q0, float64(2*l+1))
}

func rhoPeak(m float64) float64 { return peak(m, mRho, sharpWidth(m, mRho, wRho, mPion, mPion, 1)) }
func deltaPeak(m float64) float64 {
	return peak(m, mDelta, sharpWidth(m, mDelta, wDelta, mProton, mPion, 1))
}
func omegaPeak(m float64) float64 { return peak(m, mOmega, sharpWidth(m, mOmega, wOmega, mPi0, 0, 1)) }

// nested is the peak of a state that decays to one with a peak and a pion.
func nested(m0, w, high float64, l int, daughter func(float64) float64, from, to float64) func(float64) float64 {
	inner := func(m float64) float64 {
		return midpoint(from, min(to, m-mPion), 2000, func(x float64) float64 {
			return daughter(x) * math.Pow(away(m, x, mPion), float64(2*l+1)) / m
		})
	}
	unit := inner(m0)
	width := smooth(from+mPion, high, inner)
	return func(m float64) float64 { return peak(m, m0, w*width(m)/unit) }
}

// threeSharp is the phase space of three sharp bodies up to a factor.
func threeSharp(m, a, b, c float64) float64 {
	return midpoint(a+b, m-c, 2000, func(x float64) float64 { return away(x, a, b) * away(m, x, c) / m })
}

// counts tests that each of the bins holds what it should within five standard
// deviations, and half an event of room for bins where next to none is expected.
func counts(t *testing.T, values []float64, cumulative func(float64) float64, low, width float64, bins int) {
	t.Helper()
	got := make([]int, bins)
	for _, v := range values {
		if v < low {
			t.Fatalf("%v is below the lowest mass %v", v, low)
		}
		if k := int((v - low) / width); k < bins {
			got[k]++
		}
	}
	for k, n := range got {
		p := cumulative(low+width*float64(k+1)) - cumulative(low+width*float64(k))
		want := p * float64(len(values))
		if d := math.Abs(float64(n) - want); d > 0.5+5*math.Sqrt(want*(1-p)) {
			t.Errorf("bin %d from %.4f on: %d events, want %.1f", k, low+width*float64(k), n, want)
		}
	}
}

func massOf(row int) func(truth *event.Truth, _, first int) float64 {
	return func(truth *event.Truth, _, first int) float64 { return truth.Mass[first+row] }
}

// A broad state whose daughters are broad, or are three, or are closed at its
// nominal mass: from the lightest final state on, without a step, and in all follows
// its line shape times the momentum of production.
func TestShapesFromTheLightestFinalState(t *testing.T) {
	const lightBaryon, lightMeson = mProton + 2*mPion, 3 * mPion
	constant := func(m float64) float64 { // of constant width, times phase space
		return peak(m, mRoper, wRoper) * threeSharp(m, mProton, mPion, mPion)
	}
	roperThree := func(m float64) float64 {
		g := wRoper * threeSharp(m, mProton, mPion, mPion) / threeSharp(mRoper, mProton, mPion, mPion)
		return peak(m, mRoper, g)
	}
	lightShape := func(m float64) float64 { // opens above the nominal mass: two widths add up
		const unit = mProton + mKaon + wLight
		part := wLight * away(m, mProton, mKaon) / m / (away(unit, mProton, mKaon) / unit)
		d, total := m*m-mLight*mLight, mLight*(wLight+part)
		return m * part / (d*d + total*total)
	}
	omegaLow := mOmega - DefaultReach*wOmega
	kaon := Product{Number: -321, MassGeV: mKaon}
	three := []Product{proton(), pion(1), pion(-1)}
	for _, c := range []struct {
		name        string
		product     Product
		total, with float64 // with the sharp other product
		low         float64
		density     func(float64) float64
	}{
		{"Delta pi", roper(), 2.55, mPi0, lightBaryon, nested(mRoper, wRoper, 2.55-mPi0, 1, deltaPeak, mProton+mPion, mDelta+DefaultReach*wDelta)},
		{"Delta pi below its nominal threshold", roper(), 1.48, mPi0, lightBaryon, nested(mRoper, wRoper, mRoper, 1, deltaPeak, mProton+mPion, mDelta+DefaultReach*wDelta)},
		{"rho pi", a1(), 2.6, mProton, lightMeson, nested(mA1, wA1, 2.6-mProton, 0, rhoPeak, 2*mPion, mRho+DefaultReach*wRho)},
		{"rho pi near the limit", a1(), 1.8, mProton, lightMeson, nested(mA1, wA1, mA1, 0, rhoPeak, 2*mPion, mRho+DefaultReach*wRho)},
		{"omega pi, a narrow daughter", omegaPi(), 2.2, mProton, omegaLow + mPion, nested(mB1, wB1, 2.2-mProton, 0, omegaPeak, omegaLow, mOmega+DefaultReach*wOmega)},
		{"p pi pi", broad(mRoper, wRoper, LineShape{}, three...), 2.55, mPi0, lightBaryon, smooth(lightBaryon, 2.55-mPi0, roperThree)},
		{"p pi pi of constant width", broad(mRoper, wRoper, LineShape{ConstantWidth: true}, three...), 2, mPi0, lightBaryon, smooth(lightBaryon, 2-mPi0, constant)},
		{"p K, closed at the nominal mass", broad(mLight, wLight, LineShape{}, proton(), kaon), 2.5, mKaon, mProton + mKaon, lightShape},
	} {
		t.Run(c.name, func(t *testing.T) {
			events := at(c.total, c.product, Product{Number: 111, MassGeV: c.with})
			values := sample(t, events, 30_000, massOf(0))
			high := min(c.total-c.with, c.product.MassGeV+DefaultReach*c.product.WidthGeV)
			want := cumulated(c.low, high, func(m float64) float64 { return c.density(m) * away(c.total, m, c.with) })
			follows(t, values, want)
			counts(t, values, want, c.low, 0.01, min(20, int((high-c.low)/0.01)))
		})
	}
}

// Two broad states near their common limit, both with a broad daughter: each follows
// its shape times the momentum, integrated over the other one.
func TestNestedResonancesNearTheLimit(t *testing.T) {
	const total = mA1 + mRoper + 0.02
	const lowA, lowB = 3 * mPion, mProton + 2*mPion
	a := nested(mA1, wA1, total-lowB, 0, rhoPeak, 2*mPion, mRho+DefaultReach*wRho)
	b := nested(mRoper, wRoper, total-lowA, 1, deltaPeak, mProton+mPion, mDelta+DefaultReach*wDelta)
	c := at(total, a1(), roper())
	ofA := cumulated(lowA, total-lowB, smooth(lowA, total-lowB, func(x float64) float64 {
		return a(x) * midpoint(lowB, total-x, 1000, func(y float64) float64 { return b(y) * away(total, x, y) })
	}))
	ofB := cumulated(lowB, total-lowA, smooth(lowB, total-lowA, func(y float64) float64 {
		return b(y) * midpoint(lowA, total-y, 1000, func(x float64) float64 { return a(x) * away(total, x, y) })
	}))
	values := sample(t, c, 20_000, massOf(0))
	follows(t, values, ofA)
	counts(t, values, ofA, lowA, 0.02, 20)
	values = sample(t, c, 20_000, massOf(5)) // behind rho, its pions and the other pion
	follows(t, values, ofB)
	counts(t, values, ofB, lowB, 0.02, 20)
}

// The mass of a broad daughter follows what its parent's width integrates over, for
// a broad parent and for a sharp one: eta' -> rho gamma with the third power of the
// photon's momentum.
func TestDaughtersOfDecays(t *testing.T) {
	const total = 2.0
	high := total - mPi0
	shape := nested(mRoper, wRoper, high, 1, deltaPeak, mProton+mPion, mDelta+DefaultReach*wDelta)
	inner := smooth(mProton+2*mPion, high, func(m float64) float64 {
		return midpoint(mProton+mPion, m-mPion, 2000, func(x float64) float64 { return deltaPeak(x) * math.Pow(away(m, x, mPion), 3) })
	})
	joint := func(x float64) float64 {
		return deltaPeak(x) * midpoint(x+mPion, high, 2000, func(m float64) float64 {
			return shape(m) * away(total, m, mPi0) * math.Pow(away(m, x, mPion), 3) / inner(m)
		})
	}
	values := sample(t, at(total, roper(), Product{Number: 111, MassGeV: mPi0}), 30_000, massOf(1))
	follows(t, values, cumulated(mProton+mPion, high-mPion, smooth(mProton+mPion, high-mPion, joint)))

	prime := Product{Number: 331, MassGeV: mPrime, Shape: LineShape{L: 1}, Decay: &Decay{Products: []Product{rho(), gamma()}}}
	values = sample(t, at(2.2, proton(), prime), 30_000, massOf(2))
	follows(t, values, cumulated(2*mPion, mPrime, func(x float64) float64 { return rhoPeak(x) * math.Pow(away(mPrime, x, 0), 3) }))
}

// Unweighted and weighted, the constant rate is the same on both sides of the
// threshold with nominal masses, and starts where the lightest final state does.
func TestConstantRateThroughTheWidth(t *testing.T) {
	const nominal = mRho + float64(mRho*mRho)/(2*mProton) // photon energy of the threshold, 1.0955
	const lightest = 2*mPion + float64(2*mPion*2*mPion)/(2*mProton)
	for _, span := range [][2]float64{{0.9, nominal + 1e-4}, {0.9, 1.3}, {0.2, 1.3}} {
		c := Config{
			Seed: 24, Initial: FixedTarget{Beam: Beam{Spectrum: Flat{span[0], span[1]}}, TargetMassGeV: mProton},
			Channels: []Channel{{Products: []Product{proton(), rho()}}},
		}
		follows(t, sample(t, c, 20_000, func(truth *event.Truth, i, _ int) float64 {
			return truth.BeamEnergyGeV[truth.BeamOffsets[i]]
		}), func(e float64) float64 {
			low := max(span[0], lightest)
			return (e - low) / (span[1] - low)
		})
		c.Weighted = true
		truth, _ := fill(t, generator(t, c), 0, 60_000)
		for _, cut := range []float64{0.35, 0.6, 0.9, nominal - 0.05, nominal, nominal + 0.1} {
			count, sum, square := 0.0, 0.0, 0.0
			for i, w := range truth.Weight {
				if e := truth.BeamEnergyGeV[truth.BeamOffsets[i]]; e >= cut && e < cut+0.05 {
					count++
					sum += w
					square += w * w
				}
			}
			if count < 100 {
				continue
			}
			mean := sum / count
			// The table of the mean is good to 1e-4.
			if spread := math.Sqrt((square/count - mean*mean) / count); math.Abs(mean-1) > 5*spread+1e-4 {
				t.Errorf("from %v GeV on: mean weight %v +- %v, want 1", cut, mean, spread)
			}
		}
	}
}

// The known volumes, within the accuracy that volume states.
func TestVolumesByQuadrature(t *testing.T) {
	worst := 0.0
	for _, k := range knownVolumes {
		var parts []part
		for _, m := range k.masses {
			parts = append(parts, part{low: m})
		}
		v := newVolume(parts, centrifugal{}, 3, func() bool { return false })
		got := v.at(k.m)
		worst = max(worst, math.Abs(got/k.volume-1))
		// 1e-4 for each table on the way, of which there are n - 2.
		if bound := 1e-14 + 1e-4*float64(len(k.masses)-2); math.Abs(got/k.volume-1) > bound {
			t.Errorf("%s: volume %v, want %v", k.id, got, k.volume)
		}
	}
	t.Logf("worst relative error %.1e", worst)
}

// The mean weight of drawn masses is the volume, with any number of broad products,
// and no weight passes the ceiling by more than the rounding of some fifty products.
func TestWeightsOfGroups(t *testing.T) {
	three := broad(mRoper, wRoper, LineShape{}, proton(), pion(1), pion(-1))
	constant := broad(mDelta, wDelta, LineShape{L: 1, ConstantWidth: true}, proton(), pion(1))
	barred := broad(mDelta, wDelta, LineShape{L: 2, RadiusPerGeV: 5}, proton(), pion(1))
	barredRoper := broad(mRoper, wRoper, LineShape{L: 2, RadiusPerGeV: 3}, delta(), pion(-1))
	closed := broad(mLight, wLight, LineShape{}, proton(), Product{Number: -321, MassGeV: mKaon})
	barely := broad(2*mKaon+1e-5, 0.06, LineShape{}, Product{MassGeV: mKaon}, Product{MassGeV: mKaon})
	above := broad(2*mKaon-1e-5, 0.06, LineShape{}, Product{MassGeV: mKaon}, Product{MassGeV: mKaon})
	worst := 0.0
	for i, products := range [][]Product{
		{proton(), rho()}, {rho(), rho()}, {a1(), roper()}, {proton(), rho(), omega()}, {omegaPi(), delta(), pion(1)},
		{three, pion(-1)}, {constant, gamma()}, {barred, pion(1)}, {closed, pi0()}, {proton(), barely}, {proton(), above}, {rho(), rho(), rho()},
		{a1()}, {roper()}, {barredRoper},
	} {
		c := Channel{Products: products}
		p, _ := newPlan(&c, func() bool { return false })
		g := p.root
		v := newVolume(g.parts(p.nodes), centrifugal{}, g.floors+3, func() bool { return false })
		if len(products) == 1 { // the decay of a particle by itself
			g, v = p.nodes[0].group, p.nodes[0].resonance.decay
		}
		g.roof = newRoof(g, p.nodes, g.floors+3, func() bool { return false })
		ps := g.lowest
		masses := make([]float64, len(p.nodes))
		for k, excess := range []float64{1e-9, 1e-5, 1e-3, 0.03, 0.2, 0.5, 1, 2, 3} {
			m := g.floors + excess
			ceiling := g.ceiling(m)
			s := random.New(25, random.Generation, int64(10*i+k))
			largest := 0.0
			got, spread := mean(8000, func() float64 {
				w := g.draw(&s, p.nodes, m, masses, &ps)
				largest = max(largest, w)
				return w
			})
			worst = max(worst, largest/ceiling)
			if largest > ceiling*(1+100*0x1p-52) {
				t.Errorf("case %d, %v above: weight %v, ceiling %v", i, excess, largest, ceiling)
			}
			// Below the first point of the table the volume is a power of the excess.
			bound := 5*spread + 3e-4*got
			if excess < 1e-6*3 {
				bound = 5*spread + 0.05*got
			}
			if d := math.Abs(got - v.at(m)); d > bound {
				t.Errorf("case %d, %v above: mean weight %v +- %v, volume %v", i, excess, got, spread, v.at(m))
			}
		}
	}
	t.Logf("largest weight over its ceiling: %v", worst)
}

// The bound of a shape holds wherever it is steep: at the nominal mass, at the
// lightest daughters and where a narrow daughter opens, even where all three are
// together and the shape has a spike that a grid misses.
func TestBoundsOfShapes(t *testing.T) {
	narrow := broad(0.8, 1e-8, LineShape{LowGeV: 0.3}, pion(1), pion(-1))
	for i, c := range []struct {
		product Product
		opens   float64
	}{
		{rho(), mRho}, {a1(), mRho + mPion}, {roper(), mDelta + mPion}, {omegaPi(), mOmega + mPion},
		{broad(0.8+mPion+2e-4, 0.4, LineShape{}, narrow, pion(1)), 0.8 + mPion},
		{broad(0.8+mPion-2e-4, 0.4, LineShape{}, narrow, pion(1)), 0.8 + mPion},
		{broad(2*mKaon+1e-4, 0.06, LineShape{}, Product{MassGeV: mKaon}, Product{MassGeV: mKaon}), 2 * mKaon},
		{broad(2*mKaon-1e-4, 0.06, LineShape{}, Product{MassGeV: mKaon}, Product{MassGeV: mKaon}), 2 * mKaon},
		{broad(mDelta, wDelta, LineShape{ConstantWidth: true}, proton(), pion(1)), mDelta},
	} {
		plan, _ := newPlan(&Channel{Products: []Product{c.product, gamma()}}, func() bool { return false })
		r := plan.nodes[0].resonance
		top, largest := r.tops[shapeGrid], 0.0
		for _, near := range []float64{r.low, r.mass, c.opens, r.high} {
			for k := range 4000 {
				step := math.Pow(10, -12+float64(k)/300) // 1e-12 to 20
				for _, m := range []float64{near - step, near + step} {
					if m <= r.low || m >= r.high {
						continue
					}
					ratio := r.shapeRatio(m)
					largest = max(largest, ratio)
					if limit := r.ceiling(m) / (r.span(m) / math.Pi); ratio > limit*(1+100*0x1p-52) {
						t.Fatalf("case %d: ratio %v at %v, bound %v", i, ratio, m, limit)
					}
				}
			}
		}
		if largest < 0.9*top {
			t.Errorf("case %d: the bound %v is too high, the largest ratio is %v", i, top, largest)
		}
	}
}

// A density whose bound is too low for a peak between the points of its grid: events
// above it carry the excess and are counted.
func TestOverflowsOfDensities(t *testing.T) {
	// 1 - K (X^2 + Y^2) with 1/2 at the nearest points of the grid, so with the bound
	// 0.51 and K r^2 uniform where the density is positive.
	const sharpness, n, bound = 1250.0, 500, 0.51
	peaked := DalitzPolynomial{Terms: []DalitzTerm{{1, 0, 0}, {-sharpness, 2, 0}, {-sharpness, 0, 2}}}
	c := at(1.7, proton(), Product{Number: 221, MassGeV: mEta, Decay: &Decay{
		Products: []Product{pion(1), pion(-1), pi0()}, Density: peaked,
	}})
	truth, stats := fill(t, generator(t, c), 0, n)
	heavier, sum, first := 0, 0.0, 0.0
	q := mEta - 2*mPion - mPi0
	for i, w := range truth.Weight {
		row, _ := truth.Particles(i)
		kinetic := func(k int) float64 { return restEnergy(truth, row+1, row+k) - truth.Mass[row+k] }
		x := math.Sqrt(3) * (kinetic(2) - kinetic(3)) / q
		y := 3*kinetic(4)/q - 1
		u := sharpness * (x*x + y*y)
		want := max(1, (1-u)/bound)
		if math.Abs(w-want) > 1e-9*want {
			t.Fatalf("weight %v, want %v", w, want)
		}
		if w > 1 {
			heavier++
		}
		sum += w
		first += w * u
	}
	if int64(heavier) != stats.Overflows || !(stats.Largest > 1.9) || stats.Largest > 1/bound+1e-9 {
		t.Errorf("%d weights above 1, stats %+v", heavier, stats)
	}
	// Accepted are 1 - bound of u whole and bound/2 of the rest.
	share := (1 - bound) / (1 - bound + bound/2)
	if d := (float64(heavier) - n*share) / math.Sqrt(n*share*(1-share)); math.Abs(d) > 5 {
		t.Errorf("%d overflows, want %.0f: %.1f standard deviations", heavier, n*share, d)
	}
	// The weighted mean of u under 1 - u is 1/3; its spread is below that of u itself, 0.24,
	// times the spread of weights.
	if got := first / sum; math.Abs(got-1.0/3) > 5*0.24*math.Sqrt(stats.SumSquares)/stats.SumWeights {
		t.Errorf("weighted mean of u %v, want 1/3", got)
	}
}

// The bound of a group holds for all masses of its broad particles, with phase space at
// its own bound for them, and not far above: 2.3 for the seventeenth power of the excess. At
// the points of the roof it has least room.
func TestRoofs(t *testing.T) {
	many := broad(2, 0.3, LineShape{}, proton(), pion(1), pion(1), pion(-1), pion(-1), pi0())
	light := broad(0.6, 0.5, LineShape{LowGeV: 1e-9}, gamma(), gamma())
	// Opens, with a spike, 1.3023 above its lightest daughters: in the last slot of point 340,
	// whose bound is far above it.
	narrow := broad(1.6023, 1e-8, LineShape{LowGeV: 0.3}, pion(1), pion(-1))
	spike := broad(1.6023+mPion+0.02, 0.4, LineShape{}, narrow, pion(1))
	for i, products := range [][]Product{
		{proton(), rho()}, {proton(), many}, {many, many}, {gamma(), light}, {light, light}, {pion(1), pion(1), pion(1), pion(-1), pion(-1), rho()},
		{roper(), many}, {omegaPi(), gamma()}, {omegaPi(), rho()}, {roper()}, {gamma(), spike},
	} {
		p, _ := newPlan(&Channel{Products: products}, func() bool { return false })
		g := p.root
		if len(products) == 1 { // the decay of a particle by itself
			g = p.nodes[0].group
		}
		const high = 2.5
		g.roof = newRoof(g, p.nodes, g.floors+high, func() bool { return false })
		var broadRows []int
		for k, row := range g.rows {
			if p.nodes[row].resonance != nil {
				broadRows = append(broadRows, k)
			}
		}
		masses := make([]float64, len(g.rows))
		for k, row := range g.rows {
			masses[k] = p.nodes[row].floor
		}
		ps := phaseSpaceOf(len(masses))
		for point := 100; point <= roofPoints; point += 60 {
			x := float64(point) / roofPoints
			// A trifle below the point, so that the bound is that of the point.
			m := g.floors + (1-1e-9)*high*x*x*x*x
			weight := func() float64 {
				ps.setMasses(masses)
				w := ps.ceiling(m)
				if len(masses) == 2 && w > 0 {
					w *= g.factor.at(splitMomentum(m-masses[0]-masses[1], m, masses[0], masses[1]))
				}
				for _, k := range broadRows {
					r := p.nodes[g.rows[k]].resonance
					w *= r.shapeRatio(masses[k]) * r.span(r.low+m-g.floors) / math.Pi
				}
				return w
			}
			// Scan the excess of the first broad mass and, within what is left, of the second.
			largest := 0.0
			steps := []int{20_000, 0}
			if len(broadRows) == 2 {
				steps = []int{400, 400}
			}
			for a := 1; a < steps[0]; a++ {
				first := p.nodes[g.rows[broadRows[0]]].floor
				part := float64(a) / float64(steps[0])
				masses[broadRows[0]] = first + (m-g.floors)*part
				for b := range steps[1] + 1 {
					if len(broadRows) == 2 {
						masses[broadRows[1]] = p.nodes[g.rows[broadRows[1]]].floor + (m-g.floors)*(1-part)*float64(b)/float64(steps[1])
					}
					largest = max(largest, weight())
				}
			}
			if top := g.ceiling(m); !(largest <= top) || i < 10 && top > 2.5*largest {
				t.Errorf("case %d, %v above: largest weight %v, bound %v", i, m-g.floors, largest, top)
			}
			if point == 340 {
				t.Logf("case %d: bound over largest weight %.3f", i, g.ceiling(m)/largest)
			}
		}
	}
}
