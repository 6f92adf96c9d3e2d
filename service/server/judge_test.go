package server

import (
	"context"
	"errors"
	"io"
	"strings"
	"testing"
	"time"

	"google.golang.org/grpc"

	"example.org/kinegate/clients/go/history"
	"example.org/kinegate/proto/column"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/api"
)

// pairSelection accepts photon pairs in a mass window.
func pairSelection() *kinegatev1.Selection {
	return &kinegatev1.Selection{
		Name: "pairs",
		Hypotheses: []*kinegatev1.Hypothesis{{
			Name: "pi0", Reaction: "pi0 -> gamma gamma",
			Condition: &kinegatev1.Condition{Window: &kinegatev1.Window{Observable: &kinegatev1.Window_InvariantMass{
				InvariantMass: &kinegatev1.MassWindow{Products: []string{"gamma[0]", "gamma[1]"}, MinGev: new(0.11), MaxGev: new(0.16)},
			}}},
			Record: []*kinegatev1.Window{{Name: "mass", Observable: &kinegatev1.Window_InvariantMass{
				InvariantMass: &kinegatev1.MassWindow{Products: []string{"gamma[0]", "gamma[1]"}},
			}}},
		}},
	}
}

// pairBlock holds events of two photons at a right angle: every third has the mass
// sqrt(2) x 0.095 GeV = 0.134 GeV, inside the window, the others sqrt(2) GeV.
func pairBlock(sequence int64, events int) *kinegatev1.EventBlock {
	var ids []int64
	var energies, theta, phi []float64
	offsets := []int32{0}
	for i := range events {
		ids = append(ids, sequence*1000+int64(i))
		e := 1.0
		if i%3 == 0 {
			e = 0.095
		}
		energies = append(energies, e, e)
		theta = append(theta, 0.5, 0.5+1.5707963267948966)
		phi = append(phi, 1, 1)
		offsets = append(offsets, offsets[len(offsets)-1]+2)
	}
	return &kinegatev1.EventBlock{
		Sequence: sequence, EventIds: column.Int64(ids), ObjectOffsets: column.Int32(offsets),
		Coordinates: &kinegatev1.EventBlock_MomentumAngles{MomentumAngles: &kinegatev1.MomentumAnglesColumns{
			MomentumGev: column.Float64(energies), ThetaRad: column.Float64(theta), PhiRad: column.Float64(phi),
		}},
		ObjectClasses: []byte(strings.Repeat("\x01", 2*events)),
	}
}

// learnedPairs judges blocks of pairs by calls, one by one, and returns a
// checker that knows them.
func learnedPairs(t *testing.T, conn grpc.ClientConnInterface, open *kinegatev1.JudgeOpen, blocks, events int) *history.Checker {
	t.Helper()
	c := history.New(open)
	client := kinegatev1.NewSelectionServiceClient(conn)
	for i := range int64(blocks) {
		block := pairBlock(open.GetFirstSequence()+i, events)
		reply, err := client.JudgeBlock(t.Context(), &kinegatev1.JudgeBlockRequest{
			Selection: open.GetSelection(), Entries: open.GetEntries(), Block: block,
		})
		if err != nil {
			t.Fatal(err)
		}
		if err := c.Learn(block, reply.GetVerdict()); err != nil {
			t.Fatal(err)
		}
	}
	return c
}

type judgeClient = grpc.BidiStreamingClient[kinegatev1.JudgeRequest, kinegatev1.JudgeResponse]

func given(s *kinegatev1.Selection) *kinegatev1.SelectionSource {
	return &kinegatev1.SelectionSource{Source: &kinegatev1.SelectionSource_Given{Given: s}}
}

// openJudge opens a stream on the gate listener.
func openJudge(t *testing.T, r *running, open *kinegatev1.JudgeOpen) (judgeClient, *kinegatev1.JudgeOpened) {
	t.Helper()
	stream, err := judgeOn(t, r)
	if err != nil {
		t.Fatal(err)
	}
	send(t, stream, &kinegatev1.JudgeRequest{Frame: &kinegatev1.JudgeRequest_Open{Open: open}})
	response, err := stream.Recv()
	if err != nil || response.GetOpened() == nil {
		t.Fatalf("opening: %v, %v", response, err)
	}
	return stream, response.GetOpened()
}

