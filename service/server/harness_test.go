package server

import (
	"bytes"
	"context"
	"errors"
	"net"
	"os"
	"regexp"
	"runtime"
	"strings"
	"sync"
	"testing"
	"time"

	"github.com/prometheus/client_golang/prometheus"
	dto "github.com/prometheus/client_model/go"
	"github.com/rs/zerolog"
	"google.golang.org/genproto/googleapis/rpc/errdetails"
	"google.golang.org/grpc"
	"google.golang.org/grpc/codes"
	"google.golang.org/grpc/credentials/insecure"
	"google.golang.org/grpc/encoding"
	"google.golang.org/grpc/status"
	"google.golang.org/grpc/test/bufconn"
	"google.golang.org/protobuf/proto"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/service/api"
)

// memory is a network in memory: listeners by their address.
type memory struct {
	mu        sync.Mutex
	listeners map[string]*bufconn.Listener
}

func (m *memory) listen(_ context.Context, _, where string) (net.Listener, error) {
	m.mu.Lock()
	defer m.mu.Unlock()
	l := bufconn.Listen(1 << 20)
	m.listeners[where] = l
	return l, nil
}

func (m *memory) dial(ctx context.Context, where string) (net.Conn, error) {
	m.mu.Lock()
	l := m.listeners[where]
	m.mu.Unlock()
	if l == nil {
		return nil, errors.New("nobody listens")
	}
	return l.DialContext(ctx)
}

// lines collects log lines.
type lines struct {
	mu     sync.Mutex
	buffer bytes.Buffer
}

func (l *lines) Write(p []byte) (int, error) {
	l.mu.Lock()
	defer l.mu.Unlock()
	return l.buffer.Write(p)
}

func (l *lines) String() string {
	l.mu.Lock()
	defer l.mu.Unlock()
	return l.buffer.String()
}

// running is a server under test on a network in memory.
type running struct {
	*Server

	network  *memory
	log      *lines
	registry *prometheus.Registry
	served   chan error
}

// quick returns options that drain without waiting.
func quick() Options {
	o := Defaults()
	o.DrainNotice, o.DrainTime, o.StopMargin = 0, 2*time.Second, 2*time.Second
	return o
}

// start runs a server until the test ends; change may adapt options, deps and, before
// it serves, the server itself.
func start(t testing.TB, change ...func(*Options, *Deps)) *running {
	t.Helper()
	r := prepare(t, change...)
	r.serve(t)
	return r
}

func prepare(t testing.TB, change ...func(*Options, *Deps)) *running {
	t.Helper()
	checkLeaks(t)
	r := &running{
		network: &memory{listeners: map[string]*bufconn.Listener{}}, log: &lines{},
		registry: prometheus.NewRegistry(), served: make(chan error, 1),
	}
	options := quick()
	deps := Deps{Version: "test", Log: zerolog.New(r.log), Registry: r.registry, Listen: r.network.listen}
	for _, c := range change {
		c(&options, &deps)
	}
	s, err := New(options, deps)
	if err != nil {
		t.Fatal(err)
	}
	r.Server = s
	t.Cleanup(func() {
		// A server that never served has goroutines that wait for calls.
		for _, f := range s.fronts {
			f.server.Stop()
		}
	})
	return r
}

func (r *running) serve(t testing.TB) {
	t.Helper()
	if err := r.Listen(t.Context()); err != nil {
		t.Fatal(err)
	}
	go func() { r.served <- r.Serve(context.Background()) }() // it ends by Shutdown
	t.Cleanup(func() {
		// A cut context: tests that care how it drains call Shutdown themselves.
		ctx, cancel := context.WithTimeout(context.Background(), time.Second) // the test's is over
		defer cancel()
		_ = r.Shutdown(ctx)
		if err := <-r.served; err != nil {
			t.Errorf("Serve: %v", err)
		}
	})
	eventually(t, "ready", r.health.isReady)
}

// dial connects to a listener in memory.
func (r *running) dial(t testing.TB, where string) *grpc.ClientConn {
	t.Helper()
	conn, err := grpc.NewClient("passthrough:memory", grpc.WithTransportCredentials(insecure.NewCredentials()), r.inMemory(where))
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { _ = conn.Close() })
	return conn
}

// inMemory dials a listener in memory whatever the address.
func (r *running) inMemory(where string) grpc.DialOption {
	return grpc.WithContextDialer(func(ctx context.Context, _ string) (net.Conn, error) { return r.network.dial(ctx, where) })
}

// general connects to the general listener.
func (r *running) general(t testing.TB) *grpc.ClientConn {
	t.Helper()
	return r.dial(t, r.options.GeneralAddress)
}

// eventually waits until something holds.
func eventually(t testing.TB, what string, holds func() bool) {
	t.Helper()
	for end := time.Now().Add(5 * time.Second); time.Now().Before(end); time.Sleep(time.Millisecond) {
		if holds() {
			return
		}
	}
	t.Fatalf("not in time: %s", what)
}

// checkLeaks reports goroutines of ours or of gRPC's server that a test leaves behind.
func checkLeaks(t testing.TB) {
	t.Helper()
	before := ours()
	t.Cleanup(func() {
		for end := time.Now().Add(5 * time.Second); ours() > before; time.Sleep(5 * time.Millisecond) {
			if time.Now().After(end) {
				stacks := make([]byte, 1<<20)
				t.Errorf("%d goroutines left:\n%s", ours()-before, stacks[:runtime.Stack(stacks, true)])
				return
			}
		}
	})
}

