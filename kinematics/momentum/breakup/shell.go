package breakup

import (
	"math"

	"example.org/kinegate/kinematics/num"
)

// Limits is where a body can go.
type Limits struct {
	// RestEnergy, RestKinetic and RestMomentum are in the rest frame of the system.
	RestEnergy, RestKinetic, RestMomentum Range
	// Energy, Kinetic and Momentum are in the laboratory.
	Energy, Kinetic, Momentum Range
	// Angle is the range of the laboratory angle from the direction of P, in radians.
	Angle Range
}

// LimitsBetween returns the limits of a body whose rest-frame momentum lies between
// those of two legs, in any direction. slow and fast are legs of the same body and
// system; they are the same leg where the momentum is fixed.
//
// In the laboratory the energy is largest for the fast body thrown along P. It is
// smallest for the body thrown against P at the momentum at which it comes to rest,
// which is reached where slow is carried along (Carry Above or At) and fast is not
// (Below or At); else at the nearer of the two. The momentum follows the energy.
func LimitsBetween(slow, fast *Leg) Limits {
	most := fast.Lab(Along())
	var least Lab
	switch {
	case slow.Carry() == num.Below:
		least = slow.Lab(Against())
	case fast.Carry() == num.Above:
		least = fast.Lab(Against())
	default:
		least = Lab{Energy: fast.mass}
	}
	return Limits{
		RestEnergy:   rangeOf(slow.energy, fast.energy),
		RestKinetic:  rangeOf(slow.kinetic, fast.kinetic),
		RestMomentum: rangeOf(slow.momentum, fast.momentum),
		Energy:       rangeOf(least.Energy, most.Energy),
		Kinetic:      rangeOf(least.Kinetic, most.Kinetic),
		Momentum:     rangeOf(least.Momentum, most.Momentum),
		Angle:        Range{Max: fast.MaxAngle()},
	}
}

func rangeOf(low, high num.DD) Range { return Range{Min: low.Float(), Max: high.Float()} }

// Tilted returns the range of angles from an axis that itself lies at the angle tilt
// from the centre of a cone of directions with half-opening max around it.
func Tilted(limit Range, tilt float64) Range {
	if tilt == 0 {
		return limit
	}
	if limit.Max >= math.Pi {
		return Range{Max: math.Pi}
	}
	return Range{
		Min: math.Max(0, tilt-limit.Max),
		Max: math.Min(math.Pi, tilt+limit.Max),
	}
}
