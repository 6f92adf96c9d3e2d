package server

import (
	"context"
	"runtime"
	"testing"
	"time"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/api"
)

// endlessSample is far more events than anyone takes.
func endlessSample() *kinegatev1.GenerateEventsRequest {
	return &kinegatev1.GenerateEventsRequest{
		EventCount: 1 << 50,
		Generation: &kinegatev1.Generation{
			InitialState: &kinegatev1.GenerationInitialState{Kind: &kinegatev1.GenerationInitialState_BeamOnTarget{
				BeamOnTarget: &kinegatev1.SpectrumOnTarget{Beam: &kinegatev1.BeamSpectrum{
					Kind: &kinegatev1.BeamSpectrum_Even{Even: &kinegatev1.EnergyRange{MinGev: 1.2, MaxGev: 2.4}},
				}},
			}},
			Channels: []*kinegatev1.GenerationChannel{{Reaction: "gamma p -> p omega, omega -> pi0 gamma, pi0 -> gamma gamma"}},
		},
	}
}

// TestGenerateEventsToSlowReader holds that a reader who stops stops the making too: the
// memory of the process does not grow, and the call ends within 50 ms of its caller.
func TestGenerateEventsToSlowReader(t *testing.T) {
	r := start(t)
	ctx, cancel := context.WithCancel(t.Context())
	defer cancel()
	stream, err := kinegatev1.NewGenerationServiceClient(r.general(t)).GenerateEvents(ctx, endlessSample())
	if err != nil {
		t.Fatal(err)
	}
	for range 3 {
		if _, err := stream.Recv(); err != nil {
			t.Fatal(err)
		}
	}
	heap := func() uint64 {
		var m runtime.MemStats
		runtime.GC()
		runtime.ReadMemStats(&m)
		return m.HeapAlloc
	}
	time.Sleep(200 * time.Millisecond) // the windows fill
	before := heap()
	time.Sleep(500 * time.Millisecond) // long enough to make some 50 MB of events
	// The windows of the transport are a mebibyte, and other tests of the process leave some.
	const room = 8 << 20
	if after := heap(); after > before+room {
		t.Errorf("the heap grew from %d to %d bytes", before, after)
	}
	began := time.Now()
	cancel()
	eventually(t, "the end of the call", func() bool { return r.metric(t, "rpc_server_calls_in_flight") == 0 })
	took := time.Since(began)
	t.Logf("FIGURE T1 the call ended %v after its caller", took)
	if took > bound(50*time.Millisecond) {
		t.Errorf("the call ended %v after its caller", took)
	}
}

// TestGenerateEventsRefusal is what a caller sees of a closed channel.
func TestGenerateEventsRefusal(t *testing.T) {
	r := start(t)
	request := endlessSample()
	request.Generation.InitialState.GetBeamOnTarget().GetBeam().GetEven().MinGev = 0.5
	request.Generation.InitialState.GetBeamOnTarget().GetBeam().GetEven().MaxGev = 0.6
	stream, err := kinegatev1.NewGenerationServiceClient(r.general(t)).GenerateEvents(t.Context(), request)
	if err != nil {
		t.Fatal(err)
	}
	_, err = stream.Recv()
	wantReason(t, err, api.ChannelClosed)
}

// TestStalledGenerationIsEnded holds that a caller who takes no event is cut off after the
// stall limit, alone where many share the connection, and that the server can then leave.
func TestStalledGenerationIsEnded(t *testing.T) {
	for _, proxy := range []bool{false, true} {
		t.Run(map[bool]string{false: "its connection", true: "behind a proxy"}[proxy], func(t *testing.T) {
			r := start(t, func(o *Options, _ *Deps) { o.BehindProxy, o.StallLimit = proxy, time.Second })
			conn := r.general(t)
			stream, err := kinegatev1.NewGenerationServiceClient(conn).GenerateEvents(t.Context(), endlessSample())
			if err != nil {
				t.Fatal(err)
			}
			if _, err := stream.Recv(); err != nil {
				t.Fatal(err)
			}
			began := time.Now()
			eventually(t, "the end of the stalled call", func() bool { return r.metric(t, "rpc_server_calls_in_flight") == 0 })
			if took := time.Since(began); took < 900*time.Millisecond || took > 4*time.Second {
				t.Errorf("ended after %v", took)
			}
			if proxy {
				if _, err := kinegatev1.NewInfoServiceClient(conn).GetInfo(t.Context(), &kinegatev1.GetInfoRequest{}); err != nil {
					t.Errorf("another call of the connection: %v", err)
				}
				for err == nil { // what was on its way, and then the reason
					_, err = stream.Recv()
				}
				wantReason(t, err, api.StreamStalled)
			}
			if err := r.Shutdown(t.Context()); err != nil {
				t.Errorf("Shutdown: %v", err)
			}
		})
	}
}