func judgeOn(t *testing.T, r *running) (judgeClient, error) {
	t.Helper()
	ctx, cancel := context.WithTimeout(t.Context(), 20*time.Second)
	t.Cleanup(cancel)
	return kinegatev1.NewSelectionServiceClient(r.dial(t, r.options.GateAddress)).Judge(ctx)
}

func send(t *testing.T, stream judgeClient, request *kinegatev1.JudgeRequest) {
	t.Helper()
	if err := stream.Send(request); err != nil && !errors.Is(err, io.EOF) {
		t.Fatal(err)
	}
}

func sendBlock(t *testing.T, stream judgeClient, block *kinegatev1.EventBlock) {
	t.Helper()
	send(t, stream, &kinegatev1.JudgeRequest{Frame: &kinegatev1.JudgeRequest_Block{Block: block}})
}

// nextVerdict returns the next verdict, passing over heartbeats.
func nextVerdict(stream judgeClient) (*kinegatev1.VerdictBlock, error) {
	for {
		response, err := stream.Recv()
		if err != nil {
			return nil, err
		}
		if v := response.GetVerdict(); v != nil {
			return v, nil
		}
	}
}

func TestJudgeAnswersInOrder(t *testing.T) {
	r := start(t)
	const first, blocks, events = 41, 100, 300
	open := &kinegatev1.JudgeOpen{
		Selection: given(pairSelection()), FirstSequence: first, Entries: kinegatev1.EntryDetail_ENTRY_DETAIL_ACCEPTED,
	}
	c := learnedPairs(t, r.general(t), open, blocks, events)
	stream, opened := openJudge(t, r, open)
	if opened.GetCredit().GetBlockCount() != 8 || len(opened.GetSelection().GetSelectionDigest()) != 64 ||
		len(opened.GetSelection().GetHypotheses()) != 1 || opened.GetSelection().GetHypotheses()[0].GetObservables()[0] != "mass" {
		t.Errorf("opened: %v", opened)
	}
	for i := range int64(blocks) {
		c.Sent(pairBlock(first+i, events))
	}
	credit := make(chan struct{}, opened.GetCredit().GetBlockCount())
	go func() {
		for i := range int64(blocks) {
			credit <- struct{}{}
			_ = stream.Send(&kinegatev1.JudgeRequest{Frame: &kinegatev1.JudgeRequest_Block{Block: pairBlock(first+i, events)}})
		}
		_ = stream.CloseSend()
	}()
	for {
		v, err := nextVerdict(stream)
		if errors.Is(err, io.EOF) {
			break
		}
		if err != nil {
			t.Fatal(err)
		}
		<-credit
		c.Answered(v)
		if v.GetEventCount() != events || v.GetSelectionDigest() != opened.GetSelection().GetSelectionDigest() {
			t.Fatalf("verdict %v", v)
		}
		for i := range events {
			if column.Bit(v.GetGate(), i) != (i%3 == 0) {
				t.Fatalf("block %d event %d: gate %v", v.GetSequence(), i, column.Bit(v.GetGate(), i))
			}
		}
	}
	if faults := c.Faults(true); len(faults) > 0 {
		t.Error(faults)
	}
	eventually(t, "events counted", func() bool { return r.metric(t, "kinegate_judge_events_total", "accepted") == blocks*events/3 })
}

