package server

import (
	"math"
	"strings"
	"testing"

	"google.golang.org/protobuf/proto"

	kinegate "example.org/kinegate/clients/go"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/api"
)

// fittedPions is gamma p -> p pi0 pi0 with a missing proton and a fit.
func fittedPions() *kinegatev1.Selection {
	pion := func(reference string) *kinegatev1.FitMass { return &kinegatev1.FitMass{Products: []string{reference}} }
	return &kinegatev1.Selection{Name: "fitted", Hypotheses: []*kinegatev1.Hypothesis{{
		Name: "two", Reaction: "gamma p -> p pi0 pi0, pi0 -> gamma gamma",
		Measurements: []*kinegatev1.ProductMeasurement{{Product: "p", Measurement: kinegatev1.Measurement_MEASUREMENT_MISSING}},
		Beam:         &kinegatev1.BeamSource{Source: &kinegatev1.BeamSource_Tagged{Tagged: &kinegatev1.TaggedBeam{}}},
		Fit:          &kinegatev1.Fit{Masses: []*kinegatev1.FitMass{pion("pi0[0]"), pion("pi0[1]")}},
		Condition: &kinegatev1.Condition{Window: &kinegatev1.Window{
			Observable: &kinegatev1.Window_FitProbability{FitProbability: &kinegatev1.FitProbabilityWindow{Min: new(0.01)}},
		}},
		Record: []*kinegatev1.Window{{Name: "M", Observable: &kinegatev1.Window_InvariantMass{
			InvariantMass: &kinegatev1.MassWindow{Products: []string{"pi0[0]", "pi0[1]"}},
		}}},
		RecordUncertainties: true,
	}}}
}

// measuredPions are simulated events of that reaction, measured with covariances.
func measuredPions(t *testing.T, r *running, events int64) *kinegatev1.EventBlock {
	t.Helper()
	q := endlessSample()
	q.EventCount = events
	q.Generation.Channels[0].Reaction = "gamma p -> p pi0 pi0, pi0 -> gamma gamma"
	q.Generation.Detector = &kinegatev1.Detector{
		Name: "fine",
		Calorimeter: &kinegatev1.Calorimeter{
			Theta: &kinegatev1.PolarRange{MinRad: 0.05, MaxRad: 3}, Stochastic: 0.005, Constant: 0.002,
			ThetaSigmaRad: 0.002, PhiSigmaRad: 0.002, ThresholdGev: 0.005,
		},
		Tagger: &kinegatev1.Tagger{SigmaGev: 0.001, TimeSigmaNs: 1},
	}
	stream, err := kinegatev1.NewGenerationServiceClient(r.general(t)).GenerateEvents(t.Context(), q)
	if err != nil {
		t.Fatal(err)
	}
	for {
		reply, err := stream.Recv()
		if err != nil {
			t.Fatalf("no block of measured events: %v", err)
		}
		if block := reply.GetBlock().GetEvents(); block != nil {
			block.Sequence = 0
			return block
		}
	}
}

