package reaction

import (
	"cmp"
	"slices"
	"strconv"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/momentum/breakup"
	"example.org/kinegate/kinematics/num"
	"example.org/kinegate/kinematics/particle"
)

// Limits of a search for open channels.
const (
	// MaxBodies bounds the bodies of a channel.
	MaxBodies = 5
	// MaxListed bounds the particles from which channels are made.
	MaxListed = 512
	// maxChannels bounds the channels of one number of bodies, and maxSteps the sets of
	// particles that are looked at.
	maxChannels = 200_000
	maxSteps    = 30_000_000
)

// Search asks for the open channels of two colliding particles.
type Search struct {
	// First and Second are the colliding particles.
	First, Second particle.Particle
	// State is how they move; it must state an energy.
	State InitialState
	// Particles are those of which channels are made. None means the table's
	// DefaultProducts, without neutrinos unless a lepton collides: production that
	// keeps flavours makes none.
	Particles []particle.Particle
	// MinBodies and MaxBodies bound the bodies, within [1, 5]; 0 means 2. A body alone
	// is reached only at the one energy at which s is its mass squared.
	MinBodies, MaxBodies int
	// Ignored are the laws that are not applied.
	Ignored Laws
	// SpinAndC asks for the rules of spin, C and Bose symmetry: see allowed.
	SpinAndC bool
	// Stop, if it is set, is asked in between and ends the search, as does the bound on
	// its work: the channels are then incomplete.
	Stop func() bool
}

// Channels are the channels found, by the sum of their masses.
type Channels struct {
	// Bodies is up to how many bodies the list is complete. It is less than asked for
	// where the bound on work or on channels was met: 30 million sets looked at, or
	// 200,000 channels of one number of bodies.
	Bodies int
	// Complete says that Bodies is as many as asked for.
	Complete bool
	// Next is the first channel that is closed, of up to Bodies bodies; nil if the
	// listed particles make none.
	Next *OpenChannel

	search  *Search
	list    []particle.Particle
	entries []entry
	geo     geometry
	vary    bool
	initial Collision
}

// OpenChannel is one channel.
type OpenChannel struct {
	// Particles are the products, by mass.
	Particles []particle.Particle
	// State is Open, AtThreshold or, for Next, Closed; OnPoint or OffPoint for one body.
	State State
	// Excess is sqrt(s) less the sum of the masses in GeV.
	Excess float64
	// Threshold is the energy of the first particle that opens the channel.
	Threshold Threshold
}

// entry is one channel by the indices of its particles in the list.
type entry struct {
	mass    float64
	count   int8
	members [MaxBodies]int16
}

// Len returns the number of channels.
func (c *Channels) Len() int { return len(c.entries) }

// At returns the channel i, 0 <= i < Len.
func (c *Channels) At(i int) OpenChannel { return c.channel(&c.entries[i]) }

// Particles returns the particles of which the channels are made, by mass.
func (c *Channels) Particles() []particle.Particle { return slices.Clone(c.list) }

// Collision returns the initial state.
func (c *Channels) Collision() Collision { return c.initial }

// ListOpen returns every channel of up to MaxBodies bodies that the laws allow and the
// energy reaches with nominal masses. Faults are of kind Invalid.
//
// Channels of k bodies are found by taking k - 2 particles in the order of mass and
// looking up the pairs that make up what is missing; sets that are too heavy are not
// gone into. Source: the usual meeting in the middle (E. Horowitz and S. Sahni, J. ACM
// 21 (1974) 277).
func ListOpen(t *particle.Table, s Search) (*Channels, error) {
	const op = "reaction.ListOpen"
	s.MinBodies, s.MaxBodies = cmp.Or(s.MinBodies, 2), cmp.Or(s.MaxBodies, 2)
	switch {
	case s.MaxBodies < 1 || s.MaxBodies > MaxBodies:
		return nil, fault.New(fault.Invalid, "max_bodies", strconv.Itoa(s.MaxBodies), "1 to 5").In(op)
	case s.MinBodies < 1 || s.MinBodies > s.MaxBodies:
		return nil, fault.New(fault.Invalid, "min_bodies", strconv.Itoa(s.MinBodies), "1 to max_bodies").In(op)
	case len(s.Particles) > MaxListed:
		return nil, fault.New(fault.Invalid, "particles", strconv.Itoa(len(s.Particles)), "at most "+strconv.Itoa(MaxListed)).In(op)
	}
	initial, err := s.State.collide(s.First.Mass, s.Second.Mass)
	if err != nil {
		return nil, err
	}
	c := &Channels{search: &s, initial: initial, list: s.products(t)}
	c.geo, c.vary = s.State.geometry(s.First.Mass, s.Second.Mass)
	f := newFinder(c)
	for bodies := s.MinBodies; bodies <= s.MaxBodies; bodies++ {
		if !f.find(bodies) {
			break
		}
		c.Bodies = bodies
		c.entries = append(c.entries, f.found...)
	}
	c.Complete = c.Bodies == s.MaxBodies
	slices.SortFunc(c.entries, compareEntries)
	if f.next.count > 0 {
		next := c.channel(&f.next)
		c.Next = &next
	}
	return c, nil
}

// compareEntries orders by mass, then by bodies, then by the particles.
func compareEntries(a, b entry) int {
	return cmp.Or(cmp.Compare(a.mass, b.mass), cmp.Compare(a.count, b.count), slices.Compare(a.members[:], b.members[:]))
}

// products returns the particles for channels by mass, each once.
func (s *Search) products(t *particle.Table) []particle.Particle {
	list := slices.Clone(s.Particles)
	if len(list) == 0 {
		list = t.DefaultProducts()
		if !isLepton(&s.First) && !isLepton(&s.Second) {
			list = slices.DeleteFunc(list, func(p particle.Particle) bool { return isLepton(&p) && p.ChargeThirds() == 0 })
		}
	}
	slices.SortStableFunc(list, func(a, b particle.Particle) int {
		return cmp.Or(cmp.Compare(a.Mass, b.Mass), cmp.Compare(abs64(a.Number), abs64(b.Number)), cmp.Compare(b.Number, a.Number))
	})
	return slices.CompactFunc(list, func(a, b particle.Particle) bool { return a.Number == b.Number })
}

func abs64(n int64) int64 { return max(n, -n) }

// channel makes the answer for an entry.
func (c *Channels) channel(e *entry) OpenChannel {
	ch := OpenChannel{Particles: make([]particle.Particle, e.count)}
	for i, m := range e.members[:e.count] {
		ch.Particles[i] = c.list[m]
	}
	masses := massesOf(ch.Particles)
	ch.Threshold = Threshold{Mass: breakup.Sum(masses...).Float()}
	if c.vary {
		ch.Threshold, _ = c.geo.threshold(masses)
	}
	c.geo.uncertainties(&ch.Threshold, shares(&c.search.First, &c.search.Second, ch.Particles))
	sqrtS := c.initial.CentreOfMass().SqrtS
	excess, _ := c.initial.Excess(masses...)
	ch.Excess = excess
	side := num.SideOf(excess, boundaryUnits*sqrtS)
	switch {
	case e.count == 1 && side == num.At:
		ch.State = OnPoint
	case e.count == 1:
		ch.State = OffPoint
	default:
		ch.State = stateOf(side, side, false)
	}
	return ch
}
