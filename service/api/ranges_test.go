package api

import (
	"math"
	"slices"
	"strings"
	"testing"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

func describeWith(
	t *testing.T, text string, in *kinegatev1.InitialState, change func(*kinegatev1.DescribeReactionRequest),
) (*kinegatev1.DescribeReactionResponse, error) {
	t.Helper()
	request := &kinegatev1.DescribeReactionRequest{
		Form: &kinegatev1.DescribeReactionRequest_Reaction{Reaction: text}, InitialState: in,
	}
	change(request)
	return (&reactionService{table: newTestTable(t)}).DescribeReaction(t.Context(), request)
}

// TestInclusiveRanges checks that the product beside X goes as fast as beside the lightest
// X, and from there down to rest, since X may be heavier.
func TestInclusiveRanges(t *testing.T) {
	both, err := describe(t, "gamma p -> K+ Lambda", onTarget(2))
	if err != nil {
		t.Fatal(err)
	}
	m, err := describe(t, "gamma p -> K+ X", onTarget(2))
	if err != nil {
		t.Fatal(err)
	}
	got, want := m.GetProducts()[0].GetCentreOfMassMomentum(), both.GetProducts()[0].GetCentreOfMassMomentum()
	if got.GetMinGev() != 0 || !near(got.GetMaxGev(), want.GetMaxGev(), 4e-15) {
		t.Errorf("%v, want up to %v", got, want)
	}
	mass := m.GetSubsetMasses()[0]
	kaon := both.GetProducts()[0].GetMassGev()
	if !slices.Equal(mass.GetProducts(), []string{"X"}) || mass.GetMass().GetMinGev() != m.GetInclusive().GetLightestMassGev() ||
		!near(mass.GetMass().GetMaxGev(), m.GetCentreOfMass().GetSqrtSGev()-kaon, 1e-15) {
		t.Errorf("mass of X %v", mass)
	}
	if len(m.GetMomentumTransfers()) != 4 || m.GetMomentumTransfers()[1].GetProducts()[0] != "X" {
		t.Errorf("%v", m.GetMomentumTransfers())
	}
	three, err := describe(t, "gamma p -> pi+ pi- X", onTarget(2))
	if err != nil || len(three.GetSubsetMasses()) != 4 {
		t.Errorf("%v, %v", three.GetSubsetMasses(), err)
	}
}

// TestRangesThroughWidth checks that the masses are said.
func TestRangesThroughWidth(t *testing.T) {
	m, err := describe(t, "gamma p -> p rho0, rho0 -> pi+ pi-", onTarget(1))
	if err != nil {
		t.Fatal(err)
	}
	if m.GetLimitMasses() != kinegatev1.LimitMasses_LIMIT_MASSES_LIGHTEST || !near(m.GetProducts()[1].GetMassGev(), 2*0.13957, 1e-4) ||
		!strings.Contains(strings.Join(m.GetRemarks(), " "), "least masses") {
		t.Errorf("%v", m)
	}
	open, err := describe(t, "gamma p -> p rho0, rho0 -> pi+ pi-", onTarget(2))
	if err != nil || open.GetLimitMasses() != kinegatev1.LimitMasses_LIMIT_MASSES_NOMINAL {
		t.Errorf("%v, %v", open.GetLimitMasses(), err)
	}
	closed, err := describe(t, "gamma p -> p rho0, rho0 -> pi+ pi-", onTarget(0.2))
	if err != nil || closed.GetLimitMasses() != kinegatev1.LimitMasses_LIMIT_MASSES_UNSPECIFIED {
		t.Errorf("%v, %v", closed.GetLimitMasses(), err)
	}
}

// TestPhaseSpaceVolume holds the volume against (pi/2) sqrt(lambda)/s = pi p*/sqrt(s) for
// two bodies.
func TestPhaseSpaceVolume(t *testing.T) {
	volume := func(r *kinegatev1.DescribeReactionRequest) { r.WithPhaseSpaceVolume = true }
	m, err := describeWith(t, "gamma p -> K+ Lambda", onTarget(1.5), volume)
	if err != nil {
		t.Fatal(err)
	}
	want := math.Pi * m.GetCentreOfMass().GetFinalMomentumGev() / m.GetCentreOfMass().GetSqrtSGev()
	if v := m.GetPhaseSpaceVolume(); !near(v.GetVolume(), want, 8e-15) || v.GetGevPower() != 0 {
		t.Errorf("%v, want %g", v, want)
	}
	three, err := describeWith(t, "gamma p -> p pi+ pi-", onTarget(1.5), volume)
	if err != nil || three.GetPhaseSpaceVolume().GetVolume() <= 0 || three.GetPhaseSpaceVolume().GetGevPower() != 2 {
		t.Errorf("%v, %v", three.GetPhaseSpaceVolume(), err)
	}
	for _, text := range []string{"gamma p -> K+ X", "gamma p -> p K+ K-"} {
		if m, err := describeWith(t, text, onTarget(1), volume); err != nil || m.GetPhaseSpaceVolume() != nil {
			t.Errorf("%s: %v, %v", text, m.GetPhaseSpaceVolume(), err)
		}
	}
}

// TestNamedTransfers checks that t(beam, p) is t(target, pi+ pi-), since momentum is
// conserved.
func TestNamedTransfers(t *testing.T) {
	pair := func(initial kinegatev1.InitialParticle, products ...string) *kinegatev1.MomentumTransferPair {
		return &kinegatev1.MomentumTransferPair{Initial: initial, Products: products}
	}
	const beam, target = kinegatev1.InitialParticle_INITIAL_PARTICLE_BEAM, kinegatev1.InitialParticle_INITIAL_PARTICLE_TARGET
	asking := func(pairs ...*kinegatev1.MomentumTransferPair) func(*kinegatev1.DescribeReactionRequest) {
		return func(r *kinegatev1.DescribeReactionRequest) { r.MomentumTransfers = pairs }
	}
	m, err := describeWith(t, "gamma p -> p pi+ pi-", onTarget(2), asking(pair(beam, "pi-", "pi+"), pair(target, "p")))
	if err != nil {
		t.Fatal(err)
	}
	a, b := m.GetMomentumTransfers()[0], m.GetMomentumTransfers()[1]
	if !near(a.GetTForwardGev2(), b.GetTForwardGev2(), 4e-15) || !near(a.GetTBackwardGev2(), b.GetTBackwardGev2(), 4e-15) || a.GetTForwardGev2() >= 0 {
		t.Errorf("%v and %v", a, b)
	}
	if m, err := describeWith(t, "gamma p -> K+ X", onTarget(2), asking(pair(beam, "X"))); err != nil || len(m.GetMomentumTransfers()) != 1 {
		t.Errorf("%v, %v", m.GetMomentumTransfers(), err)
	}
	for name, c := range map[string]struct {
		pair  *kinegatev1.MomentumTransferPair
		field string
	}{
		"no initial": {pair(0, "p"), "momentum_transfers[0].initial"},
		"none":       {pair(beam), "momentum_transfers[0].products"},
		"all":        {pair(beam, "p", "pi+", "pi-"), "momentum_transfers[0].products"},
		"twice":      {pair(beam, "p", "p"), "momentum_transfers[0].products[1]"},
		"unknown":    {pair(beam, "eta"), "momentum_transfers[0].products[0]"},
		"no X":       {pair(beam, "X"), "momentum_transfers[0].products[0]"},
	} {
		t.Run(name, func(t *testing.T) {
			_, err := describeWith(t, "gamma p -> p pi+ pi-", onTarget(2), asking(c.pair))
			if m := refused(t, err, FieldInvalid); m["field"] != c.field {
				t.Errorf("field %q, want %q: %v", m["field"], c.field, err)
			}
		})
	}
	_, err = describeWith(t, "gamma p -> p pi+ pi-", onTarget(2), asking(make([]*kinegatev1.MomentumTransferPair, 501)...))
	refused(t, err, FieldInvalid)
}

// TestQuasiFree checks eta photoproduction on the deuteron: below the free threshold of
// 0.708 GeV and above the absolute one of 0.631 GeV (coherent 0.628 GeV), as common in the
// trade, to the digits stated.
func TestQuasiFree(t *testing.T) {
	bound := func(nucleus string, momentum float64) func(*kinegatev1.DescribeReactionRequest) {
		return func(r *kinegatev1.DescribeReactionRequest) {
			r.BoundNucleon = &kinegatev1.BoundNucleon{Nucleus: nucleus, FermiMomentumGev: momentum}
		}
	}
	const text = "gamma p -> p eta"
	m, err := describeWith(t, text, onTarget(0.68), bound("d", 0.3))
	if err != nil {
		t.Fatal(err)
	}
	q := m.GetQuasiFree()
	if m.GetState() != kinegatev1.ChannelState_CHANNEL_STATE_CLOSED || q.GetState() != kinegatev1.ChannelState_CHANNEL_STATE_OPEN || q.GetEveryNucleon() {
		t.Errorf("free %v, bound %v, every nucleon %v", m.GetState(), q.GetState(), q.GetEveryNucleon())
	}
	at := func(x *kinegatev1.Threshold) float64 { return x.GetTotalEnergyGev() }
	if !(at(q.GetAbsolute()) <= at(q.GetLowest()) && at(q.GetLowest()) < at(q.GetAtRest()) && at(q.GetAtRest()) < at(q.GetHighest())) {
		t.Errorf("thresholds %g, %g, %g, %g", at(q.GetAbsolute()), at(q.GetLowest()), at(q.GetAtRest()), at(q.GetHighest()))
	}
	if !near(at(q.GetAbsolute()), 0.631, 1e-3) || !near(at(q.GetCoherent()), 0.628, 1e-3) || q.GetCoherentReaction() != "gamma d -> d eta" ||
		q.GetSpectator() != "n" || !strings.Contains(q.GetModel(), "spectator") {
		t.Errorf("%v", q)
	}
	if m, err = describeWith(t, text, nil, bound("d", 0.3)); err != nil || m.GetQuasiFree().GetState() != 0 {
		t.Errorf("no energy: %v, %v", m.GetQuasiFree(), err)
	}
	if m, err = describeWith(t, "gamma p -> n pi+", onTarget(3), bound("d", 0.3)); err != nil || m.GetQuasiFree().GetCoherent() != nil ||
		!m.GetQuasiFree().GetEveryNucleon() {
		t.Errorf("no coherent reaction: %v, %v", m.GetQuasiFree(), err)
	}
	for name, c := range map[string]struct {
		text   string
		in     *kinegatev1.InitialState
		change func(*kinegatev1.DescribeReactionRequest)
		reason Reason
		field  string
	}{
		"unknown nucleus":  {text, onTarget(1), bound("deuton", 0.1), NameUnknown, "bound_nucleon.nucleus"},
		"no nucleus":       {text, onTarget(1), bound("p", 0.1), FieldInvalid, "bound_nucleon.nucleus"},
		"momentum":         {text, onTarget(1), bound("d", 2), FieldInvalid, "bound_nucleon.fermi_momentum_gev"},
		"momentum is none": {text, onTarget(1), bound("d", math.NaN()), FieldInvalid, "bound_nucleon.fermi_momentum_gev"},
		"no nucleon":       {"gamma gamma -> e+ e-", nil, bound("d", 0.1), FieldInvalid, "reaction"},
		"two beams":        {text, atSqrtS(2), bound("d", 0.1), FieldInvalid, "bound_nucleon"},
	} {
		t.Run(name, func(t *testing.T) {
			_, err := describeWith(t, c.text, c.in, c.change)
			if m := refused(t, err, c.reason); m["field"] != c.field {
				t.Errorf("field %q, want %q: %v", m["field"], c.field, err)
			}
		})
	}
}
