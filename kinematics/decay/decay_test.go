package decay

import (
	"errors"
	"math"
	"math/rand/v2"
	"testing"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/momentum/breakup"
)

func near(got, want, relative float64) bool {
	return math.Abs(got-want) <= relative*math.Abs(want)
}

// wantFault checks the kind and the field of a fault.
func wantFault(t *testing.T, err error, kind fault.Kind, field string) {
	t.Helper()
	var f *fault.Error
	if !errors.As(err, &f) {
		t.Fatalf("got error %v, want a fault", err)
	}
	if f.Kind != kind || f.Field != field {
		t.Errorf("got %v of %q, want %v of %q (%v)", f.Kind, f.Field, kind, field, err)
	}
}

func TestDescribeSpecialCases(t *testing.T) {
	describe := func(parent Parent, daughters ...float64) []Daughter {
		t.Helper()
		return must[Description](t)(Describe(parent, daughters...)).Daughters
	}
	t.Run("at rest", func(t *testing.T) {
		d := describe(Parent{Mass: 1}, 0.3, 0.2)[0]
		if d.Energy != d.RestEnergy || d.Energy.Min != d.Energy.Max || d.Angle.Max != math.Pi || d.TwoBranch {
			t.Errorf("got %+v", d)
		}
	})
	t.Run("massless, in flight", func(t *testing.T) {
		d := describe(Parent{Mass: 1, Value: 1e6}, 0, 0)[0] // E - p = m^2/(E + p)
		if !near(d.Energy.Min, 0.25e-6, 1e-12) || !near(d.Energy.Max, 1e6, 1e-12) || d.Angle.Max != math.Pi {
			t.Errorf("got %+v", d)
		}
	})
	t.Run("massless, three", func(t *testing.T) {
		d := describe(Parent{Mass: 1, Value: 2}, 0, 0, 0)[0]
		if d.RestMomentum != (breakup.Range{Max: 0.5}) || d.Energy.Min != 0 || d.Momentum.Min != 0 {
			t.Errorf("got %+v", d)
		}
	})
	t.Run("heavy daughter goes forward", func(t *testing.T) {
		d := describe(Parent{Mass: 1.115683, Value: 10}, 0.93827208943, 0.13957039)
		if !d[0].TwoBranch || !(d[0].Angle.Max < 0.1) || d[1].TwoBranch != (d[1].Angle.Max < math.Pi/2) {
			t.Errorf("got %+v", d)
		}
	})
	t.Run("at threshold all move with the parent", func(t *testing.T) {
		for _, d := range describe(Parent{Mass: 2, Value: 3}, 0.5, 1.5) {
			if d.Angle.Max != 0 || !near(d.Momentum.Max, 3*d.Mass/2, 1e-15) || !near(d.Momentum.Min, d.Momentum.Max, 1e-15) {
				t.Errorf("got %+v", d)
			}
		}
	})
	t.Run("one of three may come to rest", func(t *testing.T) {
		d := describe(Parent{Mass: 0.497611, Value: 0.3}, 0.13957039, 0.13957039, 0.1349768)[0]
		if d.Kinetic.Min != 0 || d.Energy.Min != 0.13957039 || d.Angle.Max != math.Pi {
			t.Errorf("got %+v", d)
		}
	})
}

