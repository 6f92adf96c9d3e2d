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
//	rho(m^2) = (1/pi) m0 G(m) / ((m^2 - m0^2)^2 + m0^2 G(m)^2)
//	G(m) = G0 (m0/m) (q/q0)^(2L+1) B,
//
// with the momentum q of the two daughters in the particle's rest frame, q0 at
// the nominal mass m0, and for a radius R > 0 the barrier factor
// B = D(q0 R)/D(q R), D = 1, 1 + z^2, 9 + 3 z^2 + z^4 for L = 0, 1, 2.
// Sources: J. D. Jackson, Nuovo Cimento 34 (1964) 1644, eq. (A.2); F. von
// Hippel and C. Quigg, Phys. Rev. D 5 (1972) 624 (both from memory). The width
// is constant where ConstantWidth says so and where the stated decay has not
// two daughters or is closed at the nominal mass.
type LineShape struct {
	// L is the orbital angular momentum of the decay, 0 to 2.
	L int
	// RadiusPerGeV is the barrier radius in 1/GeV; 0 means no barrier factor.
	RadiusPerGeV float64
	// ConstantWidth switches the dependence on the mass off.
	ConstantWidth bool
	// LowGeV and HighGeV limit the mass; 0 means DefaultReach widths from the
	// nominal mass. The lightest stated final state limits it in any case.
	LowGeV, HighGeV float64
}

// resonance is a LineShape made ready for one particle.
type resonance struct {
	shape       LineShape
	mass, width float64
	low, high   float64   // static limits of the mass
	a, b        float64   // daughters' masses of a two-body decay
	q0          float64   // their momentum at the nominal mass; 0: constant width
	angleLow    float64   // angle(low)
	tops        []float64 // tops[i] bounds shapeRatio from low to grid point i
}

// newResonance prepares a line shape for a particle of the given mass and
// width, whose lightest final state has the mass floor.
func newResonance(shape LineShape, mass, width, floor float64, daughters []float64) *resonance {
	r := &resonance{shape: shape, mass: mass, width: width, low: shape.LowGeV, high: shape.HighGeV}
	if r.low == 0 {
		r.low = mass - float64(DefaultReach*width)
	}
	r.low = max(r.low, floor)
	if r.high == 0 {
		r.high = mass + float64(DefaultReach*width)
	}
	if len(daughters) == 2 && !shape.ConstantWidth {
		r.a, r.b = daughters[0], daughters[1]
		if q := mass - r.a - r.b; q > 0 {
			r.q0 = splitMomentum(q, mass, r.a, r.b)
		}
	}
	r.angleLow = r.angle(r.low)
	// The ratio is smooth on the scale of the limits; its largest value on a fine
	// grid, two per cent up, bounds it. What still passes counts as an overflow.
	r.tops = make([]float64, shapeGrid+1)
	top := 0.0
	for i := range r.tops {
		m := between(r.low, r.high, float64(i)/shapeGrid)
		top = max(top, 1.02*r.shapeRatio(m))
		r.tops[i] = top
	}
	return r
}

// shapeGrid is the number of grid cells for the bound of a line shape.
const shapeGrid = 2000

// ceiling bounds the ratio that draw returns for a highest mass.
func (r *resonance) ceiling(high float64) float64 {
	if !(high > r.low) {
		return 0
	}
	cell := math.Ceil((min(high, r.high) - r.low) / (r.high - r.low) * shapeGrid)
	return r.tops[min(int(cell), shapeGrid)] * (r.span(high) / math.Pi)
}

// angle maps a mass so that a Breit-Wigner of constant width in m^2 is flat.
func (r *resonance) angle(m float64) float64 {
	return num.Atan2((m-r.mass)*(m+r.mass), r.mass*r.width)
}

// span is the extent of the angle up to a highest mass.
func (r *resonance) span(high float64) float64 { return r.angle(min(high, r.high)) - r.angleLow }

// draw draws a mass up to a highest one from the Breit-Wigner of constant
// width, from one uniform number, and returns it with rho over the density it
// was drawn from.
func (r *resonance) draw(s *random.Stream, high float64) (m, ratio float64) {
	u := s.Uniform()
	span := r.span(high)
	if !(span > 0) {
		return r.low, 0
	}
	square := float64(r.mass*r.mass) + float64(r.mass*r.width*num.Tan(r.angleLow+float64(u*span)))
	m = math.Sqrt(max(square, float64(r.low*r.low))) // the rounding of Tan may pass the limit
	m = min(m, high)
	return m, r.shapeRatio(m) * (span / math.Pi)
}

// shapeRatio is the Breit-Wigner with the width at m over the one with the
// constant width.
func (r *resonance) shapeRatio(m float64) float64 {
	g := r.widthRatio(m)
	distance := (m - r.mass) * (m + r.mass) / (r.mass * r.width)
	square := float64(distance * distance)
	return g * (square + 1) / (square + float64(g*g))
}

// widthRatio is G(m)/G0.
func (r *resonance) widthRatio(m float64) float64 {
	if r.q0 == 0 {
		return 1
	}
	excess := m - r.a - r.b
	if !(excess > 0) {
		return 0
	}
	q := splitMomentum(excess, m, r.a, r.b)
	x := q / r.q0
	g := r.mass / m * x
	for range r.shape.L {
		g *= x * x
	}
	if radius := r.shape.RadiusPerGeV; radius > 0 {
		g *= barrier(r.shape.L, r.q0*radius) / barrier(r.shape.L, q*radius)
	}
	return g
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
