package reaction

import (
	"math"
	"strconv"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/momentum/breakup"
	"example.org/kinegate/kinematics/num"
	"example.org/kinegate/kinematics/particle"
)

// State says whether a channel can be reached.
type State uint8

// The states of a channel.
const (
	// Unknown: no energy is stated, or no X is known that the laws allow.
	Unknown State = iota
	// Open: the energy suffices with nominal masses.
	Open
	// OpenThroughWidth: it does not, but it suffices for the lightest stated final
	// state: products of some width are replaced by the products of their stated decays.
	OpenThroughWidth
	// AtThreshold: the excess energy is zero within the stated bound.
	AtThreshold
	// Closed: the energy does not suffice.
	Closed
	// OnPoint: one product alone, and s is its mass squared within the stated bound.
	OnPoint
	// OffPoint: one product alone, and s is not its mass squared.
	OffPoint
)

// String returns the state in words.
func (s State) String() string {
	names := [...]string{
		"unknown", "open", "open through width", "at threshold", "closed", "on point", "off point",
	}
	if int(s) < len(names) {
		return names[s]
	}
	return "State(" + strconv.Itoa(int(s)) + ")"
}

// boundaryUnits is the half-width of a boundary in units of sqrt(s): two units in the
// last place of each of the two sides that are compared, since an energy or a mass
// typed in decimals is off by up to half a unit, and by as much again after a change
// of unit. Within it nothing tells the sides apart.
const boundaryUnits = 0x1p-50

// Reach is one final state that may be held against the energy: its particles,
// the threshold, and the excess energy where an energy is stated.
type Reach struct {
	// Particles make up the final state.
	Particles []particle.Particle
	// Threshold is the energy of the first particle that reaches it.
	Threshold Threshold
	// Excess is sqrt(s) less the sum of the masses in GeV, negative below threshold. It
	// is its own quantity, to full precision, never rebuilt from s.
	Excess float64
	// DeficitEnergy is how much energy the first particle lacks in GeV, 0 if none;
	// HasDeficitEnergy is false where no energy of it would do.
	DeficitEnergy    float64
	HasDeficitEnergy bool

	side num.Side
}

// Channel is what is known about a reaction, or a decay, in an initial state.
type Channel struct {
	// State says whether it can be reached.
	State State
	// Collision is the initial state; false in Moving where none is stated, and where
	// two massless particles run in one direction, so that s = 0.
	Collision Collision
	Moving    bool
	// Nominal is the final state of the right side with nominal masses; Lightest is
	// that of the stated decays. They are the same where no product has both a width
	// and a stated decay. An inclusive reaction's have the lightest X.
	Nominal, Lightest Reach
	// Widened tells whether Lightest differs from Nominal.
	Widened bool
	// Bound is the stated bound of AtThreshold in GeV, and that of OnPoint in units of
	// 2 sqrt(s) GeV.
	Bound float64
	// Square is s - m^2 in GeV^2 for one product alone, to full precision.
	Square float64
	// Frame names the frame of the laboratory quantities.
	Frame string
	// Remarks are what a careful reader should know, such as a product that no
	// Breit-Wigner shape describes.
	Remarks []string
}

// Describe holds a reaction against an initial state. A closed channel is an answer
// and no error. A decay needs no initial state: its energy is the parent's mass. A
// reaction without a stated left side, and a state that cannot be, are Invalid faults.
func Describe(r *Reaction, in InitialState) (Channel, error) {
	const op = "reaction.Describe"
	c := Channel{Frame: in.Frame(), Remarks: r.remarks()}
	final := &r.final
	c.Nominal.Particles, c.Lightest.Particles = final.nominal, final.lightest
	c.Widened = final.widened
	switch len(r.Initial) {
	case 0:
		return Channel{}, fault.New(fault.Invalid, "reaction", r.String(), "").In(op).
			Because("the left side is not stated")
	case 1:
		return c.ofDecay(r, in)
	}
	first, second := &r.Initial[0], &r.Initial[1]
	if in.Kind != Unstated {
		collision, err := in.collide(first.Mass, second.Mass)
		switch {
		case err == nil:
			c.Collision, c.Moving = collision, true
		case in.parallelPhotons(first.Mass, second.Mass):
			c.Remarks = append(c.Remarks, "two massless particles in one direction have s = 0 whatever their energies")
		default:
			return Channel{}, err
		}
	} else if second.Mass == 0 {
		c.Remarks = append(c.Remarks, "a massless target is never at rest: the threshold needs an initial state")
	}
	if !final.known {
		c.Remarks = append(c.Remarks, "no X that the laws allow was found among the particles of the table")
		return c, nil
	}
	g, variable := in.geometry(first.Mass, second.Mass)
	c.hold(&c.Nominal, &g, variable, final.nominalShares)
	c.Lightest = c.Nominal
	if c.Widened {
		c.Lightest.Particles = final.lightest
		c.hold(&c.Lightest, &g, variable, final.lightestShares)
	}
	c.judge(len(r.Top) == 1 && !r.Inclusive, in.Kind != Unstated)
	return c, nil
}

// parallelPhotons reports whether the initial state is valid but has s = 0.
func (in *InitialState) parallelPhotons(m1, m2 float64) bool {
	if m1 != 0 || m2 != 0 {
		return false
	}
	switch in.Kind {
	case TwoBeams:
		return in.Angle == 0 && in.Beam1.body(0).check("", "") == nil && in.Beam2.body(0).check("", "") == nil &&
			in.Beam1.Value > 0 && in.Beam2.Value > 0
	case FourMomenta:
		sin, cos := angleBetween(in.Momenta[0].P, in.Momenta[1].P)
		return sin.IsZero() && cos.Sign() > 0
	case Unstated, BeamOnTarget, TotalMass:
	}
	return false
}

