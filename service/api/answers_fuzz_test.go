package api

import (
	"context"
	"math"
	"strings"
	"testing"

	"google.golang.org/protobuf/proto"
	"google.golang.org/protobuf/reflect/protoreflect"

	"example.org/kinegate/kinematics/particle"
	"example.org/kinegate/proto/column"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// ask asks and reports whether there was a reply. A refusal has a registered reason that
// is no fault of ours, and a reply holds finite numbers only, columns included.
func ask[Q, R proto.Message](t *testing.T, rpc func(context.Context, Q) (R, error), question Q) bool {
	t.Helper()
	reply, err := rpc(t.Context(), question)
	if err != nil {
		if f := Explain(err); f.Reason == InternalFault {
			t.Errorf("a fault of ours: %v", err)
		}
		return false
	}
	if allFinite(t, reply.ProtoReflect()); t.Failed() {
		t.Logf("the question was %v", question)
	}
	return true
}

func allFinite(t *testing.T, m protoreflect.Message) {
	t.Helper()
	m.Range(func(f protoreflect.FieldDescriptor, v protoreflect.Value) bool {
		each := func(v protoreflect.Value) {
			switch {
			case f.Message() != nil:
				allFinite(t, v.Message())
			case f.Kind() == protoreflect.DoubleKind && (math.IsNaN(v.Float()) || math.IsInf(v.Float(), 0)):
				t.Errorf("%s is %g", f.FullName(), v.Float())
			case f.Kind() == protoreflect.BytesKind:
				xs, err := column.Float64s(v.Bytes())
				if err != nil {
					t.Errorf("%s: %v", f.FullName(), err)
				}
				for i, x := range xs {
					if math.IsNaN(x) || math.IsInf(x, 0) {
						t.Errorf("%s[%d] is %g", f.FullName(), i, x)
					}
				}
			}
		}
		if !f.IsList() {
			each(v)
			return true
		}
		for i := range v.List().Len() {
			each(v.List().Get(i))
		}
		return true
	})
}

func fuzzTable(f *testing.F) *particle.Table {
	f.Helper()
	table, err := particle.New()
	if err != nil {
		f.Fatal(err)
	}
	return table
}

// stateOfKind makes an initial state of one of the kinds.
func stateOfKind(kind uint8, a, b, angle float64) *kinegatev1.InitialState {
	switch kind % 4 {
	case 0:
		return onTarget(a)
	case 1:
		return beams(a, b, &angle)
	case 2:
		return atSqrtS(a)
	}
	return &kinegatev1.InitialState{Kind: &kinegatev1.InitialState_TwoFourMomenta{TwoFourMomenta: &kinegatev1.TwoFourMomenta{
		First:  &kinegatev1.FourMomentum{EnergyGev: a, PzGev: b, PxGev: angle},
		Second: &kinegatev1.FourMomentum{EnergyGev: b, PyGev: a},
	}}}
}

func FuzzSolveTwoBody(f *testing.F) {
	f.Add("gamma p -> K+ Lambda", "Lambda", 1.5, 0.0, 0.3, uint8(0), uint8(0))
	f.Add("gamma gamma -> e+ e-", "", 1e-3, 1e-3, 3.0, uint8(1), uint8(2))
	f.Add("p p -> p p", "p[1]", 938.272089430000001, 2.0, -0.1, uint8(0), uint8(6))
	f.Add("He4 p -> He4 p", "p", 1e12, 0.0, 0.0, uint8(0), uint8(7))
	f.Add("e+ e- -> gamma gamma", "", 1.0, 1.0, 1.0, uint8(3), uint8(5))
	s := &reactionService{table: fuzzTable(f)}
	f.Fuzz(func(t *testing.T, text, product string, a, b, value float64, kind, variable uint8) {
		request := &kinegatev1.SolveTwoBodyRequest{
			Form: &kinegatev1.SolveTwoBodyRequest_Reaction{Reaction: text}, Product: product, InitialState: stateOfKind(kind, a, b, value),
		}
		lists := []*[]float64{
			&request.LaboratoryAnglesRad, &request.CentreOfMassAnglesRad, &request.CentreOfMassCosines, &request.LaboratoryTotalEnergiesGev,
			&request.LaboratoryKineticEnergiesGev, &request.LaboratoryMomentaGev, &request.TValuesGev2, &request.TPrimeValuesGev2,
		}
		*lists[int(variable)%len(lists)] = []float64{value, b}
		ask(t, s.SolveTwoBody, request)
	})
}

func FuzzConvertMotion(f *testing.F) {
	f.Add("pi+", 0.0, 1.2, 3.0, 1.33, int32(0), uint8(0))
	f.Add("gamma", 0.0, 351.1e-9, 1e30, 1.0, int32(0), uint8(6))
	f.Add("", 1e75, 1e-75, 1e-30, 1e6, int32(-2), uint8(1))
	f.Add("", 1e-75, 1e75, 0.0, 0.5, int32(1), uint8(5))
	s := &reactionService{table: fuzzTable(f)}
	f.Fuzz(func(t *testing.T, name string, mass, value, distance, index float64, charge int32, form uint8) {
		request := ofParticle(name)
		if name == "" {
			request.Body, request.ChargeThirds = &kinegatev1.ConvertMotionRequest_MassGev{MassGev: mass}, charge
		}
		request.DistancesM, request.RefractiveIndices = []float64{distance}, []float64{index}
		switch form % 8 {
		case 0:
			request.Value = &kinegatev1.ConvertMotionRequest_TotalEnergyGev{TotalEnergyGev: value}
		case 1:
			request.Value = &kinegatev1.ConvertMotionRequest_KineticEnergyGev{KineticEnergyGev: value}
		case 2:
			request.Value = &kinegatev1.ConvertMotionRequest_MomentumGev{MomentumGev: value}
		case 3:
			request.Value = &kinegatev1.ConvertMotionRequest_Beta{Beta: value}
		case 4:
			request.Value = &kinegatev1.ConvertMotionRequest_Gamma{Gamma: value}
		case 5:
			request.Value = &kinegatev1.ConvertMotionRequest_RigidityGv{RigidityGv: value}
		case 6:
			request.Value = &kinegatev1.ConvertMotionRequest_WavelengthM{WavelengthM: value}
		case 7:
			request.Value = &kinegatev1.ConvertMotionRequest_FrequencyHz{FrequencyHz: value}
		}
		ask(t, s.ConvertMotion, request)
	})
}

func FuzzDecays(f *testing.F) {
	f.Add("Lambda -> p pi-", 1.5, 0.1, 0.2, 0.3)
	f.Add("pi0 -> gamma gamma", 2.0, 0.0, 1.0, 3.0)
	f.Add("Sigma0 -> Lambda gamma, Lambda -> p pi-", 1e12, 1e300, 0.5, 1e-300)
	f.Add("eta -> pi0 pi0 pi0, pi0 -> gamma gamma", 0.547862, 0.0, 0.3, 0.1)
	f.Add("omega -> rho0 pi0, rho0 -> pi+ pi-", 1.0, 1.0, 0.4, 0.7)
	s := &decayService{table: fuzzTable(f)}
	f.Fuzz(func(t *testing.T, text string, energy, distance, cosine, angle float64) {
		request := &kinegatev1.DescribeDecayRequest{
			Form: &kinegatev1.DescribeDecayRequest_Decay{Decay: text}, Parent: total(energy), DistancesM: []float64{distance},
			Intervals: []*kinegatev1.DistanceInterval{{FromM: distance, ToM: &energy}, {FromM: distance}},
		}
		ask(t, s.DescribeDecay, request)
		request.RestFrameCosines, request.LaboratoryAnglesRad = []float64{cosine}, []float64{angle}
		ask(t, s.DescribeDecay, request)
		request.OpeningAnglesRad = []float64{angle}
		ask(t, s.DescribeDecay, request)
		ask(t, s.TraceDalitzBoundary, &kinegatev1.TraceDalitzBoundaryRequest{
			Form: &kinegatev1.TraceDalitzBoundaryRequest_Process{Process: text}, Resolution: math.Max(cosine, 0.02),
			Bands: []*kinegatev1.DalitzBandRequest{{Products: []string{"pi0[0]", "pi0[1]"}, MassSquaredGev2: angle}},
		})
	})
}

// FuzzReactionExtras asks for everything that DescribeReaction gives on request, for
// boundaries of reactions and for open channels.
func FuzzReactionExtras(f *testing.F) {
	f.Add("gamma p -> p eta", "d", "p", 0.7, 0.0, 0.25, uint8(0))
	f.Add("gamma p -> p pi+ pi-", "C12", "pi+ pi-", 2.0, 0.0, 0.1, uint8(0))
	f.Add("gamma p -> K+ X", "He4", "X", 1.8, 0.0, 0.2, uint8(2))
	f.Add("gamma gamma -> pi+ pi- pi0", "d", "pi0", 1.0, 1.0, 3.0, uint8(1))
	f.Add("gamma p -> p rho0, rho0 -> pi+ pi-", "d", "rho0", 1.0, 0.0, 0.5, uint8(0))
	table := fuzzTable(f)
	s, d := &reactionService{table: table}, &decayService{table: table}
	f.Fuzz(func(t *testing.T, text, nucleus, products string, a, b, c float64, kind uint8) {
		state := stateOfKind(kind, a, b, c)
		ask(t, s.DescribeReaction, &kinegatev1.DescribeReactionRequest{
			Form: &kinegatev1.DescribeReactionRequest_Reaction{Reaction: text}, InitialState: state, WithPhaseSpaceVolume: true,
			MomentumTransfers: []*kinegatev1.MomentumTransferPair{
				{Initial: kinegatev1.InitialParticle_INITIAL_PARTICLE_BEAM, Products: strings.Fields(products)},
			},
		})
		ask(t, s.DescribeReaction, &kinegatev1.DescribeReactionRequest{
			Form: &kinegatev1.DescribeReactionRequest_Reaction{Reaction: text}, InitialState: state,
			BoundNucleon: &kinegatev1.BoundNucleon{Nucleus: nucleus, FermiMomentumGev: c},
		})
		ask(t, d.TraceDalitzBoundary, &kinegatev1.TraceDalitzBoundaryRequest{
			Form: &kinegatev1.TraceDalitzBoundaryRequest_Process{Process: text}, InitialState: state, Resolution: 0.05,
		})
		left, _, _ := strings.Cut(text, "->")
		ask(t, s.ListOpenChannels, &kinegatev1.ListOpenChannelsRequest{
			InitialParticles: strings.Fields(left), InitialState: state, MinBodyCount: 1, MaxBodyCount: 2, WithSpinCBose: kind%2 == 0, PageSize: 5,
		})
	})
}
