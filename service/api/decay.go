package api

import (
	"context"
	"maps"
	"slices"
	"strconv"

	"example.org/kinegate/kinematics/decay"
	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/momentum/breakup"
	"example.org/kinegate/kinematics/num"
	"example.org/kinegate/kinematics/particle"
	"example.org/kinegate/kinematics/reaction"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// Bounds of one decay.
const (
	maxDistances = 1000
	maxDaughters = 8
)

// decayService answers closed-form questions about decays.
type decayService struct {
	kinegatev1.UnsafeDecayServiceServer

	table *particle.Table
}

// DescribeDecay describes a decay.
func (s *decayService) DescribeDecay(
	_ context.Context, request *kinegatev1.DescribeDecayRequest,
) (*kinegatev1.DescribeDecayResponse, error) {
	r, err := reaction.Parse(s.table, request.GetDecay())
	if err != nil {
		return nil, atField("decay", Explain(err))
	}
	if !r.IsDecay() {
		return nil, fault.New(fault.Invalid, "decay", request.GetDecay(), "one particle on the left").
			Because("it is no decay")
	}
	if n := len(request.GetDistancesM()); n > maxDistances {
		return nil, fault.New(fault.Invalid, "distances_m", strconv.Itoa(n)+" distances", "at most "+strconv.Itoa(maxDistances))
	}
	channel, err := reaction.Describe(r, reaction.InitialState{})
	if err != nil {
		return nil, atField("decay", Explain(err))
	}
	m := &kinegatev1.DescribeDecayResponse{
		Decay:                        r.String(),
		State:                        stateMessage(channel.State),
		DecayClass:                   decayClassMessage(r.Decays[0].Class),
		ReleasedEnergyGev:            r.Decays[0].Released,
		ReleasedEnergyUncertaintyGev: releasedUncertainty(r),
		TableVersion:                 s.table.Version(),
	}
	f := &former{}
	parent := decay.Parent{Mass: r.Initial[0].Mass}
	if motion := request.GetParent(); motion != nil {
		given := f.motionOf("parent", motion)
		parent.Given, parent.Value = given.Given, given.Value
	}
	if err := f.faults.Err(); err != nil {
		return nil, err
	}
	if err := describeFlight(m, r, parent, request.GetDistancesM()); err != nil {
		return nil, err
	}
	if channel.Nominal.Excess < 0 || r.Inclusive || len(r.Top) > maxDaughters {
		return m, nil
	}
	return m, describeDaughters(m, r, parent)
}

// describeFlight adds how the parent moves and how far it goes.
func describeFlight(m *kinegatev1.DescribeDecayResponse, r *reaction.Reaction, parent decay.Parent, distances []float64) error {
	motion, err := motionOfBody(parent)
	if err != nil {
		return In("parent", err)
	}
	m.Parent = &kinegatev1.ParentMotion{
		MassGev: motion.Mass, TotalEnergyGev: motion.Total, KineticEnergyGev: motion.Kinetic,
		MomentumGev: motion.Momentum, Beta: motion.Beta, Gamma: motion.Gamma,
	}
	life := r.Initial[0].Life
	if life != particle.LifeMeanLife && life != particle.LifeWidth {
		return distanceFaults(distances)
	}
	flight, err := decay.NewFlight(parent, r.Initial[0].MeanLife)
	if err != nil {
		return err
	}
	m.Parent.MeanLifeS, m.Parent.MeanFlightM = &r.Initial[0].MeanLife, &flight.MeanLength
	if err := distanceFaults(distances); err != nil {
		return err
	}
	for i, d := range distances {
		fraction, err := flight.Surviving(d)
		if err != nil {
			return atField(index("distances_m", i), Explain(err))
		}
		m.SurvivingFractions = append(m.SurvivingFractions, fraction)
	}
	return nil
}

// distanceFaults reports every distance that is none.
func distanceFaults(distances []float64) error {
	var list fault.List
	for i, d := range distances {
		if !(d >= 0) {
			list = append(list, fault.Number(index("distances_m", i), d, ">= 0"))
		}
	}
	return list.Err()
}

// describeDaughters adds where the daughters can go.
func describeDaughters(m *kinegatev1.DescribeDecayResponse, r *reaction.Reaction, parent decay.Parent) error {
	masses := make([]float64, len(r.Top))
	for i, number := range r.Top {
		masses[i] = r.Products[number].Particle.Mass
	}
	d, err := decay.Describe(parent, masses...)
	if err != nil {
		return err
	}
	for i, number := range r.Top {
		l := &d.Daughters[i]
		m.Daughters = append(m.Daughters, &kinegatev1.DaughterLimits{
			Product: r.Products[number].Name, MassGev: l.Mass,
			RestFrameEnergy: energyRange(l.RestEnergy), RestFrameMomentum: energyRange(l.RestMomentum),
			LaboratoryEnergy: energyRange(l.Energy), LaboratoryMomentum: energyRange(l.Momentum),
			LaboratoryAngle: angleRange(l.Angle),
		})
	}
	if len(masses) != 2 {
		return nil
	}
	two, err := decay.NewTwoBody(parent, masses[0], masses[1])
	if err != nil {
		return err
	}
	m.OpeningAngle = angleRange(two.Opening())
	return nil
}

// motionOfBody is the motion of the parent in every form.
func motionOfBody(b decay.Parent) (momentum.Motion, error) {
	switch b.Given {
	case breakup.ByKinetic:
		return momentum.MotionFromKinetic(b.Mass, b.Value)
	case breakup.ByTotal:
		return momentum.MotionFromTotal(b.Mass, b.Value)
	case breakup.ByMomentum:
	}
	return momentum.MotionFromMomentum(b.Mass, b.Value)
}

// releasedUncertainty is the uncertainty of the released energy: one derivative per
// mass of the table, which particle and antiparticle share and both sides count, in
// quadrature.
func releasedUncertainty(r *reaction.Reaction) float64 {
	type share struct{ derivative, err float64 }
	shares := map[int64]share{}
	add := func(p *particle.Particle, derivative float64) {
		s := shares[p.MassOwner()]
		shares[p.MassOwner()] = share{s.derivative + derivative, p.MassError}
	}
	add(&r.Initial[0], 1)
	for _, number := range r.Top {
		add(&r.Products[number].Particle, -1)
	}
	total := 0.0
	for _, owner := range slices.Sorted(maps.Keys(shares)) {
		total = num.Hypot(total, shares[owner].derivative*shares[owner].err)
	}
	return total
}
