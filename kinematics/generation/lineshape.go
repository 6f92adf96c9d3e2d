package generation

import (
	"math"

	"example.org/kinegate/kinematics/num"
	"example.org/kinegate/kinematics/num/random"
)

// DefaultReach is how many widths from its nominal mass the mass of a broad
// particle is drawn by default. The tails beyond hold about 1/(pi reach) of a
// Breit-Wigner, 1.3 % here.
const DefaultReach = 25

// LineShape says how the mass m of a broad particle is distributed: a
// relativistic Breit-Wigner in the mass squared,
//
//	rho(m^2) = (1/pi) m0 G(m) / ((m^2 - m0^2)^2 + m0^2 Gt(m)^2)
//	G(m) = G0 V(m)/V(m0),  Gt = G,
//
// with the nominal mass m0 and width G0 and the phase space V of the stated decay,
// which it is taken to have alone: V is integrated over the line shapes of broad
// daughters, and for two daughters holds the factor q^(2L) B of their momentum q in
// the particle's rest frame. So for two sharp daughters
//
//	G(m) = G0 (m0/m) (q/q0)^(2L+1) B,
//
// and for a radius R > 0 the barrier factor is B = D(q0 R)/D(q R), D = 1, 1 + z^2,
// 9 + 3 z^2 + z^4 for L = 0, 1, 2. The shape goes to zero at the lightest mass of
// the daughters, whatever their nominal masses. The daughters' own masses follow
// the integrand of V at the mass that is drawn.
//
// A decay that is closed at m0 even with the lightest daughters has no width there.
// By convention it then has the width G0 one G0 above the lightest daughters,
// G(m) = G0 V(m)/V(lightest + G0), beside the constant width G0 of the decays that
// are open, Gt = G0 + G. For ConstantWidth Gt = G0 and L and R do not count: a
// Breit-Wigner of constant width times the phase space of the decay.
//
// Sources: J. D. Jackson, Nuovo Cimento 34 (1964) 1644, eq. (A.2), for the shape;
// F. von Hippel and C. Quigg, Phys. Rev. D 5 (1972) 624, for B; S. M. Flatte, Phys.
// Lett. B 63 (1976) 224, for a decay that opens above m0 (all from memory); package
// comments of volume for V.
type LineShape struct {
	// L is the orbital angular momentum of a decay to two, 0 to 2.
	L int
	// RadiusPerGeV is the barrier radius in 1/GeV; 0 means no barrier factor.
	RadiusPerGeV float64
	// ConstantWidth switches the dependence of the total width on the mass off.
	ConstantWidth bool
	// LowGeV and HighGeV limit the mass; 0 means DefaultReach widths from the
	// nominal mass. The lightest stated final state limits it in any case.
	LowGeV, HighGeV float64
}

// limits are the limits of the mass of a particle whose lightest final state has
// the mass floor.
func (s *LineShape) limits(mass, width, floor float64) (low, high float64) {
	low, high = s.LowGeV, s.HighGeV
	if low == 0 {
		low = mass - float64(DefaultReach*width)
	}
	if high == 0 {
		high = mass + float64(DefaultReach*width)
	}
	return max(low, floor), high
}

// centrifugal is the factor of the momentum in a decay to a number of daughters.
func (s *LineShape) centrifugal(daughters int) centrifugal {
	if daughters != 2 || s.ConstantWidth {
		return centrifugal{}
	}
	return centrifugal{l: s.L, radius: s.RadiusPerGeV}
}

// resonance is a LineShape made ready for one particle.
type resonance struct {
	mass, width float64
	low, high   float64 // static limits of the mass
	decay       *volume
	unit        float64   // the volume at which G is G0
	others      float64   // the width of other decays over G0
	constant    bool      // the total width is G0
	angleLow    float64   // angle(low)
	tops        []float64 // tops[i] bounds shapeRatio from low to grid(i)
}

// newResonance prepares a line shape for a particle of the given mass and width
// with the daughters of its decay. It gives up when stop returns true.
func newResonance(shape LineShape, mass, width float64, daughters []part, stop func() bool) *resonance {
	floor := 0.0
	for _, d := range daughters {
		floor += d.low
	}
	r := &resonance{mass: mass, width: width, constant: shape.ConstantWidth}
	r.low, r.high = shape.limits(mass, width, floor)
	r.angleLow = r.angle(r.low)
	unit := mass
	if !(mass > floor) {
		unit, r.others = floor+width, 1
	}
	r.decay = newVolume(daughters, shape.centrifugal(len(daughters)), max(r.high, unit), stop)
	r.unit = r.decay.at(unit)
	r.tops = make([]float64, shapeGrid+1)
	top := 0.0
	for i := 1; i <= shapeGrid && !stop(); i++ {
		top = r.bound(r.grid(i-1), r.grid(i), top, boundDepth)
		r.tops[i] = top
	}
	return r
}

