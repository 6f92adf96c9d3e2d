package server

import (
	"context"
	"errors"
	"io"
	"testing"
	"time"

	"google.golang.org/grpc"
	healthpb "google.golang.org/grpc/health/grpc_health_v1"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/api"
)

// TestDrainWithWatches: fifty open watches do not hold the server up.
func TestDrainWithWatches(t *testing.T) {
	r := start(t, func(o *Options, _ *Deps) { o.DrainNotice, o.DrainTime = 50*time.Millisecond, 20*time.Second })
	for i := range 50 {
		where := r.options.GeneralAddress
		if i%2 == 0 {
			where = r.options.GateAddress
		}
		watch, err := healthpb.NewHealthClient(r.dial(t, where)).Watch(t.Context(), &healthpb.HealthCheckRequest{})
		if err != nil {
			t.Fatal(err)
		}
		if _, err := watch.Recv(); err != nil {
			t.Fatal(err)
		}
	}
	begun := time.Now()
	if err := r.Shutdown(t.Context()); err != nil {
		t.Error(err)
	}
	if took := time.Since(begun); took > 6*time.Second {
		t.Errorf("took %v", took)
	}
}

// TestDrainLetsCallsFinish: a call that is under way is answered, a new one refused.
func TestDrainLetsCallsFinish(t *testing.T) {
	entered, finish := make(chan bool), make(chan bool)
	h := &hooked{answer: func(context.Context) (*kinegatev1.GetInfoResponse, error) {
		entered <- true
		<-finish
		return &kinegatev1.GetInfoResponse{Version: "answered"}, nil
	}}
	r, client, _ := startHooked(t, h, func(o *Options, _ *Deps) { o.DrainTime = 20 * time.Second })
	answered := make(chan error)
	go func() {
		m, err := client.GetInfo(t.Context(), &kinegatev1.GetInfoRequest{})
		if err == nil && m.GetVersion() != "answered" {
			err = errors.New("another answer")
		}
		answered <- err
	}()
	<-entered
	done := make(chan error)
	go func() { done <- r.Shutdown(t.Context()) }()
	<-r.leaving
	select {
	case err := <-done:
		t.Fatalf("the server left while a call was under way: %v", err)
	case <-time.After(50 * time.Millisecond):
	}
	finish <- true
	if err := <-answered; err != nil {
		t.Errorf("the call under way: %v", err)
	}
	if err := <-done; err != nil {
		t.Errorf("Shutdown: %v", err)
	}
	if r.metric(t, "kinegate_draining") != 1 {
		t.Error("draining is not shown")
	}
}

// TestDrainCutsWhatDoesNotEnd: a stream that never ends is cut at the deadline, and its
// handler sees the end of its context.
func TestDrainCutsWhatDoesNotEnd(t *testing.T) {
	ended := make(chan error, 1)
	h := &hooked{judge: func(s grpc.BidiStreamingServer[kinegatev1.JudgeRequest, kinegatev1.JudgeResponse]) error {
		<-s.Context().Done()
		ended <- s.Context().Err()
		return s.Context().Err()
	}}
	r, _, conn := startHooked(t, h, func(o *Options, _ *Deps) { o.DrainTime = 100 * time.Millisecond })
	stream, err := kinegatev1.NewSelectionServiceClient(conn).Judge(t.Context())
	if err != nil {
		t.Fatal(err)
	}
	eventually(t, "the stream is open", func() bool { return r.metric(t, "rpc_server_calls_in_flight") == 1 })
	if err := r.Shutdown(t.Context()); !errors.Is(err, ErrCut) {
		t.Errorf("Shutdown: %v", err)
	}
	if err := <-ended; !errors.Is(err, context.Canceled) {
		t.Errorf("the handler saw %v", err)
	}
	if _, err := stream.Recv(); err == nil || errors.Is(err, io.EOF) {
		t.Errorf("the client saw %v", err)
	}
}

