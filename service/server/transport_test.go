package server

import (
	"context"
	"fmt"
	"net"
	"runtime"
	"strconv"
	"strings"
	"sync"
	"sync/atomic"
	"testing"
	"time"

	"golang.org/x/net/http2"
	"golang.org/x/net/http2/hpack"
	"google.golang.org/grpc"
	"google.golang.org/grpc/codes"
	"google.golang.org/grpc/credentials/insecure"
	healthpb "google.golang.org/grpc/health/grpc_health_v1"
	"google.golang.org/grpc/metadata"
	"google.golang.org/grpc/status"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/api"
)

// TestRefusedBeforeWork: what is refused for its form alone carries its reason with both
// numbers, is refused before it is read, and reaches no handler.
func TestRefusedBeforeWork(t *testing.T) {
	h := &hooked{answer: func(context.Context) (*kinegatev1.GetInfoResponse, error) {
		t.Error("the handler was reached")
		return &kinegatev1.GetInfoResponse{}, nil
	}}
	r, _, conn := startHooked(t, h)
	method := kinegatev1.InfoService_GetInfo_FullMethodName
	limit := int(r.options.MessageLimit)
	for _, size := range []int{limit + 1, 2*limit + 1, 16 * limit} {
		t.Run(fmt.Sprint(size, " bytes"), func(t *testing.T) {
			m := wantReason(t, rawly(t.Context(), conn, method, make([]byte, size)), api.MessageTooLarge)
			if m["limit"] != strconv.Itoa(limit) || m["actual"] != strconv.Itoa(size) {
				t.Errorf("metadata %v", m)
			}
		})
	}
	t.Run("compressed", func(t *testing.T) {
		// The deprecated option compresses without registering the compressor, which
		// would register it for the server in this process too.
		zipped, err := grpc.NewClient("passthrough:memory", grpc.WithTransportCredentials(insecure.NewCredentials()),
			r.inMemory(r.options.GeneralAddress),
			grpc.WithCompressor(grpc.NewGZIPCompressor())) //nolint:staticcheck // see above
		if err != nil {
			t.Fatal(err)
		}
		defer func() { _ = zipped.Close() }()
		var before, after runtime.MemStats
		bomb := make([]byte, 64<<20) // about 64 KiB compressed
		runtime.ReadMemStats(&before)
		m := wantReason(t, rawly(t.Context(), zipped, method, bomb), api.CompressionUnsupported)
		runtime.ReadMemStats(&after)
		grown := int64(after.TotalAlloc - before.TotalAlloc)
		figure(t, "T6 64 MiB of zeros, compressed: %d KiB allocated in client and server", grown>>10)
		if m["supported"] != "identity" || grown > 8<<20 {
			t.Errorf("metadata %v, %d bytes allocated", m, grown)
		}
	})
	t.Run("large headers", func(t *testing.T) {
		ctx := metadata.AppendToOutgoingContext(t.Context(), "x-large", strings.Repeat("x", 20<<10))
		m := wantReason(t, rawly(ctx, conn, method, nil), api.HeadersTooLarge)
		if actual, err := strconv.Atoi(m["actual"]); err != nil || actual < 20<<10 || m["limit"] != "16384" {
			t.Errorf("metadata %v", m)
		}
	})
	t.Run("headers that no client should send", func(t *testing.T) {
		ctx := metadata.AppendToOutgoingContext(t.Context(), "x-large", strings.Repeat("x", 200<<10))
		if err := rawly(ctx, conn, method, nil); err == nil {
			t.Error("answered")
		}
	})
}

