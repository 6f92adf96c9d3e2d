package server

import (
	"context"
	"net"
	"slices"
	"testing"
	"time"

	"github.com/rs/zerolog"
	"google.golang.org/grpc"
	"google.golang.org/grpc/credentials/insecure"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/telemetry"
)

// echo answers with the same reply always, on a bare gRPC server.
type echo struct {
	kinegatev1.UnimplementedReactionServiceServer

	reply *kinegatev1.DescribeReactionResponse
}

func (e *echo) DescribeReaction(context.Context, *kinegatev1.DescribeReactionRequest) (*kinegatev1.DescribeReactionResponse, error) {
	return e.reply, nil
}

// BenchmarkDescribeReaction compares the median latency over loopback with that of a
// bare echo of the same sizes, and so does it for an echo behind all that stands around
// a call; log lines go to a writer that discards them. Calls alternate between the
// three, so that all see the same machine.
func BenchmarkDescribeReaction(b *testing.B) {
	log := telemetry.NewWriter(discard{})
	defer log.Close()
	r := start(b, onSockets, func(_ *Options, d *Deps) { d.Log = zerolog.New(log) })
	dial := func(where string) kinegatev1.ReactionServiceClient {
		conn, err := grpc.NewClient(where, grpc.WithTransportCredentials(insecure.NewCredentials()))
		if err != nil {
			b.Fatal(err)
		}
		b.Cleanup(func() { _ = conn.Close() })
		return kinegatev1.NewReactionServiceClient(conn)
	}
	request := seeds()[0].(*kinegatev1.DescribeReactionRequest)
	ours := dial(r.Addr(General).String())
	reply, err := ours.DescribeReaction(b.Context(), request)
	if err != nil {
		b.Fatal(err)
	}
	bare := grpc.NewServer()
	kinegatev1.RegisterReactionServiceServer(bare, &echo{reply: reply})
	l, err := net.Listen("tcp", "127.0.0.1:0")
	if err != nil {
		b.Fatal(err)
	}
	go func() { _ = bare.Serve(l) }()
	defer bare.Stop()
	theirs := dial(l.Addr().String())
	f := newFront(r.fronts[General].desk, r.fronts[General].rules, r.serverOptions(r.options.GeneralStreamWindow, r.options.GeneralConnectionWindow))
	kinegatev1.RegisterReactionServiceServer(f, &echo{reply: reply})
	fl, err := net.Listen("tcp", "127.0.0.1:0")
	if err != nil {
		b.Fatal(err)
	}
	go func() { _ = f.server.Serve(fl) }()
	defer f.server.Stop()
	layered := dial(fl.Addr().String())
	took := map[kinegatev1.ReactionServiceClient][]time.Duration{}
	for b.Loop() {
		for _, client := range []kinegatev1.ReactionServiceClient{ours, theirs, layered} {
			begun := time.Now()
			if _, err := client.DescribeReaction(b.Context(), request); err != nil {
				b.Fatal(err)
			}
			took[client] = append(took[client], time.Since(begun))
		}
	}
	median := func(d []time.Duration) float64 {
		slices.Sort(d)
		return float64(d[len(d)/2])
	}
	b.ReportMetric(median(took[ours])/median(took[theirs]), "x-echo")
	b.ReportMetric(median(took[layered])/median(took[theirs]), "layers-x-echo")
	b.ReportMetric(median(took[ours])/1e3, "us-median")
}

type discard struct{}

func (discard) Write(p []byte) (int, error) { return len(p), nil }
