package server

import (
	"runtime"
	"slices"
	"testing"

	"google.golang.org/grpc/mem"
	"google.golang.org/protobuf/encoding/protowire"
	"google.golang.org/protobuf/proto"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/api"
)

// repeated returns n copies of a field value within the fields that path leads to.
func repeated(n int, element []byte, path ...protowire.Number) []byte {
	var wire []byte
	for range n {
		wire = append(wire, element...)
	}
	for _, number := range slices.Backward(path) {
		wire = protowire.AppendBytes(protowire.AppendTag(nil, number, protowire.BytesType), wire)
	}
	return wire
}

// shapes are messages that are dear for their size on the wire.
func shapes() map[string]struct {
	message proto.Message
	wire    func(n int) []byte
} {
	type shape = struct {
		message proto.Message
		wire    func(n int) []byte
	}
	return map[string]shape{
		"products":   {&kinegatev1.DescribeReactionRequest{}, func(n int) []byte { return repeated(n, []byte{0x12, 0}, 2) }},
		"names":      {&kinegatev1.DescribeReactionRequest{}, func(n int) []byte { return repeated(n, []byte{0x0a, 0}, 2) }},
		"distances":  {&kinegatev1.DescribeDecayRequest{}, func(n int) []byte { return repeated(n, []byte{0, 0, 0, 0, 0, 0, 0, 0}, 3) }},
		"hypotheses": {&kinegatev1.Selection{}, func(n int) []byte { return repeated(n, []byte{0x1a, 0}) }},
		"conditions": {&kinegatev1.Condition{}, func(n int) []byte { return repeated(n, []byte{0x12, 0}) }},
		"unknown":    {&kinegatev1.GetInfoRequest{}, func(n int) []byte { return repeated(n, []byte{0xf8, 7, 1}) }},
		"text":       {&kinegatev1.CheckSelectionRequest{}, func(n int) []byte { return repeated(n, []byte{'x'}, 2) }},
	}
}

// TestCostBoundsMemory holds the estimate against the memory that decoding takes, at
// sizes up to the limit. BenchmarkDearestMessage measures the time.
func TestCostBoundsMemory(t *testing.T) {
	limits := api.DefaultLimits()
	for name, s := range shapes() {
		t.Run(name, func(t *testing.T) {
			passed := 0
			for n := 1 << 10; n <= 4<<20; n *= 4 {
				wire := s.wire(n)
				if len(wire) > limits.MessageBytes {
					break
				}
				in := incoming{message: s.message.ProtoReflect().New().Interface(), limits: limits}
				var before, after runtime.MemStats
				runtime.GC()
				runtime.ReadMemStats(&before)
				in.read(mem.BufferSlice{mem.SliceBuffer(wire)})
				runtime.GC()
				runtime.ReadMemStats(&after)
				held := int64(after.HeapAlloc) - int64(before.HeapAlloc)
				if in.fault == nil {
					passed = n
					if held > int64(limits.DecodedBytes) {
						t.Errorf("%d elements hold %d bytes", n, held)
					}
				} else if in.fault.Reason != api.MessageTooCostly {
					t.Fatalf("%d elements: %v", n, in.fault)
				}
				runtime.KeepAlive(in.message)
			}
			if passed < 4096 {
				t.Errorf("only %d elements pass", passed)
			}
		})
	}
}

func BenchmarkDearestMessage(b *testing.B) {
	limits := api.DefaultLimits()
	for name, s := range shapes() {
		b.Run(name, func(b *testing.B) {
			wire := s.wire(1)
			for n := 2; len(wire) < limits.MessageBytes/2; n *= 2 {
				wire = s.wire(n)
			}
			b.ReportAllocs()
			for b.Loop() {
				in := incoming{message: s.message.ProtoReflect().New().Interface(), limits: limits}
				if err := (codec{}).Unmarshal(mem.BufferSlice{mem.SliceBuffer(wire)}, &in); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
