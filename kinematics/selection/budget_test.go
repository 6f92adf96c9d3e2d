package selection_test

import (
	"math"
	"slices"
	"strconv"
	"testing"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/selection"
)

// ranked are photons ranked by the mass of all of them, so that each choice is tried.
func ranked(t *testing.T, h selection.Hypothesis) selection.Hypothesis {
	t.Helper()
	zero := 0.0
	h.ExtraObjects = anything()
	h.Ranking = &selection.Ranking{ClosestMasses: []selection.MassReference{{Products: allPhotons(t, h.Reaction), MassGeV: &zero}}}
	return h
}

// TestGateWhenTheBudgetEnds judges an event of five photons with selections whose work
// budget ends in one of their hypotheses: vetoes are judged first, a veto that accepts
// closes the gate whatever else is left untried, and nothing else that the budget left
// untried does.
func TestGateWhenTheBudgetEnds(t *testing.T) {
	accepts, rejects := allOf(within(selection.Energy, 0, 9, "gamma")), allOf(within(selection.Energy, 8, 9, "gamma"))
	one := func(role selection.Role, c *selection.Condition) selection.Hypothesis {
		return selection.Hypothesis{Reaction: "-> gamma", Role: role, Condition: c, ExtraObjects: anything()}
	}
	busy := func(role selection.Role) selection.Hypothesis {
		h := ranked(t, selection.Hypothesis{Reaction: "-> gamma gamma", Role: role}) // ten pairs
		h.Condition = allOf(within(selection.Energy, 0, 9, "gamma[0]", "gamma[1]"), within(selection.InvariantMass, 8, 9, "gamma[0]", "gamma[1]"))
		return h
	}
	never := busy(selection.Gate)
	never.Prescale = 1 << 40
	const gate, shadow, veto = selection.Gate, selection.Shadow, selection.Veto
	for _, c := range []struct {
		name       string
		budget     int64
		hypotheses []selection.Hypothesis
		gate       bool
		unfinished []int
	}{
		{"a veto after what uses the budget", 1, []selection.Hypothesis{one(gate, accepts), busy(shadow), one(veto, accepts)}, false, []int{0, 1}},
		{"a veto that has the last of it", 2, []selection.Hypothesis{one(gate, accepts), busy(shadow), one(veto, accepts)}, false, []int{1}},
		{"a veto that does not accept", 5, []selection.Hypothesis{busy(gate), one(veto, rejects)}, true, []int{0}},
		{"a veto that is not finished", 1, []selection.Hypothesis{one(gate, accepts), busy(veto)}, true, []int{0, 1}},
		{"a veto that is not finished, and no gate", 1, []selection.Hypothesis{one(shadow, accepts), busy(veto)}, false, []int{0, 1}},
		{"a gate that is not finished", 9, []selection.Hypothesis{busy(gate)}, true, []int{0}},
		{"the same with enough", 10, []selection.Hypothesis{busy(gate)}, false, nil},
		{"a gate that its prescale leaves out", 9, []selection.Hypothesis{never}, false, []int{0}},
		{"a shadow alone is not finished", 6, []selection.Hypothesis{one(gate, rejects), busy(shadow)}, false, []int{1}},
		{"no objects for what comes after", 9, []selection.Hypothesis{busy(shadow), {Reaction: "-> K+ K-", ExtraObjects: anything()}}, false, []int{0}},
	} {
		t.Run(c.name, func(t *testing.T) {
			p := compileAll(t, selection.Selection{Hypotheses: c.hypotheses, AssignmentBudget: c.budget})
			block := makeBlock([][]object{photons(5)}, nil)
			out := judge(t, p, block, selection.AllEntries)
			status := event.Good
			if c.unfinished != nil {
				status = event.BudgetUsed
			}
			if out.Status[0] != status || out.Gate.Get(0) != c.gate {
				t.Errorf("status %v, gate %v", out.Status[0], out.Gate.Get(0))
			}
			var unfinished, order []int
			for _, e := range rows(out) {
				order = append(order, int(e.Hypothesis))
				if e.Status == event.Unfinished {
					unfinished = append(unfinished, int(e.Hypothesis))
				}
				if e.Status == event.Unfinished && slices.ContainsFunc(e.Assignment, func(o int16) bool { return o >= 0 }) {
					t.Errorf("an unfinished entry with the assignment %v", e.Assignment)
				}
			}
			if !slices.Equal(unfinished, c.unfinished) || !slices.IsSorted(order) {
				t.Errorf("unfinished %v, want %v; entries of %v", unfinished, c.unfinished, order)
			}
			x := p.NewWorker(selection.NoEntries).Explain(block, 0, 5)
			if x.Status != status || x.Gate != c.gate {
				t.Errorf("explained with status %v, gate %v", x.Status, x.Gate)
			}
			for h := range x.Hypotheses {
				if e := &x.Hypotheses[h]; e.Unfinished != slices.Contains(c.unfinished, h) || e.Accepted != out.Accepted[h].Get(0) {
					t.Errorf("hypothesis %d is explained as %+v", h, e)
				}
			}
			if accepted := judge(t, p, block, selection.AcceptedEntries); slices.Contains(accepted.Entries.Status, event.Unfinished) {
				t.Error("an unfinished entry beside those of hypotheses that accept")
			}
		})
	}
}

