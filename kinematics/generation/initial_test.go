package generation

import (
	"errors"
	"math"
	"slices"
	"testing"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/internal/golden"
	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/num/random"
)

func etaOn(initial Initial) Config {
	return Config{Seed: 31, Initial: initial, Channels: []Channel{{Products: []Product{proton(), {Number: 221, MassGeV: mEta}}}}}
}

func TestSpectra(t *testing.T) {
	const n = 40_000
	electron, low, high := 3.0, 1.2, 2.4
	screened := func(k float64) float64 { y := k / electron; return (4.0/3 - 4.0/3*y + y*y) / k }
	cases := []struct {
		name     string
		spectrum Spectrum
		density  func(float64) float64
	}{
		{"flat", Flat{low, high}, func(float64) float64 { return 1 }},
		{"1/k", Bremsstrahlung{ElectronGeV: electron, LowGeV: low, HighGeV: high}, func(k float64) float64 { return 1 / k }},
		{"complete screening", Bremsstrahlung{ElectronGeV: electron, LowGeV: low, HighGeV: high, CompleteScreening: true}, screened},
		{
			"channels", Bremsstrahlung{ElectronGeV: electron, LowGeV: low, HighGeV: high, CompleteScreening: true}.Channels(240), screened,
		},
		{"histogram", Histogram{EdgesGeV: []float64{1.2, 1.3, 1.7, 2.4}, Contents: []float64{1, 0, 3}}, func(k float64) float64 {
			switch {
			case k < 1.3:
				return 1 / 0.1
			case k < 1.7:
				return 0
			}
			return 3 / 0.7
		}},
	}
	for i, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			if list := c.spectrum.faults("x"); len(list) > 0 {
				t.Fatal(list)
			}
			s := random.New(32, random.Generation, int64(i))
			draw := c.spectrum.sampler()
			values := make([]float64, n)
			for k := range values {
				values[k] = draw.draw(&s)
			}
			first, last := c.spectrum.Range()
			if slices.Min(values) < first || slices.Max(values) > last {
				t.Errorf("energies from %v to %v", slices.Min(values), slices.Max(values))
			}
			follows(t, values, cumulated(low, high, c.density))
		})
	}
}

// With a given rate the event density is the flux, whatever the phase space.
func TestConstantRateFollowsTheFlux(t *testing.T) {
	c := etaOn(FixedTarget{Beam: Beam{Spectrum: Flat{0.5, 1.5}}, TargetMassGeV: mProton})
	c.Channels[0].Products = []Product{proton(), pi0(), pi0()}
	threshold := 2*mPi0 + float64(2*mPi0*2*mPi0)/(2*mProton)
	low := max(0.5, threshold)
	energies := sample(t, c, 30_000, func(truth *event.Truth, i, _ int) float64 { return truth.BeamEnergyGeV[truth.BeamOffsets[i]] })
	follows(t, energies, func(e float64) float64 { return (e - low) / (1.5 - low) })
}

// Phase space over flux, joint redraw: for two bodies p'/(s p).
func TestPhaseSpaceRate(t *testing.T) {
	c := etaOn(FixedTarget{Beam: Beam{Spectrum: Flat{0.5, 1.5}}, TargetMassGeV: mProton})
	c.Channels[0].Energy.Kind = PhaseSpaceRate
	density := func(e float64) float64 {
		m := math.Sqrt(mProton*mProton + 2*mProton*e)
		excess := m - mProton - mEta
		if excess <= 0 {
			return 0
		}
		return splitMomentum(excess, m, mProton, mEta) / m / (4 * mProton * e)
	}
	energy := func(truth *event.Truth, i, _ int) float64 { return truth.BeamEnergyGeV[truth.BeamOffsets[i]] }
	follows(t, sample(t, c, 30_000, energy), cumulated(0.5, 1.5, density))
	// Weighted, the mean weight is the mean of volume over flux, and events below
	// threshold are there with weight 0.
	c.Weighted = true
	const n = 100_000
	_, stats := fill(t, generator(t, c), 0, n)
	want := 0.0
	for i := range 20_000 {
		want += math.Pi * density(0.5+(float64(i)+0.5)/20_000) / 20_000
	}
	got := stats.SumWeights / n
	spread := math.Sqrt((stats.SumSquares/n - got*got) / n)
	if d := (got - want) / spread; math.Abs(d) > 5 {
		t.Errorf("mean weight %v, want %v: %.1f standard errors", got, want, d)
	}
	if stats.Empty == 0 || stats.Events != n {
		t.Errorf("stats %+v", stats)
	}
}