// TestJudgeRefusals holds one breach of the protocol a row.
func TestJudgeRefusals(t *testing.T) {
	valid := func() *kinegatev1.JudgeOpen { return &kinegatev1.JudgeOpen{Selection: given(pairSelection())} }
	frame := func(b *kinegatev1.EventBlock) *kinegatev1.JudgeRequest {
		return &kinegatev1.JudgeRequest{Frame: &kinegatev1.JudgeRequest_Block{Block: b}}
	}
	opening := func(change func(*kinegatev1.JudgeOpen)) []*kinegatev1.JudgeRequest {
		o := valid()
		change(o)
		return []*kinegatev1.JudgeRequest{{Frame: &kinegatev1.JudgeRequest_Open{Open: o}}}
	}
	opened := opening(func(*kinegatev1.JudgeOpen) {})
	for _, c := range []struct {
		name     string
		requests []*kinegatev1.JudgeRequest
		reason   api.Reason
	}{
		{"block first", []*kinegatev1.JudgeRequest{frame(pairBlock(0, 1))}, api.StreamProtocolBroken},
		{"empty frame", []*kinegatev1.JudgeRequest{{}}, api.StreamProtocolBroken},
		{"no selection", opening(func(o *kinegatev1.JudgeOpen) { o.Selection = nil }), api.FieldInvalid},
		{"faulty selection", opening(func(o *kinegatev1.JudgeOpen) {
			o.Selection = given(pairSelection())
			o.GetSelection().GetGiven().Hypotheses[0].Reaction = "pi0 -> gama"
		}), api.SelectionInvalid},
		{"unknown name", opening(func(o *kinegatev1.JudgeOpen) {
			o.Selection = &kinegatev1.SelectionSource{Source: &kinegatev1.SelectionSource_Named{Named: &kinegatev1.SelectionReference{Name: "none"}}}
		}), api.SelectionNotFound},
		{"negative sequence", opening(func(o *kinegatev1.JudgeOpen) { o.FirstSequence = -1 }), api.FieldInvalid},
		{"negative limit", opening(func(o *kinegatev1.JudgeOpen) { o.Limits = &kinegatev1.Limits{BlockEventCount: -1} }), api.FieldInvalid},
		{"budget", opening(func(o *kinegatev1.JudgeOpen) { o.LatencyBudgetS = new(0.0) }), api.FieldInvalid},
		{"entries", opening(func(o *kinegatev1.JudgeOpen) { o.Entries = 9 }), api.FieldInvalid},
		{"opened twice", append(opened, opened...), api.StreamProtocolBroken},
		{"empty frame later", append(opened, &kinegatev1.JudgeRequest{}), api.StreamProtocolBroken},
		{"sequence skipped", append(opened, frame(pairBlock(0, 1)), frame(pairBlock(2, 1))), api.StreamProtocolBroken},
		{"sequence repeated", append(opened, frame(pairBlock(0, 1)), frame(pairBlock(0, 1))), api.StreamProtocolBroken},
	} {
		t.Run(c.name, func(t *testing.T) {
			r := start(t)
			stream, err := judgeOn(t, r)
			if err != nil {
				t.Fatal(err)
			}
			for _, request := range c.requests {
				send(t, stream, request)
			}
			for err == nil {
				_, err = stream.Recv()
			}
			wantReason(t, err, c.reason)
		})
	}
}

// TestJudgeEndsAtOnceWithoutFrames covers a caller that opens the rpc and leaves.
func TestJudgeEndsAtOnceWithoutFrames(t *testing.T) {
	stream, err := judgeOn(t, start(t))
	if err != nil {
		t.Fatal(err)
	}
	_ = stream.CloseSend()
	_, err = stream.Recv()
	wantReason(t, err, api.StreamProtocolBroken)
}

// TestJudgeCreditIsEnforced writes without reading: within a moment the stream ends
// with a refusal that names both numbers, and nothing wedges.
func TestJudgeCreditIsEnforced(t *testing.T) {
	r := start(t, func(_ *Options, d *Deps) {
		// A clock that stands still is a server that never expires anything; the
		// verdicts are held up by the reader who does not read.
		d.Now = time.Now
	})
	stream, _ := openJudge(t, r, &kinegatev1.JudgeOpen{
		Selection: given(pairSelection()), Entries: kinegatev1.EntryDetail_ENTRY_DETAIL_ALL,
	})
	go func() {
		for i := range int64(1000) {
			if stream.Send(&kinegatev1.JudgeRequest{Frame: &kinegatev1.JudgeRequest_Block{Block: pairBlock(i, 4096)}}) != nil {
				return
			}
		}
	}()
	time.Sleep(500 * time.Millisecond)
	var err error
	for err == nil {
		_, err = stream.Recv()
	}
	metadata := wantReason(t, err, api.StreamProtocolBroken)
	if metadata["limit"] == "" || metadata["actual"] == "" {
		t.Errorf("metadata %v", metadata)
	}
}

