package server

import (
	"runtime"
	"testing"
	"time"

	healthpb "google.golang.org/grpc/health/grpc_health_v1"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/api"
)

// TestShortMemory fills the memory up to the limit: callers of the general listener are
// refused, health and the gate are not, and all are answered again once it is free.
func TestShortMemory(t *testing.T) {
	runtime.GC()
	before := memoryInUse()
	const filling = 256 << 20
	r := start(t, func(o *Options, _ *Deps) { o.MemoryLimit = Bytes(before+filling) / 3 * 4 })
	general, gate := r.general(t), r.dial(t, r.options.GateAddress)
	info := func() error {
		_, err := kinegatev1.NewInfoServiceClient(general).GetInfo(t.Context(), &kinegatev1.GetInfoRequest{})
		return err
	}
	if err := info(); err != nil {
		t.Fatal(err)
	}
	held := make([]byte, 2*filling)
	for i := 0; i < len(held); i += 4096 {
		held[i] = 1
	}
	runtime.GC()
	eventually(t, "short memory", func() bool { return r.pressure.refusal() != nil })
	if m := wantReason(t, info(), api.ServerOverloaded); m["actual"] == "" || m["limit"] == "" {
		t.Errorf("metadata %v", m)
	}
	if _, err := healthpb.NewHealthClient(general).Check(t.Context(), &healthpb.HealthCheckRequest{}); err != nil {
		t.Errorf("health: %v", err)
	}
	if _, err := kinegatev1.NewInfoServiceClient(gate).GetInfo(t.Context(), &kinegatev1.GetInfoRequest{}); err != nil {
		t.Errorf("the gate: %v", err)
	}
	runtime.KeepAlive(held) // from here on nobody holds it
	begun := time.Now()
	eventually(t, "memory again", func() bool { return info() == nil })
	t.Logf("answered again %v after the memory was free", time.Since(begun))
}

// TestMemoryInUse follows what is held, and forgets what is not.
func TestMemoryInUse(t *testing.T) {
	const size = 64 << 20
	runtime.GC()
	before := memoryInUse()
	held := make([]byte, size)
	runtime.GC()
	if grown := memoryInUse() - before; grown < size/2 || grown > 2*size {
		t.Errorf("grown by %d for %d", grown, size)
	}
	runtime.KeepAlive(held)
	held = nil
	runtime.GC()
	if left := memoryInUse() - before; left > size/2 {
		t.Errorf("%d left", left)
	}
	_ = held
}
