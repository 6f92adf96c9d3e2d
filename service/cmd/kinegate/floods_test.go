package main

import (
	"context"
	"crypto/tls"
	"errors"
	"fmt"
	"net"
	"os"
	"os/exec"
	"runtime"
	"strconv"
	"strings"
	"sync"
	"sync/atomic"
	"syscall"
	"testing"
	"time"

	"golang.org/x/net/http2"
	"golang.org/x/net/http2/hpack"

	kinegate "example.org/kinegate/clients/go"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// asFlood makes the test binary send a flood: the kind, where to, from which address, and
// for how long.
const asFlood = "TEST_AS_FLOOD"

// processors of the server and of all that is beside it.
const servers, others = "0", "1"

// pinned makes a command run on one processor; where that cannot be it stays as it is.
func pinned(t *testing.T, processor string, c *exec.Cmd) *exec.Cmd {
	t.Helper()
	taskset, err := exec.LookPath("taskset")
	if err != nil || runtime.NumCPU() < 2 {
		t.Log("NOT PINNED: one processor, or no taskset")
		return c
	}
	p := exec.CommandContext(t.Context(), taskset, append([]string{"-c", processor, c.Path}, c.Args[1:]...)...) //nolint:gosec // the test binary itself
	p.Env = c.Env
	return p
}

// TestFloods measures a good client beside 5,000 connections that do not finish their
// handshake, beside connections that ping without end, and beside connections that open
// and reset streams without end. Asked is twice its time at rest. The server has one
// processor; the good client has the other, which the floods use at the lowest priority.
func TestFloods(t *testing.T) {
	operations(t)
	certificate, key := selfSigned(t)
	serve := process(t, onLoopback("--drain-notice", "0s", "--certificate-file", certificate, "--key-file", key)...)
	serve.Env = append(serve.Env, "GOMAXPROCS=2") // as in a container of one processor
	p := pinned(t, servers, serve)
	log, err := p.StderrPipe()
	if err != nil {
		t.Fatal(err)
	}
	if err := p.Start(); err != nil {
		t.Fatal(err)
	}
	where := addresses(t, log)
	pin(t)
	client, err := kinegate.Dial(where["general"], kinegate.Options{TLS: true, CAFile: certificate, ServerName: "localhost"})
	if err != nil {
		t.Fatal(err)
	}
	defer func() { _ = client.Close() }()
	good := func(span time.Duration) time.Duration {
		var took []time.Duration
		for end := time.Now().Add(span); time.Now().Before(end); time.Sleep(5 * time.Millisecond) {
			begun := time.Now()
			if _, err := client.Info.GetInfo(t.Context(), &kinegatev1.GetInfoRequest{}); err != nil {
				t.Errorf("the good client: %v", err)
			}
			took = append(took, time.Since(begun))
		}
		return quantile(took, 0.99)
	}
	good(time.Second)
	idle := good(5 * time.Second)
	t.Logf("FIGURE X6 idle: p99 %.2f ms", ms(idle))
	held := func(name string, p99, most time.Duration) {
		t.Helper()
		if p99 > max(2*idle, most) {
			t.Errorf("%s: p99 %v, idle %v", name, p99, idle)
		}
	}
	t.Run("half a handshake", func(t *testing.T) {
		const connections = 5000
		var open []net.Conn
		for range connections {
			conn, err := (&net.Dialer{Timeout: time.Second}).DialContext(t.Context(), "tcp", where["general"])
			if err != nil {
				t.Fatal(err)
			}
			defer func() { _ = conn.Close() }()
			_, _ = conn.Write([]byte{22, 3, 1, 2, 0, 1, 0, 1}) // the beginning of a hello
			open = append(open, conn)
		}
		p99 := good(3 * time.Second)
		fds, err := os.ReadDir("/proc/" + strconv.Itoa(p.Process.Pid) + "/fd")
		if err != nil {
			t.Skip("no /proc")
		}
		kept := scrape(t, where["metrics"], "rpc_server_connections")
		begun := time.Now()
		for scrape(t, where["metrics"], "rpc_server_connections") != "1" && time.Since(begun) < 20*time.Second {
			time.Sleep(100 * time.Millisecond)
		}
		t.Logf("FIGURE X6 %d connections with half a handshake: good client p99 %.2f ms (%.1fx), %s connections and %d files open, all gone %.1f s later",
			len(open), ms(p99), float64(p99)/float64(idle), kept, len(fds), time.Since(begun).Seconds())
		held("half a handshake", p99, 2*time.Millisecond)
		if n, _ := strconv.Atoi(kept); n > 1024 || len(fds) > 1024+64 {
			t.Errorf("%s connections, %d files", kept, len(fds))
		}
		if scrape(t, where["metrics"], "rpc_server_connections") != "1" {
			t.Error("they stay")
		}
	})
	for _, kind := range []string{"pings", "resets"} {
		t.Run(kind, func(t *testing.T) {
			const span = 5 * time.Second
			c := pinned(t, others, process(t))
			c.Env = append(os.Environ(), asFlood+"="+strings.Join([]string{kind, where["general"], "127.0.0.2", span.String()}, " "))
			c.Stderr = os.Stderr
			told := make(chan string, 1)
			go func() {
				out, err := c.Output()
				told <- strings.TrimSpace(string(out))
				if err != nil {
					t.Error(err)
				}
			}()
			time.Sleep(100 * time.Millisecond)
			p99 := good(span - time.Second)
			said := <-told
			t.Logf("FIGURE X6 %s: %s; good client p99 %.2f ms (%.1fx)", kind, said, ms(p99), float64(p99)/float64(idle))
			held(kind, p99, 0)
			if kind == "pings" && strings.Contains(said, " 0 told") {
				t.Error("nobody was told")
			}
		})
	}
	_ = p.Process.Signal(syscall.SIGTERM)
	if code := exitCode(t, p.Wait()); code != 0 {
		t.Errorf("exit code %d", code)
	}
}

// pin keeps this process to the processor beside the server's until the test ends.
func pin(t *testing.T) {
	t.Helper()
	self := strconv.Itoa(os.Getpid())
	set := func(processors string) error {
		return exec.Command("taskset", "-a", "-c", "-p", processors, self).Run() //nolint:gosec // this very process
	}
	if runtime.NumCPU() > 1 && set(others) == nil {
		t.Cleanup(func() { _ = set("0-" + strconv.Itoa(runtime.NumCPU()-1)) })
	}
}

// flood is the main of a process that floods; it prints what it did.
func flood(order string) {
	var kind, where, from, span string
	if _, err := fmt.Sscan(order, &kind, &where, &from, &span); err != nil {
		panic(err)
	}
	_ = syscall.Setpriority(syscall.PRIO_PROCESS, 0, 19) // its threads to come inherit it
	last, err := time.ParseDuration(span)
	if err != nil {
		panic(err)
	}
	ctx, cancel := context.WithTimeout(context.Background(), last)
	defer cancel()
	frame := map[string]func(*http2.Framer, int) error{"pings": ping, "resets": reset}[kind]
	var frames, connections, tooMany atomic.Int64
	var all sync.WaitGroup
	for range 4 {
		all.Go(func() {
			for ctx.Err() == nil {
				connections.Add(1)
				if told := flooded(ctx, where, from, frame, &frames); strings.Contains(told, "too_many_pings") {
					tooMany.Add(1)
				}
			}
		})
	}
	all.Wait()
	_, _ = fmt.Fprintf(os.Stdout, "%d on %d connections, %d told too_many_pings", frames.Load(), connections.Load(), tooMany.Load())
}

// flooded sends one kind of frame on a connection until the server ends it or ctx does,
// and returns what the server said.
func flooded(ctx context.Context, where, from string, frame func(*http2.Framer, int) error, frames *atomic.Int64) (told string) {
	dialer := tls.Dialer{NetDialer: &net.Dialer{LocalAddr: &net.TCPAddr{IP: net.ParseIP(from)}}, Config: &tls.Config{InsecureSkipVerify: true, NextProtos: []string{"h2"}, MinVersion: tls.VersionTLS13}} //nolint:gosec // a hostile client does not check
	conn, err := dialer.DialContext(ctx, "tcp", where)
	if err != nil {
		return err.Error()
	}
	defer func() { _ = conn.Close() }()
	defer context.AfterFunc(ctx, func() { _ = conn.Close() })()
	if _, err := conn.Write([]byte(http2.ClientPreface)); err != nil {
		return err.Error()
	}
	framer := http2.NewFramer(conn, conn)
	_ = framer.WriteSettings()
	said := make(chan string, 1)
	go func() {
		for {
			frame, err := framer.ReadFrame()
			if away, ok := frame.(*http2.GoAwayFrame); ok {
				said <- string(away.DebugData())
				return
			}
			if err != nil {
				said <- err.Error()
				return
			}
		}
	}()
	for n := 0; ; n++ {
		if err := frame(framer, n); err != nil {
			return <-said
		}
		frames.Add(1)
		// The server sees some thousands a second from each connection.
		if n%20 == 0 {
			time.Sleep(time.Millisecond)
		}
	}
}

func ping(framer *http2.Framer, _ int) error { return framer.WritePing(false, [8]byte{}) }

// reset opens a call and resets it.
func reset(framer *http2.Framer, n int) error {
	var block strings.Builder
	encoder := hpack.NewEncoder(&block)
	for _, field := range [][2]string{
		{":method", "POST"}, {":scheme", "https"}, {":path", kinegatev1.InfoService_GetInfo_FullMethodName},
		{":authority", "x"}, {"content-type", "application/grpc"}, {"te", "trailers"},
	} {
		_ = encoder.WriteField(hpack.HeaderField{Name: field[0], Value: field[1]})
	}
	id := uint32(2*n + 1)
	return errors.Join(
		framer.WriteHeaders(http2.HeadersFrameParam{StreamID: id, BlockFragment: []byte(block.String()), EndHeaders: true}),
		framer.WriteRSTStream(id, http2.ErrCodeCancel))
}
