package selection_test

import (
	"math"
	"slices"
	"strings"
	"testing"

	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/selection"
)

// valid is a hypothesis that uses most of what a hypothesis can have.
func valid() selection.Hypothesis {
	return selection.Hypothesis{
		Reaction: "gamma p -> p pi0 pi0, pi0 -> gamma gamma",
		Beam:     &selection.BeamSource{Tagged: &selection.TaggedBeam{Prompt: &selection.TimeWindow{MinNS: new(-1.0), MaxNS: new(1.0)}}},
		Measurements: []selection.ProductMeasurement{
			{Product: "p", Measurement: selection.Direction},
		},
		Condition: &selection.Condition{AllOf: []selection.Condition{
			only(within(selection.InvariantMass, 0.1, 0.2, "pi0[0]")),
			{AnyOf: []selection.Condition{only(within(selection.MissingMassSquared, 0.5, 1.2, "pi0[0]", "pi0[1]"))}},
		}},
		Ranking: closest("pi0[0]", "pi0[1]"),
		Record:  []selection.Window{{Observable: selection.MissingDirection, Products: []string{"p"}}},
	}
}

// TestFaults breaks one field a case and checks the path and the words of the fault.
func TestFaults(t *testing.T) {
	number := func(x float64) *float64 { return &x }
	first := func(s *selection.Selection) *selection.Hypothesis { return &s.Hypotheses[0] }
	window := func(s *selection.Selection) *selection.Window { return first(s).Condition.AllOf[0].Window }
	set := func(w *selection.Window) func(*selection.Selection) {
		return func(s *selection.Selection) { first(s).Condition.AllOf[0].Window = w }
	}
	const (
		root = "hypotheses[0]"
		part = root + ".condition.all_of[0]"
	)
	fixed := func(i selection.InitialState) func(*selection.Selection) {
		return func(s *selection.Selection) { first(s).Beam = &selection.BeamSource{Fixed: &i} }
	}
	for _, c := range []struct {
		name, field, text string
		spoil             func(*selection.Selection)
	}{
		{"name", "name", "letters", func(s *selection.Selection) { s.Name = "a b" }},
		{"no hypotheses", "hypotheses", "1 to 64", func(s *selection.Selection) { s.Hypotheses = nil }},
		{"budget", "assignment_budget_count", "-1", func(s *selection.Selection) { s.AssignmentBudget = -1 }},
		{"same name", "hypotheses[1].name", "twice", func(s *selection.Selection) {
			first(s).Name = "one"
			s.Hypotheses = append(s.Hypotheses, s.Hypotheses[0])
		}},
		{"role", root + ".role", "4", func(s *selection.Selection) { first(s).Role = 4 }},
		{"prescale", root + ".prescale_count", ">= 0", func(s *selection.Selection) { first(s).Prescale = -2 }},
		{"veto prescale", root + ".prescale_count", "veto", func(s *selection.Selection) {
			first(s).Prescale, first(s).Role = 2, selection.Veto
		}},
		{"no reaction", root + ".reaction", "neither", func(s *selection.Selection) { first(s).Reaction = "" }},
		{"two reactions", root + ".reaction", "both", func(s *selection.Selection) { first(s).Structured = &selection.Reaction{} }},
		{"unknown particle", root + ".reaction", "pi0", func(s *selection.Selection) {
			first(s).Reaction = "gamma p -> p pi00 pi0, pi0 -> gamma gamma"
		}},
		{"broken law", root + ".reaction", "charge", func(s *selection.Selection) { first(s).Reaction = "gamma p -> n pi0" }},
		{"structured particle", root + ".structured_reaction.products[1].particle", "unknown", func(s *selection.Selection) {
			first(s).Reaction = ""
			first(s).Structured = &selection.Reaction{Products: []selection.Product{{Particle: "p"}, {Particle: "nothing"}}}
		}},
		{"measured twice", root + ".measurements[1].product", "twice", func(s *selection.Selection) {
			first(s).Measurements = append(first(s).Measurements, first(s).Measurements[0])
		}},
		{"measured parent", root + ".measurements[0].product", "decays", func(s *selection.Selection) {
			first(s).Measurements[0].Product = "pi0[0]"
		}},
		{"measurement", root + ".measurements[0].measurement", "9", func(s *selection.Selection) { first(s).Measurements[0].Measurement = 9 }},
		{"mass from event", root + ".measurements[0].mass_from_event", "full", func(s *selection.Selection) {
			first(s).Measurements[0].MassFromEvent = true
		}},
		{"no source", root + ".beam", "exactly one", func(s *selection.Selection) { first(s).Beam = &selection.BeamSource{} }},
		{"beam of a decay", root + ".beam", "absent", func(s *selection.Selection) {
			first(s).Reaction = "-> p pi0 pi0, pi0 -> gamma gamma"
		}},
		{"target", root + ".beam.tagged", "gamma", func(s *selection.Selection) {
			first(s).Reaction = "gamma gamma -> p pbar pi0 pi0, pi0 -> gamma gamma"
		}},
		{"window upside down", root + ".beam.tagged.prompt.max_ns", "> min_ns", func(s *selection.Selection) {
			first(s).Beam.Tagged.Prompt.MaxNS = new(-3.0)
		}},
		{"window not finite", root + ".beam.tagged.prompt.min_ns", "finite", func(s *selection.Selection) {
			first(s).Beam.Tagged.Prompt.MinNS = new(math.Inf(-1))
		}},
		{"overlap", root + ".beam.tagged.side_bands[1]", "overlaps", func(s *selection.Selection) {
			first(s).Beam.Tagged.SideBands = []selection.TimeWindow{{MinNS: new(1.0), MaxNS: new(2.0)}, {MinNS: new(0.9), MaxNS: new(1.5)}}
		}},
		{"weight", root + ".beam.tagged.side_bands[0].weight", "NaN", func(s *selection.Selection) {
			first(s).Beam.Tagged.SideBands = []selection.TimeWindow{{MinNS: new(1.0), MaxNS: new(2.0), Weight: number(math.NaN())}}
		}},
		{"side band alone", root + ".beam.tagged.side_bands", "prompt", func(s *selection.Selection) {
			first(s).Beam.Tagged = &selection.TaggedBeam{SideBands: []selection.TimeWindow{{MinNS: new(1.0), MaxNS: new(2.0)}}}
		}},
		{"no initial state", root + ".beam.fixed", "exactly one", fixed(selection.InitialState{})},
		{"no motion", root + ".beam.fixed.beam_on_target.beam", "exactly one", fixed(selection.InitialState{BeamOnTarget: &selection.BeamMotion{}})},
		{"motion", root + ".beam.fixed.beam_on_target.beam.kinetic_energy_gev", "-1", fixed(selection.InitialState{
			BeamOnTarget: &selection.BeamMotion{KineticEnergyGeV: number(-1)},
		})},
		{"angle of beams", root + ".beam.fixed.two_beams.angle_between_beams_rad", "pi", fixed(selection.InitialState{
			TwoBeams: &selection.TwoBeams{
				Beam1: selection.BeamMotion{MomentumGeV: number(1)}, Beam2: selection.BeamMotion{MomentumGeV: number(1)}, AngleRad: number(4),
			},
		})},
		{"off shell", root + ".beam.fixed.two_four_momenta.second", "mass shell", fixed(selection.InitialState{
			FourMomenta: &[2]momentum.Four{{P: momentum.Three{Z: 1}, E: 1}, {E: 0.94}},
		})},
		{"below threshold on a target", root + ".beam.fixed.beam_on_target", "0.308", fixed(selection.InitialState{
			BeamOnTarget: &selection.BeamMotion{KineticEnergyGeV: number(0.3)},
		})},
		{"below threshold as a mass", root + ".beam.fixed.sqrt_s_gev", "threshold of the reaction", fixed(selection.InitialState{SqrtSGeV: number(1.2)})},
		{"below threshold head on", root + ".beam.fixed.two_beams", "threshold of the reaction", fixed(selection.InitialState{
			TwoBeams: &selection.TwoBeams{Beam1: selection.BeamMotion{MomentumGeV: number(0.1)}, Beam2: selection.BeamMotion{MomentumGeV: number(0.1)}},
		})},
		{"sqrt(s)", root + ".beam.fixed.sqrt_s_gev", ">=", fixed(selection.InitialState{SqrtSGeV: number(0.5)})},
		{"extra objects", root + ".extra_objects", "any", func(s *selection.Selection) { first(s).ExtraObjects = &selection.ExtraObjects{} }},
		{"soft photons", root + ".extra_objects.soft_photons.max_count", ">= 1", func(s *selection.Selection) {
			first(s).ExtraObjects = &selection.ExtraObjects{Rule: selection.SoftPhotons, MaxEnergyGeV: 1}
		}},
		{"soft energy", root + ".extra_objects.soft_photons.max_energy_gev", "> 0", func(s *selection.Selection) {
			first(s).ExtraObjects = &selection.ExtraObjects{Rule: selection.SoftPhotons, MaxCount: 1}
		}},
		{"empty condition", part, "exactly one", func(s *selection.Selection) { first(s).Condition.AllOf[0] = selection.Condition{} }},
		{"two members", part, "2 members", func(s *selection.Selection) { first(s).Condition.AllOf[0].NoneOf = []selection.Condition{{}} }},
		{"nested fault", part + ".none_of[0].window.energy.products[0]", "no such product", func(s *selection.Selection) {
			first(s).Condition.AllOf[0] = selection.Condition{NoneOf: []selection.Condition{{Window: within(selection.Energy, 0, 1, "K+")}}}
		}},
		{"no observable", part + ".window", "one observable", set(&selection.Window{})},
		{"no products", part + ".window.invariant_mass.products", "none", set(within(selection.InvariantMass, 0, 1))},
		{"unknown reference", part + ".window.invariant_mass.products[1]", "pi0[3]", set(within(selection.InvariantMass, 0, 1, "pi0[0]", "pi0[3]"))},
		{"ambiguous", part + ".window.invariant_mass.products[0]", "several", set(within(selection.InvariantMass, 0, 1, "pi0"))},
		{"product twice", part + ".window.invariant_mass.products[1]", "twice", set(within(selection.InvariantMass, 0, 1, "pi0[0]", "gamma[1]"))},
		{"direction only", part + ".window.invariant_mass.products[1]", "direction only", set(within(selection.InvariantMass, 0, 1, "pi0[0]", "p"))},
		{"upside down", part + ".window.invariant_mass.max_gev", "> min_gev", func(s *selection.Selection) { window(s).Max = number(0.1) }},
		{"not a number", part + ".window.invariant_mass.min_gev", "NaN", func(s *selection.Selection) { window(s).Min = number(math.NaN()) }},
		{"unit", part + ".window.vertex_z.min_m", "finite", set(&selection.Window{Observable: selection.VertexZ, Min: number(math.Inf(1))})},
		{"frame", part + ".window.invariant_mass.frame", "frame", func(s *selection.Selection) { window(s).Frame = selection.Laboratory }},
		{"initial", part + ".window.momentum_transfer.initial", "beam or target", set(within(selection.MomentumTransfer, -1, 0, "pi0[0]"))},
		{"needs full", part + ".window.opening_angle.first", "direction only", set(&selection.Window{
			Observable: selection.OpeningAngle, Products: []string{"p"}, Second: []string{"gamma[0]"}, Frame: selection.CentreOfMass,
		})},
		{"common product", part + ".window.coplanarity", "common", set(&selection.Window{
			Observable: selection.Coplanarity, Products: []string{"pi0[0]"}, Second: []string{"gamma[0]"},
		})},
		{"others", part + ".window.missing_direction", "measured in full", set(&selection.Window{
			Observable: selection.MissingDirection, Products: []string{"gamma[0]"},
		})},
		{"no beam", part + ".window.missing_mass", "beam", func(s *selection.Selection) {
			first(s).Condition.AllOf = []selection.Condition{only(within(selection.MissingMass, 0, 1, "pi0[0]"))}
			first(s).Beam, first(s).Record = nil, nil
		}},
		{"no tagger", part + ".window.time_difference", "tagged", func(s *selection.Selection) {
			first(s).Condition.AllOf = []selection.Condition{only(&selection.Window{Observable: selection.TimeDifference})}
			first(s).Beam, first(s).Record = nil, nil
		}},
		{"recorded limit", root + ".record[0].missing_direction.min_rad", "absent", func(s *selection.Selection) { first(s).Record[0].Min = number(0) }},
		{"empty ranking", root + ".ranking.closest_masses.masses", "1 to 8", func(s *selection.Selection) { first(s).Ranking = &selection.Ranking{} }},
		{"no mass", root + ".ranking.closest_masses.masses[0].mass_gev", "table mass", func(s *selection.Selection) {
			first(s).Ranking.ClosestMasses[0].Products = []string{"pi0[0]", "pi0[1]"}
		}},
		{"scale", root + ".ranking.closest_masses.masses[0].scale_gev", "> 0", func(s *selection.Selection) {
			first(s).Ranking.ClosestMasses[0].ScaleGeV = number(0)
		}},
		{"conjugate", root + ".also_conjugate", "initial state", func(s *selection.Selection) { first(s).AlsoConjugate = true }},
		{"small group", "groups[0].hypotheses", "at least 2", func(s *selection.Selection) {
			s.Groups = []selection.Group{{Name: "g", Hypotheses: []string{"h00"}}}
		}},
		{"stranger", "groups[0].hypotheses[1]", "no such", func(s *selection.Selection) {
			s.Groups = []selection.Group{{Name: "g", Hypotheses: []string{"h00", "h77"}}}
		}},
		{"no rank", "groups[0].hypotheses[0]", "ranking", func(s *selection.Selection) {
			s.Groups = []selection.Group{{Name: "g", Hypotheses: []string{"h00", "h00"}}}
			first(s).Ranking = nil
		}},
	} {
		t.Run(c.name, func(t *testing.T) {
			s := selection.Selection{Hypotheses: []selection.Hypothesis{valid()}}
			c.spoil(&s)
			list := faultsOf(t, s)
			for _, e := range list {
				if e.Field == c.field && strings.Contains(e.Error(), c.text) {
					return
				}
			}
			t.Errorf("no fault of %s with %q among\n%v", c.field, c.text, list)
		})
	}
}

