package constraint_test

import (
	"math"
	"testing"

	"example.org/kinegate/kinematics/constraint"
	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/num"
	"example.org/kinegate/kinematics/num/random"
)

// Masses in GeV of testdata/reference/particles.csv.
const (
	proton   = 0.93827208943
	pion     = 0.1349768
	charged  = 0.13957039
	kaon     = 0.493677
	lambda   = 1.115683
	eta      = 0.547862
	electron = 0.00051099895069
)

// toy makes events of one channel: true momenta, and measurements smeared about them
// with resolutions evaluated at the true values. The covariances handed to the fit are
// those, so that what is left of the fit's bias is that of its non-linearity.
type toy struct {
	name string
	spec constraint.Spec
	// truth returns the four-momentum of every object.
	truth func(s *random.Stream) []momentum.Four
	// spread scales all resolutions.
	spread float64
	// spreadZ is the length in metres over which the vertex is spread.
	spreadZ float64
	// flip turns the sign of every error, so that what is linear in them cancels
	// between an event and its flipped twin.
	flip bool
	// atMeasured hands the fit the covariances at the measured values.
	atMeasured bool
}

// normal returns an error in standard deviations.
func (y *toy) normal(s *random.Stream) float64 {
	if y.flip {
		return -s.Normal()
	}
	return s.Normal()
}

// between returns a number within a range, evenly spread. Like all of the toys it rounds
// every product, so that its events are the same on every processor.
func between(s *random.Stream, low, high float64) float64 {
	return low + float64(s.Uniform()*(high-low))
}

func isotropic(s *random.Stream) momentum.Three {
	return momentum.FromAngles(1, num.Acos(between(s, -1, 1)), between(s, -math.Pi, math.Pi))
}

// decayed returns the two products of a parent that decays isotropically.
func decayed(s *random.Stream, parent momentum.Four, m, m1, m2 float64) (first, second momentum.Four) {
	q, err := momentum.TwoBodyMomentum(m, m1, m2)
	if err != nil {
		panic(err)
	}
	b, err := momentum.NewBoost(parent.P, m)
	if err != nil {
		panic(err)
	}
	p := isotropic(s).Scale(q.P)
	return b.FromRest(momentum.WithMass(p, m1)), b.FromRest(momentum.WithMass(p.Neg(), m2))
}

// collision returns the beam and the total of a photon on a proton, and its mass.
func collision(e float64) (beam, total momentum.Four, mass float64) {
	beam = momentum.Four{P: momentum.Three{Z: e}, E: e}
	return beam, momentum.Four{P: beam.P, E: e + proton}, math.Sqrt(proton*proton + float64(2*proton*e))
}

// pionPair returns the four photons of two pions of a total mass.
func pionPair(s *random.Stream, pair momentum.Four, mass float64) []momentum.Four {
	a, b := decayed(s, pair, mass, pion, pion)
	g1, g2 := decayed(s, a, pion, 0, 0)
	g3, g4 := decayed(s, b, pion, 0, 0)
	return []momentum.Four{g1, g2, g3, g4}
}

// twoPions returns proton and four photons of gamma p -> p pi0 pi0, with the beam.
func twoPions(s *random.Stream) (photons []momentum.Four, recoil, beam momentum.Four) {
	beam, total, w := collision(between(s, 1.5, 3.5))
	m := between(s, 2*pion, w-proton)
	recoil, pair := decayed(s, total, w, proton, m)
	return pionPair(s, pair, m), recoil, beam
}

func object(mass float64) constraint.Object {
	return constraint.Object{Form: constraint.Coordinates, Measured: event.AllMeasured, MassGeV: mass}
}

func photons(n int) []constraint.Object {
	out := make([]constraint.Object, n)
	for i := range out {
		out[i] = object(0)
	}
	return out
}

func pairs(n int) []constraint.Mass {
	out := make([]constraint.Mass, n)
	for i := range out {
		out[i] = constraint.Mass{Objects: []int{2 * i, 2*i + 1}, GeV: pion}
	}
	return out
}

// beamAlong is a beam along z times the sign, with bits measured.
func beamAlong(sign float64, measured uint8) constraint.Object {
	return constraint.Object{Form: constraint.Along, Beam: true, Along: momentum.Three{Z: sign}, Measured: measured}
}

