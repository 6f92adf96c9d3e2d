package api

import (
	"context"
	"errors"
	"testing"
	"time"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// heavyMixture takes a good tenth of a second to prepare: many channels over a wide spectrum,
// each with a density of all powers.
func heavyMixture() *kinegatev1.Generation {
	g := &kinegatev1.Generation{InitialState: &kinegatev1.GenerationInitialState{
		Kind: &kinegatev1.GenerationInitialState_BeamOnTarget{BeamOnTarget: &kinegatev1.SpectrumOnTarget{
			Beam: &kinegatev1.BeamSpectrum{Kind: &kinegatev1.BeamSpectrum_Backscatter{Backscatter: &kinegatev1.BackscatterSpectrum{
				Beam:           &kinegatev1.BeamMotion{Value: &kinegatev1.BeamMotion_TotalEnergyGev{TotalEnergyGev: 8}},
				LightEnergyGev: 3.5e-9, MinGev: 1.3,
			}}},
		}},
	}}
	polynomial := &kinegatev1.DalitzPolynomial{}
	for x := range int32(9) {
		for y := range int32(9) {
			polynomial.Terms = append(polynomial.Terms, &kinegatev1.DalitzTerm{Coefficient: 1, PowerX: x, PowerY: y})
		}
	}
	for range 64 {
		g.Channels = append(g.Channels, &kinegatev1.GenerationChannel{
			Reaction: "gamma p -> p omega, omega -> pi+ pi- pi0",
			Energy:   &kinegatev1.EnergyDependence{Kind: &kinegatev1.EnergyDependence_PhaseSpace{PhaseSpace: &kinegatev1.PhaseSpaceRate{}}},
			Decays: []*kinegatev1.DecayOptions{{
				Product: "omega", Density: &kinegatev1.DecayOptions_DalitzPolynomial{DalitzPolynomial: polynomial},
			}},
		})
	}
	return g
}

// TestPreparationIsCancelled holds that work on a large mixture ends soon after its
// caller, whenever that is.
func TestPreparationIsCancelled(t *testing.T) {
	s := newServices(t)
	began := time.Now()
	if _, err := s.generation.compile(t.Context(), heavyMixture()); err != nil {
		t.Fatal(err)
	}
	whole := time.Since(began)
	// The least of three, as a busy machine may wake the work late.
	longest := time.Duration(0)
	for _, share := range []float64{0.02, 0.1, 0.3, 0.5, 0.7, 0.85} {
		least := time.Hour
		for range 3 {
			least = min(least, cancelled(t, s, time.Duration(share*float64(whole))))
		}
		if least < time.Hour {
			longest = max(longest, least)
		}
	}
	t.Logf("FIGURE T1 preparing took %v, and ended at most %v after its caller", whole, longest)
	// A share of the whole, which a busy machine makes longer too; work that does not look
	// at its caller ends 0.98 of it later in the first round.
	const allowed = 3
	if longest > whole/allowed {
		t.Errorf("preparing ended %v after its caller, of %v", longest, whole)
	}
}

// cancelled is how long preparing goes on after its caller left; an hour if it was over
// before.
func cancelled(t *testing.T, s *Services, after time.Duration) time.Duration {
	t.Helper()
	ctx, cancel := context.WithCancel(t.Context())
	defer cancel()
	left := make(chan time.Time, 1)
	timer := time.AfterFunc(after, func() {
		left <- time.Now()
		cancel()
	})
	_, err := s.generation.compile(ctx, heavyMixture())
	ended := time.Now()
	if timer.Stop() {
		return time.Hour
	}
	if err != nil && !errors.Is(err, context.Canceled) {
		t.Error(err)
	}
	return ended.Sub(<-left)
}