// TestUnfinishedEntries: an unfinished hypothesis has an entry for each beam candidate that
// no assignment was accepted for; it records nothing unless a fit was made.
func TestUnfinishedEntries(t *testing.T) {
	h := ranked(t, selection.Hypothesis{
		Reaction: "gamma p -> p gamma gamma", Measurements: missing("p"),
		Beam:      &selection.BeamSource{Tagged: &selection.TaggedBeam{}},
		Condition: allOf(within(selection.MissingMass, 8, 9, "gamma[0]", "gamma[1]")),
		Record:    []selection.Window{{Observable: selection.InvariantMass, Products: []string{"gamma[0]", "gamma[1]"}}},
	})
	h.RecordUncertainties = true
	block := makeBlock([][]object{photons(5)}, [][]beam{{{2, 0}, {1, 1}}})
	out := judge(t, compileAll(t, selection.Selection{Hypotheses: []selection.Hypothesis{h}, AssignmentBudget: 7}), block, selection.AllEntries)
	got := rows(out)
	if len(got) != 2 || out.Status[0] != event.BudgetUsed {
		t.Fatalf("%d entries, status %v", len(got), out.Status[0])
	}
	for i, e := range got {
		// Seven of the pairs with a candidate: three with both and one with the first.
		if e.Status != event.Unfinished || int(e.BeamRow) != i || e.Weight != 1 || e.Tried != 4 ||
			!slices.Equal(e.Assignment, []int16{-1, -1, -1}) || !math.IsNaN(e.Observables[0]) || !math.IsNaN(e.Uncertainties[0]) {
			t.Errorf("entry %d: %+v", i, e)
		}
	}
	const resolution = 0.002
	fitted, _ := photonPions(3, 1, 3, resolution, resolution)
	pions := pionsOnly(3)
	pions.Condition = allOf(within(selection.FitProbability, 0.9999999, 1))
	for budget, status := range map[int64]event.EntryStatus{4: event.Unfinished, 15: event.Rejected} {
		out := judge(t, compileAll(t, selection.Selection{Hypotheses: []selection.Hypothesis{pions}, AssignmentBudget: budget}), fitted, selection.AllEntries)
		if e := rows(out)[0]; e.Status != status || int64(e.Tried) != budget || e.Assignment[1] < 0 || !(e.Fit.ChiSquare > 0) {
			t.Errorf("budget %d: %+v", budget, e)
		}
	}
}

