package reaction

import "example.org/kinegate/kinematics/particle"

// spinAndC reports whether spin, C and Bose symmetry leave room for a final state:
//
//   - The numbers of particles with half-integer spin on both sides differ by an even
//     number (angular momentum).
//   - Two real photons have C = +1: products that all are eigenstates of C must have
//     the product +1.
//   - Two real photons make no single state of spin 1, nor one of odd spin and negative
//     parity (L. D. Landau, Dokl. Akad. Nauk SSSR 60 (1948) 207; C. N. Yang, Phys. Rev.
//     77 (1950) 242, table I, from memory), which is Bose symmetry.
//   - Two real photons make no K0_S K0_L alone: C = +1 asks for even orbital angular
//     momentum, in which the two neutral kaons are alike, as far as CP holds.
func spinAndC(first, second *particle.Particle, count int, product func(i int) *particle.Particle) bool {
	spins, known := 0, true
	c, eigenstates := 1, true
	add := func(p *particle.Particle) {
		spins += max(p.TwiceSpin, 0)
		known = known && p.TwiceSpin >= 0
	}
	add(first)
	add(second)
	for i := range count {
		p := product(i)
		add(p)
		c *= p.CParity
		eigenstates = eigenstates && p.CParity != 0
	}
	switch {
	case spins%2 != 0 && known:
		return false
	case first.Number != numberPhoton || second.Number != numberPhoton:
		return true
	case eigenstates && c < 0:
		return false
	case count == 1:
		p := product(0)
		return p.TwiceSpin != 2 && (p.TwiceSpin%4 != 2 || p.Parity >= 0)
	case count == 2:
		a, b := product(0), product(1)
		return !a.EitherStrangeness || !b.EitherStrangeness || a.Number == b.Number
	}
	return true
}
