package kinegate

import (
	"context"
	"errors"
	"fmt"
	"io"
	"math/rand/v2"
	"sync"
	"sync/atomic"
	"time"

	"google.golang.org/genproto/googleapis/rpc/errdetails"
	"google.golang.org/grpc"
	"google.golang.org/grpc/codes"
	"google.golang.org/grpc/status"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// link is one rpc that carries a judge stream, on a connection of its own where the
// client can make one: a dead connection must not be waited for, and the traffic of
// other calls must not stand before verdicts.
type link struct {
	opened *kinegatev1.JudgeOpened

	stream grpc.BidiStreamingClient[kinegatev1.JudgeRequest, kinegatev1.JudgeResponse]
	cancel context.CancelCauseFunc
	ctx    context.Context //nolint:containedctx // the life of the rpc
	hangUp func()

	// sending serialises frames: blocks and heartbeats come from two goroutines. Nothing is
	// sent after the end.
	sending sync.Mutex
	ended   bool
	// Times of frames, in ns of the monotonic clock since start.
	start              time.Time
	lastSent, lastSeen atomic.Int64
	// progress is the last verdict, or the first block after a time without any.
	progress atomic.Int64
	draining atomic.Bool
	answered atomic.Int64

	// What the server has of us, guarded by the stream's mutex.
	blocks, bytes int64
}

var (
	errSilent   = errors.New("the server was silent")
	errTooLong  = errors.New("the opening took too long")
	errStuck    = errors.New("the server is stuck")
	errDraining = errors.New("the server has left")
	errProtocol = errors.New("the server broke the protocol of the stream")
)

// link opens one rpc within a time. Only the first opening of a stream waits for a server to
// be there: after a break the next address may be better.
func (c *Client) link(ctx context.Context, open *kinegatev1.JudgeOpen, limit time.Duration, wait bool) (*link, error) {
	ctx, cancel := context.WithCancelCause(ctx)
	l := &link{ctx: ctx, cancel: cancel, hangUp: func() {}, start: time.Now()}
	l.answered.Store(open.GetFirstSequence() - 1)
	fail := func(err error) (*link, error) {
		if cause := context.Cause(ctx); errors.Is(cause, errTooLong) {
			err = fmt.Errorf("%w: %w", cause, err)
		}
		l.close()
		return nil, err
	}
	timer := time.AfterFunc(limit, func() { cancel(errTooLong) })
	defer timer.Stop()
	selections := c.Selections
	if c.redial != nil {
		conn, err := c.redial()
		if err != nil {
			return fail(err)
		}
		// Nobody waits for it: gRPC first tries for 5 s to say goodbye, which a dead line
		// does not take.
		l.hangUp = func() { go func() { _ = conn.Close() }() }
		selections = kinegatev1.NewSelectionServiceClient(conn)
	}
	var err error
	if l.stream, err = selections.Judge(ctx, grpc.WaitForReady(wait)); err != nil {
		return fail(err)
	}
	if l.opened, err = l.openStream(open); err != nil {
		return fail(err)
	}
	return l, nil
}

func (l *link) openStream(open *kinegatev1.JudgeOpen) (*kinegatev1.JudgeOpened, error) {
	if err := l.send(&kinegatev1.JudgeRequest{Frame: &kinegatev1.JudgeRequest_Open{Open: open}}); err != nil {
		return nil, err
	}
	response, err := l.stream.Recv()
	if err != nil {
		return nil, err
	}
	l.lastSeen.Store(l.now())
	if response.GetOpened() == nil {
		return nil, fmt.Errorf("%w: it answered the opening with %T", errProtocol, response.GetFrame())
	}
	return response.GetOpened(), nil
}

func (l *link) now() int64 { return int64(time.Since(l.start)) }

// close ends the rpc and its connection.
func (l *link) close() {
	l.cancel(context.Canceled)
	l.hangUp()
}

// send sends a frame; gRPC reports the end of a stream as io.EOF there and the reason
// at Recv, so the receiver is left to find it.
func (l *link) send(request *kinegatev1.JudgeRequest) error {
	l.sending.Lock()
	defer l.sending.Unlock()
	if l.ended {
		return nil // a heartbeat: the server waits for none any more
	}
	l.lastSent.Store(l.now())
	if err := l.stream.Send(request); err != nil && !errors.Is(err, io.EOF) {
		return err
	}
	return nil
}

// end says that no more will be sent.
func (l *link) end() {
	l.sending.Lock()
	defer l.sending.Unlock()
	l.ended = true
	_ = l.stream.CloseSend() // it cannot fail
}

// serve carries the stream over a link until that ends, and returns why.
func (s *JudgeStream) serve(l *link) error {
	var all sync.WaitGroup
	all.Go(func() { s.feed(l) })
	all.Go(func() { s.guard(l) })
	all.Go(func() { s.beat(l) })
	err := s.receive(l)
	if cause := context.Cause(l.ctx); cause != nil && s.ctx.Err() == nil {
		err = cause
	}
	l.close()
	s.mu.Lock()
	s.changed.Broadcast()
	s.mu.Unlock()
	all.Wait()
	return err
}

// receive takes frames until the rpc ends.
func (s *JudgeStream) receive(l *link) error {
	for {
		response, err := l.stream.Recv()
		switch {
		case errors.Is(err, io.EOF) && l.draining.Load():
			return errDraining
		case err != nil:
			return err
		}
		l.lastSeen.Store(l.now())
		switch x := response.GetFrame().(type) {
		case *kinegatev1.JudgeResponse_Verdict:
			bytes, err := s.settle(x.Verdict)
			if err != nil {
				return err
			}
			l.progress.Store(l.now())
			l.answered.Store(x.Verdict.GetSequence())
			s.mu.Lock()
			l.blocks--
			l.bytes -= bytes
			s.changed.Broadcast()
			s.mu.Unlock()
		case *kinegatev1.JudgeResponse_Taken:
			if err := s.announce(x.Taken); err != nil {
				return err
			}
		case *kinegatev1.JudgeResponse_Draining:
			l.draining.Store(true)
		}
	}
}

// feed sends queued blocks as the credit allows, and the end of sending.
func (s *JudgeStream) feed(l *link) {
	for {
		block, end := s.nextBlock(l)
		switch {
		case block != nil:
			// A failure shows at the receiver.
			_ = l.send(&kinegatev1.JudgeRequest{Frame: &kinegatev1.JudgeRequest_Block{Block: block}})
		case end:
			l.end()
			return
		default:
			return
		}
	}
}

// nextBlock waits for a block and its credit. It returns none at the end of sending,
// and at that of the link.
func (s *JudgeStream) nextBlock(l *link) (block *kinegatev1.EventBlock, end bool) {
	s.mu.Lock()
	defer s.mu.Unlock()
	for {
		switch {
		case l.ctx.Err() != nil:
			return nil, false
		case s.closed && s.sent == len(s.queue):
			return nil, true
		case s.sent < len(s.queue) && !l.draining.Load() && l.affords(s.queue[s.sent].bytes):
			next := &s.queue[s.sent]
			if next.sent.IsZero() {
				next.sent = time.Now()
			}
			s.sent++
			if l.blocks == 0 {
				l.progress.Store(l.now())
			}
			l.blocks++
			l.bytes += next.bytes
			return next.block, false
		}
		s.changed.Wait()
	}
}

// affords reports whether the credit covers one more block.
func (l *link) affords(bytes int64) bool {
	credit := l.opened.GetCredit()
	return l.blocks == 0 || l.blocks < credit.GetBlockCount() && l.bytes+bytes <= credit.GetByteCount()
}

// looks is how often in a heartbeat interval times are looked at.
const looks = 20

// beat sends a heartbeat after a second without a frame.
func (s *JudgeStream) beat(l *link) {
	ticker := time.NewTicker(heartbeatInterval / looks)
	defer ticker.Stop()
	for {
		select {
		case <-l.ctx.Done():
			return
		case <-ticker.C:
		}
		if time.Duration(l.now()-l.lastSent.Load()) < heartbeatInterval {
			continue
		}
		answered := l.answered.Load()
		// A failure shows at the receiver.
		_ = l.send(&kinegatev1.JudgeRequest{Frame: &kinegatev1.JudgeRequest_Heartbeat{
			Heartbeat: &kinegatev1.Heartbeat{
				ReceivedSequence: answered, AnsweredSequence: answered, OldestPendingS: s.oldest().Seconds(),
			},
		}})
	}
}

// oldest is the time since the oldest block without a verdict was sent first; 0 where there is none.
func (s *JudgeStream) oldest() time.Duration {
	s.mu.Lock()
	defer s.mu.Unlock()
	if len(s.queue) == 0 || s.queue[0].sent.IsZero() {
		return 0
	}
	return time.Since(s.queue[0].sent)
}

// guard cuts a link whose server is silent or stuck. It never sends, which could block.
func (s *JudgeStream) guard(l *link) {
	ticker := time.NewTicker(heartbeatInterval / looks)
	defer ticker.Stop()
	for {
		select {
		case <-l.ctx.Done():
			return
		case <-ticker.C:
		}
		now := l.now()
		s.mu.Lock()
		stuck := s.options.Stuck
		late := l.blocks > 0 && time.Duration(now-l.progress.Load()) > stuck
		if late {
			s.options.Stuck *= 2
		}
		s.mu.Unlock()
		switch {
		case time.Duration(now-l.lastSeen.Load()) > s.options.Silence:
			l.cancel(fmt.Errorf("%w for %v", errSilent, s.options.Silence))
		case late:
			l.cancel(fmt.Errorf("%w: no verdict for %v", errStuck, stuck))
		}
	}
}

// passing reports whether another attempt may go better: the connection broke, the
// server was silent, stuck or has left, or it said so itself. Whatever else the server
// answered would be answered again.
func passing(err error) bool {
	for _, one := range []error{errSilent, errTooLong, errStuck, errDraining, io.EOF} {
		if errors.Is(err, one) {
			return true
		}
	}
	s, ok := status.FromError(err)
	if !ok {
		return false
	}
	for _, d := range s.Details() {
		if info, ok := d.(*errdetails.ErrorInfo); ok {
			// The server ends a stream after a minute of silence; ours was cut off.
			return s.Code() == codes.Unavailable || info.GetReason() == "STREAM_IDLE"
		}
	}
	// No word from the server itself: this is the transport.
	switch s.Code() {
	case codes.Unavailable, codes.Internal, codes.Unknown, codes.Canceled:
		return true
	default:
		return false
	}
}

// jitter varies a time by a quarter, so that clients of one server do not return at once.
func jitter(d time.Duration) time.Duration {
	const quarter, whole = 0.25, 2
	return time.Duration(float64(d) * (1 - quarter + whole*quarter*rand.Float64())) //nolint:gosec // no secret
}
