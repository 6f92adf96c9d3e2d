package generation

import (
	"math"
	"slices"
	"sort"

	"example.org/kinegate/kinematics/num"
)

// volume is the phase space of the products of a reaction or decay against their
// total mass m, integrated over the masses of those that are broad:
//
//	V(m) = integral of prod rho_i(m_i^2) dm_i^2 Phi(m; m_1 ... m_n) F
//
// with the line shapes rho_i of the broad products and the volume Phi of phase
// space as in PhaseSpace, by the recurrence
//
//	Phi(m; m_1 ... m_n) = integral of dM^2 pi (q/m) Phi(M; m_1 ... m_(n-1))
//
// with the momentum q of the split into M and m_n. F is the centrifugal factor of
// a decay to two, else 1. V is 0 at the sum of the lowest masses, continuous there
// (save for massless products alone) and grows with m.
//
// Source: E. Byckling and K. Kajantie, "Particle kinematics" (1973), chapter V,
// for the recurrence; D. J. Herndon, P. Soeding and R. J. Cashmore, Phys. Rev. D 11
// (1975) 3165 for the width to broad daughters as an integral over their line
// shapes (both from memory).
//
// Accuracy: closed form for two sharp products; otherwise a table of ln V against
// ln (m - sum of the lowest masses) with straight lines between points, good to
// some 1e-4 of V, and below a millionth of the range the power law that these
// lines end in.
type volume struct {
	low        float64 // the sum of the lowest masses
	a, b       part
	factor     centrifugal
	closedForm bool
	x, y       []float64 // the table: ln of the excess mass, ln of the volume
}

// part is one side of a split: a sharp particle, a broad one, or several
// particles together.
type part struct {
	low       float64    // the lowest mass
	resonance *resonance // of a broad particle
	several   *volume    // of several particles
}

func (p *part) sharp() bool { return p.resonance == nil && p.several == nil }

// newVolume prepares the volume of two or more products for total masses up to
// high. It gives up when stop returns true.
func newVolume(products []part, factor centrifugal, high float64, stop func() bool) *volume {
	// Sharp products first: what they have together is smooth.
	ordered := slices.Clone(products)
	slices.SortStableFunc(ordered, func(a, b part) int {
		switch {
		case a.sharp() == b.sharp():
			return 0
		case a.sharp():
			return -1
		}
		return 1
	})
	rest := 0.0
	for _, p := range ordered {
		rest += p.low
	}
	made := &volume{}
	together := ordered[0]
	rest -= together.low
	for _, p := range ordered[1:] {
		rest -= p.low
		made = &volume{low: together.low + p.low, a: together, b: p, factor: factor}
		if together.sharp() && p.sharp() {
			made.closedForm = true
		} else {
			made.tabulate(high-max(rest, 0), stop)
		}
		together = part{low: made.low, several: made}
	}
	return made
}

// at is the volume at a total mass.
func (v *volume) at(m float64) float64 {
	excess := m - v.low
	if !(excess > 0) {
		return 0
	}
	if v.closedForm {
		return v.factor.volume(excess, m, v.a.low, v.b.low)
	}
	last := len(v.x) - 1
	if last < 1 {
		return 0
	}
	x := num.Log(excess)
	i := min(max(sort.SearchFloat64s(v.x, x), 1), last)
	return num.Exp(between(v.y[i-1], v.y[i], (x-v.x[i-1])/(v.x[i]-v.x[i-1])))
}

// The table starts a millionth of the range above the lowest mass and has
// tableCells cells to begin with; a cell is halved until the line through its
// ends is off by less than tableError in its middle, that is 1e-4 once it is
// halved there, or tableDepth times, which resolves widths of a billionth.
const (
	tableStart = 1e-6
	tableCells = 32
	tableDepth = 24
	tableError = 4e-4
)

