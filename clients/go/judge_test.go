package kinegate_test

import (
	"errors"
	"net"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"google.golang.org/grpc"

	kinegate "example.org/kinegate/clients/go"
	"example.org/kinegate/proto/column"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// gate answers judge streams: it opens them and answers each block as verdict says, which
// may wait.
type gate struct {
	kinegatev1.UnimplementedSelectionServiceServer

	verdict func(sequence int64) *kinegatev1.VerdictBlock
}

func (g gate) Judge(stream grpc.BidiStreamingServer[kinegatev1.JudgeRequest, kinegatev1.JudgeResponse]) error {
	for {
		request, err := stream.Recv()
		if err != nil {
			return nil //nolint:nilerr // the client has ended it
		}
		var response kinegatev1.JudgeResponse
		switch x := request.GetFrame().(type) {
		case *kinegatev1.JudgeRequest_Open:
			response.Frame = &kinegatev1.JudgeResponse_Opened{Opened: &kinegatev1.JudgeOpened{
				Selection: &kinegatev1.SelectionOutline{SelectionDigest: "d1"},
				Credit:    &kinegatev1.Credit{BlockCount: 4, ByteCount: 1 << 20},
			}}
		case *kinegatev1.JudgeRequest_Block:
			verdict := g.verdict(x.Block.GetSequence())
			verdict.SelectionDigest = "d1"
			response.Frame = &kinegatev1.JudgeResponse_Verdict{Verdict: verdict}
		default:
			continue
		}
		if err := stream.Send(&response); err != nil {
			return err
		}
	}
}

// listenAt serves a gate at the path of a socket.
func listenAt(t *testing.T, path string, g gate) {
	t.Helper()
	listener, err := (&net.ListenConfig{}).Listen(t.Context(), "unix", path)
	if err != nil {
		t.Fatal(err)
	}
	server := grpc.NewServer()
	kinegatev1.RegisterSelectionServiceServer(server, g)
	go func() { _ = server.Serve(listener) }()
	t.Cleanup(server.Stop)
}

func dial(t *testing.T, address string) *kinegate.Client {
	t.Helper()
	client, err := kinegate.Dial(address, kinegate.Options{})
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { _ = client.Close() })
	return client
}

// TestOpeningHasItsTime: where nobody listens or a listener says nothing, an opening ends
// within its time, with the reason.
func TestOpeningHasItsTime(t *testing.T) {
	t.Parallel()
	silent, err := (&net.ListenConfig{}).Listen(t.Context(), "tcp", "127.0.0.1:0")
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { _ = silent.Close() })
	const opening, slack = 400 * time.Millisecond, 2 * time.Second
	for _, c := range []struct{ name, address, want string }{
		{"nobody", "unix:" + filepath.Join(t.TempDir(), "none"), "no such file"},
		{"silent", silent.Addr().String(), "nothing came back in 400ms"},
	} {
		t.Run(c.name, func(t *testing.T) {
			t.Parallel()
			begun := time.Now()
			_, err := dial(t, c.address).Judge(t.Context(), &kinegatev1.JudgeOpen{}, kinegate.JudgeOptions{Opening: opening})
			took := time.Since(begun)
			unreachable, ok := errors.AsType[*kinegate.UnreachableError](err)
			if !ok || unreachable.Address != c.address || !strings.Contains(unreachable.Reason, c.want) {
				t.Errorf("%v, want %q", err, c.want)
			}
			if took < opening || took > opening+slack {
				t.Errorf("after %v", took)
			}
		})
	}
}

// TestOpeningWaits: a server that comes within the time is waited for.
func TestOpeningWaits(t *testing.T) {
	t.Parallel()
	path := filepath.Join(t.TempDir(), "s")
	client := dial(t, "unix:"+path)
	const later = 300 * time.Millisecond
	come := time.AfterFunc(later, func() { listenAt(t, path, gate{}) })
	defer come.Stop()
	stream, err := client.Judge(t.Context(), &kinegatev1.JudgeOpen{}, kinegate.JudgeOptions{})
	if err != nil {
		t.Fatal(err)
	}
	stream.Close()
}

// TestLateEvents: late events are decided on by the policy, whatever bit they come with,
// and counted.
func TestLateEvents(t *testing.T) {
	t.Parallel()
	path := filepath.Join(t.TempDir(), "s")
	const judged, expired = 1, 7
	listenAt(t, path, gate{verdict: func(sequence int64) *kinegatev1.VerdictBlock {
		return &kinegatev1.VerdictBlock{
			Sequence: sequence, EventCount: 3, Statuses: []byte{expired, judged, expired}, Gate: []byte{0b110},
		}
	}})
	for _, c := range []struct {
		late kinegate.LatePolicy
		gate byte
	}{{kinegate.AcceptLate, 0b111}, {kinegate.RejectLate, 0b010}} {
		stream, err := dial(t, "unix:"+path).Judge(t.Context(), &kinegatev1.JudgeOpen{}, kinegate.JudgeOptions{Late: c.late})
		if err != nil {
			t.Fatal(err)
		}
		defer stream.Close()
		for i := range int64(2) {
			if err := stream.Send(&kinegatev1.EventBlock{EventIds: column.Int64([]int64{1, 2, 3})}); err != nil {
				t.Fatal(err)
			}
			v, err := stream.Recv()
			if err != nil {
				t.Fatal(err)
			}
			if got := v.GetGate()[0]; got != c.gate {
				t.Errorf("policy %d: gate %03b, want %03b", c.late, got, c.gate)
			}
			if got, want := stream.LateCount(), 2*(i+1); got != want {
				t.Errorf("policy %d: %d late events, want %d", c.late, got, want)
			}
		}
	}
}

// TestQueueIsBounded: Send waits while the queue is full of blocks without a verdict or of
// verdicts that nobody fetched, and goes on when one was.
func TestQueueIsBounded(t *testing.T) {
	t.Parallel()
	path := filepath.Join(t.TempDir(), "s")
	answer := make(chan struct{})
	listenAt(t, path, gate{verdict: func(sequence int64) *kinegatev1.VerdictBlock {
		<-answer
		return &kinegatev1.VerdictBlock{Sequence: sequence}
	}})
	const queue, blocks = 6, 20
	stream, err := dial(t, "unix:"+path).Judge(t.Context(), &kinegatev1.JudgeOpen{}, kinegate.JudgeOptions{Queue: queue})
	if err != nil {
		t.Fatal(err)
	}
	defer stream.Close()
	sent := make(chan error, blocks)
	go func() {
		for range blocks {
			sent <- stream.Send(&kinegatev1.EventBlock{})
		}
		_ = stream.CloseSend()
	}()
	expect := func(due int, when string) {
		t.Helper()
		const patience, quiet = 5 * time.Second, 100 * time.Millisecond
		for deadline := time.Now().Add(patience); len(sent) < due && time.Now().Before(deadline); {
			time.Sleep(time.Millisecond)
		}
		time.Sleep(quiet)
		if got := len(sent); got != due {
			t.Fatalf("%s: %d blocks were taken, want %d", when, got, due)
		}
	}
	expect(queue, "without a verdict")
	close(answer)
	expect(queue, "with verdicts that nobody fetched")
	for i := range blocks {
		if i == 2 {
			expect(queue+2, "with two verdicts fetched")
		}
		if v, err := stream.Recv(); err != nil || v.GetSequence() != int64(i) {
			t.Fatalf("verdict %d: %v, %v", i, v, err)
		}
	}
	for range blocks {
		if err := <-sent; err != nil {
			t.Fatal(err)
		}
	}
}
