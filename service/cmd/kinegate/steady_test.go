package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"net"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"sync"
	"sync/atomic"
	"syscall"
	"testing"
	"time"

	"golang.org/x/net/http2"
	"google.golang.org/grpc/codes"
	"google.golang.org/grpc/status"

	kinegate "example.org/kinegate/clients/go"
	"example.org/kinegate/clients/go/history"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// TestSteadyClients holds that the shipped clients never do what a server with its default
// settings takes for a flood: idle ones that only ping, and ones that ask, judge and change
// their minds twice a second. STEADY_SPAN is how long, half a minute by default; the
// environment variable PYTHON names an interpreter with the needs of the Python client.
func TestSteadyClients(t *testing.T) {
	operations(t)
	span := spanOf(t, "STEADY_SPAN", 30*time.Second)
	p, where := startServing(t, "--drain-notice", "0s")
	wire := &relay{}
	general, gate := wire.to(t, where["general"]), wire.to(t, where["gate"])

	ctx, cancel := context.WithTimeout(t.Context(), span)
	defer cancel()
	var all sync.WaitGroup
	python := "no Python client: PYTHON is not set"
	if interpreter := os.Getenv("PYTHON"); interpreter != "" {
		all.Go(func() {
			c := exec.CommandContext(t.Context(), interpreter, "-m", "tests.steady", general, gate, fmt.Sprint(span.Seconds())) //nolint:gosec // the person's own
			c.Dir = filepath.Join("..", "..", "..", "clients", "python")
			out, err := c.CombinedOutput()
			if err != nil {
				t.Errorf("the Python client: %v: %s", err, out)
			}
			python = "Python: " + strings.TrimSpace(string(out))
		})
	}
	var asked, judged atomic.Int64
	connect := func(address string) *kinegate.Client {
		client, err := kinegate.Dial(address, kinegate.Options{})
		if err != nil {
			t.Fatal(err)
		}
		t.Cleanup(func() { _ = client.Close() })
		return client
	}
	idle, active, judging := connect(general), connect(general), connect(gate)
	if err := idle.Reach(ctx); err != nil {
		t.Fatal(err)
	}
	all.Go(func() { asking(ctx, t, active, &asked) })
	all.Go(func() {
		for ctx.Err() == nil {
			judgingFor(ctx, t, judging, 40*time.Second, &judged)
		}
	})
	all.Wait()
	abused, open := sumOf(t, where["metrics"], "rpc_server_rejected_total"), scrape(t, where["metrics"], "rpc_server_connections")
	t.Logf("FIGURE X6 %v of shipped clients: Go: %d calls, %d blocks; %s; %s; %v refused by the server, %s connections at the end",
		span, asked.Load(), judged.Load(), python, wire, abused, open)
	if n := wire.told.Load(); n > 0 || abused > 0 {
		t.Errorf("told %d times of a fault of theirs, %v refused", n, abused)
	}
	_ = p.Process.Signal(syscall.SIGTERM)
	if code := exitCode(t, p.Wait()); code != 0 {
		t.Errorf("exit code %d", code)
	}
}

// turn is the time between what a steady client does.
const turn = 500 * time.Millisecond

// asking asks, and changes its mind, each turn until the context ends.
func asking(ctx context.Context, t *testing.T, client *kinegate.Client, asked *atomic.Int64) {
	t.Helper()
	for ; ctx.Err() == nil; time.Sleep(turn) {
		if _, err := client.Info.GetInfo(ctx, &kinegatev1.GetInfoRequest{}); err != nil && ctx.Err() == nil {
			t.Errorf("a question: %v", err)
		}
		asked.Add(1)
		hasty, cancel := context.WithCancel(ctx)
		time.AfterFunc(100*time.Microsecond, cancel)
		_, err := client.Info.GetInfo(hasty, &kinegatev1.GetInfoRequest{})
		if err != nil && status.Code(err) != codes.Canceled && ctx.Err() == nil {
			t.Errorf("a question taken back: %v", err)
		}
		cancel()
	}
}

// judgingFor judges a block each turn over a stream that it leaves in its middle.
func judgingFor(ctx context.Context, t *testing.T, client *kinegate.Client, span time.Duration, judged *atomic.Int64) {
	t.Helper()
	ctx, cancel := context.WithCancel(ctx)
	defer cancel()
	defer time.AfterFunc(span, cancel).Stop() // no deadline, of which the server would know first
	stream, err := client.Judge(ctx, history.AllEntries(), kinegate.JudgeOptions{})
	if err != nil {
		if ctx.Err() == nil {
			t.Errorf("opening: %v", err)
		}
		return
	}
	defer stream.Close()
	go func() {
		for from := 0; ctx.Err() == nil; from += 200 {
			if stream.Send(history.Photons(from, 200)) != nil {
				return // Recv tells
			}
			time.Sleep(turn)
		}
	}()
	for {
		if _, err := stream.Recv(); err != nil {
			if ctx.Err() == nil {
				t.Errorf("judging: %v", err)
			}
			return
		}
		judged.Add(1)
	}
}

// relay passes plaintext connections on and counts the frames by which one end tells the
// other of trouble.
type relay struct {
	connections, pings, resets atomic.Int64 // of clients
	away, told                 atomic.Int64 // GOAWAYs of servers, and those that name an error
}

func (r *relay) String() string {
	return fmt.Sprintf("%d connections, %d pings, %d resets, %d GOAWAYs, %d of them for an error",
		r.connections.Load(), r.pings.Load(), r.resets.Load(), r.away.Load(), r.told.Load())
}

// to listens for connections to a server, until the test ends.
func (r *relay) to(t *testing.T, server string) (address string) {
	t.Helper()
	l, err := (&net.ListenConfig{}).Listen(t.Context(), "tcp", "127.0.0.1:0")
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { _ = l.Close() })
	go func() {
		for {
			client, err := l.Accept()
			if err != nil {
				return
			}
			go r.pass(client, server)
		}
	}()
	return l.Addr().String()
}

// pass passes one connection on.
func (r *relay) pass(client net.Conn, address string) {
	defer func() { _ = client.Close() }()
	server, err := net.Dial("tcp", address)
	if err != nil {
		return
	}
	r.connections.Add(1)
	go func() {
		defer func() { _ = server.Close() }()
		seen := io.TeeReader(client, server)
		if _, err := io.CopyN(io.Discard, seen, int64(len(http2.ClientPreface))); err != nil {
			return
		}
		frames(seen, func(f http2.Frame) {
			switch f := f.(type) {
			case *http2.PingFrame:
				if !f.IsAck() {
					r.pings.Add(1)
				}
			case *http2.RSTStreamFrame:
				r.resets.Add(1)
			}
		})
	}()
	frames(io.TeeReader(server, client), func(f http2.Frame) {
		if f, ok := f.(*http2.GoAwayFrame); ok {
			r.away.Add(1)
			if f.ErrCode != http2.ErrCodeNo {
				r.told.Add(1)
			}
		}
	})
}

// frames shows every frame of a connection until it ends.
func frames(from io.Reader, show func(http2.Frame)) {
	framer := http2.NewFramer(io.Discard, from)
	for {
		frame, err := framer.ReadFrame()
		if err != nil && !errors.As(err, new(http2.StreamError)) {
			_, _ = io.Copy(io.Discard, from) // what it cannot read it passes on
			return
		}
		show(frame)
	}
}
