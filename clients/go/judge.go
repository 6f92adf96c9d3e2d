package kinegate

import (
	"context"
	"errors"
	"fmt"
	"io"
	"sync"
	"time"

	"google.golang.org/protobuf/proto"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// LatePolicy says what the gate decides on events that the server answered EXPIRED,
// which is no judgement.
type LatePolicy int

const (
	// AcceptLate lets late events pass, so that none is lost.
	AcceptLate LatePolicy = iota
	// RejectLate drops late events.
	RejectLate
)

// JudgeOptions say how a judge stream is kept up. The zero value is sound.
type JudgeOptions struct {
	// Late is what the gate bit of a late event is set to.
	Late LatePolicy
	// Queue is how many blocks may be on their way at once, from Send to Recv, over
	// what the server's credit allows; 0 means twice the credit.
	Queue int
	// Opening is the time for the first opening, which waits for a server to be there; 10 s
	// if 0. Judge then returns an *UnreachableError.
	Opening time.Duration
	// Silence is the time without any frame after which a connection is dead; 3 s if 0.
	// The server sends a heartbeat every second.
	Silence time.Duration
	// Stuck is the time without any verdict on blocks that the server has, after which
	// it is stuck; 3 s if 0. It doubles whenever it passes, in case blocks take longer.
	Stuck time.Duration
	// GiveUp is the time after a break in which the stream must be open again, else it
	// ends; a minute if 0.
	GiveUp time.Duration
	// Broken is called with the reason after each break. Optional.
	Broken func(error)
}

// Times of the protocol and of its resumption.
const (
	heartbeatInterval = time.Second
	defaultOpening    = 10 * time.Second
	defaultSilence    = 3 * time.Second
	defaultGiveUp     = time.Minute
	firstBackoff      = 50 * time.Millisecond
	lastBackoff       = time.Second
)

// withDefaults fills in what is 0, but for the queue, which the credit decides.
func (o JudgeOptions) withDefaults() JudgeOptions {
	if o.Opening <= 0 {
		o.Opening = defaultOpening
	}
	if o.Silence <= 0 {
		o.Silence = defaultSilence
	}
	if o.Stuck <= 0 {
		o.Stuck = defaultSilence
	}
	if o.GiveUp <= 0 {
		o.GiveUp = defaultGiveUp
	}
	return o
}

// JudgeStream is a judge stream that comes back when it breaks: it connects anew and
// goes on with the first block without a verdict and with the digest of the selection
// that it was opened with, so that the verdicts are those of a stream that never broke.
//
// Send and Recv may run on two goroutines; neither may run on several at once.
// Receiving must go on while sending, for the queue between them is bounded.
type JudgeStream struct {
	// Opened is what the server answered to the first opening.
	Opened *kinegatev1.JudgeOpened

	client   *Client
	open     *kinegatev1.JudgeOpen
	options  JudgeOptions
	ctx      context.Context //nolint:containedctx // the life of the stream, which is no call
	cancel   context.CancelFunc
	verdicts chan *kinegatev1.VerdictBlock
	over     chan struct{}

	mu      sync.Mutex // guards what follows
	changed sync.Cond
	// queue are the blocks without a verdict, oldest first; the link at hand was given
	// the first sent of them. taking are the verdicts that Recv has not fetched.
	queue  []outgoing
	sent   int
	taking int
	next   int64 // sequence of the next block
	late   int64 // events so far
	closed bool  // by CloseSend
	ended  bool
	err    error // why it ended
	// outlines are those of the selections that judge or have judged, by digest: as many as
	// versions were reloaded.
	outlines map[string]*kinegatev1.SelectionOutline
	// broken is when the stream broke for the first time since it last went well, zero
	// while it does; backoff is how long the next attempt waits.
	broken  time.Time
	backoff time.Duration
}

// outgoing is a block without a verdict.
type outgoing struct {
	block *kinegatev1.EventBlock
	bytes int64
	sent  time.Time // for the first time; zero before
}

// errSelectionChanged reports a server that judges with something else although the caller does not follow.
var errSelectionChanged = errors.New("the server would judge with another selection than the stream was opened with")

// Judge opens a judge stream. An opening that fails is not tried again; one that nobody
// answers within JudgeOptions.Opening fails with an *UnreachableError. Cancelling ctx ends
// the stream at once.
func (c *Client) Judge(ctx context.Context, open *kinegatev1.JudgeOpen, options JudgeOptions) (*JudgeStream, error) {
	options = options.withDefaults()
	ctx, cancel := context.WithCancel(ctx)
	first, err := c.link(ctx, open, options.Opening, true)
	if err != nil {
		cancel()
		if errors.Is(err, errTooLong) {
			return nil, c.unreachable(err, options.Opening)
		}
		return nil, err
	}
	if options.Queue <= 0 {
		options.Queue = 2 * int(max(first.opened.GetCredit().GetBlockCount(), 1))
	}
	s := &JudgeStream{
		Opened: first.opened, client: c, open: proto.CloneOf(open), ctx: ctx, cancel: cancel,
		options: options, over: make(chan struct{}),
		next: open.GetFirstSequence(), outlines: map[string]*kinegatev1.SelectionOutline{},
	}
	_ = s.announce(first.opened.GetSelection()) // the first may be any
	s.verdicts = make(chan *kinegatev1.VerdictBlock, s.options.Queue)
	s.changed.L = &s.mu
	if named := s.open.GetSelection().GetNamed(); named != nil && !s.open.GetFollow() {
		named.SelectionDigest = first.opened.GetSelection().GetSelectionDigest()
	}
	go s.run(first)
	return s, nil
}

// Send queues a block, whose sequence it sets and which must not be changed before its
// verdict. It waits while the queue is full. After the end of the stream it returns the
// reason.
func (s *JudgeStream) Send(block *kinegatev1.EventBlock) error {
	s.mu.Lock()
	defer s.mu.Unlock()
	for !s.ended && len(s.queue)+s.taking >= s.options.Queue {
		s.changed.Wait()
	}
	if s.ended {
		return s.err
	}
	if s.closed {
		return errors.New("a block after CloseSend")
	}
	block.Sequence = s.next
	s.next++
	s.queue = append(s.queue, outgoing{block: block, bytes: int64(proto.Size(block))})
	s.changed.Broadcast()
	return nil
}

// CloseSend says that no more blocks will come. Recv goes on until the last verdict.
func (s *JudgeStream) CloseSend() error {
	s.mu.Lock()
	defer s.mu.Unlock()
	s.closed = true
	s.changed.Broadcast()
	return nil
}

// Recv returns the next verdict block, in the order of the event blocks. At the end it
// returns io.EOF after CloseSend, or why the stream ended.
func (s *JudgeStream) Recv() (*kinegatev1.VerdictBlock, error) {
	v, more := <-s.verdicts
	s.mu.Lock()
	defer s.mu.Unlock()
	if !more {
		return nil, s.err
	}
	s.taking--
	s.changed.Broadcast()
	return v, nil
}

// LateCount is how many events so far were late: answered EXPIRED, and decided on by
// JudgeOptions.Late. It counts verdicts that came, also where Recv has not fetched them yet.
func (s *JudgeStream) LateCount() int64 {
	s.mu.Lock()
	defer s.mu.Unlock()
	return s.late
}

// Close ends the stream at once and waits for its goroutines.
func (s *JudgeStream) Close() {
	s.cancel()
	<-s.over
}

// run serves links until the stream is over.
func (s *JudgeStream) run(l *link) {
	defer close(s.over)
	for {
		begun := time.Now()
		err := s.serve(l)
		if time.Since(begun) > s.options.Silence {
			s.wentWell()
		}
		if s.done() {
			s.end(io.EOF)
			return
		}
		if s.ctx.Err() != nil || !passing(err) {
			s.end(s.reason(err))
			return
		}
		if s.options.Broken != nil {
			s.options.Broken(err)
		}
		if l, err = s.resume(err); err != nil {
			s.end(s.reason(err))
			return
		}
	}
}

// done reports whether every block has its verdict and no more will come.
func (s *JudgeStream) done() bool {
	s.mu.Lock()
	defer s.mu.Unlock()
	return s.closed && len(s.queue) == 0
}

// reason is the end of the context where that is why.
func (s *JudgeStream) reason(err error) error {
	if s.ctx.Err() != nil {
		return context.Cause(s.ctx)
	}
	return err
}

func (s *JudgeStream) end(err error) {
	s.mu.Lock()
	s.err, s.ended = err, true
	s.changed.Broadcast()
	s.mu.Unlock()
	close(s.verdicts)
	s.cancel()
}

// wentWell forgets former breaks.
func (s *JudgeStream) wentWell() {
	s.mu.Lock()
	defer s.mu.Unlock()
	s.broken = time.Time{}
}

// pause waits before an attempt to come back, not at all before the first one.
func (s *JudgeStream) pause() (giveUp bool) {
	s.mu.Lock()
	if s.broken.IsZero() {
		s.broken, s.backoff = time.Now(), firstBackoff
		s.mu.Unlock()
		return false
	}
	giveUp = time.Since(s.broken) > s.options.GiveUp
	wait := jitter(s.backoff)
	s.backoff = min(2*s.backoff, lastBackoff)
	s.mu.Unlock()
	if giveUp {
		return true
	}
	timer := time.NewTimer(wait)
	defer timer.Stop()
	select {
	case <-timer.C:
	case <-s.ctx.Done():
	}
	return false
}

// resume opens the next link after a break, with the first block without a verdict.
func (s *JudgeStream) resume(cause error) (*link, error) {
	for err := cause; ; {
		if giveUp := s.pause(); giveUp {
			return nil, fmt.Errorf("giving up after %v: %w", s.options.GiveUp, err)
		}
		s.mu.Lock()
		s.sent = 0
		open := proto.CloneOf(s.open)
		open.FirstSequence = s.next - int64(len(s.queue))
		s.mu.Unlock()
		var l *link
		l, err = s.client.link(s.ctx, open, s.options.Silence, false)
		switch {
		case err == nil:
			if err = s.announce(l.opened.GetSelection()); err != nil {
				l.close()
				return nil, err
			}
			return l, nil
		case s.ctx.Err() != nil || !passing(err):
			return nil, err
		}
	}
}

// announce takes the outline of the selection that judges from now on, which without follow is the
// one that the stream was opened with.
func (s *JudgeStream) announce(outline *kinegatev1.SelectionOutline) error {
	s.mu.Lock()
	defer s.mu.Unlock()
	if !s.open.GetFollow() && outline.GetSelectionDigest() != s.Opened.GetSelection().GetSelectionDigest() {
		return errSelectionChanged
	}
	s.outlines[outline.GetSelectionDigest()] = outline
	return nil
}

// Outline is the outline of the selection that judged a verdict block of the stream: what its
// columns mean. Where the opening says follow, it may differ from that of Opened.
func (s *JudgeStream) Outline(v *kinegatev1.VerdictBlock) *kinegatev1.SelectionOutline {
	s.mu.Lock()
	defer s.mu.Unlock()
	return s.outlines[v.GetSelectionDigest()]
}

// settle takes a verdict, which answers the oldest block, and hands it to Recv.
func (s *JudgeStream) settle(v *kinegatev1.VerdictBlock) (bytes int64, err error) {
	s.mu.Lock()
	defer s.mu.Unlock()
	if s.sent == 0 || v.GetSequence() != s.queue[0].block.GetSequence() {
		return 0, fmt.Errorf("%w: verdict %d was not due", errProtocol, v.GetSequence())
	}
	if _, known := s.outlines[v.GetSelectionDigest()]; !known {
		return 0, fmt.Errorf("%w: verdict %d is of a selection that was not announced", errProtocol, v.GetSequence())
	}
	bytes = s.queue[0].bytes
	s.queue[0] = outgoing{}
	s.queue = s.queue[1:]
	s.sent--
	s.taking++
	s.broken = time.Time{}
	s.late += decideLate(v, s.options.Late == AcceptLate)
	// The channel has room for the whole queue.
	s.verdicts <- v
	s.changed.Broadcast()
	return bytes, nil
}

// decideLate sets the gate bit of every event that was late, and counts them: the bit that
// came with one is no judgement.
func decideLate(v *kinegatev1.VerdictBlock, accept bool) (count int64) {
	const bitsPerByte = 8
	for i, status := range v.GetStatuses() {
		if kinegatev1.EventStatus(status) != kinegatev1.EventStatus_EVENT_STATUS_EXPIRED || i/bitsPerByte >= len(v.GetGate()) {
			continue
		}
		count++
		if bit := byte(1) << (i % bitsPerByte); accept {
			v.Gate[i/bitsPerByte] |= bit
		} else {
			v.Gate[i/bitsPerByte] &^= bit
		}
	}
	return count
}
