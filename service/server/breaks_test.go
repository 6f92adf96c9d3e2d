package server

import (
	"context"
	"net"
	"strings"
	"sync"
	"sync/atomic"
	"testing"
	"time"

	"google.golang.org/grpc"
	"google.golang.org/grpc/codes"
	"google.golang.org/grpc/credentials/insecure"
	"google.golang.org/grpc/status"
	"google.golang.org/grpc/test/bufconn"

	kinegate "example.org/kinegate/clients/go"
	"example.org/kinegate/clients/go/history"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/api"
)

// line is a network line to a listener in memory that can fail in the ways of real ones.
type line struct {
	network *memory
	where   string

	mu    sync.Mutex
	conns []*wire
	dials int
}

// through makes a client connect over the line.
func (l *line) through(o *kinegate.Options) {
	o.DialOptions = []grpc.DialOption{grpc.WithContextDialer(func(ctx context.Context, _ string) (net.Conn, error) {
		conn, err := l.target().dial(ctx, l.where)
		if err != nil {
			return nil, err
		}
		w := &wire{Conn: conn}
		l.mu.Lock()
		defer l.mu.Unlock()
		l.conns = append(l.conns, w)
		l.dials++
		return w, nil
	})}
}

// gateLine is a line to the gate of a server.
func (r *running) gateLine() *line { return &line{network: r.network, where: r.options.GateAddress} }

// target is where the line leads.
func (l *line) target() *memory {
	l.mu.Lock()
	defer l.mu.Unlock()
	return l.network
}

// lead makes new connections lead elsewhere.
func (l *line) lead(to *memory) {
	l.mu.Lock()
	defer l.mu.Unlock()
	l.network = to
}

// cut closes every open connection.
func (l *line) cut() {
	l.mu.Lock()
	defer l.mu.Unlock()
	for _, w := range l.conns {
		_ = w.Close()
	}
	l.conns = nil
}

// swallow lets every open connection lose all bytes from now on without a sign, as a
// firewall that forgot it does.
func (l *line) swallow() {
	l.mu.Lock()
	defer l.mu.Unlock()
	for _, w := range l.conns {
		w.silent.Store(true)
	}
}

// freeze lets nobody read from the open connections for a while, as a stopped process
// does not.
func (l *line) freeze(d time.Duration) {
	l.mu.Lock()
	defer l.mu.Unlock()
	for _, w := range l.conns {
		w.until.Store(time.Now().Add(d).UnixNano())
	}
}

// narrow gives a client the least windows of flow control.
func narrow(o *kinegate.Options) {
	const window = 64 << 10
	o.DialOptions = append(o.DialOptions, grpc.WithInitialWindowSize(window), grpc.WithInitialConnWindowSize(window))
}

// count is the number of connections made.
func (l *line) count() int {
	l.mu.Lock()
	defer l.mu.Unlock()
	return l.dials
}

// wire is a connection that can fall silent, or be read no more.
type wire struct {
	net.Conn

	silent atomic.Bool
	until  atomic.Int64 // frozen until then, in ns
}

// Read loses what comes while the wire is silent.
func (w *wire) Read(p []byte) (int, error) {
	for {
		time.Sleep(time.Duration(w.until.Load() - time.Now().UnixNano()))
		n, err := w.Conn.Read(p)
		if err != nil || !w.silent.Load() {
			return n, err
		}
	}
}

// Write loses what goes while the wire is silent.
func (w *wire) Write(p []byte) (int, error) {
	if w.silent.Load() {
		return len(p), nil
	}
	return w.Conn.Write(p)
}

// TestHistoryAcrossCuts cuts the connection again and again: each event is answered
// exactly once, in order, with the bits of the uninterrupted run.
func TestHistoryAcrossCuts(t *testing.T) {
	r := start(t)
	const events, perBlock, every = 20000, 100, 1300
	c := learned(t, r, history.AllEntries(), events)
	l := r.gateLine()
	var broken atomic.Int64
	verify(t, c, history.Run{
		Client: r.client(t, l.through), Open: history.AllEntries(), Events: events, PerBlock: perBlock,
		Options: kinegate.JudgeOptions{Broken: func(error) { broken.Add(1) }},
		Before: func(from int) {
			if from%every == 0 {
				l.cut()
			}
		},
	})
	if broken.Load() < 5 || l.count() < 6 {
		t.Errorf("%d breaks, %d connections", broken.Load(), l.count())
	}
	if counts := c.Counts(); counts.Answered != events || counts.Expired > 0 {
		t.Errorf("%+v", counts)
	}
}

