package main

import (
	"encoding/binary"
	"math"
	"math/rand/v2"
	"os"
	"os/exec"
	"strconv"
	"strings"
	"syscall"
	"testing"
	"time"

	kinegate "example.org/kinegate/clients/go"
	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/particle"
	"example.org/kinegate/kinematics/selection"
	"example.org/kinegate/proto/column"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// sixPhotons are events of six photons from three neutral pions, dealt.
func sixPhotons(events int) *event.Block {
	const mass = 0.1349768
	r := rand.New(rand.NewPCG(5, 6)) //nolint:gosec // a test needs a seed, no secret
	direction := func() momentum.Three {
		return momentum.Three{X: r.NormFloat64(), Y: r.NormFloat64(), Z: r.NormFloat64()}
	}
	b := &event.Block{ObjectOffsets: []int32{0}, Coordinates: event.Coordinates{Kind: event.MomentumAngles}}
	for i := range events {
		var photons []momentum.Three
		for range 3 {
			boost, err := momentum.NewBoost(direction().Scale(0.3), mass)
			if err != nil {
				return nil
			}
			u := direction().Unit().Scale(mass / 2)
			for _, d := range []momentum.Three{u, u.Neg()} {
				photons = append(photons, boost.FromRest(momentum.Four{P: d, E: mass / 2}).P)
			}
		}
		r.Shuffle(len(photons), func(i, j int) { photons[i], photons[j] = photons[j], photons[i] })
		for _, p := range photons {
			for k, x := range []float64{p.Norm(), p.Theta(), p.Phi()} {
				b.Coordinates.Columns[k] = append(b.Coordinates.Columns[k], x)
			}
			b.Class = append(b.Class, event.Photon)
		}
		b.EventIDs = append(b.EventIDs, int64(i))
		b.ObjectOffsets = append(b.ObjectOffsets, int32(len(b.Class)))
	}
	return b
}

// message is the block as it is sent.
func message(b *event.Block) *kinegatev1.EventBlock {
	return &kinegatev1.EventBlock{
		EventIds: column.Int64(b.EventIDs), ObjectOffsets: column.Int32(b.ObjectOffsets), ObjectClasses: column.Uint8(b.Class),
		Coordinates: &kinegatev1.EventBlock_MomentumAngles{MomentumAngles: &kinegatev1.MomentumAnglesColumns{
			MomentumGev: column.Float64(b.Coordinates.Columns[0]), ThetaRad: column.Float64(b.Coordinates.Columns[1]),
			PhiRad: column.Float64(b.Coordinates.Columns[2]),
		}},
	}
}

// Three pions with a window on the mass of each, for the core and for the server.
const threePions = "eta -> pi0 pi0 pi0, pi0 -> gamma gamma"

func pairProgram(b *testing.B) *selection.Program {
	b.Helper()
	minimum, maximum := 0.11, 0.16
	h := selection.Hypothesis{Name: "pions", Reaction: threePions, Condition: &selection.Condition{}}
	for i := range 3 {
		h.Condition.AllOf = append(h.Condition.AllOf, selection.Condition{Window: &selection.Window{
			Observable: selection.InvariantMass, Products: []string{"pi0[" + strconv.Itoa(i) + "]"}, Min: &minimum, Max: &maximum,
		}})
	}
	table, err := particle.New()
	if err != nil {
		b.Fatal(err)
	}
	program, err := selection.Compile(&selection.Selection{Name: "pions", Hypotheses: []selection.Hypothesis{h}}, table)
	if err != nil {
		b.Fatal(err)
	}
	return program
}

func pairSelection() *kinegatev1.Selection {
	h := &kinegatev1.Hypothesis{Name: "pions", Reaction: threePions, Condition: &kinegatev1.Condition{}}
	for i := range 3 {
		h.Condition.AllOf = append(h.Condition.AllOf, &kinegatev1.Condition{Window: &kinegatev1.Window{
			Observable: &kinegatev1.Window_InvariantMass{InvariantMass: &kinegatev1.MassWindow{
				Products: []string{"pi0[" + strconv.Itoa(i) + "]"}, MinGev: new(0.11), MaxGev: new(0.16),
			}},
		}})
	}
	return &kinegatev1.Selection{Name: "pions", Hypotheses: []*kinegatev1.Hypothesis{h}}
}

// gate is a server process with a client of its gate.
type gate struct {
	process *exec.Cmd
	where   map[string]string
	client  *kinegate.Client
}

func startGate(t testing.TB, more ...string) *gate {
	t.Helper()
	p, where := startServing(t, append(more, "--drain-notice", "0s")...)
	t.Cleanup(func() {
		_ = p.Process.Kill()
		_ = p.Wait()
	})
	g := &gate{process: p, where: where}
	var err error
	if g.client, err = kinegate.Dial(g.where["gate"], kinegate.Options{}); err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { _ = g.client.Close() })
	return g
}

