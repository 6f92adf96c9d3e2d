package conformance_test

import (
	"errors"
	"fmt"
	"io"
	"testing"
	"time"

	"google.golang.org/grpc"
	"google.golang.org/grpc/codes"
	"google.golang.org/grpc/credentials/insecure"
	"google.golang.org/grpc/status"
	"google.golang.org/protobuf/proto"

	"example.org/kinegate/clients/go/conformance"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// faulty is a small client of its own that can break one rule. Without a fault it keeps
// those that the scripts with faults are about.
type faulty struct {
	swaps, skips, takesAnyVerdict, ignoresCredit            bool
	resumesFromStart, resumesAfterSent, forgetsDigest       bool
	takesAnyDigest, ignoresDraining, neverBeats, leavesLate bool
	acceptsLate, neverEnds, givesUp, comesAgain             bool
}

func (f faulty) name() string { return fmt.Sprintf("%+v", f) }

// session is a run of a faulty client.
type session struct {
	faulty

	script   *conformance.Script
	blocks   []*kinegatev1.EventBlock
	digest   string
	answered int // blocks
	sent     int // blocks, on the connection at hand
	verdicts []*kinegatev1.VerdictBlock
}

// run pushes the blocks of a script over as many connections as it takes.
func (f faulty) run(t *testing.T, address string, s *conformance.Script) (verdicts []*kinegatev1.VerdictBlock, failed bool) {
	t.Helper()
	conn, err := grpc.NewClient(address, grpc.WithTransportCredentials(insecure.NewCredentials()))
	if err != nil {
		t.Fatal(err)
	}
	defer conn.Close() //nolint:errcheck // it has nothing else to do
	c := &session{faulty: f, script: s}
	if c.blocks, err = s.Events(); err != nil {
		t.Fatal(err)
	}
	// Once more than it should.
	for range len(s.Connections) + 1 {
		stream, err := kinegatev1.NewSelectionServiceClient(conn).Judge(t.Context())
		if err != nil {
			t.Fatal(err)
		}
		if over, err := c.connection(stream); over {
			return c.verdicts, err != nil
		}
	}
	return c.verdicts, true
}

type stream = grpc.BidiStreamingClient[kinegatev1.JudgeRequest, kinegatev1.JudgeResponse]

// connection serves one; over where the stream is to end.
func (c *session) connection(st stream) (over bool, err error) {
	open := c.script.Open()
	open.FirstSequence += int64(c.answered)
	switch {
	case c.resumesFromStart:
		open.FirstSequence = c.script.FirstSequence
	case c.resumesAfterSent:
		open.FirstSequence = c.script.FirstSequence + int64(max(c.answered, c.sent))
	}
	if !c.forgetsDigest {
		open.GetSelection().GetNamed().SelectionDigest = c.digest
	}
	_ = st.Send(&kinegatev1.JudgeRequest{Frame: &kinegatev1.JudgeRequest_Open{Open: open}})
	response, err := st.Recv()
	if err != nil {
		final := status.Code(err) != codes.Unavailable
		return (final || c.givesUp) && !c.comesAgain, err
	}
	opened := response.GetOpened()
	if c.digest != "" && opened.GetSelection().GetSelectionDigest() != c.digest && !c.takesAnyDigest {
		_ = st.CloseSend()
		return true, errors.New("another selection")
	}
	c.digest = opened.GetSelection().GetSelectionDigest()
	c.sent = c.answered
	draining := false
	for {
		if !draining || c.ignoresDraining {
			c.send(st, opened.GetCredit())
		}
		if c.sent == len(c.blocks) && c.answered == len(c.blocks) && !c.neverEnds {
			_ = st.CloseSend()
		}
		response, err := c.next(st)
		switch {
		case errors.Is(err, io.EOF):
			return c.answered == len(c.blocks), nil
		case err != nil:
			return false, err
		case response.GetDraining() != nil:
			draining = true
		case response.GetVerdict() != nil:
			if !c.take(response.GetVerdict()) {
				return true, errors.New("a verdict that was not due")
			}
		}
	}
}

// send sends what the credit allows, at most.
func (c *session) send(st stream, credit *kinegatev1.Credit) {
	for c.sent < len(c.blocks) {
		var bytes int64
		for _, b := range c.blocks[c.answered : c.sent+1] {
			bytes += int64(proto.Size(b))
		}
		waiting := int64(c.sent - c.answered)
		over := waiting > 0 && (waiting >= credit.GetBlockCount() || bytes > credit.GetByteCount())
		if over && !c.ignoresCredit {
			return
		}
		b := proto.CloneOf(c.blocks[c.sent])
		b.Sequence = c.script.FirstSequence + int64(c.sent)
		switch {
		case c.swaps && c.sent < 2: //nolint:mnd // the first two
			b.Sequence = c.script.FirstSequence + int64(1-c.sent)
		case c.skips && c.sent > 0:
			b.Sequence++
		}
		_ = st.Send(&kinegatev1.JudgeRequest{Frame: &kinegatev1.JudgeRequest_Block{Block: b}})
		c.sent++
	}
}

// next waits for a frame and beats after each second.
func (c *session) next(st stream) (*kinegatev1.JudgeResponse, error) {
	stop := make(chan struct{})
	done := make(chan struct{})
	go func() {
		defer close(done)
		for {
			select {
			case <-stop:
				return
			case <-time.After(time.Second):
			}
			if !c.neverBeats {
				last := c.script.FirstSequence + int64(c.answered) - 1
				_ = st.Send(&kinegatev1.JudgeRequest{Frame: &kinegatev1.JudgeRequest_Heartbeat{
					Heartbeat: &kinegatev1.Heartbeat{ReceivedSequence: last, AnsweredSequence: last},
				}})
			}
		}
	}()
	response, err := st.Recv()
	close(stop)
	<-done
	return response, err
}

// take keeps a verdict, by the policy for late events.
func (c *session) take(v *kinegatev1.VerdictBlock) bool {
	if v.GetSequence() != c.script.FirstSequence+int64(c.answered) && !c.takesAnyVerdict {
		return false
	}
	c.answered++
	for i, s := range v.GetStatuses() {
		late := kinegatev1.EventStatus(s) == kinegatev1.EventStatus_EVENT_STATUS_EXPIRED
		if late && (c.acceptsLate || c.script.Late == "accept" && !c.leavesLate) {
			v.Gate[0] |= 1 << i
		}
	}
	c.verdicts = append(c.verdicts, v)
	return true
}
