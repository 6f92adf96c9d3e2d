package momentum

import (
	"math"
	"math/rand/v2"
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

// BenchmarkSixPhotonPairMasses computes the 15 pair masses of each of 1000 six-photon
// events; the time of one operation is that of one event.
func BenchmarkSixPhotonPairMasses(b *testing.B) {
	const events, photons = 1000, 6
	energies, directions := photonEvent(events * photons)
	out := make([]float64, PhotonPairCount(photons))
	b.ReportAllocs()
	event := 0
	for b.Loop() {
		at := event * photons
		sinkFloat = PhotonPairMasses(out, energies[at:at+photons], directions[at:at+photons])[0]
		if event++; event == events {
			event = 0
		}
	}
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