// cpu is the processor time of the server so far, to a hundredth of a second.
func (g *gate) cpu(t testing.TB) time.Duration {
	t.Helper()
	const tick = 10 * time.Millisecond // USER_HZ is 100 on every Linux
	data, err := os.ReadFile("/proc/" + strconv.Itoa(g.process.Process.Pid) + "/stat")
	if err != nil {
		t.Skip("no /proc")
	}
	fields := strings.Fields(string(data[strings.LastIndexByte(string(data), ')')+1:]))
	sum := 0
	for _, field := range fields[11:13] {
		n, err := strconv.Atoi(field)
		if err != nil {
			t.Fatal(err)
		}
		sum += n
	}
	return time.Duration(sum) * tick
}

// ownCPU is the processor time of this process so far.
func ownCPU(t testing.TB) time.Duration {
	t.Helper()
	var u syscall.Rusage
	if err := syscall.Getrusage(syscall.RUSAGE_SELF, &u); err != nil {
		t.Fatal(err)
	}
	return time.Duration(u.Utime.Nano() + u.Stime.Nano())
}

// BenchmarkJudgeStream compares the processor time of a server with that of the same
// judging in process: six photons, windows on pair masses, blocks of 1,000. The two
// alternate, so that both see the same machine.
func BenchmarkJudgeStream(b *testing.B) {
	const perBlock, blocks = 1000, 200
	block := sixPhotons(perBlock)
	g := startGate(b)
	stream, err := g.client.Judge(b.Context(), &kinegatev1.JudgeOpen{
		Selection: &kinegatev1.SelectionSource{Source: &kinegatev1.SelectionSource_Given{Given: pairSelection()}},
	}, kinegate.JudgeOptions{})
	if err != nil {
		b.Fatal(err)
	}
	defer stream.Close()
	worker := pairProgram(b).NewWorker(selection.NoEntries)
	var out event.VerdictBlock
	var server, inProcess, elapsed time.Duration
	for b.Loop() {
		begun, wall := g.cpu(b), time.Now()
		go func() {
			for range blocks {
				_ = stream.Send(message(block))
			}
		}()
		for range blocks {
			v, err := stream.Recv()
			if err != nil {
				b.Fatal(err)
			}
			if v.GetRejected() != nil {
				b.Fatal(v)
			}
		}
		server += g.cpu(b) - begun
		elapsed += time.Since(wall)
		own := ownCPU(b)
		for range blocks {
			worker.Reset(&out)
			worker.Judge(block, 0, perBlock, &out)
		}
		inProcess += ownCPU(b) - own
	}
	events := float64(b.N * blocks * perBlock)
	b.ReportMetric(float64(server)/float64(inProcess), "x-in-process")
	b.ReportMetric(float64(server)/events, "ns-server/event")
	b.ReportMetric(float64(inProcess)/events, "ns-in-process/event")
	b.ReportMetric(events/elapsed.Seconds(), "events/s")
}

// BenchmarkJudgeInProcess judges the events of BenchmarkJudgeStream in this process and
// reports the least processor time of several passes. It leaves them in the file named by
// KINEGATE_BENCH_EVENTS, as rows (E, theta, phi), for references in other languages.
func BenchmarkJudgeInProcess(b *testing.B) {
	const events, passes = 1000, 20
	block := sixPhotons(events)
	if file := os.Getenv("KINEGATE_BENCH_EVENTS"); file != "" {
		var rows []byte
		for i := range block.Class {
			for _, column := range block.Coordinates.Columns[:3] {
				rows = binary.LittleEndian.AppendUint64(rows, math.Float64bits(column[i]))
			}
		}
		if err := os.WriteFile(file, rows, 0o600); err != nil {
			b.Fatal(err)
		}
	}
	worker := pairProgram(b).NewWorker(selection.NoEntries)
	var out event.VerdictBlock
	least := time.Duration(math.MaxInt64)
	for b.Loop() {
		begun := ownCPU(b)
		for range passes {
			worker.Reset(&out)
			worker.Judge(block, 0, events, &out)
		}
		least = min(least, ownCPU(b)-begun)
	}
	accepted := 0
	for i := range events {
		if out.Gate.Get(i) {
			accepted++
		}
	}
	b.ReportMetric(float64(least)/(passes*events), "ns-cpu/event")
	b.ReportMetric(float64(accepted), "accepted")
}