// TestFitsEndToEnd judges measured events with fits over a stream and by a call, and has
// one explained: the three agree to the last bit.
func TestFitsEndToEnd(t *testing.T) {
	r := start(t)
	block := measuredPions(t, r, 200)
	source := &kinegatev1.SelectionSource{Source: &kinegatev1.SelectionSource_Given{Given: fittedPions()}}
	open := &kinegatev1.JudgeOpen{
		Selection: source, Entries: kinegatev1.EntryDetail_ENTRY_DETAIL_ALL,
		Limits: &kinegatev1.Limits{BlockEventCount: 1000, BlockCandidateCount: 1000},
	}
	stream, err := r.client(t).Judge(t.Context(), open, kinegate.JudgeOptions{})
	if err != nil {
		t.Fatal(err)
	}
	defer stream.Close()
	if dof := stream.Opened.GetSelection().GetHypotheses()[0].DegreesOfFreedom; dof == nil || *dof != 3 {
		t.Errorf("the outline says %v degrees of freedom, want 3", dof)
	}
	if err := stream.Send(block); err != nil {
		t.Fatal(err)
	}
	verdict, err := stream.Recv()
	if err != nil {
		t.Fatal(err)
	}
	service := kinegatev1.NewSelectionServiceClient(r.general(t))
	unary, err := service.JudgeBlock(t.Context(), &kinegatev1.JudgeBlockRequest{
		Selection: source, Entries: kinegatev1.EntryDetail_ENTRY_DETAIL_ALL, Block: block,
	})
	if err != nil {
		t.Fatal(err)
	}
	if !proto.Equal(unary.GetVerdict(), verdict) {
		t.Error("JudgeBlock says something else than the stream")
	}
	v, err := kinegate.ReadVerdicts(verdict)
	if err != nil {
		t.Fatal(err)
	}
	accepted, explained := 0, 0
	for i := range v.Statuses {
		for _, e := range v.Entries(i) {
			if e.Fit == nil || e.Fit.DegreesOfFreedom != 3 || len(e.Uncertainties) != 1 || !(e.Uncertainties[0] > 0) {
				t.Fatalf("event %d: entry %+v, fit %+v", i, e, e.Fit)
			}
			if e.Status != kinegatev1.EntryStatus_ENTRY_STATUS_ACCEPTED {
				continue
			}
			accepted++
			if i%20 != 0 {
				continue
			}
			explained++
			x, err := service.ExplainVerdict(t.Context(), &kinegatev1.ExplainVerdictRequest{Selection: source, Block: block, EventIndex: int32(i)})
			if err != nil {
				t.Fatal(err)
			}
			a := x.GetHypotheses()[0].GetAssignments()[0]
			f := a.GetFit()
			if !a.GetBest() || !a.GetPassed() || x.GetGate() != v.Gate(i) || int(x.GetHypotheses()[0].GetAssignmentCount()) != e.AssignmentCount ||
				math.Float64bits(f.GetChiSquare()) != math.Float64bits(e.Fit.ChiSquare) || len(f.GetConstraints()) != 6 || len(f.GetParticles()) != 6 {
				t.Errorf("event %d: entry %+v is explained by %v", i, e, a)
			}
		}
	}
	if n := len(v.Statuses); n < 50 || accepted < n*3/4 || explained == 0 {
		t.Errorf("%d of %d events are accepted, %d explained", accepted, n, explained)
	}
}

// TestBlocksWithoutCovariance are refused where a hypothesis has a fit: by a call, and as
// rejected blocks on a stream, which goes on.
func TestBlocksWithoutCovariance(t *testing.T) {
	r := start(t)
	whole := measuredPions(t, r, 10)
	bare, _ := proto.Clone(whole).(*kinegatev1.EventBlock)
	bare.Covariance = nil
	source := &kinegatev1.SelectionSource{Source: &kinegatev1.SelectionSource_Given{Given: fittedPions()}}
	service := kinegatev1.NewSelectionServiceClient(r.general(t))
	_, err := service.JudgeBlock(t.Context(), &kinegatev1.JudgeBlockRequest{Selection: source, Block: bare})
	wantReason(t, err, api.BlockInvalid)
	if !strings.Contains(err.Error(), "covariance") {
		t.Errorf("the refusal is %v", err)
	}
	_, err = service.ExplainVerdict(t.Context(), &kinegatev1.ExplainVerdictRequest{Selection: source, Block: bare})
	wantReason(t, err, api.BlockInvalid)
	_, err = service.ExplainVerdict(t.Context(), &kinegatev1.ExplainVerdictRequest{Selection: source, Block: whole, EventIndex: 10})
	wantReason(t, err, api.FieldInvalid)
	stream, err := r.client(t).Judge(t.Context(), &kinegatev1.JudgeOpen{Selection: source}, kinegate.JudgeOptions{})
	if err != nil {
		t.Fatal(err)
	}
	defer stream.Close()
	for k, block := range []*kinegatev1.EventBlock{bare, whole} {
		block.Sequence = int64(k)
		if err := stream.Send(block); err != nil {
			t.Fatal(err)
		}
		verdict, err := stream.Recv()
		if err != nil {
			t.Fatal(err)
		}
		if rejected := verdict.GetRejected(); (rejected != nil) != (block == bare) || (rejected != nil && rejected.GetField() != "covariance") {
			t.Errorf("block %d: %v", k, rejected)
		}
	}
}
