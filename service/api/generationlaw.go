package api

import (
	"example.org/kinegate/kinematics/generation"
	"example.org/kinegate/kinematics/particle"
	"example.org/kinegate/kinematics/reaction"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// law converts an angular law, which must be that of the reaction; p is the product whose
// angle it shapes.
func (g *generationForm) law(path string, r *reaction.Reaction, p *particle.Particle, law kinegatev1.AngularLaw) generation.AngularLaw {
	holds := law == lawOf(r)
	allowed := "a law of the contract"
	switch law {
	case kinegatev1.AngularLaw_ANGULAR_LAW_PAIR_CREATION:
		if holds {
			return generation.PairCreation
		}
		allowed = "only for gamma gamma -> l+ l-"
	case kinegatev1.AngularLaw_ANGULAR_LAW_ANNIHILATION:
		if holds {
			return generation.Annihilation
		}
		allowed = "only for l+ l- -> gamma gamma"
	case kinegatev1.AngularLaw_ANGULAR_LAW_COMPTON:
		if holds && isPhoton(p) {
			return generation.ComptonScattering
		}
		allowed = "only for gamma e- -> gamma e-, and for its photon"
	case kinegatev1.AngularLaw_ANGULAR_LAW_UNSPECIFIED:
	}
	g.need(path, law.String(), allowed)
	return generation.NoLaw
}

// lawOf is the law of quantum electrodynamics for a reaction; unspecified for none.
func lawOf(r *reaction.Reaction) kinegatev1.AngularLaw {
	if len(r.Initial) != 2 || len(r.Top) != 2 {
		return kinegatev1.AngularLaw_ANGULAR_LAW_UNSPECIFIED
	}
	var in, out [2]*particle.Particle
	for k := range in {
		in[k], out[k] = &r.Initial[k], &r.Products[r.Top[k]].Particle
	}
	oneOfEach := func(pair [2]*particle.Particle) bool {
		return isPhoton(pair[0]) && isChargedLepton(pair[1]) || isChargedLepton(pair[0]) && isPhoton(pair[1])
	}
	switch {
	case isPhoton(in[0]) && isPhoton(in[1]) && isLeptonPair(out[0], out[1]):
		return kinegatev1.AngularLaw_ANGULAR_LAW_PAIR_CREATION
	case isLeptonPair(in[0], in[1]) && isPhoton(out[0]) && isPhoton(out[1]):
		return kinegatev1.AngularLaw_ANGULAR_LAW_ANNIHILATION
	case oneOfEach(in) && oneOfEach(out):
		return kinegatev1.AngularLaw_ANGULAR_LAW_COMPTON
	}
	return kinegatev1.AngularLaw_ANGULAR_LAW_UNSPECIFIED
}

// lawRemarks says of a reaction that is made isotropic that a law for it exists.
func lawRemarks(r *reaction.Reaction, angle *kinegatev1.ProductionAngle) []string {
	law := lawOf(r)
	if angle != nil || law == kinegatev1.AngularLaw_ANGULAR_LAW_UNSPECIFIED {
		return nil
	}
	return []string{"isotropic in the centre of mass; " + law.String() + " of the channel's angle, in a generation file, is the law of " +
		"quantum electrodynamics"}
}

func isPhoton(p *particle.Particle) bool { return p.Number == 22 }

func isLeptonPair(a, b *particle.Particle) bool {
	return isChargedLepton(a) && a.AntiNumber == b.Number
}
