package api

import (
	"strings"
	"testing"

	"google.golang.org/protobuf/proto"

	"example.org/kinegate/clients/go/history"
	"example.org/kinegate/proto/column"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// TestWeightsOfBlocks: a column of weights has a row for each event, and changes nothing of
// what a block is judged as.
func TestWeightsOfBlocks(t *testing.T) {
	plain := history.Photons(0, 5)
	weighted := proto.CloneOf(plain)
	weighted.Weight = &kinegatev1.WeightColumn{Weights: column.Float64([]float64{1, 0, -2, 0.5, 3})}
	a, err := eventBlock(plain, &columns{})
	if err != nil {
		t.Fatal(err)
	}
	b, err := eventBlock(weighted, &columns{})
	if err != nil || a.Events() != 5 || b.Events() != 5 || a.Rows() != b.Rows() {
		t.Errorf("%v, events %d and %d", err, a.Events(), b.Events())
	}
	for _, weights := range [][]byte{nil, make([]byte, 4*8), make([]byte, 5*8+1)} {
		weighted.Weight.Weights = weights
		if _, err := eventBlock(weighted, &columns{}); err == nil || !strings.Contains(err.Error(), "weight.weights.length") {
			t.Errorf("%d bytes of weights: %v", len(weights), err)
		}
	}
}
