package selection_test

import (
	"strings"
	"testing"

	"example.org/kinegate/kinematics/selection"
)

// Every fault of a fit by its path.
func TestFitFaults(t *testing.T) {
	tagged := &selection.BeamSource{Tagged: &selection.TaggedBeam{}}
	energy := func(x float64) *selection.BeamSource {
		return &selection.BeamSource{Fixed: &selection.InitialState{BeamOnTarget: &selection.BeamMotion{TotalEnergyGeV: &x}}}
	}
	minus, other := -0.1, 0.5
	four := "-> gamma gamma gamma gamma"
	equal := func(first, second string) selection.FitEqualMasses {
		return selection.FitEqualMasses{First: strings.Fields(first), Second: strings.Fields(second)}
	}
	two := "gamma p -> p pi0, pi0 -> gamma gamma"
	for _, c := range []struct {
		name  string
		h     selection.Hypothesis
		field string
		says  string
	}{
		{"nothing to constrain", selection.Hypothesis{Reaction: "-> gamma gamma", Fit: &selection.Fit{}}, "fit", "no constraints"},
		{"conservation without a beam", selection.Hypothesis{Reaction: "-> gamma gamma", Fit: &selection.Fit{Conservation: selection.ConserveFourMomentum}}, "fit.conservation", "without a beam"},
		{"inclusive", selection.Hypothesis{Reaction: "gamma p -> K+ X", Beam: tagged, Fit: &selection.Fit{}}, "fit.conservation", "inclusive"},
		{"too much is missing", selection.Hypothesis{
			Reaction: "gamma p -> p pi0 eta", Measurements: missing("pi0", "eta"), Beam: tagged, Fit: &selection.Fit{},
		}, "fit", "-2 degrees of freedom"},
		{"mass of what does not decay", selection.Hypothesis{Reaction: two, Beam: tagged, Fit: &selection.Fit{
			Masses: []selection.FitMass{{Products: []string{"p"}}},
		}}, "fit.masses[0].products[0]", "has its mass anyhow"},
		{"several without a mass", selection.Hypothesis{Reaction: two, Beam: tagged, Fit: &selection.Fit{
			Masses: []selection.FitMass{{Products: []string{"p", "pi0"}}},
		}}, "fit.masses[0].mass_gev", "several products"},
		{"a negative mass", selection.Hypothesis{Reaction: two, Beam: tagged, Fit: &selection.Fit{
			Masses: []selection.FitMass{{Products: []string{"p", "pi0"}, MassGeV: &minus}},
		}}, "fit.masses[0].mass_gev", ">= 0"},
		{"equal masses of one set", selection.Hypothesis{Reaction: two, Beam: tagged, Fit: &selection.Fit{
			EqualMasses: []selection.FitEqualMasses{{First: []string{"p", "gamma[0]"}, Second: []string{"gamma"}}},
		}}, "fit.equal_masses[0].second[0]", ""},
		{"a mass held twice", selection.Hypothesis{Reaction: two, Beam: tagged, Fit: &selection.Fit{
			Masses: []selection.FitMass{{Products: []string{"pi0"}}, {Products: []string{"pi0"}}},
		}}, "fit.masses[1]", "bound already, by masses[0]"},
		{"two masses of one set", selection.Hypothesis{Reaction: two, Beam: tagged, Fit: &selection.Fit{
			Masses: []selection.FitMass{{Products: []string{"pi0"}}, {Products: []string{"gamma[1]", "gamma[0]"}, MassGeV: &other}},
		}}, "fit.masses[1]", "bound already, by masses[0]"},
		{"a pair of equal masses twice", selection.Hypothesis{Reaction: four, Fit: &selection.Fit{EqualMasses: []selection.FitEqualMasses{
			equal("gamma[0] gamma[1]", "gamma[2] gamma[3]"), equal("gamma[3] gamma[2]", "gamma[0] gamma[1]"),
		}}}, "fit.equal_masses[1]", "bound already, by equal_masses[0]"},
		{"a set equal to itself", selection.Hypothesis{Reaction: four, Fit: &selection.Fit{EqualMasses: []selection.FitEqualMasses{
			equal("gamma[0] gamma[1]", "gamma[1] gamma[0]"),
		}}}, "fit.equal_masses[0]", "without a common product"},
		{"equal masses that are held", selection.Hypothesis{Reaction: four, Fit: &selection.Fit{
			Masses: []selection.FitMass{
				{Products: []string{"gamma[0]", "gamma[1]"}, MassGeV: &other}, {Products: []string{"gamma[2]", "gamma[3]"}, MassGeV: &other},
			},
			EqualMasses: []selection.FitEqualMasses{equal("gamma[0] gamma[1]", "gamma[2] gamma[3]")},
		}}, "fit.equal_masses[0]", "bound already, by masses[0] and masses[1]"},
		{"equal masses of two particles", selection.Hypothesis{Reaction: "gamma p -> p pi+ pi-", Beam: tagged, Fit: &selection.Fit{
			EqualMasses: []selection.FitEqualMasses{equal("pi+", "pi-")},
		}}, "fit.equal_masses[0]", "own masses"},
		{"the mass of all", selection.Hypothesis{Reaction: two, Beam: energy(2), Fit: &selection.Fit{
			Masses: []selection.FitMass{{Products: []string{"p", "pi0"}, MassGeV: &other}},
		}}, "fit.masses[0]", "the conservation of four-momentum"},
		{"no beam to conserve with", selection.Hypothesis{Reaction: two, Fit: &selection.Fit{}}, "fit", "beam is missing"},
		{"no beam for what is asked", selection.Hypothesis{Reaction: two, Fit: &selection.Fit{
			Conservation: selection.ConserveFourMomentum,
		}}, "fit.conservation", "beam is missing"},
		{"a probability above 1", selection.Hypothesis{
			Reaction: two, Beam: tagged, Fit: &selection.Fit{}, Condition: &selection.Condition{Window: within(selection.FitProbability, 0.1, 5)},
		}, "condition.window.fit_probability.max", "0 to 1"},
		{"a probability below 0", selection.Hypothesis{
			Reaction: two, Beam: tagged, Fit: &selection.Fit{}, Condition: &selection.Condition{Window: within(selection.FitProbability, -0.1, 1)},
		}, "condition.window.fit_probability.min", "0 to 1"},
		{"no photon follows the vertex", selection.Hypothesis{
			Reaction: "gamma p -> p pi+ pi-", Beam: tagged, Fit: &selection.Fit{Vertex: selection.FreeVertexZ},
		}, "fit.vertex", "no photon is seen"},
		{"a measured energy without a spread", selection.Hypothesis{Reaction: two, Beam: energy(2), Fit: &selection.Fit{
			BeamEnergy: &selection.InitialEnergy{Knowledge: selection.MeasuredEnergy},
		}}, "fit.beam_energy.measured.sigma_gev", "absent"},
		{"a target at rest with an unknown energy", selection.Hypothesis{Reaction: two, Beam: energy(2), Fit: &selection.Fit{
			TargetEnergy: &selection.InitialEnergy{Knowledge: selection.UnmeasuredEnergy},
		}}, "fit.target_energy", "at rest"},
		{"a window without a fit", selection.Hypothesis{
			Reaction: two, Beam: tagged, Condition: &selection.Condition{Window: within(selection.FitProbability, 0, 1)},
		}, "condition.window.fit_probability", "a hypothesis with a fit"},
		{"a ranking without a fit", selection.Hypothesis{Reaction: two, Beam: tagged, Ranking: &selection.Ranking{FitProbability: true}}, "ranking.fit_probability", "a hypothesis with a fit"},
		{"the flight of what does not decay", selection.Hypothesis{
			Reaction: two, Beam: tagged, Condition: &selection.Condition{Window: within(selection.FlightDistance, 0, 1, "p")},
		}, "condition.window.flight_distance.product", "does not decay"},
		{"a charged merged pair", selection.Hypothesis{Reaction: "gamma p -> n pi+", Beam: tagged, Measurements: []selection.ProductMeasurement{
			{Product: "pi+", Merged: &selection.MergedPhotons{MinEnergyGeV: 3}},
		}}, "measurements[0].merged_photons", "neutral"},
		{"a merged pair below its mass", selection.Hypothesis{Reaction: "gamma p -> p pi0", Beam: tagged, Measurements: []selection.ProductMeasurement{
			{Product: "pi0", Merged: &selection.MergedPhotons{MinEnergyGeV: 0.1}},
		}}, "measurements[0].merged_photons.min_energy_gev", "the mass of pi0"},
	} {
		t.Run(c.name, func(t *testing.T) {
			list := faultsOf(t, selection.Selection{Hypotheses: []selection.Hypothesis{c.h}})
			for _, f := range list {
				if f.Field == "hypotheses[0]."+c.field && strings.Contains(f.Error(), c.says) {
					return
				}
			}
			t.Errorf("faults are %v, want one of %s that says %q", list, c.field, c.says)
		})
	}
}

