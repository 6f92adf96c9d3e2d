package generation

import (
	"math"
	"strconv"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/num"
	"example.org/kinegate/kinematics/num/random"
)

// MaxBodies is the largest number of particles of one production or decay.
const MaxBodies = 12

// PhaseSpace draws points of n-body phase space by a chain of two-body splits:
// the total splits into the last particle and the rest, the rest splits in
// turn, down to the first two. With n-2 sorted uniform numbers r_k the rest of
// the first k particles has the mass
//
//	M_k = m_1 + ... + m_k + r_k T,  T = M - sum m,
//
// every split is isotropic in its rest frame, and the point's weight
//
//	w = pi^(n-1) 2^(n-2)/(n-2)! T^(n-2)/M p_2 p_3 ... p_n
//
// with the momenta p_k of the splits is its density: the mean weight is the
// volume, the integral of prod d3p/(2E) delta4(P - sum p), in GeV^(2n-4).
//
// Source: F. James, "Monte Carlo phase space", CERN 68-15 (1968), in the
// normalisation of E. Byckling and K. Kajantie, "Particle kinematics" (1973).
//
// A PhaseSpace carries its working memory, so each goroutine needs its own.
type PhaseSpace struct {
	n int
	// mass of particle k, its square, and the sum of the masses 0 to k.
	mass, square, sum [MaxBodies]float64
	// rest is the mass of particles 0 to k together and inverse its inverse; split
	// is the momentum of particle k against particles 0 to k-1 in their common rest
	// frame, and share its energy there over the rest's mass.
	rest, inverse, split, share [MaxBodies]float64
	constant                    float64
	// uniform and sorted are working memory of a point: its random numbers, and the
	// bits of those that give the masses in rising order.
	uniform [3 * MaxBodies]float64
	sorted  [MaxBodies]uint64
}

// NewPhaseSpace returns the phase space of particles with the given masses in
// GeV: 2 to MaxBodies of them, each finite and not negative.
func NewPhaseSpace(masses []float64) (*PhaseSpace, error) {
	if len(masses) < 2 || len(masses) > MaxBodies {
		return nil, fault.New(fault.Invalid, "masses.length", strconv.Itoa(len(masses)),
			"2 to "+strconv.Itoa(MaxBodies)).In("generation.NewPhaseSpace")
	}
	for i, m := range masses {
		if !(m >= 0 && m <= math.MaxFloat64) {
			return nil, fault.Number("masses["+strconv.Itoa(i)+"]", m, ">= 0 and finite").In("generation.NewPhaseSpace")
		}
	}
	ps := phaseSpaceOf(len(masses))
	ps.setMasses(masses)
	return &ps, nil
}

// phaseSpaceOf returns the phase space of n particles whose masses are still
// to be set.
func phaseSpaceOf(n int) PhaseSpace {
	constant := math.Pi
	for k := 2; k < n; k++ {
		constant *= 2 * math.Pi / float64(k-1)
	}
	return PhaseSpace{n: n, constant: constant}
}

func (ps *PhaseSpace) setMasses(masses []float64) {
	sum := 0.0
	for k, m := range masses {
		sum += m
		ps.mass[k], ps.square[k], ps.sum[k] = m, m*m, sum
	}
	ps.rest[0] = ps.mass[0]
}

// Draw draws a point for the total four-momentum of mass m > 0, writes the
// particles' four-momenta to out, which has room for all of them, and returns
// the weight. Where m is not above the sum of the masses the weight is 0 and
// out is left alone. It draws n-2 uniform numbers and then two for each split.
//
// Accuracy: every momentum is on its mass shell to 4 x 2^-53 E^2, and the sums
// are those of the total to 2n x 2^-52 of the largest energy.
func (ps *PhaseSpace) Draw(s *random.Stream, total momentum.Four, m float64, out []momentum.Four) float64 {
	n := ps.n
	s.Uniforms(ps.uniform[:3*n-4])
	w := ps.masses(m)
	if w > 0 {
		ps.place(total, m, out, ps.uniform[n-2:3*n-4], nil)
	}
	return w
}

// drawMasses draws the masses of the rests for a total mass m and returns the
// weight.
func (ps *PhaseSpace) drawMasses(s *random.Stream, m float64) float64 {
	s.Uniforms(ps.uniform[:ps.n-2])
	return ps.masses(m)
}

