package server

import (
	"errors"

	"google.golang.org/protobuf/encoding/protowire"
	"google.golang.org/protobuf/proto"
	"google.golang.org/protobuf/reflect/protoreflect"

	"example.org/kinegate/service/api"
)

// What decoded values take beside their content, in bytes, on a 64-bit machine. A
// slice that grows by appending may hold up to a quarter more than it needs and its
// former self until it is collected, so elements of slices count double.
const (
	pointerBytes  = 8
	headerBytes   = 24  // of a slice; a string's 16 are rounded up
	wrapperBytes  = 32  // of a member of a oneof
	messageBytes  = 64  // of a message's own bookkeeping
	fieldBytes    = 24  // of each field it declares
	elementFactor = 2   // of what a growing slice holds
	maxDepth      = 100 // of messages within messages
)

var (
	errTooCostly = errors.New("too much memory once decoded")
	errTooDeep   = errors.New("messages within messages too deep")
	errMalformed = errors.New("malformed wire format")
)

// checkWire walks the wire form of a message before it is decoded and refuses what
// would need more than limit bytes of memory. The size on the wire does not bound
// that: an empty message within a list takes two bytes on the wire and a hundred
// times that decoded. The walk stops as soon as the limit is passed.
func checkWire(wire []byte, message proto.Message, limit int64) *api.Failure {
	w := wireCost{left: limit}
	err := w.message(wire, message.ProtoReflect().Descriptor(), 0)
	switch {
	case err == nil:
		return nil
	case errors.Is(err, errTooCostly):
		return api.OverLimit(api.MessageTooCostly, "the memory that the message would need in bytes, at least",
			limit-w.left, limit, "send fewer and smaller elements at a time")
	}
	return undecodable(message, err)
}

// wireCost is what is left to spend on a message.
type wireCost struct {
	left int64
}

// spend takes n bytes.
func (w *wireCost) spend(n int) error {
	w.left -= int64(n)
	if w.left < 0 {
		return errTooCostly
	}
	return nil
}

// message walks the fields of a message.
func (w *wireCost) message(wire []byte, d protoreflect.MessageDescriptor, depth int) error {
	if depth > maxDepth {
		return errTooDeep
	}
	fields := d.Fields()
	if err := w.spend(messageBytes + fieldBytes*fields.Len()); err != nil {
		return err
	}
	for len(wire) > 0 {
		number, kind, n := protowire.ConsumeTag(wire)
		if n < 0 {
			return errMalformed
		}
		wire = wire[n:]
		n = protowire.ConsumeFieldValue(number, kind, wire)
		if n < 0 {
			return errMalformed
		}
		if err := w.field(fields.ByNumber(number), kind, wire[:n], depth); err != nil {
			return err
		}
		wire = wire[n:]
	}
	return nil
}

// field spends on one field value; the descriptor of an unknown field is nil.
func (w *wireCost) field(f protoreflect.FieldDescriptor, kind protowire.Type, value []byte, depth int) error {
	switch {
	case f == nil:
		// Unknown fields are kept as they came, in a slice that grows.
		return w.spend(elementFactor * (len(value) + pointerBytes))
	case f.Message() != nil && kind == protowire.BytesType:
		content, _ := protowire.ConsumeBytes(value)
		if err := w.spend(elementFactor*pointerBytes + wrapperBytes); err != nil {
			return err
		}
		return w.message(content, f.Message(), depth+1)
	case f.IsList() && kind == protowire.BytesType && packable(f):
		return w.spend(elementFactor * packedBytes(value))
	}
	return w.spend(elementFactor*(headerBytes+wrapperBytes) + len(value))
}

// packable reports whether a list of the field's kind may come packed.
func packable(f protoreflect.FieldDescriptor) bool {
	return f.Kind() != protoreflect.StringKind && f.Kind() != protoreflect.BytesKind
}

// packedBytes bounds the memory of a packed list: each varint ends in one byte below
// 128 and takes at most eight decoded; in a list of fixed size every element has at
// least one such byte or as many bytes as it takes.
func packedBytes(value []byte) int {
	ends := 0
	for _, b := range value {
		if b < 0x80 {
			ends++
		}
	}
	return max(len(value), pointerBytes*ends)
}
