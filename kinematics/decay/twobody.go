package decay

import (
	"math"
	"strconv"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/momentum/breakup"
)

// TwoBody is a decay into two daughters.
type TwoBody struct {
	sys  breakup.System
	legs [2]breakup.Leg
	mass [2]float64
}

// NewTwoBody returns the decay of the parent into daughters of masses m1 and m2, with
// the domain and faults of Describe.
func NewTwoBody(parent Parent, m1, m2 float64) (TwoBody, error) {
	const op = "decay.NewTwoBody"
	if err := checkParent(op, parent); err != nil {
		return TwoBody{}, err
	}
	daughters := []float64{m1, m2}
	if err := checkDaughters(op, daughters); err != nil {
		return TwoBody{}, err
	}
	energy := released(parent.Mass, daughters)
	if err := closed(op, energy); err != nil {
		return TwoBody{}, err
	}
	t := TwoBody{sys: system(parent), mass: [2]float64{m1, m2}}
	for i := range t.legs {
		t.legs[i] = legOf(t.sys, energy, daughters, i)
	}
	return t, nil
}

// Motion is one daughter in both frames, in GeV and radians.
type Motion struct {
	// RestAngle is the angle from the parent's direction in its rest frame.
	RestAngle float64
	// Angle, Energy, Kinetic and Momentum are in the laboratory.
	Angle, Energy, Kinetic, Momentum float64
	// RestPerLab is dOmega(rest frame)/dOmega(laboratory).
	RestPerLab float64
}

// Pair is both daughters.
type Pair struct {
	Daughters [2]Motion
	// Opening is the laboratory angle between the two.
	Opening float64
}

// At returns the daughters when the first goes at the given cosine, within -1..1, from
// the parent's direction in its rest frame. A cosine outside is an Invalid fault.
//
// Accuracy: max(4e-15, 4 x 2^-52 x condition number); the opening angle is exactly pi
// for photons along the line of flight.
func (t *TwoBody) At(cosine float64) (Pair, error) {
	if !(cosine >= -1 && cosine <= 1) {
		return Pair{}, fault.Number("rest_frame_cosine", cosine, ">= -1 and <= 1").In("decay.TwoBody.At")
	}
	return t.pair(breakup.AtCosine(cosine)), nil
}

// AtLabAngle returns the ways in which the given daughter (0 or 1) can go at a
// laboratory angle within 0..pi: none beyond its largest angle, one or two.
func (t *TwoBody) AtLabAngle(daughter int, theta float64) ([]Pair, error) {
	const op = "decay.TwoBody.AtLabAngle"
	if daughter != 0 && daughter != 1 {
		return nil, fault.New(fault.Invalid, "daughter", strconv.Itoa(daughter), "0 or 1").In(op)
	}
	if !(theta >= 0 && theta <= math.Pi) {
		return nil, fault.Number("angle_rad", theta, ">= 0 and <= pi").In(op)
	}
	directions := t.legs[daughter].AtLabAngle(theta, false)
	pairs := make([]Pair, len(directions))
	for i, d := range directions {
		if daughter == 1 {
			d = d.Opposite()
		}
		pairs[i] = t.pair(d)
	}
	return pairs, nil
}

func (t *TwoBody) pair(d breakup.Direction) Pair {
	first, second := t.legs[0].Lab(d), t.legs[1].Lab(d.Opposite())
	return Pair{
		Daughters: [2]Motion{
			motionOf(&t.legs[0], d, &first),
			motionOf(&t.legs[1], d.Opposite(), &second),
		},
		Opening: t.between(&first, &second),
	}
}

func motionOf(leg *breakup.Leg, d breakup.Direction, lab *breakup.Lab) Motion {
	return Motion{
		RestAngle: d.Angle(), Angle: lab.Angle(), Energy: lab.Energy.Float(), Kinetic: lab.Kinetic.Float(),
		Momentum: lab.Momentum.Float(), RestPerLab: leg.Jacobian(d),
	}
}

// BoxHeight returns the density in 1/GeV of the laboratory energy of one of two
// daughters of a parent that decays without preferred direction: constant over the
// range of the energy, 1/(max - min) = W/(2 P p*). It is +Inf where the range is a point.
func (t *TwoBody) BoxHeight() float64 {
	width := t.sys.P.Mul(t.legs[0].Momentum()).Div(t.sys.W).Scale(1)
	if width.IsZero() {
		return math.Inf(1)
	}
	return 1 / width.Float()
}
