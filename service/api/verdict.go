package api

import (
	"encoding/binary"
	"math"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"

	"example.org/kinegate/kinematics/event"
)

// verdictBlock converts the columns of the core to those of a message. The
// message keeps no reference to v.
func verdictBlock(sequence int64, digest string, v *event.VerdictBlock) *kinegatev1.VerdictBlock {
	m := &kinegatev1.VerdictBlock{
		Sequence:        sequence,
		SelectionDigest: digest,
		EventCount:      int32(len(v.Status)), //nolint:gosec // a block has at most 4,096 events
		Statuses:        statusBytes(v.Status),
		Gate:            append([]byte(nil), v.Gate...),
	}
	for _, accepted := range v.Accepted {
		m.Hypotheses = append(m.Hypotheses, &kinegatev1.HypothesisBits{Accepted: append([]byte(nil), accepted...)})
	}
	for _, best := range v.Best {
		m.Groups = append(m.Groups, &kinegatev1.GroupBest{Best: int16Bytes(best)})
	}
	if v.Entries != nil {
		m.Entries = entryColumns(v.Entries)
	}
	return m
}

func entryColumns(e *event.Entries) *kinegatev1.EntryColumns {
	return &kinegatev1.EntryColumns{
		Offsets:           int32Bytes(e.Offsets),
		HypothesisIndices: int16Bytes(e.Hypothesis),
		BeamRows:          int16Bytes(e.BeamRow),
		Weights:           float64Bytes(e.Weight),
		Statuses:          statusBytes(e.Status),
		AssignmentsTried:  int32Bytes(e.Tried),
		AssignmentOffsets: int32Bytes(e.AssignmentOffsets),
		Assignments:       int16Bytes(e.Assignment),
		ObservableOffsets: int32Bytes(e.ObservableOffsets),
		Observables:       float64Bytes(e.Observables),
	}
}

// statusBytes writes a column of statuses; the core shares the numbers of the
// contract.
func statusBytes[S ~uint8](statuses []S) []byte {
	b := make([]byte, len(statuses))
	for i, s := range statuses {
		b[i] = byte(s)
	}
	return b
}

func int16Bytes(xs []int16) []byte {
	b := make([]byte, 0, 2*len(xs))
	for _, x := range xs {
		b = binary.LittleEndian.AppendUint16(b, uint16(x)) //nolint:gosec // the bits are two's complement
	}
	return b
}

func int32Bytes(xs []int32) []byte {
	b := make([]byte, 0, 4*len(xs))
	for _, x := range xs {
		b = binary.LittleEndian.AppendUint32(b, uint32(x)) //nolint:gosec // the bits are two's complement
	}
	return b
}

func int64Bytes(xs []int64) []byte {
	b := make([]byte, 0, 8*len(xs))
	for _, x := range xs {
		b = binary.LittleEndian.AppendUint64(b, uint64(x)) //nolint:gosec // the bits are two's complement
	}
	return b
}

func float64Bytes(xs []float64) []byte {
	b := make([]byte, 0, 8*len(xs))
	for _, x := range xs {
		b = binary.LittleEndian.AppendUint64(b, math.Float64bits(x))
	}
	return b
}
