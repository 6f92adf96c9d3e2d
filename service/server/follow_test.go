package server

import (
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"
	"time"

	"google.golang.org/genproto/googleapis/rpc/errdetails"
	"google.golang.org/grpc/status"

	kinegate "example.org/kinegate/clients/go"
	"example.org/kinegate/clients/go/history"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/api"
)

// nestedFile is a selection of hypotheses by the upper ends of their windows, grouped where there
// are several.
func nestedFile(names ...string) []byte {
	maxima := map[string]float64{"near": 0.16, "wide": 9}
	var text strings.Builder
	text.WriteString("name: pairs\nhypotheses:\n")
	for _, name := range names {
		text.WriteString("  - name: " + name + "\n    reaction: \"pi0 -> gamma gamma\"\n    extra_objects: {any: {}}\n" +
			"    ranking: {closest_masses: {masses: [{products: [\"gamma[0]\", \"gamma[1]\"], mass_gev: 0.135}]}}\n" +
			"    condition: {window: {invariant_mass: {products: [\"gamma[0]\", \"gamma[1]\"], max_gev: " +
			strconv.FormatFloat(maxima[name], 'g', -1, 64) + "}}}\n")
	}
	if len(names) > 1 {
		text.WriteString("groups: [{name: both, hypotheses: [" + strings.Join(names, ", ") + "]}]\n")
	}
	return []byte(text.String())
}

// TestFollowersLearnTheOutline: verdicts of a stream that follows go by the outline of the
// selection that judged them, with hypotheses that changed places or are gone, also after a break.
func TestFollowersLearnTheOutline(t *testing.T) {
	path := t.TempDir()
	file := filepath.Join(path, "pairs.yaml")
	writeFile(t, file, nestedFile("near", "wide"))
	r := start(t, func(o *Options, _ *Deps) { o.SelectionFolder = path })
	l := r.gateLine()
	stream, err := r.client(t, l.through).Judge(t.Context(), namedPairs(true), kinegate.JudgeOptions{})
	if err != nil {
		t.Fatal(err)
	}
	defer stream.Close()
	const events = 100
	accepts := map[string][]int{}
	for i, names := range [][]string{{"near", "wide"}, {"wide", "near"}, {"near"}, {"wide", "near"}} {
		put(t, file, nestedFile(names...))
		settle(r)
		if i == 3 { //nolint:mnd // the last comes while the stream is broken
			l.cut()
		}
		if err := stream.Send(history.Photons(0, events)); err != nil {
			t.Fatal(err)
		}
		v, err := stream.Recv()
		if err != nil {
			t.Fatal(err)
		}
		outline := stream.Outline(v)
		var said []string
		for h, o := range outline.GetHypotheses() {
			said = append(said, o.GetName())
			accepts[o.GetName()] = append(accepts[o.GetName()], onesIn(v.GetHypotheses()[h].GetAccepted()))
		}
		if !slices.Equal(said, names) || len(outline.GetGroups()) != len(v.GetGroups()) ||
			outline.GetSelectionDigest() != v.GetSelectionDigest() {
			t.Errorf("block %d: hypotheses %v, want %v; %d groups of %d", i, said, names, len(outline.GetGroups()), len(v.GetGroups()))
		}
	}
	near, wide := accepts["near"], accepts["wide"]
	if slices.Min(near) != slices.Max(near) || slices.Min(wide) != slices.Max(wide) || near[0] >= wide[0] {
		t.Errorf("the same events are accepted by near %v and by wide %v times", near, wide)
	}
}

// onesIn counts the bits of a column.
func onesIn(column []byte) int {
	n := 0
	for i := range 8 * len(column) {
		n += int(column[i/8] >> (i % 8) & 1)
	}
	return n
}

// TestJudgeBlockTellsTheOutline: a caller who only named the selection learns what the columns mean.
func TestJudgeBlockTellsTheOutline(t *testing.T) {
	path := t.TempDir()
	writeFile(t, filepath.Join(path, "pairs.yaml"), nestedFile("near", "wide"))
	r := start(t, func(o *Options, _ *Deps) { o.SelectionFolder = path })
	reply, err := r.client(t).Selections.JudgeBlock(t.Context(), &kinegatev1.JudgeBlockRequest{
		Selection: namedPairs(false).GetSelection(), Block: history.Photons(0, 10),
	})
	if err != nil {
		t.Fatal(err)
	}
	o := reply.GetSelection()
	if o.GetSelectionDigest() != reply.GetVerdict().GetSelectionDigest() || len(o.GetHypotheses()) != 2 ||
		o.GetHypotheses()[1].GetName() != "wide" || !slices.Equal(o.GetGroups(), []string{"both"}) {
		t.Errorf("outline %v", o)
	}
}