func TestRefusals(t *testing.T) {
	fails := func(_ any, err error) error { return err }
	region := must[Dalitz](t)(NewDalitz(1, [3]float64{0.1, 0.2, 0.3}))
	pair := must[TwoBody](t)(NewTwoBody(Parent{Mass: 1}, 0.1, 0.2))
	photons := must[PhotonPair](t)(NewPhotonPair(Parent{Mass: 1}))
	flight := must[Flight](t)(NewFlight(Parent{Mass: 1, Value: 1}, 1e-8))
	for _, c := range []struct {
		name  string
		err   error
		kind  fault.Kind
		field string
	}{
		{"massless parent", fails(Describe(Parent{Value: 1}, 0, 0)), fault.Invalid, "parent.mass_gev"},
		{"parent energy", fails(Describe(Parent{Mass: 1, Given: breakup.ByTotal, Value: 0.5}, 0, 0)), fault.Invalid, "parent.total_energy_gev"},
		{"one daughter", fails(Describe(Parent{Mass: 1}, 0.5)), fault.Invalid, "daughters"},
		{"daughter mass", fails(Describe(Parent{Mass: 1}, 0.1, math.NaN())), fault.Invalid, "daughters[1].mass_gev"},
		{"closed", fails(Describe(Parent{Mass: 1}, 0.5, 0.6)), fault.BelowThreshold, "parent.mass_gev"},
		{"closed pair", fails(NewTwoBody(Parent{Mass: 1}, 0.5, 0.6)), fault.BelowThreshold, "parent.mass_gev"},
		{"closed table momentum", fails(LargestMomentum(1, 0.5, 0.6)), fault.BelowThreshold, "parent.mass_gev"},
		{"cosine", fails(pair.At(1.1)), fault.Invalid, "rest_frame_cosine"},
		{"daughter number", fails(pair.AtLabAngle(2, 0)), fault.Invalid, "daughter"},
		{"angle", fails(pair.AtLabAngle(0, -1)), fault.Invalid, "angle_rad"},
		{"closed region", fails(NewDalitz(1, [3]float64{0.5, 0.5, 0.1})), fault.BelowThreshold, "parent.mass_gev"},
		{"region without mass", fails(NewDalitz(0, [3]float64{})), fault.Invalid, "total_mass_gev"},
		{"negative excess", fails(NewDalitzAbove(-1, [3]float64{1, 1, 1})), fault.Invalid, "excess_energy_gev"},
		{"outside the region", fails(region.At(Couple01, 0.01)), fault.Outside, "mass_squared_gev2"},
		{"mass squared that is no number", fails(region.At(Couple01, math.NaN())), fault.Outside, "mass_squared_gev2"},
		{"couple", fails(region.At(3, 0.2)), fault.Invalid, "couple"},
		{"couple of a range", fails(region.MassSquaredRange(3)), fault.Invalid, "couple"},
		{"resolution", fails(region.Boundary(0)), fault.Invalid, "resolution"},
		{"opening angle", fails(photons.OpeningDensity(4)), fault.Invalid, "opening_angle_rad"},
		{"opening angle of a fraction", fails(photons.OpeningFraction(math.NaN())), fault.Invalid, "opening_angle_rad"},
		{"stable parent", fails(NewFlight(Parent{Mass: 1}, math.Inf(1))), fault.Invalid, "mean_life_s"},
		{"distance", fails(flight.Surviving(-1)), fault.Invalid, "distance_m"},
		{"distances in the wrong order", fails(flight.DecayingBetween(2, 1)), fault.Invalid, "to_m"},
		{"distance from", fails(flight.DecayingBetween(math.NaN(), 1)), fault.Invalid, "from_m"},
		{"massless daughter that decays", fails(Granddaughter(Parent{Mass: 1}, []float64{0, 0}, []float64{0, 0})), fault.Invalid, "parent.mass_gev"},
		{"closed second step", fails(Granddaughter(Parent{Mass: 1}, []float64{0.5, 0}, []float64{0.5, 0.1})), fault.BelowThreshold, "parent.mass_gev"},
	} {
		t.Run(c.name, func(t *testing.T) { wantFault(t, c.err, c.kind, c.field) })
	}
}

// TestOpeningAgainstScan compares the range of the opening angle with a scan of all
// directions, for equal, unequal and massless daughters, slow and fast parents.
func TestOpeningAgainstScan(t *testing.T) {
	for _, c := range []struct{ mass, p, m1, m2 float64 }{
		{0.1349768, 1, 0, 0}, {1.115683, 10, 0.93827208943, 0.13957039}, {1.115683, 0.2, 0.93827208943, 0.13957039},
		{0.497611, 0.4, 0.13957039, 0.13957039}, {0.497611, 50, 0.13957039, 0.13957039}, {1.019461, 0.2, 0.493677, 0.493677},
		{0.13957039, 5, 0.1056583755, 0}, {0.13957039, 0.03, 0.1056583755, 0}, {5, 3, 4.9, 0}, {2, 0, 0.5, 0.5},
	} {
		d := must[TwoBody](t)(NewTwoBody(Parent{Mass: c.mass, Value: c.p}, c.m1, c.m2))
		got := d.Opening()
		scan := breakup.Range{Min: math.Inf(1), Max: math.Inf(-1)}
		const steps = 20000
		for i := range steps + 1 {
			angle := must[Pair](t)(d.At(math.Max(-1, math.Min(1, -math.Cos(math.Pi*float64(i)/steps))))).Opening
			scan.Min, scan.Max = math.Min(scan.Min, angle), math.Max(scan.Max, angle)
		}
		// The scan stays inside, and comes near: the angle is flat at its extremes.
		if scan.Min < got.Min*(1-1e-14) || scan.Max > got.Max*(1+1e-14) || !near(scan.Min, got.Min, 1e-4) || !near(scan.Max, got.Max, 1e-4) {
			t.Errorf("%+v: got %+v, scan %+v", c, got, scan)
		}
	}
}

