package generation

import (
	"example.org/kinegate/kinematics/num/random"
)

// node is one particle of a channel's tree, made ready.
type node struct {
	number    int64
	mass      float64
	resonance *resonance // nil for a sharp mass
	floor     float64    // lowest mass
	life      float64    // mean life in seconds, 0 for none
	parent    int16
	group     *group // nil for a final particle
}

// high is the highest mass.
func (n *node) high() float64 {
	if n.resonance != nil {
		return n.resonance.high
	}
	return n.mass
}

// group is the particles that one reaction or decay makes.
type group struct {
	// rows are the particles' places in the tree, in the order of the splits:
	// the one whose direction is shaped comes last.
	rows []int
	// text is the same in the order of the text.
	text []int
	// sharp tells that no mass is drawn.
	sharp bool
	// floors is the sum of the lowest masses.
	floors float64
	// lowest is the phase space of the lowest masses, for ceilings; roof is that of a
	// group with broad particles.
	lowest PhaseSpace
	roof   *roof
	// of a decay: the factor of the momentum of two daughters, and their shapes
	factor   centrifugal
	density  shaper
	cosTheta *inverse
}

// plan is a channel's tree, depth first in text order.
type plan struct {
	channel   *Channel
	nodes     []node
	root      *group
	branching float64
	angle     *angle
	// threshold is the sqrt(s) from which the channel is drawn.
	threshold float64
	bound     float64
	// joint is the ceiling of the whole weight over all energies, for
	// PhaseSpaceRate.
	joint float64
	// rate is the energy curve of CurveRate or LawRate, nil for neither, and rateTop
	// its highest point.
	rate    *Curve
	rateTop float64
	// norm is the mean weight against sqrt(s); nil where not needed.
	norm *volume
}

// newPlan prepares a channel; it returns false when it was stopped.
func newPlan(c *Channel, stop func() bool) (made *plan, ok bool) {
	if stop() {
		return nil, false
	}
	p := &plan{channel: c, branching: branching(c.Products), bound: c.Bound}
	if p.bound == 0 {
		p.bound = 1
	}
	last := len(c.Products) - 1
	if c.Angle != nil {
		last = c.Angle.Product
		p.angle = newAngle(c.Angle)
	}
	p.root = p.grow(c.Products, -1, last, stop)
	return p, !stop()
}

// grow appends the products and their decays to the nodes and returns their
// group.
func (p *plan) grow(products []Product, parent, last int, stop func() bool) *group {
	g := &group{sharp: true}
	for i := range products {
		product := &products[i]
		row := len(p.nodes)
		g.text = append(g.text, row)
		p.nodes = append(p.nodes, node{
			number: product.Number, mass: product.MassGeV, floor: product.MassGeV,
			parent: int16(parent), //nolint:gosec // trees are small
		})
		if d := product.Decay; d != nil {
			inner := p.grow(d.Products, row, len(d.Products)-1, stop)
			n := &p.nodes[row]
			n.group, n.life = inner, product.MeanLifeS
			inner.factor = product.Shape.centrifugal(len(d.Products))
			if d.Density != nil {
				inner.density = d.Density.shaper(d.Products)
			}
			if d.CosTheta != nil {
				inner.cosTheta = newInverse(d.CosTheta)
				// The first daughter's direction is the shaped one.
				inner.rows[0], inner.rows[1] = inner.rows[1], inner.rows[0]
				inner.prepare(p.nodes)
			}
			if product.broad() {
				n.resonance = newResonance(product.Shape, product.MassGeV, product.WidthGeV, inner.parts(p.nodes), stop)
				n.floor = n.resonance.low
				g.sharp = false
			}
			if !inner.sharp {
				inner.roof = newRoof(inner, p.nodes, n.high(), stop)
			}
		}
		g.floors += p.nodes[row].floor
	}
	g.rows = append(g.rows, g.text...)
	g.rows[last], g.rows[len(g.rows)-1] = g.rows[len(g.rows)-1], g.rows[last]
	g.prepare(p.nodes)
	return g
}

// parts are the particles of the group, in the order of the text, as parts of a
// volume.
func (g *group) parts(nodes []node) []part {
	parts := make([]part, 0, len(g.text))
	for _, row := range g.text {
		parts = append(parts, part{low: nodes[row].floor, resonance: nodes[row].resonance})
	}
	return parts
}

// prepare sets the phase space of the lowest masses in the order of the splits.
func (g *group) prepare(nodes []node) {
	masses := make([]float64, len(g.rows))
	for i, row := range g.rows {
		masses[i] = nodes[row].floor
	}
	g.lowest = phaseSpaceOf(len(masses))
	g.lowest.setMasses(masses)
}

// ceiling is an upper bound of the weight that draw returns at a total mass m > floors.
func (g *group) ceiling(m float64) float64 {
	if g.sharp {
		return g.lowest.ceiling(m)
	}
	return g.roof.at(m - g.floors)
}

// looseCeiling bounds the weight of a group with broad particles by its factors, each
// for all the excess energy: phase space and the factor of the momentum are largest
// for the lowest masses.
func (g *group) looseCeiling(nodes []node, m float64) float64 {
	w := g.lowest.ceiling(m)
	for _, row := range g.rows {
		if r := nodes[row].resonance; r != nil {
			w *= r.ceiling(m - (g.floors - nodes[row].floor))
		}
	}
	if g.factor.l > 0 {
		w *= g.factor.at(splitMomentum(m-g.floors, m, g.lowest.mass[0], g.lowest.mass[1]))
	}
	return w
}

// draw draws the masses of a group for a total mass m: into masses by row, and
// into ps in the order of the splits. It returns the weight: phase space times
// line shapes and, for a decay to two with a broad daughter, the factor of their
// momentum. The mean weight is the group's volume. A group of sharp masses has ps
// set already.
func (g *group) draw(s *random.Stream, nodes []node, m float64, masses []float64, ps *PhaseSpace) float64 {
	w := 1.0
	if !g.sharp {
		var drawn [MaxBodies]float64
		for i, row := range g.rows {
			n := &nodes[row]
			drawn[i] = n.mass
			if n.resonance != nil {
				var ratio float64
				drawn[i], ratio = n.resonance.draw(s, m-(g.floors-n.floor))
				w *= ratio
			}
			masses[row] = drawn[i]
		}
		ps.setMasses(drawn[:len(g.rows)])
	}
	w *= ps.drawMasses(s, m)
	if g.factor.l > 0 && !g.sharp && w > 0 {
		w *= g.factor.at(ps.split[1])
	}
	return w
}
