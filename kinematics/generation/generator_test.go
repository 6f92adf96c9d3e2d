package generation

import (
	"errors"
	"math"
	"strings"
	"testing"
	"time"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/momentum"
)

// Masses and widths for the tests, in GeV and seconds.
const (
	mProton, mPion, mPi0, mEta, mOmega, wOmega = 0.93827208943, 0.13957039, 0.1349768, 0.547862, 0.78266, 0.00868
	mKaon, mLambda, tauLambda, mRho, wRho      = 0.493677, 1.115683, 2.617e-10, 0.77526, 0.1474
)

func proton() Product { return Product{Number: 2212, MassGeV: mProton} }
func gamma() Product  { return Product{Number: 22} }
func pion(sign int64) Product {
	return Product{Number: 211 * sign, MassGeV: mPion}
}
func pi0() Product {
	return Product{Number: 111, MassGeV: mPi0, Decay: &Decay{Products: []Product{gamma(), gamma()}}}
}
func omega() Product {
	return Product{
		Number: 223, MassGeV: mOmega, WidthGeV: wOmega, Shape: LineShape{L: 1},
		Decay: &Decay{Products: []Product{pi0(), gamma()}},
	}
}
func rho() Product {
	return Product{
		Number: 113, MassGeV: mRho, WidthGeV: wRho, Shape: LineShape{L: 1},
		Decay: &Decay{Products: []Product{pion(1), pion(-1)}},
	}
}
func lambda() Product {
	return Product{
		Number: 3122, MassGeV: mLambda, MeanLifeS: tauLambda,
		Decay: &Decay{Products: []Product{proton(), pion(-1)}, Branching: 0.641},
	}
}

// tagged is the photon beam of the invented hall on protons at rest.
func tagged() FixedTarget {
	b := Bremsstrahlung{ElectronGeV: 3, LowGeV: 1.2, HighGeV: 2.4, CompleteScreening: true}
	return FixedTarget{Beam: Beam{Spectrum: b.Channels(240)}, TargetMassGeV: mProton}
}

func hall() Config {
	return Config{
		Seed: 5, Initial: tagged(),
		Target:      Region{LengthM: 0.05},
		Accidentals: Accidentals{RateHz: 1e7, WindowNS: 20},
		Channels: []Channel{
			{Name: "p pi0", Fraction: 14, Products: []Product{proton(), pi0()}},
			{Name: "p pi0 pi0", Fraction: 22, Products: []Product{proton(), pi0(), pi0()}},
			{Name: "p omega", Fraction: 6, Products: []Product{proton(), omega()}},
			{Name: "K+ Lambda", Fraction: 3, Products: []Product{{Number: 321, MassGeV: mKaon}, lambda()}},
			{Name: "p pi+ pi- pi0", Fraction: 10, Products: []Product{proton(), pion(1), pion(-1), pi0()}},
		},
	}
}

func generator(t testing.TB, c Config) *Generator {
	t.Helper()
	g, err := New(c)
	if err != nil {
		t.Fatal(err)
	}
	return g
}

func fill(t testing.TB, g *Generator, first int64, n int) (*event.Truth, Stats) {
	t.Helper()
	truth := &event.Truth{}
	stats, err := g.Fill(first, n, truth)
	if err != nil {
		t.Fatal(err)
	}
	return truth, stats
}

// Every event conserves four-momentum, at the top and at every decay, and every
// particle is on its shell.
func TestEventsConserve(t *testing.T) {
	truth, stats := fill(t, generator(t, hall()), 0, 20_000)
	worstSum, worstShell := conservation(t, truth)
	t.Logf("%d attempts, worst imbalance %.1f x 2^-52 of the energy, worst distance from the shell %.1f x 2^-52 of E^2",
		stats.Attempts, worstSum*0x1p52, worstShell*0x1p52)
	if worstSum > 16*0x1p-52 || worstShell > 4*0x1p-52 {
		t.Error("too much")
	}
	if stats.Empty != 0 || stats.Overflows != 0 || stats.Exhausted != 0 || stats.SumWeights != 20_000 {
		t.Errorf("stats %+v", stats)
	}
}

