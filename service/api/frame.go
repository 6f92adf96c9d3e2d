package api

import (
	"errors"
	"slices"

	"google.golang.org/grpc/mem"
	"google.golang.org/protobuf/encoding/protowire"
	"google.golang.org/protobuf/proto"
	"google.golang.org/protobuf/reflect/protoreflect"
)

// Borrowed is a message to receive whose columns point into the buffer it came in.
// Generated decoding copies every column; for event blocks that costs as much as
// reading the numbers. The codec of the server fills it: it decodes and leaves the
// buffer in its care.
type Borrowed struct {
	// Message is the message to fill.
	Message proto.Message

	buffer mem.Buffer
}

// Decode reads the message from a buffer, of which it keeps a reference until
// Release. Fields declared outside event blocks are read as usual.
func (b *Borrowed) Decode(buffer mem.Buffer) error {
	if err := decodeFrame(buffer.ReadOnlyData(), b.Message.ProtoReflect()); err != nil {
		return err
	}
	buffer.Ref()
	b.buffer = buffer
	return nil
}

// Release gives the buffer back. The columns of the message must not be read after.
func (b *Borrowed) Release() {
	if b.buffer != nil {
		b.buffer.Free()
		b.buffer = nil
	}
}

// Encoded is a message to send, encoded already. Sending it takes its reference.
type Encoded struct {
	// Data is the wire form.
	Data mem.BufferSlice
}

var errFrame = errors.New("malformed wire format")

// decodeFrame reads the members of a frame: messages of columns in place, others as
// usual.
func decodeFrame(wire []byte, m protoreflect.Message) error {
	fields := m.Descriptor().Fields()
	for len(wire) > 0 {
		number, kind, head := protowire.ConsumeTag(wire)
		if head < 0 || !number.IsValid() {
			return errFrame
		}
		length := protowire.ConsumeFieldValue(number, kind, wire[head:])
		if length < 0 {
			return errFrame
		}
		field, value := wire[:head+length], wire[head:head+length]
		wire = wire[head+length:]
		d := fields.ByNumber(number)
		if d == nil || kind != protowire.BytesType || d.Message() == nil || !inColumns(d.Message()) {
			if err := (proto.UnmarshalOptions{Merge: true}).Unmarshal(field, m.Interface()); err != nil {
				return err //nolint:wrapcheck // the codec names the message
			}
			continue
		}
		content, _ := protowire.ConsumeBytes(value)
		if err := borrowColumns(content, m.Mutable(d).Message()); err != nil {
			return err
		}
	}
	return nil
}

// inColumns reports whether borrowColumns reads messages of the kind: event blocks.
func inColumns(d protoreflect.MessageDescriptor) bool {
	return d.Name() == "EventBlock"
}

// borrowColumns reads a message whose fields are columns, whole numbers and messages
// of them. Repeated occurrences merge as in generated code; unknown fields and those
// of another wire type are passed over.
func borrowColumns(wire []byte, m protoreflect.Message) error {
	fields := m.Descriptor().Fields()
	for len(wire) > 0 {
		number, kind, head := protowire.ConsumeTag(wire)
		if head < 0 || !number.IsValid() {
			return errFrame
		}
		length := protowire.ConsumeFieldValue(number, kind, wire[head:])
		if length < 0 {
			return errFrame
		}
		value := wire[head : head+length]
		wire = wire[head+length:]
		d := fields.ByNumber(number)
		switch {
		case d == nil:
		case d.Kind() == protoreflect.BytesKind && kind == protowire.BytesType:
			column, _ := protowire.ConsumeBytes(value)
			m.Set(d, protoreflect.ValueOfBytes(slices.Clip(column)))
		case d.Kind() == protoreflect.MessageKind && kind == protowire.BytesType:
			content, _ := protowire.ConsumeBytes(value)
			if err := borrowColumns(content, m.Mutable(d).Message()); err != nil {
				return err
			}
		case d.Kind() == protoreflect.Int64Kind && kind == protowire.VarintType:
			n, _ := protowire.ConsumeVarint(value)
			m.Set(d, protoreflect.ValueOfInt64(int64(n))) //nolint:gosec // the bits are two's complement
		}
	}
	return nil
}
