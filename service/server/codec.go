package server

import (
	"fmt"

	"google.golang.org/grpc/mem"
	"google.golang.org/protobuf/proto"

	"example.org/kinegate/service/api"
)

// incoming is a message to receive. What is wrong with its bytes ends in fault.
type incoming struct {
	message  proto.Message // nil for a message that nobody wants
	borrowed *api.Borrowed // set where the message may keep the buffer
	limits   api.Limits

	fault *api.Failure
}

// read checks the wire form and decodes it.
func (in *incoming) read(data mem.BufferSlice) {
	if in.message == nil {
		return
	}
	buffer := data.MaterializeToBuffer(api.Buffers)
	defer buffer.Free()
	if in.fault = checkWire(buffer.ReadOnlyData(), in.message, int64(in.limits.DecodedBytes)); in.fault != nil {
		return
	}
	if err := in.decode(buffer); err != nil {
		in.fault = undecodable(in.message, err)
	}
}

// decode reads the message from its checked wire form.
func (in *incoming) decode(buffer mem.Buffer) error {
	if in.borrowed != nil {
		return in.borrowed.Decode(buffer)
	}
	return proto.Unmarshal(buffer.ReadOnlyData(), in.message) //nolint:wrapcheck // the caller names the message
}

// outgoing is a message to send, encoded already: a reply that does not encode or is
// too large is then still ours to answer for.
type outgoing struct {
	data mem.BufferSlice
}

// codec hands encoded messages to gRPC. It reads none: calls do that themselves.
type codec struct{}

// Name is the content subtype.
func (codec) Name() string { return "proto" }

// Marshal hands out the bytes of an outgoing message.
func (codec) Marshal(v any) (mem.BufferSlice, error) {
	out, ok := v.(*outgoing)
	if !ok {
		return nil, fmt.Errorf("cannot send a %T", v)
	}
	return out.data, nil
}

// Unmarshal is never called.
func (codec) Unmarshal(_ mem.BufferSlice, v any) error {
	return fmt.Errorf("cannot receive a %T", v)
}

// encode returns the frame for a message, or why it cannot be sent.
func encode(m any, limit int) (*outgoing, error) {
	switch m := m.(type) {
	case *api.Encoded:
		if size := m.Data.Len(); size > limit {
			m.Data.Free()
			return nil, replyTooLarge(size, limit)
		}
		return &outgoing{m.Data}, nil
	case proto.Message:
		if size := proto.Size(m); size > limit {
			return nil, replyTooLarge(size, limit)
		}
		data, err := api.EncodeMessage(m)
		if err != nil {
			return nil, fmt.Errorf("reply does not encode: %w", err)
		}
		return &outgoing{data}, nil
	}
	return nil, fmt.Errorf("cannot send a %T", m)
}

// replyTooLarge is the failure of a reply over the limit.
func replyTooLarge(size, limit int) *api.Failure {
	return api.OverLimit(api.ReplyTooLarge, "the size of the reply in bytes,", int64(size), int64(limit),
		"ask for less at a time")
}

// tooLarge is the failure of a message over the limit.
func tooLarge(actual, limit int64) *api.Failure {
	return api.OverLimit(api.MessageTooLarge, "the size of the message in bytes,", actual, limit,
		"send several smaller messages, events as blocks of a judge stream")
}

// undecodable is the failure of bytes that are not the method's message.
func undecodable(message proto.Message, cause error) *api.Failure {
	name := string(message.ProtoReflect().Descriptor().FullName())
	f := api.Refuse(api.MessageUndecodable, "the bytes are not a "+name, "message", name)
	f.Cause = cause
	return f
}