// TestFramesOfMessages sends message headers that gRPC's own client would not.
func TestFramesOfMessages(t *testing.T) {
	r := start(t)
	const malformed, tooLarge, unsupported = "3", "8", "12" // INVALID_ARGUMENT, RESOURCE_EXHAUSTED, UNIMPLEMENTED
	for name, c := range map[string]struct {
		data []byte
		code string
	}{
		"compressed without saying how": {[]byte{1, 0, 0, 0, 0}, unsupported},
		"unknown flag":                  {[]byte{2, 0, 0, 0, 0}, malformed},
		"largest length there is":       {[]byte{0, 0xff, 0xff, 0xff, 0xff}, tooLarge},
		"half a header":                 {[]byte{0, 0, 0}, malformed},
		"a header alone":                {[]byte{0, 0, 0, 0, 9}, malformed},
		"half a message":                {[]byte{0, 0, 0, 0, 9, 1, 2}, malformed},
	} {
		t.Run(name, func(t *testing.T) {
			conn, err := r.network.dial(t.Context(), r.options.GeneralAddress)
			if err != nil {
				t.Fatal(err)
			}
			defer func() { _ = conn.Close() }()
			if code := rawCall(t, conn, kinegatev1.InfoService_GetInfo_FullMethodName, c.data); code != c.code {
				t.Errorf("grpc-status %q, want %s", code, c.code)
			}
			if c.code != malformed {
				return
			}
			again, err := r.network.dial(t.Context(), r.options.GeneralAddress)
			if err != nil {
				t.Fatal(err)
			}
			defer func() { _ = again.Close() }()
			if code := rawCall(t, again, kinegatev1.SelectionService_Judge_FullMethodName, c.data); code != c.code {
				t.Errorf("as a stream: grpc-status %q, want %s", code, c.code)
			}
		})
	}
}

// TestRawPaths sends paths that gRPC's own client would not.
func TestRawPaths(t *testing.T) {
	r := start(t)
	for _, path := range []string{
		"kinegate.v1.InfoService/GetInfo", "GetInfo", "", "/", "//", "/GetInfo", "/kinegate.v1.InfoService/GetInfo/",
		"/kinegate.v1.InfoService/GetInfo%20", "/KINEGATE.V1.INFOSERVICE/GETINFO", "/../kinegate.v1.InfoService/GetInfo",
	} {
		t.Run(path, func(t *testing.T) {
			conn, err := r.network.dial(t.Context(), r.options.GeneralAddress)
			if err != nil {
				t.Fatal(err)
			}
			defer func() { _ = conn.Close() }()
			if got := rawCall(t, conn, path, make([]byte, 5)); got != "12" {
				t.Errorf("grpc-status %q", got)
			}
		})
	}
	if n := r.metric(t, "rpc_server_calls_total", "OK"); n != 0 {
		t.Errorf("%g calls were answered", n)
	}
}

// rawCall sends data as a call of a path and returns its grpc-status, or what ended it.
func rawCall(t *testing.T, conn net.Conn, path string, data []byte) string {
	t.Helper()
	return rawFrames(t, conn, path, data, true)
}

// rawFrames is rawCall for a caller who may have more to send.
func rawFrames(t *testing.T, conn net.Conn, path string, data []byte, last bool) string {
	t.Helper()
	_ = conn.SetDeadline(time.Now().Add(5 * time.Second))
	if _, err := conn.Write([]byte(http2.ClientPreface)); err != nil {
		t.Fatal(err)
	}
	framer := http2.NewFramer(conn, conn)
	framer.ReadMetaHeaders = hpack.NewDecoder(4096, nil)
	_ = framer.WriteSettings()
	var block strings.Builder
	encoder := hpack.NewEncoder(&block)
	for _, field := range [][2]string{
		{":method", "POST"}, {":scheme", "http"}, {":path", path}, {":authority", "x"},
		{"content-type", "application/grpc"}, {"te", "trailers"},
	} {
		_ = encoder.WriteField(hpack.HeaderField{Name: field[0], Value: field[1]})
	}
	_ = framer.WriteHeaders(http2.HeadersFrameParam{StreamID: 1, BlockFragment: []byte(block.String()), EndHeaders: true})
	_ = framer.WriteData(1, last, data)
	for {
		frame, err := framer.ReadFrame()
		if err != nil {
			return err.Error()
		}
		switch f := frame.(type) {
		case *http2.MetaHeadersFrame:
			for _, field := range f.Fields {
				if field.Name == "grpc-status" {
					return field.Value
				}
			}
		case *http2.RSTStreamFrame:
			return f.ErrCode.String()
		}
	}
}

