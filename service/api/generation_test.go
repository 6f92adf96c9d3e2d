package api

import (
	"context"
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"strings"
	"testing"
	"time"

	"google.golang.org/grpc"
	"google.golang.org/protobuf/proto"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/proto/column"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// sink is the caller of a stream: it keeps copies of the frames, and may do something at
// each.
type sink struct {
	grpc.ServerStream

	ctx    context.Context
	frames []*kinegatev1.GenerateEventsResponse
	at     func(n int)
	size   int
}

func (s *sink) Context() context.Context { return s.ctx }

func (s *sink) Send(m *kinegatev1.GenerateEventsResponse) error {
	s.size = max(s.size, proto.Size(m))
	s.frames = append(s.frames, proto.CloneOf(m))
	if s.at != nil {
		s.at(len(s.frames))
	}
	return s.ctx.Err()
}

func (s *sink) blocks() []*kinegatev1.GeneratedBlock {
	var list []*kinegatev1.GeneratedBlock
	for _, f := range s.frames {
		if b := f.GetBlock(); b != nil {
			list = append(list, b)
		}
	}
	return list
}

func (s *sink) summary() *kinegatev1.GenerationSummary {
	return s.frames[len(s.frames)-1].GetSummary()
}

const omegaText = "gamma p -> p omega, omega -> pi0 gamma, pi0 -> gamma gamma"

// tagged is a beam with energies equally likely over a range.
func tagged(low, high float64) *kinegatev1.GenerationInitialState {
	return &kinegatev1.GenerationInitialState{Kind: &kinegatev1.GenerationInitialState_BeamOnTarget{
		BeamOnTarget: &kinegatev1.SpectrumOnTarget{Beam: &kinegatev1.BeamSpectrum{
			Kind: &kinegatev1.BeamSpectrum_Even{Even: &kinegatev1.EnergyRange{MinGev: low, MaxGev: high}},
		}},
	}}
}

func reactions(texts ...string) []*kinegatev1.GenerationChannel {
	var list []*kinegatev1.GenerationChannel
	for _, text := range texts {
		list = append(list, &kinegatev1.GenerationChannel{Reaction: text})
	}
	return list
}

// smallDetector sees most of what there is.
func smallDetector() *kinegatev1.Detector {
	theta := func() *kinegatev1.PolarRange { return &kinegatev1.PolarRange{MinRad: 0.1, MaxRad: 2.6} }
	return &kinegatev1.Detector{
		Name: "small",
		Calorimeter: &kinegatev1.Calorimeter{
			Theta: theta(), RadiusM: 1, Stochastic: 0.03, Constant: 0.01, ThetaSigmaRad: 0.01, PhiSigmaRad: 0.01, ThresholdGev: 0.03,
			MergeAngleRad: 0.08, Noise: &kinegatev1.ClusterNoise{Probability: 0.02, MeanGev: 0.05},
			SplitOff: &kinegatev1.SplitOff{Probability: 0.1, MinShare: 0.1, MaxShare: 0.2, MinAngleRad: 0.1, MaxAngleRad: 0.2},
		},
		Tracker: &kinegatev1.Tracker{
			Theta: theta(), MinMomentumGev: 0.1, Constant: 0.01, AngleSigmaRad: 0.003, Identify: true, Efficiency: new(0.9),
			Confusions: []*kinegatev1.SpeciesConfusion{{
				Species: kinegatev1.Species_SPECIES_PROTON, TakenFor: kinegatev1.Species_SPECIES_PION, Probability: 0.1,
			}},
		},
		Tagger:    &kinegatev1.Tagger{SigmaGev: 0.005, TimeSigmaNs: 1},
		Vertex:    &kinegatev1.VertexDetector{SigmaXM: 1e-4, SigmaYM: 1e-4, SigmaZM: 1e-3},
		Displaced: &kinegatev1.DisplacedVertexDetector{MinDistanceM: 0.002, SigmaXM: 5e-4, SigmaYM: 5e-4, SigmaZM: 1e-3, Efficiency: new(0.95)},
	}
}

func sample() *kinegatev1.Generation {
	return &kinegatev1.Generation{
		Name: "sample", Seed: 7, InitialState: tagged(1.2, 2.4),
		Channels:    reactions(omegaText, "gamma p -> K+ Lambda, Lambda -> p pi-", "gamma p -> p pi+ pi-"),
		Target:      &kinegatev1.TargetRegion{LengthM: 0.05, SigmaXM: 1e-3, SigmaYM: 1e-3},
		Accidentals: &kinegatev1.AccidentalCandidates{RateHz: 1e7, WindowNs: 20},
		Detector:    smallDetector(), Polarisation: &kinegatev1.BeamPolarisation{LinearDegree: 0.7, PlaneRad: 0.2},
	}
}

// generate runs a request to its end.
func generate(t testing.TB, s *Services, request *kinegatev1.GenerateEventsRequest) (*sink, error) {
	t.Helper()
	out := &sink{ctx: t.Context()}
	return out, s.generation.GenerateEvents(request, out)
}

func mustGenerate(t testing.TB, s *Services, request *kinegatev1.GenerateEventsRequest) *sink {
	t.Helper()
	out, err := generate(t, s, request)
	if err != nil {
		t.Fatal(err)
	}
	return out
}

// contentDigest is the digest of all events one by one, so that the blocks they came in
// do not matter: for each event the bits of its truth and of its measurement.
func contentDigest(t testing.TB, blocks ...*kinegatev1.GeneratedBlock) string {
	t.Helper()
	h := sha256.New()
	for _, b := range blocks {
		block, err := eventBlock(b.GetEvents(), &columns{})
		if err != nil {
			t.Fatal(err)
		}
		for i := range block.Events() {
			for _, part := range eventParts(t, b, block, i) {
				h.Write(part)
			}
		}
	}
	return hex.EncodeToString(h.Sum(nil))
}

// eventParts cuts event i out of the columns of a block.
func eventParts(t testing.TB, b *kinegatev1.GeneratedBlock, block *event.Block, i int) [][]byte {
	t.Helper()
	truth := b.GetTruth()
	offsets := func(raw []byte) (first, end int) {
		rows, err := column.Int32s(raw)
		if err != nil {
			t.Fatal(err)
		}
		return int(rows[i]), int(rows[i+1])
	}
	var parts [][]byte
	cut := func(first, end, width int, columns ...[]byte) {
		for _, c := range columns {
			parts = append(parts, c[first*width:end*width])
		}
	}
	initial, vertex, momentum, origin := truth.GetInitialState(), truth.GetVertex(), truth.GetMomentum(), truth.GetOrigin()
	cut(i, i+1, 8, truth.GetEventIds(), truth.GetWeights(), initial.GetEnergyGev(), initial.GetPxGev(), initial.GetPyGev(),
		initial.GetPzGev(), vertex.GetXM(), vertex.GetYM(), vertex.GetZM())
	cut(i, i+1, 2, truth.GetChannels())
	first, end := offsets(truth.GetParticleOffsets())
	cut(first, end, 8, truth.GetParticleNumbers(), momentum.GetEnergyGev(), momentum.GetPxGev(), momentum.GetPyGev(), momentum.GetPzGev(),
		truth.GetMassGev(), origin.GetXM(), origin.GetYM(), origin.GetZM(), truth.GetProperTimeS())
	cut(first, end, 2, truth.GetParents())
	cut(first, end, 1, truth.GetDecayed())
	first, end = offsets(truth.GetBeamOffsets())
	cut(first, end, 8, truth.GetBeamEnergyGev(), truth.GetBeamTimeNs())
	m := b.GetEvents()
	first, end = block.Objects(i)
	angles := m.GetMomentumAngles()
	cut(first, end, 8, angles.GetMomentumGev(), angles.GetThetaRad(), angles.GetPhiRad())
	cut(first, end, 48, m.GetCovariance().GetElements())
	cut(first, end, 1, m.GetObjectClasses(), m.GetMeasuredMask().GetMasks(), m.GetSpeciesMask().GetMasks())
	cut(first, end, 2, truth.GetObjectParticles())
	first, end = block.Candidates(i)
	cut(first, end, 8, m.GetBeam().GetEnergyGev(), m.GetBeam().GetSigmaGev(), m.GetBeam().GetTimeNs())
	cut(i, i+1, 8, m.GetVertex().GetXM(), m.GetVertex().GetYM(), m.GetVertex().GetZM(),
		m.GetPolarisation().GetLinearDegree(), truth.GetPolarisation().GetPlaneRad())
	groups := m.GetVertexGroup()
	first, end = block.Objects(i)
	cut(first, end, 4, groups.GetGroups())
	first, end = offsets(groups.GetOffsets())
	cut(first, end, 8, groups.GetXM(), groups.GetYM(), groups.GetZM())
	cut(first, end, 48, groups.GetCovarianceM2())
	return parts
}

// TestGenerateEventsAnyPartition makes the same 3000 events in several ways.
func TestGenerateEventsAnyPartition(t *testing.T) {
	s := newServices(t)
	const events = 3000
	whole := mustGenerate(t, s, &kinegatev1.GenerateEventsRequest{Generation: sample(), FirstEvent: 11, EventCount: events})
	want := contentDigest(t, whole.blocks()...)
	if n := len(whole.blocks()); n < 3 {
		t.Errorf("%d blocks hold %d events: the limit is not tested", n, events)
	}
	if whole.size > generationBlockBytes || whole.size < generationBlockBytes/4 {
		t.Errorf("the largest frame takes %d bytes", whole.size)
	}
	summary := whole.summary()
	if summary.GetEventCount() != events || summary.GetEmptyCount() != 0 || summary.GetEffectiveEventCount() != events ||
		summary.GetWeightSum() != events || summary.GetSeenEventCount() < events*9/10 || len(summary.GetRemarks()) > 0 {
		t.Errorf("summary %v", summary)
	}
	for name, slices := range map[string][]int64{"slices": {1, 999, 0, 2000}, "halves": {1500, 1500}} {
		var blocks []*kinegatev1.GeneratedBlock
		first := int64(11)
		for _, n := range slices {
			part := mustGenerate(t, s, &kinegatev1.GenerateEventsRequest{
				Generation: sample(), FirstEvent: first, EventCount: n, BlockEventCount: 77,
			})
			blocks = append(blocks, part.blocks()...)
			first += n
		}
		if got := contentDigest(t, blocks...); got != want {
			t.Errorf("%s: digest %s, want %s", name, got, want)
		}
	}
}

func TestGenerateEventsHeader(t *testing.T) {
	s := newServices(t)
	header := func(request *kinegatev1.GenerateEventsRequest) *kinegatev1.GenerationHeader {
		out := mustGenerate(t, s, request)
		if out.summary() == nil {
			t.Error("the last frame is no summary")
		}
		return out.frames[0].GetHeader()
	}
	a := header(&kinegatev1.GenerateEventsRequest{Generation: sample()})
	if len(a.GetChannels()) != 3 || a.GetGenerator() == "" || a.GetTableVersion() == "" || a.GetSeed() != 7 {
		t.Errorf("header %v", a)
	}
	omega := a.GetChannels()[0]
	if got := strings.Join(omega.GetProducts(), " "); got != "p omega pi0 gamma[0] gamma[1] gamma[2]" {
		t.Errorf("products %s", got)
	}
	// omega -> pi0 gamma 8.35 % and pi0 -> gamma gamma 98.8 % (Review of Particle Physics).
	closeTo(t, "branching fraction", omega.GetBranchingFraction(), 0.0835*0.98823, 0.01)
	b := header(&kinegatev1.GenerateEventsRequest{Generation: sample(), FirstEvent: 1})
	other := sample()
	other.Seed++
	c := header(&kinegatev1.GenerateEventsRequest{Generation: other})
	if a.GetGenerationDigest() != b.GetGenerationDigest() || a.GetRequestDigest() == b.GetRequestDigest() ||
		a.GetGenerationDigest() == c.GetGenerationDigest() {
		t.Error("digests do not tell samples and slices apart")
	}
}

// TestGenerateEventsCancel gives a stream up in the middle of events that take long: a
// bound of 1 on nine pions with little energy to share.
func TestGenerateEventsCancel(t *testing.T) {
	s := newServices(t)
	ctx, cancel := context.WithCancel(t.Context())
	out := &sink{ctx: ctx}
	var at time.Time
	time.AfterFunc(50*time.Millisecond, func() {
		at = time.Now()
		cancel()
	})
	slow := &kinegatev1.Generation{InitialState: tagged(4, 4.5), Channels: reactions("gamma p -> p pi+ pi- pi+ pi- pi+ pi- pi+ pi- pi0 pi0 pi0")}
	err := s.generation.GenerateEvents(&kinegatev1.GenerateEventsRequest{Generation: slow, EventCount: 1 << 40}, out)
	if took := time.Since(at); !errors.Is(err, context.Canceled) || took > 50*time.Millisecond {
		t.Errorf("ended %v after the end of the call, with %v", took, err)
	}
}

func TestGenerateEventsDrain(t *testing.T) {
	started := make(chan struct{})
	s, err := New(Deps{Limits: DefaultLimits(), Drain: Drain{Started: started}})
	if err != nil {
		t.Fatal(err)
	}
	out := &sink{ctx: t.Context(), at: func(n int) {
		if n == 3 {
			close(started)
		}
	}}
	err = s.generation.GenerateEvents(&kinegatev1.GenerateEventsRequest{Generation: sample(), EventCount: 100000}, out)
	f := Explain(err)
	blocks := out.blocks()
	// One block more may have been made meanwhile.
	if f.Reason != ServerDraining || len(blocks) < 2 || len(blocks) > 3 {
		t.Fatalf("%v after %d blocks", err, len(blocks))
	}
	if got, last := f.Metadata["next_event"], blocks[len(blocks)-1]; got != decimal(last.GetFirstEvent()+last.GetEventCount()) {
		t.Errorf("next event %s after %d + %d", got, last.GetFirstEvent(), last.GetEventCount())
	}
}

func decimal(n int64) string { return strings.TrimSuffix(index("", int(n))[1:], "]") }

func TestMeasureBound(t *testing.T) {
	s := newServices(t)
	request := &kinegatev1.MeasureBoundRequest{
		Generation: &kinegatev1.Generation{InitialState: tagged(2, 2), Channels: reactions("gamma p -> p pi+ pi- pi0")},
		DrawCount:  20000,
	}
	request.Generation.InitialState.GetBeamOnTarget().Beam.Kind = &kinegatev1.BeamSpectrum_Fixed{
		Fixed: &kinegatev1.BeamMotion{Value: &kinegatev1.BeamMotion_TotalEnergyGev{TotalEnergyGev: 2}},
	}
	m, err := s.generation.MeasureBound(t.Context(), request)
	if err != nil {
		t.Fatal(err)
	}
	if !(m.GetMean() > 0 && m.GetMean() < m.GetLargest() && m.GetLargest() <= 1) || m.GetDrawCount() != 20000 {
		t.Fatalf("%v", m)
	}
	// A bound a tenth below the largest weight is exceeded now and then; the efficiency
	// is mean over bound, within five standard deviations of 2000 accepted events.
	request.Generation.Channels[0].Bound = new(0.9 * m.GetLargest())
	summary := mustGenerate(t, s, &kinegatev1.GenerateEventsRequest{Generation: request.GetGeneration(), EventCount: 20000}).summary()
	closeTo(t, "efficiency", summary.GetEfficiency(), m.GetMean()/(0.9*m.GetLargest()), 0.04)
	if summary.GetOverflowCount() == 0 || summary.GetLargestWeight() <= 1 || len(summary.GetRemarks()) != 1 ||
		summary.GetEffectiveEventCount() >= 20000 {
		t.Errorf("summary %v", summary)
	}
}
