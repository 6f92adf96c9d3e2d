package api

import (
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// SlotShares are the shares of a slot, which is the work that one processor does at a
// time. A call of a few formulas takes one share: so many of them may be open for each
// processor.
const SlotShares = 64

// rowsPerShare is how many measured objects judging takes another share for. Objects
// are events times their multiplicity, on which both time and memory depend. Blocks of
// a few thousand objects take a slot of their own: they keep a processor busy for
// milliseconds.
const rowsPerShare = 64

// Cost is the part of a slot, in shares from 1 to SlotShares, that answering a unary
// request takes.
func Cost(request any) int {
	switch m := request.(type) {
	case *kinegatev1.JudgeBlockRequest:
		return costOfBlock(m.GetBlock())
	case *kinegatev1.ExplainVerdictRequest:
		return costOfBlock(m.GetBlock())
	case *kinegatev1.ListOpenChannelsRequest, *kinegatev1.TraceDalitzBoundaryRequest, *kinegatev1.MeasureBoundRequest:
		return SlotShares
	}
	return 1
}

// costOfBlock is the cost of reading a block, which explaining one of its events takes as
// judging all does.
func costOfBlock(b *kinegatev1.EventBlock) int {
	return min(1+len(b.GetObjectClasses())/rowsPerShare, SlotShares)
}
