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
	// mass of particle k, and sum of the masses 0 to k.
	mass, sum [MaxBodies]float64
	// rest is the mass of particles 0 to k together and inverse its inverse;
	// split and energy are the momentum and the energy of particle k against
	// particles 0 to k-1 in their common rest frame.
	rest, inverse, split, energy [MaxBodies]float64
	constant                     float64
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
		ps.mass[k], ps.sum[k] = m, sum
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
	var u [3 * MaxBodies]float64
	n := ps.n
	s.Uniforms(u[:3*n-4])
	w := ps.masses(u[:n-2], m)
	if w > 0 {
		ps.place(u[n-2:3*n-4], total, m, out, nil)
	}
	return w
}

// drawMasses draws the masses of the rests for a total mass m and returns the
// weight.
func (ps *PhaseSpace) drawMasses(s *random.Stream, m float64) float64 {
	var u [MaxBodies]float64
	s.Uniforms(u[:ps.n-2])
	return ps.masses(u[:ps.n-2], m)
}

// masses sets the masses of the rests from n-2 uniform numbers and returns the
// weight.
func (ps *PhaseSpace) masses(u []float64, m float64) float64 {
	n := ps.n
	t := m - ps.sum[n-1]
	var r [MaxBodies]float64
	for k, v := range u { // sorted by insertion
		i := k + 1
		for i > 1 && r[i-1] > v {
			r[i] = r[i-1]
			i--
		}
		r[i] = v
	}
	if !(t > 0) {
		return 0
	}
	r[n-1] = 1
	w := ps.constant
	below := ps.mass[0]
	for k := 1; k < n; k++ {
		// The excess of each split is its own quantity, never a difference of
		// masses that both hold the sums.
		q := float64((r[k] - r[k-1]) * t)
		whole, mass := m, ps.mass[k]
		if k < n-1 {
			whole = ps.sum[k] + float64(r[k]*t)
			w *= t
		}
		// splitMomentum, and m_k + q (q + 2 M_(k-1))/(2 M_k), with one division,
		// which the boosts use again: divisions and roots are what this costs.
		inverse := 1 / whole
		half := 0.5 * inverse
		p := math.Sqrt(q*(q+(mass+mass))*(q+(below+below))*(whole+below+mass)) * half
		ps.rest[k], ps.inverse[k], ps.split[k] = whole, inverse, p
		ps.energy[k] = mass + float64(q*(q+(below+below))*half)
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

// drawPlaces draws directions and places the particles.
func (ps *PhaseSpace) drawPlaces(s *random.Stream, total momentum.Four, m float64, out []momentum.Four, first *momentum.Three) {
	var u [2 * MaxBodies]float64
	splits := ps.n - 1
	if first != nil {
		splits--
	}
	s.Uniforms(u[:2*splits])
	ps.place(u[:2*splits], total, m, out, first)
}

// place writes the four-momenta for the masses set before, in the directions
// that two uniform numbers a split give. Where first is given it is the
// direction of the last particle in the total's rest frame.
func (ps *PhaseSpace) place(u []float64, total momentum.Four, m float64, out []momentum.Four, first *momentum.Three) {
	last := ps.n - 1
	var directed [MaxBodies]momentum.Three
	direct(u, &ps.split, &directed)
	if first != nil {
		directed[last] = first.Scale(ps.split[last])
	}
	px, py, pz, e := total.P.X, total.P.Y, total.P.Z, total.E
	for k := last; k > 0; k-- {
		q, mass, es, inverse := &directed[k], ps.mass[k], ps.energy[k], ps.inverse[k]
		// Boost of q with the energy es along the total's own motion:
		// q + P ((P.q)/(E + M) + es)/M, and its energy (E es + P.q)/M.
		along := float64(px*q.X) + float64(py*q.Y) + float64(pz*q.Z)
		f := (along/(e+m) + es) * inverse
		x, y, z := q.X+float64(px*f), q.Y+float64(py*f), q.Z+float64(pz*f)
		out[k] = momentum.Four{
			P: momentum.Three{X: x, Y: y, Z: z},
			E: shell(x, y, z, mass),
		}
		// The rest takes what is left, so that momentum is conserved to the last
		// bit of the larger term. Its energy serves the next boost alone, which
		// forgives the rounding of this difference: it is that of the total.
		px, py, pz = px-x, py-y, pz-z
		e -= float64((float64(e*es) + along) * inverse)
		m = ps.rest[k-1]
	}
	out[0] = momentum.Four{P: momentum.Three{X: px, Y: py, Z: pz}, E: shell(px, py, pz, ps.mass[0])}
}

// shell is the energy of a momentum on the shell of mass m.
func shell(x, y, z, m float64) float64 {
	return math.Sqrt(float64(x*x) + float64(y*y) + (float64(z*z) + float64(m*m)))
}

// direct gives the momenta of the splits a random direction each. It is apart
// from place so that fewer values have to be saved around the sines.
func direct(u []float64, split *[MaxBodies]float64, directed *[MaxBodies]momentum.Three) {
	for k := 1; k < MaxBodies && 2*k <= len(u); k++ {
		sin, cos := num.SincosTurn(u[2*k-1])
		directed[k] = onSphere(u[2*k-2], sin, cos, split[k])
	}
}

// isotropic is the vector of length p in the direction that two uniform numbers
// give.
func isotropic(u, v, p float64) momentum.Three {
	sin, cos := num.SincosTurn(v)
	return onSphere(u, sin, cos, p)
}

// onSphere is the vector of length p with cos theta = 2u - 1, sin theta =
// 2 sqrt(u (1 - u)) and the sine and cosine of its azimuth.
func onSphere(u, sin, cos, p float64) momentum.Three {
	transverse := 2 * p * math.Sqrt(u*(1-u))
	return momentum.Three{X: transverse * cos, Y: transverse * sin, Z: p * (u - (1 - u))}
}
