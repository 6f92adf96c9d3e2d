package generation

import (
	"math"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/num"
	"example.org/kinegate/kinematics/num/random"
)

// Initial is the initial state. Its implementations are those of this package.
type Initial interface {
	faults() fault.List
	// source prepares drawing. The state has no faults.
	source() source
}

// Beam is a beam of one kind of particle.
type Beam struct {
	// MassGeV is the mass of the beam particle.
	MassGeV float64
	// Spectrum is the distribution of its total energy.
	Spectrum Spectrum
}

func (b Beam) faults(field string) fault.List {
	if b.Spectrum == nil {
		return fault.List{fault.New(fault.Invalid, field+".spectrum", "", "a spectrum")}
	}
	list := b.Spectrum.faults(field + ".spectrum")
	if low, _ := b.Spectrum.Range(); !(b.MassGeV >= 0 && b.MassGeV <= low) {
		list = append(list, fault.Number(field+".mass_gev", b.MassGeV, "0 to "+fault.Text(low)+", the lowest energy"))
	}
	return list
}

// FixedTarget is a beam along +z on a target at rest or bound in a nucleus at
// rest.
type FixedTarget struct {
	Beam Beam
	// TargetMassGeV is the mass of the target particle.
	TargetMassGeV float64
	// Motion is the motion of a bound target; nil means at rest.
	Motion *FermiGas
}

// FermiGas is a nucleon bound in a nucleus at rest: its momentum is uniform
// inside a sphere, the rest of the nucleus flies on as a spectator on its mass
// shell with the opposite momentum, and the nucleon has the energy that is left
// and is off its shell. There is no Pauli blocking and nothing acts on the
// products on their way out.
type FermiGas struct {
	// FermiMomentumGeV is the radius of the sphere.
	FermiMomentumGeV float64
	// NucleusMassGeV and SpectatorMassGeV are the masses before and after.
	NucleusMassGeV, SpectatorMassGeV float64
	// SpectatorNumber is the spectator's Monte Carlo particle number.
	SpectatorNumber int64
}

// CollidingBeams are two beams that meet at an angle between their directions,
// pi head on, with the axes of momentum.BeamsAtAngle.
type CollidingBeams struct {
	First, Second Beam
	AngleRad      float64
}

// Total is an initial state given as a whole: a mass, sqrt(s), and a momentum.
// Decays of one particle start from it too.
type Total struct {
	SqrtSGeV float64
	Momentum momentum.Three
}

// state is one initial state.
type state struct {
	total momentum.Four
	// m is sqrt(s).
	m float64
	// energy of the first beam; 0 without one.
	energy float64
	// momentum of either beam in the centre of mass, and the first one's
	// direction there.
	momentum float64
	axis     momentum.Three
	// spectator is the rest of the target's nucleus.
	spectator momentum.Four
}

// flux is the invariant flux factor 4 p* sqrt(s), and 1 without two beams.
func (st *state) flux() float64 {
	if st.momentum == 0 {
		return 1
	}
	return 4 * st.momentum * st.m
}

// source draws initial states. It is read only.
type source interface {
	draw(s *random.Stream) state
	// energy draws the energy of a beam particle that did not interact.
	energy(s *random.Stream) float64
	// limits are the lowest and highest sqrt(s); they are equal for a state
	// that is always the same.
	limits() (low, high float64)
	// spectator is the particle number of the spectator, 0 for none.
	spectator() int64
}

func zAxis() momentum.Three { return momentum.Three{Z: 1} }

func (t Total) faults() fault.List {
	list := positive(nil, "initial.sqrt_s_gev", t.SqrtSGeV)
	if p := t.Momentum.Norm(); !(p <= math.MaxFloat64) {
		list = append(list, fault.Number("initial.momentum", p, "finite"))
	}
	return list
}

func (t Total) source() source {
	return fixedState{state{total: momentum.WithMass(t.Momentum, t.SqrtSGeV), m: t.SqrtSGeV, axis: zAxis()}}
}

type fixedState struct{ state }

func (f fixedState) draw(_ *random.Stream) state     { return f.state }
func (f fixedState) energy(_ *random.Stream) float64 { return f.state.energy }
func (f fixedState) limits() (low, high float64)     { return f.m, f.m }
func (f fixedState) spectator() int64                { return 0 }

func (f FixedTarget) faults() fault.List {
	list := f.Beam.faults("initial.beam")
	list = positive(list, "initial.target_mass_gev", f.TargetMassGeV)
	if g := f.Motion; g != nil {
		list = positive(list, "initial.motion.fermi_momentum_gev", g.FermiMomentumGeV)
		list = positive(list, "initial.motion.nucleus_mass_gev", g.NucleusMassGeV)
		list = positive(list, "initial.motion.spectator_mass_gev", g.SpectatorMassGeV)
		if e := g.nucleonEnergy(g.FermiMomentumGeV); !(e > g.FermiMomentumGeV) {
			list = append(list, fault.Number("initial.motion.nucleus_mass_gev", g.NucleusMassGeV,
				"large enough to leave the nucleon a positive mass at the Fermi momentum"))
		}
	}
	return list
}