// TestPairLaws checks conservation and the way back from a laboratory angle.
func TestPairLaws(t *testing.T) {
	random := rand.New(rand.NewPCG(3, 9)) //nolint:gosec // seeded on purpose
	for range 300 {
		mass := 0.1 + random.Float64()
		m1 := mass * random.Float64()
		m2 := (mass - m1) * random.Float64()
		p := math.Exp(12*random.Float64() - 6)
		d := must[TwoBody](t)(NewTwoBody(Parent{Mass: mass, Value: p}, m1, m2))
		pair := must[Pair](t)(d.At(2*random.Float64() - 1))
		a, b := pair.Daughters[0], pair.Daughters[1]
		energy := math.Hypot(mass, p)
		along := a.Momentum*math.Cos(a.Angle) + b.Momentum*math.Cos(b.Angle)
		if !near(a.Energy+b.Energy, energy, 1e-14) || math.Abs(along-p) > 1e-14*energy || !near(a.RestAngle+b.RestAngle, math.Pi, 1e-14) {
			t.Errorf("not conserved: %+v", pair)
		}
		if math.Abs(pair.Opening-a.Angle-b.Angle) > 1e-14 {
			t.Errorf("opening angle %v, want %v", pair.Opening, a.Angle+b.Angle)
		}
		for i, one := range pair.Daughters {
			found := false
			for _, again := range must[[]Pair](t)(d.AtLabAngle(i, one.Angle)) {
				found = found || near(again.Daughters[i].Energy, one.Energy, 1e-9)
			}
			if !found {
				t.Errorf("daughter %d at %v does not lead back to %+v", i, one.Angle, one)
			}
		}
		limits := must[Description](t)(Describe(Parent{Mass: mass, Value: p}, m1, m2)).Daughters[0]
		if width := limits.Energy.Max - limits.Energy.Min; !near(d.BoxHeight()*width, 1, 1e-8) {
			t.Errorf("box of height %v over %v", d.BoxHeight(), width)
		}
	}
	still := must[TwoBody](t)(NewTwoBody(Parent{Mass: 1}, 0.1, 0.2))
	if !math.IsInf(still.BoxHeight(), 1) {
		t.Errorf("box at rest: %v", still.BoxHeight())
	}
}

// TestPhotonOpeningDistribution integrates the density and compares with the fraction
// and with the rest-frame cosine that leads to each angle.
func TestPhotonOpeningDistribution(t *testing.T) {
	for _, p := range []float64{0.01, 0.3, 20, 1e6} {
		parent := Parent{Mass: 0.1349768, Value: p}
		g := must[PhotonPair](t)(NewPhotonPair(parent))
		d := must[TwoBody](t)(NewTwoBody(parent, 0, 0))
		for _, cosine := range []float64{0.1, 0.5, 0.9, 0.999} {
			psi := must[Pair](t)(d.At(cosine)).Opening
			if got := must[float64](t)(g.OpeningFraction(psi)); !near(got, cosine, 1e-9) {
				t.Errorf("p %v: fraction at %v is %v, want %v", p, psi, got, cosine)
			}
			// The step keeps the rounding of psi below 1e-9 of the difference.
			step := 1e-4 * (psi - g.OpeningRange().Min)
			above, below := must[float64](t)(g.OpeningFraction(psi+step)), must[float64](t)(g.OpeningFraction(psi-step))
			if got := must[float64](t)(g.OpeningDensity(psi)); psi+step < math.Pi && !near(got, (above-below)/(2*step), 1e-5) {
				t.Errorf("p %v: density at %v is %v, difference quotient %v", p, psi, got, (above-below)/(2*step))
			}
		}
		least := g.OpeningRange().Min
		if v := must[float64](t)(g.OpeningDensity(least)); !math.IsInf(v, 1) {
			t.Errorf("density at the smallest angle: %v", v)
		}
		if v := must[float64](t)(g.OpeningDensity(least * 0.99)); v != 0 {
			t.Errorf("density below the smallest angle: %v", v)
		}
		if v := must[float64](t)(g.OpeningFraction(math.Pi)); v != 1 {
			t.Errorf("fraction at pi: %v", v)
		}
	}
	still := must[PhotonPair](t)(NewPhotonPair(Parent{Mass: 1}))
	if v := must[float64](t)(still.OpeningDensity(math.Pi)); !math.IsInf(v, 1) || still.OpeningRange().Min != math.Pi {
		t.Errorf("at rest: density %v, range %+v", v, still.OpeningRange())
	}
}

