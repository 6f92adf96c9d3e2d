package selection

import (
	"math"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/reaction"
)

// reach checks that a fixed initial state has the energy that the reaction needs: below
// its threshold no event can be what the hypothesis says.
func (d *drafter) reach(at string, s *InitialState) {
	b := &d.out.beam
	in := reaction.InitialState{Kind: reaction.FourMomenta, Momenta: [2]momentum.Four{b.fixed.first, b.fixed.second}}
	field := at + ".two_four_momenta"
	switch {
	case s.SqrtSGeV != nil:
		field = at + ".sqrt_s_gev"
		in = reaction.InitialState{Kind: reaction.TotalMass, SqrtS: *s.SqrtSGeV}
	case s.TwoBeams != nil:
		field = at + ".two_beams"
	case s.BeamOnTarget != nil:
		field = at + ".beam_on_target"
	}
	c, err := reaction.Describe(d.reaction, in)
	if err != nil || c.State != reaction.Closed {
		return // what cannot be described has its own fault
	}
	threshold := &c.Lightest.Threshold
	energy, least := "sqrt(s) = "+fault.Text(math.Sqrt(max(momentum.MassSquared(b.fixed.first, b.fixed.second), 0))), "sqrt(s) >= "+fault.Text(threshold.Mass)
	if s.BeamOnTarget != nil && threshold.Reached {
		energy, least = "total energy "+fault.Text(b.fixed.first.E), "total energy >= "+fault.Text(threshold.Beam.Total)
	}
	d.fault(field, energy+" GeV", least+" GeV").Because("below the threshold of the reaction")
}