// Weighted events at a given rate: the weights of every part of the spectrum
// average to one over the branching fraction, within the one per cent of the
// tabulated mean and five standard errors.
func TestWeightedConstantRate(t *testing.T) {
	c := etaOn(FixedTarget{Beam: Beam{Spectrum: Flat{0.2, 1.5}}, TargetMassGeV: mProton})
	c.Channels[0].Products = []Product{proton(), pion(1), pion(-1)}
	c.Weighted = true
	const n = 100_000
	truth, _ := fill(t, generator(t, c), 0, n)
	threshold := 2*mPion + float64(2*mPion*2*mPion)/(2*mProton)
	for _, cut := range []float64{threshold, 0.5, 0.9, 1.2} {
		count, sum, square := 0.0, 0.0, 0.0
		for i, w := range truth.Weight {
			e := truth.BeamEnergyGeV[truth.BeamOffsets[i]]
			if e < threshold && w != 0 {
				t.Fatalf("weight %v below threshold", w)
			}
			if e >= cut && e < cut+0.3 {
				count++
				sum += w
				square += w * w
			}
		}
		got := sum / count
		if spread := math.Sqrt((square/count - got*got) / count); math.Abs(got-1) > 5*spread+0.01 {
			t.Errorf("mean weight %v +- %v from %v GeV", got, spread, cut)
		}
	}
}

func TestCurveRate(t *testing.T) {
	c := etaOn(FixedTarget{Beam: Beam{Spectrum: Flat{0.9, 1.5}}, TargetMassGeV: mProton})
	curve := &Curve{X: []float64{1.5, 1.8, 1.9}, Y: []float64{0, 1, 0.2}}
	c.Channels[0].Energy = EnergyShape{Kind: CurveRate, Curve: curve}
	root := func(e float64) float64 { return math.Sqrt(mProton*mProton + 2*mProton*e) }
	follows(t, sample(t, c, 30_000, func(truth *event.Truth, i, _ int) float64 {
		return truth.BeamEnergyGeV[truth.BeamOffsets[i]]
	}), cumulated(0.9, 1.5, func(e float64) float64 { return curve.At(root(e)) }))
}

func TestBounds(t *testing.T) {
	c := at(1.5, proton(), pi0(), pi0())
	g := generator(t, c)
	largest, average, err := g.MeasureBound(0, 20_000)
	if err != nil || largest > 1 || average > largest {
		t.Fatalf("measured %v, %v: %v", largest, average, err)
	}
	const n = 20_000
	for _, bound := range []float64{1, 1.05 * largest} {
		c.Channels[0].Bound = bound
		_, stats := fill(t, generator(t, c), 0, n)
		want := average / bound
		if d := math.Abs(stats.Efficiency()/want - 1); d > 0.05 {
			t.Errorf("bound %v: efficiency %v, want %v", bound, stats.Efficiency(), want)
		}
		if stats.Overflows != 0 || stats.Effective() != n {
			t.Errorf("bound %v: stats %+v", bound, stats)
		}
	}
	// A bound too low: the excess shows as weight and count, and the sum of the
	// weights still follows phase space.
	c.Channels[0].Bound = average
	truth, stats := fill(t, generator(t, c), 0, n)
	if stats.Overflows == 0 || stats.Largest <= 1 || stats.Largest > 1.01*largest/average {
		t.Errorf("stats %+v", stats)
	}
	heavier := 0
	for _, w := range truth.Weight {
		if w > 1 {
			heavier++
		} else if w != 1 {
			t.Fatalf("weight %v", w)
		}
	}
	if int64(heavier) != stats.Overflows {
		t.Errorf("%d weights above 1, %d overflows", heavier, stats.Overflows)
	}
	for _, bad := range [][2]int{{1, 1}, {-1, 1}, {0, 0}} {
		if _, _, err := g.MeasureBound(bad[0], bad[1]); !errors.Is(err, fault.Invalid) {
			t.Errorf("channel and count %v: %v", bad, err)
		}
	}
}

func TestExhaustion(t *testing.T) {
	// The beam hardly ever reaches the threshold.
	h := Histogram{EdgesGeV: []float64{0.1, 0.2, 2, 2.1}, Contents: []float64{1, 0, 1e-9}}
	c := etaOn(FixedTarget{Beam: Beam{Spectrum: h}, TargetMassGeV: mProton})
	truth, stats := fill(t, generator(t, c), 0, 3)
	if stats.Exhausted != 3 || stats.Empty != 3 || truth.Weight[0] != 0 || len(truth.Momentum) != 0 {
		t.Errorf("stats %+v, weights %v", stats, truth.Weight)
	}
}

