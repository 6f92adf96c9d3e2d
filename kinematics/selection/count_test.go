package selection_test

import (
	"strconv"
	"testing"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/selection"
)

// photons returns n photons in different directions.
func photons(n int) []object {
	objects := make([]object, 0, n)
	for i := range n {
		x := float64(i)
		objects = append(objects, photon(0.3+0.01*x, 0.2-0.03*x*x, 0.1+0.05*x))
	}
	return objects
}

// choose is the binomial coefficient.
func choose(n, k int) int {
	c := 1
	for i := range k {
		c = c * (n - i) / (i + 1)
	}
	return c
}

// pairings is the number of ways to split 2k objects into k pairs, (2k-1)!!.
func pairings(k int) int {
	n := 1
	for i := 2*k - 1; i > 1; i -= 2 {
		n *= i
	}
	return n
}

func TestAssignmentCounts(t *testing.T) {
	tracks := func(species uint8, positive, negative int) []object {
		var list []object
		for i := range positive + negative {
			class := event.Positive
			if i >= positive {
				class = event.Negative
			}
			o := track(class, 0.1, 0.1*float64(i), 0.3, 0.2)
			o.species = species
			list = append(list, o)
		}
		return list
	}
	asymmetric := selection.Condition{Window: &selection.Window{Observable: selection.Energy, Products: []string{"gamma[0]"}}}
	symmetric := selection.Condition{AnyOf: []selection.Condition{
		only(&selection.Window{Observable: selection.Energy, Products: []string{"gamma[0]"}}),
		only(&selection.Window{Observable: selection.Energy, Products: []string{"gamma[1]"}}),
	}}
	for _, c := range []struct {
		reaction string
		objects  []object
		// rank are the products whose masses rank; the default, all photons, is symmetric.
		rank      []string
		condition *selection.Condition
		want      int
	}{
		{reaction: "-> gamma gamma", objects: photons(2), want: 1},
		{reaction: "-> gamma gamma", objects: photons(9), want: choose(9, 2)},
		{reaction: "-> gamma gamma gamma", objects: photons(7), want: choose(7, 3)},
		{reaction: "-> pi0 pi0, pi0 -> gamma gamma", objects: photons(4), want: 3},
		{reaction: "-> pi0 pi0, pi0 -> gamma gamma", objects: photons(7), want: choose(7, 4) * 3},
		{reaction: "eta -> pi0 pi0 pi0, pi0 -> gamma gamma", objects: photons(6), want: 15},
		{reaction: "-> pi0 pi0 pi0 pi0, pi0 -> gamma gamma", objects: photons(8), want: pairings(4)},
		{reaction: "-> pi0 pi0 pi0 pi0 pi0, pi0 -> gamma gamma", objects: photons(10), want: pairings(5)},
		// A bachelor photon, two levels of identical decays, and two different pairs.
		{reaction: "omega -> pi0 gamma, pi0 -> gamma gamma", objects: photons(3), want: 3},
		{reaction: "-> omega omega, omega -> pi0 gamma, pi0 -> gamma gamma", objects: photons(6), want: 20 / 2 * 9},
		{reaction: "-> pi0 eta, pi0 -> gamma gamma, eta -> gamma gamma", objects: photons(4), want: 6},
		{
			reaction: "-> eta eta, eta -> pi0 pi0 pi0, pi0 -> gamma gamma", objects: photons(12),
			want: choose(12, 6) / 2 * 15 * 15,
		},
		// Tracks with and without species.
		{reaction: "-> mu+ mu- mu+ mu-", objects: tracks(0, 2, 2), rank: []string{"mu+[0]", "mu+[1]"}, want: 1},
		{reaction: "-> mu+ mu- mu+ mu-", objects: tracks(event.SpeciesMuon, 3, 4), rank: []string{"mu+[0]", "mu+[1]"}, want: 3 * 6},
		{reaction: "-> mu+ mu- mu+ mu-", objects: tracks(event.SpeciesElectron, 3, 4), rank: []string{"mu+[0]", "mu+[1]"}, want: 0},
		{reaction: "-> K+ pi-", objects: tracks(event.SpeciesKaon|event.SpeciesPion, 3, 2), rank: []string{"K+", "pi-"}, want: 6},
		// A ranking that tells the pairs of muons apart.
		{reaction: "-> mu+ mu- mu+ mu-", objects: tracks(0, 2, 2), rank: []string{"mu+[0]", "mu-[0]"}, want: 4},
		{reaction: "-> Z0 Z0, Z0 -> mu+ mu-", objects: tracks(0, 2, 2), rank: []string{"Z0[0]"}, want: 4},
		{reaction: "-> Z0 Z0, Z0 -> mu+ mu-", objects: tracks(0, 2, 2), rank: []string{"Z0[0]", "Z0[1]"}, want: 2},
		{reaction: "-> gamma gamma", objects: photons(5), condition: &asymmetric, want: 20},
		{reaction: "-> gamma gamma", objects: photons(5), condition: &symmetric, want: 10},
		{reaction: "-> pi0 pi0, pi0 -> gamma gamma", objects: photons(4), condition: &asymmetric, want: 12},
	} {
		name := c.reaction + " of " + strconv.Itoa(len(c.objects))
		t.Run(name, func(t *testing.T) {
			h := selection.Hypothesis{Reaction: c.reaction, ExtraObjects: anything(), Condition: c.condition}
			zero := 0.0
			if c.rank == nil {
				c.rank = allPhotons(t, c.reaction)
			}
			h.Ranking = &selection.Ranking{}
			if len(c.rank) == 2 && c.rank[0] == "Z0[0]" {
				for _, p := range c.rank {
					h.Ranking.ClosestMasses = append(h.Ranking.ClosestMasses, selection.MassReference{Products: []string{p}})
				}
			} else {
				h.Ranking.ClosestMasses = []selection.MassReference{{Products: c.rank, MassGeV: &zero}}
			}
			out := judge(t, compileAll(t, selection.Selection{
				Hypotheses: []selection.Hypothesis{h}, AssignmentBudget: 10_000_000,
			}), makeBlock([][]object{c.objects}, nil), selection.AcceptedEntries)
			if c.want == 0 {
				if out.Accepted[0].Get(0) {
					t.Error("accepted without an assignment")
				}
				return
			}
			if e := rows(out)[0]; int(e.Tried) != c.want || out.Status[0] != event.Good {
				t.Errorf("tried %d, want %d; status %v", e.Tried, c.want, out.Status[0])
			}
		})
	}
}