// hold fills threshold, excess and deficit of one final state.
func (c *Channel) hold(f *Reach, g *geometry, variable bool, list []share) {
	masses := massesOf(f.Particles)
	f.Threshold = Threshold{Mass: breakup.Sum(masses...).Float()}
	var total num.DD
	if variable {
		f.Threshold, total = g.threshold(masses)
	}
	g.uncertainties(&f.Threshold, list)
	if !c.Moving {
		f.side, f.Excess = num.SideOf(-f.Threshold.Mass, 0), -f.Threshold.Mass
		return
	}
	excess, _ := c.Collision.Excess(masses...)
	f.Excess = excess
	c.Bound = boundaryUnits * c.Collision.CentreOfMass().SqrtS
	f.side = num.SideOf(excess, c.Bound)
	if f.side != num.Below || !f.Threshold.Reached {
		return
	}
	if closed := f.Threshold.Closed; closed != nil {
		total = num.FromFloat(closed.Above.Total)
	}
	f.DeficitEnergy = total.Sub(g.now).Float()
	f.HasDeficitEnergy = f.DeficitEnergy > 0 && !math.IsInf(f.DeficitEnergy, 0)
}

// judge sets the state from both final states.
func (c *Channel) judge(alone, stated bool) {
	if !stated {
		return
	}
	if alone && c.Moving {
		m := c.Nominal.Threshold.Mass
		over := c.Collision.over(massesOf(c.Nominal.Particles)...)
		c.Square = over.Float()
		c.State = OffPoint
		if math.Abs(c.Square) <= float64(c.Bound*(c.Collision.CentreOfMass().SqrtS+m)) {
			c.State = OnPoint
		}
		return
	}
	c.State = stateOf(c.Nominal.side, c.Lightest.side, c.Lightest.Threshold.Mass > c.Nominal.Threshold.Mass)
}

// stateOf names the state for the sides of both thresholds. A lightest final state that
// is heavier than the nominal one, as of a resonance below its own decay's threshold,
// decides alone.
func stateOf(nominal, lightest num.Side, heavier bool) State {
	deciding := nominal
	if heavier {
		deciding = lightest
	}
	switch {
	case deciding == num.Above:
		return Open
	case deciding == num.At, lightest == num.At:
		return AtThreshold
	case lightest == num.Above:
		return OpenThroughWidth
	}
	return Closed
}

// ofDecay holds a decay against its parent's mass.
func (c *Channel) ofDecay(r *Reaction, in InitialState) (Channel, error) {
	const op = "reaction.Describe"
	if in.Kind != Unstated {
		return Channel{}, fault.New(fault.Invalid, "initial_state", "given", "none for a decay").In(op).
			Because("a decay starts from its parent's mass")
	}
	c.Frame = "rest frame of the parent"
	if !r.final.known {
		c.Remarks = append(c.Remarks, "no X that the laws allow was found among the particles of the table")
		return *c, nil
	}
	parent := &r.Initial[0]
	c.Bound = boundaryUnits * parent.Mass
	for _, f := range []*Reach{&c.Nominal, &c.Lightest} {
		masses := massesOf(f.Particles)
		f.Threshold = Threshold{Mass: breakup.Sum(masses...).Float()}
		for _, s := range shares(parent, parent, f.Particles) {
			f.Threshold.MassError = math.Sqrt(float64(f.Threshold.MassError*f.Threshold.MassError) +
				float64(s.products*s.err*(s.products*s.err)))
		}
		f.Excess = breakup.Sum(append([]float64{parent.Mass}, negated(masses)...)...).Float()
		f.side = num.SideOf(f.Excess, c.Bound)
	}
	c.State = stateOf(c.Nominal.side, c.Lightest.side, c.Lightest.Threshold.Mass > c.Nominal.Threshold.Mass)
	if c.State == Closed && !parent.Sharp(particle.SharpWidth) {
		c.State = OpenThroughWidth
	}
	return *c, nil
}

// remarkDigits is the number of significant digits of a figure in a remark.
const remarkDigits = 7

// remarks collects what the particles' flags say.
func (r *Reaction) remarks() []string {
	var list []string
	seen := map[int64]bool{}
	for n := range r.Products {
		p := &r.Products[n].Particle
		if seen[p.MassOwner()] {
			continue
		}
		seen[p.MassOwner()] = true
		if p.NotBreitWigner != "" {
			list = append(list, p.Name+" is no Breit-Wigner: "+p.NotBreitWigner)
		}
		if p.IsQuark() {
			list = append(list, p.Name+" is a quark and never flies free; its mass is that of the table")
		}
	}
	for i := range r.Decays {
		if d := &r.Decays[i]; d.Released < 0 && !d.sharp {
			lack := strconv.FormatFloat(-d.Released, 'g', remarkDigits, 64)
			list = append(list, d.Text+" needs the width of a particle: its nominal masses lack "+lack+" GeV")
		}
	}
	if len(r.Initial) == 2 && !r.Inclusive && !spinAndC(&r.Initial[0], &r.Initial[1], len(r.Top), func(i int) *particle.Particle {
		return &r.Products[r.Top[i]].Particle
	}) {
		list = append(list, "spin, C or Bose symmetry forbid "+r.headText()+"; these rules are not applied here")
	}
	return list
}

// massesOf lists masses.
func massesOf(list []particle.Particle) []float64 {
	masses := make([]float64, len(list))
	for i := range list {
		masses[i] = list[i].Mass
	}
	return masses
}
