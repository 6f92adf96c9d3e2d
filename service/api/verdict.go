package api

import (
	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/proto/column"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// verdictBlock converts the columns of the core to those of a message, which
// shares the core's numbers of statuses and classes. The message keeps no
// reference to v.
func verdictBlock(sequence int64, digest string, v *event.VerdictBlock) *kinegatev1.VerdictBlock {
	m := &kinegatev1.VerdictBlock{
		Sequence:        sequence,
		SelectionDigest: digest,
		EventCount:      int32(len(v.Status)), //nolint:gosec // a block has at most 4,096 events
		Statuses:        column.Uint8(v.Status),
		Gate:            append([]byte(nil), v.Gate...),
	}
	for _, accepted := range v.Accepted {
		m.Hypotheses = append(m.Hypotheses, &kinegatev1.HypothesisBits{Accepted: append([]byte(nil), accepted...)})
	}
	for _, best := range v.Best {
		m.Groups = append(m.Groups, &kinegatev1.GroupBest{Best: column.Int16(best)})
	}
	if v.Entries != nil {
		m.Entries = entryColumns(v.Entries)
	}
	return m
}

func entryColumns(e *event.Entries) *kinegatev1.EntryColumns {
	return &kinegatev1.EntryColumns{
		Offsets:           column.Int32(e.Offsets),
		HypothesisIndices: column.Int16(e.Hypothesis),
		BeamRows:          column.Int16(e.BeamRow),
		Weights:           column.Float64(e.Weight),
		Statuses:          column.Uint8(e.Status),
		AssignmentsTried:  column.Int32(e.Tried),
		AssignmentOffsets: column.Int32(e.AssignmentOffsets),
		Assignments:       column.Int16(e.Assignment),
		ObservableOffsets: column.Int32(e.ObservableOffsets),
		Observables:       column.Float64(e.Observables),
	}
}
