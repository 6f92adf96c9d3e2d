// Package hall is Marrow Hall, the invented experiment of the demonstration: a
// tagged photon beam on liquid hydrogen, seen by a calorimeter and a tracker.
// Every number is invented; relative rates are orders of magnitude only.
package hall

import (
	_ "embed"
	"math"

	"example.org/kinegate/kinematics/detector"
	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/generation"
)

// Selection is the selection file of the hall.
//
//go:embed selection.yaml
var Selection string

// Beam of the hall: bremsstrahlung of 3 GeV electrons with complete screening,
// tagged in channels of 5 MeV.
const (
	ElectronGeV   = 3.0
	LowGeV        = 1.2
	HighGeV       = 2.4
	TaggerCount   = 240
	TaggedRateHz  = 1e7
	TaggerWidthNs = 20
)

// RateHz is the rate of events after the pre-trigger.
const RateHz = 400

// Channel is one reaction of the mixture.
type Channel struct {
	// Name is short, for tables.
	Name string
	// Reaction is its text; empty for noise.
	Reaction string
	// Percent is its share of the events after the pre-trigger.
	Percent float64
}

// Mix is what happens in the hall, after the pre-trigger of two clusters or two
// tracks. The first channel is prescaled already.
func Mix() []Channel {
	return []Channel{
		{"p pi+ pi-", "gamma p -> p pi+ pi-", 30},
		{"p pi0 pi0", "gamma p -> p pi0 pi0, pi0 -> gamma gamma", 22},
		{"p pi0", "gamma p -> p pi0, pi0 -> gamma gamma", 14},
		{"p pi+ pi- pi0", "gamma p -> p pi+ pi- pi0, pi0 -> gamma gamma", 10},
		{"p pi0 eta", "gamma p -> p pi0 eta, pi0 -> gamma gamma, eta -> gamma gamma", 6},
		{"p omega", "gamma p -> p omega, omega -> pi0 gamma, pi0 -> gamma gamma", 6},
		{"p eta", "gamma p -> p eta, eta -> gamma gamma", 4},
		{"K+ Lambda", "gamma p -> K+ Lambda, Lambda -> p pi-", 3},
		{"K+ Sigma0", "gamma p -> K+ Sigma0, Sigma0 -> Lambda gamma, Lambda -> p pi-", 3},
		{"p pi0 pi0 pi0", "gamma p -> p pi0 pi0 pi0, pi0 -> gamma gamma", 1},
		{"p eta'", "gamma p -> p eta', eta' -> gamma gamma", 0.5},
		{"noise", "", 0.5},
	}
}

// Initial is the initial state: the tagged beam on hydrogen at rest.
func Initial(protonMassGeV float64) generation.Initial {
	tagged := generation.Bremsstrahlung{
		ElectronGeV: ElectronGeV, LowGeV: LowGeV, HighGeV: HighGeV, CompleteScreening: true,
	}
	return generation.FixedTarget{
		Beam:          generation.Beam{Spectrum: tagged.Channels(TaggerCount)},
		TargetMassGeV: protonMassGeV,
	}
}

const degree = math.Pi / 180

// Detector describes the detector of the hall.
func Detector(seed uint64) detector.Config {
	edges := make([]float64, TaggerCount+1)
	for i := range edges {
		edges[i] = LowGeV + (HighGeV-LowGeV)*float64(i)/TaggerCount
	}
	return detector.Config{
		Seed: seed,
		Calorimeter: &detector.Calorimeter{
			Theta:      detector.Polar{MinRad: 6 * degree, MaxRad: 150 * degree},
			RadiusM:    1,
			Stochastic: 0.028, Constant: 0.012,
			ThetaSigmaRad: 0.010, PhiSigmaRad: 0.010,
			ThresholdGeV:  0.030,
			Efficiency:    0.97,
			MergeAngleRad: 5 * degree,
			SplitOff: &detector.SplitOff{
				Probability: 0.02, MinShare: 0.05, MaxShare: 0.2, MinAngleRad: 6 * degree, MaxAngleRad: 15 * degree,
			},
			Noise: &detector.Noise{Probability: 0.01, MeanGeV: 0.05},
		},
		Tracker: &detector.Tracker{
			Theta:          detector.Polar{MinRad: 10 * degree, MaxRad: 140 * degree},
			MomentumMinGeV: 0.15,
			Constant:       0.015, PerGeV: 0.01,
			AngleSigmaRad: 0.003,
			Efficiency:    0.92,
			Identify:      true,
			Confusions: []detector.Confusion{
				{From: event.SpeciesProton, To: event.SpeciesPion, Probability: 0.05},
				{From: event.SpeciesPion, To: event.SpeciesProton, Probability: 0.05},
			},
		},
		Recoil: &detector.Recoil{
			Theta:          detector.Polar{MinRad: 10 * degree, MaxRad: 140 * degree},
			MomentumMinGeV: 0.15, AngleSigmaRad: 0.008, Efficiency: 0.92,
		},
		Tagger: &detector.Tagger{EdgesGeV: edges, TimeSigmaNS: 1.5},
	}
}

// Target is where the interactions happen: 5 cm of liquid hydrogen.
func Target() generation.Region { return generation.Region{LengthM: 0.05} }

// Accidentals are the candidates of other beam photons: 0.2 an event.
func Accidentals() generation.Accidentals {
	return generation.Accidentals{RateHz: TaggedRateHz, WindowNS: TaggerWidthNs}
}
