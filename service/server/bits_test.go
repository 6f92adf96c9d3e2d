package server

import (
	"crypto/sha256"
	"flag"
	"fmt"
	"os"
	"runtime"
	"sync/atomic"
	"testing"
	"time"

	kinegate "example.org/kinegate/clients/go"
	"example.org/kinegate/clients/go/history"
	"example.org/kinegate/kinematics"
	"example.org/kinegate/proto/column"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// TestBitsDoNotDependOnBlocksOrWorkers judges the sample in blocks of several sizes,
// with one worker and with several to a block.
func TestBitsDoNotDependOnBlocksOrWorkers(t *testing.T) {
	before := runtime.GOMAXPROCS(0)
	defer runtime.GOMAXPROCS(before)
	for _, workers := range []int{1, 4} {
		runtime.GOMAXPROCS(workers)
		r := start(t)
		for _, perBlock := range []int{1, 7, 1000, 4096} {
			t.Run(fmt.Sprintf("%d workers, blocks of %d", workers, perBlock), func(t *testing.T) {
				events := min(9000, 400*perBlock)
				runtime.GOMAXPROCS(1)
				c := learned(t, r, history.AllEntries(), events)
				runtime.GOMAXPROCS(workers)
				verify(t, c, history.Run{Client: r.client(t), Open: history.AllEntries(), Events: events, PerBlock: perBlock})
			})
		}
	}
}

// TestBitsOfFits does the same with constrained fits, and breaks the connection meanwhile.
func TestBitsOfFits(t *testing.T) {
	before := runtime.GOMAXPROCS(0)
	defer runtime.GOMAXPROCS(before)
	for _, workers := range []int{1, 4} {
		runtime.GOMAXPROCS(workers)
		r := start(t)
		for _, perBlock := range []int{1, 7, 1000} {
			t.Run(fmt.Sprintf("%d workers, blocks of %d", workers, perBlock), func(t *testing.T) {
				events := min(3000, 200*perBlock)
				runtime.GOMAXPROCS(1)
				c, err := history.Learn(t.Context(), r.client(t), history.FittedEntries(), history.Measured, events)
				if err != nil {
					t.Fatal(err)
				}
				runtime.GOMAXPROCS(workers)
				l := r.gateLine()
				fits := 0
				verify(t, c, history.Run{
					Client: r.client(t, l.through), Open: history.FittedEntries(), Sample: history.Measured, Events: events, PerBlock: perBlock,
					Before: func(from int) {
						if from == events/2/perBlock*perBlock {
							l.cut()
						}
					},
					Answered: func(v *kinegatev1.VerdictBlock) {
						for _, status := range v.GetEntries().GetFits().GetStatuses() {
							if kinegatev1.FitStatus(status) == kinegatev1.FitStatus_FIT_STATUS_CONVERGED {
								fits++
							}
						}
					},
				})
				if fits < events/20 {
					t.Errorf("only %d fits of %d events converged", fits, events)
				}
			})
		}
	}
}

var update = flag.Bool("update", false, "rewrite testdata/golden/verdicts.txt, after the version of the numerics was raised")

// TestGoldenVerdicts compares what streams say about the samples, without and with fits,
// with digests that are the same on every architecture.
func TestGoldenVerdicts(t *testing.T) {
	const file = "testdata/golden/verdicts.txt"
	r := start(t)
	got := digest(t, r, history.AllEntries(), history.Photons) + digest(t, r, history.FittedEntries(), history.Measured)
	if *update {
		writeFile(t, file, []byte(got))
	}
	want, err := os.ReadFile(file)
	if err != nil || got != string(want) {
		t.Errorf("got %swant %s%v", got, want, err)
	}
}

// digest is a line on the verdicts about a sample.
func digest(t *testing.T, r *running, open *kinegatev1.JudgeOpen, sample history.Sample) string {
	t.Helper()
	const events = 3000
	sum, accepted := sha256.New(), 0
	verify(t, history.New(open), history.Run{
		Client: r.client(t), Open: open, Sample: sample, Events: events, PerBlock: 500,
		Answered: func(v *kinegatev1.VerdictBlock) {
			records, err := history.Records(v, int(v.GetEventCount()))
			if err != nil {
				t.Error(err)
			}
			for _, record := range records {
				sum.Write([]byte(record))
			}
			for i := range int(v.GetEventCount()) {
				if column.Bit(v.GetGate(), i) {
					accepted++
				}
			}
		},
	})
	if accepted < events/100 || accepted > events/2 {
		t.Errorf("the sample tells little: %d accepted", accepted)
	}
	return fmt.Sprintf("%s: numerics %d, %d events, %d accepted, sha256 %x\n",
		open.GetSelection().GetGiven().GetName(), kinematics.NumericsVersion, events, accepted, sum.Sum(nil))
}

// TestUnaryAndStreamAgree: JudgeBlock says what the stream says.
func TestUnaryAndStreamAgree(t *testing.T) {
	r := start(t)
	const events = 1000
	open := history.AllEntries()
	c := learned(t, r, open, events)
	block := history.Photons(0, events)
	c.Sent(block)
	reply, err := kinegatev1.NewSelectionServiceClient(r.general(t)).JudgeBlock(t.Context(), &kinegatev1.JudgeBlockRequest{
		Selection: open.GetSelection(), Entries: open.GetEntries(), Block: block,
	})
	if err != nil {
		t.Fatal(err)
	}
	c.Answered(reply.GetVerdict())
	if faults := c.Faults(true); len(faults) > 0 {
		t.Error(faults)
	}
}

// TestOverloadIsSaid: with more work than the latency budget allows, each event is
// still answered, judged or EXPIRED, and those judged have their bits. The clock goes
// on by 0.1 ms at each look, of which there is at least one in 64 events.
func TestOverloadIsSaid(t *testing.T) {
	var looks atomic.Int64
	r := start(t, func(_ *Options, d *Deps) {
		d.Now = func() time.Time { return time.Unix(0, 0).Add(time.Duration(looks.Add(1)) * 100 * time.Microsecond) }
	})
	const events = 40000
	c := learned(t, r, history.AllEntries(), events)
	open := history.AllEntries()
	open.LatencyBudgetS = new(0.004)
	verify(t, c, history.Run{
		Client: r.client(t), Open: open, Events: events, PerBlock: 4000, Options: kinegate.JudgeOptions{Queue: 1},
	})
	counts := c.Counts()
	if counts.Expired == 0 || counts.Expired == events || counts.Answered != events {
		t.Errorf("%+v", counts)
	}
}