func conservation(t *testing.T, truth *event.Truth) (worstSum, worstShell float64) {
	t.Helper()
	for i := range truth.EventIDs {
		first, end := truth.Particles(i)
		if first == end {
			continue
		}
		top := momentum.Four{}
		daughters := make([]momentum.Four, end-first)
		for row := first; row < end; row++ {
			p, m := truth.Momentum[row], truth.Mass[row]
			square := p.E*p.E - p.P.X*p.P.X - p.P.Y*p.P.Y - p.P.Z*p.P.Z
			worstShell = math.Max(worstShell, math.Abs(square-m*m)/(p.E*p.E))
			if parent := truth.Parent[row]; parent < 0 {
				top = top.Add(p)
			} else {
				daughters[parent] = daughters[parent].Add(p)
			}
		}
		worstSum = math.Max(worstSum, distance(top, truth.Initial[i]))
		for row := first; row < end; row++ {
			if truth.Decayed[row] {
				worstSum = math.Max(worstSum, distance(daughters[row-first], truth.Momentum[row]))
			}
		}
	}
	return worstSum, worstShell
}

// distance is the largest difference of two four-momenta over the energy.
func distance(a, b momentum.Four) float64 {
	d := a.Sub(b)
	return max(math.Abs(d.P.X), math.Abs(d.P.Y), math.Abs(d.P.Z), math.Abs(d.E)) / b.E
}

func TestMixtureFractions(t *testing.T) {
	const n = 20_000
	truth, _ := fill(t, generator(t, hall()), 0, n)
	want := []float64{14. / 55, 22. / 55, 6. / 55, 3. / 55, 10. / 55}
	got := make([]float64, len(want))
	for _, c := range truth.Channel {
		got[c]++
	}
	for i, f := range want {
		spread := math.Sqrt(n * f * (1 - f))
		if d := (got[i] - n*f) / spread; math.Abs(d) > 5 {
			t.Errorf("channel %d: %v events, want %v: %.1f standard deviations", i, got[i], n*f, d)
		}
	}
	candidates := float64(len(truth.BeamEnergyGeV) - n)
	if d := (candidates - 0.2*n) / math.Sqrt(0.2*n); math.Abs(d) > 5 {
		t.Errorf("%v accidental candidates, want %v", candidates, 0.2*n)
	}
}

func TestAnyPartitionIsTheSame(t *testing.T) {
	g := generator(t, hall())
	whole, _ := fill(t, g, 100, 300)
	row, beam := 0, 0
	for _, size := range []int{1, 7, 0, 64, 128, 100} {
		part, _ := fill(t, g, 100+int64(partDone(whole, row)), size)
		for i, p := range part.Momentum {
			if p != whole.Momentum[row+i] || part.Origin.Z[i] != whole.Origin.Z[row+i] || part.ProperTimeS[i] != whole.ProperTimeS[row+i] {
				t.Fatalf("a slice of %d differs in row %d", size, i)
			}
		}
		for i, e := range part.BeamEnergyGeV {
			if e != whole.BeamEnergyGeV[beam+i] || part.BeamTimeNS[i] != whole.BeamTimeNS[beam+i] {
				t.Fatalf("a slice of %d differs in beam row %d", size, i)
			}
		}
		row += len(part.Momentum)
		beam += len(part.BeamEnergyGeV)
	}
	if row != len(whole.Momentum) || beam != len(whole.BeamEnergyGeV) {
		t.Errorf("the slices hold %d rows of %d", row, len(whole.Momentum))
	}
}

// partDone is the number of events whose rows end at or before a row.
func partDone(truth *event.Truth, row int) int {
	n := 0
	for n < truth.Events() && int(truth.Offsets[n+1]) <= row {
		n++
	}
	return n
}

