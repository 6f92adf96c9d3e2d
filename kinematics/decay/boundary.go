package decay

import (
	"math"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/num"
)

// The most points of a traced boundary.
const maxBoundaryPoints = 1 << 16

// Boundary returns the boundary of the region as a closed curve: points in order, the
// last one next to the first, no two neighbours further apart than resolution times the
// extent of the region in the mass squared of bodies 0, 1 and in that of bodies 1, 2.
//
//	m01^2 = (m0+m1)^2 + span sin^2(phi/2),  span = (M-m2)^2 - (m0+m1)^2
//
// with phi in equal steps over a full turn: the largest m12^2 for phi in 0..pi and the
// least on the way back. Both meet at the ends like a square root of m01^2, so that the
// curve is smooth in phi there and has no clumps. Every point is on the boundary within
// 4e-15 relative of each coordinate.
//
// Domain: resolution within 0.0005..1, else an Invalid fault. At threshold the region is
// a point.
func (d *Dalitz) Boundary(resolution float64) ([]Point, error) {
	const op = "decay.Boundary"
	if !(resolution >= 5e-4 && resolution <= 1) {
		return nil, fault.Number("resolution", resolution, ">= 0.0005 and <= 1").In(op)
	}
	for count := 8; ; count *= 2 {
		points := d.trace(count)
		if count >= maxBoundaryPoints || widestStep(points) <= resolution {
			return points, nil
		}
	}
}

// trace returns a boundary of count points, one more of them where two massless bodies
// make both ends of the chord at phi = 0 differ.
func (d *Dalitz) trace(count int) []Point {
	m0, m1, m2 := d.mass[0], d.mass[1], d.mass[2]
	pair := num.Sum2(m0, m1)
	low := pair.Square()
	// (M-m2)^2 - (m0+m1)^2 = (M-m0-m1-m2)(M-m2+m0+m1).
	span := d.less(m0, m1, m2).Mul(d.less(m2).Add(pair))
	points := make([]Point, 0, count+1)
	for i := range count {
		half := num.Pi().MulFloat(float64(i) / float64(count))
		sin, cos := half.Sincos()
		above, below := span.Mul(sin.Square()), span.Mul(cos.Square())
		if 2*i == count { // The far end, where the cosine of pi/2 leaves a rounding.
			below = num.DD{}
		}
		chord := d.chord(Couple01, low.Add(above), above, below)
		if i == 0 && chord.From != chord.To {
			points = append(points, chord.To)
		}
		if 2*i <= count {
			points = append(points, chord.From)
		} else {
			points = append(points, chord.To)
		}
	}
	return points
}

// widestStep returns the largest distance of two neighbours, in units of the extents.
func widestStep(points []Point) float64 {
	low, high := points[0], points[0]
	for _, p := range points {
		low.M01, high.M01 = math.Min(low.M01, p.M01), math.Max(high.M01, p.M01)
		low.M12, high.M12 = math.Min(low.M12, p.M12), math.Max(high.M12, p.M12)
	}
	x, y := high.M01-low.M01, high.M12-low.M12
	if x == 0 || y == 0 {
		return 0
	}
	widest := 0.0
	for i, p := range points {
		next := points[(i+1)%len(points)]
		widest = math.Max(widest, num.Hypot((next.M01-p.M01)/x, (next.M12-p.M12)/y))
	}
	return widest
}
