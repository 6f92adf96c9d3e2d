package main

import (
	"context"
	"errors"
	"net"
	"os"
	"os/exec"
	"path/filepath"
	"strconv"
	"strings"
	"sync"
	"sync/atomic"
	"syscall"
	"testing"
	"time"

	"google.golang.org/grpc"
	"google.golang.org/grpc/credentials/insecure"
	"google.golang.org/grpc/status"

	kinegate "example.org/kinegate/clients/go"
	"example.org/kinegate/clients/go/history"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// long reports whether tests that take minutes run in full: LONG_TESTS=1.
func long() bool { return os.Getenv("LONG_TESTS") != "" }

// served is a server process on unix sockets of a folder, which can be killed and
// started again at the same place.
type served struct {
	t       *testing.T
	folder  string
	more    []string
	process *exec.Cmd
}

func serveAt(t *testing.T, more ...string) *served {
	t.Helper()
	// Paths of sockets are short.
	folder, err := os.MkdirTemp("", "gate") //nolint:usetesting // t.TempDir gives longer ones
	if err != nil {
		t.Fatal(err)
	}
	s := &served{t: t, folder: folder, more: more}
	s.start()
	t.Cleanup(func() {
		s.kill()
		_ = os.RemoveAll(folder)
	})
	return s
}

func (s *served) socket(name string) string { return "unix:" + filepath.Join(s.folder, name) }

func (s *served) start() {
	s.t.Helper()
	s.process = process(s.t, append([]string{
		"serve", "--gate-address", s.socket("gate"), "--general-address", s.socket("general"),
		"--health-address", "", "--metrics-address", "", "--drain-notice", "0s",
	}, s.more...)...)
	if err := s.process.Start(); err != nil {
		s.t.Fatal(err)
	}
}

// kill ends the process as a crash would.
func (s *served) kill() {
	_ = s.process.Process.Kill()
	_ = s.process.Wait()
}

func (s *served) client() *kinegate.Client {
	s.t.Helper()
	c, err := kinegate.Dial(s.socket("gate"), kinegate.Options{})
	if err != nil {
		s.t.Fatal(err)
	}
	s.t.Cleanup(func() { _ = c.Close() })
	return c
}

// TestHistoryAcrossKills kills the server with SIGKILL every 2 s: the stream is back
// within 3 s each time, nothing is lost or doubled, and the bits are those of an
// uninterrupted run. Three kills; five minutes of them with LONG_TESTS=1.
func TestHistoryAcrossKills(t *testing.T) {
	kills := int64(3)
	if long() {
		kills = 150
	}
	const perBlock, sample = 200, 20000
	s := serveAt(t)
	client := s.client()
	c, err := history.LearnSample(t.Context(), client, history.AllEntries(), sample)
	if err != nil {
		t.Fatal(err)
	}
	var killed, broken atomic.Int64
	var back atomic.Int64 // longest time from a kill to the next verdict, in ns
	var down atomic.Int64 // time of the last kill that no verdict followed yet
	done := make(chan struct{})
	go func() {
		defer close(done)
		for killed.Load() < kills {
			time.Sleep(2 * time.Second)
			down.Store(time.Now().UnixNano())
			s.kill()
			s.start()
			killed.Add(1)
		}
	}()
	// Runs over the sample go on until all kills are done.
	for over := false; !over; {
		err := c.Check(t.Context(), history.Run{
			Client: client, Open: history.AllEntries(), Events: sample, PerBlock: perBlock,
			Options: kinegate.JudgeOptions{Broken: func(error) { broken.Add(1) }},
			Before:  func(int) { time.Sleep(10 * time.Millisecond) },
			Answered: func(*kinegatev1.VerdictBlock) {
				if at := down.Swap(0); at > 0 {
					back.Store(max(back.Load(), time.Now().UnixNano()-at))
				}
			},
		})
		if err != nil {
			t.Fatal(err)
		}
		c.Again()
		select {
		case <-done:
			over = true
		default:
		}
	}
	longest := time.Duration(back.Load())
	if broken.Load() < kills || longest > 3*time.Second {
		t.Errorf("%d kills, %d breaks, back after at most %v", killed.Load(), broken.Load(), longest)
	}
	t.Logf("%d kills, %d events, back after at most %v", killed.Load(), c.Counts().Answered, longest)
}

// TestFrozenServerIsFound stops the server's process: found within 3.5 s, and the stream
// goes on when it wakes.
func TestFrozenServerIsFound(t *testing.T) {
	const perBlock, sample = 200, 4000
	s := serveAt(t)
	client := s.client()
	c, err := history.LearnSample(t.Context(), client, history.AllEntries(), sample)
	if err != nil {
		t.Fatal(err)
	}
	var frozen, found time.Time
	err = c.Check(t.Context(), history.Run{
		Client: client, Open: history.AllEntries(), Events: sample, PerBlock: perBlock,
		Options: kinegate.JudgeOptions{Broken: func(error) {
			if found.IsZero() {
				found = time.Now()
				_ = s.process.Process.Signal(syscall.SIGCONT)
			}
		}},
		Before: func(from int) {
			if from == sample/2 {
				frozen = time.Now()
				_ = s.process.Process.Signal(syscall.SIGSTOP)
			}
		},
	})
	if err != nil {
		t.Error(err)
	}
	if took := found.Sub(frozen); took <= 0 || took > 3500*time.Millisecond {
		t.Errorf("found after %v", took)
	}
}

// TestFrozenServerAtTheOpening: a stream that opens while the server's process is stopped
// ends within the time of an opening, whether or not its client spoke to the server before,
// and opens once the process wakes.
func TestFrozenServerAtTheOpening(t *testing.T) {
	const opening, slack = time.Second, time.Second
	s := serveAt(t)
	known := s.client()
	open := func(options kinegate.JudgeOptions) {
		t.Helper()
		stream, err := known.Judge(t.Context(), history.AllEntries(), options)
		if err != nil {
			t.Fatal(err)
		}
		stream.Close()
	}
	open(kinegate.JudgeOptions{}) // the server is there
	if err := s.process.Process.Signal(syscall.SIGSTOP); err != nil {
		t.Fatal(err)
	}
	for _, c := range []struct {
		name   string
		client *kinegate.Client
	}{{"known", known}, {"new", s.client()}} {
		begun := time.Now()
		_, err := c.client.Judge(t.Context(), history.AllEntries(), kinegate.JudgeOptions{Opening: opening})
		took := time.Since(begun)
		if _, ok := errors.AsType[*kinegate.UnreachableError](err); !ok || took < opening || took > opening+slack {
			t.Errorf("%s: %v after %v", c.name, err, took)
		}
	}
	if err := s.process.Process.Signal(syscall.SIGCONT); err != nil {
		t.Fatal(err)
	}
	open(kinegate.JudgeOptions{})
}

// resident is the memory of a process in bytes, now or at its most.
func resident(t *testing.T, pid int, key string) int64 {
	t.Helper()
	data, err := os.ReadFile("/proc/" + strconv.Itoa(pid) + "/status")
	if err != nil {
		t.Skip("no /proc")
	}
	_, rest, found := strings.Cut(string(data), key+":")
	if !found {
		t.Fatal("the process is gone") // and nobody has waited for it yet
	}
	n, err := strconv.ParseInt(strings.Fields(rest)[0], 10, 64)
	if err != nil {
		t.Fatal(err)
	}
	return n << 10
}

// TestMemoryWithEveryStreamStalled fills the credit pool with streams whose callers take
// nothing. One more is refused as overload; the memory stays within the pool, the flow
// control of the open streams and 16 MiB; the stalled connections are gone within 6 s, and
// with them what they held, so that as many may come again; and a server told to leave while
// these stall leaves in time.
func TestMemoryWithEveryStreamStalled(t *testing.T) {
	if raceDetector {
		t.Skip("the race detector's own memory passes the bound; make test measures without it")
	}
	const (
		pool   = 64 << 20
		window = 512 << 10
		slack  = 16 << 20
	)
	s := serveAt(t)
	if _, err := history.LearnSample(t.Context(), s.client(), history.AllEntries(), 4000); err != nil {
		t.Fatal(err)
	}
	pid := s.process.Process.Pid
	before := resident(t, pid, "VmRSS")
	var blocks []*kinegatev1.EventBlock
	for i := range 8 {
		b := history.Photons(4000*i, 4000)
		b.Sequence = int64(i)
		blocks = append(blocks, b)
	}
	gone := make(chan time.Duration, 2*maxStreams)
	streams := stallAll(t, s.socket("gate"), blocks, gone)
	time.Sleep(3 * time.Second)
	bound := int64(pool + streams*window + slack)
	if grown := resident(t, pid, "VmHWM") - before; grown > bound {
		t.Errorf("%d streams: memory grew by %d KiB, the bound is %d", streams, grown>>10, bound>>10)
	} else {
		t.Logf("%d streams: memory grew by %d KiB, the bound is %d", streams, grown>>10, bound>>10)
	}
	for range streams {
		select {
		case took := <-gone:
			if took > 6*time.Second {
				t.Errorf("a stalled connection was gone after %v", took)
			}
		case <-time.After(10 * time.Second):
			t.Fatal("a stalled connection stays")
		}
	}
	if again := stallAll(t, s.socket("gate"), blocks, gone); again != streams {
		t.Errorf("%d streams at first, then %d", streams, again)
	}
	time.Sleep(3 * time.Second) // they stall
	begun := time.Now()
	if err := s.process.Process.Signal(syscall.SIGTERM); err != nil {
		t.Fatal(err)
	}
	if code := exitCode(t, s.process.Wait()); code != 0 || time.Since(begun) > 10*time.Second {
		t.Errorf("exit code %d after %v", code, time.Since(begun))
	}
	s.start() // for the clean-up
}

// maxStreams is more than a credit pool has room for.
const maxStreams = 64

// stallAll opens stalled streams until one is refused, sends blocks on each and returns how
// many there are. Each tells how long its connection stayed.
func stallAll(t *testing.T, where string, blocks []*kinegatev1.EventBlock, gone chan<- time.Duration) (streams int) {
	t.Helper()
	const least = 8
	for ; streams < maxStreams; streams++ {
		stream, closed, err := stalledStream(t, where)
		if err != nil {
			if reason := reasonOf(status.Convert(err)); reason != "SERVER_OVERLOADED" {
				t.Fatalf("stream %d: %q: %v", streams, reason, err)
			}
			break
		}
		begun := time.Now()
		go func() {
			<-closed
			gone <- time.Since(begun)
		}()
		go func() {
			for _, b := range blocks {
				if stream.Send(&kinegatev1.JudgeRequest{Frame: &kinegatev1.JudgeRequest_Block{Block: b}}) != nil {
					return
				}
			}
		}()
	}
	if streams < least || streams == maxStreams {
		t.Fatalf("%d streams", streams)
	}
	return streams
}

// stalledStream opens a stream on a connection of its own with narrow windows, and
// nobody will read it. Closed receives the end of the connection.
func stalledStream(t *testing.T, where string) (stream kinegatev1.SelectionService_JudgeClient, closed <-chan struct{}, err error) {
	t.Helper()
	const window = 64 << 10
	gone := make(chan struct{})
	conn, err := grpc.NewClient("passthrough:gate", grpc.WithTransportCredentials(insecure.NewCredentials()),
		grpc.WithStaticStreamWindowSize(window), grpc.WithStaticConnWindowSize(window),
		grpc.WithContextDialer(func(ctx context.Context, _ string) (net.Conn, error) {
			network, address := "tcp", where
			if path, unix := strings.CutPrefix(where, "unix:"); unix {
				network, address = "unix", path
			}
			c, err := new(net.Dialer).DialContext(ctx, network, address)
			if err != nil {
				return nil, err
			}
			return &watched{Conn: c, gone: gone}, nil
		}))
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { _ = conn.Close() })
	stream, err = kinegatev1.NewSelectionServiceClient(conn).Judge(t.Context())
	if err != nil {
		return nil, nil, err
	}
	if err := stream.Send(&kinegatev1.JudgeRequest{Frame: &kinegatev1.JudgeRequest_Open{Open: history.AllEntries()}}); err != nil {
		return nil, nil, err
	}
	response, err := stream.Recv()
	if err == nil && response.GetOpened() == nil {
		err = errors.New("no opening")
	}
	return stream, gone, err
}

// watched is a connection that tells once when the peer has closed it.
type watched struct {
	net.Conn

	once sync.Once
	gone chan struct{}
}

func (w *watched) Read(p []byte) (int, error) {
	n, err := w.Conn.Read(p)
	if err != nil {
		w.once.Do(func() { close(w.gone) })
	}
	return n, err
}
