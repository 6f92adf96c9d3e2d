package generation

import "math"

// A roof bounds the weights of a group with broad particles: roof[i] those at all
// excess energies up to its point i.
type roof struct {
	high float64 // the largest excess energy above the lowest masses
	tops []float64
}

// The points of a roof, dense towards zero like those of resonance.grid, and the slots
// into which it divides the excess energy.
const (
	roofPoints = 400
	roofSlots  = 48
)

// newRoof bounds the weights of a group for total masses up to high. The excess
// energy T is what the masses of broad particles have above their lowest ones, S,
// and the kinetic energy t = T - S. So the weight is at most the largest, over S,
// of line shapes that share S and phase space with t: smaller by orders of magnitude
// than with all of T for each of them. It grows with T, as phase space does at fixed
// masses, and so does the bound.
func newRoof(g *group, nodes []node, high float64, stop func() bool) *roof {
	made := &roof{high: high - g.floors, tops: make([]float64, roofPoints+1)}
	for i := 1; i <= roofPoints && !stop(); i++ {
		x := float64(i) / roofPoints
		t := float64(made.high * (x * x * x * x))
		made.tops[i] = max(made.tops[i-1], min(g.looseCeiling(nodes, g.floors+t), g.sharedCeiling(nodes, t)))
	}
	return made
}

// at is the bound at an excess energy not above high.
func (r *roof) at(excess float64) float64 {
	x := math.Sqrt(math.Sqrt(max(excess, 0) / r.high))
	return r.tops[min(int(x*roofPoints)+1, roofPoints)]
}

// sharedCeiling bounds the weight for an excess energy that line shapes and phase
// space share.
func (g *group) sharedCeiling(nodes []node, excess float64) float64 {
	const slot = 1.0 / roofSlots
	// shapes[k] bounds the product of line shapes for S below k + 1 slots.
	var shapes, next, own [roofSlots]float64
	for k := range shapes {
		shapes[k] = 1
	}
	spans := 1.0
	for _, row := range g.rows {
		r := nodes[row].resonance
		if r == nil {
			continue
		}
		spans *= r.span(r.low+excess) / math.Pi
		for k := range own {
			own[k] = r.top(r.low + float64(excess*(float64(k+1)*slot)))
		}
		for k := range next {
			next[k] = 0
			for i := range k + 1 { // its own part of S is in slot i
				next[k] = max(next[k], own[i]*shapes[k-i])
			}
		}
		shapes = next
	}
	top := 0.0
	for k := range shapes {
		spent, kinetic := float64(excess*(float64(k)*slot)), float64(excess*(float64(roofSlots-k)*slot))
		top = max(top, shapes[k]*g.slotCeiling(nodes, g.floors+excess, float64(excess*slot)+spent, kinetic))
	}
	return top * spans
}

// slotCeiling bounds the phase space and the factor of the momentum at a total mass for
// a kinetic energy and masses at most so much above the lowest ones: at a given kinetic
// energy the momentum of a split grows with both masses.
func (g *group) slotCeiling(nodes []node, m, above, kinetic float64) float64 {
	w := g.lowest.constant / m
	sum, q := 0.0, 0.0
	for k, row := range g.rows {
		mass := nodes[row].floor
		if nodes[row].resonance != nil {
			mass += above
		}
		if k > 0 {
			q = splitMomentum(kinetic, sum+mass+kinetic, sum, mass)
			w *= q
			if k < len(g.rows)-1 {
				w *= kinetic
			}
		}
		sum += mass
	}
	return w * g.factor.at(q)
}
