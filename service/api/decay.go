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
	maxDaughters = 8
	// maxDecayValues bounds each of the lists of values.
	maxDecayValues = 1000
)

// decayService answers closed-form questions about decays.
type decayService struct {
	kinegatev1.UnsafeDecayServiceServer

	table *particle.Table
	turns *turns
}

// DescribeDecay describes a decay.
func (s *decayService) DescribeDecay(
	_ context.Context, request *kinegatev1.DescribeDecayRequest,
) (*kinegatev1.DescribeDecayResponse, error) {
	process := processForm{name: "decay", text: request.GetDecay(), structured: request.GetStructuredDecay()}
	r, err := process.read(s.table)
	if err != nil {
		return nil, err
	}
	if !r.IsDecay() {
		return nil, fault.New(fault.Invalid, process.field(), r.String(), "one particle on the left").
			Because("it is no decay")
	}
	if err := decayLists(request); err != nil {
		return nil, err
	}
	channel, err := reaction.Describe(r, reaction.InitialState{})
	if err != nil {
		return nil, atField(process.field(), Explain(err))
	}
	m := &kinegatev1.DescribeDecayResponse{
		Decay:                        r.String(),
		State:                        stateMessage(channel.State),
		DecayClass:                   decayClassMessage(r.Decays[0].Class),
		ReleasedEnergyGev:            r.Decays[0].Released,
		ReleasedEnergyUncertaintyGev: releasedUncertainty(r),
		Remarks:                      channel.Remarks,
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
	if err := describeFlight(m, r, parent, request); err != nil {
		return nil, err
	}
	return m, describeDaughters(m, r, &channel, parent, request)
}

// decayLists holds the lists of a request to their length.
func decayLists(request *kinegatev1.DescribeDecayRequest) error {
	f := &former{}
	for _, list := range []struct {
		field string
		count int
	}{
		{"distances_m", len(request.GetDistancesM())}, {"intervals", len(request.GetIntervals())},
		{"opening_angles_rad", len(request.GetOpeningAnglesRad())}, {"rest_frame_cosines", len(request.GetRestFrameCosines())},
		{"laboratory_angles_rad", len(request.GetLaboratoryAnglesRad())},
	} {
		if list.count > maxDecayValues {
			f.need(list.field, strconv.Itoa(list.count)+" values", "at most "+strconv.Itoa(maxDecayValues))
		}
	}
	return f.faults.Err()
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
