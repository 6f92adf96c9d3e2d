package generation

import (
	"math"
	"testing"

	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/num/random"
)

// mean returns the mean of f over n draws with its standard error.
func mean(n int, f func() float64) (value, spread float64) {
	sum, square := 0.0, 0.0
	for range n {
		x := f()
		sum += x
		square += x * x
	}
	value = sum / float64(n)
	return value, math.Sqrt((square/float64(n) - value*value) / float64(n))
}

func phaseSpace(t testing.TB, masses ...float64) *PhaseSpace {
	t.Helper()
	ps, err := NewPhaseSpace(masses)
	if err != nil {
		t.Fatal(err)
	}
	return ps
}

// knownVolumes are those of testdata/reference/checks.json.
var knownVolumes = []struct {
	id     string
	m      float64
	masses []float64
	volume float64
}{
	{"PS-008", 1, []float64{0.1, 0.2}, 1.49093314780889850431},
	{"PS-002", 1, make([]float64, 3), 1.23370055013616982735},
	{"PS-004", 1, make([]float64, 5), 0.0422782513168413356061},
	{"PS-006", 1, make([]float64, 8), 6.50243629905373347317e-6},
	{"PS-010", 0.493677, []float64{0.13957039, 0.13957039, 0.13957039}, 0.0154700324583207731937},
	{"PS-012", 0.547862, []float64{0.13957039, 0.13957039, 0.1349768}, 0.0466485210711480680234},
	{"PS-014", 2, []float64{0.1, 0.5, 1}, 0.305601201148934128978},
	{"PS-016", 1.86484, []float64{0.493677, 0.13957039, 0.13957039, 0.13957039}, 0.8015233689463},
	{"PS-018", 1, []float64{0.05, 0.1, 0.2, 0.3}, 0.01968610312803},
}

// The mean weight is the known volume within five standard errors.
func TestVolumes(t *testing.T) {
	const draws = 400_000
	worst := 0.0
	for i, k := range knownVolumes {
		t.Run(k.id, func(t *testing.T) {
			ps := phaseSpace(t, k.masses...)
			s := random.New(11, random.Generation, int64(i))
			ceiling := ps.ceiling(k.m)
			got, spread := mean(draws, func() float64 {
				w := ps.drawMasses(&s, k.m)
				if w > ceiling*(1+8*0x1p-52) {
					t.Fatalf("weight %v above its bound %v", w, ceiling)
				}
				return w
			})
			d := (got - k.volume) / (spread + 1e-15*k.volume)
			worst = math.Max(worst, math.Abs(d))
			if math.Abs(got-k.volume) > 5*spread+1e-14*k.volume {
				t.Errorf("mean weight %v, volume %v: %.1f standard errors", got, k.volume, d)
			}
		})
	}
	t.Logf("worst of %d volumes: %.1f standard errors of %d draws", len(knownVolumes), worst, draws)
}

// Massless volumes have a closed form for every n:
// (pi/2)^(n-1) s^(n-2)/((n-1)!(n-2)!), R. Kleiss, W. J. Stirling and S. D.
// Ellis, Comput. Phys. Commun. 40 (1986) 359.
func TestMasslessVolumes(t *testing.T) {
	for n := 2; n <= MaxBodies; n++ {
		volume := 1.0
		for k := 1; k < n; k++ {
			volume *= math.Pi / 2 / float64(k)
			if k > 1 {
				volume *= 4 / float64(k-1)
			}
		}
		ps := phaseSpace(t, make([]float64, n)...)
		s := random.New(12, random.Generation, int64(n))
		got, spread := mean(300_000, func() float64 { return ps.drawMasses(&s, 2) })
		if d := math.Abs(got - volume); d > 5*spread+1e-14*volume {
			t.Errorf("n = %d: mean weight %v, volume %v, standard error %v", n, got, volume, spread)
		}
	}
}

// Volumes of many massive particles within five standard errors, which must be below 0.35 %. The
// values are printed by testdata/reference/phase_space_volumes.py, which inverts an integral
// transform in place of splitting the particles.
func TestMassiveVolumes(t *testing.T) {
	const pion, eta, nucleon = 0.13957039, 0.547862, 0.938272089
	pions := func(n int, others ...float64) []float64 {
		for range n {
			others = append(others, pion)
		}
		return others
	}
	for _, k := range []struct {
		m      float64
		masses []float64
		volume float64
	}{
		{1, []float64{0.1, 0.1, 0.1, 0.05, 0.05}, 0.0095458985082},
		{2, pions(5, nucleon), 4.96756545236e-5},
		{2.5, pions(6, nucleon), 0.00041940394283},
		{4, pions(5, nucleon, eta, eta), 0.0146706784749},
		{4, pions(8, nucleon), 0.133394411326},
		{2.6, pions(9, nucleon), 2.71832681595e-11},
		{5, pions(8, nucleon, nucleon, nucleon), 1.50756753078e-6},
		{4.4, pions(11, nucleon), 0.000459224042540},
	} {
		ps := phaseSpace(t, k.masses...)
		s := random.New(14, random.Generation, int64(len(k.masses)))
		got, spread := mean(1_000_000, func() float64 { return ps.drawMasses(&s, k.m) })
		if d := math.Abs(got - k.volume); d > 5*spread || spread > 0.0035*k.volume {
			t.Errorf("n = %d: mean weight %v, volume %v, standard error %v", len(k.masses), got, k.volume, spread)
		}
	}
}