// shapeGrid is the number of grid cells for the bound of a line shape, and
// boundDepth how often each may be halved: the last cells are narrower than the
// distance of two numbers.
const (
	shapeGrid  = 2000
	boundDepth = 48
)

// grid is point i of the grid from low to high, which is fine towards low, where
// shapes follow powers of the excess mass.
func (r *resonance) grid(i int) float64 {
	x := float64(i) / shapeGrid
	return between(r.low, r.high, x*x*x*x)
}

// bound bounds shapeRatio from one mass to the next and is at least top. G grows
// with the mass, so it lies between its values at the ends, and so does the
// distance from the nominal mass. Where that gives more than two per cent above
// what top and the ends make necessary, the cell is halved.
func (r *resonance) bound(from, to, top float64, depth int) float64 {
	g0, g1 := r.widthRatio(from), r.widthRatio(to)
	d0, d1 := r.distance(from), r.distance(to)
	near, far := 0.0, max(float64(d0*d0), float64(d1*d1))
	if d0 > 0 || d1 < 0 {
		near = min(float64(d0*d0), float64(d1*d1))
	}
	total := r.total(g0)
	limit := g1 * (far + 1) / (near + float64(total*total))
	least := max(top, r.shapeRatio(from), r.shapeRatio(to))
	if limit <= 1.02*least {
		return max(top, limit)
	}
	if depth == 0 {
		return least
	}
	middle := between(from, to, 0.5)
	top = r.bound(from, middle, top, depth-1)
	return r.bound(middle, to, top, depth-1)
}

// ceiling bounds the ratio that draw returns for a highest mass.
func (r *resonance) ceiling(high float64) float64 {
	if !(high > r.low) {
		return 0
	}
	return r.top(high) * (r.span(high) / math.Pi)
}

// top bounds shapeRatio up to a highest mass above low.
func (r *resonance) top(high float64) float64 {
	x := math.Sqrt(math.Sqrt((min(high, r.high) - r.low) / (r.high - r.low)))
	return r.tops[min(int(x*shapeGrid)+1, shapeGrid)]
}

// angle maps a mass so that a Breit-Wigner of constant width in m^2 is flat.
func (r *resonance) angle(m float64) float64 {
	return num.Atan2((m-r.mass)*(m+r.mass), r.mass*r.width)
}

// span is the extent of the angle up to a highest mass.
func (r *resonance) span(high float64) float64 { return r.angle(min(high, r.high)) - r.angleLow }

// massAt is the mass at an angle above that of the lowest mass.
func (r *resonance) massAt(angle float64) float64 {
	square := float64(r.mass*r.mass) + float64(r.mass*r.width*num.Tan(r.angleLow+angle))
	return math.Sqrt(max(square, float64(r.low*r.low))) // the rounding of Tan may pass the limit
}

// draw draws a mass up to a highest one from the Breit-Wigner of constant
// width, from one uniform number, and returns it with rho over the density it
// was drawn from.
func (r *resonance) draw(s *random.Stream, high float64) (m, ratio float64) {
	u := s.Uniform()
	span := r.span(high)
	if !(span > 0) {
		return r.low, 0
	}
	m = min(r.massAt(float64(u*span)), high)
	return m, r.shapeRatio(m) * (span / math.Pi)
}

// distance is that of a mass squared from the nominal one in units of m0 G0.
func (r *resonance) distance(m float64) float64 {
	return (m - r.mass) * (m + r.mass) / (r.mass * r.width)
}

// shapeRatio is the line shape over the Breit-Wigner with the constant width.
func (r *resonance) shapeRatio(m float64) float64 {
	g := r.widthRatio(m)
	distance := r.distance(m)
	square := float64(distance * distance)
	total := r.total(g)
	return g * (square + 1) / (square + float64(total*total))
}

// widthRatio is G(m)/G0.
func (r *resonance) widthRatio(m float64) float64 { return r.decay.at(m) / r.unit }

// total is Gt/G0 for a given G/G0.
func (r *resonance) total(g float64) float64 {
	if r.constant {
		return 1
	}
	return r.others + g
}

// barrier is the denominator D of the barrier factor.
func barrier(l int, z float64) float64 {
	square := float64(z * z)
	switch l {
	case 1:
		return 1 + square
	case 2:
		return 9 + float64(square*(3+square))
	}
	return 1
}
