package decay

import (
	"math"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/num"
)

// Flight is a parent on its way.
type Flight struct {
	// MeanLife is the mean life in the laboratory, gamma tau, in seconds.
	MeanLife float64
	// MeanLength is the mean distance flown, c tau p/m, in metres.
	MeanLength float64
	// AtRestLength is c tau in metres.
	AtRestLength float64
}

// NewFlight returns the flight of a parent of the given mean life at rest in seconds,
// every field within 4e-16 relative. Domain: parent mass > 0, mean life > 0 and finite
// (a stable parent has no flight to describe); else an Invalid fault.
func NewFlight(parent Parent, meanLife float64) (Flight, error) {
	const op = "decay.NewFlight"
	if err := checkParent(op, parent); err != nil {
		return Flight{}, err
	}
	if !(meanLife > 0) || math.IsInf(meanLife, 0) {
		return Flight{}, fault.Number("mean_life_s", meanLife, "> 0 and finite").In(op)
	}
	p, _, e := parent.Motion()
	light := num.Prod2(momentum.LightSpeed, meanLife)
	return Flight{
		MeanLife:     e.MulFloat(meanLife).DivFloat(parent.Mass).Float(),
		MeanLength:   light.Mul(p).DivFloat(parent.Mass).Float(),
		AtRestLength: light.Float(),
	}, nil
}

// Surviving returns the fraction of parents that reach a distance in metres:
//
//	exp(-distance/mean length)
//
// within (2 + distance/mean length) x 2^-52 relative. A parent at rest reaches no
// distance but 0. A negative distance or NaN is an Invalid fault.
func (f *Flight) Surviving(distance float64) (float64, error) {
	if !(distance >= 0) {
		return 0, fault.Number("distance_m", distance, ">= 0").In("decay.Surviving")
	}
	return num.Exp(-f.lengths(distance)), nil
}

// DecayingBetween returns the fraction of parents that decay between two distances in
// metres, 0 <= from <= to:
//
//	exp(-from/L) (1 - exp(-(to - from)/L)),  by expm1
//
// so that a short stretch keeps its digits. Other distances are an Invalid fault; to may
// be infinite.
func (f *Flight) DecayingBetween(from, to float64) (float64, error) {
	const op = "decay.DecayingBetween"
	switch {
	case !(from >= 0) || math.IsInf(from, 0):
		return 0, fault.Number("from_m", from, ">= 0 and finite").In(op)
	case !(to >= from):
		return 0, fault.Number("to_m", to, ">= from "+fault.Text(from)).In(op)
	}
	return num.Exp(-f.lengths(from)) * -num.Expm1(-f.lengths(to-from)), nil
}

// lengths returns a distance in mean lengths; 0 is 0 also for a parent at rest.
func (f *Flight) lengths(distance float64) float64 {
	if distance == 0 {
		return 0
	}
	return distance / f.MeanLength
}
