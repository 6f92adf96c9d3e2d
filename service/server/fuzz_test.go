package server

import (
	"math"
	"slices"
	"testing"

	"google.golang.org/grpc"
	"google.golang.org/grpc/codes"
	"google.golang.org/grpc/status"
	"google.golang.org/protobuf/proto"
	"google.golang.org/protobuf/reflect/protoreflect"
	"google.golang.org/protobuf/reflect/protoregistry"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/api"
)

// unaryMethods are the methods with one message each way, in a fixed order.
func unaryMethods(t testing.TB) []protoreflect.MethodDescriptor {
	t.Helper()
	var all []protoreflect.MethodDescriptor
	protoregistry.GlobalFiles.RangeFilesByPackage("kinegate.v1", func(f protoreflect.FileDescriptor) bool {
		for i := range f.Services().Len() {
			methods := f.Services().Get(i).Methods()
			for j := range methods.Len() {
				if m := methods.Get(j); !m.IsStreamingClient() && !m.IsStreamingServer() {
					all = append(all, m)
				}
			}
		}
		return true
	})
	slices.SortFunc(all, func(a, b protoreflect.MethodDescriptor) int {
		if a.FullName() < b.FullName() {
			return -1
		}
		return 1
	})
	return all
}

// FuzzUnary sends any bytes to any unary method through everything that stands around
// it. Whatever comes, the answer is a decodable reply of finite numbers, or an error
// that carries a registered reason and is no fault of ours.
func FuzzUnary(f *testing.F) {
	for i, m := range seeds() {
		wire, err := proto.Marshal(m)
		if err != nil {
			f.Fatal(err)
		}
		for method := range unaryMethods(f) {
			if method == i%len(unaryMethods(f)) || i < 4 {
				f.Add(method, wire)
			}
		}
	}
	conn := start(f).general(f)
	f.Fuzz(func(t *testing.T, method int, wire []byte) {
		methods := unaryMethods(t)
		m := methods[uint(method)%uint(len(methods))]
		var reply []byte
		err := conn.Invoke(t.Context(), "/"+string(m.Parent().FullName())+"/"+string(m.Name()), wire, &reply,
			grpc.ForceCodec(raw{}))
		if err != nil {
			if reason, metadata := reasonOf(t, err); reason == api.InternalFault {
				t.Errorf("a fault of ours: %v", metadata)
			}
			return
		}
		holdsFinite(t, m, reply)
	})
}