// TestJudgePoolIsShared fills the credit pool: one stream more is refused with the
// advice to try again, and gets in when another leaves.
func TestJudgePoolIsShared(t *testing.T) {
	r := start(t, func(o *Options, _ *Deps) { o.CreditPool = o.CreditLimit })
	open := &kinegatev1.JudgeOpen{Selection: given(pairSelection())}
	first, _ := openJudge(t, r, open)
	second, err := judgeOn(t, r)
	if err != nil {
		t.Fatal(err)
	}
	send(t, second, &kinegatev1.JudgeRequest{Frame: &kinegatev1.JudgeRequest_Open{Open: open}})
	_, err = second.Recv()
	wantReason(t, err, api.ServerOverloaded)
	_ = first.CloseSend()
	if _, err := nextVerdict(first); !errors.Is(err, io.EOF) {
		t.Fatal(err)
	}
	eventually(t, "credit back", func() bool { return r.metric(t, "kinegate_judge_credit_bytes") == 0 })
	openJudge(t, r, open)
}

// TestJudgeRejectsBadBlocks: a structurally unsound block is answered, costs its
// credit and gets it back, and the stream goes on.
func TestJudgeRejectsBadBlocks(t *testing.T) {
	r := start(t)
	stream, _ := openJudge(t, r, &kinegatev1.JudgeOpen{
		Selection: given(pairSelection()), Limits: &kinegatev1.Limits{BlockEventCount: 10, BlockObjectCount: 16},
	})
	spoil := []struct {
		name, field string
		change      func(*kinegatev1.EventBlock)
	}{
		{"ragged column", "momentum_angles.theta_rad.length", func(b *kinegatev1.EventBlock) {
			b.GetMomentumAngles().ThetaRad = b.GetMomentumAngles().GetThetaRad()[1:]
		}},
		{"short column", "momentum_angles.theta_rad.length", func(b *kinegatev1.EventBlock) {
			b.GetMomentumAngles().ThetaRad = b.GetMomentumAngles().GetThetaRad()[8:]
		}},
		{"offsets backwards", "object_offsets[2]", func(b *kinegatev1.EventBlock) { b.ObjectOffsets = column.Int32([]int32{0, 4, 2, 6}) }},
		{"offsets huge", "object_offsets[3]", func(b *kinegatev1.EventBlock) { b.ObjectOffsets = column.Int32([]int32{0, 2, 4, 1e9}) }},
		{"class", "object_classes[0]", func(b *kinegatev1.EventBlock) { b.ObjectClasses[0] = 200 }},
		{"no coordinates", "coordinates", func(b *kinegatev1.EventBlock) { b.Coordinates = nil }},
		{"covariance", "covariance.length", func(b *kinegatev1.EventBlock) {
			b.Covariance = &kinegatev1.CovarianceColumn{Elements: column.Float64(make([]float64, 7))}
		}},
		{"empty beam", "beam.offsets.length", func(b *kinegatev1.EventBlock) { b.Beam = &kinegatev1.BeamColumns{} }},
	}
	sequence := int64(0)
	for _, s := range spoil {
		b := pairBlock(sequence, 3)
		s.change(b)
		sendBlock(t, stream, b)
		v, err := nextVerdict(stream)
		if err != nil {
			t.Fatalf("%s: %v", s.name, err)
		}
		if v.GetSequence() != sequence || v.GetRejected().GetReason() != string(api.BlockInvalid) || v.GetRejected().GetField() != s.field {
			t.Errorf("%s: %v, want field %s", s.name, v, s.field)
		}
		sequence++
	}
	// Over the promise of the opening, in events and in objects.
	for _, events := range []int{11, 9} {
		sendBlock(t, stream, pairBlock(sequence, events))
		if v, err := nextVerdict(stream); err != nil || !strings.Contains(v.GetRejected().GetMessage(), "over the limit") {
			t.Errorf("%d events: %v, %v", events, v, err)
		}
		sequence++
	}
	sendBlock(t, stream, pairBlock(sequence, 8))
	if v, err := nextVerdict(stream); err != nil || v.GetRejected() != nil || v.GetEventCount() != 8 {
		t.Errorf("after the bad blocks: %v, %v", v, err)
	}
}

