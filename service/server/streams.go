package server

import (
	"context"
	"sync"
	"time"

	"google.golang.org/grpc"
	"google.golang.org/grpc/mem"
	"google.golang.org/grpc/status"

	"example.org/kinegate/service/api"
)

// Times of open streams.
const (
	// lookPeriod is how often open streams are looked at.
	lookPeriod = 5 * time.Second
	// summaryPeriod is how often a stream that goes on writes a line.
	summaryPeriod = time.Minute
)

// openStreams are the streams of a server that are open: a call that may last for
// hours is authorised again and again, and logged before it ends.
type openStreams struct {
	mu    sync.Mutex
	calls map[*call]*front
}

// add begins to look at a stream.
func (s *openStreams) add(c *call, f *front) {
	s.mu.Lock()
	defer s.mu.Unlock()
	if s.calls == nil {
		s.calls = map[*call]*front{}
	}
	c.told = c.begun
	s.calls[c] = f
}

// remove ends that.
func (s *openStreams) remove(c *call) {
	s.mu.Lock()
	defer s.mu.Unlock()
	delete(s.calls, c)
}

// look ends the streams whose callers may no longer call, and writes the lines that are
// due.
func (s *openStreams) look(now time.Time) {
	s.mu.Lock()
	defer s.mu.Unlock()
	for c, f := range s.calls {
		if err := f.authorise(c, f.current.Load()); err != nil {
			c.cut(err)
			continue
		}
		if now.Sub(c.told) >= summaryPeriod {
			c.told = now
			f.writeSummary(c, now.Sub(c.begun))
		}
	}
}

// watch looks until the context ends.
func (s *openStreams) watch(ctx context.Context) {
	ticker := time.NewTicker(lookPeriod)
	defer ticker.Stop()
	for {
		select {
		case <-ctx.Done():
			return
		case now := <-ticker.C:
			s.look(now)
		}
	}
}

// transportStream is what the stream under a call can do beyond its public face.
//
// Messages are read from it frame by frame: gRPC's own reading answers a message over the
// limit or a compressed one by itself, without an ErrorInfo. And it ends a call with a
// status, whatever its handler waits for: a handler cannot be made to return while it
// receives, and gRPC would answer the end of its context by itself.
type transportStream interface {
	// RecvCompress is the compression that the caller's headers name; empty for none.
	RecvCompress() string
	// ReadMessageHeader fills the five bytes before a message.
	ReadMessageHeader(header []byte) error
	// Read reads the bytes of a message.
	Read(n int) (mem.BufferSlice, error)
	// WriteStatus ends the call.
	WriteStatus(s *status.Status) error
}

// transportOf is the stream under a call; nil if gRPC has changed, which every test of a
// call would notice.
func transportOf(stream grpc.ServerStream) transportStream {
	t, _ := grpc.ServerTransportStreamFromContext(stream.Context()).(transportStream)
	return t
}

// cut ends the call for a reason; the first one counts.
func (c *call) cut(why error) {
	failure := api.Explain(why)
	if c.cutFor.CompareAndSwap(nil, failure) {
		_ = c.transport.WriteStatus(failure.Status(c.reference)) // it fails if the caller has gone
	}
}
