package conformance

import (
	"errors"
	"fmt"
	"sync"
	"time"

	"google.golang.org/genproto/googleapis/rpc/errdetails"
	"google.golang.org/grpc"
	"google.golang.org/grpc/codes"
	"google.golang.org/grpc/metadata"
	"google.golang.org/grpc/status"
	"google.golang.org/protobuf/encoding/protojson"
	"google.golang.org/protobuf/proto"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// Double is a server that plays a script against a client and notes the first rule that
// the client breaks.
type Double struct {
	kinegatev1.UnimplementedSelectionServiceServer

	script *Script

	mu     sync.Mutex
	next   int // connection
	played int // connections played to their end
	breach error
}

// NewDouble returns a double that plays a script once.
func NewDouble(s *Script) *Double { return &Double{script: s} }

// Result is the first rule that was broken, or that the client did not come far enough.
// It waits a moment for what is on its way.
func (d *Double) Result() error {
	const look, looks = 20 * time.Millisecond, 50
	for range looks {
		d.mu.Lock()
		over := d.breach != nil || d.played >= len(d.script.Connections)
		d.mu.Unlock()
		if over {
			break
		}
		time.Sleep(look)
	}
	d.mu.Lock()
	defer d.mu.Unlock()
	if d.breach == nil && d.played < len(d.script.Connections) {
		return &BreachError{d.script.Rule, fmt.Sprintf("%d of %d connections were played", d.played, len(d.script.Connections))}
	}
	return d.breach
}

type judgeServer = grpc.BidiStreamingServer[kinegatev1.JudgeRequest, kinegatev1.JudgeResponse]

// Judge plays the next connection.
func (d *Double) Judge(stream judgeServer) error {
	d.mu.Lock()
	number := d.next
	d.next++
	over := d.breach != nil || number >= len(d.script.Connections)
	if number >= len(d.script.Connections) && d.breach == nil {
		d.breach = &BreachError{d.script.Rule, "the client came once more than it should"}
	}
	d.mu.Unlock()
	if over {
		return status.Error(codes.FailedPrecondition, "the script is over")
	}
	c := &connection{stream: stream, frames: make(chan *kinegatev1.JudgeRequest)}
	go c.receive()
	if err := stream.SendHeader(metadata.MD{}); err != nil {
		return err
	}
	for i := range d.script.Connections[number] {
		step := &d.script.Connections[number][i]
		done, end, err := c.play(step)
		if err != nil {
			d.mu.Lock()
			defer d.mu.Unlock()
			d.breach = &BreachError{step.Rule, fmt.Sprintf("connection %d, step %d: %v", number, i, err)}
			return status.Error(codes.FailedPrecondition, "the client broke a rule")
		}
		if done {
			d.mu.Lock()
			defer d.mu.Unlock()
			d.played++
			return end
		}
	}
	return status.Error(codes.Internal, "the script has no end")
}

// connection is one rpc of a client.
type connection struct {
	stream judgeServer
	frames chan *kinegatev1.JudgeRequest
}

// receive hands frames on; the channel closes when the client has ended its sending.
func (c *connection) receive() {
	defer close(c.frames)
	for {
		f, err := c.stream.Recv()
		if err != nil {
			return
		}
		select {
		case c.frames <- f:
		case <-c.stream.Context().Done():
			return
		}
	}
}

// play does one step. It returns how the rpc ends where the step ends it, or an error
// where the client did something else than was due.
func (c *connection) play(s *Step) (done bool, end, breach error) {
	switch {
	case s.Client != nil:
		return false, nil, c.expect(s)
	case s.Finish:
		return false, nil, c.expectEnd(s)
	case s.QuietS > 0:
		return false, nil, c.quiet(s)
	case s.Server != nil:
		response := &kinegatev1.JudgeResponse{}
		if err := protojson.Unmarshal(s.Server, response); err != nil {
			return false, nil, err
		}
		return false, nil, c.stream.Send(response)
	case s.Unknown != nil:
		response := &kinegatev1.JudgeResponse{}
		if err := proto.Unmarshal(s.Unknown, response); err != nil {
			return false, nil, err
		}
		return false, nil, c.stream.Send(response)
	case s.Failure != nil:
		return true, s.Failure.status(), nil
	case s.End == "cut":
		// A status without a word from the server, as a broken transport makes it.
		return true, status.Error(codes.Unavailable, "cut"), nil
	case s.End == "left":
		timer := time.NewTimer(s.within())
		defer timer.Stop()
		select {
		case <-c.stream.Context().Done():
			return true, nil, nil
		case <-timer.C:
			return false, nil, fmt.Errorf("the client did not leave within %v", s.within())
		}
	}
	return true, nil, nil
}

// expect waits for a frame. Heartbeats may come at any time.
func (c *connection) expect(s *Step) error {
	timer := time.NewTimer(s.within())
	defer timer.Stop()
	for {
		select {
		case f, more := <-c.frames:
			if !more {
				return errors.New("the client ended its sending")
			}
			came, err := form(f)
			if err != nil {
				return err
			}
			err = compare(s.Client, came, DefaultTolerance)
			if err != nil && f.GetHeartbeat() != nil {
				continue
			}
			return err
		case <-timer.C:
			return fmt.Errorf("no frame came within %v; due: %s", s.within(), s.Client)
		}
	}
}

// expectEnd waits for the end of the client's sending.
func (c *connection) expectEnd(s *Step) error {
	timer := time.NewTimer(s.within())
	defer timer.Stop()
	for {
		select {
		case f, more := <-c.frames:
			if !more {
				return nil
			}
			if f.GetHeartbeat() == nil {
				return fmt.Errorf("a frame came after the last: %T", f.GetFrame())
			}
		case <-timer.C:
			return fmt.Errorf("the client did not end its sending within %v", s.within())
		}
	}
}

// quiet waits while no block may come and the client may not leave; it may end its sending.
func (c *connection) quiet(s *Step) error {
	timer := time.NewTimer(time.Duration(s.QuietS * float64(time.Second)))
	defer timer.Stop()
	frames := c.frames
	for {
		select {
		case <-c.stream.Context().Done():
			return errors.New("the client left")
		case f, more := <-frames:
			if !more {
				frames = nil
				continue
			}
			if b := f.GetBlock(); b != nil {
				return fmt.Errorf("block %d came where none may", b.GetSequence())
			}
		case <-timer.C:
			return nil
		}
	}
}

// status is the failure as a status with its details.
func (f *Failure) status() error {
	code, err := f.code()
	if err != nil {
		return err
	}
	s, err := status.New(code, "by the script").WithDetails(&errdetails.ErrorInfo{Reason: f.Reason, Domain: "kinegate.example.org"})
	if err != nil {
		return err
	}
	return s.Err()
}