func (g *FermiGas) nucleonEnergy(p float64) float64 {
	return g.NucleusMassGeV - num.Hypot(g.SpectatorMassGeV, p)
}

func (f FixedTarget) source() source {
	return &onTarget{FixedTarget: f, sampler: f.Beam.Spectrum.sampler()}
}

type onTarget struct {
	FixedTarget

	sampler sampler
}

func (o *onTarget) energy(s *random.Stream) float64 { return o.sampler.draw(s) }

func (o *onTarget) draw(s *random.Stream) state {
	e := o.sampler.draw(s)
	if o.Motion == nil {
		return o.atRest(e)
	}
	size := o.Motion.FermiMomentumGeV * num.Cbrt(s.Uniform())
	u := s.Uniform()
	return o.moving(e, isotropic(u, s.Uniform(), size))
}

// beamMomentum is sqrt((E - m)(E + m)).
func beamMomentum(e, m float64) float64 { return math.Sqrt((e - m) * (e + m)) }

func (o *onTarget) atRest(e float64) state {
	mass, target := o.Beam.MassGeV, o.TargetMassGeV
	p := beamMomentum(e, mass)
	square := float64(mass*mass) + float64(target*(target+(e+e)))
	m := math.Sqrt(square)
	return state{
		total:    momentum.Four{P: momentum.Three{Z: p}, E: e + target},
		m:        m,
		energy:   e,
		momentum: p * target / m,
		axis:     zAxis(),
	}
}

func (o *onTarget) moving(e float64, p momentum.Three) state {
	beam := momentum.Four{P: momentum.Three{Z: beamMomentum(e, o.Beam.MassGeV)}, E: e}
	target := momentum.Four{P: p, E: o.Motion.nucleonEnergy(p.Norm())}
	st := meeting(beam, target, e)
	st.spectator = momentum.WithMass(p.Neg(), o.Motion.SpectatorMassGeV)
	return st
}

// meeting is the initial state of two four-momenta.
func meeting(a, b momentum.Four, e float64) state {
	total := a.Add(b)
	st := state{total: total, energy: e, m: math.Sqrt(max(0, total.Dot(total))), axis: zAxis()}
	boost, err := momentum.NewBoost(total.P, st.m)
	if err != nil {
		return st // no mass, so nothing comes of it
	}
	rest := boost.ToRest(a)
	st.momentum = rest.P.Norm()
	st.axis = rest.P.Unit()
	return st
}

func (o *onTarget) limits() (low, high float64) {
	first, last := o.Beam.Spectrum.Range()
	if o.Motion == nil {
		a, b := o.atRest(first), o.atRest(last)
		return a.m, b.m
	}
	// Head on and away at the Fermi momentum.
	p := momentum.Three{Z: o.Motion.FermiMomentumGeV}
	a, b := o.moving(first, p), o.moving(last, p.Neg())
	return a.m, b.m
}

func (o *onTarget) spectator() int64 {
	if o.Motion == nil {
		return 0
	}
	return o.Motion.SpectatorNumber
}

func (c CollidingBeams) faults() fault.List {
	list := append(c.First.faults("initial.first"), c.Second.faults("initial.second")...)
	if !(c.AngleRad >= 0 && c.AngleRad <= math.Pi) {
		list = append(list, fault.Number("initial.angle_rad", c.AngleRad, "0 to pi"))
	}
	return list
}

func (c CollidingBeams) source() source {
	return &colliding{CollidingBeams: c, one: c.First.Spectrum.sampler(), two: c.Second.Spectrum.sampler()}
}

type colliding struct {
	CollidingBeams

	one, two sampler
}

func (c *colliding) energy(s *random.Stream) float64 { return c.one.draw(s) }

func (c *colliding) draw(s *random.Stream) state {
	e := c.one.draw(s)
	return c.at(e, c.two.draw(s))
}

func (c *colliding) at(e1, e2 float64) state {
	a, b := momentum.BeamsAtAngle(c.First.MassGeV, beamMomentum(e1, c.First.MassGeV),
		c.Second.MassGeV, beamMomentum(e2, c.Second.MassGeV), c.AngleRad)
	return meeting(a, b, e1)
}

func (c *colliding) limits() (low, high float64) {
	low1, high1 := c.First.Spectrum.Range()
	low2, high2 := c.Second.Spectrum.Range()
	a, b := c.at(low1, low2), c.at(high1, high2)
	return a.m, b.m
}

func (c *colliding) spectator() int64 { return 0 }
