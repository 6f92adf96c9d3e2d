package reaction

import (
	"math/bits"
	"strconv"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/momentum/breakup"
	"example.org/kinegate/kinematics/num"
)

// MaxRangeBodies is the largest number of products that the ranges answer for.
const MaxRangeBodies = 8

// FinalState is a collision with two to eight products of given masses.
type FinalState struct {
	collision Collision
	masses    []float64
	// over is s - (sum of masses)^2 and excess is sqrt(s) - sum of masses.
	over, excess num.DD
}

// FinalState returns the collision with products of the given masses in GeV, 0 or
// within 1e-30..1e30. A closed channel is a BelowThreshold fault with the deficit.
func (c Collision) FinalState(masses ...float64) (FinalState, error) {
	const op = "reaction.FinalState"
	if len(masses) < 2 || len(masses) > MaxRangeBodies {
		return FinalState{}, fault.New(fault.Invalid, "products", strconv.Itoa(len(masses)), "2 to 8 products").In(op)
	}
	for i, m := range masses {
		if checkSize(op, "", m) != nil {
			return FinalState{}, checkSize(op, "products["+strconv.Itoa(i)+"].mass_gev", m)
		}
	}
	over := c.over(masses...)
	if over.Sign() < 0 {
		return FinalState{}, c.closed(op, masses...)
	}
	return FinalState{
		collision: c, masses: append([]float64(nil), masses...), over: over,
		excess: over.Div(c.sys.W.Add(breakup.Sum(masses...))),
	}, nil
}

// Limits returns where each product can go, in order; angles are from z. The momentum
// in the centre-of-mass frame is largest where all others go together with the sum
// of their masses; it starts at 0 for three or more products:
//
//	p*max = sqrt((s - (m + M)^2)(s - (m - M)^2)) / (2 sqrt(s)),  M = sum of the others
//
// Energies and momenta are within 4e-15 relative, angles within max(4e-15, 4 x 2^-52 x
// their condition number).
//
// Source: Review of Particle Physics (2024), Kinematics, two-body decays applied to a
// product and the rest; E. Byckling and K. Kajantie, Particle Kinematics (1973),
// chapter V (from memory).
func (f *FinalState) Limits() []breakup.Limits {
	out := make([]breakup.Limits, len(f.masses))
	for i, m := range f.masses {
		mass := num.FromFloat(m)
		fast := f.collision.leg(f.over, mass, breakup.Sum(f.without(i)...), f.masses...)
		slow := fast
		if len(f.masses) > 2 {
			slow = breakup.NewLegAt(f.collision.sys, mass, num.DD{})
		}
		out[i] = breakup.LimitsBetween(&slow, &fast)
		out[i].Angle = breakup.Tilted(out[i].Angle, f.collision.tilt)
	}
	return out
}

func (f *FinalState) without(i int) []float64 {
	rest := make([]float64, 0, len(f.masses))
	rest = append(rest, f.masses[:i]...)
	return append(rest, f.masses[i+1:]...)
}

// Subset is a set of products, one bit each in order of the products from bit 0.
type Subset uint16

// SubsetOf returns the set of the products with the given numbers.
func SubsetOf(products ...int) Subset {
	var s Subset
	for _, i := range products {
		if i >= 0 && i < MaxRangeBodies {
			s |= 1 << i
		}
	}
	return s
}

// Has reports whether product i belongs to the set.
func (s Subset) Has(i int) bool { return s>>i&1 == 1 }

// Count returns the number of products in the set.
func (s Subset) Count() int { return bits.OnesCount16(uint16(s)) }

// split returns the masses of the set and those of the others.
func (f *FinalState) split(s Subset) (in, out []float64) {
	for i, m := range f.masses {
		if s.Has(i) {
			in = append(in, m)
		} else {
			out = append(out, m)
		}
	}
	return in, out
}

// checkSubset refuses sets that are empty, full or have members beyond the products.
func (f *FinalState) checkSubset(op string, s Subset) error {
	if s == 0 || s >= 1<<len(f.masses)-1 {
		return fault.New(fault.Invalid, "products", strconv.FormatUint(uint64(s), 2),
			"some of the "+strconv.Itoa(len(f.masses))+" products and not all").In(op)
	}
	return nil
}

