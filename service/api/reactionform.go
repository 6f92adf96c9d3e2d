package api

import (
	"fmt"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/particle"
	"example.org/kinegate/kinematics/reaction"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// processForm is a reaction or decay of a request, in text or in structured form. Fields
// are called name and structured_name.
type processForm struct {
	name, text string
	structured *kinegatev1.Reaction
	// unset tells that neither is given.
	unset bool
}

// read returns the process.
func (p processForm) read(table *particle.Table) (*reaction.Reaction, error) {
	switch {
	case p.unset:
		return nil, fault.New(fault.Invalid, "form", "", p.name+" or structured_"+p.name).Because("neither is set")
	case p.structured != nil:
		r, err := reaction.New(table, reactionSpec(p.structured))
		if err != nil {
			return nil, In("structured_"+p.name, err)
		}
		return r, nil
	}
	r, err := reaction.Parse(table, p.text)
	if err != nil {
		return nil, atField(p.name, Explain(err))
	}
	return r, nil
}

// field is the field that the process was read from.
func (p processForm) field() string {
	if p.structured != nil {
		return "structured_" + p.name
	}
	return p.name
}

func thresholdMessage(t *reaction.Threshold) *kinegatev1.Threshold {
	m := &kinegatev1.Threshold{
		SqrtSGev: t.Mass, SqrtSUncertaintyGev: t.MassError, OpenAtRest: t.OpenAtRest,
	}
	if t.Reached {
		m.TotalEnergyGev, m.KineticEnergyGev, m.MomentumGev = &t.Beam.Total, &t.Beam.Kinetic, &t.Beam.Momentum
		m.EnergyUncertaintyGev = &t.BeamError.Total
	}
	return m
}

// closedAgain says in words where a channel that is open at rest is closed.
func closedAgain(c *reaction.ClosedRange) []string {
	if c == nil {
		return nil
	}
	return []string{fmt.Sprintf("open with beam 1 at rest, closed again for its momentum from %s to %s GeV",
		fault.Text(c.Below.Momentum), fault.Text(c.Above.Momentum))}
}

// stateMessage converts the state of a channel.
func stateMessage(s reaction.State) kinegatev1.ChannelState {
	switch s {
	case reaction.Open:
		return kinegatev1.ChannelState_CHANNEL_STATE_OPEN
	case reaction.OpenThroughWidth:
		return kinegatev1.ChannelState_CHANNEL_STATE_OPEN_THROUGH_WIDTH
	case reaction.AtThreshold:
		return kinegatev1.ChannelState_CHANNEL_STATE_AT_THRESHOLD
	case reaction.Closed:
		return kinegatev1.ChannelState_CHANNEL_STATE_CLOSED
	case reaction.OnPoint:
		return kinegatev1.ChannelState_CHANNEL_STATE_ON_POINT
	case reaction.OffPoint:
		return kinegatev1.ChannelState_CHANNEL_STATE_OFF_POINT
	case reaction.Unknown:
	}
	return kinegatev1.ChannelState_CHANNEL_STATE_UNSPECIFIED
}

// decayClassMessage converts the class of a decay.
func decayClassMessage(c reaction.DecayClass) kinegatev1.DecayClass {
	switch c {
	case reaction.Strong:
		return kinegatev1.DecayClass_DECAY_CLASS_STRONG
	case reaction.Electromagnetic:
		return kinegatev1.DecayClass_DECAY_CLASS_ELECTROMAGNETIC
	case reaction.Weak:
		return kinegatev1.DecayClass_DECAY_CLASS_WEAK
	}
	return kinegatev1.DecayClass_DECAY_CLASS_UNSPECIFIED
}

func decayNotes(decays []reaction.Decay) []*kinegatev1.DecayNote {
	var notes []*kinegatev1.DecayNote
	for _, d := range decays {
		notes = append(notes, &kinegatev1.DecayNote{
			Decay: d.Text, DecayClass: decayClassMessage(d.Class), ReleasedEnergyGev: d.Released,
		})
	}
	return notes
}

func remainderMessage(x *reaction.Remainder) *kinegatev1.InclusiveRemainder {
	if x == nil {
		return nil
	}
	m := &kinegatev1.InclusiveRemainder{
		ChargeThirds:       int32Of(x.Numbers.ChargeThirds),
		BaryonNumberThirds: int32Of(x.Numbers.BaryonThirds),
		Strangeness:        int32Of(x.Numbers.Strangeness),
	}
	for _, p := range x.Lightest {
		m.Lightest = append(m.Lightest, p.Name)
	}
	if mass, ok := x.Mass(); ok {
		m.LightestMassGev = &mass
	}
	return m
}

// reactionSpec converts the structured form of a reaction to the core's.
func reactionSpec(m *kinegatev1.Reaction) reaction.Spec {
	return reaction.Spec{
		Initial: m.GetInitial(), Products: productSpecs(m.GetProducts()), Inclusive: m.GetInclusive(),
	}
}

func productSpecs(ms []*kinegatev1.Product) []reaction.ProductSpec {
	var specs []reaction.ProductSpec
	for _, m := range ms {
		specs = append(specs, reaction.ProductSpec{Particle: m.GetParticle(), Daughters: productSpecs(m.GetDaughters())})
	}
	return specs
}

// specMessage converts the structured form of a reaction from the core's.
func specMessage(s reaction.Spec) *kinegatev1.Reaction {
	return &kinegatev1.Reaction{Initial: s.Initial, Products: productMessages(s.Products), Inclusive: s.Inclusive}
}

func productMessages(specs []reaction.ProductSpec) []*kinegatev1.Product {
	var ms []*kinegatev1.Product
	for _, p := range specs {
		ms = append(ms, &kinegatev1.Product{Particle: p.Particle, Daughters: productMessages(p.Daughters)})
	}
	return ms
}
