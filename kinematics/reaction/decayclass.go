package reaction

import (
	"strconv"

	"example.org/kinegate/kinematics/particle"
)

// DecayClass is the interaction by which a decay goes, as far as its particles and
// additive quantum numbers tell.
type DecayClass uint8

// The classes of decays.
const (
	// Strong: every flavour is conserved and only hadrons take part.
	Strong DecayClass = iota + 1
	// Electromagnetic: every flavour is conserved, and photons or charged leptons take
	// part.
	Electromagnetic
	// Weak: a flavour changes, or a neutrino or a weak boson takes part, or a lepton
	// decays. Inclusive decays, whose flavours are open, count here.
	Weak
)

// String returns the class in words.
func (c DecayClass) String() string {
	switch c {
	case Strong:
		return "strong"
	case Electromagnetic:
		return "electromagnetic"
	case Weak:
		return "weak"
	}
	return "DecayClass(" + strconv.Itoa(int(c)) + ")"
}

// classify classes a decay. Isospin, parity and G-parity are not looked at, so a
// decay such as eta -> pi+ pi- pi0, which breaks isospin, counts as strong.
func (r *Reaction) classify(parent *particle.Particle, daughters []int, left, right sum) DecayClass {
	if len(differ(AllLaws, left, right)) > 0 {
		return Weak
	}
	class := max(Strong, interaction(parent))
	if class == Electromagnetic && parent.Number != numberPhoton { // a charged lepton that decays
		class = Weak
	}
	for _, n := range daughters {
		class = max(class, interaction(&r.Products[n].Particle))
	}
	return class
}

const numberPhoton = 22

// interaction is the strongest interaction a particle takes part in.
func interaction(p *particle.Particle) DecayClass {
	number := max(p.Number, -p.Number)
	switch {
	case number == numberPhoton:
		return Electromagnetic
	case isLepton(p) && p.ChargeThirds() != 0:
		return Electromagnetic
	case isLepton(p), number == 23, number == 24, number == 25:
		return Weak
	}
	return Strong
}

// isLepton reports whether the particle is a lepton.
func isLepton(p *particle.Particle) bool {
	n := p.Numbers
	return n.Electron != 0 || n.Muon != 0 || n.Tau != 0
}
