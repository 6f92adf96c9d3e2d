package decay

import (
	"math"

	"example.org/kinegate/kinematics/momentum/breakup"
	"example.org/kinegate/kinematics/num"
)

// between returns the laboratory angle between the two daughters of momenta p1 and p2:
//
//	atan2(|p1 x p2|, p1.p2) = atan2(P pT, along1 along2 - pT^2)
//
// for p1 + p2 = P, with their common momentum pT across P. Where one of them is at rest
// the angle is pi/2, the limit along the curve of all directions.
func (t *TwoBody) between(first, second *breakup.Lab) float64 {
	if first.Momentum.IsZero() || second.Momentum.IsZero() {
		return math.Pi / 2
	}
	cross := t.sys.P.Mul(first.Across)
	dot := first.Along.Mul(second.Along).Sub(first.Across.Square())
	return num.Atan2(cross.Float(), dot.Float())
}

// Opening returns the range of the laboratory angle between the two daughters over all
// directions, in radians; pi alone for a parent at rest.
//
// With x the cosine of the first daughter in the rest frame,
//
//	cot(angle) = (a + b x - d x^2)/(P W p* sqrt(1 - x^2))
//	a = P^2 E1* E2* - (W p*)^2,  b = E P p* (E2* - E1*),  d = (P p*)^2
//
// has its inner extremes at the roots of d x^3 + (a - 2d) x + b; the ends x = +-1 give 0
// where both then go forward, else pi.
//
// Accuracy: that of TwoBody.At at the extreme, where the angle does not depend on x to
// first order; for photons it is 2 atan(W/P). Source: the derivative of the cotangent
// above, which is p1.p2/|p1 x p2|.
func (t *TwoBody) Opening() breakup.Range {
	if t.sys.P.IsZero() || t.legs[0].Momentum().IsZero() {
		angle := t.pair(breakup.Along()).Opening
		if t.sys.P.IsZero() {
			angle = math.Pi
		}
		return breakup.Range{Min: angle, Max: angle}
	}
	first := t.pair(breakup.Along()).Opening
	out := breakup.Range{Min: first, Max: first}
	widen := func(d breakup.Direction) {
		angle := t.pair(d).Opening
		out.Min, out.Max = math.Min(out.Min, angle), math.Max(out.Max, angle)
	}
	widen(breakup.Against())
	for _, x := range t.openingExtremes() {
		widen(breakup.AtCosineDD(x))
	}
	return out
}

// openingExtremes returns the roots inside -1..1 of the cubic of Opening.
func (t *TwoBody) openingExtremes() []num.DD {
	p, e1, e2 := t.legs[0].Momentum(), t.legs[0].Energy(), t.legs[1].Energy()
	square := t.sys.P.Square()
	d := square.Mul(p.Square())
	a := square.Mul(e1).Mul(e2).Sub(t.sys.W.Mul(p).Square())
	// E2* - E1* = (m2^2 - m1^2)/W in factors.
	difference := num.Sum2(t.mass[1], -t.mass[0]).Mul(num.Sum2(t.mass[1], t.mass[0])).Div(t.sys.W)
	b := t.sys.E.Mul(t.sys.P).Mul(p).Mul(difference)
	return cubicRoots(d, a.Sub(d.Scale(1)), b)
}

// cubicRoots returns the roots of d x^3 + e x + b inside -1..1, d > 0: each stretch
// between the ends and the turning points +-sqrt(-e/(3d)) holds at most one, found by
// bisection and refined by two Newton steps in double-double.
func cubicRoots(d, e, b num.DD) []num.DD {
	value := func(x num.DD) num.DD { return d.Mul(x.Square()).Add(e).Mul(x).Add(b) }
	knots := []float64{-1, 1}
	if turn := e.Neg().Div(d.MulFloat(3)); turn.Sign() > 0 && turn.Hi < 1 {
		x := math.Sqrt(turn.Hi)
		knots = []float64{-1, -x, x, 1}
	}
	var roots []num.DD
	for i := 1; i < len(knots); i++ {
		low, high := knots[i-1], knots[i]
		sign := value(num.FromFloat(low)).Sign()
		if sign*value(num.FromFloat(high)).Sign() >= 0 {
			continue
		}
		for {
			middle := low + float64((high-low)/2)
			if middle <= low || middle >= high {
				break
			}
			if value(num.FromFloat(middle)).Sign() == sign {
				low = middle
			} else {
				high = middle
			}
		}
		roots = append(roots, polish(num.FromFloat(low), d, e, value))
	}
	return roots
}

// polish takes two Newton steps, kept inside -1..1.
func polish(x, d, e num.DD, value func(num.DD) num.DD) num.DD {
	for range 2 {
		slope := d.MulFloat(3).Mul(x.Square()).Add(e)
		if slope.IsZero() {
			return x
		}
		next := x.Sub(value(x).Div(slope))
		if next.Abs().Cmp(num.FromFloat(1)) >= 0 {
			return x
		}
		x = next
	}
	return x
}
