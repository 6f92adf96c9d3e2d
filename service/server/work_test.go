package server

import (
	"context"
	"errors"
	"sync"
	"testing"
	"time"

	"github.com/prometheus/client_golang/prometheus"
	"google.golang.org/grpc"
	healthpb "google.golang.org/grpc/health/grpc_health_v1"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/api"
	"example.org/kinegate/service/telemetry"
)

// newWork returns a queue with a way to enter it in a goroutine.
func newWork(t *testing.T, slots int) (q *workQueue, enter func(ctx context.Context, cost int) chan error) {
	t.Helper()
	metrics, err := telemetry.NewMetrics(prometheus.NewRegistry(), "test")
	if err != nil {
		t.Fatal(err)
	}
	q = &workQueue{metrics: metrics}
	return q, func(ctx context.Context, cost int) chan error {
		done := make(chan error, 1)
		before := q.length()
		go func() { done <- q.enter(ctx, cost, slots) }()
		eventually(t, "queued or answered", func() bool { return q.length() > before || len(done) > 0 })
		return done
	}
}

func (q *workQueue) length() int {
	q.mu.Lock()
	defer q.mu.Unlock()
	return len(q.waiting)
}

func TestWorkQueue(t *testing.T) {
	const slot = api.SlotShares
	q, enter := newWork(t, 2)
	for range 2 {
		if err := <-enter(t.Context(), slot); err != nil {
			t.Fatal(err)
		}
	}
	// The queue holds one slot: half of what is done at a time.
	ctx, cancel := context.WithCancel(t.Context())
	first := enter(ctx, slot/2)
	second := enter(t.Context(), slot/2)
	err := <-enter(t.Context(), 1)
	if f, ok := errors.AsType[*api.Failure](err); !ok || f.Reason != api.ServerOverloaded || f.Metadata["actual"] != "65" || f.Metadata["limit"] != "64" {
		t.Errorf("beyond the queue: %v", err)
	}
	// One whose call has ended makes room for another.
	cancel()
	if err := <-first; !errors.Is(err, context.Canceled) {
		t.Errorf("cancelled: %v", err)
	}
	third := enter(t.Context(), slot/2)
	if len(second) > 0 || len(third) > 0 {
		t.Fatal("admitted without room")
	}
	q.leave(slot)
	if err := <-second; err != nil {
		t.Error(err)
	}
	if err := <-third; err != nil {
		t.Error(err)
	}
	for _, cost := range []int{slot, slot / 2, slot / 2} {
		q.leave(cost)
	}
	if q.used != 0 || q.queued != 0 || len(q.waiting) != 0 {
		t.Errorf("%d used, %d queued", q.used, q.queued)
	}
}

// TestWholeSlotWaits: work of a whole slot waits for the only one while cheap work holds
// it, and no more than one does.
func TestWholeSlotWaits(t *testing.T) {
	q, _ := newWork(t, 1)
	if err := q.enter(t.Context(), 1, 1); err != nil {
		t.Fatal(err)
	}
	entered := make(chan error, 1)
	go func() { entered <- q.enter(t.Context(), api.SlotShares, 1) }()
	eventually(t, "a waiter", func() bool { return q.length() == 1 })
	if err := q.enter(t.Context(), api.SlotShares, 1); err == nil || api.Explain(err).Reason != api.ServerOverloaded {
		t.Errorf("a second one: %v", err)
	}
	q.leave(1)
	if err := <-entered; err != nil {
		t.Errorf("the one that waited: %v", err)
	}
	q.leave(api.SlotShares)
}

// TestFullQueueRefusesAtTheDoor: when not even the cheapest work could wait, calls and
// streams that only send are refused before a message of theirs is read; health and
// streams with credit are not.
func TestFullQueueRefusesAtTheDoor(t *testing.T) {
	r := start(t, func(o *Options, _ *Deps) { o.WorkSlots = 1 })
	conn := r.general(t)
	generate := func() error {
		stream, err := kinegatev1.NewGenerationServiceClient(conn).GenerateEvents(t.Context(), endlessSample())
		if err == nil {
			_, err = stream.Recv()
		}
		return err
	}
	unread := func() error { // a call whose message never comes
		stream, err := conn.NewStream(t.Context(), &grpc.StreamDesc{ClientStreams: true}, kinegatev1.InfoService_GetInfo_FullMethodName)
		if err == nil {
			err = stream.RecvMsg(&kinegatev1.GetInfoResponse{})
		}
		return err
	}
	q := r.fronts[General].work
	if err := q.enter(t.Context(), api.SlotShares, 1); err != nil {
		t.Fatal(err)
	}
	ctx, cancel := context.WithCancel(t.Context())
	waiting := make(chan error, 1)
	go func() { waiting <- q.enter(ctx, api.SlotShares, 1) }()
	eventually(t, "a full queue", func() bool { return q.length() == 1 })
	wantReason(t, generate(), api.ServerOverloaded)
	wantReason(t, unread(), api.ServerOverloaded)
	wantReason(t, rawly(t.Context(), conn, kinegatev1.SelectionService_Judge_FullMethodName), api.StreamProtocolBroken)
	if _, err := healthpb.NewHealthClient(conn).Check(t.Context(), &healthpb.HealthCheckRequest{}); err != nil {
		t.Errorf("health: %v", err)
	}
	if n := r.metric(t, "rpc_server_rejected_total", string(api.ServerOverloaded)); n != 2 {
		t.Errorf("%g refusals are counted", n)
	}
	cancel()
	if err := <-waiting; !errors.Is(err, context.Canceled) {
		t.Errorf("the one that waited: %v", err)
	}
	q.leave(api.SlotShares)
	if err := generate(); err != nil {
		t.Errorf("with room: %v", err)
	}
}

// TestWorkQueueKeepsCount lets many enter, wait, give up and leave at once.
func TestWorkQueueKeepsCount(t *testing.T) {
	q, _ := newWork(t, 1)
	var all sync.WaitGroup
	for i := range 8 {
		all.Go(func() {
			for n := range 2000 {
				ctx, cancel := context.WithTimeout(t.Context(), time.Duration(n%7)*10*time.Microsecond)
				cost := 1 + (i*31+n)%api.SlotShares
				if q.enter(ctx, cost, 1) == nil {
					q.leave(cost)
				}
				cancel()
			}
		})
	}
	all.Wait()
	if q.used != 0 || q.queued != 0 || len(q.waiting) != 0 {
		t.Errorf("%d used, %d queued, %d waiting", q.used, q.queued, len(q.waiting))
	}
}

func TestQuota(t *testing.T) {
	var q quota
	for range 3 {
		if err := q.enter("a", 3); err != nil {
			t.Fatal(err)
		}
	}
	err := q.enter("a", 3)
	if f, ok := errors.AsType[*api.Failure](err); !ok || f.Reason != api.QuotaExceeded || f.Metadata["limit"] != "3" {
		t.Errorf("over the quota: %v", err)
	}
	if err := q.enter("b", 3); err != nil {
		t.Errorf("another caller: %v", err)
	}
	q.leave("b")
	for range 3 {
		q.leave("a")
	}
	if len(q.open) != 0 {
		t.Errorf("%v are kept", q.open)
	}
}