func TestFlight(t *testing.T) {
	f := must[Flight](t)(NewFlight(Parent{Mass: 0.13957039, Value: 200}, 2.6033e-8))
	if got := must[float64](t)(f.Surviving(f.MeanLength)); !near(got, math.Exp(-1), 1e-15) {
		t.Errorf("at the mean length: %v", got)
	}
	if got := must[float64](t)(f.DecayingBetween(0, math.Inf(1))); got != 1 {
		t.Errorf("all decay: %v", got)
	}
	// A millimetre out of eleven kilometres: x - x^2/2 with x = 1e-3/L = 9e-8.
	x := 1e-3 / f.MeanLength
	if got := must[float64](t)(f.DecayingBetween(0, 1e-3)); !near(got, x*(1-x/2), 1e-14) {
		t.Errorf("over a millimetre: %v, want %v", got, x*(1-x/2))
	}
	still := must[Flight](t)(NewFlight(Parent{Mass: 1}, 1))
	a, b := must[float64](t)(still.Surviving(0)), must[float64](t)(still.Surviving(1e-9))
	if a != 1 || b != 0 || still.MeanLength != 0 || still.MeanLife != 1 || still.AtRestLength != momentum.LightSpeed {
		t.Errorf("at rest: %+v, surviving %v and %v", still, a, b)
	}
}

// TestGranddaughterAgainstScan compares the limits of a granddaughter with a scan of both
// decay angles and, for more than two daughters, of the momenta.
func TestGranddaughterAgainstScan(t *testing.T) {
	for _, c := range []struct {
		name                     string
		parent                   Parent
		daughters, granddaughter []float64
	}{
		{"Sigma0 -> Lambda gamma, Lambda -> p pi-", Parent{Mass: 1.192642, Value: 2}, []float64{1.115683, 0}, []float64{0.93827208943, 0.13957039}},
		{"phi -> K K, K -> mu nu", Parent{Mass: 1.019461, Value: 0.5}, []float64{0.493677, 0.493677}, []float64{0.1056583755, 0}},
		{"eta -> pi0 pi0 pi0, pi0 -> gamma gamma", Parent{Mass: 0.547862, Value: 1}, []float64{0.1349768, 0.1349768, 0.1349768}, []float64{0, 0}},
		{"slow daughter, fast granddaughter", Parent{Mass: 1, Value: 0.2}, []float64{0.99, 0}, []float64{0.1, 0.1, 0.1}},
	} {
		t.Run(c.name, func(t *testing.T) {
			limits := must[breakup.Limits](t)(Granddaughter(c.parent, c.daughters, c.granddaughter))
			rest := scanChain(t, c.parent.Mass, c.daughters, c.granddaughter)
			reach(t, "rest-frame energy", rest, limits.RestEnergy)
			lab := breakup.Range{Min: math.Inf(1), Max: math.Inf(-1)}
			p := limits.RestMomentum
			for i := range 201 {
				q := p.Min + (p.Max-p.Min)*float64(i)/200
				e, energy := math.Hypot(q, c.granddaughter[0]), math.Hypot(c.parent.Mass, c.parent.Value)
				lab.Min = math.Min(lab.Min, (energy*e-c.parent.Value*q)/c.parent.Mass)
				lab.Max = math.Max(lab.Max, (energy*e+c.parent.Value*q)/c.parent.Mass)
			}
			reach(t, "laboratory energy", lab, limits.Energy)
		})
	}
}

// scanChain returns the range of the granddaughter's energy in the parent's rest frame.
func scanChain(t *testing.T, mass float64, daughters, granddaughters []float64) breakup.Range {
	t.Helper()
	out := breakup.Range{Min: math.Inf(1), Max: math.Inf(-1)}
	first := must[Description](t)(Describe(Parent{Mass: mass}, daughters...)).Daughters[0].RestMomentum
	second := must[Description](t)(Describe(Parent{Mass: daughters[0]}, granddaughters...)).Daughters[0].RestMomentum
	for i := range 401 {
		p := first.Min + (first.Max-first.Min)*float64(i)/400
		for k := range 401 {
			q := second.Min + (second.Max-second.Min)*float64(k)/400
			e, energy := math.Hypot(q, granddaughters[0]), math.Hypot(daughters[0], p)
			out.Min = math.Min(out.Min, (energy*e-p*q)/daughters[0])
			out.Max = math.Max(out.Max, (energy*e+p*q)/daughters[0])
		}
	}
	return out
}

// reach checks that a scan lies inside the limits and comes within 1e-4 of both.
func reach(t *testing.T, name string, scan, limits breakup.Range) {
	t.Helper()
	slack := 1e-12 * limits.Max
	if scan.Min < limits.Min-slack || scan.Max > limits.Max+slack {
		t.Errorf("%s: scan %+v outside %+v", name, scan, limits)
	}
	if open := 1e-4 * limits.Max; scan.Min > limits.Min+open || scan.Max < limits.Max-open {
		t.Errorf("%s: scan %+v far inside %+v", name, scan, limits)
	}
}

var descriptionSink Description

func BenchmarkDescribe(b *testing.B) {
	for name, daughters := range map[string][]float64{"2": {0.938, 0.14}, "3": {0.5, 0.14, 0.14}} {
		b.Run(name, func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				var err error
				if descriptionSink, err = Describe(Parent{Mass: 1.2, Value: 3}, daughters...); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