var ourFrames = regexp.MustCompile(`example\.org/kinegate/service|grpc\.\(\*Server\)|transport\.\(\*http2Server\)`)

// ours counts goroutines, beside those of tests, with frames of servers.
func ours() int {
	stacks := make([]byte, 4<<20)
	stacks = stacks[:runtime.Stack(stacks, true)]
	n := 0
	for goroutine := range bytes.SplitSeq(stacks, []byte("\n\n")) {
		if ourFrames.Match(goroutine) && !bytes.Contains(goroutine, []byte("testing.tRunner")) &&
			!bytes.Contains(goroutine, []byte("testing.(*T).Run")) {
			n++
		}
	}
	return n
}

// reasonOf holds an error against the contract of every error that callers see, and
// returns its reason and metadata.
func reasonOf(t testing.TB, err error) (api.Reason, map[string]string) {
	t.Helper()
	s, ok := status.FromError(err)
	if err == nil || !ok {
		t.Fatalf("%v is no status", err)
	}
	var info []*errdetails.ErrorInfo
	types := map[string]bool{}
	for _, d := range s.Proto().GetDetails() {
		if types[d.GetTypeUrl()] {
			t.Errorf("two details %s", d.GetTypeUrl())
		}
		types[d.GetTypeUrl()] = true
	}
	for _, d := range s.Details() {
		if i, ok := d.(*errdetails.ErrorInfo); ok {
			info = append(info, i)
		}
	}
	if len(info) != 1 {
		t.Fatalf("%d ErrorInfo in %v", len(info), s)
	}
	reason := api.Reason(info[0].GetReason())
	if m := api.MeaningOf(reason); m.Reason != reason || m.Code != s.Code() || info[0].GetDomain() != api.Domain {
		t.Errorf("%v breaks the registry", s)
	}
	if s.Code() == codes.Unknown || s.Code() == codes.OK {
		t.Errorf("code %v", s.Code())
	}
	if proto.Size(s.Proto()) > 4096 {
		t.Errorf("status of %d bytes", proto.Size(s.Proto()))
	}
	return reason, info[0].GetMetadata()
}

// wantReason checks the reason of an error and returns its metadata.
func wantReason(t testing.TB, err error, want api.Reason) map[string]string {
	t.Helper()
	got, metadata := reasonOf(t, err)
	if got != want {
		t.Fatalf("got %s (%v), want %s", got, err, want)
	}
	return metadata
}

// raw sends and receives bytes as they are.
type raw struct{}

func (raw) Name() string { return "proto" }

func (raw) Marshal(v any) ([]byte, error) { return v.([]byte), nil }

func (raw) Unmarshal(data []byte, v any) error {
	*v.(*[]byte) = append([]byte(nil), data...)
	return nil
}

var _ encoding.Codec = raw{}

// rawly calls any method as a stream of raw messages and returns the first error, nil
// at the end.
func rawly(ctx context.Context, conn *grpc.ClientConn, method string, messages ...[]byte) error {
	stream, err := conn.NewStream(ctx, &grpc.StreamDesc{ClientStreams: true, ServerStreams: true}, method,
		grpc.ForceCodec(raw{}))
	if err != nil {
		return err
	}
	for _, m := range messages {
		if stream.SendMsg(m) != nil {
			break
		}
	}
	_ = stream.CloseSend()
	for {
		var reply []byte
		if err := stream.RecvMsg(&reply); err != nil {
			if strings.Contains(err.Error(), "EOF") && status.Code(err) == codes.Unknown {
				return nil
			}
			return err
		}
	}
}

// faultNames are the fields of the faults in an error.
func faultNames(err error) []string {
	var names []string
	if list, ok := errors.AsType[fault.List](err); ok {
		for _, e := range list {
			names = append(names, e.Field)
		}
		return names
	}
	if e, ok := errors.AsType[*fault.Error](err); ok {
		names = append(names, e.Field)
	}
	return names
}

// metric is the value of a counter or gauge, or the count of a histogram, summed over
// the series whose labels hold all of the given values.
func (r *running) metric(t testing.TB, name string, values ...string) float64 {
	t.Helper()
	families, err := r.registry.Gather()
	if err != nil {
		t.Fatal(err)
	}
	sum := 0.0
	for _, f := range families {
		if f.GetName() != name {
			continue
		}
		for _, m := range f.GetMetric() {
			if holdsAll(m, values) {
				sum += m.GetCounter().GetValue() + m.GetGauge().GetValue() + float64(m.GetHistogram().GetSampleCount())
			}
		}
	}
	return sum
}

func holdsAll(m *dto.Metric, values []string) bool {
	for _, v := range values {
		found := false
		for _, l := range m.GetLabel() {
			found = found || l.GetValue() == v
		}
		if !found {
			return false
		}
	}
	return true
}

// writeFile writes a file into the test's folder.
func writeFile(t testing.TB, path string, data []byte) {
	t.Helper()
	if err := os.WriteFile(path, data, 0o600); err != nil {
		t.Fatal(err)
	}
}
