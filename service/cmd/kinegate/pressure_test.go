package main

import (
	"context"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"strconv"
	"strings"
	"sync"
	"sync/atomic"
	"syscall"
	"testing"
	"time"

	"google.golang.org/grpc"
	"google.golang.org/protobuf/proto"

	"example.org/kinegate/clients/go/history"
	"example.org/kinegate/proto/column"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/api"
)

// memoryGroup makes a control group with a memory limit and returns its folder with the
// names of its files for the most memory used. Only root can.
func memoryGroup(t *testing.T, limit int) (folder, peakFile string) {
	t.Helper()
	for _, v := range []struct{ root, limit, peak string }{
		{"/sys/fs/cgroup/memory", "memory.limit_in_bytes", "memory.max_usage_in_bytes"},
		{"/sys/fs/cgroup", "memory.max", "memory.peak"},
	} {
		folder := filepath.Join(v.root, "kinegate-test-"+strconv.Itoa(os.Getpid()))
		if os.Mkdir(folder, 0o755) != nil { //nolint:gosec // the kernel's own folder
			continue
		}
		t.Cleanup(func() { _ = os.Remove(folder) })
		if os.WriteFile(filepath.Join(folder, v.limit), []byte(strconv.Itoa(limit)), 0o600) == nil {
			return folder, filepath.Join(folder, v.peak)
		}
	}
	t.Skip("NOT MEASURED: no control group for memory can be made here")
	return "", ""
}

// TestMemoryOfGroup runs a server in a control group of 256 MiB under the worst mix that
// its limits allow: it is not killed, stays below 95 %, refuses instead of stalling, and
// does not spend its time collecting. PRESSURE_SPAN is how long, a minute by default.
func TestMemoryOfGroup(t *testing.T) {
	operations(t)
	const limit = 256 << 20
	span := spanOf(t, "PRESSURE_SPAN", time.Minute)
	group, peakFile := memoryGroup(t, limit)
	self := process(t, onLoopback("--drain-notice", "0s", "--drain-time", "5s", "--caller-calls", "128", "--log-burst", "1")...)
	p := exec.CommandContext(t.Context(), "sh", append([]string{"-c", `echo $$ >"$0/cgroup.procs"; exec "$@"`, group, self.Path}, self.Args[1:]...)...) //nolint:gosec // the test binary itself
	p.Env = append(self.Env, "GODEBUG=gctrace=1")
	log, err := os.Create(filepath.Join(t.TempDir(), "log"))
	if err != nil {
		t.Fatal(err)
	}
	defer func() { _ = log.Close() }()
	p.Stderr = log
	if err := p.Start(); err != nil {
		t.Fatal(err)
	}
	where := listening(t, log.Name())
	ctx, cancel := context.WithTimeout(t.Context(), span)
	defer cancel()
	var answered, refused, other atomic.Int64
	var worst atomic.Int64
	count := func(begun time.Time, err error) {
		took := int64(time.Since(begun))
		switch {
		case err == nil:
			answered.Add(1)
		case isReason(err, api.ServerOverloaded):
			refused.Add(1)
		case ctx.Err() == nil:
			other.Add(1)
		}
		if ctx.Err() == nil && took > worst.Load() {
			worst.Store(took)
		}
	}
	var all sync.WaitGroup
	again := func(n int, do func(ctx context.Context, conn *grpc.ClientConn) error) {
		for range n {
			conn := dial(t, where["general"])
			all.Go(func() {
				for ctx.Err() == nil {
					begun := time.Now()
					count(begun, do(ctx, conn))
				}
			})
		}
	}
	block := largeBlock()
	again(96, func(ctx context.Context, conn *grpc.ClientConn) error {
		_, err := kinegatev1.NewSelectionServiceClient(conn).JudgeBlock(ctx, &kinegatev1.JudgeBlockRequest{
			Selection: history.AllEntries().GetSelection(), Entries: kinegatev1.EntryDetail_ENTRY_DETAIL_ALL, Block: block,
		})
		return err
	})
	again(4, func(ctx context.Context, conn *grpc.ClientConn) error {
		_, err := kinegatev1.NewReactionServiceClient(conn).ListOpenChannels(ctx, &kinegatev1.ListOpenChannelsRequest{
			InitialParticles: []string{"gamma", "p"}, MaxBodyCount: 5, PageSize: 1000,
			InitialState: &kinegatev1.InitialState{Kind: &kinegatev1.InitialState_SqrtSGev{SqrtSGev: 3}},
		})
		return err
	})
	again(8, func(ctx context.Context, conn *grpc.ClientConn) error {
		stream, err := kinegatev1.NewGenerationServiceClient(conn).GenerateEvents(ctx, manyEvents())
		for err == nil {
			_, err = stream.Recv()
		}
		if strings.Contains(err.Error(), "EOF") {
			return nil
		}
		return err
	})
	stalled := 0
	for ; stalled < 16; stalled++ {
		stream, _, err := stalledStream(t, where["gate"])
		if err != nil {
			break
		}
		all.Go(func() {
			for i := 0; ctx.Err() == nil; i++ {
				b := history.Photons(4000*i, 4000)
				b.Sequence = int64(i)
				if stream.Send(&kinegatev1.JudgeRequest{Frame: &kinegatev1.JudgeRequest_Block{Block: b}}) != nil {
					return
				}
			}
		})
	}
	most := int64(0)
	for ctx.Err() == nil {
		most = max(most, resident(t, p.Process.Pid, "VmRSS"))
		time.Sleep(20 * time.Millisecond)
	}
	all.Wait()
	peak, _ := os.ReadFile(peakFile) // for information: it counts the cache too
	_ = p.Process.Signal(syscall.SIGTERM)
	if code := exitCode(t, p.Wait()); code != 0 {
		t.Errorf("exit code %d", code)
	}
	text, err := os.ReadFile(log.Name())
	if err != nil {
		t.Fatal(err)
	}
	collecting := -1
	if found := gcShare.FindAllStringSubmatch(string(text), -1); len(found) > 0 {
		collecting, _ = strconv.Atoi(found[len(found)-1][1])
	}
	t.Logf("FIGURE V7 %v in 256 MiB, blocks of %d bytes, %d stalled streams beside the load: RSS at most %.0f %% (group %s bytes), %d answered, %d refused, %d other, slowest %.1f s, %d %% of the time collecting",
		span, proto.Size(block), stalled, 100*float64(most)/limit, strings.TrimSpace(string(peak)), answered.Load(), refused.Load(), other.Load(),
		time.Duration(worst.Load()).Seconds(), collecting)
	if most > limit*95/100 || collecting < 0 || collecting > 25 || answered.Load() == 0 {
		t.Errorf("RSS %d, %d %% collecting, %d answered", most, collecting, answered.Load())
	}
}

