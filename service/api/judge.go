package api

import (
	"errors"
	"io"
	"time"

	"google.golang.org/grpc"
	"google.golang.org/grpc/metadata"

	"example.org/kinegate/kinematics/fault"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// judgeServer is the server's side of the stream.
type judgeServer = grpc.BidiStreamingServer[kinegatev1.JudgeRequest, kinegatev1.JudgeResponse]

// Judge answers event blocks with verdict blocks in order.
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

// Memory of replies. A stream whose reader has stopped holds three: one that the
// transport has taken, one on its way there and one just judged.
const (
	repliesHeld = 3
	// replyAllowance is what they may take beside the stream's credit.
	replyAllowance = 256 << 10
)

// booking is what a stream takes from the pool: its credit, and room for replies that
// could be large.
func booking(credit, largestReply int64) int64 {
	return credit + max(0, repliesHeld*largestReply-replyAllowance)
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
	held := &hold{pool: s.credit}
	room := func(largestReply int64) error { return held.grow(booking(int64(limits.CreditBytes), largestReply)) }
	if err := room(judging.largestReply()); err != nil {
		return nil, err
	}
	judging.room = room
	j := newJudgeStream(s, stream, judging, open, held.giveBack)
	if err := stream.SendHeader(metadata.MD{}); err != nil {
		held.giveBack()
		return nil, err
	}
	opened := &kinegatev1.JudgeOpened{
		Selection: judging.compiled.outline,
		Credit:    &kinegatev1.Credit{BlockCount: int64(limits.CreditBlocks), ByteCount: int64(limits.CreditBytes)},
		Limits:    promised.message(),
	}
	if err := stream.Send(&kinegatev1.JudgeResponse{Frame: &kinegatev1.JudgeResponse_Opened{Opened: opened}}); err != nil {
		held.giveBack()
		return nil, err
	}
	return j, nil
}
