package api

import (
	"strconv"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/selection"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// selectionForm converts a selection to the core's form. The faults are those
// that the core cannot see, because its form has no room for them: enum values
// beyond the contract, and windows or rules without a member set. Enums of the
// core have the numbers of the contract.
func selectionForm(m *kinegatev1.Selection) (selection.Selection, fault.List) {
	f := &former{}
	s := selection.Selection{
		Name:             m.GetName(),
		Description:      m.GetDescription(),
		AssignmentBudget: m.GetAssignmentBudgetCount(),
	}
	for i, h := range m.GetHypotheses() {
		s.Hypotheses = append(s.Hypotheses, f.hypothesis(index("hypotheses", i), h))
	}
	for _, g := range m.GetGroups() {
		s.Groups = append(s.Groups, selection.Group{Name: g.GetName(), Hypotheses: g.GetHypotheses()})
	}
	return s, f.faults
}

// former converts parts of a selection and collects faults.
type former struct {
	faults fault.List
}

func (f *former) need(field, found, allowed string) {
	f.faults = append(f.faults, fault.New(fault.Invalid, field, found, allowed))
}

func (f *former) hypothesis(at string, m *kinegatev1.Hypothesis) selection.Hypothesis {
	h := selection.Hypothesis{
		Name:          m.GetName(),
		Reaction:      m.GetReaction(),
		AlsoConjugate: m.GetAlsoConjugate(),
		Prescale:      m.GetPrescaleCount(),
		Role:          enumForm[selection.Role](f, at+".role", m.GetRole()),

		RecordUncertainties: m.GetRecordUncertainties(),
	}
	if r := m.GetStructuredReaction(); r != nil {
		h.Structured = &selection.Reaction{
			Initial: r.GetInitial(), Products: productForms(r.GetProducts()), Inclusive: r.GetInclusive(),
		}
	}
	for i, p := range m.GetMeasurements() {
		h.Measurements = append(h.Measurements, selection.ProductMeasurement{
			Product:       p.GetProduct(),
			Measurement:   enumForm[selection.Measurement](f, index(at+".measurements", i)+".measurement", p.GetMeasurement()),
			MassFromEvent: p.GetMassFromEvent(),
			Merged:        mergedForm(p.GetMergedPhotons()),
		})
	}
	h.Beam = f.beam(at+".beam", m.GetBeam())
	h.ExtraObjects = f.extraObjects(at+".extra_objects", m.GetExtraObjects())
	if c := m.GetCondition(); c != nil {
		condition := f.condition(at+".condition", c)
		h.Condition = &condition
	}
	h.Fit = f.fit(at+".fit", m.GetFit())
	h.Ranking = f.ranking(at+".ranking", m.GetRanking())
	for i, w := range m.GetRecord() {
		h.Record = append(h.Record, f.window(index(at+".record", i), w))
	}
	return h
}

func mergedForm(m *kinegatev1.MergedPhotons) *selection.MergedPhotons {
	if m == nil {
		return nil
	}
	return &selection.MergedPhotons{MinEnergyGeV: m.GetMinEnergyGev()}
}

func productForms(ms []*kinegatev1.Product) []selection.Product {
	var products []selection.Product
	for _, m := range ms {
		products = append(products, selection.Product{Particle: m.GetParticle(), Daughters: productForms(m.GetDaughters())})
	}
	return products
}

func (f *former) beam(at string, m *kinegatev1.BeamSource) *selection.BeamSource {
	if m == nil {
		return nil
	}
	switch source := m.GetSource().(type) {
	case *kinegatev1.BeamSource_Tagged:
		tagged := &selection.TaggedBeam{}
		if w := source.Tagged.GetPrompt(); w != nil {
			prompt := timeWindow(w)
			tagged.Prompt = &prompt
		}
		for _, w := range source.Tagged.GetSideBands() {
			tagged.SideBands = append(tagged.SideBands, timeWindow(w))
		}
		return &selection.BeamSource{Tagged: tagged}
	case *kinegatev1.BeamSource_Fixed:
		return &selection.BeamSource{Fixed: f.initialState(at+".fixed", source.Fixed)}
	}
	f.need(at, "empty", "tagged or fixed")
	return nil
}

func timeWindow(m *kinegatev1.TimeWindow) selection.TimeWindow {
	return selection.TimeWindow{MinNS: m.MinNs, MaxNS: m.MaxNs, Weight: m.Weight}
}

func (f *former) initialState(at string, m *kinegatev1.InitialState) *selection.InitialState {
	switch kind := m.GetKind().(type) {
	case *kinegatev1.InitialState_BeamOnTarget:
		beam := f.motion(at+".beam_on_target.beam", kind.BeamOnTarget.GetBeam())
		return &selection.InitialState{BeamOnTarget: &beam}
	case *kinegatev1.InitialState_TwoBeams:
		return &selection.InitialState{TwoBeams: &selection.TwoBeams{
			Beam1:    f.motion(at+".two_beams.beam1", kind.TwoBeams.GetBeam1()),
			Beam2:    f.motion(at+".two_beams.beam2", kind.TwoBeams.GetBeam2()),
			AngleRad: kind.TwoBeams.AngleBetweenBeamsRad,
		}}
	case *kinegatev1.InitialState_TwoFourMomenta:
		return &selection.InitialState{FourMomenta: &[2]momentum.Four{
			fourMomentum(kind.TwoFourMomenta.GetFirst()), fourMomentum(kind.TwoFourMomenta.GetSecond()),
		}}
	case *kinegatev1.InitialState_SqrtSGev:
		return &selection.InitialState{SqrtSGeV: &kind.SqrtSGev}
	}
	f.need(at, "empty", "beam_on_target, two_beams, two_four_momenta or sqrt_s_gev")
	return nil
}

func (f *former) motion(at string, m *kinegatev1.BeamMotion) selection.BeamMotion {
	switch value := m.GetValue().(type) {
	case *kinegatev1.BeamMotion_TotalEnergyGev:
		return selection.BeamMotion{TotalEnergyGeV: &value.TotalEnergyGev}
	case *kinegatev1.BeamMotion_KineticEnergyGev:
		return selection.BeamMotion{KineticEnergyGeV: &value.KineticEnergyGev}
	case *kinegatev1.BeamMotion_MomentumGev:
		return selection.BeamMotion{MomentumGeV: &value.MomentumGev}
	}
	f.need(at, "empty", "total_energy_gev, kinetic_energy_gev or momentum_gev")
	return selection.BeamMotion{}
}

func fourMomentum(m *kinegatev1.FourMomentum) momentum.Four {
	return momentum.Four{
		P: momentum.Three{X: m.GetPxGev(), Y: m.GetPyGev(), Z: m.GetPzGev()},
		E: m.GetEnergyGev(),
	}
}

func (f *former) extraObjects(at string, m *kinegatev1.ExtraObjects) *selection.ExtraObjects {
	if m == nil {
		return nil
	}
	switch rule := m.GetRule().(type) {
	case *kinegatev1.ExtraObjects_None:
		return &selection.ExtraObjects{Rule: selection.NoExtraObjects}
	case *kinegatev1.ExtraObjects_SoftPhotons:
		return &selection.ExtraObjects{
			Rule:         selection.SoftPhotons,
			MaxCount:     rule.SoftPhotons.GetMaxCount(),
			MaxEnergyGeV: rule.SoftPhotons.GetMaxEnergyGev(),
		}
	case *kinegatev1.ExtraObjects_Any:
		return &selection.ExtraObjects{Rule: selection.AnyExtraObjects}
	}
	f.need(at, "empty", "none, soft_photons or any")
	return nil
}

func (f *former) condition(at string, m *kinegatev1.Condition) selection.Condition {
	var c selection.Condition
	if w := m.GetWindow(); w != nil {
		window := f.window(at+".window", w)
		c.Window = &window
	}
	for i, part := range m.GetAllOf() {
		c.AllOf = append(c.AllOf, f.condition(index(at+".all_of", i), part))
	}
	for i, part := range m.GetAnyOf() {
		c.AnyOf = append(c.AnyOf, f.condition(index(at+".any_of", i), part))
	}
	for i, part := range m.GetNoneOf() {
		c.NoneOf = append(c.NoneOf, f.condition(index(at+".none_of", i), part))
	}
	return c
}

func (f *former) ranking(at string, m *kinegatev1.Ranking) *selection.Ranking {
	if m == nil {
		return nil
	}
	r := &selection.Ranking{}
	switch m.GetOrder().(type) {
	case *kinegatev1.Ranking_ClosestMasses:
	case *kinegatev1.Ranking_FitProbability:
		r.FitProbability = true
	default:
		f.need(at, "empty", "closest_masses or fit_probability")
		return nil
	}
	for _, ref := range m.GetClosestMasses().GetMasses() {
		r.ClosestMasses = append(r.ClosestMasses, selection.MassReference{
			Products: ref.GetProducts(), MassGeV: ref.MassGev, ScaleGeV: ref.ScaleGev,
		})
	}
	return r
}

// enumForm converts an enum; the core has the contract's numbers, and 0 means the
// same in both.
func enumForm[To ~uint8, From interface {
	~int32
	String() string
}](f *former, at string, value From) To {
	// The generated String of a value beyond the contract is its number.
	if value < 0 || value.String() == strconv.Itoa(int(value)) {
		f.need(at, strconv.Itoa(int(value)), "a value of the contract")
		return 0
	}
	return To(value)
}

// index is the field path of element i of a list.
func index(field string, i int) string { return field + "[" + strconv.Itoa(i) + "]" }
