package main

import (
	"context"
	"fmt"
	"io"
	"net"
	"os"
	"os/exec"
	"slices"
	"strconv"
	"strings"
	"sync"
	"sync/atomic"
	"syscall"
	"testing"
	"time"

	"google.golang.org/grpc"
	healthpb "google.golang.org/grpc/health/grpc_health_v1"
	"google.golang.org/grpc/resolver"
	"google.golang.org/grpc/resolver/manual"

	kinegate "example.org/kinegate/clients/go"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// operations skips a test that takes long, unless it was asked for: .ci/operations does.
func operations(t *testing.T) {
	t.Helper()
	if os.Getenv("LONG_TESTS") == "" {
		t.Skip("long: set LONG_TESTS, or run .ci/operations")
	}
}

// replica is a server process at addresses of its own.
type replica struct {
	process *exec.Cmd
	ports   [4]int
}

// freePorts returns ports that were free a moment ago.
func freePorts(t *testing.T) (ports [4]int) {
	t.Helper()
	for i := range ports {
		l, err := net.Listen("tcp", "127.0.0.1:0")
		if err != nil {
			t.Fatal(err)
		}
		defer func() { _ = l.Close() }()
		tcp, _ := l.Addr().(*net.TCPAddr)
		ports[i] = tcp.Port
	}
	return ports
}

// start starts the process and waits until it serves.
func (r *replica) start(t *testing.T, more ...string) {
	t.Helper()
	at := func(i int) string { return "127.0.0.1:" + strconv.Itoa(r.ports[i]) }
	r.process = process(t, append([]string{"serve", "--gate-address", at(0), "--general-address", at(1), "--health-address", at(2),
		"--metrics-address", at(3), "--drain-notice", "200ms", "--log-level", "error"}, more...)...)
	if err := r.process.Start(); err != nil {
		t.Fatal(err)
	}
	health := healthpb.NewHealthClient(dial(t, at(2)))
	ctx, cancel := context.WithTimeout(t.Context(), 20*time.Second)
	defer cancel()
	for {
		m, err := health.Check(ctx, &healthpb.HealthCheckRequest{})
		if err == nil && m.GetStatus() == healthpb.HealthCheckResponse_SERVING {
			return
		}
		if ctx.Err() != nil {
			t.Fatalf("the server does not serve: %v", err)
		}
		time.Sleep(5 * time.Millisecond)
	}
}

// TestRollingRestarts restarts three servers 30 times, one after the other, while a
// client with the shipped settings makes at least 100,000 calls: none fails.
func TestRollingRestarts(t *testing.T) {
	operations(t)
	const servers, restarts, calls = 3, 30, 100_000
	var replicas [servers]replica
	var state resolver.State
	for i := range replicas {
		replicas[i].ports = freePorts(t)
		replicas[i].start(t)
		state.Addresses = append(state.Addresses, resolver.Address{Addr: "127.0.0.1:" + strconv.Itoa(replicas[i].ports[1])})
	}
	names := manual.NewBuilderWithScheme("rolling")
	names.InitialState(state)
	client, err := kinegate.Dial("rolling:///servers", kinegate.Options{DialOptions: []grpc.DialOption{grpc.WithResolvers(names)}})
	if err != nil {
		t.Fatal(err)
	}
	defer func() { _ = client.Close() }()
	var made, failed atomic.Int64
	var restarted atomic.Bool
	var slowest atomic.Int64
	var all sync.WaitGroup
	for range 8 {
		all.Go(func() {
			for made.Add(1) <= calls || !restarted.Load() {
				begun := time.Now()
				if _, err := client.Info.GetInfo(t.Context(), &kinegatev1.GetInfoRequest{}); err != nil {
					failed.Add(1)
					t.Errorf("call: %v", err)
				}
				if took := int64(time.Since(begun)); took > slowest.Load() {
					slowest.Store(took)
				}
			}
		})
	}
	begun := time.Now()
	for n := range restarts {
		r := &replicas[n%servers]
		if err := r.process.Process.Signal(syscall.SIGTERM); err != nil {
			t.Fatal(err)
		}
		if code := exitCode(t, r.process.Wait()); code != 0 {
			t.Errorf("restart %d: exit code %d", n, code)
		}
		r.start(t)
		time.Sleep(150 * time.Millisecond)
	}
	took := time.Since(begun)
	restarted.Store(true)
	all.Wait()
	t.Logf("FIGURE L3 %d restarts of %d servers in %.1f s, %d calls, %d failed, slowest %.2f s",
		restarts, servers, took.Seconds(), made.Load(), failed.Load(), time.Duration(slowest.Load()).Seconds())
	for i := range replicas {
		_ = replicas[i].process.Process.Signal(syscall.SIGTERM)
		_ = replicas[i].process.Wait()
	}
}

// TestUnreadLog calls a server 100,000 times whose log is a pipe that nobody reads, and
// one whose log is read: calls are as fast, lines are dropped and counted, and the
// process ends well. Every call asks for a line.
func TestUnreadLog(t *testing.T) {
	operations(t)
	const calls = 100_000
	measure := func(read bool) (p99 time.Duration, dropped string) {
		p := process(t, onLoopback("--drain-notice", "0s", "--log-burst", "1000000")...)
		reader, writer, err := os.Pipe()
		if err != nil {
			t.Fatal(err)
		}
		defer func() { _ = reader.Close() }()
		p.Stderr = writer
		if err := p.Start(); err != nil {
			t.Fatal(err)
		}
		_ = writer.Close()
		// addresses goes on to read, so it gets a copy that ends.
		first, feed := io.Pipe()
		go func() {
			buffer := make([]byte, 4096)
			for {
				n, err := reader.Read(buffer)
				if err != nil {
					return
				}
				_, _ = feed.Write(buffer[:n])
				if !read && strings.Contains(string(buffer[:n]), "listening for metrics") {
					return
				}
			}
		}()
		where := addresses(t, first)
		client := kinegatev1.NewInfoServiceClient(dial(t, where["general"]))
		took := make([]time.Duration, calls)
		var all sync.WaitGroup
		for worker := range 4 {
			all.Go(func() {
				for i := worker; i < calls; i += 4 {
					begun := time.Now()
					if _, err := client.GetInfo(t.Context(), &kinegatev1.GetInfoRequest{}); err != nil {
						t.Error(err)
						return
					}
					took[i] = time.Since(begun)
				}
			})
		}
		all.Wait()
		dropped = scrape(t, where["metrics"], "kinegate_log_lines_dropped_total")
		_ = p.Process.Signal(syscall.SIGTERM)
		if code := exitCode(t, p.Wait()); code != 0 {
			t.Errorf("exit code %d", code)
		}
		slices.Sort(took)
		return took[calls*99/100], dropped
	}
	idle, _ := measure(true)
	blocked, dropped := measure(false)
	t.Logf("FIGURE O7 %d calls: p99 %.2f ms with a reader, %.2f ms without (ratio %.2f), %s lines dropped, exit code 0",
		calls, idle.Seconds()*1e3, blocked.Seconds()*1e3, blocked.Seconds()/idle.Seconds(), dropped)
	if blocked > 2*idle {
		t.Errorf("p99 %v, with a reader %v", blocked, idle)
	}
	if dropped == "" || dropped == "0" {
		t.Errorf("%q lines dropped", dropped)
	}
}

// spanOf is how long a test takes: what a variable says, or else its usual time.
func spanOf(t *testing.T, variable string, usual time.Duration) time.Duration {
	t.Helper()
	text := os.Getenv(variable)
	if text == "" {
		return usual
	}
	span, err := time.ParseDuration(text)
	if err != nil {
		t.Fatal(err)
	}
	return span
}

// scrape returns the value of a metric without labels.
func scrape(t *testing.T, where, name string) string {
	t.Helper()
	for line := range strings.Lines(metrics(t, where)) {
		if value, ok := strings.CutPrefix(line, name+" "); ok {
			return strings.TrimSpace(value)
		}
	}
	return ""
}

// sumOf is the sum of a metric over its labels.
func sumOf(t *testing.T, where, name string) float64 {
	t.Helper()
	total := 0.0
	for line := range strings.Lines(metrics(t, where)) {
		if strings.HasPrefix(line, name+"{") {
			fields := strings.Fields(line)
			value, err := strconv.ParseFloat(fields[len(fields)-1], 64)
			if err != nil {
				t.Fatal(err)
			}
			total += value
		}
	}
	return total
}

// metrics is the text of a scrape.
func metrics(t *testing.T, where string) string {
	t.Helper()
	conn, err := (&net.Dialer{}).DialContext(context.Background(), "tcp", where) // the test's may be over
	if err != nil {
		t.Fatal(err)
	}
	defer func() { _ = conn.Close() }()
	_, _ = fmt.Fprintf(conn, "GET /metrics HTTP/1.0\r\n\r\n")
	text, err := io.ReadAll(conn)
	if err != nil {
		t.Fatal(err)
	}
	return string(text)
}