// TestNothingIsReplayed: a connection breaks after the first block of a caller whose
// transport retries everything. The headers were there at once, so that it replays
// nothing to the next server.
func TestNothingIsReplayed(t *testing.T) {
	first, second := start(t), start(t)
	l := first.gateLine()
	var o kinegate.Options
	l.through(&o)
	conn, err := grpc.NewClient("passthrough:memory", append(o.DialOptions,
		grpc.WithTransportCredentials(insecure.NewCredentials()),
		grpc.WithDefaultServiceConfig(`{"methodConfig": [{"name": [{}], "waitForReady": true, "retryPolicy": {
			"maxAttempts": 5, "initialBackoff": "0.01s", "maxBackoff": "0.1s", "backoffMultiplier": 2,
			"retryableStatusCodes": ["UNAVAILABLE", "INTERNAL", "UNKNOWN"]}}]}`))...)
	if err != nil {
		t.Fatal(err)
	}
	defer func() { _ = conn.Close() }()
	stream, err := kinegatev1.NewSelectionServiceClient(conn).Judge(t.Context())
	if err != nil {
		t.Fatal(err)
	}
	send(t, stream, &kinegatev1.JudgeRequest{Frame: &kinegatev1.JudgeRequest_Open{Open: history.AllEntries()}})
	sendBlock(t, stream, history.Photons(0, 10))
	eventually(t, "judged", func() bool { return first.metric(t, "kinegate_judge_events_total") == 10 })
	l.lead(second.network)
	l.cut()
	for err == nil {
		_, err = stream.Recv()
	}
	if status.Code(err) != codes.Unavailable {
		t.Errorf("the stream ends with %v", err)
	}
	time.Sleep(300 * time.Millisecond) // attempts would have been made by now
	if n := second.metric(t, "kinegate_judge_events_total"); n != 0 {
		t.Errorf("the second server judged %v events", n)
	}
}

// TestHistoryAcrossCancels ends stream after stream in the middle, with blocks on their
// way, and goes on each time with a new one from the first block without a verdict.
func TestHistoryAcrossCancels(t *testing.T) {
	r := start(t)
	const events, perBlock, perStream = 10000, 100, 7
	c := learned(t, r, history.AllEntries(), events)
	client := r.client(t)
	streams := 0
	for next := int64(0); next < events/perBlock; streams++ {
		ctx, cancel := context.WithCancel(t.Context())
		open := history.AllEntries()
		open.FirstSequence = next
		stream, err := client.Judge(ctx, open, kinegate.JudgeOptions{})
		if err != nil {
			t.Fatal(err)
		}
		sent := make(chan struct{})
		go func() {
			defer close(sent)
			for i := next; i < events/perBlock; i++ {
				block := history.Photons(int(i)*perBlock, perBlock)
				block.Sequence = i
				c.Sent(block)
				if stream.Send(block) != nil {
					return
				}
			}
		}()
		for taken := 0; ; taken++ {
			if taken == perStream {
				cancel()
			}
			v, err := stream.Recv()
			if err != nil {
				break
			}
			c.Answered(v)
			if next = v.GetSequence() + 1; next == events/perBlock {
				break
			}
		}
		cancel()
		stream.Close()
		<-sent
	}
	if faults := c.Faults(true); len(faults) > 0 || streams < 5 {
		t.Errorf("%d streams: %v", streams, faults)
	}
}

// TestHistoryAcrossStalls has a caller that takes no verdicts for a while, which the
// client's queue bears, and then one whose process reads nothing at all: the server cuts
// it off, and it comes back.
func TestHistoryAcrossStalls(t *testing.T) {
	const events, perBlock, stall = 80000, 4000, 2500 * time.Millisecond
	r := start(t, func(o *Options, _ *Deps) { o.StallLimit = time.Second })
	cutOff := func() float64 { return r.metric(t, "kinegate_judge_streams_closed_total", string(api.StreamStalled)) }
	for _, c := range []struct {
		name string
		cuts float64
		stop func(l *line)
	}{
		{"takes no verdicts", 0, func(*line) { time.Sleep(stall) }},
		{"reads nothing", 1, func(l *line) { l.freeze(stall) }},
	} {
		t.Run(c.name, func(t *testing.T) {
			checker := learned(t, r, history.AllEntries(), events)
			l := r.gateLine()
			before, answered := cutOff(), 0
			verify(t, checker, history.Run{
				// One reply fills the windows, so that the server has to wait at once.
				Client: r.client(t, l.through, narrow), Open: history.AllEntries(), Events: events, PerBlock: perBlock,
				// Few enough that most of the run is still to come when it stops.
				Options: kinegate.JudgeOptions{Queue: 8},
				Answered: func(*kinegatev1.VerdictBlock) {
					if answered++; answered == 3 {
						c.stop(l)
					}
				},
			})
			if got := cutOff() - before; got != c.cuts {
				t.Errorf("the server cut off %v streams, not %v", got, c.cuts)
			}
		})
	}
}