// A reaction that cannot be read hides none of the faults that do not need it.
func TestUnreadableReactionHidesNothing(t *testing.T) {
	h := selection.Hypothesis{
		Reaction: "gamma p -> p pi0 pi0,, pi0",
		Beam: &selection.BeamSource{Tagged: &selection.TaggedBeam{
			Prompt: &selection.TimeWindow{MinNS: new(5.0), MaxNS: new(-5.0)},
		}},
		Measurements: []selection.ProductMeasurement{{Product: "p", Measurement: 9}},
		ExtraObjects: &selection.ExtraObjects{Rule: selection.SoftPhotons},
		Condition:    &selection.Condition{AllOf: []selection.Condition{only(within(selection.InvariantMass, 2, 1, "pi0")), {}}},
		Fit:          &selection.Fit{Conservation: 9},
		Prescale:     -1,
	}
	list := faultsOf(t, selection.Selection{Hypotheses: []selection.Hypothesis{h}})
	var fields []string
	for _, f := range list {
		fields = append(fields, strings.TrimPrefix(f.Field, "hypotheses[0]."))
	}
	all := strings.Join(fields, " ")
	for _, want := range []string{
		"prescale_count", "reaction", "measurements[0].measurement", "beam.tagged.prompt.max_ns",
		"extra_objects.soft_photons.max_count", "fit.conservation",
		"condition.all_of[0].window.invariant_mass.max_gev", "condition.all_of[1]",
	} {
		if !strings.Contains(all, want) {
			t.Errorf("%s is missing among %v", want, fields)
		}
	}
	if len(list) != 10 {
		t.Errorf("%d faults: %v", len(list), list)
	}
}

// Hypotheses that are ranked in different ways have no best among them.
func TestGroupOfOtherRankings(t *testing.T) {
	fit, masses, plain := pionsOnly(2), pionsOnly(2), pionsOnly(2)
	fit.Name, masses.Name, plain.Name = "fit", "masses", "plain"
	masses.Ranking, plain.Fit = closest("pi0[0]", "pi0[1]"), nil
	for _, c := range []struct {
		members []string
		says    string
	}{{[]string{"fit", "masses"}, "ranked otherwise than fit"}, {[]string{"fit", "plain"}, "no rank to compare"}} {
		list := faultsOf(t, selection.Selection{
			Hypotheses: []selection.Hypothesis{fit, masses, plain},
			Groups:     []selection.Group{{Name: "g", Hypotheses: c.members}},
		})
		if len(list) != 1 || !strings.Contains(list[0].Error(), c.says) {
			t.Errorf("%v: %v, want %q", c.members, list, c.says)
		}
	}
}
