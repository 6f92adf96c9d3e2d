package api

import (
	"math"

	"example.org/kinegate/kinematics/decay"
	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/particle"
	"example.org/kinegate/kinematics/reaction"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// describeFlight adds how the parent moves and how far it goes.
func describeFlight(
	m *kinegatev1.DescribeDecayResponse, r *reaction.Reaction, parent decay.Parent, request *kinegatev1.DescribeDecayRequest,
) error {
	motion, err := motionOfBody(parent)
	if err != nil {
		return In("parent", err)
	}
	m.Parent = &kinegatev1.ParentMotion{
		MassGev: motion.Mass, TotalEnergyGev: motion.Total, KineticEnergyGev: motion.Kinetic,
		MomentumGev: motion.Momentum, Beta: motion.Beta, Gamma: motion.Gamma,
	}
	if err := distanceFaults(request); err != nil {
		return err
	}
	life := r.Initial[0].Life
	if life != particle.LifeMeanLife && life != particle.LifeWidth {
		return nil
	}
	flight, err := decay.NewFlight(parent, r.Initial[0].MeanLife)
	if err != nil {
		return In("parent", err)
	}
	m.Parent.MeanLifeS, m.Parent.MeanFlightM = &r.Initial[0].MeanLife, &flight.MeanLength
	for i, d := range request.GetDistancesM() {
		fraction, err := flight.Surviving(d)
		if err != nil {
			return moved(err, index("distances_m", i))
		}
		m.SurvivingFractions = append(m.SurvivingFractions, fraction)
	}
	for i, interval := range request.GetIntervals() {
		fraction, err := flight.DecayingBetween(interval.GetFromM(), endOf(interval))
		if err != nil {
			return In(index("intervals", i), err)
		}
		m.DecayingFractions = append(m.DecayingFractions, fraction)
	}
	return nil
}

// endOf is the end of a stretch of the flight, which may have none.
func endOf(interval *kinegatev1.DistanceInterval) float64 {
	if interval.ToM == nil {
		return math.Inf(1)
	}
	return interval.GetToM()
}

// distanceFaults reports every distance that is none, whether or not the parent's life is
// known.
func distanceFaults(request *kinegatev1.DescribeDecayRequest) error {
	var list fault.List
	for i, d := range request.GetDistancesM() {
		if !(d >= 0) {
			list = append(list, fault.Number(index("distances_m", i), d, ">= 0"))
		}
	}
	for i, interval := range request.GetIntervals() {
		from, to := interval.GetFromM(), endOf(interval)
		if !(from >= 0) || math.IsInf(from, 0) {
			list = append(list, fault.Number(index("intervals", i)+".from_m", from, ">= 0 and finite"))
		}
		if !(to >= from) {
			list = append(list, fault.Number(index("intervals", i)+".to_m", to, ">= from_m, "+fault.Text(from)))
		}
	}
	return list.Err()
}