func TestClosedAndEmpty(t *testing.T) {
	c := hall()
	c.Channels = []Channel{{Name: "p 8 eta", Products: []Product{proton(), {Number: 221, MassGeV: 8 * mEta}}}}
	_, err := New(c)
	if !errors.Is(err, fault.BelowThreshold) {
		t.Errorf("a closed channel gives %v", err)
	}
	if err == nil || strings.Contains(err.Error(), "min_gev") {
		t.Errorf("a limit that nobody gave: %v", err)
	}
	// Of a channel that the caller's own limit closes the fault names the limit.
	limit := Product{Number: 113, MassGeV: 0.775, WidthGeV: 0.15, Shape: LineShape{LowGeV: 5}, Decay: &Decay{Products: []Product{pion(1), pion(-1)}}}
	limit.Shape.HighGeV = 6
	c.Channels = []Channel{{Name: "p rho0", Products: []Product{proton(), limit}}}
	if _, err := New(c); !errors.Is(err, fault.BelowThreshold) || !strings.Contains(err.Error(), "min_gev = 5 of the line shape of particle 113") {
		t.Errorf("a channel closed by a limit gives %v", err)
	}
	g := generator(t, hall())
	truth, stats := fill(t, g, 0, 0)
	if truth.Events() != 0 || stats.Events != 0 || len(truth.Offsets) != 1 {
		t.Error("zero events are not nothing")
	}
	for _, count := range []int{-1, 2} {
		if _, err := g.Fill(math.MaxInt64, count, truth); !errors.Is(err, fault.Invalid) {
			t.Errorf("%d events from the last one: %v", count, err)
		}
	}
	if _, err := g.Fill(math.MaxInt64, 1, truth); err != nil {
		t.Errorf("the last event of all: %v", err)
	}
}

// Filling kept memory allocates the same for few events as for many.
func TestNoAllocationPerEvent(t *testing.T) {
	g := generator(t, hall())
	truth, _ := fill(t, g, 0, 2000)
	allocations := func(n int) float64 {
		return testing.AllocsPerRun(5, func() {
			if _, err := g.Fill(0, n, truth); err != nil {
				t.Error(err)
			}
		})
	}
	if few, many := allocations(1), allocations(1000); few != many {
		t.Errorf("%v allocations for an event, %v for a thousand", few, many)
	}
}

func BenchmarkMixture(b *testing.B) {
	g := generator(b, hall())
	truth := &event.Truth{}
	b.ReportAllocs()
	n := 0
	for b.Loop() {
		if _, err := g.Fill(int64(n), 1000, truth); err != nil {
			b.Fatal(err)
		}
		n += 1000
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(n), "ns/event")
}

// TestAttemptsAreShared holds that the loops of one event share its attempts: decays that
// are never accepted, one inside the other, take no more than one loop.
func TestAttemptsAreShared(t *testing.T) {
	// Positive within a ten-millionth of the plot around X = 0, Y = 0.2, a point of the grid of its bound.
	const sharp = 1e7
	never := DalitzPolynomial{Terms: []DalitzTerm{{1 - 0.04*sharp, 0, 0}, {-sharp, 2, 0}, {-sharp, 0, 2}, {0.4 * sharp, 0, 1}}}
	broad := Product{
		Number: 113, MassGeV: 0.775, WidthGeV: 0.15,
		Decay: &Decay{Products: []Product{{Number: 211, MassGeV: 0.1396}, {Number: -211, MassGeV: 0.1396}}},
	}
	c := Config{
		Seed: 3, Initial: Total{SqrtSGeV: 6},
		Channels: []Channel{{Products: []Product{
			{Number: 2212, MassGeV: 0.938},
			{Number: 9, MassGeV: 3, Decay: &Decay{Products: []Product{broad, broad, broad}, Density: never}},
		}}},
	}
	g := generator(t, c)
	began := time.Now()
	_, stats := fill(t, g, 0, 3)
	if took := time.Since(began); took > 5*time.Second {
		t.Errorf("three events took %v", took)
	}
	if stats.Exhausted == 0 || stats.Empty != stats.Exhausted {
		t.Errorf("stats %+v", stats)
	}
}