// seeds are sound requests and nearly sound ones.
func seeds() []proto.Message {
	reaction := func(text string, in *kinegatev1.InitialState) proto.Message {
		return &kinegatev1.DescribeReactionRequest{
			Form: &kinegatev1.DescribeReactionRequest_Reaction{Reaction: text}, InitialState: in,
		}
	}
	beam := func(e float64) *kinegatev1.BeamMotion {
		return &kinegatev1.BeamMotion{Value: &kinegatev1.BeamMotion_KineticEnergyGev{KineticEnergyGev: e}}
	}
	angle := 3.0
	return []proto.Message{
		reaction("gamma p -> K+ Lambda, Lambda -> p pi-", &kinegatev1.InitialState{
			Kind: &kinegatev1.InitialState_BeamOnTarget{BeamOnTarget: &kinegatev1.BeamOnTarget{Beam: beam(1.3)}},
		}),
		reaction("gamma gamma -> e+ e-", &kinegatev1.InitialState{Kind: &kinegatev1.InitialState_TwoBeams{
			TwoBeams: &kinegatev1.TwoBeams{Beam1: beam(0.001), Beam2: beam(0.001), AngleBetweenBeamsRad: &angle},
		}}),
		&kinegatev1.GetParticleRequest{Key: &kinegatev1.GetParticleRequest_Name{Name: "K+"}},
		&kinegatev1.ListParticlesRequest{PageSize: 3, PageToken: "AAAA", NameContains: "K"},
		&kinegatev1.DescribeDecayRequest{Form: &kinegatev1.DescribeDecayRequest_Decay{Decay: "Lambda -> p pi-"}, Parent: beam(2), DistancesM: []float64{0, 0.1}},
		&kinegatev1.TraceDalitzBoundaryRequest{
			Form:       &kinegatev1.TraceDalitzBoundaryRequest_Process{Process: "omega -> pi+ pi- pi0"},
			Resolution: 0.1, Bands: []*kinegatev1.DalitzBandRequest{{Products: []string{"pi+", "pi-"}, MassSquaredGev2: 0.3}},
		},
		&kinegatev1.SolveTwoBodyRequest{
			Form: &kinegatev1.SolveTwoBodyRequest_Reaction{Reaction: "gamma p -> K+ Lambda"}, Product: "Lambda",
			InitialState: &kinegatev1.InitialState{Kind: &kinegatev1.InitialState_SqrtSGev{SqrtSGev: 2}}, LaboratoryAnglesRad: []float64{0.3, 3},
		},
		&kinegatev1.ListOpenChannelsRequest{
			InitialParticles: []string{"gamma", "p"}, MaxBodyCount: 3, PageSize: 4, WithSpinCBose: true,
			InitialState: &kinegatev1.InitialState{Kind: &kinegatev1.InitialState_SqrtSGev{SqrtSGev: 2}},
		},
		&kinegatev1.ConvertMotionRequest{
			Body:  &kinegatev1.ConvertMotionRequest_Particle{Particle: "pi+"},
			Value: &kinegatev1.ConvertMotionRequest_RigidityGv{RigidityGv: 1.5}, DistancesM: []float64{3}, RefractiveIndices: []float64{1.33},
		},
		&kinegatev1.CheckSelectionRequest{Form: &kinegatev1.CheckSelectionRequest_Yaml{
			Yaml: "name: pairs\nhypotheses:\n- name: a\n  reaction: -> mu+ mu-\n",
		}},
		&kinegatev1.JudgeBlockRequest{
			Selection: &kinegatev1.SelectionSource{Source: &kinegatev1.SelectionSource_Given{Given: &kinegatev1.Selection{
				Name: "s", Hypotheses: []*kinegatev1.Hypothesis{{Name: "a", Reaction: "-> mu+ mu-"}},
			}}},
			Entries: kinegatev1.EntryDetail_ENTRY_DETAIL_ALL,
			Block: &kinegatev1.EventBlock{
				EventIds: make([]byte, 8), ObjectOffsets: []byte{0, 0, 0, 0, 1, 0, 0, 0}, ObjectClasses: []byte{2},
				Coordinates: &kinegatev1.EventBlock_EnergyMomentum{EnergyMomentum: &kinegatev1.EnergyMomentumColumns{
					EnergyGev: make([]byte, 8), PxGev: make([]byte, 8), PyGev: make([]byte, 8), PzGev: make([]byte, 8),
				}},
			},
		},
		reaction("gamma p -> p rho0, rho0 -> pi+ pi-", &kinegatev1.InitialState{
			Kind: &kinegatev1.InitialState_SqrtSGev{SqrtSGev: math.Inf(1)},
		}),
		reaction("gamma p -> p eta", &kinegatev1.InitialState{Kind: &kinegatev1.InitialState_TwoFourMomenta{
			TwoFourMomenta: &kinegatev1.TwoFourMomenta{
				First: &kinegatev1.FourMomentum{EnergyGev: 1, PzGev: 1}, Second: &kinegatev1.FourMomentum{EnergyGev: 0.938272},
			},
		}}),
		&kinegatev1.DescribeReactionRequest{Form: &kinegatev1.DescribeReactionRequest_StructuredReaction{
			StructuredReaction: &kinegatev1.Reaction{Initial: []string{"gamma", "p"}, Inclusive: true},
		}},
	}
}

