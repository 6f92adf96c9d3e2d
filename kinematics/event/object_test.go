package event_test

import (
	"math"
	"testing"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/momentum"
)

// every writes one momentum with mass 0.5 in every coordinate set.
func every(p momentum.Three) map[event.Kind]event.Coordinates {
	size := math.Sqrt(p.X*p.X + p.Y*p.Y + p.Z*p.Z)
	pt := math.Hypot(p.X, p.Y)
	phi := math.Atan2(p.Y, p.X)
	columns := map[event.Kind][]float64{
		event.EnergyMomentum:     {p.X, p.Y, p.Z, math.Sqrt(size*size + 0.25)},
		event.MomentumMass:       {p.X, p.Y, p.Z, 0.5},
		event.TransverseMomentum: {pt, math.Asinh(p.Z / pt), phi, 0.5},
		event.MomentumAngles:     {size, math.Atan2(pt, p.Z), phi},
		event.MomentumSlopes:     {size, p.X / p.Z, p.Y / p.Z},
	}
	sets := map[event.Kind]event.Coordinates{}
	for kind, values := range columns {
		c := event.Coordinates{Kind: kind}
		for i, v := range values {
			c.Columns[i] = []float64{v}
		}
		sets[kind] = c
	}
	return sets
}

// All sets describe the same momentum; each conversion costs a few roundings of
// its largest component, 8 of them at most here.
func TestSetsAgree(t *testing.T) {
	p := momentum.Three{X: 0.3, Y: -0.4, Z: 1.2}
	const size = 1.3
	near := func(a, b momentum.Three, scale float64) bool {
		bound := 8 * 0x1p-52 * scale
		return math.Abs(a.X-b.X) <= bound && math.Abs(a.Y-b.Y) <= bound && math.Abs(a.Z-b.Z) <= bound
	}
	for kind, c := range every(p) {
		t.Run(kind.String(), func(t *testing.T) {
			if got := c.Momentum(0); !near(got, p, size) {
				t.Errorf("momentum %v, want %v", got, p)
			}
			if got := c.Direction(0); !near(got, momentum.Three{X: p.X / size, Y: p.Y / size, Z: p.Z / size}, 1) {
				t.Errorf("direction %v", got)
			}
			want := math.Sqrt(size*size + 0.01)
			if got := c.WithMass(0, 0.1); math.Abs(got.E-want) > 8*0x1p-52*want {
				t.Errorf("energy under a hypothesis %v, want %v", got.E, want)
			}
			given, ok := c.AsGiven(0)
			if stated := kind.Columns() == 4; ok != stated {
				t.Fatalf("states an energy or mass: %v, want %v", ok, stated)
			}
			want = math.Sqrt(size*size + 0.25)
			if ok && math.Abs(given.E-want) > 8*0x1p-52*want {
				t.Errorf("energy as given %v, want %v", given.E, want)
			}
		})
	}
	unknown := event.Coordinates{Kind: 99}
	if p := unknown.Momentum(0); !math.IsNaN(p.X) {
		t.Errorf("an unknown set has the momentum %v", p)
	}
}
