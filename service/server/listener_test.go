package server

import (
	"context"
	"errors"
	"io"
	"net"
	"os"
	"path/filepath"
	"runtime"
	"strconv"
	"testing"
	"time"

	"google.golang.org/grpc"
	"google.golang.org/grpc/credentials/insecure"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/api"
)

func TestSocketsOnLoopback(t *testing.T) {
	r := start(t, onSockets)
	for _, name := range []Listener{Gate, General} {
		if err := info(t, r.Addr(name).String(), insecure.NewCredentials()); err != nil {
			t.Errorf("%s: %v", name, err)
		}
	}
	for _, name := range []Listener{Gate, General, Health, Metrics} {
		if r.Addr(name) == nil {
			t.Errorf("%s does not listen", name)
		}
	}
	if r.Addr(Debug) != nil {
		t.Error("profiles are open")
	}
}

func TestUnixSocket(t *testing.T) {
	path := filepath.Join(t.TempDir(), "gate.sock")
	set := func(o *Options, d *Deps) {
		onSockets(o, d)
		o.GateAddress = "unix:" + path
	}
	r := start(t, set)
	if err := info(t, "unix:"+path, insecure.NewCredentials()); err != nil {
		t.Fatal(err)
	}
	mode, err := os.Stat(path)
	if err != nil || mode.Mode().Perm() != socketMode {
		t.Errorf("mode %v, %v", mode.Mode(), err)
	}
	// A second server must not take the socket of a living one.
	second := prepare(t, set)
	if err := second.Listen(t.Context()); err == nil {
		t.Error("the socket was taken from a living server")
	}
	if err := info(t, "unix:"+path, insecure.NewCredentials()); err != nil {
		t.Errorf("the first server: %v", err)
	}
	_ = r.Shutdown(t.Context())
	// One that died leaves its file behind.
	dead, err := net.ListenUnix("unix", &net.UnixAddr{Name: path, Net: "unix"})
	if err != nil {
		t.Fatal(err)
	}
	dead.SetUnlinkOnClose(false)
	_ = dead.Close()
	third := start(t, set)
	if err := info(t, "unix:"+path, insecure.NewCredentials()); err != nil {
		t.Errorf("after a dead server: %v", err)
	}
	_ = third.Shutdown(t.Context())
	// A file that is no socket is nobody's to remove.
	writeFile(t, path, []byte("mine"))
	if err := prepare(t, set).Listen(t.Context()); err == nil {
		t.Error("a file was replaced")
	}
}

// TestCallersOfSockets: callers of a unix socket are told apart by their user, those of
// the network by their address.
func TestCallersOfSockets(t *testing.T) {
	if runtime.GOOS != "linux" {
		t.Skip("only Linux tells")
	}
	r := start(t, func(o *Options, d *Deps) {
		onSockets(o, d)
		o.GeneralAddress, o.CallerCalls = "unix:"+filepath.Join(t.TempDir(), "general.sock"), 1
	})
	for name, c := range map[Listener]string{General: "user " + strconv.Itoa(os.Getuid()), Gate: ""} {
		conn, err := net.Dial(r.Addr(name).Network(), r.Addr(name).String())
		if err != nil {
			t.Fatal(err)
		}
		defer func() { _ = conn.Close() }()
		if got := peerUser(conn); c != "" && "user "+got != c || c == "" && got != "" {
			t.Errorf("%s: the other end is %q", name, got)
		}
	}
	conn, err := grpc.NewClient("unix:"+r.Addr(General).String(), grpc.WithTransportCredentials(insecure.NewCredentials()))
	if err != nil {
		t.Fatal(err)
	}
	defer func() { _ = conn.Close() }()
	if _, err := grpc.NewClientStream(t.Context(), &grpc.StreamDesc{ClientStreams: true}, conn, kinegatev1.InfoService_GetInfo_FullMethodName); err != nil {
		t.Fatal(err)
	}
	eventually(t, "a call of the quota", func() bool { return r.metric(t, "rpc_server_calls_in_flight") == 1 })
	_, err = kinegatev1.NewInfoServiceClient(conn).GetInfo(t.Context(), &kinegatev1.GetInfoRequest{})
	if m := wantReason(t, err, api.QuotaExceeded); m["caller"] != "user "+strconv.Itoa(os.Getuid()) {
		t.Errorf("metadata %v", m)
	}
}

