package api

import (
	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/momentum/breakup"
	"example.org/kinegate/kinematics/particle"
	"example.org/kinegate/kinematics/reaction"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// quasiFree answers for a reaction whose second particle is bound in a nucleus; nil where
// that is not asked for.
func quasiFree(
	table *particle.Table, r *reaction.Reaction, in *reaction.InitialState, asked *kinegatev1.BoundNucleon,
) (*kinegatev1.QuasiFree, error) {
	const field = "bound_nucleon"
	if asked == nil {
		return nil, nil //nolint:nilnil // not asked for
	}
	if in.Kind != reaction.Unstated && in.Kind != reaction.BeamOnTarget {
		return nil, fault.New(fault.Invalid, field, asked.GetNucleus(), "a beam on a target at rest, or no initial state, beside it")
	}
	nucleus, err := table.Named(asked.GetNucleus())
	if err != nil {
		return nil, moved(err, field+".nucleus")
	}
	q, err := reaction.BoundNucleon(table, r, nucleus, asked.GetFermiMomentumGev())
	if err != nil {
		f := *In(field, err)
		for i := range f.Violations {
			if f.Violations[i].Field == field+".reaction" {
				f.Violations[i].Field = "reaction"
			}
		}
		return nil, &f
	}
	m := &kinegatev1.QuasiFree{
		Nucleus: q.Nucleus.Name, Spectator: q.Spectator.Name, FermiMomentumGev: q.FermiMomentum,
		Model:  reaction.QuasiFreeModel,
		AtRest: boundThreshold(&q.AtRest), Lowest: boundThreshold(&q.Lowest), Highest: boundThreshold(&q.Highest),
		LowestNucleonMomentumGev: q.LowestMomentum, Absolute: boundThreshold(&q.Absolute),
	}
	if q.Coherent != nil {
		m.Coherent, m.CoherentReaction = boundThreshold(q.Coherent), coherentText(table, r, nucleus.Name)
	}
	if in.Kind == reaction.Unstated {
		return m, nil
	}
	motion, err := motionOfBody(breakup.Body{Mass: r.Initial[0].Mass, Given: in.Beam1.Given, Value: in.Beam1.Value})
	if err != nil {
		return nil, In("initial_state.beam_on_target.beam", err)
	}
	m.State = kinegatev1.ChannelState_CHANNEL_STATE_CLOSED
	if reached(&q.Lowest, motion.Kinetic) {
		m.State = kinegatev1.ChannelState_CHANNEL_STATE_OPEN
	}
	m.EveryNucleon = reached(&q.Highest, motion.Kinetic)
	return m, nil
}

// boundThreshold converts a threshold without its uncertainty, which the model's own far
// exceeds.
func boundThreshold(t *reaction.Threshold) *kinegatev1.Threshold {
	m := thresholdMessage(t)
	m.EnergyUncertaintyGev, m.SqrtSUncertaintyGev = nil, 0
	return m
}

// reached reports whether a kinetic energy of the beam is above a threshold.
func reached(t *reaction.Threshold, kinetic float64) bool {
	return t.OpenAtRest || t.Reached && kinetic > t.Beam.Kinetic
}

// coherentText is the reaction with the nucleus in the place of the struck nucleon, empty
// where the nucleon is no product of the right side.
func coherentText(table *particle.Table, r *reaction.Reaction, nucleus string) string {
	spec := r.Spec()
	for i := range spec.Products {
		if spec.Products[i].Particle != spec.Initial[1] {
			continue
		}
		spec.Products[i] = reaction.ProductSpec{Particle: nucleus}
		spec.Initial[1] = nucleus
		if coherent, err := reaction.New(table, spec); err == nil {
			return coherent.String()
		}
		break
	}
	return ""
}