// masses sets the masses of the rests from the first n-2 uniform numbers and
// returns the weight.
func (ps *PhaseSpace) masses(m float64) float64 {
	n := ps.n
	if n < 2 || n > MaxBodies {
		return 0 // never, but then the compiler checks no index of the loops
	}
	t := m - ps.sum[n-1]
	if !(t > 0) {
		return 0
	}
	r := &ps.sorted
	for k := 1; k < n-1; k++ {
		// Sorted by insertion, as bits: those of positive numbers are in the same
		// order, and choosing the lesser needs no branch.
		v := math.Float64bits(ps.uniform[k-1])
		for i := 1; i < k; i++ {
			v, r[i] = max(v, r[i]), min(v, r[i])
		}
		r[k] = v
	}
	r[n-1] = math.Float64bits(1)
	w := ps.constant
	below, last := ps.mass[0], 0.0
	for k := 1; k < n; k++ {
		// The excess of each split is its own quantity, never a difference of
		// masses that both hold the sums.
		share := math.Float64frombits(r[k])
		q := float64((share - last) * t)
		last = share
		whole, mass := m, ps.mass[k]
		if k < n-1 {
			whole = ps.sum[k] + float64(share*t)
			w *= t
		}
		// splitMomentum, and e_k = m_k + q (q + 2 M_(k-1))/(2 M_k), with one division,
		// which the boosts use again: divisions and roots are what this costs.
		inverse := 1 / whole
		half := 0.5 * inverse
		p := math.Sqrt(q*(q+(mass+mass))*(q+(below+below))*(whole+below+mass)) * half
		ps.rest[k], ps.inverse[k], ps.split[k] = whole, inverse, p
		ps.share[k] = (mass + float64(q*(q+(below+below))*half)) * inverse
		below = whole
		w *= p
	}
	return w * ps.inverse[n-1]
}

// splitMomentum is the momentum of the two parts a, b of a system of mass m
// with the excess energy q = m - a - b >= 0, from the Kallen function in its
// four factors, none of which is a difference:
//
//	p = sqrt(q (q + 2a) (q + 2b) (m + a + b)) / (2m)
func splitMomentum(q, m, a, b float64) float64 {
	return math.Sqrt(q*(q+(a+a))*(q+(b+b))*(m+a+b)) / (m + m)
}

// ceiling is an upper bound of the weight at a total mass m: every split has at
// most the whole excess energy, and its momentum grows with that and falls with
// the masses of the parts.
func (ps *PhaseSpace) ceiling(m float64) float64 {
	n := ps.n
	t := m - ps.sum[n-1]
	if !(t > 0) {
		return 0
	}
	w := ps.constant / m
	for k := 1; k < n; k++ {
		if k < n-1 {
			w *= t
		}
		w *= splitMomentum(t, ps.sum[k]+t, ps.sum[k-1], ps.mass[k])
	}
	return w
}

// drawPlaces draws directions and places the particles. Where first is given it
// is the direction of the last particle in the total's rest frame.
func (ps *PhaseSpace) drawPlaces(s *random.Stream, total momentum.Four, m float64, out []momentum.Four, first *momentum.Three) {
	splits := ps.n - 1
	if first != nil {
		splits--
	}
	s.Uniforms(ps.uniform[:2*splits])
	ps.place(total, m, out, ps.uniform[:2*splits], first)
}

// place writes the four-momenta for the masses set before and for directions, two uniform
// numbers a split and first for the last of them where it is given. A direction is made
// where it is used: the processor then works on it while it waits for the boost before.
func (ps *PhaseSpace) place(total momentum.Four, m float64, out []momentum.Four, u []float64, first *momentum.Three) {
	last := ps.n - 1
	if last >= MaxBodies || last >= len(out) {
		return // never, but then the compiler checks no index of the loop
	}
	px, py, pz, e := total.P.X, total.P.Y, total.P.Z, total.E
	for k := last; k > 0; k-- {
		split, share, inverse := ps.split[k], ps.share[k], ps.inverse[k]
		var q momentum.Three
		if first == nil {
			q = isotropic(u[2*k-2], u[2*k-1], split)
		} else {
			q, first = first.Scale(split), nil
		}
		// Boost of q with the energy e_k along the total's own motion,
		// q + P ((P.q)/(E + M) + e_k)/M, and its energy (E e_k + P.q)/M. The division
		// does not wait for P.q.
		along := float64(px*q.X) + float64(py*q.Y) + float64(pz*q.Z)
		f := float64(along*(inverse/(e+m))) + share
		x, y, z := q.X+float64(px*f), q.Y+float64(py*f), q.Z+float64(pz*f)
		out[k] = momentum.Four{
			P: momentum.Three{X: x, Y: y, Z: z},
			E: shell(x, y, z, ps.square[k]),
		}
		// The rest takes what is left, so that momentum is conserved to the last
		// bit of the larger term. Its energy serves the next boost alone, which
		// forgives the rounding of this difference: it is that of the total.
		px, py, pz = px-x, py-y, pz-z
		e -= float64(e*share) + float64(along*inverse)
		m = ps.rest[k-1]
	}
	out[0] = momentum.Four{P: momentum.Three{X: px, Y: py, Z: pz}, E: shell(px, py, pz, ps.square[0])}
}

// shell is the energy of a momentum on the shell of a squared mass.
func shell(x, y, z, square float64) float64 {
	return math.Sqrt(float64(x*x) + float64(y*y) + (float64(z*z) + square))
}

// isotropic is the vector of length p in the direction that two uniform numbers give,
// with cos theta = 2u - 1, sin theta = 2 sqrt(u (1 - u)) and v of a turn as its azimuth.
func isotropic(u, v, p float64) momentum.Three {
	sin, cos := num.SincosTurn(v)
	transverse := 2 * p * math.Sqrt(u*(1-u))
	return momentum.Three{X: transverse * cos, Y: transverse * sin, Z: p * (u - (1 - u))}
}