// FuzzDescribeReaction varies the text and the numbers of a request apart, where raw
// bytes would seldom stay a sound message.
func FuzzDescribeReaction(f *testing.F) {
	f.Add("gamma p -> K+ Lambda, Lambda -> p pi-", 1.3, 0.0, 0.0, uint8(0))
	f.Add("gamma gamma -> e+ e-", 0.001, 0.0005, math.Pi, uint8(1))
	f.Add("gamma gamma -> eta", 0.3, 0.3, 0.0, uint8(1))
	f.Add("gamma p -> K+ X", 1.0, 1e-300, 1e300, uint8(2))
	f.Add("e+ e- -> pi+ pi- pi0", 1.02, math.NaN(), -1.0, uint8(3))
	f.Add("eta -> pi+ pi- pi0", 1.0, 1.0, 1.0, uint8(4))
	conn := start(f).general(f)
	f.Fuzz(func(t *testing.T, text string, a, b, angle float64, kind uint8) {
		request := &kinegatev1.DescribeReactionRequest{Form: &kinegatev1.DescribeReactionRequest_Reaction{Reaction: text}}
		total := func(e float64) *kinegatev1.BeamMotion {
			return &kinegatev1.BeamMotion{Value: &kinegatev1.BeamMotion_TotalEnergyGev{TotalEnergyGev: e}}
		}
		momentum := func(e float64) *kinegatev1.BeamMotion {
			return &kinegatev1.BeamMotion{Value: &kinegatev1.BeamMotion_MomentumGev{MomentumGev: e}}
		}
		switch kind % 5 {
		case 0:
			request.InitialState = &kinegatev1.InitialState{Kind: &kinegatev1.InitialState_BeamOnTarget{
				BeamOnTarget: &kinegatev1.BeamOnTarget{Beam: total(a)},
			}}
		case 1:
			request.InitialState = &kinegatev1.InitialState{Kind: &kinegatev1.InitialState_TwoBeams{
				TwoBeams: &kinegatev1.TwoBeams{Beam1: total(a), Beam2: momentum(b), AngleBetweenBeamsRad: &angle},
			}}
		case 2:
			request.InitialState = &kinegatev1.InitialState{Kind: &kinegatev1.InitialState_TwoFourMomenta{
				TwoFourMomenta: &kinegatev1.TwoFourMomenta{
					First:  &kinegatev1.FourMomentum{EnergyGev: a, PxGev: b, PzGev: angle},
					Second: &kinegatev1.FourMomentum{EnergyGev: angle, PyGev: a},
				},
			}}
		case 3:
			request.InitialState = &kinegatev1.InitialState{Kind: &kinegatev1.InitialState_SqrtSGev{SqrtSGev: a}}
		}
		reply, err := kinegatev1.NewReactionServiceClient(conn).DescribeReaction(t.Context(), request)
		if err != nil {
			// Text that is not UTF-8 is refused by the client itself.
			if s := status.Convert(err); s.Code() == codes.Internal && len(s.Details()) == 0 {
				return
			}
			if reason, metadata := reasonOf(t, err); reason == api.InternalFault {
				t.Errorf("a fault of ours: %v", metadata)
			}
			return
		}
		finite(t, reply.ProtoReflect())
	})
}

// holdsFinite decodes a reply and looks for numbers that are not finite. NaN in the
// columns of a verdict means not computed; columns are bytes and not looked at.
func holdsFinite(t *testing.T, m protoreflect.MethodDescriptor, wire []byte) {
	t.Helper()
	kind, err := protoregistry.GlobalTypes.FindMessageByName(m.Output().FullName())
	if err != nil {
		t.Fatal(err)
	}
	reply := kind.New()
	if err := proto.Unmarshal(wire, reply.Interface()); err != nil {
		t.Fatalf("the reply does not decode: %v", err)
	}
	if m.Name() == "CheckSelection" {
		return // it echoes the selection as it was sent
	}
	finite(t, reply)
}

func finite(t *testing.T, m protoreflect.Message) {
	t.Helper()
	m.Range(func(f protoreflect.FieldDescriptor, v protoreflect.Value) bool {
		each := func(v protoreflect.Value) {
			switch {
			case f.Message() != nil:
				finite(t, v.Message())
			case f.Kind() == protoreflect.DoubleKind && (math.IsNaN(v.Float()) || math.IsInf(v.Float(), 0)):
				t.Errorf("%s is %g", f.FullName(), v.Float())
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