// TestShutdownAtOnce: the end of the context skips the notice and the drain, as a second
// signal does.
func TestShutdownAtOnce(t *testing.T) {
	h := &hooked{judge: func(s grpc.BidiStreamingServer[kinegatev1.JudgeRequest, kinegatev1.JudgeResponse]) error {
		<-s.Context().Done()
		return s.Context().Err()
	}}
	r, _, conn := startHooked(t, h, func(o *Options, _ *Deps) {
		o.DrainNotice, o.DrainTime, o.TerminationGrace = 10*time.Minute, 10*time.Minute, time.Hour
	})
	if _, err := kinegatev1.NewSelectionServiceClient(conn).Judge(t.Context()); err != nil {
		t.Fatal(err)
	}
	eventually(t, "the stream is open", func() bool { return r.metric(t, "rpc_server_calls_in_flight") == 1 })
	ctx, cancel := context.WithTimeout(t.Context(), 50*time.Millisecond)
	defer cancel()
	begun := time.Now()
	if err := r.Shutdown(ctx); !errors.Is(err, ErrCut) {
		t.Errorf("Shutdown: %v", err)
	}
	if took := time.Since(begun); took > 3*time.Second {
		t.Errorf("took %v", took)
	}
}

// TestStopDoesNotWaitForEver: a handler that ignores the end of its context holds the
// process up for the margin and no longer.
func TestStopDoesNotWaitForEver(t *testing.T) {
	release := make(chan bool)
	h := &hooked{answer: func(context.Context) (*kinegatev1.GetInfoResponse, error) {
		<-release
		return &kinegatev1.GetInfoResponse{}, nil
	}}
	r, client, _ := startHooked(t, h, func(o *Options, _ *Deps) { o.DrainTime, o.StopMargin = 0, 100*time.Millisecond })
	go func() { _, _ = client.GetInfo(t.Context(), &kinegatev1.GetInfoRequest{}) }()
	eventually(t, "the call is under way", func() bool { return r.metric(t, "rpc_server_calls_in_flight") == 1 })
	begun := time.Now()
	if err := r.Shutdown(t.Context()); !errors.Is(err, ErrCut) {
		t.Errorf("Shutdown: %v", err)
	}
	if took := time.Since(begun); took > 2*time.Second {
		t.Errorf("took %v", took)
	}
	close(release)
}

func TestNewStreamsAreRefusedWhileDraining(t *testing.T) {
	r := start(t)
	close(r.leaving) // as Shutdown does, with the listeners still open
	stream, err := kinegatev1.NewSelectionServiceClient(r.general(t)).Judge(t.Context())
	if err != nil {
		t.Fatal(err)
	}
	_, err = stream.Recv()
	wantReason(t, err, api.ServerDraining)
	// Unary calls that are early enough to arrive are answered.
	if _, err := kinegatev1.NewInfoServiceClient(r.general(t)).GetInfo(t.Context(), &kinegatev1.GetInfoRequest{}); err != nil {
		t.Error(err)
	}
	if got := check(t, healthpb.NewHealthClient(r.general(t)), Liveness); got != healthpb.HealthCheckResponse_SERVING {
		t.Errorf("liveness is %v", got)
	}
	r.leaving = make(chan struct{}) // for the shutdown of the test's end
}

func TestShutdownBeforeServe(t *testing.T) {
	r := prepare(t)
	if err := r.Listen(t.Context()); err != nil {
		t.Fatal(err)
	}
	if err := r.Shutdown(t.Context()); err != nil {
		t.Error(err)
	}
	if err := r.Serve(t.Context()); err != nil {
		t.Errorf("Serve after Shutdown: %v", err)
	}
}

func TestServeEndsWithItsContext(t *testing.T) {
	r := prepare(t)
	ctx, cancel := context.WithCancel(t.Context())
	done := make(chan error)
	go func() { done <- r.Serve(ctx) }()
	eventually(t, "ready", r.health.isReady)
	cancel()
	if err := <-done; !errors.Is(err, context.Canceled) {
		t.Errorf("Serve: %v", err)
	}
}
