package reaction

import (
	"math"
	"strconv"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/momentum/breakup"
	"example.org/kinegate/kinematics/num"
)

// PhaseSpaceVolume returns the volume of phase space of two to eight bodies of the
// given masses at the energy excess above the sum of their masses, both in GeV:
//
//	R_n = integral of prod_i d3p_i/(2E_i) delta4(P - sum p_i)
//
// without factors of 2 pi, in GeV^(2n-4).
//
//	R_2 = (pi/2) sqrt(lambda)/s
//	R_n = (pi/2)^(n-1) s^(n-2)/((n-1)!(n-2)!)        all massless
//	R_(k+1)(W) = integral dM^2 R_2(W; M, m) R_k(M)   else
//
// Accuracy: 4e-15 relative for two bodies and for massless ones, 2e-13 for the rest
// (measured against closed forms, other orders of the bodies and 50-digit integrals).
// excess = 0 gives 0; for massless bodies alone it is an Invalid fault. Other excesses
// are within 1e-60..1e30, masses 0 or within 1e-30..1e30.
//
// Each integral runs over the logarithm of M - (smallest M) over W - m - M, by the
// trapezoidal rule. In that variable every branch point of the integrand, all at real
// masses outside the range, has the imaginary part +-pi whatever the masses, so the
// rule converges as exp(-2 pi^2/step), the same for a pion beside a nucleus as for
// equal masses; the ends die out exponentially. R_k enters the next integral by its
// Chebyshev interpolant in log(M - smallest M), which has the same strip.
//
// Source: F. James, Monte Carlo phase space, CERN 68-15 (1968), the recurrence;
// R. Kleiss, W. J. Stirling, S. D. Ellis, Comput. Phys. Commun. 40 (1986) 359, the
// massless volume; E. Byckling and K. Kajantie, Particle Kinematics (1973), chapter VI
// (from memory). The rule: L. N. Trefethen and J. A. C. Weideman, SIAM Rev. 56 (2014)
// 385, theorem 5.1.
func PhaseSpaceVolume(excess float64, masses ...float64) (float64, error) {
	const op = "reaction.PhaseSpaceVolume"
	n := len(masses)
	if n < 2 || n > MaxRangeBodies {
		return 0, fault.New(fault.Invalid, "masses_gev", strconv.Itoa(n), "2 to 8 masses").In(op)
	}
	for i, m := range masses {
		if err := checkSize(op, "masses_gev["+strconv.Itoa(i)+"]", m); err != nil {
			return 0, err
		}
	}
	sum := breakup.Sum(masses...).Float()
	if inside := excess >= smallest*smallest && excess <= largest; !inside && (excess != 0 || sum == 0) {
		return 0, fault.Number("excess_energy_gev", excess, "within 1e-60..1e30, or 0 for bodies with mass").In(op)
	}
	if sum == 0 {
		return masslessVolume(excess, n), nil
	}
	if excess == 0 {
		return 0, nil
	}
	// In units of the excess all numbers stay near 1, whatever the masses.
	scaled := make([]float64, n)
	for i, m := range masses {
		scaled[i] = m / excess
	}
	volume := scaledVolume(scaled)
	for range 2 * (n - 2) {
		volume *= excess
	}
	return volume, nil
}

// PhaseSpaceVolume returns the volume of phase space of the final state: see the
// function of that name.
func (f *FinalState) PhaseSpaceVolume() (float64, error) {
	return PhaseSpaceVolume(f.excess.Float(), f.masses...)
}

// masslessVolume returns (pi/2)^(n-1) w^(2n-4)/((n-1)!(n-2)!).
func masslessVolume(w float64, n int) float64 {
	volume := math.Pi / 2
	for k := 2; k < n; k++ {
		volume *= w * w * (math.Pi / 2) / (float64(k) * float64(k-1))
	}
	return volume
}

// scaledVolume returns the volume of two or more bodies at the excess 1.
func scaledVolume(masses []float64) float64 {
	inner := pairVolume(masses[0], masses[1])
	if len(masses) == 2 {
		return inner(1)
	}
	nodes := logisticNodes()
	sum := masses[0] + masses[1]
	for k := 3; ; k++ {
		m := masses[k-1]
		next := func(excess float64) float64 { return convolve(nodes, excess, sum, m, inner) }
		if k == len(masses) {
			return next(1)
		}
		inner = interpolate(k, next)
		sum += m
	}
}

