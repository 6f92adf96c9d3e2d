package momentum

import (
	"math"

	"example.org/kinegate/kinematics/fault"
)

// Motion is the state of motion of a free particle in every customary form. Energies
// and momenta are in GeV, velocities in units of c. No field is rebuilt from
// another by a difference.
type Motion struct {
	// Mass, Total (energy), Kinetic (energy) and Momentum.
	Mass, Total, Kinetic, Momentum float64
	// Beta is the velocity and OneMinusBeta is 1 - Beta.
	Beta, OneMinusBeta float64
	// Gamma is the Lorentz factor and GammaMinusOne is Gamma - 1; both are +Inf for
	// a massless particle.
	Gamma, GammaMinusOne float64
	// BetaGamma is Momentum/Mass; +Inf for a massless particle.
	BetaGamma float64
}

// MotionFromMomentum returns the motion of a particle of mass m and momentum p:
//
//	E = sqrt(m^2 + p^2),  T = p^2/(E+m),  beta = p/E,  1-beta = m^2/(E(E+p))
//
// Every field is within 8 x 2^-53 relative. Domain: m, p >= 0, not both 0, all 0 or
// within 1e-75..1e75 GeV; else an Invalid fault.
func MotionFromMomentum(m, p float64) (Motion, error) {
	const op = "momentum.MotionFromMomentum"
	if err := checkMotion(op, "momentum_gev", m, p, 0); err != nil {
		return Motion{}, err
	}
	return motion(m, math.Sqrt(float64(m*m)+float64(p*p)), p), nil
}

// MotionFromKinetic returns the motion of a particle of mass m and kinetic energy t:
//
//	p = sqrt(t(t+2m))
//
// with the domain and accuracy of MotionFromMomentum.
func MotionFromKinetic(m, t float64) (Motion, error) {
	const op = "momentum.MotionFromKinetic"
	if err := checkMotion(op, "kinetic_energy_gev", m, t, 0); err != nil {
		return Motion{}, err
	}
	state := motion(m, m+t, math.Sqrt(t*(t+float64(2*m))))
	state.Kinetic = t
	return state, nil
}

// MotionFromTotal returns the motion of a particle of mass m and total energy e >= m:
//
//	p = sqrt((e-m)(e+m)),  T = e - m
//
// with the domain and accuracy of MotionFromMomentum; e - m is a single difference
// of exact inputs.
func MotionFromTotal(m, e float64) (Motion, error) {
	const op = "momentum.MotionFromTotal"
	if err := checkMotion(op, "total_energy_gev", m, e, m); err != nil {
		return Motion{}, err
	}
	state := motion(m, e, math.Sqrt((e-m)*(e+m)))
	state.Kinetic = e - m
	return state, nil
}

// MotionFromBeta returns the motion of a particle of mass m > 0 and velocity
// 0 <= beta < 1:
//
//	gamma = 1/sqrt((1-beta)(1+beta)),  T = m (beta gamma)^2/(gamma+1)
//
// A massless particle has no energy fixed by its velocity: an Invalid fault.
func MotionFromBeta(m, beta float64) (Motion, error) {
	const op = "momentum.MotionFromBeta"
	if !(m >= leastMotion && m <= largestMotion) {
		return Motion{}, fault.Number("mass_gev", m, "within 1e-75..1e75").In(op)
	}
	if !(beta >= 0 && beta < 1) {
		return Motion{}, fault.Number("beta", beta, ">= 0 and < 1").In(op)
	}
	gamma := 1 / math.Sqrt((1-beta)*(1+beta))
	state := motion(m, m*gamma, m*float64(beta*gamma))
	state.Beta, state.OneMinusBeta = beta, 1-beta
	return state, nil
}

// MotionFromGamma returns the motion of a particle of mass m > 0 and Lorentz factor
// gamma >= 1:
//
//	p = m sqrt((gamma-1)(gamma+1)),  T = m (gamma-1)
func MotionFromGamma(m, gamma float64) (Motion, error) {
	const op = "momentum.MotionFromGamma"
	if !(m >= leastMotion && m <= largestMotion) {
		return Motion{}, fault.Number("mass_gev", m, "within 1e-75..1e75").In(op)
	}
	if !(gamma >= 1 && gamma <= largestMotion) {
		return Motion{}, fault.Number("gamma", gamma, ">= 1 and <= 1e75").In(op)
	}
	state := motion(m, m*gamma, m*math.Sqrt((gamma-1)*(gamma+1)))
	state.Kinetic, state.Gamma, state.GammaMinusOne = m*(gamma-1), gamma, gamma-1
	return state, nil
}

// Ends of the range of masses, energies and momenta: their squares stay inside the
// doubles.
const (
	leastMotion   = 1e-75
	largestMotion = 1e75
)

// checkMotion refuses a mass or value out of range, and a massless particle at rest.
func checkMotion(op, field string, m, value, least float64) error {
	if m != 0 && !(m >= leastMotion && m <= largestMotion) {
		return fault.Number("mass_gev", m, "0 or within 1e-75..1e75").In(op)
	}
	switch {
	case m == 0 && !(value >= leastMotion && value <= largestMotion):
		return fault.Number(field, value, "within 1e-75..1e75 for a massless particle").In(op)
	case !(value >= least):
		return fault.Number(field, value, ">= "+fault.Text(least)+" and <= 1e75").In(op)
	case value != 0 && !(value >= leastMotion && value <= largestMotion):
		return fault.Number(field, value, "0 or within 1e-75..1e75").In(op)
	}
	return nil
}

// motion fills every field from a consistent mass, energy and momentum.
func motion(m, e, p float64) Motion {
	kinetic := p * (p / (e + m))
	state := Motion{
		Mass: m, Total: e, Kinetic: kinetic, Momentum: p,
		Beta: p / e, OneMinusBeta: (m / e) * (m / (e + p)),
		Gamma: math.Inf(1), GammaMinusOne: math.Inf(1), BetaGamma: math.Inf(1),
	}
	if m > 0 {
		state.Gamma, state.GammaMinusOne, state.BetaGamma = e/m, kinetic/m, p/m
	}
	return state
}
