package history_test

import (
	"testing"

	"example.org/kinegate/clients/go/history"
	"example.org/kinegate/proto/column"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// run is a run of blocks of three events and their verdicts, invented.
func run(blocks int) (events []*kinegatev1.EventBlock, verdicts []*kinegatev1.VerdictBlock) {
	for i := range int64(blocks) {
		events = append(events, &kinegatev1.EventBlock{Sequence: 5 + i, EventIds: column.Int64([]int64{3 * i, 3*i + 1, 3*i + 2})})
		verdicts = append(verdicts, &kinegatev1.VerdictBlock{
			Sequence: 5 + i, EventCount: 3, Statuses: []byte{1, 1, 2}, Gate: []byte{byte(1 + i%2)},
			Hypotheses: []*kinegatev1.HypothesisBits{{Accepted: []byte{3}}},
			Groups:     []*kinegatev1.GroupBest{{Best: column.Int16([]int16{0, int16(i), -1})}},
			Entries: &kinegatev1.EntryColumns{
				Offsets: column.Int32([]int32{0, 1, 2, 2}), HypothesisIndices: column.Int16([]int16{0, 0}),
				BeamRows: column.Int16([]int16{-1, -1}), Weights: column.Float64([]float64{1, 1}), Statuses: []byte{1, 2},
				AssignmentCounts: column.Int32([]int32{1, 1}), AssignmentOffsets: column.Int32([]int32{0, 2, 4}),
				Assignments: column.Int16([]int16{0, 1, 1, 0}), ObservableOffsets: column.Int32([]int32{0, 1, 2}),
				Observables: column.Float64([]float64{0.25, float64(i)}), ObservableUncertainties: column.Float64([]float64{0.5, 0.125}),
				Fits: &kinegatev1.FitColumns{
					Statuses: []byte{1, 1}, ChiSquares: column.Float64([]float64{3, float64(i)}), DegreesOfFreedom: column.Int16([]int16{1, 1}),
					Probabilities: column.Float64([]float64{0.5, 0.75}), IterationCounts: column.Int16([]int16{3, 4}),
				},
			},
		})
	}
	return events, verdicts
}

// open is the opening of the run.
func open() *kinegatev1.JudgeOpen { return &kinegatev1.JudgeOpen{FirstSequence: 5} }

// check learns the run and follows one whose blocks and verdicts are changed.
func check(
	t *testing.T, open *kinegatev1.JudgeOpen,
	sent func([]*kinegatev1.EventBlock) []*kinegatev1.EventBlock, answered func([]*kinegatev1.VerdictBlock) []*kinegatev1.VerdictBlock,
) []string {
	t.Helper()
	events, verdicts := run(4)
	c := history.New(open)
	for i := range events {
		if err := c.Learn(events[i], verdicts[i]); err != nil {
			t.Fatal(err)
		}
	}
	events, verdicts = run(4)
	for _, b := range sent(events) {
		c.Sent(b)
	}
	for _, v := range answered(verdicts) {
		c.Answered(v)
	}
	return c.Faults(true)
}

func same[T any](x T) T { return x }

// TestTrueHistories: what may happen is no fault.
func TestTrueHistories(t *testing.T) {
	t.Parallel()
	if faults := check(t, open(), same, same); len(faults) > 0 {
		t.Errorf("a true history: %v", faults)
	}
	again := func(b []*kinegatev1.EventBlock) []*kinegatev1.EventBlock { return append(b, b[1], b[2], b[3]) }
	if faults := check(t, open(), again, same); len(faults) > 0 {
		t.Errorf("blocks sent again: %v", faults)
	}
	budget := open()
	budget.LatencyBudgetS = new(1.0)
	if faults := check(t, budget, same, late); len(faults) > 0 {
		t.Errorf("a late event: %v", faults)
	}
}

// late makes an event late.
func late(v []*kinegatev1.VerdictBlock) []*kinegatev1.VerdictBlock {
	v[1].Statuses[0] = 7
	v[1].Gate[0] &^= 1
	return v
}

// TestLateEventsTeachNothing: what was not judged is no reference.
func TestLateEventsTeachNothing(t *testing.T) {
	t.Parallel()
	events, verdicts := run(2)
	if err := history.New(open()).Learn(events[1], late(verdicts)[1]); err == nil {
		t.Error("it was learned")
	}
}

// TestBreachesAreFound: the checker fails each false history.
func TestBreachesAreFound(t *testing.T) {
	t.Parallel()
	type sent = []*kinegatev1.EventBlock
	ids := func(sequence int64, ids ...int64) *kinegatev1.EventBlock {
		return &kinegatev1.EventBlock{Sequence: sequence, EventIds: column.Int64(ids)}
	}
	for name, change := range map[string]func(b sent) sent{
		"sent again with other events": func(b sent) sent { return append(b, ids(6, 3, 4, 99)) },
		"sent again with fewer events": func(b sent) sent { return append(b, ids(6, 3, 4)) },
		"events under two sequences":   func(b sent) sent { b[2], b[3] = ids(7, 90, 91, 92), ids(8, 90, 91, 92); return b },
		"an event under two sequences": func(b sent) sent { b[2], b[3] = ids(7, 90, 91, 92), ids(8, 93, 94, 90); return b },
		"an event twice in a block":    func(b sent) sent { b[3] = ids(8, 90, 91, 90); return b },
	} {
		if faults := check(t, open(), change, same); len(faults) == 0 {
			t.Errorf("%s goes unnoticed", name)
		}
	}
	type blocks = []*kinegatev1.VerdictBlock
	for name, change := range map[string]func(v blocks) blocks{
		"late without a budget": late,
		"all late without a budget": func(v blocks) blocks {
			for _, one := range v {
				one.Statuses = []byte{7, 7, 7}
			}
			return v
		},
		"dropped":          func(v blocks) blocks { return append(v[:1], v[2:]...) },
		"last dropped":     func(v blocks) blocks { return v[:3] },
		"doubled":          func(v blocks) blocks { return append(v, v[3]) },
		"swapped":          func(v blocks) blocks { v[1], v[2] = v[2], v[1]; return v },
		"swapped contents": func(v blocks) blocks { v[1].Sequence, v[2].Sequence = 7, 6; v[1], v[2] = v[2], v[1]; return v },
		"event dropped":    func(v blocks) blocks { v[1].Statuses, v[1].EventCount = v[1].Statuses[:2], 2; return v },
		"never sent":       func(v blocks) blocks { v[3].Sequence = 99; return v },
		"gate":             func(v blocks) blocks { v[2].Gate[0] ^= 2; return v },
		"status":           func(v blocks) blocks { v[2].Statuses[1] = 8; return v },
		"hypothesis":       func(v blocks) blocks { v[2].Hypotheses[0].Accepted[0] ^= 1; return v },
		"best":             func(v blocks) blocks { v[2].Groups[0].Best[0] ^= 1; return v },
		"last bit":         func(v blocks) blocks { v[2].Entries.Observables[8] ^= 1; return v },
		"uncertainty":      func(v blocks) blocks { v[2].Entries.ObservableUncertainties[8] ^= 1; return v },
		"chi-square":       func(v blocks) blocks { v[2].Entries.Fits.ChiSquares[8] ^= 1; return v },
		"fit":              func(v blocks) blocks { v[2].Entries.Fits.Statuses[1] ^= 3; return v },
		"assignment":       func(v blocks) blocks { v[2].Entries.Assignments[0] ^= 1; return v },
		"rejected":         func(v blocks) blocks { v[2].Rejected = &kinegatev1.Rejection{Reason: "BLOCK_INVALID"}; return v },
	} {
		if faults := check(t, open(), same, change); len(faults) == 0 {
			t.Errorf("%s goes unnoticed", name)
		}
	}
}
