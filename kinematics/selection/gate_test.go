package selection_test

import (
	"math"
	"slices"
	"testing"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/selection"
)

// manyEvents makes n events of one photon of 1 GeV.
func manyEvents(n int) *event.Block {
	return makeBlock(slices.Repeat([][]object{{photon(1, 0, 0)}}, n), nil)
}

// count counts the bits of n events.
func count(b event.Bits, n int) int {
	set := 0
	for i := range n {
		if b.Get(i) {
			set++
		}
	}
	return set
}

func TestRoles(t *testing.T) {
	accepts := allOf(within(selection.Energy, 0, 2, "gamma"))
	rejects := allOf(within(selection.Energy, 2, 3, "gamma"))
	hypothesis := func(role selection.Role, c *selection.Condition) selection.Hypothesis {
		return selection.Hypothesis{Reaction: "-> gamma", Role: role, Condition: c}
	}
	for _, c := range []struct {
		name       string
		hypotheses []selection.Hypothesis
		gate       bool
	}{
		{"default is gate", []selection.Hypothesis{hypothesis(0, accepts)}, true},
		{"gate rejects", []selection.Hypothesis{hypothesis(selection.Gate, rejects)}, false},
		{"shadow alone", []selection.Hypothesis{hypothesis(selection.Shadow, accepts)}, false},
		{"shadow beside gate", []selection.Hypothesis{hypothesis(selection.Shadow, accepts), hypothesis(0, accepts)}, true},
		{"veto after gate", []selection.Hypothesis{hypothesis(0, accepts), hypothesis(selection.Veto, accepts)}, false},
		{"veto before gate", []selection.Hypothesis{hypothesis(selection.Veto, accepts), hypothesis(0, accepts)}, false},
		{"veto rejects", []selection.Hypothesis{hypothesis(0, accepts), hypothesis(selection.Veto, rejects)}, true},
	} {
		t.Run(c.name, func(t *testing.T) {
			out := judge(t, compile(t, c.hypotheses...), manyEvents(1), selection.NoEntries)
			if out.Gate.Get(0) != c.gate {
				t.Errorf("gate %v", out.Gate.Get(0))
			}
			for i, h := range c.hypotheses {
				if want := h.Condition == accepts; out.Accepted[i].Get(0) != want {
					t.Errorf("bit of hypothesis %d is %v before roles", i, !want)
				}
			}
		})
	}
}

// TestPrescale checks that a prescale keeps about one in N of consecutive ids, within
// four standard deviations, the same on replay, and that two hypotheses choose
// independently.
func TestPrescale(t *testing.T) {
	const n, every = 4096, 8
	hypotheses := []selection.Hypothesis{
		{Name: "one", Reaction: "-> gamma", Prescale: every},
		{Name: "two", Reaction: "-> gamma", Prescale: every},
	}
	block := manyEvents(n)
	alone := func(k int) event.Bits {
		return judge(t, compile(t, hypotheses[k]), block, selection.NoEntries).Gate
	}
	first, second := alone(0), alone(1)
	both := judge(t, compile(t, hypotheses...), block, selection.NoEntries)
	if count(both.Accepted[0], n) != n {
		t.Error("the bits of a hypothesis are prescaled")
	}
	together := 0
	for i := range n {
		if both.Gate.Get(i) != (first.Get(i) || second.Get(i)) {
			t.Fatalf("event %d: the gate is not the union", i)
		}
		if first.Get(i) && second.Get(i) {
			together++
		}
	}
	check := func(name string, got int, p float64) {
		mean, sigma := n*p, math.Sqrt(n*p*(1-p))
		if math.Abs(float64(got)-mean) > 4*sigma {
			t.Errorf("%s: kept %d, want %.0f +- %.0f", name, got, mean, sigma)
		}
	}
	check("one", count(first, n), 1./every)
	check("two", count(second, n), 1./every)
	check("both", together, 1./(every*every))
	if again := alone(0); !slices.Equal(again, first) {
		t.Error("the choice differs on replay")
	}
}

func TestGroups(t *testing.T) {
	s := selection.Selection{
		Hypotheses: []selection.Hypothesis{
			{Name: "pi0", Reaction: "-> pi0, pi0 -> gamma gamma", Ranking: closest("pi0"), ExtraObjects: anything()},
			{Name: "eta", Reaction: "-> eta, eta -> gamma gamma", Ranking: closest("eta"), ExtraObjects: anything()},
			{Name: "other", Reaction: "-> gamma gamma", ExtraObjects: anything()},
		},
		Groups: []selection.Group{{Name: "mesons", Hypotheses: []string{"eta", "pi0"}}},
	}
	out := judge(t, compileAll(t, s), makeBlock([][]object{
		{photon(0.06, 0, 0), photon(-0.06, 0, 0)},
		{photon(0.25, 0, 0), photon(-0.25, 0, 0)},
		{photon(0.25, 0, 0)},
		{photon(0.25, 0, 0), photon(-0.25, 0, 0), photon(0, 0.06, 0), photon(0, -0.07, 0)},
	}, nil), selection.NoEntries)
	if want := []int16{0, 1, -1, 0}; !slices.Equal(out.Best[0], want) {
		t.Errorf("best %v, want %v", out.Best[0], want)
	}
}

