package generation

import (
	"math"
	"strings"
	"testing"

	"example.org/kinegate/kinematics/internal/reference"
)

// The moments of the outside checks without sampling: the generator's own map
// from uniform numbers to masses and weights is integrated by Gauss-Legendre
// quadrature. Ordered numbers r_k = r_(k+1) v_k with v in the unit cube have the
// density (n-2)! product of r_(k+1). For massless particles weight and energy
// are polynomials in the v, so the quadrature is exact; with masses the momenta
// have square-root ends, which v = sin^2(pi x/2) smooths.
func TestChecksGeneratorMoments(t *testing.T) {
	reference.Checks(t, "generator-moments", func(c reference.Check) (any, bool) {
		m := 1.0
		var masses []float64
		if c.Has("M") {
			m, masses = c.Float("M"), c.Floats("masses")
		} else {
			masses = make([]float64, c.Int("n"))
		}
		of := func(ps *PhaseSpace) float64 { // energy of the last particle
			last := ps.n - 1
			return 2 / m * math.Hypot(ps.split[last], ps.mass[last])
		}
		points := 10
		if c.Has("pair") || strings.Contains(c.Quantity, "m12") {
			points = 40
			of = func(ps *PhaseSpace) float64 { return ps.rest[1] * ps.rest[1] }
		}
		return averaged(phaseSpace(t, masses...), m, points, masses[0] > 0, of), true
	})
}

// averaged is the mean of a quantity with the generator's weights.
func averaged(ps *PhaseSpace, m float64, points int, ends bool, of func(*PhaseSpace) float64) float64 {
	x, w := legendre(points)
	weights, products := 0.0, 0.0
	u := ps.uniform[:ps.n-2]
	var sum func(k int, above, measure float64)
	sum = func(k int, above, measure float64) {
		if k < 0 {
			v := measure * ps.masses(m)
			weights += v
			products += v * of(ps)
			return
		}
		for i := range x {
			v, slope := x[i], 1.0
			if ends {
				v = math.Pow(math.Sin(math.Pi/2*x[i]), 2)
				slope = math.Pi / 2 * math.Sin(math.Pi*x[i])
			}
			u[k] = above * v
			sum(k-1, u[k], measure*w[i]*slope*above)
		}
	}
	sum(ps.n-3, 1, 1)
	return products / weights
}

// legendre returns nodes and weights of Gauss-Legendre quadrature on [0, 1], by
// Newton's method on the recurrence.
func legendre(n int) (x, w []float64) {
	for i := range n {
		z := math.Cos(math.Pi * (float64(i) + 0.75) / (float64(n) + 0.5))
		slope := 0.0
		for range 20 {
			p0, p1 := 1.0, z
			for k := 2; k <= n; k++ {
				p0, p1 = p1, (float64(2*k-1)*z*p1-float64(k-1)*p0)/float64(k)
			}
			slope = float64(n) * (z*p1 - p0) / (z*z - 1)
			z -= p1 / slope
		}
		x = append(x, (1+z)/2)
		w = append(w, 1/((1-z*z)*slope*slope))
	}
	return x, w
}
