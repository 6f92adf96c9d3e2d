package api

import (
	"context"
	"fmt"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/momentum/breakup"
	"example.org/kinegate/kinematics/particle"
	"example.org/kinegate/kinematics/reaction"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// reactionService answers closed-form questions about reactions.
type reactionService struct {
	kinegatev1.UnsafeReactionServiceServer

	table *particle.Table
}

// DescribeReaction describes a channel.
func (s *reactionService) DescribeReaction(
	_ context.Context, request *kinegatev1.DescribeReactionRequest,
) (*kinegatev1.DescribeReactionResponse, error) {
	r, err := s.reaction(request)
	if err != nil {
		return nil, err
	}
	f := &former{}
	form := f.initialStateOf("initial_state", request.GetInitialState())
	if err := f.faults.Err(); err != nil {
		return nil, err
	}
	channel, err := reaction.Describe(r, form.state)
	if err != nil {
		return nil, form.describeFailure(err)
	}
	response := channelMessage(r, &channel)
	response.TableVersion = s.table.Version()
	return response, nil
}

// reaction reads the reaction of a request.
func (s *reactionService) reaction(request *kinegatev1.DescribeReactionRequest) (*reaction.Reaction, error) {
	switch form := request.GetForm().(type) {
	case *kinegatev1.DescribeReactionRequest_Reaction:
		r, err := reaction.Parse(s.table, form.Reaction)
		if err != nil {
			return nil, atField("reaction", Explain(err))
		}
		return r, nil
	case *kinegatev1.DescribeReactionRequest_StructuredReaction:
		r, err := reaction.New(s.table, reactionSpec(form.StructuredReaction))
		if err != nil {
			return nil, In("structured_reaction", err)
		}
		return r, nil
	}
	return nil, fault.New(fault.Invalid, "form", "", "reaction or structured_reaction").Because("neither is set")
}

// channelMessage converts what is known about a channel.
func channelMessage(r *reaction.Reaction, c *reaction.Channel) *kinegatev1.DescribeReactionResponse {
	m := &kinegatev1.DescribeReactionResponse{
		Reaction:           r.String(),
		StructuredReaction: specMessage(r.Spec()),
		State:              stateMessage(c.State),
		Frame:              c.Frame,
		Remarks:            c.Remarks,
		Decays:             decayNotes(r.Decays),
		Inclusive:          remainderMessage(r.Remainder),
	}
	oneBody := len(r.Top) == 1 && !r.Inclusive
	found := !r.Inclusive || r.Remainder != nil && len(r.Remainder.Lightest) > 0
	if !oneBody && found {
		m.Threshold = thresholdMessage(&c.Nominal.Threshold)
		if c.Widened {
			m.LightestThreshold = thresholdMessage(&c.Lightest.Threshold)
		}
		m.Remarks = append(m.Remarks, closedAgain(c.Nominal.Threshold.Closed)...)
	}
	if c.Moving {
		m.CentreOfMass = collisionMessage(&c.Collision)
	}
	switch {
	case c.State == reaction.Unknown:
		return m
	case oneBody && c.Moving:
		m.OneBodySMinusM2Gev2 = &c.Square
		return m
	}
	m.ExcessEnergyGev, m.LightestExcessEnergyGev = &c.Nominal.Excess, &c.Lightest.Excess
	if c.State == reaction.Closed {
		decides := &c.Nominal
		if c.Widened {
			decides = &c.Lightest
		}
		if decides.HasDeficitEnergy {
			m.BeamEnergyDeficitGev = &decides.DeficitEnergy
		}
	}
	limitsOf(m, r, c)
	return m
}

// limitsOf adds where the products can go, for channels open with nominal masses. Two
// to eight products of the right side have limits; X would leave them open.
func limitsOf(m *kinegatev1.DescribeReactionResponse, r *reaction.Reaction, c *reaction.Channel) {
	if !c.Moving || r.Inclusive || len(r.Top) < 2 || len(r.Top) > reaction.MaxRangeBodies || c.Nominal.Excess < 0 {
		return
	}
	masses, names := make([]float64, len(r.Top)), make([]string, len(r.Top))
	for i, number := range r.Top {
		masses[i], names[i] = r.Products[number].Particle.Mass, r.Products[number].Name
	}
	final, err := c.Collision.FinalState(masses...)
	if err != nil {
		m.Remarks = append(m.Remarks, "no limits of the products: "+Explain(err).Message)
		return
	}
	limits := final.Limits()
	for i, l := range limits {
		m.Products = append(m.Products, &kinegatev1.ProductLimits{
			Product: names[i], Number: int32Of(r.Top[i]), MassGev: masses[i],
			CentreOfMassEnergy: energyRange(l.RestEnergy), CentreOfMassMomentum: energyRange(l.RestMomentum),
			LaboratoryEnergy: energyRange(l.Energy), LaboratoryMomentum: energyRange(l.Momentum),
			LaboratoryAngle: angleRange(l.Angle),
		})
	}
	if len(limits) == 2 {
		m.CentreOfMass.FinalMomentumGev = &limits[0].RestMomentum.Max
	}
	for _, subset := range final.Subsets() {
		mass, err := final.SubsetMass(subset)
		if err != nil {
			continue // Subsets lists only those that have a mass
		}
		m.SubsetMasses = append(m.SubsetMasses, &kinegatev1.SubsetMassLimits{
			Products: chosen(names, subset), Mass: energyRange(mass),
		})
	}
	for _, initial := range []reaction.Initial{reaction.FromBeam, reaction.FromTarget} {
		for i := range names {
			subset := reaction.SubsetOf(i)
			t, err := final.Transfer(initial, subset)
			if err != nil {
				continue // one product of several always has ends of t
			}
			m.MomentumTransfers = append(m.MomentumTransfers, &kinegatev1.MomentumTransferLimits{
				Initial:  kinegatev1.InitialParticle(initial) + kinegatev1.InitialParticle_INITIAL_PARTICLE_BEAM,
				Products: chosen(names, subset), TForwardGev2: t.Forward, TBackwardGev2: t.Backward,
			})
		}
	}
}

// chosen lists the names of a subset.
func chosen(names []string, s reaction.Subset) []string {
	var in []string
	for i, name := range names {
		if s.Has(i) {
			in = append(in, name)
		}
	}
	return in
}

func energyRange(r breakup.Range) *kinegatev1.EnergyRange {
	return &kinegatev1.EnergyRange{MinGev: r.Min, MaxGev: r.Max}
}

func angleRange(r breakup.Range) *kinegatev1.AngleRange {
	return &kinegatev1.AngleRange{MinRad: r.Min, MaxRad: r.Max}
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
		ChargeThirds: int32Of(x.Numbers.ChargeThirds),
		BaryonNumber: int32Of(x.Numbers.BaryonThirds / 3),
		Strangeness:  int32Of(x.Numbers.Strangeness),
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
