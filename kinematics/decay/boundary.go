package decay

import (
	"math"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/num"
)

// Boundary returns the boundary of the region as a closed curve: points in order, the
// last one next to the first, no two neighbours further apart than resolution times the
// extent of the region in the mass squared of bodies 0, 1 and in that of bodies 1, 2.
//
//	m01^2 = (m0+m1)^2 + span sin^2(pi f),  span = (M-m2)^2 - (m0+m1)^2,  f in 0..1
//
// The first half of f has the largest m12^2 and the second, on the way back, the least.
// Both meet at the ends like a square root of m01^2, so that the curve is smooth in f
// there. Steps in f are halved until the resolution is met, as they must be near the
// corners of very light bodies. Every coordinate is within 4e-15 relative.
//
// Domain: resolution within 0.0005..1, else an Invalid fault. At threshold the region is
// a point.
func (d *Dalitz) Boundary(resolution float64) ([]Point, error) {
	if !(resolution >= 5e-4 && resolution <= 1) {
		return nil, fault.Number("resolution", resolution, ">= 0.0005 and <= 1").In("decay.Boundary")
	}
	curve := d.curve()
	start, end := curve.at(0), curve.at(1)
	points := []Point{start}
	const pieces = 8
	for i := range pieces {
		points = curve.refine(points, float64(i)/pieces, float64(i+1)/pieces, resolution)
	}
	if start == end {
		return points[:len(points)-1], nil
	}
	return curve.straight(points, end, start, resolution), nil
}

// curve is the boundary over f in 0..1.
type curve struct {
	region    *Dalitz
	low, span num.DD
	// The extents that distances are measured by.
	x, y float64
}

func (d *Dalitz) curve() curve {
	m0, m1, m2 := d.mass[0], d.mass[1], d.mass[2]
	pair := num.Sum2(m0, m1)
	// (M-m2)^2 - (m0+m1)^2 = (M-m0-m1-m2)(M-m2+m0+m1), and alike for the other pair.
	excess := d.less(m0, m1, m2)
	c := curve{region: d, low: pair.Square(), span: excess.Mul(d.less(m2).Add(pair))}
	c.x = c.span.Float()
	c.y = excess.Mul(d.less(m0).Add(num.Sum2(m1, m2))).Float()
	return c
}

// at returns the point at f. The far end has the cosine of pi/2 exactly 0, and both ends
// of the curve have the sine of pi and of 0 so.
func (c *curve) at(f float64) Point {
	sin, cos := num.Pi().MulFloat(f).Sincos()
	switch f {
	case 0.5:
		cos = num.DD{}
	case 1:
		sin = num.DD{}
	}
	above := c.span.Mul(sin.Square())
	chord := c.region.chord(Couple01, c.low.Add(above), above, c.span.Mul(cos.Square()))
	if f <= 0.5 {
		return chord.From
	}
	return chord.To
}

// distance returns how far apart two points are in units of the extents.
func (c *curve) distance(p, q Point) float64 {
	if c.x == 0 || c.y == 0 {
		return 0
	}
	return num.Hypot((q.M01-p.M01)/c.x, (q.M12-p.M12)/c.y)
}

// refine appends the points after f, whose point is the last one, up to the point at g.
func (c *curve) refine(points []Point, f, g, resolution float64) []Point {
	q := c.at(g)
	middle := f + float64((g-f)/2)
	// Steps of f end where f itself has no finer ones.
	if c.distance(points[len(points)-1], q) <= resolution || middle <= f || middle >= g {
		return append(points, q)
	}
	points = c.refine(points, f, middle, resolution)
	return c.refine(points, middle, g, resolution)
}

// straight appends points along the straight side between the ends of the curve, which
// two massless bodies have where they fly together.
func (c *curve) straight(points []Point, from, to Point, resolution float64) []Point {
	steps := math.Floor(c.distance(from, to)/resolution) + 1
	for i := 1.0; i < steps; i++ {
		share := i / steps
		points = append(points, Point{
			M01: from.M01,
			M02: from.M02 + float64(share*(to.M02-from.M02)),
			M12: from.M12 + float64(share*(to.M12-from.M12)),
		})
	}
	return points
}
