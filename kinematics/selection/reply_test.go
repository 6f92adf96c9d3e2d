package selection_test

import (
	"math/rand/v2"
	"testing"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/selection"
)

// columnBytes is the size of the columns of a verdict block without any wrapping.
func columnBytes(v *event.VerdictBlock) int64 {
	n := len(v.Status) + len(v.Gate)
	for _, bits := range v.Accepted {
		n += len(bits)
	}
	for _, best := range v.Best {
		n += 2 * len(best)
	}
	if e := v.Entries; e != nil {
		n += 4*(len(e.Offsets)+len(e.Tried)+len(e.AssignmentOffsets)+len(e.ObservableOffsets)) +
			2*(len(e.Hypothesis)+len(e.BeamRow)+len(e.Assignment)) + 8*(len(e.Weight)+len(e.Observables)) + len(e.Status)
	}
	return int64(n)
}

// TestLargestReply checks that no reply is above the bound for its block, and that the
// bound is reached within its wrapping where every event and candidate makes an entry.
func TestLargestReply(t *testing.T) {
	r := rand.New(rand.NewPCG(8, 1)) //nolint:gosec // a test needs a seed, no secret
	for _, detail := range []selection.Detail{selection.NoEntries, selection.AcceptedEntries, selection.AllEntries} {
		p := compileAll(t, sound(r))
		block := randomBlock(r, event.MomentumMass, 300, 9)
		limits := selection.Limits{
			BlockBytes: 1 << 21, Events: int64(block.Events()), Objects: int64(block.Rows()), Candidates: int64(len(block.Beam.TimeNS)),
		}
		if got, bound := columnBytes(judge(t, p, block, detail)), p.LargestReplyBytes(limits, detail); got > bound {
			t.Errorf("detail %d: %d bytes, bound %d", detail, got, bound)
		}
	}
	tagged := compile(t, selection.Hypothesis{
		Reaction: "gamma p -> p gamma", Beam: &selection.BeamSource{Tagged: &selection.TaggedBeam{}},
		Measurements: []selection.ProductMeasurement{{Product: "p", Measurement: selection.Missing}},
		Record:       []selection.Window{{Observable: selection.TimeDifference}},
	})
	events, beams := make([][]object, 100), make([][]beam, 100)
	for i := range events {
		events[i], beams[i] = photons(1), make([]beam, 64)
		for k := range beams[i] {
			beams[i][k].energy = 1
		}
	}
	out := judge(t, tagged, makeBlock(events, beams), selection.AcceptedEntries)
	limits := selection.Limits{BlockBytes: 1 << 21, Events: 100, Objects: 100, Candidates: 6400}
	got, bound := columnBytes(out), tagged.LargestReplyBytes(limits, selection.AcceptedEntries)
	if out.Entries.Len() != 6400 || got > bound || got < bound-300 {
		t.Errorf("%d entries in %d bytes, bound %d", out.Entries.Len(), got, bound)
	}
}
