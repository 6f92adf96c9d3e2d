package api

import (
	"google.golang.org/grpc/mem"
	"google.golang.org/protobuf/proto"

	"example.org/kinegate/proto/column"
)

// Borrowed is a message to receive whose columns point into the buffer it came in.
// The codec of the server fills it: it decodes and leaves the
// buffer in its care.
type Borrowed struct {
	// Message is the message to fill.
	Message proto.Message

	buffer mem.Buffer
}

// Decode reads the message from a buffer, of which it keeps a reference until
// Release.
func (b *Borrowed) Decode(buffer mem.Buffer) error {
	if err := column.DecodeFrame(buffer.ReadOnlyData(), b.Message); err != nil {
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
