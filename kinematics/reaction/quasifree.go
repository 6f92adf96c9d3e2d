package reaction

import (
	"math"
	"strconv"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/particle"
)

// QuasiFree is a reaction on a nucleon bound in a nucleus at rest. See BoundNucleon for
// the model.
type QuasiFree struct {
	// Nucleus holds the nucleon and Spectator is what remains of it.
	Nucleus, Spectator particle.Particle
	// FermiMomentum is the largest momentum of the nucleon in GeV.
	FermiMomentum float64
	// AtRest is the threshold on the nucleon at rest in the nucleus; its binding counts.
	// Lowest and Highest are those over all directions of the nucleon and all its
	// momenta up to FermiMomentum: below Lowest the channel is closed, above Highest every
	// nucleon takes part.
	AtRest, Lowest, Highest Threshold
	// LowestMomentum is the nucleon's momentum, against the beam, at the lowest threshold.
	LowestMomentum float64
	// Absolute is the threshold on the nucleus as a whole for the products and the
	// spectator, which no momentum of the nucleon undercuts.
	Absolute Threshold
	// Coherent is the threshold for the nucleus to stay whole, its nucleon among the
	// products replaced by it; nil where the struck nucleon is no product.
	Coherent *Threshold
}

// QuasiFreeModel states the model of BoundNucleon in words.
const QuasiFreeModel = "quasi-free: the nucleus is at rest, the spectator stays on its mass shell in its " +
	"ground state with the opposite momentum, and the struck nucleon carries the rest of energy and momentum"

// maxFermi bounds the momentum of a bound nucleon in GeV. Beyond it the struck nucleon of
// a light nucleus would carry more momentum than energy.
const maxFermi = 0.5

// BoundNucleon answers for a reaction whose second particle is a nucleon bound in a
// nucleus, with momentum k up to a largest one, the Fermi momentum, in any direction.
//
//	E2 = MA - sqrt(MB^2 + k^2),  m2^2 = E2^2 - k^2 < mN^2
//
// with MA and MB the masses of nucleus and spectator: the nucleon is off its mass shell
// by its binding. The threshold grows with the nucleon's momentum along the beam, so that
// Highest has the Fermi momentum along the beam; against the beam it falls until the
// spectator moves with the products, k = MB p1/(M + MB) at the absolute threshold, and
// grows beyond.
//
// Domain: 0 <= fermi <= 0.5 GeV. The spectator must be in the table (for the deuteron the
// other nucleon). Thresholds have no uncertainties but AtRest's masses' own.
// Source: the spectator model (impulse approximation), as in G. F. Chew and G. C. Wick,
// Phys. Rev. 85 (1952) 636, from memory.
func BoundNucleon(t *particle.Table, r *Reaction, nucleus particle.Particle, fermi float64) (QuasiFree, error) {
	const op = "reaction.BoundNucleon"
	q := QuasiFree{Nucleus: nucleus, FermiMomentum: fermi}
	if len(r.Initial) != 2 || !isNucleon(&r.Initial[1]) {
		return q, fault.New(fault.Invalid, "reaction", r.String(), "a reaction on p or n").In(op)
	}
	if !(fermi >= 0 && fermi <= maxFermi) {
		return q, fault.Number("fermi_momentum_gev", fermi, ">= 0 and <= "+fault.Text(maxFermi)).In(op)
	}
	final := r.final.nominal
	if !r.final.known {
		return q, fault.New(fault.Invalid, "reaction", r.String(), "products, or X that the table's particles can be").In(op)
	}
	spectator, err := spectatorOf(t, &r.Initial[1], &nucleus)
	if err != nil {
		return q, err
	}
	q.Spectator = spectator
	beam := r.Initial[0].Mass
	masses := massesOf(final)
	at := func(momentum, cosine float64) Threshold {
		g := q.geometry(beam, momentum, cosine)
		threshold, _ := g.threshold(masses)
		return threshold
	}
	if q.Absolute, err = ThresholdOnTarget(beam, nucleus.Mass, append(massesOf(final), spectator.Mass)...); err != nil {
		return q, err
	}
	q.LowestMomentum = min(fermi, spectator.Mass*q.Absolute.Beam.Momentum/q.Absolute.Mass)
	q.AtRest, q.Lowest, q.Highest = at(0, 1), at(q.LowestMomentum, -1), at(fermi, 1)
	for i := range final {
		if final[i].Number == r.Initial[1].Number {
			masses[i] = nucleus.Mass
			coherent, err := ThresholdOnTarget(beam, nucleus.Mass, masses...)
			if err != nil {
				return q, err
			}
			q.Coherent = &coherent
			break
		}
	}
	return q, nil
}

// geometry returns the struck nucleon with a momentum along or against the beam.
func (q *QuasiFree) geometry(beam, momentum, cosine float64) geometry {
	energy := q.Nucleus.Mass - math.Sqrt(float64(q.Spectator.Mass*q.Spectator.Mass)+float64(momentum*momentum))
	in := InitialState{Kind: TwoBeams, Beam2: BeamMotion{Given: ByMomentum, Value: momentum}}
	if cosine < 0 {
		in.Angle = math.Pi
	}
	g, _ := in.geometry(beam, math.Sqrt((energy-momentum)*(energy+momentum)))
	return g
}

// isNucleon reports whether the particle is a proton or a neutron.
func isNucleon(p *particle.Particle) bool { return p.Number == 2212 || p.Number == 2112 }

// spectatorOf returns the nucleus, or nucleon, that is left without a nucleon.
func spectatorOf(t *particle.Table, nucleon, nucleus *particle.Particle) (particle.Particle, error) {
	const op = "reaction.BoundNucleon"
	n := nucleus.Nucleus
	left := nucleus.Numbers.Sub(nucleon.Numbers)
	if n.A < 2 || nucleus.Number < 0 || left.ChargeThirds < 0 || left.ChargeThirds > left.BaryonThirds {
		return particle.Particle{}, fault.New(fault.Invalid, "nucleus", nucleus.Name, "a nucleus that holds "+nucleon.Name).In(op)
	}
	for _, p := range t.List() {
		if p.Numbers == left && (p.IsNucleus() || isNucleon(&p)) {
			return p, nil
		}
	}
	return particle.Particle{}, fault.New(fault.Invalid, "nucleus", nucleus.Name,
		"a nucleus whose remainder, charge "+Charge.text(left.ChargeThirds)+" and mass number "+
			strconv.Itoa(left.BaryonThirds/3)+", is in the table; a particle file can add it").In(op).
		Because("the spectator is unknown")
}
