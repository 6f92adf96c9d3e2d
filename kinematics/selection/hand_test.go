package selection_test

import (
	"math"
	"slices"
	"testing"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/selection"
)

// alike reports whether two numbers agree to 1e-13 of the larger, or of 1.
func alike(a, b float64) bool {
	return math.Abs(a-b) <= 1e-13*max(1, math.Abs(a), math.Abs(b))
}

// TestObservablesByHand takes numbers that can be checked on paper: a beam photon of
// 2 GeV on a proton, and two photons of 0.5 GeV and 1 GeV at right angles.
func TestObservablesByHand(t *testing.T) {
	const proton = 0.93827208943
	h := selection.Hypothesis{
		Reaction: "gamma p -> p pi0, pi0 -> gamma gamma",
		Beam:     &selection.BeamSource{Tagged: &selection.TaggedBeam{}},
		Measurements: []selection.ProductMeasurement{
			{Product: "p", Measurement: selection.Direction},
		},
	}
	pair := []string{"gamma[0]", "gamma[1]"}
	record := []struct {
		window selection.Window
		want   float64
	}{
		// m^2 = 2 E1 E2 (1 - cos 90).
		{selection.Window{Observable: selection.InvariantMassSquared, Products: pair}, 1},
		{selection.Window{Observable: selection.InvariantMass, Products: []string{"pi0"}}, 1},
		{selection.Window{Observable: selection.Energy, Products: pair}, 1.5},
		// p = (0.5, 0, 1).
		{selection.Window{Observable: selection.Momentum, Products: pair}, math.Sqrt(1.25)},
		{selection.Window{Observable: selection.TransverseMomentum, Products: pair}, 0.5},
		{selection.Window{Observable: selection.Angle, Products: pair}, math.Atan(0.5)},
		{selection.Window{Observable: selection.Angle, Products: []string{"gamma[0]"}}, math.Pi / 2},
		{selection.Window{Observable: selection.OpeningAngle, Products: pair[:1], Second: pair[1:]}, math.Pi / 2},
		// Recoil (E, p) = (2 + m - 1.5, (-0.5, 0, 1)).
		{selection.Window{Observable: selection.MissingMassSquared, Products: pair}, (0.5+proton)*(0.5+proton) - 1.25},
		{selection.Window{Observable: selection.MissingMass, Products: pair}, math.Sqrt((0.5+proton)*(0.5+proton) - 1.25)},
		// The proton goes along (-1, 0, 2), exactly where the momentum is missing.
		{selection.Window{Observable: selection.MissingDirection, Products: []string{"p"}}, 0},
		{selection.Window{Observable: selection.Coplanarity, Products: pair, Second: []string{"p"}}, 0},
		// t = (2 - 1.5)^2 - |(−0.5, 0, 1)|^2.
		{selection.Window{Observable: selection.MomentumTransfer, Products: pair, Initial: selection.Beam}, 0.25 - 1.25},
		{selection.Window{Observable: selection.MomentumTransfer, Products: pair, Initial: selection.Target},
			(proton-1.5)*(proton-1.5) - 1.25},
		{selection.Window{Observable: selection.TimeDifference}, 0.25},
		{selection.Window{Observable: selection.UnusedPhotonEnergy}, 0},
		{selection.Window{Observable: selection.VertexZ}, -0.02},
	}
	for _, r := range record {
		h.Record = append(h.Record, r.window)
	}
	block := makeBlock([][]object{{
		photon(0.5, 0, 0), photon(0, 0, 1), track(event.Positive, proton, -1, 0, 2),
	}}, [][]beam{{{2, 0.25}}})
	block.Vertex = &event.Vertex{Positions: event.Positions{X: []float64{0}, Y: []float64{0}, Z: []float64{-0.02}}}
	out := judge(t, compile(t, h), block, selection.AcceptedEntries)
	entries := rows(out)
	if len(entries) != 1 || !out.Gate.Get(0) {
		t.Fatalf("%d entries, gate %v", len(entries), out.Gate)
	}
	if e := entries[0]; e.BeamRow != 0 || e.Weight != 1 || !slices.Equal(e.Assignment, []int16{2, -1, 0, 1}) {
		t.Errorf("entry %+v", e)
	}
	for i, r := range record {
		if got := entries[0].Observables[i]; !alike(got, r.want) {
			t.Errorf("%v of %v: got %v, want %v", r.window.Observable, r.window.Products, got, r.want)
		}
	}
}