// SubsetMass returns the range of the invariant mass of some products, in GeV, which
// is also that of the mass missing beside the others:
//
//	min = sum of their masses,  max = min + excess = sqrt(s) - sum of the others' masses
//
// within 2e-16 relative.
func (f *FinalState) SubsetMass(s Subset) (breakup.Range, error) {
	if err := f.checkSubset("reaction.SubsetMass", s); err != nil {
		return breakup.Range{}, err
	}
	in, _ := f.split(s)
	least := breakup.Sum(in...)
	most := least
	if len(in) > 1 { // A single product has its mass.
		most = least.Add(f.excess)
	}
	return breakup.Range{Min: least.Float(), Max: most.Float()}, nil
}

// Subsets returns every set of two or more products that leaves one out, small sets
// first and then by their first members.
func (f *FinalState) Subsets() []Subset {
	n := len(f.masses)
	var out []Subset
	for size := 2; size < n; size++ {
		out = appendSubsets(out, 0, 0, n, size)
	}
	return out
}

// appendSubsets appends the sets that add size products from first..n-1 to s.
func appendSubsets(out []Subset, s Subset, first, n, size int) []Subset {
	if size == 0 {
		return append(out, s)
	}
	for i := first; i <= n-size; i++ {
		out = appendSubsets(out, s|1<<i, i+1, n, size-1)
	}
	return out
}

// Initial names one of the two initial bodies.
type Initial uint8

// The two initial bodies.
const (
	FromBeam Initial = iota
	FromTarget
)

// Transfer returns the ends of t(initial, products) = (p_initial - sum of p)^2 over
// all final states, with both masses and the angle free.
//
// The smallest t (the backward end) has both groups at their smallest masses a and b,
// the products against the initial body. So has the largest (the forward end), except
// where the products can be at rest relative to the initial body, t = (m1 - a)^2, or
// the others relative to the other initial body, t = (m2 - b)^2, at masses that the
// energy allows; these need a second group of at least two products.
//
// Within 4e-15 relative. The argument: t is stationary inside the region only at
// p_initial itself, which is a saddle; on the surface of smallest mass of one group t
// is linear in one energy, with the stated stationary point.
func (f *FinalState) Transfer(initial Initial, s Subset) (TransferLimits, error) {
	const op = "reaction.Transfer"
	if err := f.checkSubset(op, s); err != nil {
		return TransferLimits{}, err
	}
	c := &f.collision
	m1, m2 := num.FromFloat(c.mass[0]), num.FromFloat(c.mass[1])
	switch initial {
	case FromBeam:
	case FromTarget:
		m1, m2 = m2, m1
	default:
		return TransferLimits{}, fault.New(fault.Invalid, "initial", strconv.Itoa(int(initial)), "beam or target").In(op)
	}
	in, out := f.split(s)
	a, b := breakup.Sum(in...), breakup.Sum(out...)
	final := breakup.Momentum(f.over, c.sys.W, a, b)
	edge := ends(c.sys.W, m1, m2, a, b, c.initialMomentum(), final)
	if len(out) > 1 {
		edge.forward = largerTransfer(edge.forward, c.sys.W, m1, m2, a, b)
	}
	if len(in) > 1 {
		edge.forward = largerTransfer(edge.forward, c.sys.W, m2, m1, b, a)
	}
	return edge.limits(), nil
}

// largerTransfer returns (m1 - a)^2 where it exceeds t and a group of mass a can move
// with body 1 while at least the mass b is left for the others:
//
//	(P - (a/m1) p1)^2 = s - (a/m1)(s + m1^2 - m2^2) + a^2 >= b^2
func largerTransfer(t, w, m1, m2, a, b num.DD) num.DD {
	top := m1.Sub(a).Square()
	if m1.IsZero() || top.Cmp(t) <= 0 {
		return t
	}
	s, share := w.Square(), a.Div(m1)
	overlap := share.Mul(s.Add(squaresDifference(m1, m2)))
	left := s.Sub(overlap).Add(a.Square())
	if left.Cmp(b.Square()) < 0 || s.Scale(1).Cmp(overlap) <= 0 {
		return t
	}
	return top
}
