package api

import (
	"example.org/kinegate/kinematics/selection"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// fit converts the fit of a hypothesis.
func (f *former) fit(at string, m *kinegatev1.Fit) *selection.Fit {
	if m == nil {
		return nil
	}
	fit := &selection.Fit{
		Conservation: enumForm[selection.Conservation](f, at+".conservation", m.GetConservation()),
		Vertex:       enumForm[selection.VertexTreatment](f, at+".vertex", m.GetVertex()),
		BeamEnergy:   f.initialEnergy(at+".beam_energy", m.GetBeamEnergy()),
		TargetEnergy: f.initialEnergy(at+".target_energy", m.GetTargetEnergy()),
	}
	for _, mass := range m.GetMasses() {
		fit.Masses = append(fit.Masses, selection.FitMass{Products: mass.GetProducts(), MassGeV: mass.MassGev})
	}
	for _, pair := range m.GetEqualMasses() {
		fit.EqualMasses = append(fit.EqualMasses, selection.FitEqualMasses{First: pair.GetFirst(), Second: pair.GetSecond()})
	}
	return fit
}

// initialEnergy converts what is known of the energy of an initial particle.
func (f *former) initialEnergy(at string, m *kinegatev1.InitialEnergy) *selection.InitialEnergy {
	if m == nil {
		return nil
	}
	switch x := m.GetKnowledge().(type) {
	case *kinegatev1.InitialEnergy_Exact:
		return &selection.InitialEnergy{Knowledge: selection.ExactEnergy}
	case *kinegatev1.InitialEnergy_Measured:
		return &selection.InitialEnergy{Knowledge: selection.MeasuredEnergy, SigmaGeV: x.Measured.SigmaGev}
	case *kinegatev1.InitialEnergy_Unmeasured:
		return &selection.InitialEnergy{Knowledge: selection.UnmeasuredEnergy}
	}
	f.need(at, "empty", "exact, measured or unmeasured")
	return nil
}
