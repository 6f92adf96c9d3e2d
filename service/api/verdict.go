package api

import (
	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/proto/column"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// verdictColumns makes messages of verdicts. Its memory is used again for the next
// message, so the last one must be encoded before.
type verdictColumns struct {
	arena []byte
}

// block converts the columns of the core to those of a message, which shares the
// core's numbers of statuses and classes. The message shares memory with v and c.
func (c *verdictColumns) block(sequence int64, digest string, v *event.VerdictBlock) *kinegatev1.VerdictBlock {
	c.arena = c.arena[:0]
	m := &kinegatev1.VerdictBlock{
		Sequence:        sequence,
		SelectionDigest: digest,
		EventCount:      int64(len(v.Status)),
		Statuses:        write(c, v.Status, column.AppendUint8),
		Gate:            v.Gate,
	}
	for _, accepted := range v.Accepted {
		m.Hypotheses = append(m.Hypotheses, &kinegatev1.HypothesisBits{Accepted: accepted})
	}
	for _, best := range v.Best {
		m.Groups = append(m.Groups, &kinegatev1.GroupBest{Best: write(c, best, column.AppendInt16)})
	}
	if v.Entries != nil {
		m.Entries = c.entries(v.Entries)
	}
	return m
}

func (c *verdictColumns) entries(e *event.Entries) *kinegatev1.EntryColumns {
	m := &kinegatev1.EntryColumns{
		Offsets:           write(c, e.Offsets, column.AppendInt32),
		HypothesisIndices: write(c, e.Hypothesis, column.AppendInt16),
		BeamRows:          write(c, e.BeamRow, column.AppendInt16),
		Weights:           write(c, e.Weight, column.AppendFloat64),
		Statuses:          write(c, e.Status, column.AppendUint8),
		AssignmentCounts:  write(c, e.Tried, column.AppendInt32),
		AssignmentOffsets: write(c, e.AssignmentOffsets, column.AppendInt32),
		Assignments:       write(c, e.Assignment, column.AppendInt16),
		ObservableOffsets: write(c, e.ObservableOffsets, column.AppendInt32),
		Observables:       write(c, e.Observables, column.AppendFloat64),
	}
	if u := e.Uncertainties; u != nil {
		m.ObservableUncertainties = write(c, u.Values, column.AppendFloat64)
		if m.ObservableUncertainties == nil {
			m.ObservableUncertainties = []byte{} // there, and empty
		}
	}
	if f := e.Fits; f != nil {
		m.Fits = &kinegatev1.FitColumns{
			Statuses:         write(c, f.Status, column.AppendUint8),
			ChiSquares:       write(c, f.ChiSquare, column.AppendFloat64),
			DegreesOfFreedom: write(c, f.DegreesOfFreedom, column.AppendInt16),
			Probabilities:    write(c, f.Probability, column.AppendFloat64),
			IterationCounts:  write(c, f.Iterations, column.AppendInt16),
		}
	}
	return m
}

// write encodes a column behind those that are in the arena already. Should the
// arena move, they stay where they were.
func write[T any](c *verdictColumns, xs []T, encode func([]byte, []T) []byte) []byte {
	start := len(c.arena)
	c.arena = encode(c.arena, xs)
	return c.arena[start:len(c.arena):len(c.arena)]
}