// pairVolume returns R_2 of two bodies as a function of the excess q:
//
//	(pi/2) sqrt(q (q + 2a + 2b)(q + 2a)(q + 2b))/(q + a + b)^2
func pairVolume(a, b float64) func(q float64) float64 {
	return func(q float64) float64 {
		w := q + a + b
		return math.Pi / 2 * math.Sqrt(q*(w+a+b)) * math.Sqrt((q+float64(2*a))*(q+float64(2*b))) / (w * w)
	}
}

// node is a point of the trapezoidal rule: u and 1 - u = v with weight du.
type node struct{ u, v, weight float64 }

// The rule: u = 1/(1 + exp(-t)) at steps of 0.3 in t. The rule errs by exp(-2 pi^2/0.3) =
// 3e-29 of the integrand at the edges of its strip, which there passes poles of an order
// that grows with the number of bodies: steps of 0.5, 0.4 and 0.3 leave 3e-11, 2e-14
// and 1e-15 for seven bodies. The integrand falls off at least as exp(-3|t|/2), so that
// beyond |t| = 26 less than 1e-16 is left.
const (
	logisticStep = 0.3
	logisticSide = 88
)

func logisticNodes() []node {
	nodes := make([]node, 0, 2*logisticSide+1)
	for i := -logisticSide; i <= logisticSide; i++ {
		t := float64(i) * logisticStep
		u, v := 1/(1+num.Exp(-t)), 1/(1+num.Exp(t))
		nodes = append(nodes, node{u: u, v: v, weight: logisticStep * u * v})
	}
	return nodes
}

// convolve returns the volume of a group and one more body of mass m at the excess q;
// sum is the smallest mass of the group and inner its volume by its own excess.
func convolve(nodes []node, q, sum, m float64, inner func(float64) float64) float64 {
	var volume float64
	for _, n := range nodes {
		x := float64(q * n.u)
		mass := sum + x
		volume += float64(n.weight * mass * pairVolume(mass, m)(float64(q*n.v)) * inner(x))
	}
	return 2 * q * volume
}

// interpolate returns the volume R_k as a function of the excess within 0..1, by the
// Chebyshev interpolant of R_k/q^a in log(q), a = (3k-5)/2.
//
// R_k falls at least as q^a for q -> 0, its law for bodies with mass. What lies below
// the lower end exp(-span) enters the next integral with a factor of at most
// exp(-(a+1) span), set to exp(-46) = 1e-20; there the value is extended by that law.
// With the singularities at +-i pi and half the span h, coefficients fall as
// (y + sqrt(1+y^2))^-i, y = pi/h; the count takes them to exp(-50) of their scale, which
// is large for the poles there.
func interpolate(k int, volume func(float64) float64) func(float64) float64 {
	law := float64(float64(3*k-5) / 2)
	span := 46 / (law + 1)
	half := span / 2
	y := math.Pi / half
	count := int(50/num.Log(y+math.Sqrt(1+float64(y*y)))) + 6
	values := make([]float64, count)
	for j := range values {
		x := half * (num.Cos(math.Pi*(float64(j)+0.5)/float64(count)) - 1)
		values[j] = volume(num.Exp(x)) * num.Exp(-law*x)
	}
	coefficients := chebyshev(values)
	return func(q float64) float64 {
		x := num.Log(q)
		at := math.Max(-1, x/half+1)
		return clenshaw(coefficients, at) * num.Exp(law*x)
	}
}

// chebyshev returns the coefficients of the interpolant through values at the points
// cos(pi (j + 1/2)/n), the first one halved.
//
// Source: W. H. Press et al., Numerical Recipes, 3rd ed. (2007), equation (5.8.7).
func chebyshev(values []float64) []float64 {
	n := len(values)
	coefficients := make([]float64, n)
	for i := range coefficients {
		var sum float64
		for j, v := range values {
			sum += float64(v * num.Cos(math.Pi*float64(i)*(float64(j)+0.5)/float64(n)))
		}
		coefficients[i] = 2 * sum / float64(n)
	}
	coefficients[0] /= 2
	return coefficients
}

// clenshaw returns the sum of coefficients times Chebyshev polynomials at x in -1..1.
func clenshaw(coefficients []float64, x float64) float64 {
	var b1, b2 float64
	for i := len(coefficients) - 1; i > 0; i-- {
		b1, b2 = float64(2*x*b1)-b2+coefficients[i], b1
	}
	return float64(x*b1) - b2 + coefficients[0]
}
