package server

import (
	"crypto/tls"
	"errors"
	"fmt"
	"net"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"sync"
	"sync/atomic"
	"testing"
	"time"

	"google.golang.org/grpc"
	"google.golang.org/grpc/credentials/insecure"
	healthpb "google.golang.org/grpc/health/grpc_health_v1"

	"example.org/kinegate/clients/go/history"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// operations skips a test that takes long, unless it was asked for: .ci/operations does.
func operations(t *testing.T) {
	t.Helper()
	if os.Getenv("LONG_TESTS") == "" {
		t.Skip("long: set LONG_TESTS, or run .ci/operations")
	}
}

// bound is what a time is held to: what is asked where the long tests run, which want an
// idle machine, and ten times that elsewhere, where it only must not be of another order.
func bound(asked time.Duration) time.Duration {
	if os.Getenv("LONG_TESTS") == "" {
		asked *= 10
	}
	return asked * slowdown
}

// figure reports a measured figure to .ci/operations.
func figure(t *testing.T, format string, values ...any) {
	t.Helper()
	t.Logf("FIGURE "+format, values...)
}

func ms(d time.Duration) float64 { return float64(d) / float64(time.Millisecond) }

// TestCertificateRotation swaps the folder of certificates 200 times as an orchestrator
// does, by renaming a link, while callers make new connections: no handshake fails. Then
// it waits for the watch to find a last swap by itself.
func TestCertificateRotation(t *testing.T) {
	operations(t)
	const swaps = 200
	a := newAuthority(t)
	folder := t.TempDir()
	swap := func(n int) {
		t.Helper()
		data := filepath.Join(folder, fmt.Sprint("data", n))
		if err := os.Mkdir(data, 0o700); err != nil {
			t.Fatal(err)
		}
		a.write(t, files{filepath.Join(data, "tls.crt"), filepath.Join(data, "tls.key"), filepath.Join(data, "ca.crt")})
		link := filepath.Join(folder, "link")
		if err := os.Symlink(data, link); err != nil {
			t.Fatal(err)
		}
		if err := os.Rename(link, filepath.Join(folder, "current")); err != nil {
			t.Fatal(err)
		}
	}
	swap(0)
	current := filepath.Join(folder, "current")
	f := files{filepath.Join(current, "tls.crt"), filepath.Join(current, "tls.key"), filepath.Join(current, "ca.crt")}
	r := start(t, onSockets, f.mutual)
	chain, key := a.issue(t, "spiffe://example.org/trigger", time.Hour)
	client := a.trusting(t, chain, key)
	client.NextProtos = []string{"h2"}
	handshake := func() (serial int64, err error) {
		conn, err := tls.Dial("tcp", r.Addr(Gate).String(), client)
		if err != nil {
			return 0, err
		}
		defer func() { _ = conn.Close() }()
		return conn.ConnectionState().PeerCertificates[0].SerialNumber.Int64(), nil
	}
	own := files{filepath.Join(folder, "own.crt"), filepath.Join(folder, "own.key"), filepath.Join(folder, "authority.crt")}
	writeFile(t, own.certificate, chain)
	writeFile(t, own.key, key)
	writeFile(t, own.clientCA, a.pem)
	otherClient := func(when string) {
		t.Helper()
		says, there := openssl(t, r.Addr(Gate).String(), own)
		if !there {
			t.Logf("NOT CHECKED %s: there is no openssl", when)
			return
		}
		if !strings.Contains(says, "TLSv1.3") || !strings.Contains(says, "ALPN protocol: h2") || !strings.Contains(says, "Verify return code: 0") {
			t.Errorf("%s, openssl says %s", when, says)
		}
	}
	otherClient("before")
	stop := make(chan struct{})
	var made, failed atomic.Int64
	var seen sync.Map
	var all sync.WaitGroup
	for range 3 {
		all.Go(func() {
			for {
				select {
				case <-stop:
					return
				default:
				}
				serial, err := handshake()
				made.Add(1)
				seen.Store(serial, true)
				if err != nil {
					failed.Add(1)
					t.Errorf("handshake: %v", err)
				}
			}
		})
	}
	all.Go(func() {
		for {
			select {
			case <-stop:
				return
			case <-time.Tick(2 * time.Millisecond):
				_, _ = r.certificates.reread() // between two files of a swap it keeps the old ones
			}
		}
	})
	for n := 1; n <= swaps; n++ {
		swap(n)
		time.Sleep(10 * time.Millisecond)
	}
	close(stop)
	all.Wait()
	served := 0
	seen.Range(func(any, any) bool { served++; return true })
	swap(swaps + 1)
	begun, last := time.Now(), a.serial
	for serial := int64(0); serial != last; time.Sleep(100 * time.Millisecond) {
		var err error
		if serial, err = handshake(); err != nil || time.Since(begun) > 15*time.Second {
			t.Fatalf("serial %d, not %d, after %v: %v", serial, last, time.Since(begun), err)
		}
	}
	otherClient("after")
	figure(t, "X3 %d swaps, %d handshakes, %d failed, %d certificates seen; a last one served %.1f s after its swap",
		swaps, made.Load(), failed.Load(), served, time.Since(begun).Seconds())
	if served < swaps/4 {
		t.Errorf("only %d certificates were served", served)
	}
}

// openssl connects with a client that is not Go's and returns what that says, if it is
// there.
func openssl(t *testing.T, where string, own files) (says string, there bool) {
	t.Helper()
	program, err := exec.LookPath("openssl")
	if err != nil {
		return "", false
	}
	command := exec.CommandContext(t.Context(), program, "s_client", "-connect", where, "-servername", "localhost", "-alpn", "h2", //nolint:gosec // the test's own
		"-CAfile", own.clientCA, "-cert", own.certificate, "-key", own.key)
	out, err := command.CombinedOutput() // no input: it ends once connected
	if err != nil {
		t.Errorf("openssl: %v", err)
	}
	return string(out), true
}

// TestDrainWithEverything drains a server on sockets that has stalled readers, watches of
// health, half a handshake, and streams that go on: it ends in time, every block that it
// read is answered, and each stream is told how far.
func TestDrainWithEverything(t *testing.T) {
	operations(t)
	const stalls, watches, live = 5, 50, 8
	standard := Defaults()
	r := start(t, onSockets, func(o *Options, _ *Deps) { o.DrainNotice, o.DrainTime = standard.DrainNotice, standard.DrainTime })
	connect := func(where Listener, more ...grpc.DialOption) *grpc.ClientConn {
		conn, err := grpc.NewClient(r.Addr(where).String(), append(more, grpc.WithTransportCredentials(insecure.NewCredentials()))...)
		if err != nil {
			t.Fatal(err)
		}
		t.Cleanup(func() { _ = conn.Close() })
		return conn
	}
	watching := connect(General)
	for range watches {
		if _, err := healthpb.NewHealthClient(watching).Watch(t.Context(), &healthpb.HealthCheckRequest{}); err != nil {
			t.Fatal(err)
		}
	}
	var dialer net.Dialer
	half, err := dialer.DialContext(t.Context(), "tcp", r.Addr(Gate).String())
	if err != nil {
		t.Fatal(err)
	}
	defer func() { _ = half.Close() }()
	open := &kinegatev1.JudgeOpen{Selection: given(pairSelection())}
	known := learnedPairs(t, connect(General), open, 200, drainedEvents) // the first of many
	var answered, lost atomic.Int64
	var all sync.WaitGroup
	for range live {
		stream := idleJudge(t, connect(Gate))
		all.Go(func() {
			n, err := judgeUntilDrained(stream, known.Another(open))
			answered.Add(n)
			if err != nil {
				lost.Add(1)
				t.Error(err)
			}
		})
	}
	eventually(t, "events", func() bool { return r.metric(t, "kinegate_judge_events_total") > 10000 })
	shut := make(chan error, 1)
	begun := time.Now()
	go func() { shut <- r.Shutdown(t.Context()) }()
	// They stall when the notice is nearly over, or they would be gone before the drain.
	time.Sleep(standard.DrainNotice - 3*time.Second)
	for range stalls {
		_ = stalled(t, connect(Gate, grpc.WithStaticStreamWindowSize(64<<10), grpc.WithStaticConnWindowSize(64<<10)))
	}
	if err := <-shut; err != nil {
		t.Errorf("Shutdown: %v", err)
	}
	took := time.Since(begun)
	all.Wait()
	figure(t, "L1 %.1f s with %d stalled readers, %d watches, half a handshake and %d live streams; %d blocks answered, %d streams with unanswered ones",
		took.Seconds(), stalls, watches, live, answered.Load(), lost.Load())
	if took > 31*time.Second {
		t.Errorf("took %v", took)
	}
}

// drainedEvents is how many events a block has.
const drainedEvents = 100

// judgeUntilDrained keeps blocks under way until the server says goodbye, and holds its
// last word against the verdicts that came, and these against the checker.
func judgeUntilDrained(stream judgeClient, c *history.Checker) (answered int64, err error) {
	next := int64(0)
	ask := func() {
		block := pairBlock(next, drainedEvents)
		next++
		c.Sent(block)
		// A server that drains reads no more; what it has read is what counts.
		_ = stream.Send(&kinegatev1.JudgeRequest{Frame: &kinegatev1.JudgeRequest_Block{Block: block}})
	}
	for range 4 {
		ask()
	}
	for {
		response, err := stream.Recv()
		if err != nil {
			return answered, fmt.Errorf("no goodbye after %d verdicts: %w", answered, err)
		}
		if v := response.GetVerdict(); v != nil {
			c.Answered(v)
			answered++
			ask()
		}
		if d := response.GetDraining(); d != nil {
			if d.GetAnsweredSequence() != answered-1 {
				return answered, fmt.Errorf("told %d, answered up to %d", d.GetAnsweredSequence(), answered-1)
			}
			for err == nil {
				_, err = stream.Recv() // to the end, whatever its status
			}
			if faults := c.Faults(false); len(faults) > 0 {
				return answered, errors.New(strings.Join(faults, "; "))
			}
			return answered, nil
		}
	}
}
