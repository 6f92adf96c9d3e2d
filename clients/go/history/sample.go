package history

import (
	"math"
	"math/rand/v2"

	"example.org/kinegate/proto/column"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// Photons are events [from, from+count) of an invented sample: two to six photons
// each, one event in 50 with a NaN. Event i is the same in whatever block it comes,
// and on every processor: no product feeds a sum that could be fused with it.
func Photons(from, count int) *kinegatev1.EventBlock {
	var ids []int64
	var energies, theta, phi []float64
	offsets := []int32{0}
	for i := from; i < from+count; i++ {
		r := rand.New(rand.NewPCG(7, uint64(i))) //nolint:gosec // a sample needs a seed, no secret
		ids = append(ids, int64(i))
		n := 2 + r.IntN(5)
		for range n {
			energies = append(energies, 0.05+float64(0.4*r.Float64()))
			theta = append(theta, math.Pi*r.Float64())
			phi = append(phi, math.Pi*(2*r.Float64()-1))
		}
		if i%50 == 49 {
			energies[len(energies)-1] = math.NaN()
		}
		offsets = append(offsets, offsets[len(offsets)-1]+int32(n)) //nolint:gosec // small
	}
	classes := make([]byte, len(energies))
	for i := range classes {
		classes[i] = byte(kinegatev1.ObjectClass_OBJECT_CLASS_PHOTON)
	}
	return &kinegatev1.EventBlock{
		EventIds: column.Int64(ids), ObjectOffsets: column.Int32(offsets), ObjectClasses: classes,
		Coordinates: &kinegatev1.EventBlock_MomentumAngles{MomentumAngles: &kinegatev1.MomentumAnglesColumns{
			MomentumGev: column.Float64(energies), ThetaRad: column.Float64(theta), PhiRad: column.Float64(phi),
		}},
	}
}

// PhotonSelection has two hypotheses in a group, one with several assignments.
func PhotonSelection() *kinegatev1.Selection {
	mass := func(minimum, maximum float64, products ...string) *kinegatev1.Window {
		return &kinegatev1.Window{Observable: &kinegatev1.Window_InvariantMass{InvariantMass: &kinegatev1.MassWindow{
			Products: products, MinGev: new(minimum), MaxGev: new(maximum),
		}}}
	}
	record := func(products ...string) []*kinegatev1.Window {
		return []*kinegatev1.Window{{Name: "mass", Observable: &kinegatev1.Window_InvariantMass{
			InvariantMass: &kinegatev1.MassWindow{Products: products},
		}}}
	}
	extra := &kinegatev1.ExtraObjects{Rule: &kinegatev1.ExtraObjects_Any{Any: &kinegatev1.AnyExtraObjects{}}}
	return &kinegatev1.Selection{
		Name: "photons",
		Hypotheses: []*kinegatev1.Hypothesis{
			{
				Name: "pair", Reaction: "pi0 -> gamma gamma", ExtraObjects: extra, PrescaleCount: 3,
				Condition: &kinegatev1.Condition{Window: mass(0.1, 0.2, "gamma[0]", "gamma[1]")}, Record: record("gamma[0]", "gamma[1]"),
			},
			{
				Name: "pairs", Reaction: "eta -> pi0 pi0, pi0 -> gamma gamma", ExtraObjects: extra,
				Condition: &kinegatev1.Condition{AllOf: []*kinegatev1.Condition{
					{Window: mass(0.1, 0.17, "pi0[0]")}, {Window: mass(0.1, 0.17, "pi0[1]")},
				}},
				Record: record("pi0[0]", "pi0[1]"),
			},
		},
	}
}

// AllEntries opens a stream that tells everything about the sample.
func AllEntries() *kinegatev1.JudgeOpen {
	return &kinegatev1.JudgeOpen{
		Selection: &kinegatev1.SelectionSource{Source: &kinegatev1.SelectionSource_Given{Given: PhotonSelection()}},
		Entries:   kinegatev1.EntryDetail_ENTRY_DETAIL_ALL,
		Limits:    &kinegatev1.Limits{BlockEventCount: 4096, BlockObjectCount: 32768},
	}
}

// Measured are the events of Photons with the covariances of a calorimeter: 3 % of the
// energy, 10 mrad in theta and phi.
func Measured(from, count int) *kinegatev1.EventBlock {
	const energy, angle = 0.03, 0.01
	block := Photons(from, count)
	energies, _ := column.Float64s(block.GetMomentumAngles().GetMomentumGev()) // written above
	var packed []float64
	for _, e := range energies {
		packed = append(packed, float64(energy*e)*float64(energy*e), 0, 0, angle*angle, 0, angle*angle)
	}
	block.Covariance = &kinegatev1.CovarianceColumn{Elements: column.Float64(packed)}
	return block
}

// FittedEntries opens a stream that fits the masses of pions to the measured sample, and
// tells everything.
func FittedEntries() *kinegatev1.JudgeOpen {
	open := AllEntries()
	open.Limits = &kinegatev1.Limits{BlockEventCount: 2000, BlockObjectCount: 12000}
	s := open.GetSelection().GetGiven()
	s.Name = "fitted-photons"
	s.Hypotheses[0].Fit = &kinegatev1.Fit{Masses: []*kinegatev1.FitMass{{
		Products: []string{"gamma[0]", "gamma[1]"}, MassGev: new(0.1349768),
	}}}
	s.Hypotheses[1].Fit = &kinegatev1.Fit{Masses: []*kinegatev1.FitMass{{Products: []string{"pi0[0]"}}, {Products: []string{"pi0[1]"}}}}
	for _, h := range s.GetHypotheses() {
		h.RecordUncertainties = true
	}
	return open
}
