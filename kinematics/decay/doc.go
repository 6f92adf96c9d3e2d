// Package decay answers closed-form questions about decays: where the daughters go,
// at rest and in flight, the boundary of a three-body decay, the opening angle of two
// photons, how far the parent flies and where its granddaughters go.
//
// Units are GeV with c = 1, radian, metre and second. Inputs are taken as exact
// doubles; between them and the answers all is double-double (see num.DD), so that a
// decay just above threshold or a daughter nearly at rest loses no digits.
//
// Laboratory angles are from the direction of the parent. The parent decays without
// preferred direction where a spectrum or a density is given.
//
// Sources: Review of Particle Physics (2024), Kinematics; E. Byckling and K. Kajantie,
// Particle Kinematics (1973), chapters II to V (section numbers from memory).
package decay

import (
	"strconv"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/momentum/breakup"
	"example.org/kinegate/kinematics/num"
)

// Parent is the decaying particle with one quantity of its motion.
type Parent = breakup.Body

// checkParent refuses a parent without mass or with a motion out of range.
func checkParent(op string, parent Parent) error {
	if parent.Mass == 0 {
		return fault.Number("parent.mass_gev", 0, "> 0").In(op)
	}
	return parent.Check(op, "parent")
}

// checkDaughters refuses masses out of range and fewer than two or more than eight.
func checkDaughters(op string, masses []float64) error {
	if len(masses) < 2 || len(masses) > maxDaughters {
		return fault.New(fault.Invalid, "daughters", strconv.Itoa(len(masses)), "2 to 8 daughters").In(op)
	}
	for i, m := range masses {
		if err := breakup.CheckSize(op, "daughters["+strconv.Itoa(i)+"].mass_gev", m); err != nil {
			return err
		}
	}
	return nil
}

const maxDaughters = 8

// system returns the parent as a whole.
func system(parent Parent) breakup.System {
	p, t, e := parent.Motion()
	return breakup.System{W: num.FromFloat(parent.Mass), E: e, P: p, T: t}
}

// released returns the energy released, parent mass less daughter masses, exactly.
func released(mass float64, daughters []float64) num.DD {
	terms := make([]float64, 1, len(daughters)+1)
	terms[0] = mass
	for _, m := range daughters {
		terms = append(terms, -m)
	}
	return breakup.Sum(terms...)
}

// closed returns the fault for a decay without enough energy.
func closed(op string, energy num.DD) error {
	if energy.Sign() >= 0 {
		return nil
	}
	deficit := fault.Text(energy.Neg().Float())
	return fault.New(fault.BelowThreshold, "parent.mass_gev", "", "").In(op).
		Because("the decay is closed, the daughters are heavier than the parent by " + deficit + " GeV")
}
