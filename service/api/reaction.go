package api

import (
	"context"

	"example.org/kinegate/kinematics/particle"
	"example.org/kinegate/kinematics/reaction"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// reactionService answers closed-form questions about reactions.
type reactionService struct {
	kinegatev1.UnsafeReactionServiceServer

	table *particle.Table
	turns *turns
	texts reactionTexts
	last  lastSearch
}

// DescribeReaction describes a channel.
func (s *reactionService) DescribeReaction(
	_ context.Context, request *kinegatev1.DescribeReactionRequest,
) (*kinegatev1.DescribeReactionResponse, error) {
	parsed, err := s.texts.read(s.table, processForm{
		name: "reaction", text: request.GetReaction(), structured: request.GetStructuredReaction(), unset: request.GetForm() == nil,
	})
	if err != nil {
		return nil, err
	}
	r := parsed.Reaction
	f := &former{}
	form := f.stateOf(request.GetInitialState())
	if err := f.faults.Err(); err != nil {
		return nil, err
	}
	transfers, err := transferForms(s.table, r, request.GetMomentumTransfers())
	if err != nil {
		return nil, err
	}
	channel, err := reaction.Describe(r, form.state)
	if err != nil {
		return nil, form.describeFailure(err)
	}
	response := channelMessage(parsed, &channel)
	limitsOf(response, r, &channel, transfers, request.GetWithPhaseSpaceVolume())
	if response.QuasiFree, err = quasiFree(s.table, r, &form.state, request.GetBoundNucleon()); err != nil {
		return nil, err
	}
	response.TableVersion = s.table.Version()
	return response, nil
}

// channelMessage converts what is known about a channel.
func channelMessage(r *parsedReaction, c *reaction.Channel) *kinegatev1.DescribeReactionResponse {
	m := &kinegatev1.DescribeReactionResponse{
		Reaction:           r.text,
		StructuredReaction: r.structured,
		State:              stateMessage(c.State),
		Frame:              c.Frame,
		Remarks:            c.Remarks,
		Decays:             r.decays,
		Inclusive:          r.remainder,
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
	return m
}
