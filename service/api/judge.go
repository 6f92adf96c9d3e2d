package api

import (
	"context"
	"errors"
	"io"
	"strings"
	"time"

	"google.golang.org/grpc"
	"google.golang.org/grpc/metadata"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/fault"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// heartbeatInterval is the silence after which a side says that it is alive.
const heartbeatInterval = time.Second

// judgeServer is the server's side of the stream.
type judgeServer = grpc.BidiStreamingServer[kinegatev1.JudgeRequest, kinegatev1.JudgeResponse]

// Judge answers event blocks with verdict blocks in order.
//
// Three goroutines share the work, so that no caller can wedge the stream by
// writing without reading: the reader books credit and hands blocks on, the judge
// turns them into verdicts, and the handler's own goroutine writes. Between them
// are channels as long as the block credit, which the reader never overfills
// because it refuses blocks beyond the credit.
func (s *selectionService) Judge(stream judgeServer) error {
	open, err := firstFrame(stream)
	if err != nil {
		return err
	}
	j, err := s.open(stream, open)
	if err != nil {
		return err
	}
	defer j.giveBack()
	s.deps.Observer.StreamOpened()
	err = j.run()
	s.deps.Observer.StreamClosed(j.outcome(err))
	return err
}

// firstFrame receives the frame that opens the stream.
func firstFrame(stream judgeServer) (*kinegatev1.JudgeOpen, error) {
	request, err := stream.Recv()
	if errors.Is(err, io.EOF) {
		return nil, Refuse(StreamProtocolBroken, "the stream ended before its first frame, which must be open")
	}
	if err != nil {
		return nil, err
	}
	open := request.GetOpen()
	if open == nil {
		return nil, Refuse(StreamProtocolBroken, "the first frame must be open")
	}
	if open.GetFirstSequence() < 0 {
		return nil, fault.Number("open.first_sequence", float64(open.GetFirstSequence()), ">= 0")
	}
	if budget := open.LatencyBudgetS; budget != nil && !(*budget > 0 && *budget <= maxLatencyBudget.Seconds()) {
		return nil, fault.Number("open.latency_budget_s", *budget, "> 0 and <= 3600")
	}
	return open, nil
}

// maxLatencyBudget bounds the budget well below the range of time.Duration.
const maxLatencyBudget = time.Hour

// judgeStream is one open stream.
type judgeStream struct {
	service *selectionService
	stream  judgeServer
	ledger  ledger
	// pending are blocks read and not yet judged, replies verdicts not yet sent.
	pending chan pendingBlock
	replies chan reply
	// reader ends the reading: the channel's error is why, nil at the caller's end.
	ended    chan error
	judging  *judging
	budget   time.Duration
	giveBack func()
	drained  bool
}

// pendingBlock is a block on its way to the judge.
type pendingBlock struct {
	block   *kinegatev1.EventBlock
	bytes   int64
	receipt time.Time
}

// reply is a verdict on its way to the caller.
type reply struct {
	verdict *kinegatev1.VerdictBlock
	bytes   int64
	receipt time.Time
}

// open takes the credit, compiles the selection and tells the caller both. The
// headers go out at once: until a client has them, its retry policy may replay
// frames to a second server.
func (s *selectionService) open(stream judgeServer, open *kinegatev1.JudgeOpen) (*judgeStream, error) {
	select {
	case <-s.deps.Drain.Started:
		return nil, Refuse(ServerDraining, "the server is about to leave")
	default:
	}
	limits := s.deps.Limits
	promised, err := limits.blocks().narrow(open.GetLimits())
	if err != nil {
		return nil, In("open", err)
	}
	judging, err := s.newJudging(open.GetSelection(), open.GetEntries(), promised, open.GetFollow())
	if err != nil {
		return nil, err
	}
	giveBack, err := s.credit.take(int64(limits.CreditBytes))
	if err != nil {
		return nil, err
	}
	j := &judgeStream{
		service: s, stream: stream, judging: judging, giveBack: giveBack,
		pending: make(chan pendingBlock, limits.CreditBlocks),
		replies: make(chan reply, limits.CreditBlocks),
		ended:   make(chan error, 1),
		ledger: ledger{
			blockCredit: int64(limits.CreditBlocks), byteCredit: int64(limits.CreditBytes),
			received: open.GetFirstSequence() - 1, answered: open.GetFirstSequence() - 1,
		},
	}
	if open.LatencyBudgetS != nil {
		j.budget = time.Duration(open.GetLatencyBudgetS() * float64(time.Second))
	}
	if err := stream.SendHeader(metadata.MD{}); err != nil {
		giveBack()
		return nil, err
	}
	opened := &kinegatev1.JudgeOpened{
		SelectionDigest: judging.compiled.digest,
		Credit:          &kinegatev1.Credit{BlockCount: int64(limits.CreditBlocks), ByteCount: int64(limits.CreditBytes)},
		Limits:          limitsMessage(limits, promised),
		Hypotheses:      judging.compiled.outline,
	}
	if err := stream.Send(&kinegatev1.JudgeResponse{Frame: &kinegatev1.JudgeResponse_Opened{Opened: opened}}); err != nil {
		giveBack()
		return nil, err
	}
	return j, nil
}

// run serves the stream to its end. The reader may outlive it by a moment: gRPC
// unblocks it when the handler returns.
func (j *judgeStream) run() error {
	ctx, cancel := context.WithCancel(j.stream.Context())
	defer cancel()
	stop := make(chan struct{})
	go func() { j.ended <- Contain(func() error { return j.read(ctx, stop) }) }()
	judged := make(chan error, 1)
	go func() {
		defer close(j.replies)
		judged <- Contain(func() error { return j.judge(ctx) })
	}()
	writeErr := j.write(stop)
	cancel()
	// The judge ends because its context or its input does; its error comes first,
	// as it may be the reason why the replies ended.
	if err := <-judged; err != nil && !errors.Is(err, context.Canceled) {
		return err
	}
	if writeErr != nil || j.drained {
		return writeErr
	}
	return <-j.ended
}

// read receives frames until the caller ends, breaks the protocol, or stop is
// closed. It always closes pending, after the last block that will be answered.
func (j *judgeStream) read(ctx context.Context, stop <-chan struct{}) error {
	frames := make(chan frame)
	go func() {
		defer close(frames)
		for {
			var request *kinegatev1.JudgeRequest
			err := Contain(func() (err error) {
				request, err = j.stream.Recv()
				return err
			})
			select {
			case frames <- frame{request, err}:
			case <-ctx.Done():
				return
			}
			if err != nil {
				return
			}
		}
	}()
	defer close(j.pending)
	idleLimit := j.service.deps.StreamIdle
	idle := time.NewTimer(idleLimit)
	defer idle.Stop()
	for {
		select {
		case f := <-frames:
			if errors.Is(f.err, io.EOF) {
				return nil
			}
			if f.err != nil {
				return f.err
			}
			idle.Reset(idleLimit)
			if err := j.accept(f.request); err != nil {
				return err
			}
		case <-idle.C:
			return Refuse(StreamIdle, "no block and no heartbeat for "+idleLimit.String())
		case <-stop:
			return nil
		case <-ctx.Done():
			return ctx.Err()
		}
	}
}

// frame is what Recv returned.
type frame struct {
	request *kinegatev1.JudgeRequest
	err     error
}

// accept books a block and hands it on; the channel has room for the whole credit.
func (j *judgeStream) accept(request *kinegatev1.JudgeRequest) error {
	switch f := request.GetFrame().(type) {
	case *kinegatev1.JudgeRequest_Block:
		receipt := j.service.deps.Now()
		bytes := blockBytes(f.Block)
		if err := j.ledger.use(f.Block.GetSequence(), bytes, receipt); err != nil {
			return err
		}
		j.pending <- pendingBlock{block: f.Block, bytes: bytes, receipt: receipt}
		return nil
	case *kinegatev1.JudgeRequest_Heartbeat:
		return nil
	case *kinegatev1.JudgeRequest_Open:
		return Refuse(StreamProtocolBroken, "the stream is open already")
	}
	return Refuse(StreamProtocolBroken, "a frame must be a block or a heartbeat")
}

// judge turns blocks into verdicts until there are no more.
func (j *judgeStream) judge(ctx context.Context) error {
	for p := range j.pending {
		var deadline time.Time
		if j.budget > 0 {
			deadline = p.receipt.Add(j.budget)
		}
		verdict, err := j.judging.block(ctx, p.block, p.bytes, deadline)
		if err != nil {
			return err
		}
		select {
		case j.replies <- reply{verdict: verdict, bytes: p.bytes, receipt: p.receipt}:
		case <-ctx.Done():
			return ctx.Err()
		}
	}
	return nil
}

// write sends verdicts, and a heartbeat after a second of silence, until there are
// no more. When the server drains it says so, stops the reading, and goes on until
// everything that was read is answered.
func (j *judgeStream) write(stop chan<- struct{}) error {
	beat := time.NewTimer(heartbeatInterval)
	defer beat.Stop()
	draining := j.service.deps.Drain.Started
	for {
		var response *kinegatev1.JudgeResponse
		select {
		case r, more := <-j.replies:
			if !more {
				return nil
			}
			if err := j.stream.Send(&kinegatev1.JudgeResponse{Frame: &kinegatev1.JudgeResponse_Verdict{Verdict: r.verdict}}); err != nil {
				return err
			}
			j.ledger.answer(r.verdict.GetSequence(), r.bytes)
			j.observe(r)
			beat.Reset(heartbeatInterval)
			continue
		case <-beat.C:
			received, answered, oldest := j.ledger.pulse(j.service.deps.Now())
			response = &kinegatev1.JudgeResponse{Frame: &kinegatev1.JudgeResponse_Heartbeat{Heartbeat: &kinegatev1.Heartbeat{
				ReceivedSequence: received, AnsweredSequence: answered, OldestPendingS: oldest.Seconds(),
			}}}
		case <-draining:
			draining, j.drained = nil, true
			close(stop)
			_, answered, _ := j.ledger.pulse(j.service.deps.Now())
			response = &kinegatev1.JudgeResponse{Frame: &kinegatev1.JudgeResponse_Draining{Draining: &kinegatev1.Draining{
				AnsweredSequence: answered, GraceS: j.service.deps.Drain.Grace.Seconds(),
			}}}
		}
		if err := j.stream.Send(response); err != nil {
			return err
		}
		beat.Reset(heartbeatInterval)
	}
}

// observe counts a reply that was sent.
func (j *judgeStream) observe(r reply) {
	observer := j.service.deps.Observer
	observer.BlockAnswered(j.service.deps.Now().Sub(r.receipt))
	if r.verdict.GetRejected() != nil {
		observer.EventsJudged("block_rejected", 0)
		return
	}
	var counts [event.BudgetUsed + 1]int
	for _, status := range r.verdict.GetStatuses() {
		if int(status) < len(counts) {
			counts[status]++
		}
	}
	accepted := onesCount(r.verdict.GetGate())
	observer.EventsJudged("accepted", accepted)
	observer.EventsJudged("rejected", counts[event.Good]+counts[event.BudgetUsed]-accepted)
	for status := event.NonFinite; status <= event.Expired; status++ {
		if counts[status] > 0 {
			observer.EventsJudged(statusLabel(status), counts[status])
		}
	}
}

// statusLabel is the name of a status in the contract, in the form of a label.
func statusLabel(s event.Status) string {
	name := kinegatev1.EventStatus(s).String()
	return strings.ToLower(strings.TrimPrefix(name, "EVENT_STATUS_"))
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
