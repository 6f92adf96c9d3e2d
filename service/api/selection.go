package api

import (
	"context"
	"math/bits"
	"runtime"
	"slices"
	"strconv"
	"strings"
	"time"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/selection"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/api/strictyaml"
)

// selectionService checks selections and judges events.
type selectionService struct {
	kinegatev1.UnsafeSelectionServiceServer

	deps    Deps
	library *Library
	credit  *creditPool
	turns   turns
}

func newSelectionService(deps Deps) *selectionService {
	return &selectionService{
		deps:    deps,
		library: deps.Library,
		credit:  newCreditPool(int64(deps.Limits.PoolBytes), deps.Observer),
		turns:   newTurns(runtime.GOMAXPROCS(0)),
	}
}

// CheckSelection reports every fault of a selection.
func (s *selectionService) CheckSelection(_ context.Context, request *kinegatev1.CheckSelectionRequest) (*kinegatev1.CheckSelectionResponse, error) {
	response := &kinegatev1.CheckSelectionResponse{}
	message := request.GetSelection()
	var positions strictyaml.Positions
	switch form := request.GetForm().(type) {
	case *kinegatev1.CheckSelectionRequest_Yaml:
		message, positions, response.Faults = readSelection(form.Yaml)
	case nil:
		return nil, fault.New(fault.Invalid, "form", "empty", "selection or yaml")
	}
	response.Selection = message
	c, err := compile(message, s.deps.Table)
	if err != nil {
		response.Faults = append(response.Faults, beyond(response.GetFaults(), selectionFaults(err, positions))...)
	}
	if len(response.GetFaults()) > 0 {
		return response, nil
	}
	response.SelectionDigest = c.digest
	response.Hypotheses = c.outline
	response.LargestReplyByteCount = c.largestReply(s.deps.Limits.blocks(), selection.AllEntries)
	return response, nil
}

// JudgeBlock judges one block.
func (s *selectionService) JudgeBlock(ctx context.Context, request *kinegatev1.JudgeBlockRequest) (*kinegatev1.JudgeBlockResponse, error) {
	bytes := blockBytes(request.GetBlock())
	block, err := convertBlock(request.GetBlock(), bytes, s.deps.Limits.blocks())
	if err != nil {
		return nil, In("block", err)
	}
	j, err := s.newJudging(request.GetSelection(), request.GetEntries(), sizeOf(bytes, block), false)
	if err != nil {
		return nil, err
	}
	verdict, err := j.events(ctx, request.GetBlock().GetSequence(), block, time.Time{})
	if err != nil {
		return nil, err
	}
	return &kinegatev1.JudgeBlockResponse{Verdict: verdict}, nil
}

// beyond returns the faults that are not just the consequence of one in seen: a
// field that could not be read is also missing.
func beyond(seen, faults []*kinegatev1.SelectionFault) []*kinegatev1.SelectionFault {
	related := func(a, b string) bool { return a == b || strings.HasPrefix(a, b+".") || strings.HasPrefix(a, b+"[") }
	var news []*kinegatev1.SelectionFault
	for _, f := range faults {
		if !slices.ContainsFunc(seen, func(s *kinegatev1.SelectionFault) bool {
			return related(f.GetField(), s.GetField()) || related(s.GetField(), f.GetField())
		}) {
			news = append(news, f)
		}
	}
	return news
}

// describeFault is a fault with its place.
func describeFault(f *kinegatev1.SelectionFault) string {
	text := f.GetMessage()
	if f.GetLine() > 0 {
		text = "line " + strconv.Itoa(int(f.GetLine())) + ": " + text
	}
	return text
}

// onesCount counts the bits of a column.
func onesCount(column []byte) int {
	n := 0
	for _, b := range column {
		n += bits.OnesCount8(b)
	}
	return n
}
