package generation

import (
	"math"
	"sort"
	"strconv"

	"example.org/kinegate/kinematics/fault"
)

// Curve is a density given by points and straight lines between them. It is
// normalised by whoever draws from it.
type Curve struct {
	// X are the increasing places, at least two.
	X []float64
	// Y are the densities there, not negative, not all zero.
	Y []float64
}

// faults appends what is wrong with the curve as a density on [low, high].
func (c *Curve) faults(list fault.List, field string, low, high float64) fault.List {
	if len(c.X) < 2 || len(c.X) != len(c.Y) {
		return append(list, fault.New(fault.Invalid, field+".x", strconv.Itoa(len(c.X))+" points", "as many as values beside them, at least 2"))
	}
	for i, x := range c.X {
		if !(x >= low && x <= high) {
			list = append(list, fault.Number(field+".x["+strconv.Itoa(i)+"]", x, fault.Text(low)+" to "+fault.Text(high)))
		} else if i > 0 && !(x > c.X[i-1]) {
			list = append(list, fault.Number(field+".x["+strconv.Itoa(i)+"]", x, "> "+fault.Text(c.X[i-1])))
		}
	}
	return contents(list, field+".y", c.Y)
}

// At is the curve's value at x, 0 outside its points.
func (c *Curve) At(x float64) float64 {
	last := len(c.X) - 1
	if last < 1 || !(x >= c.X[0] && x <= c.X[last]) {
		return 0
	}
	i := max(1, sort.SearchFloat64s(c.X, x)) // the first point not below x
	return between(c.Y[i-1], c.Y[i], (x-c.X[i-1])/(c.X[i]-c.X[i-1]))
}

// inverse draws from a Curve by the inverse of its integral.
type inverse struct {
	x, y, sums []float64
}

func newInverse(c *Curve) *inverse {
	areas := make([]float64, len(c.X)-1)
	for i := range areas {
		areas[i] = (c.X[i+1] - c.X[i]) * (c.Y[i] + c.Y[i+1]) / 2
	}
	return &inverse{x: c.X, y: c.Y, sums: cumulate(areas)}
}

// at returns the place below which the fraction u of the density lies. Inside a
// piece from y0 to y1 the fraction v of its area lies below the fraction
//
//	f = v (y0 + y1)/(y0 + sqrt(y0^2 + v (y1 - y0)(y1 + y0)))
//
// of its width: the root of a quadratic in the form that subtracts nothing.
func (c *inverse) at(u float64) float64 {
	i, v := choose(c.sums, u)
	y0, y1 := c.y[i], c.y[i+1]
	root := math.Sqrt(max(0, float64(y0*y0)+float64(v*(y1-y0)*(y1+y0))))
	f := v * (y0 + y1) / (y0 + root)
	return between(c.x[i], c.x[i+1], min(f, 1))
}
