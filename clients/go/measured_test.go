package kinegate_test

import (
	"reflect"
	"testing"

	kinegate "example.org/kinegate/clients/go"
	"example.org/kinegate/proto/column"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// TestReadEvents reads back what a builder wrote, in every coordinate set.
func TestReadEvents(t *testing.T) {
	t.Parallel()
	want := []kinegate.Measured{
		{ID: 4, Objects: []kinegate.Object{
			{Values: [4]float64{1, 2, 3}, Class: kinegatev1.ObjectClass_OBJECT_CLASS_PHOTON, Species: 1, Measured: 7},
			{Values: [4]float64{5, 6, 7}, Class: kinegatev1.ObjectClass_OBJECT_CLASS_POSITIVE, Measured: 6},
		}, Beam: []kinegate.BeamCandidate{{Energy: 1, Sigma: 2, Time: 3}}, Weight: 1},
		{ID: 5, Beam: []kinegate.BeamCandidate{}, Weight: 1},
	}
	for set := kinegate.MomentumMass; set <= kinegate.MomentumSlopes; set++ {
		b := kinegate.NewBuilder(set)
		for _, e := range want {
			b.Add(e.ID, e.Objects, e.Beam)
		}
		block := b.Take()
		coordinates, got, err := kinegate.ReadEvents(block)
		if err != nil || coordinates != set {
			t.Fatalf("set %d: %d, %v", set, coordinates, err)
		}
		if !reflect.DeepEqual(got, want) {
			t.Errorf("set %d:\n%v, want\n%v", set, got, want)
		}
		block.Weight = &kinegatev1.WeightColumn{Weights: column.Float64([]float64{2.5, 0})}
		if _, got, err = kinegate.ReadEvents(block); err != nil || got[0].Weight != 2.5 || got[1].Weight != 0 {
			t.Errorf("set %d: %v, weights of %v", set, err, got)
		}
		block.Weight.Weights = block.Weight.Weights[:8]
		if _, _, err := kinegate.ReadEvents(block); err == nil {
			t.Errorf("set %d: a weight is missing", set)
		}
		block.Weight = nil
		block.ObjectOffsets[4]++
		if _, _, err := kinegate.ReadEvents(block); err == nil {
			t.Errorf("set %d: broken offsets are read", set)
		}
	}
	if _, _, err := kinegate.ReadEvents(&kinegatev1.EventBlock{}); err == nil {
		t.Error("a block without coordinates is read")
	}
}
