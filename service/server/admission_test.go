package server

import (
	"context"
	"net"
	"strings"
	"sync"
	"sync/atomic"
	"testing"
	"time"

	"google.golang.org/genproto/googleapis/rpc/errdetails"
	"google.golang.org/grpc"
	"google.golang.org/grpc/codes"
	"google.golang.org/grpc/credentials/insecure"
	"google.golang.org/grpc/status"

	kinegate "example.org/kinegate/clients/go"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/api"
)

// TestQuotaOfOneCaller: a caller over its quota is told so, with both numbers, and told
// to wait; it is no reason to go elsewhere.
func TestQuotaOfOneCaller(t *testing.T) {
	enter, leave := make(chan bool), make(chan bool)
	h := &hooked{answer: func(context.Context) (*kinegatev1.GetInfoResponse, error) {
		enter <- true
		<-leave
		return &kinegatev1.GetInfoResponse{}, nil
	}}
	r, client, _ := startHooked(t, h, func(o *Options, _ *Deps) { o.CallerCalls = 1 })
	done := make(chan error, 1)
	go func() {
		_, err := client.GetInfo(t.Context(), &kinegatev1.GetInfoRequest{})
		done <- err
	}()
	<-enter
	_, err := client.GetInfo(t.Context(), &kinegatev1.GetInfoRequest{})
	if m := wantReason(t, err, api.QuotaExceeded); m["limit"] != "1" || m["actual"] != "2" {
		t.Errorf("metadata %v", m)
	}
	var quota, retry bool
	for _, d := range status.Convert(err).Details() {
		switch d := d.(type) {
		case *errdetails.QuotaFailure:
			quota = len(d.GetViolations()) == 1 && strings.HasPrefix(d.GetViolations()[0].GetSubject(), "caller:")
		case *errdetails.RetryInfo:
			retry = d.GetRetryDelay().AsDuration() == pushback
		}
	}
	if !quota || !retry {
		t.Errorf("details of %v", err)
	}
	if r.metric(t, "rpc_server_rejected_total", string(api.QuotaExceeded)) != 1 {
		t.Error("the refusal is not counted")
	}
	leave <- true
	if err := <-done; err != nil {
		t.Error(err)
	}
}

// TestNobodyWaitsUnseen: a caller with more calls than he may have open is refused and
// counted before any of them waits in his own client, where nobody sees it.
func TestNobodyWaitsUnseen(t *testing.T) {
	leave := make(chan struct{})
	h := &hooked{answer: func(context.Context) (*kinegatev1.GetInfoResponse, error) {
		<-leave
		return &kinegatev1.GetInfoResponse{}, nil
	}}
	r, client, _ := startHooked(t, h, func(o *Options, _ *Deps) { o.WorkSlots = 2 })
	const more = 25
	calls := r.options.CallerCalls + more
	refused := make(chan time.Duration, calls)
	var all sync.WaitGroup
	for range calls {
		all.Go(func() {
			begun := time.Now()
			if _, err := client.GetInfo(t.Context(), &kinegatev1.GetInfoRequest{}); err != nil {
				if status.Code(err) != codes.ResourceExhausted {
					t.Error(err)
				}
				refused <- time.Since(begun)
			}
		})
	}
	eventually(t, "the refusals", func() bool { return len(refused) == more })
	longest := time.Duration(0)
	for range more {
		longest = max(longest, <-refused)
	}
	counted := r.metric(t, "rpc_server_rejected_total", string(api.QuotaExceeded))
	figure(t, "T4 %d calls on one connection: %d refused and counted, the last after %.1f ms", calls, int(counted), ms(longest))
	if counted != more || longest > bound(100*time.Millisecond) {
		t.Errorf("%g counted, the last after %v", counted, longest)
	}
	close(leave)
	all.Wait()
}

// TestCallersThatSendNothing: a call whose message never comes ends like any other.
func TestCallersThatSendNothing(t *testing.T) {
	r := start(t, func(o *Options, _ *Deps) { o.DefaultDeadline, o.StreamIdle = 50*time.Millisecond, time.Second })
	conn := r.general(t)
	for method, reason := range map[string]api.Reason{
		kinegatev1.InfoService_GetInfo_FullMethodName:    api.DeadlinePassed,
		kinegatev1.SelectionService_Judge_FullMethodName: api.StreamIdle,
	} {
		stream, err := conn.NewStream(t.Context(), &grpc.StreamDesc{ClientStreams: true, ServerStreams: true}, method)
		if err != nil {
			t.Fatal(err)
		}
		wantReason(t, stream.RecvMsg(&kinegatev1.GetInfoResponse{}), reason)
		// A header of a message is none yet.
		raw, err := r.network.dial(t.Context(), r.options.GeneralAddress)
		if err != nil {
			t.Fatal(err)
		}
		if status := rawFrames(t, raw, method, []byte{0, 0, 0, 0, 9}, false); len(status) > 2 {
			t.Errorf("%s: a header alone was ended by %s", method, status)
		}
		_ = raw.Close()
		eventually(t, "the reason in the log", func() bool { return strings.Contains(r.log.String(), `"reason":"`+string(reason)+`"`) })
	}
}

// TestStreamSummaries: a stream that goes on writes a line a minute.
func TestStreamSummaries(t *testing.T) {
	r := start(t)
	_ = idleJudge(t, r.general(t))
	begun := time.Now()
	lines := func() int { return strings.Count(r.log.String(), `"message":"stream goes on"`) }
	for after, want := range []int{0, 0, 1, 1, 2} {
		r.streams.look(begun.Add(time.Duration(after)*35*time.Second + time.Second))
		if got := lines(); got != want {
			t.Errorf("after %d x 35 s: %d lines, want %d", after, got, want)
		}
	}
	if !strings.Contains(r.log.String(), `"received_count":1,`) {
		t.Errorf("no sizes in %s", r.log)
	}
}

// TestRetriesAreThrottled calls a server that always refuses with the settings of the
// shipped client: once its throttle engages, a call is one attempt.
func TestRetriesAreThrottled(t *testing.T) {
	var attempts atomic.Int64
	h := &hooked{answer: func(context.Context) (*kinegatev1.GetInfoResponse, error) {
		attempts.Add(1)
		f := api.Refuse(api.ServerOverloaded, "always")
		f.RetryAfter = time.Millisecond
		return nil, f
	}}
	r, _, _ := startHooked(t, h)
	client, err := kinegate.Dial("passthrough:memory", kinegate.Options{DialOptions: []grpc.DialOption{
		grpc.WithTransportCredentials(insecure.NewCredentials()),
		grpc.WithContextDialer(func(ctx context.Context, _ string) (net.Conn, error) {
			return r.network.dial(ctx, r.options.GeneralAddress)
		}),
	}})
	if err != nil {
		t.Fatal(err)
	}
	defer func() { _ = client.Close() }()
	ask := func() {
		t.Helper()
		_, err := client.Info.GetInfo(t.Context(), &kinegatev1.GetInfoRequest{})
		wantReason(t, err, api.ServerOverloaded)
	}
	ask()
	ask()
	first := attempts.Swap(0)
	if first < 4 {
		t.Errorf("%d attempts at first: the client does not try again", first)
	}
	const calls = 200
	for range calls {
		ask()
	}
	t.Logf("FIGURE T3 %d attempts of the first 2 calls, %d of %d more", first, attempts.Load(), calls)
	if n := attempts.Load(); n > calls*12/10 {
		t.Errorf("%d attempts of %d calls", n, calls)
	}
}
