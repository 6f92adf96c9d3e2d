package api

import (
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// draw makes numbers of every magnitude, with special values between.
type draw struct{ *rand.Rand }

func (d draw) number() float64 {
	special := []float64{
		0, -1, 1, 1e-30, 1e30, math.Pi, 5e-324, math.MaxFloat64, math.NaN(), math.Inf(1), math.Copysign(0, -1),
		0.93827208943, 0.911081714, 1.5, math.Nextafter(1, 2), 2, 1 - 0x1p-53,
	}
	switch d.IntN(4) {
	case 0:
		return special[d.IntN(len(special))]
	case 1:
		return 4 * d.Float64()
	}
	x := math.Pow(10, 64*d.Float64()-32)
	if d.IntN(8) == 0 {
		x = -x
	}
	return x
}

// near is a number that suits most questions.
func (d draw) near() float64 {
	if d.IntN(3) == 0 {
		return d.number()
	}
	return math.Pow(10, 4*d.Float64()-3)
}

// TestAnswersOverAllMagnitudes asks everything with numbers of every magnitude: each
// answer is a reply of finite numbers or a refusal with a reason.
func TestAnswersOverAllMagnitudes(t *testing.T) {
	const rounds = 1500
	table := newTestTable(t)
	s, decays := &reactionService{table: table}, &decayService{table: table}
	reactions := []string{
		"gamma p -> K+ Lambda", "gamma gamma -> e+ e-", "p p -> p p", "He4 p -> He4 p", "e+ e- -> gamma gamma", "gamma e- -> gamma e-",
		"gamma p -> p pi+ pi-", "gamma p -> K+ X", "gamma p -> p rho0, rho0 -> pi+ pi-", "nu_e n -> e- p", "gamma gamma -> gamma gamma gamma",
		"gamma p -> p pi0 pi0 pi0 pi0",
	}
	decayTexts := []string{
		"Lambda -> p pi-", "pi0 -> gamma gamma", "Sigma0 -> Lambda gamma, Lambda -> p pi-", "mu- -> e- anti-nu_e nu_mu", "omega -> pi+ pi- pi0",
		"eta -> pi0 pi0 pi0, pi0 -> gamma gamma", "omega -> rho0 pi0, rho0 -> pi+ pi-", "pi+ -> mu+ nu_mu", "J/psi -> gamma gamma gamma",
	}
	d := draw{rand.New(rand.NewPCG(7, 11))} //nolint:gosec // the same questions every time
	replies := 0
	count := func(replied bool) {
		if replied {
			replies++
		}
	}
	for range rounds {
		text := reactions[d.IntN(len(reactions))]
		state := stateOfKind(uint8(d.IntN(4)), d.near(), d.near(), math.Pi*d.Float64())
		two := &kinegatev1.SolveTwoBodyRequest{Form: &kinegatev1.SolveTwoBodyRequest_Reaction{Reaction: text}, InitialState: state}
		lists := []*[]float64{
			&two.LaboratoryAnglesRad, &two.CentreOfMassAnglesRad, &two.CentreOfMassCosines, &two.LaboratoryTotalEnergiesGev,
			&two.LaboratoryKineticEnergiesGev, &two.LaboratoryMomentaGev, &two.TValuesGev2, &two.TPrimeValuesGev2,
		}
		*lists[d.IntN(len(lists))] = []float64{d.number(), d.near()}
		count(ask(t, s.SolveTwoBody, two))
		count(ask(t, s.DescribeReaction, &kinegatev1.DescribeReactionRequest{
			Form: &kinegatev1.DescribeReactionRequest_Reaction{Reaction: text}, InitialState: state, WithPhaseSpaceVolume: d.IntN(8) == 0,
		}))
		count(ask(t, s.DescribeReaction, &kinegatev1.DescribeReactionRequest{
			Form: &kinegatev1.DescribeReactionRequest_Reaction{Reaction: text}, InitialState: onTarget(d.near()),
			BoundNucleon: &kinegatev1.BoundNucleon{Nucleus: []string{"d", "He4", "C12"}[d.IntN(3)], FermiMomentumGev: d.Float64() / 2},
		}))
		count(ask(t, decays.TraceDalitzBoundary, &kinegatev1.TraceDalitzBoundaryRequest{
			Form: &kinegatev1.TraceDalitzBoundaryRequest_Process{Process: text}, SqrtSGev: []float64{d.near()}, Resolution: 0.2,
		}))
		count(askDecay(t, d, decays, decayTexts[d.IntN(len(decayTexts))]))
		count(askMotion(t, d, s))
		left, _, _ := strings.Cut(text, "->")
		count(ask(t, s.ListOpenChannels, &kinegatev1.ListOpenChannelsRequest{
			InitialParticles: strings.Fields(left), InitialState: state, MinBodyCount: 1, MaxBodyCount: 3, PageSize: 3,
			Products: []string{"p", "n", "gamma", "pi0", "pi+", "pi-", "K+", "Lambda", "e-", "e+"},
		}))
	}
	if replies < rounds {
		t.Errorf("only %d of %d questions were answered", replies, 7*rounds)
	}
}

func askDecay(t *testing.T, d draw, s *decayService, text string) bool {
	t.Helper()
	to := d.near()
	request := &kinegatev1.DescribeDecayRequest{
		Form: &kinegatev1.DescribeDecayRequest_Decay{Decay: text}, Parent: total(4 * math.Pow(10, 3*d.Float64())), DistancesM: []float64{d.near()},
		Intervals: []*kinegatev1.DistanceInterval{{FromM: d.near(), ToM: &to}},
	}
	if d.IntN(2) == 0 {
		request.Parent = &kinegatev1.BeamMotion{Value: &kinegatev1.BeamMotion_MomentumGev{MomentumGev: d.near()}}
	}
	if d.IntN(3) == 0 {
		request.RestFrameCosines, request.LaboratoryAnglesRad = []float64{2*d.Float64() - 1, 1, -1}, []float64{math.Pi * d.Float64(), 0}
	}
	if strings.HasPrefix(text, "pi0") {
		request.OpeningAnglesRad = []float64{math.Pi * d.Float64(), 0, math.Pi}
	}
	return ask(t, s.DescribeDecay, request)
}

func askMotion(t *testing.T, d draw, s *reactionService) bool {
	t.Helper()
	request := &kinegatev1.ConvertMotionRequest{
		Body: &kinegatev1.ConvertMotionRequest_MassGev{MassGev: d.number()}, ChargeThirds: int32(d.IntN(7) - 3),
		DistancesM: []float64{d.number()}, RefractiveIndices: []float64{d.near()},
	}
	if d.IntN(2) == 0 {
		request.Body = &kinegatev1.ConvertMotionRequest_Particle{Particle: []string{"gamma", "e-", "p", "n"}[d.IntN(4)]}
		request.ChargeThirds, request.DistancesM = 0, []float64{d.near()}
	}
	switch x := d.number(); d.IntN(5) {
	case 0:
		request.Value = &kinegatev1.ConvertMotionRequest_TotalEnergyGev{TotalEnergyGev: x}
	case 1:
		request.Value = &kinegatev1.ConvertMotionRequest_KineticEnergyGev{KineticEnergyGev: x}
	case 2:
		request.Value = &kinegatev1.ConvertMotionRequest_MomentumGev{MomentumGev: x}
	case 3:
		request.Value = &kinegatev1.ConvertMotionRequest_WavelengthM{WavelengthM: x}
	case 4:
		request.Value = &kinegatev1.ConvertMotionRequest_RigidityGv{RigidityGv: x}
	}
	return ask(t, s.ConvertMotion, request)
}