func TestTaggedCandidates(t *testing.T) {
	minus := -0.25
	h := selection.Hypothesis{
		Reaction: "gamma p -> p gamma",
		Measurements: []selection.ProductMeasurement{
			{Product: "p", Measurement: selection.Missing},
		},
		Beam: &selection.BeamSource{Tagged: &selection.TaggedBeam{
			Prompt:    &selection.TimeWindow{MinNS: new(-1.0), MaxNS: new(1.0)},
			SideBands: []selection.TimeWindow{{MinNS: new(-9.0), MaxNS: new(-5.0), Weight: &minus}, {MinNS: new(5.0), MaxNS: new(9.0), Weight: &minus}},
		}},
		Condition: allOf(within(selection.MissingMassSquared, 0, 9, "gamma")),
		Record:    []selection.Window{{Observable: selection.TimeDifference}, {Observable: selection.MomentumTransfer, Initial: selection.Beam, Products: []string{"gamma"}}},
	}
	objects := []object{photon(0, 0, 1)}
	block := makeBlock([][]object{objects, objects, objects, objects}, [][]beam{
		{{2, 0}, {2, 3}, {1.5, 8}, {0.1, 0.5}, {2, -9}, {2, 9}, {2, 1}},
		{{2, 3}},
		{{2, 6}},
		{},
	})
	out := judge(t, compile(t, h), block, selection.AllEntries)
	type entry struct {
		row    int16
		weight float64
		status event.EntryStatus
	}
	var got []entry
	for _, e := range rows(out) {
		got = append(got, entry{e.BeamRow, e.Weight, e.Status})
	}
	want := []entry{
		{0, 1, event.Accepted}, {2, -0.25, event.Accepted}, {3, 1, event.Rejected}, {4, -0.25, event.Accepted},
		{0, -0.25, event.Accepted},
	}
	if !slices.Equal(got, want) {
		t.Errorf("entries %v, want %v", got, want)
	}
	if !slices.Equal(out.Entries.Offsets, []int32{0, 4, 4, 5, 5}) {
		t.Errorf("offsets %v", out.Entries.Offsets)
	}
	if out.Accepted[0].Get(1) || !out.Accepted[0].Get(2) || out.Accepted[0].Get(3) {
		t.Errorf("accepted %v", out.Accepted[0])
	}
}

// TestStop checks that Stop ends the judging inside an event, which is then expired and
// has no entries, and that the next call starts afresh.
func TestStop(t *testing.T) {
	p := compile(t, selection.Hypothesis{
		Reaction: "-> pi0 pi0 pi0 pi0 pi0 pi0, pi0 -> gamma gamma", Ranking: closest("pi0[0]"), ExtraObjects: anything(),
	}, selection.Hypothesis{Reaction: "-> gamma", ExtraObjects: anything()})
	block := makeBlock([][]object{photons(1), photons(12), photons(1)}, nil)
	w := p.NewWorker(selection.AllEntries)
	asked := 0
	w.Stop = func() bool {
		asked++
		return asked == 3
	}
	var out event.VerdictBlock
	w.Reset(&out)
	if n := w.Judge(block, 0, 3, &out); n != 2 {
		t.Fatalf("%d events judged, want 2", n)
	}
	w.Expire(1, &out)
	if !slices.Equal(out.Status, []event.Status{event.Good, event.Expired, event.Expired}) {
		t.Errorf("statuses %v", out.Status)
	}
	if !slices.Equal(out.Entries.Offsets, []int32{0, 1, 1, 1}) || out.Gate[0] != 1 {
		t.Errorf("offsets %v, gate %v", out.Entries.Offsets, out.Gate)
	}
	w.Stop = nil
	w.Reset(&out)
	if n := w.Judge(block, 0, 3, &out); n != 3 || out.Gate[0] != 7 {
		t.Errorf("%d events judged, gate %v", n, out.Gate)
	}
}

// TestStatuses checks that events that cannot be judged get their status and nothing
// else, and do not disturb their neighbours.
func TestStatuses(t *testing.T) {
	good := []object{photon(0, 0, 1)}
	bad := []object{photon(0, 0, math.NaN())}
	var crowd []object
	for range event.MaxObjectsPerEvent + 1 {
		crowd = append(crowd, photon(0, 0, 1))
	}
	beams := make([]beam, selection.MaxCandidates+1)
	block := makeBlock([][]object{good, bad, crowd, good, good}, [][]beam{nil, nil, nil, beams, nil})
	p := compile(t, selection.Hypothesis{Reaction: "-> gamma", ExtraObjects: anything()})
	out := judge(t, p, block, selection.AllEntries)
	p.NewWorker(selection.AllEntries).Expire(2, out)
	want := []event.Status{
		event.Good, event.NonFinite, event.TooManyObjects, event.TooManyObjects, event.Good, event.Expired, event.Expired,
	}
	if !slices.Equal(out.Status, want) {
		t.Errorf("statuses %v, want %v", out.Status, want)
	}
	for i, s := range want {
		if out.Gate.Get(i) != (s == event.Good) || out.Accepted[0].Get(i) != (s == event.Good) {
			t.Errorf("event %d of status %v: gate %v", i, s, out.Gate.Get(i))
		}
	}
	if !slices.Equal(out.Entries.Offsets, []int32{0, 1, 1, 1, 1, 2, 2, 2}) {
		t.Errorf("offsets %v", out.Entries.Offsets)
	}
}
