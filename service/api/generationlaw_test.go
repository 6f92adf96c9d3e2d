package api

import (
	"strings"
	"testing"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// TestAngularLaws: a law is taken for its own reaction alone, and named where its reaction
// is made isotropic.
func TestAngularLaws(t *testing.T) {
	const (
		none         = kinegatev1.AngularLaw_ANGULAR_LAW_UNSPECIFIED
		pair         = kinegatev1.AngularLaw_ANGULAR_LAW_PAIR_CREATION
		annihilation = kinegatev1.AngularLaw_ANGULAR_LAW_ANNIHILATION
		compton      = kinegatev1.AngularLaw_ANGULAR_LAW_COMPTON
	)
	s := newServices(t)
	total := 4.0
	check := func(text string, angle *kinegatev1.ProductionAngle) *kinegatev1.CheckGenerationResponse {
		t.Helper()
		reply, err := s.generation.CheckGeneration(t.Context(), &kinegatev1.CheckGenerationRequest{
			Form: &kinegatev1.CheckGenerationRequest_Generation{Generation: &kinegatev1.Generation{
				InitialState: &kinegatev1.GenerationInitialState{Kind: &kinegatev1.GenerationInitialState_Total{
					Total: &kinegatev1.TotalMotion{SqrtSGev: &total},
				}},
				Channels: []*kinegatev1.GenerationChannel{{Reaction: text, Angle: angle}},
			}},
		})
		if err != nil {
			t.Fatal(err)
		}
		return reply
	}
	for _, c := range []struct {
		reaction, product string
		law               kinegatev1.AngularLaw
	}{
		{"gamma gamma -> e+ e-", "e-", pair}, {"gamma gamma -> mu- mu+", "mu+", pair}, {"e+ e- -> gamma gamma", "gamma[0]", annihilation},
		{"gamma e- -> gamma e-", "gamma", compton}, {"e+ gamma -> e+ gamma", "gamma", compton},
		{"gamma p -> gamma p", "gamma", none}, {"gamma e- -> e- pi0", "e-", none}, {"gamma gamma -> pi+ pi-", "pi+", none},
		{"gamma gamma -> gamma gamma", "gamma[0]", none}, {"e+ e- -> mu+ mu-", "mu-", none}, {"gamma gamma -> e+ e- gamma", "e-", none},
	} {
		for _, law := range []kinegatev1.AngularLaw{pair, annihilation, compton} {
			reply := check(c.reaction, &kinegatev1.ProductionAngle{Product: c.product, Polar: &kinegatev1.ProductionAngle_Law{Law: law}})
			if taken := len(reply.GetFaults()) == 0; taken != (law == c.law) {
				t.Errorf("%s with %s: taken %t, %v", c.reaction, law, taken, reply.GetFaults())
			}
		}
		reply := check(c.reaction, nil)
		named := strings.Join(reply.GetChannels()[0].GetRemarks(), " ")
		if c.law == none && strings.Contains(named, "ANGULAR_LAW") || c.law != none && !strings.Contains(named, c.law.String()) {
			t.Errorf("%s: remarks %q", c.reaction, named)
		}
	}
	electron := check("gamma e- -> gamma e-", &kinegatev1.ProductionAngle{
		Product: "e-", Polar: &kinegatev1.ProductionAngle_Law{Law: compton},
	})
	if len(electron.GetFaults()) != 1 {
		t.Errorf("the angle of the electron: %v", electron.GetFaults())
	}
}
