package api

import (
	"context"
	"errors"
	"sync/atomic"
	"time"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// Times of the judge stream.
const (
	heartbeatInterval = time.Second
	// stallLook is how often the writer's progress is looked at.
	stallLook = 100 * time.Millisecond
	// brokenGrace is what a caller who broke the protocol has to take what is written:
	// it may be one who never reads.
	brokenGrace = 500 * time.Millisecond
)

// judgeStream is one open stream.
//
// Three goroutines share the work, so that no caller can wedge the stream by writing
// without reading: the reader books credit and hands blocks on, the judge turns them
// into replies, and the writer sends. The handler's own goroutine watches them.
// Between reader and judge is a channel as long as the block credit, which the reader
// never overfills because it refuses blocks beyond the credit. Between judge and
// writer there is none: replies that nobody takes would be memory that nobody counts.
type judgeStream struct {
	service    *selectionService
	stream     judgeServer
	connection Connection
	ledger     ledger
	judging    *judging
	budget     time.Duration
	giveBack   func()

	pending chan pendingBlock
	replies chan *reply
	// stop ends the reading, leave tells the writer to say goodbye.
	stop  chan struct{}
	leave chan kinegatev1.DrainReason
	// outline is the digest of the selection whose outline the caller has. The judge's own.
	outline string
	// sending is when the send in progress began, in ns since the start; 0 for none.
	sending atomic.Int64
	start   time.Time
	drained bool
}

// pendingBlock is a block on its way to the judge.
type pendingBlock struct {
	frame   *Borrowed
	block   *kinegatev1.EventBlock
	bytes   int64
	receipt time.Time
}

func newJudgeStream(s *selectionService, stream judgeServer, judging *judging, open *kinegatev1.JudgeOpen, giveBack func()) *judgeStream {
	limits := s.deps.Limits
	j := &judgeStream{
		service: s, stream: stream, connection: s.deps.Connection(stream.Context()),
		judging: judging, giveBack: giveBack, start: time.Now(),
		pending: make(chan pendingBlock, limits.CreditBlocks),
		replies: make(chan *reply),
		stop:    make(chan struct{}), leave: make(chan kinegatev1.DrainReason, 1),
		outline: judging.compiled.digest,
		ledger: ledger{
			blockCredit: int64(limits.CreditBlocks), byteCredit: int64(limits.CreditBytes),
			received: open.GetFirstSequence() - 1, answered: open.GetFirstSequence() - 1,
		},
	}
	if open.LatencyBudgetS != nil {
		j.budget = time.Duration(open.GetLatencyBudgetS() * float64(time.Second))
	}
	return j
}

// run serves the stream to its end. The reader may outlive it by a moment: gRPC
// unblocks it when the handler returns.
func (j *judgeStream) run() error {
	ctx, cancel := context.WithCancel(j.stream.Context())
	defer cancel()
	read, judged, written := make(chan error, 1), make(chan error, 1), make(chan error, 1)
	go func() { read <- Contain(func() error { return j.read(ctx) }) }()
	go func() {
		defer close(j.replies)
		judged <- Contain(func() error { return j.judge(ctx) })
	}()
	go func() {
		written <- Contain(j.write)
		// Nobody takes replies any more.
		cancel()
	}()
	end := j.watch(read, written)
	cancel()
	if errors.Is(end.write, errStalled) {
		return j.abandon(written, end.read)
	}
	// The judge ends because its context or its input does; its error comes first, as
	// it may be the reason why the replies ended.
	if err := <-judged; err != nil && !errors.Is(err, context.Canceled) {
		return err
	}
	if end.write != nil || j.drained {
		return end.write
	}
	if !end.readOver {
		end.read = <-read
	}
	if end.read != nil && Explain(end.read).Reason != CallCancelled && j.connection.Close != nil {
		// The status may queue behind replies that nobody takes, and then the caller,
		// whose blocks nobody reads any more, would wait for ever.
		time.AfterFunc(brokenGrace, j.connection.Close)
	}
	return end.read
}

// ending is why a stream ended: its reading, if it was over, and its writing.
type ending struct {
	readOver    bool
	read, write error
}

var errStalled = errors.New("no progress in sending")

// watch waits for the end of the writing, which is the end of the stream, and gives
// the signs to leave.
func (j *judgeStream) watch(read, written <-chan error) ending {
	look := time.NewTicker(stallLook)
	defer look.Stop()
	var lifeOver <-chan time.Time
	if j.connection.Life > 0 {
		life := time.NewTimer(j.connection.Life)
		defer life.Stop()
		lifeOver = life.C
	}
	limit := j.service.deps.StallLimit
	draining := j.service.deps.Drain.Started
	var end ending
	for {
		select {
		case end.write = <-written:
			return end
		case end.read = <-read:
			read, end.readOver = nil, true
			if end.read != nil {
				limit = min(limit, brokenGrace)
			}
		case <-draining:
			draining, lifeOver = nil, nil
			j.leave <- kinegatev1.DrainReason_DRAIN_REASON_SERVER_STOPS
		case <-lifeOver:
			draining, lifeOver = nil, nil
			j.leave <- kinegatev1.DrainReason_DRAIN_REASON_CONNECTION_AGE
		case <-look.C:
			if since := j.sending.Load(); since > 0 && time.Since(j.start)-time.Duration(since) > limit {
				end.write = errStalled
				return end
			}
		}
	}
}

// abandon ends a stream whose caller takes nothing. The status alone would not: it
// queues behind the data that nobody reads, and so would the shutdown of the server.
func (j *judgeStream) abandon(written <-chan error, readErr error) error {
	if j.connection.Close != nil {
		j.connection.Close()
		<-written //nolint:errcheck // only its end matters
	}
	if readErr != nil {
		return readErr
	}
	return Refuse(StreamStalled, "the caller took no verdict for "+j.service.deps.StallLimit.String())
}

// judge turns blocks into replies until there are no more.
func (j *judgeStream) judge(ctx context.Context) error {
	for p := range j.pending {
		r, err := j.answer(ctx, p)
		p.frame.Release()
		if err != nil {
			return err
		}
		select {
		case j.replies <- r:
		case <-ctx.Done():
			r.data.Free()
			return ctx.Err()
		}
	}
	return nil
}

// answer judges one block and encodes the reply.
func (j *judgeStream) answer(ctx context.Context, p pendingBlock) (*reply, error) {
	var deadline time.Time
	if j.budget > 0 {
		deadline = p.receipt.Add(j.budget)
	}
	w, _ := workspaces.Get().(*workspace)
	verdict, err := j.judging.block(ctx, p.block, p.bytes, deadline, w)
	if err != nil {
		return nil, err
	}
	r, err := newReply(verdict, p)
	workspaces.Put(w)
	if err == nil && verdict.GetSelectionDigest() != j.outline {
		r.taken, j.outline = j.judging.compiled.outline, verdict.GetSelectionDigest()
	}
	return r, err
}

// outcome is the label under which the end of a stream is counted.
func (j *judgeStream) outcome(err error) string {
	switch {
	case err != nil:
		return string(Explain(err).Reason)
	case j.drained:
		return "draining"
	}
	return "done"
}
