package api

import (
	"testing"

	"google.golang.org/protobuf/proto"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// TestCost: what takes a processor for long takes a slot, and explaining an event costs as
// much as judging the block that it comes in.
func TestCost(t *testing.T) {
	block := func(objects int) *kinegatev1.EventBlock {
		return &kinegatev1.EventBlock{ObjectClasses: make([]byte, objects)}
	}
	for _, c := range []struct {
		request proto.Message
		want    int
	}{
		{&kinegatev1.DescribeReactionRequest{}, 1},
		{&kinegatev1.ListOpenChannelsRequest{}, SlotShares},
		{&kinegatev1.MeasureBoundRequest{}, SlotShares},
		{&kinegatev1.JudgeBlockRequest{Block: block(0)}, 1},
		{&kinegatev1.JudgeBlockRequest{Block: block(640)}, 11},
		{&kinegatev1.JudgeBlockRequest{Block: block(65536)}, SlotShares},
		{&kinegatev1.ExplainVerdictRequest{Block: block(640)}, 11},
		{&kinegatev1.ExplainVerdictRequest{Block: block(65536)}, SlotShares},
	} {
		if got := Cost(c.request); got != c.want {
			t.Errorf("%T costs %d, want %d", c.request, got, c.want)
		}
	}
}
