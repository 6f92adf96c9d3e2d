package selection_test

import (
	"math"
	"slices"
	"strconv"
	"strings"
	"testing"

	"example.org/kinegate/kinematics/constraint"
	"example.org/kinegate/kinematics/detector"
	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/generation"
	"example.org/kinegate/kinematics/reaction"
	"example.org/kinegate/kinematics/selection"
)

// sample is simulated events, what was measured of them, and what made each object.
type sample struct {
	truth  event.Truth
	block  event.Block
	labels detector.Labels
}

// fineHall is an invented detector whose resolutions are a tenth of common ones times a
// factor, so that the constraints are nearly linear over the errors.
func fineHall(factor float64) detector.Config {
	everywhere := detector.Polar{MinRad: 0.02, MaxRad: math.Pi - 0.02}
	return detector.Config{
		Seed: 31,
		Calorimeter: &detector.Calorimeter{
			Theta: everywhere, RadiusM: 1, Stochastic: 0.0025 * factor, Constant: 0.001 * factor,
			ThetaSigmaRad: 0.001 * factor, PhiSigmaRad: 0.001 * factor, ThresholdGeV: 0.001, Efficiency: 1,
		},
		Tagger: &detector.Tagger{SigmaGeV: 0.001 * factor, TimeSigmaNS: 1},
	}
}

// simulate makes events of a reaction of photons of 1.4 to 2 GeV on protons at rest.
func simulate(t testing.TB, text string, config detector.Config, beam generation.Spectrum, events int) *sample {
	t.Helper()
	r, err := reaction.Parse(standard(t), text)
	if err != nil {
		t.Fatal(err)
	}
	products, _, err := generation.ProductsOf(r, 1)
	if err != nil {
		t.Fatal(err)
	}
	generator, err := generation.New(generation.Config{
		Seed: 8,
		Initial: generation.FixedTarget{
			Beam: generation.Beam{Spectrum: beam}, TargetMassGeV: r.Initial[1].Mass,
		},
		Channels: []generation.Channel{{Name: "only", Fraction: 1, Products: products}},
	})
	if err != nil {
		t.Fatal(err)
	}
	d, err := detector.New(config)
	if err != nil {
		t.Fatal(err)
	}
	s := &sample{}
	if _, err := generator.Fill(0, events, &s.truth); err != nil {
		t.Fatal(err)
	}
	d.Measure(&s.truth, &s.block, &s.labels)
	if err := s.block.Validate(); err != nil {
		t.Fatal(err)
	}
	return s
}

// isTrue reports whether an assignment groups the objects of event i as the true decays
// do: products with one parent have objects whose particles have one parent.
func (s *sample) isTrue(i int, objects []int) bool {
	first, _ := s.block.Objects(i)
	row, _ := s.truth.Particles(i)
	parent := func(product int) int16 { return s.truth.Parent[row+product] }
	made := func(product int) int16 { return parent(int(s.labels.Particle[first+objects[product]])) }
	for a := range objects {
		for b := range a {
			if objects[a] < 0 || objects[b] < 0 || parent(a) == event.NoParent || parent(a) != parent(b) {
				continue
			}
			if made(a) != made(b) {
				return false
			}
		}
	}
	return true
}

// missing says that products are missing.
func missing(products ...string) []selection.ProductMeasurement {
	list := make([]selection.ProductMeasurement, 0, len(products))
	for _, p := range products {
		list = append(list, selection.ProductMeasurement{Product: p, Measurement: selection.Missing})
	}
	return list
}

// pions is n constraints on the masses of pi0[0], pi0[1] and so on.
func pions(n int) []selection.FitMass {
	list := make([]selection.FitMass, 0, n)
	for k := range n {
		list = append(list, selection.FitMass{Products: []string{"pi0[" + strconv.Itoa(k) + "]"}})
	}
	return list
}

// taggedFit is gamma p -> p and n neutral pions, the proton missing, fitted.
func taggedFit(n int) selection.Hypothesis {
	masses := pions(n)
	if n == 1 {
		masses[0].Products[0] = "pi0"
	}
	return selection.Hypothesis{
		Reaction: "gamma p -> p" + strings.Repeat(" pi0", n) + ", pi0 -> gamma gamma", Measurements: missing("p"),
		Beam: &selection.BeamSource{Tagged: &selection.TaggedBeam{}},
		Fit:  &selection.Fit{Masses: masses},
	}
}

// flatBeam is photons of 1.4 to 2 GeV.
func flatBeam() generation.Spectrum { return generation.Flat{LowGeV: 1.4, HighGeV: 2} }

