// Package hall is Marrow Hall, the invented experiment of the demonstration: a
// tagged photon beam on liquid hydrogen, seen by a calorimeter and a tracker.
// Every number is invented; relative rates are orders of magnitude only.
package hall

import (
	_ "embed"
	"math"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
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

// initialState is the tagged beam on hydrogen at rest.
func initialState() *kinegatev1.GenerationInitialState {
	return &kinegatev1.GenerationInitialState{Kind: &kinegatev1.GenerationInitialState_BeamOnTarget{
		BeamOnTarget: &kinegatev1.SpectrumOnTarget{Beam: &kinegatev1.BeamSpectrum{
			Kind: &kinegatev1.BeamSpectrum_Bremsstrahlung{Bremsstrahlung: &kinegatev1.BremsstrahlungSpectrum{
				ElectronGev: ElectronGeV, MinGev: LowGeV, MaxGev: HighGeV, CompleteScreening: true, ChannelCount: TaggerCount,
			}},
		}},
	}}
}

// generation is the sample of one channel: 5 cm of liquid hydrogen, and 0.2 candidates of
// other beam photons an event.
func generation(seed int64, channel Channel) *kinegatev1.Generation {
	return &kinegatev1.Generation{
		Seed:         seed,
		InitialState: initialState(),
		Channels: []*kinegatev1.GenerationChannel{{
			Name: channel.Name, Reaction: channel.Reaction,
			Energy: &kinegatev1.EnergyDependence{Kind: &kinegatev1.EnergyDependence_PhaseSpace{}},
		}},
		Target:      &kinegatev1.TargetRegion{LengthM: 0.05},
		Accidentals: &kinegatev1.AccidentalCandidates{RateHz: TaggedRateHz, WindowNs: TaggerWidthNs},
		Detector:    Detector(),
	}
}

const degree = math.Pi / 180

func polar(low, high float64) *kinegatev1.PolarRange {
	return &kinegatev1.PolarRange{MinRad: low * degree, MaxRad: high * degree}
}

// Detector describes the detector of the hall.
func Detector() *kinegatev1.Detector {
	edges := make([]float64, TaggerCount+1)
	for i := range edges {
		edges[i] = LowGeV + (HighGeV-LowGeV)*float64(i)/TaggerCount
	}
	calorimeter, tracker := 0.97, 0.92
	return &kinegatev1.Detector{
		Name:        "marrow-hall",
		Description: "Calorimeter, tracker and tagger of an invented experiment.",
		Calorimeter: &kinegatev1.Calorimeter{
			Theta:      polar(6, 150),
			RadiusM:    1,
			Stochastic: 0.028, Constant: 0.012,
			ThetaSigmaRad: 0.010, PhiSigmaRad: 0.010,
			ThresholdGev:  0.030,
			Efficiency:    &calorimeter,
			MergeAngleRad: 5 * degree,
			SplitOff: &kinegatev1.SplitOff{
				Probability: 0.02, MinShare: 0.05, MaxShare: 0.2, MinAngleRad: 6 * degree, MaxAngleRad: 15 * degree,
			},
			Noise: &kinegatev1.ClusterNoise{Probability: 0.01, MeanGev: 0.05},
		},
		Tracker: &kinegatev1.Tracker{
			Theta:          polar(10, 140),
			MinMomentumGev: 0.15,
			Constant:       0.015, PerGev: 0.01,
			AngleSigmaRad: 0.003,
			Efficiency:    &tracker,
			Identify:      true,
			Confusions: []*kinegatev1.SpeciesConfusion{
				{Species: kinegatev1.Species_SPECIES_PROTON, TakenFor: kinegatev1.Species_SPECIES_PION, Probability: 0.05},
				{Species: kinegatev1.Species_SPECIES_PION, TakenFor: kinegatev1.Species_SPECIES_PROTON, Probability: 0.05},
			},
		},
		Recoil: &kinegatev1.DirectionDetector{
			Theta: polar(10, 140), MinMomentumGev: 0.15, AngleSigmaRad: 0.008, Efficiency: &tracker,
		},
		Tagger: &kinegatev1.Tagger{EdgesGev: edges, TimeSigmaNs: 1.5},
	}
}
