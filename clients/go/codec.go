package kinegate

import (
	"google.golang.org/grpc/encoding"
	"google.golang.org/grpc/mem"

	"example.org/kinegate/proto/column"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// codec is the usual one but for simulated events: their columns point into one piece of
// memory that belongs to the message, in place of a copy each. Who keeps one column keeps
// all of the block.
type codec struct{ encoding.CodecV2 }

// Unmarshal decodes a message.
func (c codec) Unmarshal(data mem.BufferSlice, v any) error {
	if m, ok := v.(*kinegatev1.GenerateEventsResponse); ok {
		return column.DecodeFrame(data.Materialize(), m)
	}
	return c.CodecV2.Unmarshal(data, v)
}
