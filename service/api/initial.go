package api

import (
	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/num"
	"example.org/kinegate/kinematics/reaction"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// stateForm is an initial state in the core's form, and the path of the member that is
// set, for the faults that the core finds in it.
type stateForm struct {
	state reaction.InitialState
	path  string
}

// stateOf converts the initial state of a request; nil is unstated.
func (f *former) stateOf(m *kinegatev1.InitialState) stateForm {
	const at = "initial_state"
	if m == nil {
		return stateForm{path: at}
	}
	switch kind := m.GetKind().(type) {
	case *kinegatev1.InitialState_BeamOnTarget:
		path := at + ".beam_on_target"
		return stateForm{reaction.InitialState{
			Kind:  reaction.BeamOnTarget,
			Beam1: f.motionOf(path+".beam", kind.BeamOnTarget.GetBeam()),
		}, path}
	case *kinegatev1.InitialState_TwoBeams:
		path := at + ".two_beams"
		state := reaction.InitialState{
			Kind:  reaction.TwoBeams,
			Beam1: f.motionOf(path+".beam1", kind.TwoBeams.GetBeam1()),
			Beam2: f.motionOf(path+".beam2", kind.TwoBeams.GetBeam2()),
			Angle: headOn,
		}
		if angle := kind.TwoBeams.AngleBetweenBeamsRad; angle != nil {
			state.Angle = *angle
		}
		return stateForm{state, path}
	case *kinegatev1.InitialState_TwoFourMomenta:
		path := at + ".two_four_momenta"
		if kind.TwoFourMomenta.GetFirst() == nil || kind.TwoFourMomenta.GetSecond() == nil {
			f.need(path, "incomplete", "first and second")
		}
		return stateForm{reaction.InitialState{Kind: reaction.FourMomenta, Momenta: [2]momentum.Four{
			fourMomentum(kind.TwoFourMomenta.GetFirst()), fourMomentum(kind.TwoFourMomenta.GetSecond()),
		}}, path}
	case *kinegatev1.InitialState_SqrtSGev:
		return stateForm{reaction.InitialState{Kind: reaction.TotalMass, SqrtS: kind.SqrtSGev}, at}
	}
	f.need(at, "empty", "beam_on_target, two_beams, two_four_momenta or sqrt_s_gev")
	return stateForm{path: at}
}

// headOn is the angle between two beams that meet head on, as a double: pi.
const headOn = 3.14159265358979323846264338327950288

// motionOf converts the motion of a beam.
func (f *former) motionOf(at string, m *kinegatev1.BeamMotion) reaction.BeamMotion {
	switch value := m.GetValue().(type) {
	case *kinegatev1.BeamMotion_TotalEnergyGev:
		return reaction.BeamMotion{Given: reaction.ByTotal, Value: value.TotalEnergyGev}
	case *kinegatev1.BeamMotion_KineticEnergyGev:
		return reaction.BeamMotion{Given: reaction.ByKinetic, Value: value.KineticEnergyGev}
	case *kinegatev1.BeamMotion_MomentumGev:
		return reaction.BeamMotion{Given: reaction.ByMomentum, Value: value.MomentumGev}
	}
	f.need(at, "empty", "total_energy_gev, kinetic_energy_gev or momentum_gev")
	return reaction.BeamMotion{}
}

// describeFailure puts the path of the initial state in front of the fields that the
// core names within it.
func (s stateForm) describeFailure(err error) *Failure {
	f := *Explain(err)
	f.Violations = append([]Violation(nil), f.Violations...)
	for i := range f.Violations {
		if field := f.Violations[i].Field; field != "reaction" && field != "initial_state" {
			f.Violations[i].Field = join(s.path, field)
		}
	}
	return &f
}

// collisionMessage converts the energy and motion of an initial state.
func collisionMessage(c *reaction.Collision) *kinegatev1.CentreOfMass {
	cm := c.CentreOfMass()
	sin, cos := num.Sincos(cm.Tilt)
	return &kinegatev1.CentreOfMass{
		SGev2:    cm.S,
		SqrtSGev: cm.SqrtS,
		Total: &kinegatev1.FourMomentum{
			EnergyGev: cm.Energy, PxGev: cm.Momentum * sin, PzGev: cm.Momentum * cos,
		},
		Beta:               cm.Beta,
		Gamma:              cm.Gamma,
		InitialMomentumGev: cm.InitialMomentum,
	}
}
