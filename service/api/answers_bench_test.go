package api

import (
	"math"
	"testing"

	"google.golang.org/protobuf/proto"

	"example.org/kinegate/kinematics/particle"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// sinkReply keeps replies, so that the work is not optimised away.
var sinkReply proto.Message

// BenchmarkAnswers times the handlers without the transport, the beam energy another one
// for each call.
func BenchmarkAnswers(b *testing.B) {
	table, err := particle.New()
	if err != nil {
		b.Fatal(err)
	}
	s, d := &reactionService{table: table}, &decayService{table: table}
	angles := make([]float64, 100)
	for i := range angles {
		angles[i] = math.Pi * float64(i) / 100
	}
	for _, c := range []struct {
		name string
		ask  func(energy float64) (proto.Message, error)
	}{
		{"DescribeReaction", func(energy float64) (proto.Message, error) {
			return s.DescribeReaction(b.Context(), &kinegatev1.DescribeReactionRequest{
				Form: &kinegatev1.DescribeReactionRequest_Reaction{Reaction: "gamma p -> K+ Lambda, Lambda -> p pi-"}, InitialState: onTarget(energy),
			})
		}},
		{"DescribeReaction of six bodies", func(energy float64) (proto.Message, error) {
			return s.DescribeReaction(b.Context(), &kinegatev1.DescribeReactionRequest{
				Form: &kinegatev1.DescribeReactionRequest_Reaction{Reaction: "gamma p -> p pi+ pi- pi+ pi- pi0"}, InitialState: onTarget(3 * energy),
			})
		}},
		{"SolveTwoBody at 100 angles", func(energy float64) (proto.Message, error) {
			return s.SolveTwoBody(b.Context(), &kinegatev1.SolveTwoBodyRequest{
				Form: &kinegatev1.SolveTwoBodyRequest_Reaction{Reaction: "gamma p -> K+ Lambda"}, InitialState: onTarget(energy),
				LaboratoryAnglesRad: angles,
			})
		}},
		{"ListOpenChannels to three bodies", func(energy float64) (proto.Message, error) {
			return s.ListOpenChannels(b.Context(), &kinegatev1.ListOpenChannelsRequest{
				InitialParticles: []string{"gamma", "p"}, InitialState: onTarget(energy), MaxBodyCount: 3,
			})
		}},
		{"ConvertMotion", func(energy float64) (proto.Message, error) {
			request := ofParticle("K+")
			request.Value = &kinegatev1.ConvertMotionRequest_MomentumGev{MomentumGev: energy}
			request.DistancesM, request.RefractiveIndices = []float64{3}, []float64{1.05}
			return s.ConvertMotion(b.Context(), request)
		}},
		{"DescribeDecay", func(energy float64) (proto.Message, error) {
			return d.DescribeDecay(b.Context(), &kinegatev1.DescribeDecayRequest{
				Form: &kinegatev1.DescribeDecayRequest_Decay{Decay: "Sigma0 -> Lambda gamma, Lambda -> p pi-"}, Parent: total(1.2 * energy),
			})
		}},
		{"TraceDalitzBoundary", func(energy float64) (proto.Message, error) {
			request := dalitzOf("gamma p -> p pi+ pi-")
			request.SqrtSGev = []float64{2 * energy}
			return d.TraceDalitzBoundary(b.Context(), request)
		}},
	} {
		b.Run(c.name, func(b *testing.B) {
			b.ReportAllocs()
			for i := 0; b.Loop(); i++ {
				reply, err := c.ask(1 + float64(i%1000)/1000)
				if err != nil {
					b.Fatal(err)
				}
				sinkReply = reply
			}
		})
	}
}
