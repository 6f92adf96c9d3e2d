package momentum

import (
	"encoding/binary"
	"math"
	"math/rand/v2"
	"os"
	"syscall"
	"testing"

	"example.org/kinegate/kinematics/num"
)

// Sinks keep results alive, so that the work is not optimised away.
var (
	sinkFloat float64
	sinkFour  Four
	sinkState CollisionState
)

// photonEvent returns n photons with isotropic directions.
func photonEvent(n int) (energies []float64, directions []Three) {
	random := rand.New(rand.NewPCG(3, 4)) //nolint:gosec // benchmark input
	for range n {
		energies = append(energies, 0.1+random.Float64())
		directions = append(directions, FromAngles(1, num.Acos(2*random.Float64()-1), 2*math.Pi*random.Float64()))
	}
	return energies, directions
}

// eventsFile names a file to leave the events in, as float64 rows (E, ux, uy, uz), for the
// same work in other languages.
const eventsFile = "KINEGATE_BENCH_EVENTS"

func leaveEvents(b *testing.B, energies []float64, directions []Three) {
	b.Helper()
	path := os.Getenv(eventsFile)
	if path == "" {
		return
	}
	var rows []byte
	for i, u := range directions {
		for _, x := range []float64{energies[i], u.X, u.Y, u.Z} {
			rows = binary.LittleEndian.AppendUint64(rows, math.Float64bits(x))
		}
	}
	if err := os.WriteFile(path, rows, 0o600); err != nil {
		b.Fatal(err)
	}
}

// BenchmarkSixPhotonPairMasses computes the 15 pair masses of each of 1000 six-photon
// events; the time of one operation is that of one event.
func BenchmarkSixPhotonPairMasses(b *testing.B) {
	const events, photons, passes = 1000, 6, 10
	energies, directions := photonEvent(events * photons)
	leaveEvents(b, energies, directions)
	out := make([]float64, PhotonPairCount(photons))
	b.ReportAllocs()
	event, pass := 0, 0
	least, begun := math.Inf(1), processorTime(b)
	for b.Loop() {
		at := event * photons
		sinkFloat = PhotonPairMasses(out, energies[at:at+photons], directions[at:at+photons])[0]
		if event++; event == events {
			event = 0
			if pass++; pass%passes == 0 {
				now := processorTime(b)
				least, begun = min(least, now-begun), now
			}
		}
	}
	// The least of many passes is what a busy machine leaves unchanged.
	b.ReportMetric(least/(passes*events), "ns-cpu/op")
}

// processorTime is the time that this process has had so far, in ns.
func processorTime(b *testing.B) float64 {
	b.Helper()
	var u syscall.Rusage
	if err := syscall.Getrusage(syscall.RUSAGE_SELF, &u); err != nil {
		b.Fatal(err)
	}
	return float64(u.Utime.Nano() + u.Stime.Nano())
}

func BenchmarkMassSquared(b *testing.B) {
	energies, directions := photonEvent(6)
	var photons []Four
	for i, u := range directions {
		photons = append(photons, Four{u.Scale(energies[i]), energies[i]})
	}
	for _, c := range []struct {
		name    string
		momenta []Four
	}{
		{"two", photons[:2]},
		{"six", photons},
		{"two exact", []Four{photons[0], photons[0]}},
	} {
		b.Run(c.name, func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				sinkFloat = MassSquared(c.momenta...)
			}
		})
	}
}

func BenchmarkOnShellProduct(b *testing.B) {
	_, directions := photonEvent(2)
	x, y := NewOnShell(directions[0], 0.14), NewOnShell(directions[1], 0.14)
	b.ReportAllocs()
	for b.Loop() {
		sinkFloat = x.Product(&y)
	}
}

func BenchmarkBoost(b *testing.B) {
	boost, err := NewBoost(Three{0.1, 0.2, 3}, 0.938)
	if err != nil {
		b.Fatal(err)
	}
	p := WithMass(Three{0.3, -0.2, 0.5}, 0.135)
	b.ReportAllocs()
	for b.Loop() {
		sinkFour = boost.FromRest(p)
	}
}

func BenchmarkTwoBodyMomentum(b *testing.B) {
	b.ReportAllocs()
	for b.Loop() {
		r, err := TwoBodyMomentum(2.1, 1.115683, 0.493677)
		if err != nil {
			b.Fatal(err)
		}
		sinkFloat = r.P
	}
}

func BenchmarkCollideBeams(b *testing.B) {
	b.ReportAllocs()
	for b.Loop() {
		sinkState = CollideBeams(0.000511, 7, 0.000511, 4, 3.06)
	}
}