func TestSampledMoments(t *testing.T) {
	const draws = 400_000
	type moment struct {
		id     string
		m      float64
		masses []float64
		want   float64
		of     func([]momentum.Four) float64
	}
	energy := func(p []momentum.Four) float64 { return 2 * p[0].E }
	lastEnergy := func(p []momentum.Four) float64 { return 2 * p[len(p)-1].E }
	pair := func(p []momentum.Four) float64 {
		q := p[0].Add(p[1])
		return q.Dot(q)
	}
	cases := []moment{
		{"GM-001", 1, make([]float64, 3), 2.0 / 3, energy}, {"GM-001, last", 1, make([]float64, 3), 2.0 / 3, lastEnergy},
		{"GM-003", 1, make([]float64, 4), 0.5, energy}, {"GM-003, last", 1, make([]float64, 4), 0.5, lastEnergy},
		{"GM-005", 1, make([]float64, 5), 0.4, energy},
		{"GM-007", 1, make([]float64, 8), 0.25, energy},
		{"GM-009", 1, make([]float64, 3), 1.0 / 3, pair},
		{"GM-011", 1.86966, []float64{0.493677, 0.13957039, 0.13957039}, 1.4782679647640757923, pair},
	}
	for i, c := range cases {
		t.Run(c.id, func(t *testing.T) {
			ps := phaseSpace(t, c.masses...)
			s := random.New(13, random.Generation, int64(i))
			out := make([]momentum.Four, ps.n)
			weights, products, squares, crossed, both := 0.0, 0.0, 0.0, 0.0, 0.0
			for range draws {
				w := ps.Draw(&s, momentum.Four{E: c.m}, c.m, out)
				x := c.of(out)
				weights += w
				products += w * x
				squares += w * w
				crossed += w * w * x
				both += w * w * x * x
			}
			got := products / weights
			// Error of a ratio of means: sum of (w (x - mean))^2.
			spread := math.Sqrt(both-2*got*crossed+got*got*squares) / weights
			if d := (got - c.want) / spread; math.Abs(d) > 5 {
				t.Errorf("mean %v, want %v: %.1f standard errors", got, c.want, d)
			}
		})
	}
}

func TestConservationAndShell(t *testing.T) {
	sets := [][]float64{
		{0, 0}, {0.938, 0.135}, {0, 0, 0}, {0.938, 0.14, 0.14}, {0.493677, 0.13957039, 0.13957039, 0.13957039},
		{0, 0, 0, 0, 0, 1}, {0.1, 0.2, 0.3, 0.4, 0.5, 0.6, 0.7, 0.8}, make([]float64, MaxBodies),
		{1e-9, 1e-3, 1, 0.5, 0, 0, 0.1, 0.1, 0.1, 0.1, 0.1, 0.1},
	}
	worstSum, worstShell := 0.0, 0.0
	for i, masses := range sets {
		ps := phaseSpace(t, masses...)
		out := make([]momentum.Four, ps.n)
		for _, pz := range []float64{0, 1.7, 1e3, 1e6} {
			for _, excess := range []float64{1e-9, 0.3, 20} {
				m := ps.sum[ps.n-1] + excess
				total := momentum.WithMass(momentum.Three{X: 0.1 * pz, Z: pz}, m)
				s := random.New(14, random.Generation, int64(i))
				for range 400 {
					ps.Draw(&s, total, m, out)
					sum := momentum.Four{}
					for k, p := range out {
						sum = sum.Add(p)
						square := p.E*p.E - p.P.X*p.P.X - p.P.Y*p.P.Y - p.P.Z*p.P.Z
						worstShell = math.Max(worstShell, math.Abs(square-masses[k]*masses[k])/(p.E*p.E))
					}
					d := sum.Sub(total)
					for _, x := range []float64{d.P.X, d.P.Y, d.P.Z, d.E} {
						worstSum = math.Max(worstSum, math.Abs(x)/total.E)
					}
				}
			}
		}
	}
	t.Logf("worst imbalance %.1f x 2^-52 of the energy, worst distance from the shell %.1f x 2^-52 of E^2",
		worstSum*0x1p52, worstShell*0x1p52)
	if worstSum > 16*0x1p-52 || worstShell > 4*0x1p-52 {
		t.Errorf("imbalance %v or distance from the shell %v too large", worstSum, worstShell)
	}
}

func TestPhaseSpaceFaults(t *testing.T) {
	for _, masses := range [][]float64{nil, {1}, make([]float64, 13), {1, -1}, {1, math.NaN()}, {math.Inf(1), 0}} {
		if _, err := NewPhaseSpace(masses); err == nil {
			t.Errorf("masses %v pass", masses)
		}
	}
	ps := phaseSpace(t, 1, 1, 1)
	s := random.New(1, random.Generation, 0)
	for _, m := range []float64{2.9, 3, math.NaN(), -1} {
		if w := ps.Draw(&s, momentum.Four{E: m}, m, make([]momentum.Four, 3)); w != 0 {
			t.Errorf("a total of mass %v has the weight %v", m, w)
		}
	}
}

var sinkWeight float64

func BenchmarkPhaseSpace(b *testing.B) {
	for _, n := range []int{2, 3, 4, 6, 8, 12} {
		b.Run("n="+string(rune('0'+n/10))+string(rune('0'+n%10)), func(b *testing.B) {
			masses := make([]float64, n)
			for i := range masses {
				masses[i] = 0.13957039
			}
			ps := phaseSpace(b, masses...)
			out := make([]momentum.Four, n)
			m := 0.5 + 0.14*float64(n)
			event := int64(0)
			s := random.New(1, random.Generation, 0)
			b.ReportAllocs()
			for b.Loop() {
				s.Start(event)
				event++
				sinkWeight += ps.Draw(&s, momentum.Four{E: m}, m, out)
			}
		})
	}
}
