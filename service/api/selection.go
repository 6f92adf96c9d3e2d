package api

import (
	"context"
	"math/bits"
	"runtime"
	"time"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/selection"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// selectionService checks selections and judges events.
type selectionService struct {
	kinegatev1.UnsafeSelectionServiceServer

	deps    Deps
	library *Library
	credit  *creditPool
	turns   *turns
}

// newSelectionServices makes the services of the gate and of bulk work: they share
// everything but the turns.
func newSelectionServices(deps Deps) (gate, bulk *selectionService) {
	// A processor stays free of bulk work: only an idle one looks at the network at once.
	// With all of them at work the runtime does so every 10 ms, however often they yield.
	n := runtime.GOMAXPROCS(0)
	gate = &selectionService{
		deps:    deps,
		library: deps.Library,
		credit:  newCreditPool(int64(deps.Limits.PoolBytes), deps.Observer),
		turns:   newTurns(n, false),
	}
	shared := *gate
	shared.turns = newTurns(max(n-1, 1), true)
	return gate, &shared
}

// CheckSelection reports every fault of a selection.
func (s *selectionService) CheckSelection(_ context.Context, request *kinegatev1.CheckSelectionRequest) (*kinegatev1.CheckSelectionResponse, error) {
	response := &kinegatev1.CheckSelectionResponse{}
	var c *compiledSelection
	var faults fault.List
	switch form := request.GetForm().(type) {
	case *kinegatev1.CheckSelectionRequest_Yaml:
		response.Selection, c, faults = readSelection(form.Yaml, s.deps.Table)
	case *kinegatev1.CheckSelectionRequest_Selection:
		response.Selection = form.Selection
		var err error
		if c, err = compile(form.Selection, s.deps.Table); err != nil {
			faults = faultsOf(err)
		}
	default:
		return nil, fault.New(fault.Invalid, "form", "empty", "selection or yaml")
	}
	if len(faults) > 0 {
		response.Faults = fieldFaults(faults)
		return response, nil
	}
	response.SelectionDigest = c.digest
	response.Hypotheses = c.outline.GetHypotheses()
	response.LargestReplyByteCount = c.largestReply(s.deps.Limits.blocks(), selection.AllEntries)
	return response, nil
}

// JudgeBlock judges one block.
func (s *selectionService) JudgeBlock(ctx context.Context, request *kinegatev1.JudgeBlockRequest) (*kinegatev1.JudgeBlockResponse, error) {
	bytes := blockBytes(request.GetBlock())
	// The verdict shares the workspace, so that it is not one of the pool.
	w := new(workspace)
	block, err := convertBlock(request.GetBlock(), bytes, s.deps.Limits.blocks(), w)
	if err != nil {
		return nil, In("block", err)
	}
	j, err := s.newJudging(request.GetSelection(), request.GetEntries(), s.deps.Limits.blocks().of(bytes, block), false)
	if err != nil {
		return nil, err
	}
	if err := j.compiled.accepts(block); err != nil {
		return nil, In("block", err)
	}
	verdict, err := j.events(ctx, request.GetBlock().GetSequence(), block, time.Time{}, w)
	if err != nil {
		return nil, err
	}
	return &kinegatev1.JudgeBlockResponse{Verdict: verdict, Selection: j.compiled.outline}, nil
}

// onesCount counts the bits of a column.
func onesCount(column []byte) int {
	n := 0
	for _, b := range column {
		n += bits.OnesCount8(b)
	}
	return n
}
