package generation

import (
	"math"

	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/num"
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

// group is the particles that one reaction or decay makes.
type group struct {
	// rows are the particles' places in the tree, in the order of the splits:
	// the one whose direction is shaped comes last.
	rows []int
	// text is the same in the order of the text.
	text []int
	// sharp tells that no mass is drawn.
	sharp bool
	// floors is the sum of the lowest masses, nominal the sum of the nominal ones.
	floors, nominal float64
	// lowest is the phase space of the lowest masses, for ceilings.
	lowest PhaseSpace
	// of a decay
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
	// curveTop is the highest point of the energy curve.
	curveTop float64
	// norm holds the mean fraction against sqrt(s); nil where not needed.
	norm *Curve
}

func newPlan(c *Channel) *plan {
	p := &plan{channel: c, branching: branching(c.Products), bound: c.Bound}
	if p.bound == 0 {
		p.bound = 1
	}
	if c.Energy.Curve != nil {
		for _, y := range c.Energy.Curve.Y {
			p.curveTop = max(p.curveTop, y)
		}
	}
	last := len(c.Products) - 1
	if c.Angle != nil {
		last = c.Angle.Product
		p.angle = newAngle(c.Angle)
	}
	p.root = p.grow(c.Products, -1, last)
	return p
}

// grow appends the products and their decays to the nodes and returns their
// group.
func (p *plan) grow(products []Product, parent, last int) *group {
	g := &group{sharp: true}
	masses := make([]float64, 0, MaxBodies)
	for i := range products {
		product := &products[i]
		row := len(p.nodes)
		g.text = append(g.text, row)
		p.nodes = append(p.nodes, node{
			number: product.Number, mass: product.MassGeV, floor: product.MassGeV,
			parent: int16(parent), //nolint:gosec // trees are small
		})
		if d := product.Decay; d != nil {
			inner := p.grow(d.Products, row, len(d.Products)-1)
			n := &p.nodes[row]
			n.group, n.life = inner, product.MeanLifeS
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
				daughters := make([]float64, 0, len(d.Products))
				for k := range d.Products {
					daughters = append(daughters, d.Products[k].MassGeV)
				}
				n.resonance = newResonance(product.Shape, product.MassGeV, product.WidthGeV, inner.floors, daughters)
				n.floor = n.resonance.low
				g.sharp = false
			}
		}
		g.floors += p.nodes[row].floor
		g.nominal += product.MassGeV
		masses = append(masses, p.nodes[row].floor)
	}
	g.rows = append(g.rows, g.text...)
	g.rows[last], g.rows[len(g.rows)-1] = g.rows[len(g.rows)-1], g.rows[last]
	g.prepare(p.nodes)
	return g
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

// ceiling is an upper bound of the weight that draw returns at a total mass m.
func (g *group) ceiling(nodes []node, m float64) float64 {
	w := g.lowest.ceiling(m)
	if g.sharp {
		return w
	}
	for _, row := range g.rows {
		if r := nodes[row].resonance; r != nil {
			w *= r.ceiling(m - (g.floors - nodes[row].floor))
		}
	}
	return w
}

// draw draws the masses of a group for a total mass m: into masses by row, and
// into ps in the order of the splits. It returns the weight: phase space times
// line shapes. A group of sharp masses has ps set already.
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
	return w * ps.drawMasses(s, m)
}

// angle is an Angle made ready.
type angle struct {
	cosTheta, phi *inverse
	slope         float64
}

func newAngle(a *Angle) *angle {
	made := &angle{slope: a.SlopePerGeV2}
	if a.CosTheta != nil {
		made.cosTheta = newInverse(a.CosTheta)
	}
	if a.Phi != nil {
		made.phi = newInverse(a.Phi)
	}
	return made
}

// acceptance is the integral of exp(b t') over the sphere relative to an
// isotropic distribution, (1 - exp(-2a))/(2a) with a = 2 b p p', 1 for a = 0. It
// belongs to the weight of three and more bodies, where p' varies.
func (a *angle) acceptance(p, pOut float64) float64 {
	x := 4 * a.slope * p * pOut
	if x == 0 {
		return 1
	}
	return -num.Expm1(-x) / x
}

// direction draws the product's direction in the centre of mass for momenta p
// before and pOut after, from two uniform numbers: the azimuth first.
//
//	1 - cos theta = -ln(1 - u (1 - exp(-2a)))/a,  a = 2 b p p'
func (a *angle) direction(s *random.Stream, axis momentum.Three, p, pOut float64) momentum.Three {
	u := s.Uniform()
	phi := azimuth(u)
	if a.phi != nil {
		phi = a.phi.at(u)
	}
	u = s.Uniform()
	var cos, versine float64
	switch x := 2 * a.slope * p * pOut; {
	case a.cosTheta != nil:
		cos = a.cosTheta.at(u)
		versine = 1 - cos
	case x > 1e-9: // below, the exponential is flat to 2e-9
		versine = -num.Log1p(u*num.Expm1(-2*x)) / x
		cos = 1 - versine
	default:
		versine = u + u
		cos = 1 - versine
	}
	return around(axis, cos, math.Sqrt(max(0, versine*(1+cos))), phi)
}

// azimuth is the angle in (-pi, pi) at the fraction u of a turn.
func azimuth(u float64) float64 { return 2 * math.Pi * (u - 0.5) }

// around is the direction at polar angle theta and azimuth phi around an axis.
// The azimuth counts from the x axis of the frame, projected across the axis,
// or from the y axis where the axis is x.
func around(axis momentum.Three, cos, sin, phi float64) momentum.Three {
	sinPhi, cosPhi := num.Sincos(phi)
	if axis.X == 0 && axis.Y == 0 && axis.Z > 0 {
		return momentum.Three{X: sin * cosPhi, Y: sin * sinPhi, Z: cos}
	}
	from := momentum.Three{X: 1}
	if axis.X*axis.X > 0.999 {
		from = momentum.Three{Y: 1}
	}
	y := axis.Cross(from).Unit()
	x := y.Cross(axis)
	return x.Scale(sin * cosPhi).Add(y.Scale(sin * sinPhi)).Add(axis.Scale(cos))
}