func TestListenClosesAllOnFailure(t *testing.T) {
	r := prepare(t, onSockets)
	busy, err := net.Listen("tcp", "127.0.0.1:0")
	if err != nil {
		t.Fatal(err)
	}
	defer func() { _ = busy.Close() }()
	r.options.MetricsAddress = busy.Addr().String()
	var opened []net.Listener
	r.deps.Listen = func(ctx context.Context, network, where string) (net.Listener, error) {
		l, err := listenOS(ctx, network, where)
		if err == nil {
			opened = append(opened, l)
		}
		return l, err
	}
	if err := r.Listen(t.Context()); err == nil {
		t.Fatal("two listeners share a port")
	}
	if len(opened) != 3 {
		t.Fatalf("%d listeners were opened", len(opened))
	}
	for _, l := range opened {
		if _, err := l.Accept(); !errors.Is(err, net.ErrClosed) {
			t.Errorf("%v is still open", l.Addr())
		}
	}
}

func TestConnectionLimit(t *testing.T) {
	r := start(t, onSockets, func(o *Options, _ *Deps) { o.Connections = 3 })
	var dialer net.Dialer
	open := func(name Listener) net.Conn {
		t.Helper()
		c, err := dialer.DialContext(t.Context(), "tcp", r.Addr(name).String())
		if err != nil {
			t.Fatal(err)
		}
		return c
	}
	held := []net.Conn{open(Gate), open(General), open(General)}
	eventually(t, "three connections", func() bool { return r.metric(t, "rpc_server_connections") == 3 })
	over := open(Gate)
	_ = over.SetReadDeadline(time.Now().Add(5 * time.Second))
	if _, err := io.ReadAll(over); err != nil && errors.Is(err, os.ErrDeadlineExceeded) {
		t.Errorf("a fourth connection stays open: %v", err)
	}
	_ = over.Close()
	if r.metric(t, "rpc_server_rejected_total", connectionLimit) != 1 {
		t.Error("the refusal is not counted")
	}
	for _, c := range held {
		_ = c.Close()
	}
	eventually(t, "no connection", func() bool { return r.metric(t, "rpc_server_connections") == 0 })
	if err := info(t, r.Addr(General).String(), insecure.NewCredentials()); err != nil {
		t.Errorf("after the others have gone: %v", err)
	}
}

// TestHalfOpenConnectionsEnd: a connection that never speaks ends by the handshake
// timeout, and does not hold up a drain for longer.
func TestHalfOpenConnectionsEnd(t *testing.T) {
	r := start(t, onSockets, func(o *Options, _ *Deps) { o.HandshakeTimeout, o.DrainTime = time.Second, 20*time.Second })
	var dialer net.Dialer
	c, err := dialer.DialContext(t.Context(), "tcp", r.Addr(Gate).String())
	if err != nil {
		t.Fatal(err)
	}
	defer func() { _ = c.Close() }()
	eventually(t, "the connection", func() bool { return r.metric(t, "rpc_server_connections") == 1 })
	begun := time.Now()
	if err := r.Shutdown(t.Context()); err != nil {
		t.Error(err)
	}
	if took := time.Since(begun); took > 6*time.Second {
		t.Errorf("took %v", took)
	}
}

func TestAbandonedReasonsStayRegistered(t *testing.T) {
	// The one reason that is counted and never sent must not look like one that is.
	for _, m := range api.Reasons() {
		if string(m.Reason) == connectionLimit {
			t.Errorf("%s is sent to callers", m.Reason)
		}
	}
}