// TestCentreOfMass checks frame dependent observables against a boost and t' against
// t_forward - t with t_forward from the same momentum along the beam.
func TestCentreOfMass(t *testing.T) {
	energy := 1.7
	h := selection.Hypothesis{
		Reaction: "gamma p -> K+ Lambda, Lambda -> p pi-",
		Beam:     &selection.BeamSource{Tagged: &selection.TaggedBeam{}},
		Record: []selection.Window{
			{Observable: selection.Energy, Products: []string{"K+"}, Frame: selection.CentreOfMass},
			{Observable: selection.Momentum, Products: []string{"K+"}, Frame: selection.CentreOfMass},
			{Observable: selection.TransverseMomentum, Products: []string{"K+"}, Frame: selection.CentreOfMass},
			{Observable: selection.Angle, Products: []string{"K+"}, Frame: selection.CentreOfMass},
			{Observable: selection.OpeningAngle, Products: []string{"K+"}, Second: []string{"p"}, Frame: selection.CentreOfMass},
			{Observable: selection.MomentumTransferPrime, Products: []string{"K+"}, Initial: selection.Beam},
			{Observable: selection.MomentumTransferPrime, Products: []string{"K+"}, Initial: selection.Target},
		},
	}
	table := standard(t)
	mass := func(name string) float64 {
		p, err := table.Named(name)
		if err != nil {
			t.Fatal(err)
		}
		return p.Mass
	}
	kaon := track(event.Positive, mass("K+"), 0.2, -0.1, 0.7)
	kaon.species = event.SpeciesKaon
	proton := track(event.Positive, mass("p"), -0.1, 0.05, 0.6)
	proton.species = event.SpeciesProton
	pion := track(event.Negative, mass("pi-"), -0.1, 0.05, 0.1)
	out := judge(t, compile(t, h), makeBlock([][]object{{pion, proton, kaon}}, [][]beam{{{energy, 0}}}), selection.AcceptedEntries)
	got := rows(out)[0].Observables

	total := energy + mass("p")
	beta := energy / total
	gamma := 1 / math.Sqrt(1-beta*beta)
	boosted := func(f momentum.Four) momentum.Four {
		return momentum.Four{
			P: momentum.Three{X: f.P.X, Y: f.P.Y, Z: gamma * (f.P.Z - beta*f.E)},
			E: gamma * (f.E - beta*f.P.Z),
		}
	}
	k, p := boosted(kaon.four), boosted(proton.four)
	first := boosted(momentum.Four{P: momentum.Three{Z: energy}, E: energy})
	second := boosted(momentum.Four{E: mass("p")})
	prime := func(initial momentum.Four) float64 {
		along := momentum.Four{P: initial.P.Unit().Scale(k.P.Norm()), E: k.E}
		return initial.Sub(along).Dot(initial.Sub(along)) - initial.Sub(k).Dot(initial.Sub(k))
	}
	want := []float64{
		k.E, k.P.Norm(), k.P.Transverse(), k.P.Theta(), k.P.Angle(p.P), prime(first), prime(second),
	}
	for i := range want {
		if math.Abs(got[i]-want[i]) > 1e-12 {
			t.Errorf("%v %v: got %v, want %v", h.Record[i].Observable, h.Record[i].Products, got[i], want[i])
		}
	}
}

// TestNotComputed holds the rule that what cannot be computed lies outside every
// window, so that none_of it holds.
func TestNotComputed(t *testing.T) {
	vertex := &selection.Window{Observable: selection.VertexZ}
	for _, c := range []struct {
		name      string
		condition selection.Condition
		accepted  bool
	}{
		{"without limits", only(vertex), false},
		{"none of", selection.Condition{NoneOf: []selection.Condition{only(vertex)}}, true},
		{"none of two", selection.Condition{NoneOf: []selection.Condition{only(vertex), only(within(selection.Energy, 0, 9, "gamma"))}}, false},
		{"none of two inside any of", selection.Condition{AnyOf: []selection.Condition{
			{NoneOf: []selection.Condition{only(vertex), only(within(selection.Energy, 0, 9, "gamma"))}},
		}}, false},
		{"any of", selection.Condition{AnyOf: []selection.Condition{only(vertex), only(within(selection.Energy, 0, 9, "gamma"))}}, true},
		{"all of", selection.Condition{AllOf: []selection.Condition{only(vertex), only(within(selection.Energy, 0, 9, "gamma"))}}, false},
	} {
		t.Run(c.name, func(t *testing.T) {
			p := compile(t, selection.Hypothesis{Reaction: "-> gamma", Condition: &c.condition})
			out := judge(t, p, makeBlock([][]object{{photon(0, 1, 0)}}, nil), selection.NoEntries)
			if out.Accepted[0].Get(0) != c.accepted {
				t.Errorf("accepted: %v", out.Accepted[0].Get(0))
			}
		})
	}
}