// TestOpeningNamesWhatIsWrong: a promise below 0, and following a selection that was sent along.
func TestOpeningNamesWhatIsWrong(t *testing.T) {
	r := start(t)
	for field, change := range map[string]func(*kinegatev1.JudgeOpen){
		"open.follow":                       func(o *kinegatev1.JudgeOpen) { o.Follow = true },
		"open.limits.block_byte_count":      func(o *kinegatev1.JudgeOpen) { o.Limits.BlockByteCount = -1 },
		"open.limits.block_event_count":     func(o *kinegatev1.JudgeOpen) { o.Limits.BlockEventCount = -1 },
		"open.limits.block_object_count":    func(o *kinegatev1.JudgeOpen) { o.Limits.BlockObjectCount = -1 },
		"open.limits.block_candidate_count": func(o *kinegatev1.JudgeOpen) { o.Limits.BlockCandidateCount = -1 },
		"open.limits.event_object_count":    func(o *kinegatev1.JudgeOpen) { o.Limits.EventObjectCount = -1 },
		"open.limits.message_byte_count":    func(o *kinegatev1.JudgeOpen) { o.Limits.MessageByteCount = -1 },
	} {
		open := &kinegatev1.JudgeOpen{Selection: given(pairSelection()), Limits: &kinegatev1.Limits{}}
		change(open)
		_, err := r.client(t).Judge(t.Context(), open, kinegate.JudgeOptions{})
		wantReason(t, err, api.FieldInvalid)
		if found := violations(t, err); !slices.Equal(found, []string{field}) {
			t.Errorf("%s: fields %v", field, found)
		}
	}
}

// violations are the fields that a refusal names.
func violations(t *testing.T, err error) []string {
	t.Helper()
	var fields []string
	for _, d := range status.Convert(err).Details() {
		if bad, ok := d.(*errdetails.BadRequest); ok {
			for _, v := range bad.GetFieldViolations() {
				fields = append(fields, v.GetField())
			}
		}
	}
	return fields
}

// TestPromisesHold: every limit that an opening lowers is told back and kept.
func TestPromisesHold(t *testing.T) {
	r := start(t)
	promise := &kinegatev1.Limits{
		BlockByteCount: 4000, BlockEventCount: 20, BlockObjectCount: 30, BlockCandidateCount: 40, EventObjectCount: 2,
		MessageByteCount: 3000,
	}
	stream, opened := openJudge(t, r, &kinegatev1.JudgeOpen{Selection: given(pairSelection()), Limits: promise})
	if l := opened.GetLimits(); l.GetBlockByteCount() != 3000 || l.GetBlockEventCount() != 20 || l.GetBlockObjectCount() != 30 ||
		l.GetBlockCandidateCount() != 40 || l.GetEventObjectCount() != 2 || l.GetMessageByteCount() != 3000 {
		t.Errorf("limits %v of a promise of %v", l, promise)
	}
	crowded := pairBlock(1, 2)
	crowded.ObjectOffsets = []byte{0, 0, 0, 0, 1, 0, 0, 0, 4, 0, 0, 0}
	for i, block := range []*kinegatev1.EventBlock{pairBlock(0, 2), crowded} {
		sendBlock(t, stream, block)
		v, err := nextVerdict(stream)
		if err != nil {
			t.Fatal(err)
		}
		if said := v.GetRejected().GetMessage(); strings.Contains(said, "objects of event 1") != (i == 1) {
			t.Errorf("block %d: %v", i, v)
		}
	}
	// The largest reply to such blocks is some hundred bytes.
	promise.MessageByteCount = 100
	_, err := r.client(t).Judge(t.Context(), &kinegatev1.JudgeOpen{Selection: given(pairSelection()), Limits: promise}, kinegate.JudgeOptions{})
	wantReason(t, err, api.ReplyTooLarge)
}

// TestOldConnectionsAreToldSo: a stream that must end for the age of its connection says why.
func TestOldConnectionsAreToldSo(t *testing.T) {
	r := start(t, func(o *Options, _ *Deps) {
		o.ConnectionAge, o.ConnectionAgeGrace = time.Second, time.Second
		o.LongestDeadline, o.DefaultDeadline = time.Second, time.Second
	})
	stream, _ := openJudge(t, r, &kinegatev1.JudgeOpen{Selection: given(pairSelection())})
	for {
		response, err := stream.Recv()
		if err != nil {
			t.Fatal(err)
		}
		if d := response.GetDraining(); d != nil {
			if d.GetReason() != kinegatev1.DrainReason_DRAIN_REASON_CONNECTION_AGE {
				t.Errorf("reason %v", d.GetReason())
			}
			return
		}
	}
}
