package api

import (
	"context"
	"io"
	"testing"
	"testing/synctest"
	"time"

	"google.golang.org/grpc"
	"google.golang.org/grpc/metadata"
	"google.golang.org/protobuf/proto"

	"example.org/kinegate/clients/go/history"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// gateCaller is a caller of the gate without a network.
type gateCaller struct {
	grpc.ServerStream

	ctx context.Context
	in  chan *kinegatev1.JudgeRequest
	out chan *kinegatev1.JudgeResponse
}

func (c *gateCaller) Context() context.Context { return c.ctx }

func (c *gateCaller) SendHeader(metadata.MD) error { return nil }

func (c *gateCaller) Recv() (*kinegatev1.JudgeRequest, error) {
	select {
	case m, more := <-c.in:
		if !more {
			return nil, io.EOF
		}
		return m, nil
	case <-c.ctx.Done():
		return nil, c.ctx.Err()
	}
}

func (c *gateCaller) RecvMsg(into any) error {
	m, err := c.Recv()
	if err == nil {
		proto.Merge(into.(*Borrowed).Message, m)
	}
	return err
}

func (c *gateCaller) Send(m *kinegatev1.JudgeResponse) error {
	c.out <- m
	return nil
}

func (c *gateCaller) SendMsg(m any) error {
	response, plain := m.(*kinegatev1.JudgeResponse)
	if !plain {
		response = &kinegatev1.JudgeResponse{}
		if err := proto.Unmarshal(m.(*Encoded).Data.Materialize(), response); err != nil {
			return err
		}
	}
	c.out <- response
	return nil
}

// verdict returns the next verdict, and how old the server's oldest block was at most
// in the heartbeats before.
func (c *gateCaller) verdict() (v *kinegatev1.VerdictBlock, oldest float64) {
	for response := range c.out {
		if v := response.GetVerdict(); v != nil {
			return v, oldest
		}
		oldest = max(oldest, response.GetHeartbeat().GetOldestPendingS())
	}
	return nil, oldest
}

// whileTaken opens a stream with a latency budget of half a second while others have
// all of some turns for 2.5 s, sends two blocks, and returns how many events of each
// were judged and how long the first was seen to wait.
func whileTaken(t *testing.T, s *Services, taken *turns) (judged [2]int, waited float64) {
	t.Helper()
	for range taken.count() {
		if err := taken.take(t.Context()); err != nil {
			t.Fatal(err)
		}
	}
	time.AfterFunc(2500*time.Millisecond, func() {
		for range taken.count() {
			taken.giveBack()
		}
	})
	ctx, cancel := context.WithCancel(t.Context())
	defer cancel()
	c := &gateCaller{ctx: ctx, in: make(chan *kinegatev1.JudgeRequest), out: make(chan *kinegatev1.JudgeResponse, 16)}
	over := make(chan error, 1)
	go func() {
		over <- s.gate.Judge(c)
		close(c.out)
	}()
	open := history.AllEntries()
	open.LatencyBudgetS = new(0.5)
	c.in <- &kinegatev1.JudgeRequest{Frame: &kinegatev1.JudgeRequest_Open{Open: open}}
	for i := range int64(2) {
		block := history.Photons(0, 3)
		block.Sequence = i
		c.in <- &kinegatev1.JudgeRequest{Frame: &kinegatev1.JudgeRequest_Block{Block: block}}
	}
	for i := range judged {
		v, oldest := c.verdict()
		if v.GetEventCount() != 3 {
			t.Fatalf("verdict %v", v)
		}
		waited = max(waited, oldest)
		for _, status := range v.GetStatuses() {
			if kinegatev1.EventStatus(status) == kinegatev1.EventStatus_EVENT_STATUS_JUDGED {
				judged[i]++
			}
		}
	}
	close(c.in)
	if err := <-over; err != nil {
		t.Error(err)
	}
	return judged, waited
}

// TestBudgetCountsFromReceipt: a block that waits behind another for longer than the
// latency budget is expired when its turn comes, and heartbeats say how long it waits.
func TestBudgetCountsFromReceipt(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		s := newServices(t)
		judged, waited := whileTaken(t, s, s.gate.turns)
		if judged != [2]int{} {
			t.Errorf("%d events judged after their time", judged)
		}
		if waited != 2 {
			t.Errorf("heartbeats speak of %g s, want 2 after the second", waited)
		}
	})
}

// TestGateHasItsOwnTurns: bulk work that has all turns of its own holds up no verdict.
func TestGateHasItsOwnTurns(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		s := newServices(t)
		if judged, _ := whileTaken(t, s, s.bulk.turns); judged != [2]int{3, 3} {
			t.Errorf("%d events of 3 and 3 judged", judged)
		}
		time.Sleep(3 * time.Second) // until the turns are back
	})
}
