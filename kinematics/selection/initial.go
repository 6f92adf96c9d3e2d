package selection

import "example.org/kinegate/kinematics/momentum"

// InitialState says how the particles on the left of a reaction move. Exactly one
// member must be set.
type InitialState struct {
	// BeamOnTarget is a beam along +z on a target at rest.
	BeamOnTarget *BeamMotion
	// TwoBeams is two beams with an angle between them.
	TwoBeams *TwoBeams
	// FourMomenta are both four-momenta in a frame of the caller's choice.
	FourMomenta *[2]momentum.Four
	// SqrtSGeV is the energy in the centre-of-mass frame, which then is the
	// laboratory.
	SqrtSGeV *float64
}

// BeamMotion says how fast a beam particle is. Exactly one member must be set.
type BeamMotion struct {
	TotalEnergyGeV, KineticEnergyGeV, MomentumGeV *float64
}

// TwoBeams is two beams and the angle between their directions; absent means pi,
// head on.
type TwoBeams struct {
	Beam1, Beam2 BeamMotion
	AngleRad     *float64
}
