// Package particle holds the particle table: names, Monte Carlo particle numbers,
// masses, widths and mean lives with their uncertainties, and the additive quantum
// numbers that follow from the particle number's published digit rules.
//
// Units: GeV (c = 1) for masses and widths, second for mean lives, a third of the
// elementary charge for charges.
package particle

import "slices"

// Particle is one state of the table. It is a value: a copy never changes.
type Particle struct {
	// Number is the Monte Carlo particle number of the Review of Particle Physics.
	Number int64
	// AntiNumber is the number of the antiparticle; a self-conjugate state's is its own.
	AntiNumber int64
	// Name is the canonical plain-text name, such as K*(892)+ or Lambda.
	Name string
	// Title describes the state in words, such as "charged pion".
	Title string
	// Mass and MassError are in GeV; an error of 0 means exact by convention or not given.
	Mass, MassError float64
	// Width and WidthError are in GeV. Both are 0 for a stable state and where
	// neither width nor mean life is measured; Life tells which.
	Width, WidthError float64
	// MeanLife and MeanLifeError are in seconds, at rest. MeanLife is +Inf for a
	// stable state and 0 where it is not known.
	MeanLife, MeanLifeError float64
	// Life tells which of width and mean life the table states.
	Life Life
	// Numbers are the additive quantum numbers, charge included.
	Numbers Numbers
	// EitherStrangeness marks K0_S and K0_L, which carry strangeness +1 or -1.
	EitherStrangeness bool
	// StrongStable marks a state that cannot decay by the strong interaction: see
	// Table.DefaultProducts.
	StrongStable bool
	// TwiceSpin is 2J, or -1 where the spin is not given.
	TwiceSpin int
	// Parity and CParity are +1 or -1, and 0 where undefined or not given.
	Parity, CParity int
	// Nucleus is set for nuclei and zero for all other states.
	Nucleus Nucleus
	// NotBreitWigner is empty for a state that a Breit-Wigner shape describes, and
	// otherwise names the source that says why none does.
	NotBreitWigner string
	// Source says where the values come from.
	Source string

	aliases []string
}

// Nucleus is the composition of a nucleus: mass number A (protons, neutrons and
// Lambdas), protons Z and Lambdas.
type Nucleus struct{ A, Z, Lambdas int }

// Life says how the table states the decay of a particle.
type Life uint8

// The ways in which a decay is stated.
const (
	// LifeUnknown: neither width nor mean life is measured.
	LifeUnknown Life = iota
	// LifeStable: no decay is known.
	LifeStable
	// LifeWidth: the width is stated and the mean life is hbar over it.
	LifeWidth
	// LifeMeanLife: the mean life is stated and the width is hbar over it.
	LifeMeanLife
)

// HBar is the reduced Planck constant in GeV s: h / (2 pi) over 1e9 e, with h and e
// exact in the International System since 2019.
const HBar = 6.62607015e-34 / (2 * 3.14159265358979323846264338327950288 * 1.602176634e-10)

// SharpWidth is the default width in GeV below which a state counts as sharp: its
// mass is then not drawn from a line shape. 1 MeV is below the mass resolution of
// most detectors (common practice, no source).
const SharpWidth = 1e-3

// Aliases returns the names other than Name by which the particle is found.
func (p Particle) Aliases() []string { return slices.Clone(p.aliases) }

// SelfConjugate reports whether the particle is its own antiparticle.
func (p Particle) SelfConjugate() bool { return p.Number == p.AntiNumber }

// Stable reports whether no decay of the particle is known.
func (p Particle) Stable() bool { return p.Life == LifeStable }

// Sharp reports whether the width is below the bound in GeV. A state of unknown
// width is sharp, since only its mass is known.
func (p Particle) Sharp(below float64) bool { return p.Width < below }

// ChargeThirds returns three times the charge in units of the elementary charge.
func (p Particle) ChargeThirds() int { return p.Numbers.ChargeThirds }

// IsNucleus reports whether the state is a nucleus of two or more baryons.
func (p Particle) IsNucleus() bool { return p.Nucleus.A > 0 }

// IsNeutralKaon reports whether the state is K0 or its antiparticle, a state of
// definite strangeness that has no mean life: in flight it is K0_S or K0_L.
func (p Particle) IsNeutralKaon() bool { return p.Number == numberK0 || p.Number == -numberK0 }

// MassOwner returns the number of the table row whose measured mass this state has:
// particle and antiparticle share one, and K0_S and K0_L share that of K0. States
// with the same owner have fully correlated masses.
func (p Particle) MassOwner() int64 {
	if p.EitherStrangeness {
		return numberK0
	}
	return max(p.Number, -p.Number)
}

// conjugate returns the antiparticle of a state that is not its own.
func (p Particle) conjugate(names []string) Particle {
	q := p
	q.Number, q.AntiNumber = p.AntiNumber, p.Number
	q.Name, q.aliases = names[0], names[1:]
	q.Title = p.Title + ", antiparticle"
	q.Numbers = p.Numbers.Neg()
	if p.TwiceSpin%2 != 0 { // a fermion and its antiparticle have opposite parity
		q.Parity = -p.Parity
	}
	return q
}
