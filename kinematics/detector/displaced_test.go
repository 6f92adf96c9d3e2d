package detector_test

import (
	"math"
	"slices"
	"testing"

	"example.org/kinegate/kinematics/detector"
	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/internal/golden"
	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/num"
	"example.org/kinegate/kinematics/num/random"
)

// lambdas is K+ Lambda, Lambda -> p pi-, with a flight that grows with the event's
// number, and a photon from the point of decay.
func lambdas(n int) *event.Truth {
	truth := truthOf(n, func(i int) []particle {
		s := random.New(4, random.Generation, int64(i))
		direction := func(size float64) momentum.Three {
			return at(size, 0.3+2*s.Uniform(), math.Pi*(s.Uniform()-0.5))
		}
		return []particle{
			{number: 321, p: direction(0.8), mass: 0.494}, {number: 2212, p: direction(0.7), mass: 0.938},
			{number: -211, p: direction(0.4), mass: 0.1396}, {number: 22, p: direction(0.5)},
		}
	})
	for i := range n {
		for _, row := range []int{4*i + 1, 4*i + 2, 4*i + 3} {
			truth.Origin.X[row], truth.Origin.Z[row] = 0.01*float64(i)/float64(n), 0.1*float64(i)/float64(n)
		}
	}
	return truth
}

func displacedHall() detector.Config {
	c := hall()
	c.Vertex = &detector.Vertex{SigmaXM: 1e-4, SigmaYM: 1e-4, SigmaZM: 1e-4}
	c.Displaced = &detector.Displaced{MinDistanceM: 0.005, SigmaXM: 5e-4, SigmaYM: 6e-4, SigmaZM: 2e-3, Efficiency: 0.9}
	return c
}

func TestDisplacedVertices(t *testing.T) {
	const n = 4000
	truth := lambdas(n)
	block, labels := measure(t, displacedHall(), truth)
	g := block.Groups
	could, found := 0, 0
	var pulls [3][]float64
	for i := range n {
		first, end := block.Objects(i)
		tracks := 0
		for row := first; row < end; row++ {
			displaced := labels.Particle[row] == 1 || labels.Particle[row] == 2
			if displaced && block.Class[row] != event.Photon {
				tracks++
			}
			if group := g.OfObject[row]; group != 0 && (group != 1 || !displaced) {
				t.Fatalf("event %d: object of particle %d in group %d", i, labels.Particle[row], group)
			}
		}
		z := truth.Origin.Z[4*i+1]
		far := num.Hypot(truth.Origin.X[4*i+1], z) >= 0.005
		if far && tracks == 2 {
			could++
		}
		groups := g.Offsets[i+1] - g.Offsets[i]
		if groups > 0 && (!far || tracks != 2) {
			t.Fatalf("event %d: a vertex from %d tracks, far %v", i, tracks, far)
		}
		if groups == 0 {
			if slices.Max(g.OfObject[first:end:end]) != 0 {
				t.Fatalf("event %d: a group without a vertex", i)
			}
			continue
		}
		found++
		k := int(g.Offsets[i])
		v := g.Covariance.Row(k)
		pulls[0] = append(pulls[0], (g.Position.X[k]-truth.Origin.X[4*i+1])/math.Sqrt(v[0]))
		pulls[1] = append(pulls[1], g.Position.Y[k]/math.Sqrt(v[3]))
		pulls[2] = append(pulls[2], (g.Position.Z[k]-z)/math.Sqrt(v[5]))
	}
	near(t, "displaced vertices", found, could, 0.9)
	for _, values := range pulls {
		checkNormal(t, values)
	}
	if found < n/2 {
		t.Errorf("only %d vertices of %d", found, n)
	}
}

func TestGoldenDisplaced(t *testing.T) {
	block, _ := measure(t, displacedHall(), lambdas(500))
	golden.Check(t, "displaced", func(d *golden.Digest) {
		d.Section("groups")
		for _, group := range block.Groups.OfObject {
			d.Int(int64(group))
		}
		for _, column := range [][]float64{
			block.Groups.Position.X, block.Groups.Position.Y, block.Groups.Position.Z, block.Groups.Covariance.Packed,
		} {
			d.Float(column...)
		}
	})
}

func TestPolarisationIsCarried(t *testing.T) {
	truth := events(3)
	for range 3 {
		truth.Polarise(0.8, 0.3, -0.2)
	}
	block, _ := measure(t, hall(), truth)
	want := []float64{0.8, 0.8, 0.8}
	if p := block.Polarisation; p == nil || !slices.Equal(p.Linear, want) || p.PlaneRad[2] != 0.3 || p.Circular[0] != -0.2 {
		t.Errorf("polarisation %+v", p)
	}
}
