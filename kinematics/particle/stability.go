package particle

import "slices"

// markStrongStable sets StrongStable by a rule that needs no decay tables: a state is
// stable against strong decay if no two hadrons (or nuclei) of the table together have
// its charge, baryon number and flavours and a smaller mass. Leptons, photon and weak
// bosons are no hadrons and pass. The rule ignores isospin, parity and G-parity, so it
// calls eta and D_s*+ unstable, whose decays break isospin; it also looks at pairs only,
// which leaves out a nucleus whose lightest split has three parts and no pair.
func markStrongStable(particles []Particle) {
	type class struct {
		numbers Numbers
		mass    float64
	}
	var classes []class // the lightest hadron of each set of quantum numbers
	index := map[Numbers]int{}
	for _, p := range particles {
		if !p.hadronic() || p.EitherStrangeness {
			continue
		}
		i, known := index[p.Numbers]
		if !known {
			index[p.Numbers] = len(classes)
			classes = append(classes, class{p.Numbers, p.Mass})
			continue
		}
		classes[i].mass = min(classes[i].mass, p.Mass)
	}
	for k := range particles {
		p := &particles[k]
		p.StrongStable = true
		if !p.hadronic() {
			continue
		}
		numbers := p.Numbers
		if p.EitherStrangeness { // either one will do: the rule is symmetric
			numbers.Strangeness = 1
		}
		for _, c := range classes {
			i, known := index[numbers.Sub(c.numbers)]
			if known && c.mass+classes[i].mass < p.Mass {
				p.StrongStable = false
				break
			}
		}
	}
}

// hadronic reports whether the state is a meson, baryon or nucleus.
func (p Particle) hadronic() bool {
	c, _ := decode(max(p.Number, -p.Number))
	return c.hadron
}

// IsQuark reports whether the state is a quark, which never flies free.
func (p Particle) IsQuark() bool { return p.Number != 0 && max(p.Number, -p.Number) <= 6 }

// DefaultProducts returns the short list from which open channels are made when none
// is given: the states that are stable against strong decay, and eta, omega, eta' and
// phi. K0 and its antiparticle stand for the neutral kaons, so that K0_S and K0_L do
// not count the same channel again; quarks are left out.
func (t *Table) DefaultProducts() []Particle {
	extra := []int64{221, 223, 331, 333}
	var list []Particle
	for _, p := range t.particles {
		switch {
		case p.EitherStrangeness, p.IsQuark():
		case p.StrongStable, slices.Contains(extra, p.Number):
			list = append(list, p)
		}
	}
	return list
}
