package reaction

import (
	"math"
	"math/rand/v2"
	"testing"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/momentum/breakup"
)

// breakUp returns a random final state of a body at rest of mass w: one product and the
// rest at a random mass of theirs, again and again. All final states can come out, the
// edges with a fair share.
func breakUp(t *testing.T, random *rand.Rand, w float64, masses []float64) []momentum.Four {
	t.Helper()
	rest := masses[1:]
	m := rest[0]
	if len(rest) > 1 {
		sum := 0.0
		for _, x := range rest {
			sum += x
		}
		m = sum + (w-masses[0]-sum)*[]float64{1e-6, 1 - 1e-6, random.Float64()}[random.IntN(3)]
	}
	pair, err := momentum.TwoBodyMomentum(w, masses[0], m)
	if err != nil {
		t.Fatal(err)
	}
	cosine := []float64{-1, 1, 2*random.Float64() - 1}[random.IntN(3)]
	phi := 2 * math.Pi * random.Float64()
	sine := math.Sqrt(1 - cosine*cosine)
	p := momentum.Three{X: pair.P * sine * math.Cos(phi), Y: pair.P * sine * math.Sin(phi), Z: pair.P * cosine}
	out := []momentum.Four{momentum.WithMass(p, masses[0])}
	if len(rest) == 1 {
		return append(out, momentum.WithMass(p.Neg(), m))
	}
	boost, err := momentum.NewBoost(p.Neg(), m)
	if err != nil {
		t.Fatal(err)
	}
	for _, four := range breakUp(t, random, m, rest) {
		out = append(out, boost.FromRest(four))
	}
	return out
}

// seen is a range that grows with what it is shown.
type seen struct{ low, high float64 }

func (s *seen) show(x float64) { s.low, s.high = math.Min(s.low, x), math.Max(s.high, x) }

func nothing() seen { return seen{math.Inf(1), math.Inf(-1)} }

// holds checks that what was seen lies inside a range and fills it but for a share of
// its width on either side.
func (s seen) holds(t *testing.T, name string, r breakup.Range, unit, share float64) {
	t.Helper()
	slack := 1e-5*unit + 1e-9
	if s.low < r.Min-slack || s.high > r.Max+slack {
		t.Errorf("%s: seen %v outside %v", name, s, r)
	}
	if open := share*(r.Max-r.Min) + slack; s.low > r.Min+open || s.high < r.Max-open {
		t.Errorf("%s: seen %v far inside %v", name, s, r)
	}
}

// TestRangesHoldAndAreReached compares all ranges of many-body final states with what
// 30,000 random events reach.
func TestRangesHoldAndAreReached(t *testing.T) {
	const mp, mpi, mk = 0.93827208943, 0.13957039, 0.493677
	for _, c := range []struct {
		name   string
		beam   Body
		target float64
		masses []float64
	}{
		{"gamma p -> pi+ pi- p", Body{Value: 2}, mp, []float64{mpi, mpi, mp}},
		{"gamma p -> gamma gamma p", Body{Value: 1}, mp, []float64{0, 0, mp}},
		{"K p -> pi pi Lambda", Body{Mass: mk, Value: 3}, mp, []float64{mpi, mpi, 1.115683}},
		{"heavy beam on light target", Body{Mass: 3.7, Value: 20}, mp, []float64{3.7, mp, mpi}},
		{"four bodies", Body{Mass: mp, Value: 5}, mp, []float64{mp, mp, mpi, mpi}},
		{"two bodies", Body{Mass: mpi, Value: 2}, mp, []float64{mk, 1.115683}},
	} {
		t.Run(c.name, func(t *testing.T) {
			collision := collisionOf(t)(OnTarget(c.beam, c.target))
			f, err := collision.FinalState(c.masses...)
			if err != nil {
				t.Fatal(err)
			}
			compareWithEvents(t, &f, collision.CentreOfMass())
		})
	}
}

func compareWithEvents(t *testing.T, f *FinalState, total CentreOfMass) {
	t.Helper()
	random := rand.New(rand.NewPCG(5, 5)) //nolint:gosec // seeded on purpose
	initial := [2]momentum.Four{
		momentum.WithMass(momentum.Three{Z: total.InitialMomentum}, f.collision.mass[0]),
		momentum.WithMass(momentum.Three{Z: -total.InitialMomentum}, f.collision.mass[1]),
	}
	boost, err := momentum.BoostOfBeta(momentum.Three{Z: total.Beta})
	if err != nil {
		t.Fatal(err)
	}
	n := len(f.masses)
	energy, kinetic, angle, rest := make([]seen, n), make([]seen, n), make([]seen, n), make([]seen, n)
	for i := range n {
		energy[i], kinetic[i], angle[i], rest[i] = nothing(), nothing(), nothing(), nothing()
	}
	sets := f.Subsets()
	for i := range n {
		sets = append(sets, SubsetOf(i))
	}
	masses := make([]seen, len(sets))
	transfers := make([][2]seen, len(sets))
	for k := range sets {
		masses[k], transfers[k] = nothing(), [2]seen{nothing(), nothing()}
	}
	for range 30000 {
		// Any product may come first, so that all edges are met.
		order := random.Perm(n)
		shuffled := make([]float64, n)
		for i, k := range order {
			shuffled[i] = f.masses[k]
		}
		event := make([]momentum.Four, n)
		for i, four := range breakUp(t, random, total.SqrtS, shuffled) {
			event[order[i]] = four
		}
		for i, four := range event {
			lab := boost.FromRest(four)
			energy[i].show(lab.E)
			kinetic[i].show(lab.E - f.masses[i])
			rest[i].show(four.P.Norm())
			if lab.P.Norm() > 1e-7 {
				angle[i].show(math.Atan2(math.Hypot(lab.P.X, lab.P.Y), lab.P.Z))
			}
		}
		for k, s := range sets {
			var sum momentum.Four
			for i := range n {
				if s.Has(i) {
					sum = sum.Add(event[i])
				}
			}
			masses[k].show(math.Sqrt(math.Max(0, sum.Dot(sum))))
			for side, p := range initial {
				transfers[k][side].show(p.Sub(sum).Dot(p.Sub(sum)))
			}
		}
	}
	for i, limits := range f.Limits() {
		energy[i].holds(t, "energy", limits.Energy, total.Energy, 0.02)
		kinetic[i].holds(t, "kinetic energy", limits.Kinetic, total.Energy, 0.02)
		angle[i].holds(t, "angle", limits.Angle, 1, 0.1)
		rest[i].holds(t, "rest-frame momentum", limits.RestMomentum, total.SqrtS, 0.02)
	}
	for k, s := range sets {
		r, err := f.SubsetMass(s)
		if err != nil {
			t.Fatal(err)
		}
		// The root of a square that is zero but for its rounding is 1e-8 of its terms.
		masses[k].holds(t, "subset mass", r, total.SqrtS, 0.02)
		for side, from := range [...]Initial{FromBeam, FromTarget} {
			ends, err := f.Transfer(from, s)
			if err != nil {
				t.Fatal(err)
			}
			transfers[k][side].holds(t, "t", breakup.Range{Min: ends.Backward, Max: ends.Forward}, total.S, 0.02)
		}
	}
}