// tabulate fills the table up to a highest total mass.
func (v *volume) tabulate(high float64, stop func() bool) {
	value := func(x float64) float64 { return num.Log(v.integral(v.low + num.Exp(x))) }
	add := func(x, y float64) {
		if n := len(v.y); n > 0 {
			y = max(y, v.y[n-1]) // rounding alone could make it fall
		}
		if y > -math.MaxFloat64 { // not where the volume is too small for a number
			v.x, v.y = append(v.x, x), append(v.y, y)
		}
	}
	var refine func(x0, y0, x1, y1 float64, depth int)
	refine = func(x0, y0, x1, y1 float64, depth int) {
		if stop() {
			return
		}
		x := between(x0, x1, 0.5)
		y := value(x)
		none := !(y1 > -math.MaxFloat64) // too small for a number in the whole cell
		if depth == 0 || none || math.Abs(y-between(y0, y1, 0.5)) < tableError {
			add(x, y)
			add(x1, y1)
			return
		}
		refine(x0, y0, x, y, depth-1)
		refine(x, y, x1, y1, depth-1)
	}
	low, top := num.Log(tableStart*(high-v.low)), num.Log(high-v.low)
	x0 := low
	y0 := value(x0)
	add(x0, y0)
	for i := range tableCells {
		x1 := between(low, top, float64(i+1)/tableCells)
		y1 := value(x1)
		refine(x0, y0, x1, y1, tableDepth)
		x0, y0 = x1, y1
	}
}

// integral is the volume at a total mass by quadrature over the masses of the two
// parts.
func (v *volume) integral(m float64) float64 {
	return v.a.integrate(m-v.b.low, func(a float64) float64 {
		return v.b.integrate(m-a, func(b float64) float64 {
			excess := m - a - b
			if !(excess > 0) {
				return 0 // rounding at the end of the range
			}
			return v.factor.volume(excess, m, a, b)
		})
	})
}

// quadraturePoints is the number of points of an integral over the mass of a part.
// In t, with u = t^3 (10 - 15 t + 6 t^2) running over the range, the integrand goes
// to zero at both ends at least as t^2, for momenta as t^(7/2), so that the
// midpoint rule converges as the inverse fourth power or better: volumes with two
// nested daughters are good to 3e-5.
const quadraturePoints = 48

// integrate integrates f over the part's mass squared with its density, up to a
// highest mass. For a broad particle the variable is the angle in which a
// Breit-Wigner is flat.
func (p *part) integrate(high float64, f func(m float64) float64) float64 {
	if p.sharp() {
		return f(p.low)
	}
	span := 0.0
	if r := p.resonance; r != nil {
		high = min(high, r.high)
		span = r.span(high)
	}
	if !(high > p.low) {
		return 0
	}
	sum := 0.0
	for i := range quadraturePoints {
		t := float64((float64(i) + 0.5) / quadraturePoints)
		u := t * t * t * (10 - float64(t*(15-float64(6*t))))
		weight := 30 * t * t * (1 - t) * (1 - t) / quadraturePoints
		var m float64
		if r := p.resonance; r != nil {
			m = min(r.massAt(u*span), high)
			weight *= r.shapeRatio(m) * (span / math.Pi)
		} else {
			m = between(p.low, high, u)
			weight *= 2 * m * (high - p.low) * p.several.at(m)
		}
		if weight > 0 {
			sum += float64(weight * f(m))
		}
	}
	return sum
}

// centrifugal is the factor q^(2L)/D(q R) of a decay to two particles with the
// orbital angular momentum L and the momentum q, for a radius R > 0 with
// D = 1, 1 + z^2, 9 + 3 z^2 + z^4 for L = 0, 1, 2, else 1. It grows with q.
type centrifugal struct {
	l      int
	radius float64
}

// at is the factor at a momentum.
func (c centrifugal) at(q float64) float64 {
	f := 1.0
	for range c.l {
		f *= q * q
	}
	if c.radius > 0 {
		f /= barrier(c.l, q*c.radius)
	}
	return f
}

// volume is the phase space pi q/m of two particles times the factor.
func (c centrifugal) volume(excess, m, a, b float64) float64 {
	q := splitMomentum(excess, m, a, b)
	return math.Pi * q / m * c.at(q)
}