// TestWindowsOfListeners: each listener gives callers the windows of flow control that
// are configured for it, which bound what an unread stream may fill.
func TestWindowsOfListeners(t *testing.T) {
	r := start(t)
	for _, c := range []struct {
		address            string
		stream, connection Bytes
	}{
		{r.options.GateAddress, r.options.GateStreamWindow, r.options.GateConnectionWindow},
		{r.options.GeneralAddress, r.options.GeneralStreamWindow, r.options.GeneralConnectionWindow},
	} {
		conn, err := r.network.dial(t.Context(), c.address)
		if err != nil {
			t.Fatal(err)
		}
		defer func() { _ = conn.Close() }()
		_ = conn.SetDeadline(time.Now().Add(5 * time.Second))
		if _, err := conn.Write([]byte(http2.ClientPreface)); err != nil {
			t.Fatal(err)
		}
		framer := http2.NewFramer(conn, conn)
		_ = framer.WriteSettings()
		const initial = 65535 // RFC 9113, section 6.9.2
		var stream, connection uint32
		for stream == 0 || connection == 0 {
			frame, err := framer.ReadFrame()
			if err != nil {
				t.Fatalf("%s: %v", c.address, err)
			}
			switch f := frame.(type) {
			case *http2.SettingsFrame:
				stream, _ = f.Value(http2.SettingInitialWindowSize)
			case *http2.WindowUpdateFrame:
				connection = initial + f.Increment
			}
		}
		if Bytes(stream) != c.stream || Bytes(connection) != c.connection {
			t.Errorf("%s: windows of %d and %d, want %d and %d", c.address, stream, connection, c.stream, c.connection)
		}
	}
}

// TestDrainUnderLoad ends a server while clients call, watch and stall, over sockets.
// No call that was under way is lost, and the server is gone in time.
func TestDrainUnderLoad(t *testing.T) {
	r := start(t, onSockets, func(o *Options, _ *Deps) {
		o.DrainNotice, o.DrainTime, o.HandshakeTimeout = 200*time.Millisecond, 5*time.Second, time.Second
	})
	target := r.Addr(General).String()
	var answered, lost atomic.Int64
	var all sync.WaitGroup
	ctx, cancel := context.WithCancel(t.Context())
	defer cancel()
	for range 4 {
		conn, err := grpc.NewClient(target, grpc.WithTransportCredentials(insecure.NewCredentials()))
		if err != nil {
			t.Fatal(err)
		}
		defer func() { _ = conn.Close() }()
		all.Go(func() {
			client := kinegatev1.NewParticleServiceClient(conn)
			for ctx.Err() == nil {
				_, err := client.ListParticles(ctx, &kinegatev1.ListParticlesRequest{PageSize: 500})
				switch status.Code(err) {
				case codes.OK:
					answered.Add(1)
				case codes.Unavailable, codes.Canceled:
					return // refused before any work: another replica would answer
				default:
					lost.Add(1)
					t.Errorf("lost: %v", err)
					return
				}
			}
		})
	}
	conn, err := grpc.NewClient(target, grpc.WithTransportCredentials(insecure.NewCredentials()))
	if err != nil {
		t.Fatal(err)
	}
	defer func() { _ = conn.Close() }()
	for range 10 {
		if _, err := healthpb.NewHealthClient(conn).Watch(t.Context(), &healthpb.HealthCheckRequest{}); err != nil {
			t.Fatal(err)
		}
	}
	var dialer net.Dialer
	halfOpen, err := dialer.DialContext(t.Context(), "tcp", target)
	if err != nil {
		t.Fatal(err)
	}
	defer func() { _ = halfOpen.Close() }()
	eventually(t, "load", func() bool { return answered.Load() > 50 })
	begun := time.Now()
	if err := r.Shutdown(t.Context()); err != nil {
		t.Errorf("Shutdown: %v", err)
	}
	if took := time.Since(begun); took > 6*time.Second {
		t.Errorf("took %v", took)
	}
	cancel()
	all.Wait()
	if lost.Load() > 0 {
		t.Errorf("%d answered, %d lost", answered.Load(), lost.Load())
	}
}
