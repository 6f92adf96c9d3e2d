package api

import (
	"bytes"
	"testing"

	"google.golang.org/grpc/mem"
	"google.golang.org/protobuf/proto"
	"google.golang.org/protobuf/reflect/protoreflect"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// everyColumn is a block with something in every field, of no sensible length.
func everyColumn() *kinegatev1.EventBlock {
	b := &kinegatev1.EventBlock{}
	fill(b.ProtoReflect(), 1)
	return b
}

// fill sets every field of a message; of a oneof the last member stays.
func fill(m protoreflect.Message, n byte) {
	fields := m.Descriptor().Fields()
	for i := range fields.Len() {
		switch d := fields.Get(i); d.Kind() {
		case protoreflect.BytesKind:
			m.Set(d, protoreflect.ValueOfBytes(bytes.Repeat([]byte{n + byte(i)}, 3)))
		case protoreflect.Int64Kind:
			m.Set(d, protoreflect.ValueOfInt64(-int64(i)-1))
		case protoreflect.MessageKind:
			fill(m.Mutable(d).Message(), n+byte(i))
		}
	}
}

func decodeBorrowed(wire []byte) (*kinegatev1.JudgeRequest, error) {
	request := &kinegatev1.JudgeRequest{}
	b := &Borrowed{Message: request}
	return request, b.Decode(mem.SliceBuffer(wire))
}

// TestBorrowedBlockIsWhole: no field of a block is forgotten, and the columns point into
// the buffer.
func TestBorrowedBlockIsWhole(t *testing.T) {
	t.Parallel()
	want := &kinegatev1.JudgeRequest{Frame: &kinegatev1.JudgeRequest_Block{Block: everyColumn()}}
	wire, err := proto.Marshal(want)
	if err != nil {
		t.Fatal(err)
	}
	got, err := decodeBorrowed(wire)
	if err != nil || !proto.Equal(got, want) {
		t.Fatalf("%v, %v\n%v", err, got, want)
	}
	clear(wire)
	if proto.Equal(got, want) {
		t.Error("the columns were copied")
	}
}

// FuzzFrame: reading in place takes what generated decoding takes, and understands it
// the same.
func FuzzFrame(f *testing.F) {
	for _, m := range []*kinegatev1.JudgeRequest{
		{Frame: &kinegatev1.JudgeRequest_Block{Block: everyColumn()}},
		{Frame: &kinegatev1.JudgeRequest_Heartbeat{Heartbeat: &kinegatev1.Heartbeat{ReceivedSequence: 5}}},
		{Frame: &kinegatev1.JudgeRequest_Open{Open: &kinegatev1.JudgeOpen{FirstSequence: 3, Follow: true}}},
	} {
		wire, err := proto.Marshal(m)
		if err != nil {
			f.Fatal(err)
		}
		f.Add(wire)
		f.Add(append(wire, wire...))
	}
	f.Fuzz(func(t *testing.T, wire []byte) {
		want := &kinegatev1.JudgeRequest{}
		wantErr := proto.UnmarshalOptions{DiscardUnknown: true}.Unmarshal(wire, want)
		got, err := decodeBorrowed(wire)
		if (err == nil) != (wantErr == nil) {
			t.Fatalf("in place: %v, generated: %v", err, wantErr)
		}
		if err != nil {
			return
		}
		// What is unknown beside blocks is kept as usual.
		dropUnknown(got.ProtoReflect())
		if !equalWire(t, got, want) {
			t.Errorf("in place: %v\ngenerated: %v", got, want)
		}
	})
}

// equalWire compares by bytes, in which NaN equals itself.
func equalWire(t *testing.T, a, b proto.Message) bool {
	t.Helper()
	options := proto.MarshalOptions{Deterministic: true}
	x, errX := options.Marshal(a)
	y, errY := options.Marshal(b)
	if errX != nil || errY != nil {
		t.Fatal(errX, errY)
	}
	return bytes.Equal(x, y)
}

func dropUnknown(m protoreflect.Message) {
	m.SetUnknown(nil)
	m.Range(func(d protoreflect.FieldDescriptor, v protoreflect.Value) bool {
		switch {
		case d.Message() == nil:
		case d.IsList():
			for i := range v.List().Len() {
				dropUnknown(v.List().Get(i).Message())
			}
		default:
			dropUnknown(v.Message())
		}
		return true
	})
}
