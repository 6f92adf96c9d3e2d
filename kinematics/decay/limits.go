package decay

import (
	"math"

	"example.org/kinegate/kinematics/momentum/breakup"
	"example.org/kinegate/kinematics/num"
)

// Daughter is where one daughter can go.
type Daughter struct {
	breakup.Limits

	Mass float64
	// TwoBranch tells whether the daughter goes forward in the laboratory whatever its
	// direction in the parent's rest frame; its angle then has a maximum below pi/2.
	TwoBranch bool
}

// Description is what holds for all directions of the daughters.
type Description struct {
	// Released is the parent's mass less the daughters' masses, in GeV.
	Released float64
	// Daughters are in order.
	Daughters []Daughter
}

// Describe returns the limits of two to eight daughters in the parent's rest frame and
// in the laboratory. Momenta in the rest frame are fixed for two daughters and start at
// 0 for more:
//
//	p*max = sqrt((M^2 - (m + m')^2)(M^2 - (m - m')^2))/(2M),  m' = sum of the others
//
// Domain: parent mass > 0; masses, energies and momenta 0 or within 1e-30..1e30 GeV,
// else an Invalid fault. Daughters heavier than the parent are a BelowThreshold fault.
// Special cases: massless daughters reach the laboratory energy 0 only as one of three
// or more; at threshold all move with the parent.
//
// Accuracy: 4e-15 relative, angles max(4e-15, 4 x 2^-52 x condition number).
//
// Source: Review of Particle Physics (2024), Kinematics, two-body decays, for a
// daughter and the rest together.
func Describe(parent Parent, daughters ...float64) (Description, error) {
	const op = "decay.Describe"
	if err := checkParent(op, parent); err != nil {
		return Description{}, err
	}
	if err := checkDaughters(op, daughters); err != nil {
		return Description{}, err
	}
	energy := released(parent.Mass, daughters)
	if err := closed(op, energy); err != nil {
		return Description{}, err
	}
	sys := system(parent)
	out := Description{Released: energy.Float(), Daughters: make([]Daughter, len(daughters))}
	for i, m := range daughters {
		fast := legOf(sys, energy, daughters, i)
		slow := fast
		if len(daughters) > 2 {
			slow = breakup.NewLegAt(sys, num.FromFloat(m), num.DD{})
		}
		out.Daughters[i] = Daughter{
			Limits: breakup.LimitsBetween(&slow, &fast), Mass: m, TwoBranch: fast.Carry() == num.Above,
		}
	}
	return out, nil
}

// legOf returns the leg of daughter i against all others at their least mass.
func legOf(sys breakup.System, energy num.DD, daughters []float64, i int) breakup.Leg {
	others := make([]float64, 0, maxDaughters)
	others = append(others, daughters[:i]...)
	rest := breakup.Sum(append(others, daughters[i+1:]...)...)
	mass := num.FromFloat(daughters[i])
	return breakup.NewLeg(sys, breakup.Over(energy, sys.W, mass, rest), mass, rest)
}

// LargestMomentum returns the largest momentum in GeV that any daughter can have in the
// parent's rest frame, the number that tables of decays print.
func LargestMomentum(parentMass float64, daughters ...float64) (float64, error) {
	d, err := Describe(Parent{Mass: parentMass}, daughters...)
	if err != nil {
		return 0, err
	}
	largest := 0.0
	for i := range d.Daughters {
		largest = math.Max(largest, d.Daughters[i].RestMomentum.Max)
	}
	return largest, nil
}
