package selection_test

import (
	"math"
	"slices"
	"testing"

	"example.org/kinegate/kinematics/constraint"
	"example.org/kinegate/kinematics/detector"
	"example.org/kinegate/kinematics/generation"
	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/selection"
)

// topology is a hypothesis with the initial state that its reaction is simulated from.
type topology struct {
	name       string
	hypothesis selection.Hypothesis
	initial    generation.Initial
	// tracked says that charged particles are measured too.
	tracked bool
	// measured is how many objects an event has in which nothing is lost.
	measured int
}

// topologies are reactions with fits that differ in what is measured, missing and bound.
func topologies(t testing.TB) []topology {
	t.Helper()
	measuredProton := taggedFit(2)
	measuredProton.Measurements = []selection.ProductMeasurement{{Product: "p", Measurement: selection.Full}}
	energy, angle, least := 1.0, math.Pi, 0.005
	beam := selection.BeamMotion{TotalEnergyGeV: &energy}
	unknown := &selection.InitialEnergy{Knowledge: selection.UnmeasuredEnergy}
	eta, err := standard(t).Named("eta")
	if err != nil {
		t.Fatal(err)
	}
	photons := generation.Beam{Spectrum: generation.Flat{LowGeV: 0.5, HighGeV: 1.5}}
	return []topology{
		{"p pi0, proton missing", taggedFit(1), onProtons(t, flatBeam()), false, 2},
		{"p pi0 pi0, proton missing", taggedFit(2), onProtons(t, flatBeam()), false, 4},
		{"p pi0 pi0, proton measured", measuredProton, onProtons(t, flatBeam()), true, 5},
		{
			"e+ e-, energies unknown",
			selection.Hypothesis{
				Reaction: "gamma gamma -> e+ e-",
				Beam: &selection.BeamSource{Fixed: &selection.InitialState{TwoBeams: &selection.TwoBeams{
					Beam1: beam, Beam2: beam, AngleRad: &angle,
				}}},
				Fit: &selection.Fit{BeamEnergy: unknown, TargetEnergy: unknown},
			},
			generation.CollidingBeams{First: photons, Second: photons, AngleRad: angle}, true, 2,
		},
		{
			"eta -> 3 pi0",
			selection.Hypothesis{
				Reaction: "eta -> pi0 pi0 pi0, pi0 -> gamma gamma",
				// Far wider than the resolution: they spare fits of false assignments alone.
				Condition: allOf(
					within(selection.InvariantMass, 0.12, 0.15, "pi0[0]"),
					within(selection.InvariantMass, 0.12, 0.15, "pi0[1]"),
					within(selection.InvariantMass, 0.12, 0.15, "pi0[2]"),
				),
				Fit: &selection.Fit{Masses: append(pions(3), selection.FitMass{
					Products: []string{"pi0[0]", "pi0[1]", "pi0[2]"}, MassGeV: &eta.Mass,
				})},
			},
			generation.Total{SqrtSGeV: eta.Mass, Momentum: momentum.Three{X: 0.3, Y: -0.4, Z: 0.9}}, false, 6,
		},
		{
			// Proton and pi- are measured where the Lambda decayed, out of the vertex.
			"K+ Lambda, displaced decay",
			selection.Hypothesis{
				Reaction: "gamma p -> K+ Lambda, Lambda -> p pi-",
				Measurements: []selection.ProductMeasurement{
					{Product: "K+", Measurement: selection.Full}, {Product: "p", Measurement: selection.Full},
				},
				Beam:      &selection.BeamSource{Tagged: &selection.TaggedBeam{}},
				Condition: &selection.Condition{Window: &selection.Window{Observable: selection.FlightDistance, Products: []string{"Lambda"}, Min: &least}},
				Fit:       &selection.Fit{Masses: []selection.FitMass{{Products: []string{"Lambda"}}}},
			},
			onProtons(t, flatBeam()), true, 3,
		},
	}
}

// withTracks adds to a detector what measures charged particles, as finely, and their vertices.
func withTracks(c detector.Config) detector.Config {
	c.Tracker = &detector.Tracker{
		Theta: c.Calorimeter.Theta, MinMomentumGeV: 0.05, Constant: 0.001, PerGeV: 0.0005, AngleSigmaRad: 0.0005, Efficiency: 1,
	}
	const sigma = 0.0005
	c.Vertex = &detector.Vertex{SigmaXM: sigma, SigmaYM: sigma, SigmaZM: sigma}
	c.Displaced = &detector.Displaced{MinDistanceM: 10 * sigma, SigmaXM: sigma, SigmaYM: sigma, SigmaZM: sigma, Efficiency: 1}
	return c
}

// The true assignments of simulated events, with deviations drawn at the true values, the
// covariance evaluated at the measured ones, and resolutions a tenth of common ones:
// probabilities are flat, as a whole and in the tails, and pulls have mean 0 and width 1.
// Bounds are five standard errors, with fixed seeds.
func TestFitsOfTrueAssignments(t *testing.T) {
	for _, c := range topologies(t) {
		t.Run(c.name, func(t *testing.T) {
			const events = 3000
			h, config := c.hypothesis, fineHall(1)
			if c.tracked {
				config = withTracks(config)
			}
			s := simulateFrom(t, h.Reaction, config, generation.Config{Initial: c.initial}, events)
			w := compile(t, h).NewWorker(selection.AllEntries)
			var probabilities []float64
			pulls := map[string]*moments{}
			best := 0
			for i := range events {
				if first, end := s.block.Objects(i); end-first != c.measured {
					continue // something flew out of the acceptance
				}
				e := w.Explain(&s.block, i, 15)
				for _, a := range e.Hypotheses[0].Assignments {
					if !s.isTrue(i, a.Objects) || a.Fit == nil { // the Lambda decayed too soon
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
