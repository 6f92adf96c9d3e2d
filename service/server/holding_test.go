package server

import (
	"encoding/binary"
	"net"
	"strconv"
	"sync"
	"testing"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/api"
)

func TestHolding(t *testing.T) {
	o := Defaults()
	if h := newHolding(&o); h.most != 0 {
		t.Errorf("bound %d without a memory limit", h.most)
	}
	for limit, want := range map[Bytes]int64{gibi: 64 << 20, 64 * mebi: 2 * int64(o.MessageLimit)} {
		o.MemoryLimit = limit
		if h := newHolding(&o); h.most != want {
			t.Errorf("of %v: bound %d, want %d", limit, h.most, want)
		}
	}
	h := holding{most: 10, free: 3}
	for _, c := range []struct{ length, taken int64 }{{3, 0}, {6, 6}, {3, 0}, {4, 4}} {
		if taken, err := h.enter(c.length); taken != c.taken || err != nil {
			t.Errorf("%d bytes: %d, %v", c.length, taken, err)
		}
	}
	if _, err := h.enter(4); err == nil {
		t.Error("not bounded")
	}
	h.leave(4)
	if taken, err := h.enter(4); taken != 4 || err != nil {
		t.Errorf("after one has left: %d, %v", taken, err)
	}
}

// TestLargeRequestsAreBounded: calls whose announced requests would together pass a part
// of the memory are refused before they are read, small ones are answered meanwhile, and
// there is room again when the calls have ended.
func TestLargeRequestsAreBounded(t *testing.T) {
	r := start(t, func(o *Options, _ *Deps) { o.MemoryLimit = 256 * mebi })
	method, size := kinegatev1.SelectionService_JudgeBlock_FullMethodName, int64(r.options.MessageLimit)
	announced := binary.BigEndian.AppendUint32([]byte{plain}, uint32(size))
	var open []net.Conn
	var all sync.WaitGroup
	for held := int64(0); held < r.holding.most; held += size {
		conn, err := r.network.dial(t.Context(), r.options.GeneralAddress)
		if err != nil {
			t.Fatal(err)
		}
		defer func() { _ = conn.Close() }()
		open = append(open, conn)
		all.Go(func() { rawFrames(t, conn, method, announced, false) })
	}
	eventually(t, "full", func() bool { return r.holding.held.Load() == r.holding.most })
	client := r.general(t)
	m := wantReason(t, rawly(t.Context(), client, method, make([]byte, size)), api.ServerOverloaded)
	if m["limit"] != strconv.FormatInt(r.holding.most, 10) || m["actual"] != strconv.FormatInt(r.holding.most+size, 10) {
		t.Errorf("metadata %v", m)
	}
	if n := r.metric(t, "rpc_server_rejected_total", string(api.ServerOverloaded)); n != 1 {
		t.Errorf("%g refusals counted", n)
	}
	small := make([]byte, r.options.GeneralStreamWindow)
	wantReason(t, rawly(t.Context(), client, method, small), api.MessageUndecodable)
	for _, conn := range open {
		_ = conn.Close()
	}
	all.Wait()
	eventually(t, "room again", func() bool { return r.holding.held.Load() == 0 })
	wantReason(t, rawly(t.Context(), client, method, make([]byte, size)), api.MessageUndecodable)
}