func TestFermiGas(t *testing.T) {
	const deuteron, neutron, fermi = 1.87561294500, 0.93956542194, 0.1
	c := etaOn(FixedTarget{
		Beam: Beam{Spectrum: Fixed{1.0}}, TargetMassGeV: mProton,
		Motion: &FermiGas{FermiMomentumGeV: fermi, NucleusMassGeV: deuteron, SpectatorMassGeV: neutron, SpectatorNumber: 2112},
	})
	spectator := sample(t, c, 30_000, func(truth *event.Truth, i, first int) float64 {
		_, end := truth.Particles(i)
		if truth.Number[end-1] != 2112 || end-first != 3 {
			t.Fatalf("particles %v", truth.Number[first:end])
		}
		return truth.Momentum[end-1].P.Norm()
	})
	follows(t, spectator, func(p float64) float64 { return math.Min(1, p*p*p/(fermi*fermi*fermi)) })
	truth, _ := fill(t, generator(t, c), 0, 100)
	for _, p := range truth.Initial {
		if math.Abs(p.E-1-deuteron) > 8*0x1p-52*p.E || math.Abs(p.P.X) > 8*0x1p-52 {
			t.Fatalf("initial state %v, want the beam and a nucleus at rest", p)
		}
	}
}

func TestCollidingBeams(t *testing.T) {
	for _, angle := range []float64{math.Pi, 2, 0.5} {
		initial := CollidingBeams{First: Beam{Spectrum: Fixed{2}}, Second: Beam{Spectrum: Flat{1, 3}}, AngleRad: angle}
		c := Config{Seed: 33, Initial: initial, Channels: []Channel{{Products: []Product{pion(1), pion(-1)}}}}
		values := sample(t, c, 5000, func(truth *event.Truth, i, _ int) float64 {
			total := truth.Initial[i]
			// s = 4 E1 E2 sin^2(angle/2) for massless beams.
			e2 := total.E - 2
			s := 8 * e2 * math.Pow(math.Sin(angle/2), 2)
			if d := math.Abs(total.Dot(total)/s - 1); d > 1e-13 {
				t.Fatalf("s = %v, want %v", total.Dot(total), s)
			}
			return e2
		})
		follows(t, values, func(e float64) float64 { return (e - 1) / 2 })
	}
	// Along the first beam: the axis of an angle is its direction in the centre
	// of mass.
	c := Config{
		Seed: 34, Initial: CollidingBeams{First: Beam{Spectrum: Fixed{2}}, Second: Beam{Spectrum: Fixed{1}}, AngleRad: 2.5},
		Channels: []Channel{{Products: []Product{pion(1), pion(-1)}, Angle: &Angle{CosTheta: &Curve{X: []float64{-1, 1}, Y: []float64{0, 1}}}}},
	}
	a, _ := momentum.BeamsAtAngle(0, 2, 0, 1, 2.5)
	follows(t, sample(t, c, 20_000, func(truth *event.Truth, i, first int) float64 {
		boost, err := momentum.NewBoost(truth.Initial[i].P, mass(truth.Initial[i]))
		if err != nil {
			t.Fatal(err)
		}
		return boost.ToRest(a).P.Unit().Dot(boost.ToRest(truth.Momentum[first]).P.Unit())
	}), func(x float64) float64 { return (x + 1) * (x + 1) / 4 })
}

func TestTargetRegion(t *testing.T) {
	c := etaOn(FixedTarget{Beam: Beam{Spectrum: Fixed{1}}, TargetMassGeV: mProton})
	c.Target = Region{CentreZM: 1, LengthM: 0.05, SigmaXM: 0.002, SigmaYM: 0.003}
	follows(t, sample(t, c, 20_000, func(truth *event.Truth, i, _ int) float64 { return truth.Vertex.Z[i] }),
		func(z float64) float64 { return (z - 0.975) / 0.05 })
	follows(t, sample(t, c, 20_000, func(truth *event.Truth, i, _ int) float64 { return truth.Vertex.Y[i] }),
		func(y float64) float64 { return 0.5 * math.Erfc(-y/0.003/math.Sqrt2) })
}

