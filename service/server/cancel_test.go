package server

import (
	"context"
	"math/rand/v2"
	"runtime"
	"testing"
	"time"

	"google.golang.org/grpc"

	"example.org/kinegate/clients/go/history"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// longCalls are the rpcs that compute for long, each with a request that makes it.
func longCalls() map[string]func(ctx context.Context, conn *grpc.ClientConn) {
	block := history.Photons(0, 4096)
	return map[string]func(ctx context.Context, conn *grpc.ClientConn){
		"GenerateEvents": func(ctx context.Context, conn *grpc.ClientConn) {
			stream, err := kinegatev1.NewGenerationServiceClient(conn).GenerateEvents(ctx, endlessSample())
			for err == nil {
				_, err = stream.Recv()
			}
		},
		"MeasureBound": func(ctx context.Context, conn *grpc.ClientConn) {
			_, _ = kinegatev1.NewGenerationServiceClient(conn).MeasureBound(ctx, &kinegatev1.MeasureBoundRequest{
				Generation: endlessSample().GetGeneration(), DrawCount: 10_000_000,
			})
		},
		"JudgeBlock": func(ctx context.Context, conn *grpc.ClientConn) {
			_, _ = kinegatev1.NewSelectionServiceClient(conn).JudgeBlock(ctx, &kinegatev1.JudgeBlockRequest{
				Selection: history.AllEntries().GetSelection(), Entries: kinegatev1.EntryDetail_ENTRY_DETAIL_ALL, Block: block,
			})
		},
		"Judge": func(ctx context.Context, conn *grpc.ClientConn) {
			stream, err := kinegatev1.NewSelectionServiceClient(conn).Judge(ctx)
			if err != nil {
				return
			}
			_ = stream.Send(&kinegatev1.JudgeRequest{Frame: &kinegatev1.JudgeRequest_Open{Open: history.AllEntries()}})
			_ = stream.Send(&kinegatev1.JudgeRequest{Frame: &kinegatev1.JudgeRequest_Block{Block: block}})
			for err == nil {
				_, err = stream.Recv()
			}
		},
		"TraceDalitzBoundary": func(ctx context.Context, conn *grpc.ClientConn) {
			_, _ = kinegatev1.NewDecayServiceClient(conn).TraceDalitzBoundary(ctx, &kinegatev1.TraceDalitzBoundaryRequest{
				Form: &kinegatev1.TraceDalitzBoundaryRequest_Process{Process: "omega -> pi+ pi- pi0"}, Resolution: 0.0005,
			})
		},
		"ListOpenChannels": func(ctx context.Context, conn *grpc.ClientConn) {
			_, _ = kinegatev1.NewReactionServiceClient(conn).ListOpenChannels(ctx, &kinegatev1.ListOpenChannelsRequest{
				InitialParticles: []string{"gamma", "p"}, MaxBodyCount: 5,
				InitialState: &kinegatev1.InitialState{Kind: &kinegatev1.InitialState_SqrtSGev{SqrtSGev: 3 + rand.Float64()}}, //nolint:gosec // no secret
			})
		},
		"DescribeReaction": func(ctx context.Context, conn *grpc.ClientConn) {
			_, _ = kinegatev1.NewReactionServiceClient(conn).DescribeReaction(ctx, &kinegatev1.DescribeReactionRequest{
				Form:                 &kinegatev1.DescribeReactionRequest_Reaction{Reaction: "gamma p -> p pi+ pi- pi+ pi- pi0 pi0 pi0"},
				InitialState:         &kinegatev1.InitialState{Kind: &kinegatev1.InitialState_SqrtSGev{SqrtSGev: 4 + rand.Float64()}}, //nolint:gosec // no secret
				WithPhaseSpaceVolume: true,
			})
		},
	}
}

// TestWorkEndsWithItsCaller cancels each rpc that computes for long at random moments: its
// handler has returned 50 ms later, and no goroutine stays.
func TestWorkEndsWithItsCaller(t *testing.T) {
	r := start(t)
	conn := r.general(t)
	for name, call := range longCalls() {
		t.Run(name, func(t *testing.T) {
			// What it takes uncancelled, where it ends by itself.
			whole, stop := context.WithTimeout(t.Context(), 100*time.Millisecond)
			begun := time.Now()
			call(whole, conn)
			stop()
			length := time.Since(begun)
			idle := func() bool { return r.metric(t, "rpc_server_calls_in_flight") == 0 }
			eventually(t, "rest", idle)
			goroutines := runtime.NumGoroutine()
			longest := time.Duration(0)
			for range 20 {
				ctx, cancel := context.WithCancel(t.Context())
				done := make(chan struct{})
				go func() {
					defer close(done)
					call(ctx, conn)
				}()
				time.Sleep(time.Duration(rand.Int64N(int64(length)))) //nolint:gosec // no secret
				begun := time.Now()
				cancel()
				eventually(t, "the end of the work", idle)
				longest = max(longest, time.Since(begun))
				<-done
			}
			figure(t, "T1 %s of %.0f ms or more: the work ends at most %.1f ms after its caller", name, length.Seconds()*1e3, longest.Seconds()*1e3)
			if longest > bound(50*time.Millisecond) {
				t.Errorf("the work goes on for %v", longest)
			}
			eventually(t, "the goroutines of before", func() bool { return runtime.NumGoroutine() <= goroutines })
		})
	}
}
