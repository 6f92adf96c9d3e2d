package column

import (
	"errors"
	"slices"

	"google.golang.org/protobuf/encoding/protowire"
	"google.golang.org/protobuf/proto"
	"google.golang.org/protobuf/reflect/protoreflect"
)

var errFrame = errors.New("malformed wire format")

// DecodeFrame reads the members of a frame: blocks of events in place, so that their
// columns point into wire, others as usual. Generated decoding copies every column; for
// blocks of events that costs as much as reading the numbers.
func DecodeFrame(wire []byte, frame proto.Message) error {
	m := frame.ProtoReflect()
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
			if err := (proto.UnmarshalOptions{Merge: true}).Unmarshal(field, frame); err != nil {
				return err //nolint:wrapcheck // the caller names the message
			}
			continue
		}
		content, _ := protowire.ConsumeBytes(value)
		if err := borrow(content, m.Mutable(d).Message()); err != nil {
			return err
		}
	}
	return nil
}

// inColumns reports whether borrow reads messages of the kind: blocks of events.
func inColumns(d protoreflect.MessageDescriptor) bool {
	return d.Name() == "EventBlock" || d.Name() == "GeneratedBlock"
}

// borrow reads a message whose fields are columns, whole numbers and messages
// of them. Repeated occurrences merge as in generated code; unknown fields and those
// of another wire type are passed over.
func borrow(wire []byte, m protoreflect.Message) error {
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
			if err := borrow(content, m.Mutable(d).Message()); err != nil {
				return err
			}
		case d.Kind() == protoreflect.Int64Kind && kind == protowire.VarintType:
			n, _ := protowire.ConsumeVarint(value)
			m.Set(d, protoreflect.ValueOfInt64(int64(n))) //nolint:gosec // the bits are two's complement
		}
	}
	return nil
}