// allPhotons returns the references of all photons of a reaction.
func allPhotons(t *testing.T, reaction string) []string {
	t.Helper()
	var list []string
	for _, p := range compile(t, selection.Hypothesis{Reaction: reaction}).Outlines()[0].Products {
		if len(p) > 5 && p[:5] == "gamma" {
			list = append(list, p)
		}
	}
	return list
}

// TestTwelvePhotons holds that six neutral pions of twelve photons are found within a
// budget far below the number of pairings where windows prune, and that a budget that
// does not suffice gives its status.
func TestTwelvePhotons(t *testing.T) {
	h := selection.Hypothesis{Reaction: "-> pi0 pi0 pi0 pi0 pi0 pi0, pi0 -> gamma gamma", Condition: &selection.Condition{}}
	for i := range 6 {
		h.Condition.AllOf = append(h.Condition.AllOf, only(within(selection.InvariantMass, 0.13, 0.14, "pi0["+strconv.Itoa(i)+"]")))
	}
	h.Ranking = closest("pi0[0]", "pi0[1]", "pi0[2]", "pi0[3]", "pi0[4]", "pi0[5]")
	var objects []object
	var fours [2]momentum.Four
	for i := range 6 {
		// A pion of the table's mass decays across its flight.
		p := momentum.Three{X: 0.4 * float64(i-3), Y: 0.3 * float64(i%2), Z: 0.5 + 0.1*float64(i)}
		boost, err := momentum.NewBoost(p, 0.1349768)
		if err != nil {
			t.Fatal(err)
		}
		across := momentum.Three{X: -p.Y, Y: p.X}.Unit()
		if p.Y == 0 && p.X == 0 {
			across = momentum.Three{X: 1}
		}
		for k, sign := range []float64{1, -1} {
			fours[k] = boost.FromRest(momentum.Four{P: across.Scale(sign * 0.1349768 / 2), E: 0.1349768 / 2})
			objects = append(objects, photon(fours[k].P.X, fours[k].P.Y, fours[k].P.Z))
		}
	}
	// Deal them, so that partners do not stand side by side.
	dealt := make([]object, 0, len(objects))
	for k := range objects {
		dealt = append(dealt, objects[k*7%12])
	}
	s := selection.Selection{Hypotheses: []selection.Hypothesis{h}, AssignmentBudget: 1000}
	out := judge(t, compileAll(t, s), makeBlock([][]object{dealt}, nil), selection.AcceptedEntries)
	if out.Status[0] != event.Good || !out.Accepted[0].Get(0) {
		t.Fatalf("status %v, accepted %v", out.Status[0], out.Accepted[0].Get(0))
	}
	e := rows(out)[0]
	t.Logf("twelve photons: %d assignments tried of %d pairings", e.Tried, pairings(6))
	for i := range 6 {
		a, b := e.Assignment[3*i+1], e.Assignment[3*i+2]
		if a*7%12/2 != b*7%12/2 {
			t.Errorf("pion %d is photons %d and %d", i, a, b)
		}
	}
	h.Condition, s.AssignmentBudget = nil, 10_394
	s.Hypotheses = []selection.Hypothesis{h, {Reaction: "-> gamma gamma gamma gamma gamma gamma gamma gamma gamma gamma gamma gamma"}}
	out = judge(t, compileAll(t, s), makeBlock([][]object{dealt}, nil), selection.AllEntries)
	if out.Status[0] != event.BudgetUsed || !out.Accepted[0].Get(0) || out.Accepted[1].Get(0) {
		t.Errorf("budget below the count: status %v, accepted %v %v", out.Status[0], out.Accepted[0], out.Accepted[1])
	}
	s.AssignmentBudget = 10_396
	out = judge(t, compileAll(t, s), makeBlock([][]object{dealt}, nil), selection.AllEntries)
	if out.Status[0] != event.Good || rows(out)[0].Tried != 10_395 || !out.Accepted[1].Get(0) {
		t.Errorf("budget of the count: status %v, tried %d", out.Status[0], rows(out)[0].Tried)
	}
}
