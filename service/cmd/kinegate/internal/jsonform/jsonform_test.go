package jsonform_test

import (
	"math"
	"testing"

	"google.golang.org/protobuf/encoding/protojson"
	"google.golang.org/protobuf/proto"
	"google.golang.org/protobuf/reflect/protoreflect"

	"example.org/kinegate/proto/column"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/cmd/kinegate/internal/jsonform"
)

// TestStandardForm reads the text back with the protobuf library's own JSON reader.
func TestStandardForm(t *testing.T) {
	t.Parallel()
	want := &kinegatev1.DescribeReactionResponse{
		Reaction:        "gamma p -> \"K+\" Lambda\n",
		State:           kinegatev1.ChannelState_CHANNEL_STATE_OPEN,
		CentreOfMass:    &kinegatev1.CentreOfMass{SGev2: 3.1415926535897931, Gamma: math.Inf(1)},
		ExcessEnergyGev: new(-0.1),
		Products:        []*kinegatev1.ProductLimits{{Product: "K+", Number: 0}, {Product: "Lambda", Number: 1}},
		Inclusive:       &kinegatev1.InclusiveRemainder{},
	}
	text, err := jsonform.Marshal(want)
	if err != nil {
		t.Fatal(err)
	}
	var got kinegatev1.DescribeReactionResponse
	if err := protojson.Unmarshal(text, &got); err != nil || !proto.Equal(&got, want) {
		t.Errorf("%v from\n%s", err, text)
	}
}

func TestColumnsAreArrays(t *testing.T) {
	t.Parallel()
	text, err := jsonform.Marshal(&kinegatev1.VerdictBlock{
		Sequence: 7, EventCount: 2, Statuses: []byte{1, 3}, Gate: []byte{1},
		Groups: []*kinegatev1.GroupBest{{Best: column.Int16([]int16{0, -1})}},
		Entries: &kinegatev1.EntryColumns{
			Offsets: column.Int32([]int32{0, 1, 1}), Observables: column.Float64([]float64{0.1349768, math.NaN()}),
			AssignmentCounts: column.Int32([]int32{3}),
			Fits: &kinegatev1.FitColumns{
				DegreesOfFreedom: column.Int16([]int16{2}), IterationCounts: column.Int16([]int16{4}),
			},
		},
	})
	want := `{
  "sequence": "7",
  "event_count": "2",
  "statuses": [
    1,
    3
  ],
  "gate": [
    1
  ],
  "groups": [
    {
      "best": [
        0,
        -1
      ]
    }
  ],
  "entries": {
    "offsets": [
      0,
      1,
      1
    ],
    "assignment_counts": [
      3
    ],
    "observables": [
      0.1349768,
      "NaN"
    ],
    "fits": {
      "degrees_of_freedom": [
        2
      ],
      "iteration_counts": [
        4
      ]
    }
  }
}`
	if err != nil || string(text) != want {
		t.Errorf("%v\n%s", err, text)
	}
}

// TestEveryColumnDecodes fills each bytes field of the contract's blocks with 16
// bytes, which hold whole entries of every size: the count of numbers written must
// be that of the field's documented size.
func TestEveryColumnDecodes(t *testing.T) {
	t.Parallel()
	for _, m := range []proto.Message{&kinegatev1.EventBlock{}, &kinegatev1.VerdictBlock{}, &kinegatev1.EntryColumns{}} {
		fields := m.ProtoReflect().Descriptor().Fields()
		for i := range fields.Len() {
			if f := fields.Get(i); f.Kind() == protoreflect.BytesKind {
				m.ProtoReflect().Set(f, protoreflect.ValueOfBytes(make([]byte, 16)))
			}
		}
		if _, err := jsonform.Marshal(m); err != nil {
			t.Errorf("%T: %v", m, err)
		}
	}
}
