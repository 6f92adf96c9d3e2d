package kinegate

import (
	"context"
	"errors"
	"fmt"
	"io"
	"sync"
	"sync/atomic"
	"time"

	"google.golang.org/grpc"
	"google.golang.org/protobuf/proto"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// JudgeStream is an open judge stream. Send and Recv may run on two goroutines;
// neither may run on several at once. Reading must go on while sending, for the
// verdicts return the credit that Send waits for.
type JudgeStream struct {
	// Opened is what the server answered to the opening.
	Opened *kinegatev1.JudgeOpened

	stream   grpc.BidiStreamingClient[kinegatev1.JudgeRequest, kinegatev1.JudgeResponse]
	cancel   context.CancelFunc
	verdicts chan *kinegatev1.VerdictBlock

	// sending serialises frames. It is apart from mu, since gRPC may hold a sender
	// back until the receiver, which needs mu, has read on.
	sending  sync.Mutex
	lastSent atomic.Int64 // in ns of the Unix epoch

	mu       sync.Mutex // guards what follows
	credit   sync.Cond
	sizes    []int64 // of the blocks without a verdict, oldest first
	bytes    int64
	next     int64 // sequence of the next block
	answered int64
	err      error // why the stream ended
	ended    bool
	draining bool
}

// heartbeatInterval is the silence after which a heartbeat goes out.
const heartbeatInterval = time.Second

// ErrDraining reports a stream that the server ended because it will leave. Every
// block up to the last verdict received was answered; open a new stream with the
// next sequence for the rest.
var ErrDraining = errors.New("the server is about to leave")

// Judge opens a judge stream. Cancelling ctx ends it at once.
func (c *Client) Judge(ctx context.Context, open *kinegatev1.JudgeOpen) (*JudgeStream, error) {
	ctx, cancel := context.WithCancel(ctx)
	stream, err := c.Selections.Judge(ctx)
	if err != nil {
		cancel()
		return nil, err
	}
	opened, err := openStream(stream, open)
	if err != nil {
		cancel()
		return nil, err
	}
	s := &JudgeStream{
		Opened: opened, stream: stream, cancel: cancel,
		verdicts: make(chan *kinegatev1.VerdictBlock, max(opened.GetCredit().GetBlockCount(), 1)),
		next:     open.GetFirstSequence(), answered: open.GetFirstSequence() - 1,
	}
	s.credit.L = &s.mu
	s.lastSent.Store(time.Now().UnixNano())
	go s.receive()
	go s.beat(ctx)
	return s, nil
}

func openStream(stream grpc.BidiStreamingClient[kinegatev1.JudgeRequest, kinegatev1.JudgeResponse], open *kinegatev1.JudgeOpen) (*kinegatev1.JudgeOpened, error) {
	request := &kinegatev1.JudgeRequest{Frame: &kinegatev1.JudgeRequest_Open{Open: open}}
	if err := stream.Send(request); err != nil && !errors.Is(err, io.EOF) {
		return nil, err
	}
	response, err := stream.Recv() // after an EOF of Send it holds the status
	if err != nil {
		return nil, err
	}
	if response.GetOpened() == nil {
		return nil, fmt.Errorf("the server answered the opening with %T", response.GetFrame())
	}
	return response.GetOpened(), nil
}

// Send sends a block, whose sequence it sets, after waiting for the credit that it
// costs. After the end of the stream it returns the reason.
func (s *JudgeStream) Send(block *kinegatev1.EventBlock) error {
	if err := s.reserve(block); err != nil {
		return err
	}
	return s.send(&kinegatev1.JudgeRequest{Frame: &kinegatev1.JudgeRequest_Block{Block: block}})
}

// reserve waits for the credit of a block and gives it the next sequence.
func (s *JudgeStream) reserve(block *kinegatev1.EventBlock) error {
	s.mu.Lock()
	defer s.mu.Unlock()
	block.Sequence = s.next
	size := int64(proto.Size(block))
	credit := s.Opened.GetCredit()
	for !s.ended && (int64(len(s.sizes)) >= credit.GetBlockCount() || s.bytes+size > credit.GetByteCount() && len(s.sizes) > 0) {
		s.credit.Wait()
	}
	if s.ended {
		return s.reasonLocked()
	}
	if s.draining {
		return ErrDraining
	}
	s.sizes = append(s.sizes, size)
	s.bytes += size
	s.next++
	return nil
}

// CloseSend says that no more blocks will come. Recv goes on until the last
// verdict.
func (s *JudgeStream) CloseSend() error {
	s.sending.Lock()
	defer s.sending.Unlock()
	return s.stream.CloseSend()
}

// Recv returns the next verdict block, in the order of the event blocks. At the end
// it returns io.EOF after CloseSend, ErrDraining if the server left before, or the
// status that ended the stream.
func (s *JudgeStream) Recv() (*kinegatev1.VerdictBlock, error) {
	if v, ok := <-s.verdicts; ok {
		return v, nil
	}
	s.mu.Lock()
	defer s.mu.Unlock()
	return nil, s.reasonLocked()
}

// Close ends the stream at once.
func (s *JudgeStream) Close() { s.cancel() }

func (s *JudgeStream) reasonLocked() error {
	if s.draining && errors.Is(s.err, io.EOF) {
		return ErrDraining
	}
	return s.err
}

// send sends a frame; gRPC reports the end of a stream as io.EOF there and
// the reason at Recv, so the receiver is left to find it.
func (s *JudgeStream) send(request *kinegatev1.JudgeRequest) error {
	s.sending.Lock()
	defer s.sending.Unlock()
	s.lastSent.Store(time.Now().UnixNano())
	if err := s.stream.Send(request); err != nil && !errors.Is(err, io.EOF) {
		return err
	}
	return nil
}

// receive takes frames until the stream ends.
func (s *JudgeStream) receive() {
	defer close(s.verdicts)
	for {
		response, err := s.stream.Recv()
		if err != nil {
			s.mu.Lock()
			s.err, s.ended = err, true
			s.mu.Unlock()
			s.credit.Broadcast()
			s.cancel()
			return
		}
		if v := response.GetVerdict(); v != nil {
			s.settle(v.GetSequence())
			// The channel has room for the whole credit.
			s.verdicts <- v
		}
		if response.GetDraining() != nil {
			s.mu.Lock()
			s.draining = true
			s.mu.Unlock()
		}
	}
}

// settle takes the credit of the oldest block back.
func (s *JudgeStream) settle(sequence int64) {
	s.mu.Lock()
	defer s.mu.Unlock()
	if len(s.sizes) > 0 {
		s.bytes -= s.sizes[0]
		s.sizes = s.sizes[1:]
	}
	s.answered = sequence
	s.credit.Broadcast()
}

// beat sends a heartbeat after a second without a frame.
func (s *JudgeStream) beat(ctx context.Context) {
	ticker := time.NewTicker(heartbeatInterval / 4)
	defer ticker.Stop()
	for {
		select {
		case <-ctx.Done():
			return
		case <-ticker.C:
		}
		if silence := time.Duration(time.Now().UnixNano() - s.lastSent.Load()); silence < heartbeatInterval {
			continue
		}
		s.mu.Lock()
		answered, ended := s.answered, s.ended
		s.mu.Unlock()
		if ended {
			return
		}
		// A failure shows at the next Send or Recv.
		_ = s.send(&kinegatev1.JudgeRequest{Frame: &kinegatev1.JudgeRequest_Heartbeat{
			Heartbeat: &kinegatev1.Heartbeat{ReceivedSequence: answered, AnsweredSequence: answered},
		}})
	}
}