// TestJudgeExpires: with a clock that runs away, events are EXPIRED, each of them.
func TestJudgeExpires(t *testing.T) {
	now := make(chan time.Time, 1)
	now <- time.Unix(0, 0)
	r := start(t, func(_ *Options, d *Deps) {
		d.Now = func() time.Time {
			at := (<-now).Add(time.Second)
			now <- at
			return at
		}
	})
	stream, _ := openJudge(t, r, &kinegatev1.JudgeOpen{Selection: given(pairSelection()), LatencyBudgetS: new(0.5)})
	sendBlock(t, stream, pairBlock(0, 100))
	v, err := nextVerdict(stream)
	if err != nil {
		t.Fatal(err)
	}
	for i, s := range v.GetStatuses() {
		if kinegatev1.EventStatus(s) != kinegatev1.EventStatus_EVENT_STATUS_EXPIRED || column.Bit(v.GetGate(), i) {
			t.Fatalf("event %d: status %d", i, s)
		}
	}
	if len(v.GetStatuses()) != 100 {
		t.Errorf("%d statuses", len(v.GetStatuses()))
	}
}

// TestJudgeHeartbeats: after a second of silence the server says how far it is.
func TestJudgeHeartbeats(t *testing.T) {
	r := start(t)
	stream, _ := openJudge(t, r, &kinegatev1.JudgeOpen{Selection: given(pairSelection()), FirstSequence: 7})
	sendBlock(t, stream, pairBlock(7, 1))
	if _, err := nextVerdict(stream); err != nil {
		t.Fatal(err)
	}
	response, err := stream.Recv()
	if h := response.GetHeartbeat(); err != nil || h.GetReceivedSequence() != 7 || h.GetAnsweredSequence() != 7 || h.GetOldestPendingS() != 0 {
		t.Errorf("%v, %v", response, err)
	}
}

// TestJudgeDrains: the server says that it will leave, answers what it has read and
// ends the stream well.
func TestJudgeDrains(t *testing.T) {
	r := start(t)
	stream, _ := openJudge(t, r, &kinegatev1.JudgeOpen{Selection: given(pairSelection())})
	sendBlock(t, stream, pairBlock(0, 10))
	if _, err := nextVerdict(stream); err != nil {
		t.Fatal(err)
	}
	done := make(chan error, 1)
	go func() { done <- r.Shutdown(t.Context()) }()
	response, err := stream.Recv()
	if d := response.GetDraining(); err != nil || d == nil || d.GetAnsweredSequence() != 0 || d.GetGraceS() <= 0 ||
		d.GetReason() != kinegatev1.DrainReason_DRAIN_REASON_SERVER_STOPS {
		t.Fatalf("%v, %v", response, err)
	}
	if _, err := stream.Recv(); !errors.Is(err, io.EOF) {
		t.Errorf("the stream ends with %v", err)
	}
	if err := <-done; err != nil {
		t.Errorf("Shutdown: %v", err)
	}
}

// TestJudgeResumeGivesTheSameBits: verdicts after a resume are those of a stream that
// was never broken, whatever the block size.
func TestJudgeResumeGivesTheSameBits(t *testing.T) {
	r := start(t)
	open := func(first int64) *kinegatev1.JudgeOpen {
		return &kinegatev1.JudgeOpen{
			Selection: given(pairSelection()), FirstSequence: first, Entries: kinegatev1.EntryDetail_ENTRY_DETAIL_ALL,
		}
	}
	const blocks, events = 4, 50
	c := learnedPairs(t, r.general(t), open(0), blocks, events)
	for _, first := range []int64{0, 2} {
		resumed := c.Another(open(first))
		stream, _ := openJudge(t, r, open(first))
		for i := first; i < blocks; i++ {
			block := pairBlock(i, events)
			resumed.Sent(block)
			sendBlock(t, stream, block)
			v, err := nextVerdict(stream)
			if err != nil {
				t.Fatal(err)
			}
			resumed.Answered(v)
		}
		if faults := resumed.Faults(true); len(faults) > 0 {
			t.Errorf("from block %d on: %v", first, faults)
		}
	}
}

// TestJudgeIdle ends a stream that says nothing, not even a heartbeat.
func TestJudgeIdle(t *testing.T) {
	r := start(t, func(o *Options, _ *Deps) { o.StreamIdle = time.Second })
	stream, _ := openJudge(t, r, &kinegatev1.JudgeOpen{Selection: given(pairSelection())})
	for {
		_, err := stream.Recv()
		if err == nil {
			continue // heartbeats of the server
		}
		wantReason(t, err, api.StreamIdle)
		return
	}
}
