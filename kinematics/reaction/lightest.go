package reaction

import (
	"example.org/kinegate/kinematics/momentum/breakup"
	"example.org/kinegate/kinematics/particle"
)

// finalStates are the final states of a reaction that may be held against an energy; they
// follow from it alone and are made once.
type finalStates struct {
	// nominal are the particles of the right side, lightest those of the stated decays.
	nominal, lightest []particle.Particle
	// widened tells whether the two differ.
	widened bool
	// known is false for an inclusive reaction without a known X.
	known bool
	// The measured masses of either, for two initial particles.
	nominalShares, lightestShares []share
}

// finalStates finds the final states.
func (r *Reaction) finalStates() finalStates {
	f := finalStates{known: true}
	for _, n := range r.Top {
		f.nominal = append(f.nominal, r.Products[n].Particle)
		f.lightest = r.lightest(f.lightest, n)
	}
	if r.Inclusive {
		if f.known = r.Remainder != nil && len(r.Remainder.Lightest) > 0; f.known {
			f.nominal = append(f.nominal, r.Remainder.Lightest...)
			f.lightest = append(f.lightest, r.Remainder.Lightest...)
		}
	}
	f.widened = !sameParticles(f.nominal, f.lightest)
	if len(r.Initial) == 2 {
		f.nominalShares = shares(&r.Initial[0], &r.Initial[1], f.nominal)
		f.lightestShares = shares(&r.Initial[0], &r.Initial[1], f.lightest)
	}
	return f
}

// sameParticles reports whether two lists hold the same particles in the same order.
func sameParticles(a, b []particle.Particle) bool {
	if len(a) != len(b) {
		return false
	}
	for i := range a {
		if a[i].Number != b[i].Number {
			return false
		}
	}
	return true
}

// lightest adds what a product may be at least: itself if it is sharp or no decay is
// stated, otherwise its daughters.
func (r *Reaction) lightest(list []particle.Particle, n int) []particle.Particle {
	p := &r.Products[n]
	if len(p.Daughters) == 0 || p.Particle.Sharp(particle.SharpWidth) {
		return append(list, p.Particle)
	}
	for _, d := range p.Daughters {
		list = r.lightest(list, d)
	}
	return list
}

// LightestMass returns the least mass in GeV that the product with the given number can
// have: its own if it is sharp or no decay is stated, otherwise the sum of its daughters'
// least masses. Domain: 0 <= number < len(Products).
func (r *Reaction) LightestMass(number int) float64 {
	return breakup.Sum(massesOf(r.lightest(nil, number))...).Float()
}