// toys are the channels.
func toys() []toy {
	target := momentum.Four{E: proton}
	beam := beamAlong(1, event.FirstMeasured)
	missing := constraint.Object{Form: constraint.Missing, MassGeV: proton}
	repointed := photons(4)
	for i := range repointed {
		repointed[i].Repointed = true
	}
	all := constraint.AllComponents
	return []toy{
		{
			name: "p pi0, proton missing",
			spec: constraint.Spec{Objects: append(photons(2), missing, beam), Known: target, Conserved: all, Masses: pairs(1)},
			truth: func(s *random.Stream) []momentum.Four {
				b, total, w := collision(between(s, 1, 3))
				p, pi := decayed(s, total, w, proton, pion)
				g1, g2 := decayed(s, pi, pion, 0, 0)
				return []momentum.Four{g1, g2, p, b}
			},
		}, {
			name: "p pi0 pi0, proton measured",
			spec: constraint.Spec{Objects: append(photons(4), object(proton), beam), Known: target, Conserved: all, Masses: pairs(2)},
			truth: func(s *random.Stream) []momentum.Four {
				g, p, b := twoPions(s)
				return append(g, p, b)
			},
		}, {
			name: "p pi0 pi0, proton missing",
			spec: constraint.Spec{Objects: append(photons(4), missing, beam), Known: target, Conserved: all, Masses: pairs(2)},
			truth: func(s *random.Stream) []momentum.Four {
				g, p, b := twoPions(s)
				return append(g, p, b)
			},
		}, {
			name: "gamma gamma -> e+ e-, energies unknown",
			spec: constraint.Spec{
				Objects:   []constraint.Object{object(electron), object(electron), beamAlong(1, 0), beamAlong(-1, 0)},
				Conserved: all,
			},
			truth: func(s *random.Stream) []momentum.Four {
				e1, e2 := between(s, 0.5, 1.5), between(s, 0.5, 1.5)
				b1 := momentum.Four{P: momentum.Three{Z: e1}, E: e1}
				b2 := momentum.Four{P: momentum.Three{Z: -e2}, E: e2}
				p, q := decayed(s, b1.Add(b2), math.Sqrt(4*e1*e2), electron, electron)
				return []momentum.Four{p, q, b1, b2}
			},
		}, {
			name: "eta -> 3 pi0",
			spec: constraint.Spec{
				Objects: photons(6),
				Masses:  append(pairs(3), constraint.Mass{Objects: []int{0, 1, 2, 3, 4, 5}, GeV: eta}),
			},
			truth: func(s *random.Stream) []momentum.Four {
				parent := momentum.WithMass(isotropic(s).Scale(between(s, 0.3, 1.3)), eta)
				m := between(s, 2*pion, eta-pion)
				third, pair := decayed(s, parent, eta, pion, m)
				g := pionPair(s, pair, m)
				g5, g6 := decayed(s, third, pion, 0, 0)
				return append(g, g5, g6)
			},
		}, {
			// Proton and pion fly from the decay of the Lambda, where their directions
			// are measured.
			name: "K+ Lambda, displaced decay",
			spec: constraint.Spec{
				Objects: []constraint.Object{object(kaon), object(proton), object(charged), beam},
				Known:   target, Conserved: all, Masses: []constraint.Mass{{Objects: []int{1, 2}, GeV: lambda}},
			},
			truth: func(s *random.Stream) []momentum.Four {
				b, total, w := collision(between(s, 1.3, 2.3))
				k, l := decayed(s, total, w, kaon, lambda)
				p, pi := decayed(s, l, lambda, proton, charged)
				return []momentum.Four{k, p, pi, b}
			},
		}, {
			name: "p eta, proton direction only",
			spec: constraint.Spec{
				Objects: append(photons(2), constraint.Object{
					Form: constraint.Coordinates, Measured: event.DirectionMeasured, MassGeV: proton,
				}, beam),
				Known: target, Conserved: all, Masses: []constraint.Mass{{Objects: []int{0, 1}, GeV: eta}},
			},
			truth: func(s *random.Stream) []momentum.Four {
				b, total, w := collision(between(s, 1.2, 2.2))
				p, h := decayed(s, total, w, proton, eta)
				g1, g2 := decayed(s, h, eta, 0, 0)
				return []momentum.Four{g1, g2, p, b}
			},
		}, {
			name: "p pi0 pi0, vertex free", spreadZ: 0.3,
			spec: constraint.Spec{
				Objects: append(repointed, object(proton), beam), Known: target, Conserved: all,
				Masses: pairs(2), Vertex: constraint.VertexFree,
			},
			truth: func(s *random.Stream) []momentum.Four {
				g, p, b := twoPions(s)
				return append(g, p, b)
			},
		},
	}
}

// event loads a fitter with an event and returns the true momenta and the true vertex.
// Events with a photon below 50 MeV, a track below 100 MeV or anything charged or a
// photon within 0.15 rad of the beam line are drawn again: the choice looks at true
// values only.
func (y *toy) event(f *constraint.Fitter, s *random.Stream) (truth []momentum.Four, z float64) {
	for {
		truth = y.truth(s)
		if y.accepts(truth) {
			break
		}
	}
	z = between(s, -y.spreadZ/2, y.spreadZ/2)
	for i, p := range truth {
		o, m := &y.spec.Objects[i], &f.Measurements[i]
		switch o.Form {
		case constraint.Along:
			sigma := 0.003 * y.spread
			*m = constraint.Beam(p.E+float64(sigma*y.normal(s)), sigma, 0)
		case constraint.Coordinates:
			y.measure(m, o, p, z, s)
		case constraint.Missing, constraint.MissingMass:
		}
	}
	return truth, z
}

