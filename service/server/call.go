package server

import (
	"context"
	"encoding/binary"
	"errors"
	"fmt"
	"io"
	"sync"
	"sync/atomic"
	"time"

	"google.golang.org/grpc"
	"google.golang.org/grpc/metadata"
	"google.golang.org/protobuf/proto"

	"example.org/kinegate/service/api"
)

// call is one call on its way: the stream that handlers see, and what the record
// says about it in the end.
type call struct {
	grpc.ServerStream

	transport transportStream

	ctx    context.Context //nolint:containedctx // a ServerStream carries its context
	stream bool            // it may last
	single bool            // one message and then the end is all that may come
	method string
	label  string
	begun  time.Time
	limits api.Limits
	use    *inUse // what was in use when it began

	reference string   // ours, unique: what a caller quotes to us
	requestID string   // the caller's if it is short and plain, else the reference
	names     []string // URIs and DNS names of the caller's certificate
	caller    string   // whose quota it counts against
	shared    *front   // whose large requests are bounded; nil for none
	held      int64    // bytes of its request that count there
	trace     trace
	cutFor    atomic.Pointer[api.Failure] // why it was ended from outside; nil if it was not
	headed    sync.Once
	told      time.Time   // when the last summary was written; guarded by openStreams.mu
	waiting   *time.Timer // ends a stream whose first message does not come; nil for none

	// Readers and writers of a stream are different goroutines.
	received, sent           atomic.Int64
	receivedBytes, sentBytes atomic.Int64
}

// Context is the context of the call, with its deadline.
func (c *call) Context() context.Context { return c.ctx }

// RecvMsg receives the next message; io.EOF is the end.
func (c *call) RecvMsg(m any) error {
	in := incoming{limits: c.limits}
	switch m := m.(type) {
	case *api.Borrowed:
		in.message, in.borrowed = m.Message, m
	case proto.Message:
		in.message = m
	default:
		return fmt.Errorf("cannot receive a %T", m)
	}
	err := c.receive(&in)
	switch {
	case !c.single:
		return err
	case errors.Is(err, io.EOF):
		return api.Refuse(api.MessageUndecodable, "the call came without a message")
	case err != nil:
		return err
	case !errors.Is(c.receive(&incoming{limits: c.limits}), io.EOF):
		return api.Refuse(api.MessageUndecodable, "the call came with more than one message")
	}
	return nil
}

// Before each message stand a byte that says whether it is compressed and its length.
const (
	messageHeaderBytes = 5
	plain, compressed  = 0, 1
)

// receive receives one message and counts it. What is over the limit is refused by its
// announced length, before any of it is read.
func (c *call) receive(in *incoming) error {
	var header [messageHeaderBytes]byte
	if err := c.transport.ReadMessageHeader(header[:]); err != nil {
		return receiveFailure(err)
	}
	length := int64(binary.BigEndian.Uint32(header[1:]))
	switch {
	case header[0] == compressed:
		return compressionRefused("this message")
	case header[0] != plain:
		return api.Refuse(api.MessageUndecodable, "the header of the message is malformed")
	case length > int64(c.limits.MessageBytes):
		return tooLarge(length, int64(c.limits.MessageBytes))
	}
	if err := c.hold(length); err != nil {
		return err
	}
	data, err := c.transport.Read(int(length))
	if errors.Is(err, io.EOF) && length > 0 {
		err = io.ErrUnexpectedEOF // the caller ended its side inside a message
	}
	if err != nil {
		return receiveFailure(err)
	}
	defer data.Free()
	if c.waiting != nil {
		c.waiting.Stop()
	}
	in.read(data)
	if in.fault != nil {
		return in.fault
	}
	c.received.Add(1)
	c.receivedBytes.Add(length)
	return nil
}

// hold takes room for a message that is about to be read.
func (c *call) hold(length int64) error {
	if c.shared == nil {
		return nil
	}
	taken, err := c.shared.holding.enter(length)
	if err != nil {
		return c.shared.refuse(err)
	}
	c.held += taken
	return nil
}

// compressionRefused is the failure of a call or message that comes compressed.
func compressionRefused(what string) *api.Failure {
	return api.Refuse(api.CompressionUnsupported, what+" is compressed, and only identity is understood",
		"supported", "identity")
}

// SendHeader sends the headers now.
func (c *call) SendHeader(header metadata.MD) error {
	c.head()
	return c.ServerStream.SendHeader(header)
}

// head adds the trace to the headers of a call that is going to be answered. Before
// that a failure must stay without headers: a client that has some does not try again.
func (c *call) head() {
	c.headed.Do(func() { _ = c.SetHeader(metadata.MD{traceKey: {c.trace.header()}}) }) // too late if it fails
}

// SendMsg sends a message.
func (c *call) SendMsg(m any) error {
	out, err := encode(m, c.limits.MessageBytes)
	if err != nil {
		return err
	}
	size := int64(out.data.Len())
	c.head()
	if err := c.ServerStream.SendMsg(out); err != nil {
		// Encoding is behind us: the caller or the connection has gone.
		return &api.Failure{Reason: api.CallCancelled, Message: "the caller has gone", Cause: err}
	}
	c.sent.Add(1)
	c.sentBytes.Add(size)
	return nil
}

// receiveFailure is the failure of a message that does not come whole; io.EOF is the end.
func receiveFailure(err error) error {
	if errors.Is(err, io.ErrUnexpectedEOF) {
		return &api.Failure{Reason: api.MessageUndecodable, Message: "the message is cut short", Cause: err}
	}
	return err
}

// Names of the metadata that calls carry.
const (
	requestIDKey = "x-request-id"
	pushbackKey  = "grpc-retry-pushback-ms"
	maxRequestID = 64
)

// plainID returns a caller's request id if it is safe to repeat in logs and errors,
// else the empty string.
func plainID(ctx context.Context) string {
	values := metadata.ValueFromIncomingContext(ctx, requestIDKey)
	if len(values) != 1 || len(values[0]) > maxRequestID {
		return ""
	}
	for _, b := range []byte(values[0]) {
		plain := b == '-' || b == '_' || b == '.' || '0' <= b && b <= '9' || 'a' <= b && b <= 'z' || 'A' <= b && b <= 'Z'
		if !plain {
			return ""
		}
	}
	return values[0]
}
