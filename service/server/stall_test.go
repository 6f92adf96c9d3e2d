package server

import (
	"context"
	"errors"
	"io"
	"net"
	"testing"
	"time"

	"google.golang.org/grpc"
	"google.golang.org/grpc/credentials/insecure"

	"example.org/kinegate/clients/go/history"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/api"
)

// narrowDial connects with static windows of 64 KiB, so that a client that does not
// read blocks the server soon. Closed receives the end of the connection.
func (r *running) narrowDial(t testing.TB) (conn *grpc.ClientConn, closed <-chan struct{}) {
	t.Helper()
	const window = 64 << 10
	gone := make(chan struct{}, 16)
	conn, err := grpc.NewClient("passthrough:memory", grpc.WithTransportCredentials(insecure.NewCredentials()),
		grpc.WithStaticStreamWindowSize(window), grpc.WithStaticConnWindowSize(window),
		grpc.WithContextDialer(func(ctx context.Context, _ string) (net.Conn, error) {
			c, err := r.network.dial(ctx, r.options.GateAddress)
			if err != nil {
				return nil, err
			}
			return &watched{Conn: c, gone: gone}, nil
		}))
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { _ = conn.Close() })
	return conn, gone
}

// watched is a connection that tells when the peer has closed it.
type watched struct {
	net.Conn

	gone chan struct{}
}

func (w *watched) Read(p []byte) (int, error) {
	n, err := w.Conn.Read(p)
	if err != nil {
		select {
		case w.gone <- struct{}{}:
		default:
		}
	}
	return n, err
}

// stalled opens a stream on a connection, fills its credit with blocks whose verdicts
// are large, and never reads on.
func stalled(t testing.TB, conn *grpc.ClientConn) judgeClient {
	t.Helper()
	stream, err := kinegatev1.NewSelectionServiceClient(conn).Judge(t.Context())
	if err != nil {
		t.Fatal(err)
	}
	if err := stream.Send(&kinegatev1.JudgeRequest{Frame: &kinegatev1.JudgeRequest_Open{Open: history.AllEntries()}}); err != nil {
		t.Fatal(err)
	}
	if response, err := stream.Recv(); err != nil || response.GetOpened() == nil {
		t.Fatalf("%v, %v", response, err)
	}
	go func() {
		for i := range int64(8) {
			block := history.Photons(int(i)*4000, 4000)
			block.Sequence = i
			if stream.Send(&kinegatev1.JudgeRequest{Frame: &kinegatev1.JudgeRequest_Block{Block: block}}) != nil {
				return
			}
		}
	}()
	return stream
}

// TestStalledReaderLosesItsConnection: a caller that takes nothing for 5 s is cut off
// within 6, and the server can leave at once.
func TestStalledReaderLosesItsConnection(t *testing.T) {
	r := start(t)
	conn, gone := r.narrowDial(t)
	begun := time.Now()
	stalled(t, conn)
	select {
	case <-gone:
	case <-time.After(10 * time.Second):
		t.Fatal("the connection stays")
	}
	if took := time.Since(begun); took < 4500*time.Millisecond || took > 6*time.Second {
		t.Errorf("cut off after %v", took)
	}
	eventually(t, "counted", func() bool {
		return r.metric(t, "kinegate_judge_streams_closed_total", string(api.StreamStalled)) == 1 &&
			r.metric(t, "kinegate_judge_credit_bytes") == 0
	})
	if err := r.Shutdown(t.Context()); err != nil {
		t.Errorf("Shutdown: %v", err)
	}
}

// TestStalledReaderBehindProxy ends alone: another stream of its connection goes on.
func TestStalledReaderBehindProxy(t *testing.T) {
	r := start(t, func(o *Options, _ *Deps) { o.BehindProxy, o.StallLimit = true, time.Second })
	conn := r.dial(t, r.options.GateAddress)
	other, err := kinegatev1.NewSelectionServiceClient(conn).Judge(t.Context())
	if err != nil {
		t.Fatal(err)
	}
	send(t, other, &kinegatev1.JudgeRequest{Frame: &kinegatev1.JudgeRequest_Open{Open: history.AllEntries()}})
	stalled(t, conn)
	eventually(t, "the stalled stream ended", func() bool {
		return r.metric(t, "kinegate_judge_streams_closed_total", string(api.StreamStalled)) == 1
	})
	block := history.Photons(0, 10)
	sendBlock(t, other, block)
	if v, err := nextVerdict(other); err != nil || v.GetEventCount() != 10 {
		t.Errorf("the other stream: %v, %v", v, err)
	}
}

// TestWriterWithoutReader writes 64 MiB before the first read: no send waits longer than
// a second, the end is a clear answer or a closed connection, and what comes out is true.
func TestWriterWithoutReader(t *testing.T) {
	r := start(t)
	const perBlock = 4000
	c := learned(t, r, history.AllEntries(), 8*perBlock)
	for name, entries := range map[string]kinegatev1.EntryDetail{
		"large replies": kinegatev1.EntryDetail_ENTRY_DETAIL_ALL, "small replies": kinegatev1.EntryDetail_ENTRY_DETAIL_NONE,
	} {
		t.Run(name, func(t *testing.T) {
			conn, _ := r.narrowDial(t)
			stream, err := kinegatev1.NewSelectionServiceClient(conn).Judge(t.Context())
			if err != nil {
				t.Fatal(err)
			}
			open := history.AllEntries()
			open.Entries = entries
			send(t, stream, &kinegatev1.JudgeRequest{Frame: &kinegatev1.JudgeRequest_Open{Open: open}})
			bytes, longest := writeAll(t, stream, 64<<20, perBlock, c)
			if longest > time.Second*slowdown {
				t.Errorf("one send took %v", longest)
			}
			t.Logf("FIGURE S1 %s: %d bytes written, the longest send took %v", name, bytes, longest)
			for {
				v, err := nextVerdict(stream)
				if errors.Is(err, io.EOF) {
					break
				}
				if err != nil {
					t.Logf("the stream ends with %v", err)
					break
				}
				if entries == kinegatev1.EntryDetail_ENTRY_DETAIL_ALL {
					c.Answered(v)
				}
			}
			if faults := c.Faults(false); len(faults) > 0 {
				t.Error(faults)
			}
		})
	}
}

// writeAll sends blocks until so many bytes are out or the stream has ended.
func writeAll(t *testing.T, stream judgeClient, most, perBlock int, c *history.Checker) (bytes int, longest time.Duration) {
	t.Helper()
	for i := int64(0); bytes < most; i++ {
		block := history.Photons(int(i)*perBlock, perBlock)
		block.Sequence = i
		c.Sent(block)
		begun := time.Now()
		err := stream.Send(&kinegatev1.JudgeRequest{Frame: &kinegatev1.JudgeRequest_Block{Block: block}})
		longest = max(longest, time.Since(begun))
		if err != nil {
			return bytes, longest
		}
		bytes += 25*4*perBlock + 12*perBlock
	}
	return bytes, longest
}