// TestSilenceIsFoundInTime: a peer that loses everything without a sign is found within
// 3.5 s, and the stream goes on over a connection of its own.
func TestSilenceIsFoundInTime(t *testing.T) {
	r := start(t)
	const events, perBlock = 2000, 100
	c := learned(t, r, history.AllEntries(), events)
	l := r.gateLine()
	var lost, found time.Time
	verify(t, c, history.Run{
		Client: r.client(t, l.through), Open: history.AllEntries(), Events: events, PerBlock: perBlock,
		Options: kinegate.JudgeOptions{Broken: func(error) { found = time.Now() }},
		Before: func(from int) {
			if from == events/2 {
				lost = time.Now()
				l.swallow()
			}
		},
	})
	if took := found.Sub(lost); took <= 0 || took > 3500*time.Millisecond {
		t.Errorf("found after %v", took)
	}
}

// stuckServer opens streams and beats, and never answers.
type stuckServer struct {
	kinegatev1.UnimplementedSelectionServiceServer

	opened *kinegatev1.JudgeOpened
}

func (s *stuckServer) Judge(stream grpc.BidiStreamingServer[kinegatev1.JudgeRequest, kinegatev1.JudgeResponse]) error {
	response := &kinegatev1.JudgeResponse{Frame: &kinegatev1.JudgeResponse_Opened{Opened: s.opened}}
	for {
		if err := stream.Send(response); err != nil {
			return err
		}
		response = &kinegatev1.JudgeResponse{Frame: &kinegatev1.JudgeResponse_Heartbeat{Heartbeat: &kinegatev1.Heartbeat{}}}
		select {
		case <-stream.Context().Done():
			return nil
		case <-time.After(time.Second):
		}
	}
}

// TestStuckServerIsFound: heartbeats alone do not pass for life.
func TestStuckServerIsFound(t *testing.T) {
	r := start(t)
	const events = 500
	c := learned(t, r, history.AllEntries(), events)
	_, opened := openJudge(t, r, history.AllEntries())
	stuck := &memory{listeners: map[string]*bufconn.Listener{}}
	listener, _ := stuck.listen(t.Context(), "", r.options.GateAddress)
	bare := grpc.NewServer()
	kinegatev1.RegisterSelectionServiceServer(bare, &stuckServer{opened: opened})
	go func() { _ = bare.Serve(listener) }()
	defer bare.Stop()
	l := &line{network: stuck, where: r.options.GateAddress}
	var begun, found time.Time
	verify(t, c, history.Run{
		Client: r.client(t, l.through), Open: history.AllEntries(), Events: events, PerBlock: 100,
		Options: kinegate.JudgeOptions{Broken: func(err error) {
			found = time.Now()
			if !strings.Contains(err.Error(), "stuck") {
				t.Errorf("it broke for another reason: %v", err)
			}
			l.lead(r.network)
		}},
		Before: func(from int) {
			if from == 0 {
				begun = time.Now()
			}
		},
	})
	if took := found.Sub(begun); took <= 0 || took > 3500*time.Millisecond {
		t.Errorf("found after %v", took)
	}
}

// TestHistoryAcrossDrains: servers leave one after the other while a stream goes on.
func TestHistoryAcrossDrains(t *testing.T) {
	a := start(t)
	const events, perBlock = 9000, 100
	c := learned(t, a, history.AllEntries(), events)
	l := a.gateLine()
	b := start(t)
	third := start(t)
	left := make(chan error, 2)
	leave := func(from, to *running) {
		l.lead(to.network)
		go func() { left <- from.Shutdown(context.Background()) }() // the server's own options bound it
	}
	verify(t, c, history.Run{
		Client: a.client(t, l.through), Open: history.AllEntries(), Events: events, PerBlock: perBlock,
		Before: func(from int) {
			switch from {
			case events / 3:
				leave(a, b)
			case 2 * events / 3:
				leave(b, third)
			}
		},
	})
	for range 2 {
		if err := <-left; err != nil {
			t.Errorf("Shutdown: %v", err)
		}
	}
}