// TestBudgetCountsAssignments holds that the budget counts what an explanation says was
// tried, and nothing else: with that number the event is judged, with one less it is not,
// and all that was tried is counted.
func TestBudgetCountsAssignments(t *testing.T) {
	six := "-> pi0 pi0 pi0 pi0 pi0 pi0, pi0 -> gamma gamma"
	windows := ranked(t, selection.Hypothesis{Reaction: six, Condition: &selection.Condition{}})
	for _, pion := range []string{"pi0[0]", "pi0[1]", "pi0[2]", "pi0[3]", "pi0[4]", "pi0[5]"} {
		windows.Condition.AllOf = append(windows.Condition.AllOf, only(within(selection.InvariantMass, 0, 1.5, pion)))
	}
	tagged := ranked(t, selection.Hypothesis{
		Reaction: "gamma p -> p gamma gamma gamma", Measurements: missing("p"), Beam: &selection.BeamSource{Tagged: &selection.TaggedBeam{}},
	})
	for _, c := range []struct {
		name   string
		h      selection.Hypothesis
		events int
		want   int64 // 0 where it is not known by a formula
	}{
		{"twelve photons", ranked(t, selection.Hypothesis{Reaction: six}), 12, 10_395},
		{"one more than needed", ranked(t, selection.Hypothesis{Reaction: six}), 13, 13 * 10_395},
		{"twelve of thirteen", ranked(t, selection.Hypothesis{Reaction: "-> gamma gamma gamma gamma gamma gamma gamma gamma gamma gamma gamma gamma"}), 13, 13},
		{"two levels", ranked(t, selection.Hypothesis{Reaction: "-> omega omega, omega -> pi0 gamma, pi0 -> gamma gamma"}), 8, 28 * 90},
		{"windows", windows, 12, 0},
		{"three candidates", tagged, 6, 3 * 20},
	} {
		t.Run(c.name, func(t *testing.T) {
			block := makeBlock([][]object{photons(c.events)}, [][]beam{{{2, 0}, {1, 1}, {1.5, 2}}})
			explain := func(budget int64) selection.Explanation {
				p := compileAll(t, selection.Selection{Hypotheses: []selection.Hypothesis{c.h}, AssignmentBudget: budget})
				return p.NewWorker(selection.NoEntries).Explain(block, 0, 1)
			}
			x := explain(1 << 30)
			tried := x.Hypotheses[0].Tried
			if x.Status != event.Good || c.want != 0 && tried != c.want {
				t.Fatalf("%d tried, want %d; status %v", tried, c.want, x.Status)
			}
			if c.want == 0 && tried > 10_395 {
				t.Errorf("%d tried: windows add to the work", tried)
			}
			if x = explain(tried); x.Status != event.Good || x.Hypotheses[0].Tried != tried {
				t.Errorf("a budget of %d: %d tried, status %v", tried, x.Hypotheses[0].Tried, x.Status)
			}
			if x = explain(tried - 1); x.Status != event.BudgetUsed || x.Hypotheses[0].Tried != tried-1 {
				t.Errorf("a budget of %d: %d tried, status %v", tried-1, x.Hypotheses[0].Tried, x.Status)
			}
		})
	}
}

// TestDeadEndsAreBounded: products that compete for the same objects and cannot all have one
// end no assignment that could be counted. The work stays bounded by the budget all the same.
func TestDeadEndsAreBounded(t *testing.T) {
	const slots, budget = 12, 1000
	h := selection.Hypothesis{
		Reaction: "-> mu+ mu+ mu+ mu+ mu+ mu+ mu+ mu+ mu+ mu+ mu+ mu+", ExtraObjects: anything(), Condition: &selection.Condition{},
	}
	for i := range slots { // each product has a window of its own, so that none are exchanged
		low := -1 - float64(i)
		window := selection.Window{Observable: selection.Energy, Min: &low, Products: []string{"mu+[" + strconv.Itoa(i) + "]"}}
		h.Condition.AllOf = append(h.Condition.AllOf, only(&window))
	}
	var objects []object
	for i := range 16 { // of which eleven can be muons: 11! ways, none of which ends well
		o := track(event.Positive, 0.1, 0.1*float64(i), 0.3, 0.2)
		if i >= slots-1 {
			o.species = event.SpeciesKaon
		}
		objects = append(objects, o)
	}
	w := compileAll(t, selection.Selection{Hypotheses: []selection.Hypothesis{h}, AssignmentBudget: budget}).NewWorker(selection.AllEntries)
	asked := 0
	w.Stop = func() bool {
		asked++
		return false
	}
	var out event.VerdictBlock
	w.Reset(&out)
	w.Judge(makeBlock([][]object{objects}, nil), 0, 1, &out)
	if out.Status[0] != event.BudgetUsed || !out.Gate.Get(0) {
		t.Errorf("status %v, gate %v", out.Status[0], out.Gate.Get(0))
	}
	// A way has at most as many steps as there are products, and Stop is asked every 256.
	const deadEnds, every = 16 * budget, 256
	if most := deadEnds * slots / every; asked > most || asked < deadEnds/every {
		t.Errorf("asked %d times, want %d to %d", asked, deadEnds/every, most)
	}
}