// The true assignments of simulated events, with deviations drawn at the true values, the
// covariance evaluated at the measured ones, and resolutions a tenth of common ones:
// probabilities are flat, as a whole and in the tails, and pulls have mean 0 and width 1.
// Bounds are five standard errors, with fixed seeds.
func TestFitsOfTrueAssignments(t *testing.T) {
	for _, c := range []struct {
		name  string
		pions int
	}{{"p pi0", 1}, {"p pi0 pi0", 2}} {
		t.Run(c.name, func(t *testing.T) {
			const events = 3000
			h := taggedFit(c.pions)
			s := simulate(t, h.Reaction, fineHall(1), flatBeam(), events)
			w := compile(t, h).NewWorker(selection.AllEntries)
			var probabilities []float64
			pulls := map[string]*moments{}
			best := 0
			for i := range events {
				if first, end := s.block.Objects(i); end-first != 2*c.pions {
					continue // a photon flew out of the acceptance
				}
				e := w.Explain(&s.block, i, 10)
				for _, a := range e.Hypotheses[0].Assignments {
					if !s.isTrue(i, a.Objects) {
						continue
					}
					if a.Fit.Result.Status != constraint.Converged {
						t.Fatalf("event %d: the fit of the true assignment is %v", i, a.Fit.Result.Status)
					}
					probabilities = append(probabilities, a.Fit.Result.Probability)
					if a.Best {
						best++
					}
					for _, p := range a.Fit.Particles {
						for _, q := range p.Parameters {
							key := p.Name + " " + q.Name
							if !math.IsNaN(q.Pull) {
								if pulls[key] == nil {
									pulls[key] = &moments{}
								}
								pulls[key].add(q.Pull)
							}
						}
					}
				}
			}
			if len(probabilities) < events*9/10 {
				t.Fatalf("%d of %d events have their true assignment", len(probabilities), events)
			}
			flat(t, probabilities)
			worst := 0.0
			for key, m := range pulls {
				mean, width := m.mean()*math.Sqrt(m.n), (m.width()-1)*math.Sqrt(2*m.n)
				worst = max(worst, math.Abs(mean), math.Abs(width))
				if math.Abs(mean) > 5 || math.Abs(width) > 5 {
					t.Errorf("%s: mean %.3f, width %.3f, off by %.1f and %.1f standard errors", key, m.mean(), m.width(), mean, width)
				}
			}
			t.Logf("%d events, %d pulls, worst %.1f standard errors; the true assignment is the best in %.1f %%",
				len(probabilities), len(pulls), worst, 100*float64(best)/float64(len(probabilities)))
		})
	}
}

// moments are the sums of a mean and a width.
type moments struct{ n, sum, squares float64 }

func (m *moments) add(x float64) { m.n, m.sum, m.squares = m.n+1, m.sum+x, m.squares+x*x }

func (m *moments) mean() float64 { return m.sum / m.n }

func (m *moments) width() float64 { return math.Sqrt(m.squares/m.n - m.mean()*m.mean()) }

// flat tests that probabilities are uniform: ten bins, Kolmogorov's statistic, and the
// counts below and above 2 %.
func flat(t *testing.T, p []float64) {
	t.Helper()
	p = slices.Sorted(slices.Values(p))
	n, bins := float64(len(p)), [10]float64{}
	largest := 0.0
	for i, v := range p {
		bins[min(int(10*v), 9)]++
		largest = max(largest, math.Abs(v-float64(i)/n), math.Abs(v-float64(i+1)/n))
	}
	square := 0.0
	for _, count := range bins {
		square += (count - n/10) * (count - n/10) / (n / 10)
	}
	low, _ := slices.BinarySearch(p, 0.02)
	high, _ := slices.BinarySearch(p, 0.98)
	sigma := math.Sqrt(n * 0.02 * 0.98)
	// The tail of chi-square with 9 degrees of freedom above 40 is 8e-6, that of
	// Kolmogorov's distribution above 2.5 is 7e-6.
	if square > 40 || largest*math.Sqrt(n) > 2.5 {
		t.Errorf("chi-square of ten bins %.1f, Kolmogorov's statistic %.2f", square, largest*math.Sqrt(n))
	}
	if math.Abs(float64(low)-0.02*n) > 5*sigma || math.Abs(float64(len(p)-high)-0.02*n) > 5*sigma {
		t.Errorf("%d and %d in the tails, want %.0f +- %.0f", low, len(p)-high, 0.02*n, sigma)
	}
	t.Logf("chi-square of ten bins %.1f, Kolmogorov's statistic %.2f, tails %d and %d of %.0f",
		square, largest*math.Sqrt(n), low, len(p)-high, 0.02*n)
}