func (y *toy) accepts(truth []momentum.Four) bool {
	for i, p := range truth {
		o := &y.spec.Objects[i]
		least := 0.05
		if o.MassGeV > 0 {
			least = 0.1
		}
		theta := p.P.Theta()
		if o.Form == constraint.Coordinates && (p.P.Norm() < least || theta < 0.15 || theta > math.Pi-0.15) {
			return false
		}
	}
	return true
}

// measure smears one object in momentum and angles: 5 %/sqrt(E) and 3 mrad for photons, 1 %
// and 2 mrad for tracks, with a correlation of 0.4 between the size and theta. A
// re-pointed one is found on a sphere of 1 m and seen from its centre.
func (y *toy) measure(m *constraint.Measurement, o *constraint.Object, p momentum.Four, z float64, s *random.Stream) {
	size := p.P.Norm()
	seen := p.P
	if o.Repointed {
		u := p.P.Unit()
		hit := momentum.Three{Z: z}.Add(u.Scale(math.Sqrt(1-float64((z-float64(z*u.Z))*(z+float64(z*u.Z)))) - float64(z*u.Z)))
		m.Origin, m.Cluster, seen = momentum.Three{}, hit, hit
	}
	theta, phi := seen.Theta(), seen.Phi()
	sigma := y.resolution(o, size, theta)
	const rho = 0.4
	x, w, v := y.normal(s), y.normal(s), y.normal(s)
	m.Kind, m.MassGeV = event.MomentumAngles, o.MassGeV
	m.Values = [3]float64{
		size + float64(sigma[0]*x),
		theta + float64(sigma[1]*(float64(rho*x)+float64(math.Sqrt(1-rho*rho)*w))),
		phi + float64(sigma[2]*v),
	}
	if y.atMeasured {
		sigma = y.resolution(o, m.Values[0], m.Values[1])
	}
	m.Covariance = [6]float64{sigma[0] * sigma[0], rho * sigma[0] * sigma[1], 0, sigma[1] * sigma[1], 0, sigma[2] * sigma[2]}
}

// resolution is that of an object of this momentum and angle.
func (y *toy) resolution(o *constraint.Object, size, theta float64) [3]float64 {
	relative, angle := 0.05/math.Sqrt(size), 0.003
	if o.MassGeV > 0 {
		relative, angle = 0.01, 0.002
	}
	return [3]float64{relative * size * y.spread, angle * y.spread, angle / num.Sin(theta) * y.spread}
}

func fitter(t testing.TB, spec *constraint.Spec) *constraint.Fitter {
	t.Helper()
	p, err := constraint.Compile(spec)
	if err != nil {
		t.Fatal(err)
	}
	return p.NewFitter()
}

// moments sums up a quantity.
type moments struct{ n, sum, squares float64 }

func (m *moments) add(x float64) {
	m.n++
	m.sum += x
	m.squares += x * x
}

func (m *moments) mean() float64  { return m.sum / m.n }
func (m *moments) width() float64 { return math.Sqrt(m.squares/m.n - m.mean()*m.mean()) }

// uncertainty is that of the mean.
func (m *moments) uncertainty() float64 { return m.width() / math.Sqrt(m.n) }

// fits runs events of a toy and returns the probabilities, the pulls of each measured
// parameter and the distances from the truth in fitted standard deviations.
func (y *toy) fits(t testing.TB, seed uint64, events int) (probabilities []float64, pulls, distances map[string]*moments) {
	t.Helper()
	f := fitter(t, &y.spec)
	pulls, distances = map[string]*moments{}, map[string]*moments{}
	note := func(to map[string]*moments, name string, x float64) {
		if to[name] == nil {
			to[name] = &moments{}
		}
		to[name].add(x)
	}
	for i := range events {
		s := random.New(seed, random.Generation, int64(i))
		truth, z := y.event(f, &s)
		r := f.Fit()
		if r.Status != constraint.Converged {
			t.Fatalf("event %d: %+v", i, r)
		}
		probabilities = append(probabilities, r.Probability)
		for o := range y.spec.Objects {
			for a := range 3 {
				if pull := f.Pull(o, a); !math.IsNaN(pull) {
					note(pulls, string(rune('0'+o))+"."+string(rune('0'+a)), pull)
				}
			}
			p, c := f.Momentum(o), f.MomentumCovariance(o, o)
			note(distances, string(rune('0'+o))+".E", (p.E-truth[o].E)/math.Sqrt(c[3][3]))
		}
		if y.spec.Vertex == constraint.VertexFree {
			got, sigma := f.VertexZ()
			note(distances, "vertex z", (got-z)/sigma)
		}
	}
	return probabilities, pulls, distances
}
