package server

import (
	"context"
	"testing"
	"time"

	"google.golang.org/grpc"
	"google.golang.org/grpc/credentials/insecure"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

func TestStrikes(t *testing.T) {
	now := time.Unix(0, 0)
	full := func() *strikes {
		s := &strikes{}
		for i := range mostStrikes {
			if s.note(true, now) {
				t.Fatalf("call %d is one too many", i)
			}
		}
		return s
	}
	s := full()
	if !s.note(true, now) {
		t.Error("not bounded")
	}
	if s.note(true, now) {
		t.Error("told twice")
	}
	s = full()
	now = now.Add(time.Second)
	for i := range strikesPerSecond {
		if s.note(true, now) {
			t.Fatalf("a second later, call %d is one too many", i)
		}
	}
	if !s.note(true, now) {
		t.Error("a second later, not bounded")
	}
	var patient strikes
	for i := range 10 * mostStrikes {
		if patient.note(i%2 == 0, now) {
			t.Fatal("half of the calls given up are too many")
		}
	}
}

// TestCallsGivenUp: a connection that gives up call after call is closed, and one that
// makes many calls is not.
func TestCallsGivenUp(t *testing.T) {
	r := start(t, onSockets)
	client := kinegatev1.NewInfoServiceClient(connect(t, r.Addr(General).String()))
	for range 2 * mostStrikes {
		if _, err := client.GetInfo(t.Context(), &kinegatev1.GetInfoRequest{}); err != nil {
			t.Fatal(err)
		}
	}
	impatient := connect(t, r.Addr(General).String())
	eventually(t, "the end of the connection", func() bool {
		for range mostStrikes {
			ctx, cancel := context.WithCancel(t.Context())
			_, _ = impatient.NewStream(ctx, &grpc.StreamDesc{ClientStreams: true}, kinegatev1.InfoService_GetInfo_FullMethodName)
			cancel()
		}
		return r.metric(t, "rpc_server_rejected_total", connectionAbused) >= 1
	})
	if _, err := client.GetInfo(t.Context(), &kinegatev1.GetInfoRequest{}); err != nil {
		t.Errorf("another connection: %v", err)
	}
}

// connect connects to an address in plaintext.
func connect(t *testing.T, where string) *grpc.ClientConn {
	t.Helper()
	conn, err := grpc.NewClient(where, grpc.WithTransportCredentials(insecure.NewCredentials()))
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { _ = conn.Close() })
	return conn
}
