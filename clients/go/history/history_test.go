package history_test

import (
	"testing"

	"google.golang.org/protobuf/proto"

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

func check(t *testing.T, change func(v []*kinegatev1.VerdictBlock) []*kinegatev1.VerdictBlock) []string {
	t.Helper()
	events, verdicts := run(4)
	c := history.New(5)
	for i := range events {
		if err := c.Learn(events[i], verdicts[i]); err != nil {
			t.Fatal(err)
		}
		c.Sent(events[i])
	}
	var seen []*kinegatev1.VerdictBlock
	for _, v := range verdicts {
		seen = append(seen, proto.CloneOf(v))
	}
	for _, v := range change(seen) {
		c.Answered(v)
	}
	return c.Faults(true)
}

// TestBreachesAreFound: the checker passes a true history and fails each false one.
func TestBreachesAreFound(t *testing.T) {
	t.Parallel()
	type blocks = []*kinegatev1.VerdictBlock
	if faults := check(t, func(v blocks) blocks { return v }); len(faults) > 0 {
		t.Errorf("a true history: %v", faults)
	}
	late := func(v blocks) blocks { v[1].Statuses[0] = 7; v[1].Gate[0] &^= 1; return v }
	if faults := check(t, late); len(faults) > 0 {
		t.Errorf("a late event: %v", faults)
	}
	for name, change := range map[string]func(v blocks) blocks{
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
		if faults := check(t, change); len(faults) == 0 {
			t.Errorf("%s goes unnoticed", name)
		}
	}
}