// TestAllFaultsAtOnce checks that faults in different places come together, in order.
func TestAllFaultsAtOnce(t *testing.T) {
	s := selection.Selection{Name: "a b", Hypotheses: []selection.Hypothesis{valid(), valid(), valid()}}
	s.Hypotheses[0].Prescale = -1
	s.Hypotheses[0].Condition.AllOf[0].Window.Products[0] = "pi0"
	s.Hypotheses[0].Condition.AllOf[1].AnyOf[0].Window.Products[1] = "eta"
	s.Hypotheses[1].Reaction = "gamma p"
	s.Hypotheses[2].Ranking.ClosestMasses[1].Products[0] = "omega"
	var fields []string
	for _, e := range faultsOf(t, s) {
		fields = append(fields, e.Field)
	}
	want := []string{
		"name", "hypotheses[0].prescale_count", "hypotheses[0].condition.all_of[0].window.invariant_mass.products[0]",
		"hypotheses[0].condition.all_of[1].any_of[0].window.missing_mass_squared.products[1]", "hypotheses[1].reaction",
		"hypotheses[2].ranking.closest_masses.masses[1].products[0]",
	}
	if !slices.Equal(fields, want) {
		t.Errorf("faults of\n%s\nwant\n%s", strings.Join(fields, "\n"), strings.Join(want, "\n"))
	}
}

func TestOutline(t *testing.T) {
	o := compile(t, valid()).Outlines()[0]
	if o.Reaction != "gamma p -> p pi0 pi0, pi0 -> gamma gamma" {
		t.Errorf("reaction %q", o.Reaction)
	}
	if want := []string{"p", "pi0[0]", "gamma[0]", "gamma[1]", "pi0[1]", "gamma[2]", "gamma[3]"}; !slices.Equal(o.Products, want) {
		t.Errorf("products %v, want %v", o.Products, want)
	}
	if want := []string{"missing_direction(p)"}; !slices.Equal(o.Observables, want) {
		t.Errorf("observables %v, want %v", o.Observables, want)
	}
}
