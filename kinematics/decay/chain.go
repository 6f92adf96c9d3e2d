package decay

import (
	"example.org/kinegate/kinematics/momentum/breakup"
	"example.org/kinegate/kinematics/num"
)

// Granddaughter returns where the first of the granddaughters can go when the parent
// decays into daughters and the first of these into granddaughters; all masses in GeV.
//
// In the daughter's rest frame the granddaughter has momenta q1..q2, in the parent's
// rest frame the daughter has p1..p2, both in all directions. There the granddaughter
// then has all momenta up to that of the fastest thrown along the fastest daughter, from
// 0 where the speeds of the two overlap, else from that of the nearest speeds against
// each other. The step to the laboratory is that of a single daughter.
//
// For two-body decays without preferred direction the energy of the granddaughter in
// the parent's rest frame is uniform between its limits (a box).
//
// Domain, faults and accuracy: those of Describe; each step may be closed.
func Granddaughter(parent Parent, daughters, granddaughters []float64) (breakup.Limits, error) {
	const op = "decay.Granddaughter"
	if err := checkParent(op, parent); err != nil {
		return breakup.Limits{}, err
	}
	for _, list := range [][]float64{daughters, granddaughters} {
		if err := checkDaughters(op, list); err != nil {
			return breakup.Limits{}, err
		}
	}
	if err := checkParent(op, Parent{Mass: daughters[0]}); err != nil {
		return breakup.Limits{}, err
	}
	first, second := released(parent.Mass, daughters), released(daughters[0], granddaughters)
	for _, energy := range [...]num.DD{first, second} {
		if err := closed(op, energy); err != nil {
			return breakup.Limits{}, err
		}
	}
	daughter := num.FromFloat(daughters[0])
	slow, fast := momenta(system(Parent{Mass: parent.Mass}), first, daughters)
	low, high := momenta(system(Parent{Mass: daughters[0]}), second, granddaughters)
	least, most := chainMomenta(daughter, slow, fast, num.FromFloat(granddaughters[0]), low, high)
	sys := system(parent)
	slowLeg := breakup.NewLegAt(sys, num.FromFloat(granddaughters[0]), least)
	fastLeg := breakup.NewLegAt(sys, num.FromFloat(granddaughters[0]), most)
	return breakup.LimitsBetween(&slowLeg, &fastLeg), nil
}

// momenta returns the range of the first daughter's momentum in the rest frame.
func momenta(sys breakup.System, energy num.DD, daughters []float64) (least, most num.DD) {
	leg := legOf(sys, energy, daughters, 0)
	if len(daughters) == 2 {
		return leg.Momentum(), leg.Momentum()
	}
	return num.DD{}, leg.Momentum()
}

// chainMomenta returns the range of the granddaughter's momentum in the parent's rest
// frame, see Granddaughter.
func chainMomenta(daughter, slow, fast, mass, low, high num.DD) (least, most num.DD) {
	slowSys, fastSys := breakup.NewSystem(daughter, slow), breakup.NewSystem(daughter, fast)
	highInFast := breakup.NewLegAt(fastSys, mass, high)
	lowInFast := breakup.NewLegAt(fastSys, mass, low)
	highInSlow := breakup.NewLegAt(slowSys, mass, high)
	along := highInFast.Lab(breakup.Along())
	switch {
	case lowInFast.Carry() == num.Below: // The granddaughter outruns every daughter.
		against := lowInFast.Lab(breakup.Against())
		least = against.Momentum
	case highInSlow.Carry() == num.Above: // Every daughter outruns the granddaughter.
		against := highInSlow.Lab(breakup.Against())
		least = against.Momentum
	}
	return least, along.Momentum
}