// largeBlock is a block not far below the limit: measured events with everything that a
// block can say of them, whether or not the selection asks for it.
func largeBlock() *kinegatev1.EventBlock {
	const events = 4096
	block := history.Measured(0, events)
	objects, variances := len(block.GetObjectClasses()), make([]float64, 0, 6*events)
	for range events {
		variances = append(variances, 1e-6, 0, 0, 1e-6, 0, 1e-6)
	}
	zeros := func(n int) []byte { return column.Float64(make([]float64, n)) }
	block.ClusterPosition = &kinegatev1.ClusterPositionColumns{XM: zeros(objects), YM: zeros(objects), ZM: zeros(objects)}
	block.Vertex = &kinegatev1.VertexColumns{XM: zeros(events), YM: zeros(events), ZM: zeros(events), CovarianceM2: column.Float64(variances)}
	return block
}

// gcShare is the share of time that the runtime's trace says was spent collecting so far.
var gcShare = regexp.MustCompile(`(?m)^gc \d+ @[0-9.]+s (\d+)%`)

// listening waits for the lines of a log file that say where a server listens.
func listening(t *testing.T, path string) map[string]string {
	t.Helper()
	line := regexp.MustCompile(`listening for (\w+) at ([0-9.:]+)`)
	for end := time.Now().Add(20 * time.Second); time.Now().Before(end); time.Sleep(10 * time.Millisecond) {
		text, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		if found := line.FindAllStringSubmatch(string(text), -1); len(found) >= 4 {
			where := map[string]string{}
			for _, f := range found {
				where[f[1]] = f[2]
			}
			return where
		}
	}
	t.Fatal("the server does not listen")
	return nil
}

// manyEvents asks for a slice that takes seconds.
func manyEvents() *kinegatev1.GenerateEventsRequest {
	return &kinegatev1.GenerateEventsRequest{
		EventCount: 100_000,
		Generation: &kinegatev1.Generation{
			InitialState: &kinegatev1.GenerationInitialState{Kind: &kinegatev1.GenerationInitialState_BeamOnTarget{
				BeamOnTarget: &kinegatev1.SpectrumOnTarget{Beam: &kinegatev1.BeamSpectrum{
					Kind: &kinegatev1.BeamSpectrum_Even{Even: &kinegatev1.EnergyRange{MinGev: 1.2, MaxGev: 2.4}},
				}},
			}},
			Channels: []*kinegatev1.GenerationChannel{{Reaction: "gamma p -> p omega, omega -> pi0 gamma, pi0 -> gamma gamma"}},
		},
	}
}