// TestOpenTimeWindows holds that a limit which is absent does not cut.
func TestOpenTimeWindows(t *testing.T) {
	minus := -0.5
	p := compile(t, selection.Hypothesis{
		Reaction: "gamma p -> p pi0, pi0 -> gamma gamma", ExtraObjects: &selection.ExtraObjects{Rule: selection.AnyExtraObjects},
		Measurements: []selection.ProductMeasurement{{Product: "p", Measurement: selection.Missing}},
		Beam: &selection.BeamSource{Tagged: &selection.TaggedBeam{
			Prompt:    &selection.TimeWindow{MaxNS: new(2.0)},
			SideBands: []selection.TimeWindow{{MinNS: new(2.0), Weight: &minus}},
		}},
	})
	block := makeBlock([][]object{{photon(0, 1, 0), photon(1, 0, 0)}}, nil)
	block.Beam = &event.Beam{
		Offsets: []int32{0, 3}, EnergyGeV: []float64{3, 3, 3}, SigmaGeV: []float64{0, 0, 0}, TimeNS: []float64{-1e9, 2, 1e9},
	}
	var weights []float64
	for _, e := range rows(judge(t, p, block, selection.AllEntries)) {
		weights = append(weights, e.Weight)
	}
	if !slices.Equal(weights, []float64{1, minus, minus}) {
		t.Errorf("weights %v", weights)
	}
}

// TestNegativeSquare checks that a mass of a negative square lies outside even where
// nothing limits it, and that its signed square is reported.
func TestNegativeSquare(t *testing.T) {
	h := selection.Hypothesis{
		Reaction:     "-> pi+ pi-",
		Measurements: []selection.ProductMeasurement{{Product: "pi+", MassFromEvent: true}, {Product: "pi-", MassFromEvent: true}},
		Record: []selection.Window{
			{Observable: selection.InvariantMassSquared, Products: []string{"pi+", "pi-"}},
			{Observable: selection.InvariantMass, Products: []string{"pi+", "pi-"}},
		},
	}
	h.Condition = &selection.Condition{Window: &selection.Window{Observable: selection.InvariantMass, Products: []string{"pi+", "pi-"}}}
	events := [][]object{{
		{class: event.Positive, four: momentum.Four{P: momentum.Three{X: 1}, E: 0.5}},
		{class: event.Negative, four: momentum.Four{P: momentum.Three{X: 1}, E: 1}},
	}}
	out := judge(t, compile(t, h), makeBlock(events, nil), selection.AllEntries)
	e := rows(out)[0]
	if out.Accepted[0].Get(0) || e.Status != event.Rejected {
		t.Error("a mass that does not exist passes")
	}
	if !alike(e.Observables[0], 1.5*1.5-4) || !math.IsNaN(e.Observables[1]) {
		t.Errorf("observables %v, want -1.75 and NaN", e.Observables)
	}
}

// TestHalfOpen checks both ends of a window on a number that doubles hold exactly.
func TestHalfOpen(t *testing.T) {
	for _, c := range []struct {
		low, high float64
		accepted  bool
	}{{0.5, 1, true}, {0, 0.5, false}, {0.5, math.Nextafter(0.5, 1), true}, {math.Nextafter(0.5, 1), 1, false}} {
		for _, o := range []selection.Observable{selection.Energy, selection.InvariantMass} {
			p := compile(t, selection.Hypothesis{
				Reaction: "-> gamma gamma", ExtraObjects: anything(), Condition: allOf(within(o, c.low, c.high, "gamma[0]", "gamma[1]")),
			})
			// Two photons of 0.25 GeV back to back: energy and mass are 0.5 GeV.
			out := judge(t, p, makeBlock([][]object{{photon(0, 0.25, 0), photon(0, -0.25, 0)}}, nil), selection.NoEntries)
			if out.Accepted[0].Get(0) != c.accepted {
				t.Errorf("%v = 0.5 in [%v, %v): %v", o, c.low, c.high, !c.accepted)
			}
		}
	}
}
