package server

import (
	"math"
	"runtime"
	"strings"
	"syscall"
	"testing"
	"time"

	"google.golang.org/grpc/mem"
	"google.golang.org/protobuf/encoding/protowire"
	"google.golang.org/protobuf/proto"

	"example.org/kinegate/clients/go/history"
	"example.org/kinegate/proto/column"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/api"
)

// hostileFrames are frames made to cost more than they are worth. Each names what the
// caller is told: the reason that ends the stream, or the reason of a rejection, or
// else a status of events.
func hostileFrames(t testing.TB) map[string]struct {
	wire   []byte
	ends   api.Reason
	reject string
	status kinegatev1.EventStatus
} {
	t.Helper()
	type hostile = struct {
		wire   []byte
		ends   api.Reason
		reject string
		status kinegatev1.EventStatus
	}
	const field = protowire.Number(2) // JudgeRequest.block
	frame := func(b *kinegatev1.EventBlock) []byte {
		wire, err := proto.Marshal(&kinegatev1.JudgeRequest{Frame: &kinegatev1.JudgeRequest_Block{Block: b}})
		if err != nil {
			t.Fatal(err)
		}
		return wire
	}
	change := func(spoil func(*kinegatev1.EventBlock)) []byte {
		b := history.Photons(0, 4096)
		spoil(b)
		return frame(b)
	}
	nan := func(n int) []byte {
		xs := make([]float64, n)
		for i := range xs {
			xs[i] = math.NaN()
		}
		return column.Float64(xs)
	}
	const full = 4<<20 - 64
	return map[string]hostile{
		"4 MiB of empty blocks":   {wire: repeated(full/2, []byte{0x12, 0}), ends: api.MessageTooCostly},
		"4 MiB of empty masks":    {wire: repeated(full/2, []byte{0x5a, 0}, field), ends: api.MessageTooCostly},
		"4 MiB of unknown fields": {wire: repeated(full/3, []byte{0xf8, 7, 1}, field), ends: api.MessageTooCostly},
		"4 MiB of zeros": {wire: change(func(b *kinegatev1.EventBlock) {
			b.GetMomentumAngles().PhiRad = make([]byte, full-400000)
		}), reject: "2097152"},
		"a billion rows claimed": {wire: change(func(b *kinegatev1.EventBlock) {
			b.ObjectOffsets = column.Int32([]int32{0, 1e9})
		}), reject: "object_offsets"},
		"offsets backwards": {wire: change(func(b *kinegatev1.EventBlock) {
			xs, _ := column.Int32s(b.GetObjectOffsets())
			for i := range xs {
				xs[i] = int32(len(xs) - i)
			}
			b.ObjectOffsets = column.Int32(xs)
		}), reject: "object_offsets"},
		"NaN everywhere": {wire: change(func(b *kinegatev1.EventBlock) {
			m := b.GetMomentumAngles()
			n := len(m.GetPhiRad()) / 8
			m.MomentumGev, m.ThetaRad, m.PhiRad = nan(n), nan(n), nan(n)
		}), status: kinegatev1.EventStatus_EVENT_STATUS_NON_FINITE},
		"ids without events": {wire: frame(&kinegatev1.EventBlock{EventIds: make([]byte, 2<<20-64)}), reject: "coordinates"},
		"cut short":          {wire: []byte{0x12, 0xff, 0xff, 0xff, 0x7f}, ends: api.MessageUndecodable},
	}
}

// threadTime is the processor time of the calling thread so far, so that a figure is the
// same on a busy machine.
func threadTime(t *testing.T) time.Duration {
	t.Helper()
	const thread = 1 // RUSAGE_THREAD of Linux
	var u syscall.Rusage
	if err := syscall.Getrusage(thread, &u); err != nil {
		t.Skip("no times of threads on this system")
	}
	return time.Duration(u.Utime.Nano() + u.Stime.Nano())
}

// TestHostileFrames: whatever a frame claims, it costs no more than 50 ms of a processor
// and 16 MiB to read, and is answered clearly.
func TestHostileFrames(t *testing.T) {
	const reads = 32 // the system counts in ticks of some milliseconds
	limits := api.DefaultLimits()
	for name, h := range hostileFrames(t) {
		t.Run(name, func(t *testing.T) {
			var before, after runtime.MemStats
			runtime.LockOSThread()
			defer runtime.UnlockOSThread()
			runtime.GC()
			runtime.ReadMemStats(&before)
			begun := threadTime(t)
			for range reads {
				request := &kinegatev1.JudgeRequest{}
				in := incoming{message: request, borrowed: &api.Borrowed{Message: request}, limits: limits}
				in.read(mem.BufferSlice{mem.SliceBuffer(h.wire)})
				in.borrowed.Release()
			}
			took := (threadTime(t) - begun) / reads
			runtime.ReadMemStats(&after)
			allocated := (after.TotalAlloc - before.TotalAlloc) / reads
			if allocated > 16<<20 {
				t.Errorf("%d bytes allocated", allocated)
			}
			t.Logf("FIGURE T5 %s: decoded in %v, %d KiB allocated", name, took, allocated>>10)
			if most := 50 * time.Millisecond * slowdown; took > most {
				t.Errorf("decoding took %v", took)
			}
			answer(t, h.wire, h.ends, h.reject, h.status)
		})
	}
}

// answer sends a frame over a real stream and checks what comes back.
func answer(t *testing.T, wire []byte, ends api.Reason, reject string, status kinegatev1.EventStatus) {
	t.Helper()
	r := start(t)
	open, err := proto.Marshal(&kinegatev1.JudgeRequest{Frame: &kinegatev1.JudgeRequest_Open{Open: history.AllEntries()}})
	if err != nil {
		t.Fatal(err)
	}
	if ends != "" {
		wantReason(t, rawly(t.Context(), r.dial(t, r.options.GateAddress), "/kinegate.v1.SelectionService/Judge", open, wire), ends)
		return
	}
	stream, _ := openJudge(t, r, history.AllEntries())
	request := &kinegatev1.JudgeRequest{}
	if err := proto.Unmarshal(wire, request); err != nil {
		t.Fatal(err)
	}
	send(t, stream, request)
	begun := time.Now()
	v, err := nextVerdict(stream)
	if err != nil {
		t.Fatal(err)
	}
	if took := time.Since(begun); took > 500*time.Millisecond*slowdown {
		t.Errorf("the answer took %v", took)
	}
	if reject != "" {
		if text := v.GetRejected().GetField() + " " + v.GetRejected().GetMessage(); !strings.Contains(text, reject) {
			t.Errorf("rejected with %q, want %q", text, reject)
		}
		return
	}
	for i, s := range v.GetStatuses() {
		if kinegatev1.EventStatus(s) != status {
			t.Fatalf("event %d has status %d", i, s)
		}
	}
}