func TestTwoBodyRangesAgree(t *testing.T) {
	c := collisionOf(t)(OnTarget(Body{Mass: 3.7, Value: 2}, 0.938))
	f, err := c.FinalState(3.7, 0.938)
	if err != nil {
		t.Fatal(err)
	}
	r := productsOf(t, c, 3.7, 0.938)
	limits := r.Limits()
	for i, l := range f.Limits() {
		if l != limits.Products[i] {
			t.Errorf("product %d: %+v and %+v", i, l, limits.Products[i])
		}
		ends, err := f.Transfer(FromBeam, SubsetOf(i))
		if err != nil || ends != limits.Transfer[i] {
			t.Errorf("t of product %d: %+v and %+v (%v)", i, ends, limits.Transfer[i], err)
		}
	}
}

func TestSubsets(t *testing.T) {
	c := collisionOf(t)(AtMass(0, 1, 10))
	f, err := c.FinalState(1, 1, 1, 1, 1, 1, 1, 1)
	if err != nil {
		t.Fatal(err)
	}
	sets := f.Subsets()
	if len(sets) != 1<<8-8-2 || sets[0] != SubsetOf(0, 1) || sets[1] != SubsetOf(0, 2) || sets[len(sets)-1] != SubsetOf(1, 2, 3, 4, 5, 6, 7) {
		t.Errorf("%d sets, first %b %b, last %b", len(sets), sets[0], sets[1], sets[len(sets)-1])
	}
	for _, s := range []Subset{0, 1<<8 - 1, 1 << 9} {
		_, err := f.SubsetMass(s)
		wantFault(t, err, fault.Invalid, "products")
		_, err = f.Transfer(FromBeam, s)
		wantFault(t, err, fault.Invalid, "products")
	}
	_, err = f.Transfer(7, 1)
	wantFault(t, err, fault.Invalid, "initial")
	_, err = c.FinalState(1)
	wantFault(t, err, fault.Invalid, "products")
	_, err = c.FinalState(1, -1)
	wantFault(t, err, fault.Invalid, "products[1].mass_gev")
	_, err = c.FinalState(5, 5, 1)
	wantFault(t, err, fault.BelowThreshold, "sqrt_s_gev")
}

// TestTiltedCone holds the angles from z of a collision whose total momentum is tilted.
func TestTiltedCone(t *testing.T) {
	beam := Body{Mass: 0.1, Value: 5}
	c := collisionOf(t)(CollideAtAngle(beam, beam, 1))
	tilt := c.CentreOfMass().Tilt
	if !near(tilt, math.Pi/2, 1e-15) {
		t.Fatalf("equal beams: the total momentum is along x, got a tilt of %v", tilt)
	}
	f, err := c.FinalState(1.2, 1.3, 1.4)
	if err != nil {
		t.Fatal(err)
	}
	for _, l := range f.Limits() {
		opening := l.Angle.Max - math.Pi/2
		if opening <= 0 || opening >= math.Pi/2 || !near(l.Angle.Min, math.Pi/2-opening, 1e-14) {
			t.Errorf("cone %+v", l.Angle)
		}
	}
}

var limitsSink []breakup.Limits

func BenchmarkRanges(b *testing.B) {
	c, err := OnTarget(Body{Value: 9}, 0.938)
	if err != nil {
		b.Fatal(err)
	}
	for name, masses := range map[string][]float64{
		"3": {0.938, 0.14, 0.14}, "8": {0.938, 0.14, 0.14, 0.14, 0.14, 0.14, 0.14, 0.14},
	} {
		b.Run(name, func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				f, err := c.FinalState(masses...)
				if err != nil {
					b.Fatal(err)
				}
				limitsSink = f.Limits()
			}
		})
		b.Run("Subsets"+name, func(b *testing.B) {
			f, err := c.FinalState(masses...)
			if err != nil {
				b.Fatal(err)
			}
			b.ReportAllocs()
			for b.Loop() {
				for _, s := range f.Subsets() {
					if _, err := f.SubsetMass(s); err != nil {
						b.Fatal(err)
					}
				}
			}
		})
	}
}
