package selection_test

import (
	"math"
	"strconv"
	"strings"
	"testing"

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

// simulate makes events of a reaction on protons at rest.
func simulate(t testing.TB, text string, config detector.Config, beam generation.Spectrum, events int) *sample {
	t.Helper()
	return simulateFrom(t, text, config, generation.Config{Initial: onProtons(t, beam)}, events)
}

// onProtons is a beam of photons on protons at rest.
func onProtons(t testing.TB, beam generation.Spectrum) generation.Initial {
	t.Helper()
	p, err := standard(t).Named("p")
	if err != nil {
		t.Fatal(err)
	}
	return generation.FixedTarget{Beam: generation.Beam{Spectrum: beam}, TargetMassGeV: p.Mass}
}

// simulateFrom makes events of a reaction alone from an initial state in a target.
func simulateFrom(t testing.TB, text string, config detector.Config, from generation.Config, events int) *sample {
	t.Helper()
	r, err := reaction.Parse(standard(t), text)
	if err != nil {
		t.Fatal(err)
	}
	products, _, err := generation.ProductsOf(r, 1)
	if err != nil {
		t.Fatal(err)
	}
	from.Seed = 8
	from.Channels = []generation.Channel{{Name: "only", Fraction: 1, Products: products}}
	generator, err := generation.New(from)
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