func TestValidateListsEveryFault(t *testing.T) {
	c := hall()
	c.Weighted = true
	c.Initial = FixedTarget{Beam: Beam{MassGeV: -1, Spectrum: Flat{2, 1}}}
	c.Channels[0].Products = make([]Product, 13)
	c.Channels[1].Bound = -1
	c.Channels[2].Products[1].Shape.L = 3
	c.Channels[2].Products[1].Decay.Branching = 1.5
	c.Channels[3].Angle = &Angle{Product: 2, SlopePerGeV2: math.NaN()}
	c.Channels[4].Energy.Kind = CurveRate
	c.Target.LengthM = -1
	c.Accidentals.RateHz = 1e12
	_, err := New(c)
	var list fault.List
	if !errors.As(err, &list) {
		t.Fatalf("got %v", err)
	}
	got := make([]string, 0, len(list))
	for _, f := range list {
		got = append(got, f.Field)
	}
	want := []string{
		"initial.beam.spectrum.max_gev", "initial.beam.mass_gev", "initial.target_mass_gev", "weighted",
		"channels[0].products", "channels[1].bound", "channels[2].products[1].shape.l", "channels[2].products[1].decay.branching",
		"channels[3].angle.product", "channels[3].angle.slope_per_gev2", "channels[4].energy.curve",
		"target.length_m", "accidentals.rate_hz",
	}
	if !slices.Equal(got, want) {
		t.Errorf("faults\n%v, want\n%v", got, want)
	}
	for name, product := range map[string]Product{
		"a decay that is closed": {Number: 221, MassGeV: 0.1, Decay: &Decay{Products: []Product{pion(1), pion(-1)}}},
		"a width wider than its room": {Number: 113, MassGeV: 0.3, WidthGeV: 0.1, Shape: LineShape{LowGeV: 0.5, HighGeV: 0.4},
			Decay: &Decay{Products: []Product{pion(1), pion(-1)}}},
	} {
		if _, err := New(at(3, proton(), product)); err == nil {
			t.Errorf("%s passes", name)
		}
	}
}

// digest enters every column of some events.
func digest(d *golden.Digest, truth *event.Truth) {
	for i := range truth.EventIDs {
		d.Int(truth.EventIDs[i], int64(truth.Channel[i]))
		d.Float(truth.Weight[i], truth.Vertex.Z[i])
	}
	for i, p := range truth.Momentum {
		d.Int(truth.Number[i], int64(truth.Parent[i]))
		d.Float(p.P.X, p.P.Y, p.P.Z, p.E, truth.Mass[i], truth.Origin.Z[i], truth.ProperTimeS[i])
	}
	d.Float(truth.BeamEnergyGeV...)
	d.Float(truth.BeamTimeNS...)
}

func TestGoldenGenerated(t *testing.T) {
	golden.Check(t, "generated", func(d *golden.Digest) {
		section := func(name string, c Config) {
			truth, _ := fill(t, generator(t, c), 0, 500)
			d.Section(name)
			digest(d, truth)
		}
		section("mixture", hall())
		weighted := at(2, proton(), rho(), pi0(), pi0())
		weighted.Weighted = true
		section("weighted", weighted)
		fermi := etaOn(FixedTarget{
			Beam: Beam{Spectrum: Bremsstrahlung{ElectronGeV: 3, LowGeV: 1, HighGeV: 2}}, TargetMassGeV: mProton,
			Motion: &FermiGas{FermiMomentumGeV: 0.1, NucleusMassGeV: 1.87561294500, SpectatorMassGeV: 0.93956542194, SpectatorNumber: 2112},
		})
		fermi.Channels[0].Energy.Kind = PhaseSpaceRate
		section("fermi_gas", fermi)
		angled := etaOn(CollidingBeams{First: Beam{Spectrum: Fixed{2}}, Second: Beam{Spectrum: Fixed{2}}, AngleRad: 2})
		angled.Channels[0].Angle = &Angle{Product: 1, SlopePerGeV2: 4}
		section("colliding_beams", angled)
		eta := Product{Number: 221, MassGeV: mEta, Decay: &Decay{
			Products: []Product{pion(1), pion(-1), pi0()}, Density: DalitzPolynomial{Terms: []DalitzTerm{{1, 0, 0}, {-1.1, 0, 1}}},
		}}
		section("densities", at(1.7, proton(), eta))
		section("nested_shapes", at(2.7, a1(), roper()))
		through := Config{
			Seed: 5, Initial: FixedTarget{Beam: Beam{Spectrum: Flat{0.4, 2}}, TargetMassGeV: mProton}, Weighted: true,
			Channels: []Channel{{Products: []Product{
				pi0(), broad(mRoper, wRoper, LineShape{}, proton(), pion(1), pion(-1)),
			}}},
		}
		section("through_the_width", through)
	})
}
