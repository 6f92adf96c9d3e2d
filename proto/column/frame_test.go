package column_test

import (
	"bytes"
	"testing"

	"google.golang.org/protobuf/proto"
	"google.golang.org/protobuf/reflect/protoreflect"

	"example.org/kinegate/proto/column"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// fill sets every field of a message of columns; of a oneof the last member stays.
func fill(t *testing.T, m protoreflect.Message, n byte) {
	t.Helper()
	fields := m.Descriptor().Fields()
	for i := range fields.Len() {
		d := fields.Get(i)
		switch {
		case d.IsList() || d.IsMap():
			t.Fatalf("%s would be lost", d.FullName())
		case d.Kind() == protoreflect.BytesKind:
			m.Set(d, protoreflect.ValueOfBytes(bytes.Repeat([]byte{n + byte(i)}, 3)))
		case d.Kind() == protoreflect.Int64Kind:
			m.Set(d, protoreflect.ValueOfInt64(-int64(i)-1))
		case d.Kind() == protoreflect.MessageKind:
			fill(t, m.Mutable(d).Message(), n+byte(i))
		default:
			t.Fatalf("%s would be lost", d.FullName())
		}
	}
}

// TestGeneratedBlockIsWhole: no field of a block of simulated events is forgotten, and the
// columns point into the frame.
func TestGeneratedBlockIsWhole(t *testing.T) {
	t.Parallel()
	block := &kinegatev1.GeneratedBlock{}
	fill(t, block.ProtoReflect(), 1)
	want := &kinegatev1.GenerateEventsResponse{Frame: &kinegatev1.GenerateEventsResponse_Block{Block: block}}
	wire, err := proto.Marshal(want)
	if err != nil {
		t.Fatal(err)
	}
	got := &kinegatev1.GenerateEventsResponse{}
	if err := column.DecodeFrame(wire, got); err != nil || !proto.Equal(got, want) {
		t.Fatalf("%v\n%v\n%v", err, got, want)
	}
	clear(wire)
	if proto.Equal(got, want) {
		t.Error("the columns were copied")
	}
}

// TestOtherFramesAreReadAsUsual: a frame without columns, and bytes that are none.
func TestOtherFramesAreReadAsUsual(t *testing.T) {
	t.Parallel()
	want := &kinegatev1.GenerateEventsResponse{Frame: &kinegatev1.GenerateEventsResponse_Summary{
		Summary: &kinegatev1.GenerationSummary{EventCount: 7, Efficiency: 0.5, Remarks: []string{"a", "b"}},
	}}
	wire, err := proto.Marshal(want)
	if err != nil {
		t.Fatal(err)
	}
	got := &kinegatev1.GenerateEventsResponse{}
	if err := column.DecodeFrame(wire, got); err != nil || !proto.Equal(got, want) {
		t.Errorf("%v, %v", err, got)
	}
	if err := column.DecodeFrame(wire[:len(wire)-1], got); err == nil {
		t.Error("half a frame was read")
	}
}
