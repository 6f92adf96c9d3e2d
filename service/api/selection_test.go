package api

import (
	"fmt"
	"os"
	"slices"
	"strings"
	"testing"

	"google.golang.org/protobuf/proto"

	"example.org/kinegate/proto/column"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

func newServices(t testing.TB) *Services {
	t.Helper()
	s, err := New(Deps{Limits: DefaultLimits()})
	if err != nil {
		t.Fatal(err)
	}
	return s
}

func checkText(t testing.TB, yaml string) *kinegatev1.CheckSelectionResponse {
	t.Helper()
	reply, err := newServices(t).bulk.CheckSelection(t.Context(), &kinegatev1.CheckSelectionRequest{
		Form: &kinegatev1.CheckSelectionRequest_Yaml{Yaml: yaml},
	})
	if err != nil {
		t.Fatal(err)
	}
	return reply
}

const faulty = `name: "two words"
hypotheses:
  - name: pi0
    reaction: "gamma p -> p pi0, pi0 -> gama gamma"
    prescale_count: -1
    beam: {tagged: {}}
  - name: eta
    reaction: "gamma p -> p eta, eta -> gamma gamma"
    beam: {tagged: {prompt: {min_ns: 3, max_ns: -3}}}
    role: ROLE_OTHER
    condition:
      all_of:
        - window: {invariant_mass: {products: [eta], min_gev: 0.6, max_gev: 0.5}}
        - window: {invariant_mas: {products: [eta]}}
        - window: {energy: {products: ["gamma[2]"]}}
        - {}
`

// TestCheckNamesEveryFaultAtOnce looks for each seeded fault at its line.
func TestCheckNamesEveryFaultAtOnce(t *testing.T) {
	t.Parallel()
	reply := checkText(t, faulty)
	if !slices.IsSortedFunc(reply.GetFaults(), func(a, b *kinegatev1.FieldFault) int { return int(a.GetLine() - b.GetLine()) }) {
		t.Error("the faults are not in the order of the text")
	}
	for _, want := range []struct {
		line  int32
		field string
	}{
		{1, "name"},
		{4, "hypotheses[0].reaction"},
		{5, "hypotheses[0].prescale_count"},
		{9, "hypotheses[1].beam.tagged.prompt"},
		{10, "hypotheses[1].role"},
		{13, "hypotheses[1].condition.all_of[0].window.invariant_mass"},
		{14, "hypotheses[1].condition.all_of[1].window.invariant_mas"},
		{15, "hypotheses[1].condition.all_of[2].window.energy.products[0]"},
		{16, "hypotheses[1].condition.all_of[3]"},
	} {
		found := false
		for _, f := range reply.GetFaults() {
			found = found || f.GetLine() == want.line && strings.HasPrefix(f.GetField(), want.field) && f.GetColumn() > 0
		}
		if !found {
			t.Errorf("no fault of %s at line %d", want.field, want.line)
		}
	}
	if t.Failed() {
		for _, f := range reply.GetFaults() {
			t.Logf("%d:%d %s: %s", f.GetLine(), f.GetColumn(), f.GetField(), f.GetMessage())
		}
	}
	if reply.GetSelectionDigest() != "" || len(reply.GetHypotheses()) != 0 {
		t.Errorf("a faulty selection has a digest or outline: %v", reply)
	}
}

// TestCheckCountsWhatItCannotRead: entries of a list that cannot be read move none after them.
func TestCheckCountsWhatItCannotRead(t *testing.T) {
	t.Parallel()
	reply := checkText(t, `name: places
hypotheses:
  - pi0
  - name: pi0
    reaction: "gamma p -> p pi0, pi0 -> gamma gama"
  - name: eta
    reaction: "gamma p -> p eta, eta -> gamma gamma"
    beam: {tagged: {}}
    condition:
      all_of:
        - [window]
        - window: {invariant_mass: {products: [7, eta, pi0], max_gev: 1}}
`)
	var got []string
	for _, f := range reply.GetFaults() {
		got = append(got, fmt.Sprintf("%d:%d %s", f.GetLine(), f.GetColumn(), f.GetField()))
	}
	want := []string{
		"3:5 hypotheses[0]",
		"5:5 hypotheses[1].reaction",
		"11:11 hypotheses[2].condition.all_of[0]",
		"12:48 hypotheses[2].condition.all_of[1].window.invariant_mass.products[0]",
		"12:56 hypotheses[2].condition.all_of[1].window.invariant_mass.products[2]",
	}
	if !slices.Equal(got, want) {
		t.Errorf("faults at\n%s\nwant\n%s", strings.Join(got, "\n"), strings.Join(want, "\n"))
	}
}

// TestFaultsOfStructuredReactions: the field at fault is named down to the product, by the
// check and by a refusal.
func TestFaultsOfStructuredReactions(t *testing.T) {
	t.Parallel()
	text := `name: deep
hypotheses:
  - name: deep
    structured_reaction:
      initial: [gamma, p]
      products:
        - particle: p
        - particle: eta
          daughters:
            - {particle: pi0}
            - particle: pi0
              daughters: [{particle: gamma}, {particle: PRODUCT}]
            - {particle: pi0}
    beam: {tagged: {}}
`
	const product = "structured_reaction.products[1].daughters[1]"
	for _, c := range []struct{ name, field, place, message string }{
		{"gama", product + ".daughters[1].particle", "12:47", "unknown particle"},
		{"eta", product, "11:15", "energy is not conserved in pi0 -> gamma eta"},
	} {
		t.Run(c.name, func(t *testing.T) {
			t.Parallel()
			reply := checkText(t, strings.Replace(text, "PRODUCT", c.name, 1))
			field := "hypotheses[0]." + c.field
			if len(reply.GetFaults()) != 1 {
				t.Fatalf("faults %v", reply.GetFaults())
			}
			f := reply.GetFaults()[0]
			place := fmt.Sprintf("%d:%d", f.GetLine(), f.GetColumn())
			if f.GetField() != field || place != c.place || !strings.Contains(f.GetMessage(), c.message) {
				t.Errorf("%s %s: %s, want %s %s: %s", place, f.GetField(), f.GetMessage(), c.place, field, c.message)
			}
			block, _ := dimuon()
			_, err := newServices(t).bulk.JudgeBlock(t.Context(), &kinegatev1.JudgeBlockRequest{
				Selection: &kinegatev1.SelectionSource{Source: &kinegatev1.SelectionSource_Given{Given: reply.GetSelection()}}, Block: block,
			})
			if err == nil {
				t.Fatal("the faulty selection judges")
			}
			if v := Explain(err).Violations; len(v) != 1 || v[0].Field != "selection.given."+field {
				t.Errorf("violations %v", v)
			}
		})
	}
}

func TestCheckOfTextAndMessageAgree(t *testing.T) {
	t.Parallel()
	yaml, err := os.ReadFile("../../testdata/selections/dimuon.yaml")
	if err != nil {
		t.Fatal(err)
	}
	fromText := checkText(t, string(yaml))
	if len(fromText.GetFaults()) > 0 || fromText.GetSelectionDigest() == "" {
		t.Fatalf("faults %v", fromText.GetFaults())
	}
	fromMessage, err := newServices(t).bulk.CheckSelection(t.Context(), &kinegatev1.CheckSelectionRequest{
		Form: &kinegatev1.CheckSelectionRequest_Selection{Selection: fromText.GetSelection()},
	})
	if err != nil || !proto.Equal(fromText, fromMessage) {
		t.Errorf("text and message differ: %v\n%v\n%v", err, fromText, fromMessage)
	}
}

func TestCheckNeedsAForm(t *testing.T) {
	t.Parallel()
	if _, err := newServices(t).bulk.CheckSelection(t.Context(), &kinegatev1.CheckSelectionRequest{}); Explain(err).Reason != FieldInvalid {
		t.Errorf("got %v", err)
	}
}

// dimuon is one event of testdata/open/dimuon_2011A.csv with its printed mass.
func dimuon() (block *kinegatev1.EventBlock, printed float64) {
	return &kinegatev1.EventBlock{
		EventIds: column.Int64([]int64{74969122}), RunNumber: 165617, ObjectOffsets: column.Int32([]int32{0, 2}),
		Coordinates: &kinegatev1.EventBlock_MomentumMass{MomentumMass: &kinegatev1.MomentumMassColumns{
			PxGev: column.Float64([]float64{-46.1516, 30.1097}), PyGev: column.Float64([]float64{29.4115, -16.3989}),
			PzGev: column.Float64([]float64{-24.407, -39.6876}), MassGev: column.Float64([]float64{0, 0}),
		}},
		ObjectClasses: []byte{2, 3},
	}, 89.9557
}

func TestJudgeBlockOfAMeasuredEvent(t *testing.T) {
	t.Parallel()
	yaml, err := os.ReadFile("../../testdata/selections/dimuon.yaml")
	if err != nil {
		t.Fatal(err)
	}
	block, printed := dimuon()
	reply, err := newServices(t).bulk.JudgeBlock(t.Context(), &kinegatev1.JudgeBlockRequest{
		Selection: &kinegatev1.SelectionSource{Source: &kinegatev1.SelectionSource_Given{Given: checkText(t, string(yaml)).GetSelection()}},
		Entries:   kinegatev1.EntryDetail_ENTRY_DETAIL_ACCEPTED,
		Block:     block,
	})
	if err != nil {
		t.Fatal(err)
	}
	v := reply.GetVerdict()
	masses, err := column.Float64s(v.GetEntries().GetObservables())
	if err != nil || len(masses) != 2 || !column.Bit(v.GetGate(), 0) {
		t.Fatalf("verdict %v", v)
	}
	// Six printed digits carry a relative error of 1e-5 through three components.
	if d := masses[0]/printed - 1; d > 1e-4 || d < -1e-4 {
		t.Errorf("mass %v, printed %v", masses[0], printed)
	}
	assignment, err := column.Int16s(v.GetEntries().GetAssignments())
	if err != nil || len(assignment) != 4 || assignment[0] != 0 || assignment[1] != 1 {
		t.Errorf("assignment %v, want mu+ from object 0 and mu- from object 1", assignment)
	}
}

func TestJudgeBlockRefusals(t *testing.T) {
	t.Parallel()
	s := newServices(t).bulk
	valid := func() *kinegatev1.JudgeBlockRequest {
		block, _ := dimuon()
		return &kinegatev1.JudgeBlockRequest{
			Selection: &kinegatev1.SelectionSource{Source: &kinegatev1.SelectionSource_Given{Given: &kinegatev1.Selection{
				Name: "pairs", Hypotheses: []*kinegatev1.Hypothesis{{Name: "pair", Reaction: "-> mu+ mu-"}},
			}}},
			Block: block,
		}
	}
	if _, err := s.JudgeBlock(t.Context(), valid()); err != nil {
		t.Fatalf("the valid request: %v", err)
	}
	for _, c := range []struct {
		name   string
		change func(*kinegatev1.JudgeBlockRequest)
		reason Reason
		field  string
	}{
		{"no block", func(r *kinegatev1.JudgeBlockRequest) { r.Block = nil }, BlockInvalid, "block.coordinates"},
		{"short column", func(r *kinegatev1.JudgeBlockRequest) { r.Block.EventIds = []byte{1} }, BlockInvalid, "block.event_ids.length"},
		{"no selection", func(r *kinegatev1.JudgeBlockRequest) { r.Selection = nil }, FieldInvalid, "selection"},
		{"no hypothesis", func(r *kinegatev1.JudgeBlockRequest) { r.GetSelection().GetGiven().Hypotheses = nil }, SelectionInvalid, "selection.given.hypotheses"},
		{"unknown name", func(r *kinegatev1.JudgeBlockRequest) {
			r.Selection = &kinegatev1.SelectionSource{Source: &kinegatev1.SelectionSource_Named{Named: &kinegatev1.SelectionReference{Name: "x"}}}
		}, SelectionNotFound, ""},
		{"detail", func(r *kinegatev1.JudgeBlockRequest) { r.Entries = 77 }, FieldInvalid, "entries"},
		{"unknown enum", func(r *kinegatev1.JudgeBlockRequest) {
			r.GetSelection().GetGiven().GetHypotheses()[0].Role = 300
		}, SelectionInvalid, "selection.given.hypotheses[0].role"},
	} {
		t.Run(c.name, func(t *testing.T) {
			t.Parallel()
			request := valid()
			c.change(request)
			_, err := s.JudgeBlock(t.Context(), request)
			if err == nil {
				t.Fatal("accepted")
			}
			f := Explain(err)
			if f.Reason != c.reason || c.field != "" && (len(f.Violations) == 0 || f.Violations[0].Field != c.field) {
				t.Errorf("%s: %v", f.Reason, f.Violations)
			}
		})
	}
}

// TestUnknownSelectionIsNamed: the sentence says which name is unknown and which are known.
func TestUnknownSelectionIsNamed(t *testing.T) {
	t.Parallel()
	library := newServices(t).deps.Library
	ask := func() string {
		_, err := library.find(&kinegatev1.SelectionReference{Name: "nowhere"})
		return Explain(err).Message
	}
	if got, want := ask(), `no selection is named "nowhere"; known: none`; got != want {
		t.Errorf("without selections: %s, want %s", got, want)
	}
	if _, err := library.Add("name: pairs\nhypotheses:\n- name: pair\n  reaction: '-> mu+ mu-'\n"); err != nil {
		t.Fatal(err)
	}
	if got, want := ask(), `no selection is named "nowhere"; known: pairs`; got != want {
		t.Errorf("with one selection: %s, want %s", got, want)
	}
}

// TestLibraryKeepsVersions: the newest wins, the last four stay, a fifth pushes the
// oldest out, and a faulty text changes nothing.
func TestLibraryKeepsVersions(t *testing.T) {
	t.Parallel()
	s := newServices(t)
	library := s.deps.Library
	var digests []string
	for _, prescale := range []string{"1", "2", "3", "4", "5"} {
		text := "name: a\nhypotheses: [{name: h, reaction: \"-> gamma gamma\", prescale_count: " + prescale + "}]\n"
		if _, err := library.Add(text); err != nil {
			t.Fatal(err)
		}
		c, err := library.find(&kinegatev1.SelectionReference{Name: "a"})
		if err != nil {
			t.Fatal(err)
		}
		digests = append(digests, c.digest)
	}
	if _, err := library.Add("name: a\nhypotheses: []\n"); Explain(err).Reason != SelectionInvalid {
		t.Errorf("a faulty text: %v", err)
	}
	for i, digest := range digests {
		_, err := library.find(&kinegatev1.SelectionReference{Name: "a", SelectionDigest: digest})
		if gone := err != nil; gone != (i == 0) {
			t.Errorf("version %d: %v", i+1, err)
		}
		if i == 0 && Explain(err).Reason != DigestGone {
			t.Errorf("a version pushed out: %v", err)
		}
	}
	if list := library.list(); len(list) != 1 || len(list[0].GetDigests()) != 4 || list[0].GetDigests()[0] != digests[4] {
		t.Errorf("list %v", list)
	}
}

// FuzzSelectionFile: whatever the text, the check answers, and what it accepts
// judges an event without a fault of its own.
func FuzzSelectionFile(f *testing.F) {
	for _, name := range []string{"dimuon.yaml", "four-lepton.yaml"} {
		yaml, err := os.ReadFile("../../testdata/selections/" + name)
		if err != nil {
			f.Fatal(err)
		}
		f.Add(string(yaml))
	}
	f.Add(faulty)
	s := newServices(f)
	f.Fuzz(func(t *testing.T, yaml string) {
		reply, err := s.bulk.CheckSelection(t.Context(), &kinegatev1.CheckSelectionRequest{
			Form: &kinegatev1.CheckSelectionRequest_Yaml{Yaml: yaml},
		})
		if err != nil {
			t.Fatal(err)
		}
		if len(reply.GetFaults()) > 0 {
			return
		}
		block, _ := dimuon()
		_, err = s.bulk.JudgeBlock(t.Context(), &kinegatev1.JudgeBlockRequest{
			Selection: &kinegatev1.SelectionSource{Source: &kinegatev1.SelectionSource_Given{Given: reply.GetSelection()}},
			Block:     block,
		})
		if err != nil {
			t.Errorf("accepted by the check, refused by the judge: %v\n%s", err, yaml)
		}
	})
}

// FuzzEventBlock: bytes that decode as a block are judged or refused with a reason.
func FuzzEventBlock(f *testing.F) {
	block, _ := dimuon()
	seed, err := proto.Marshal(block)
	if err != nil {
		f.Fatal(err)
	}
	f.Add(seed)
	f.Add([]byte{})
	s := newServices(f)
	selection := &kinegatev1.Selection{Name: "pairs", Hypotheses: []*kinegatev1.Hypothesis{
		{Name: "pair", Reaction: "-> mu+ mu-"},
		{Name: "photons", Reaction: "-> gamma gamma", ExtraObjects: &kinegatev1.ExtraObjects{Rule: &kinegatev1.ExtraObjects_Any{Any: &kinegatev1.AnyExtraObjects{}}}},
		{
			Name: "recoil", Reaction: "gamma p -> p pi0, pi0 -> gamma gamma",
			Beam: &kinegatev1.BeamSource{Source: &kinegatev1.BeamSource_Tagged{Tagged: &kinegatev1.TaggedBeam{}}},
		},
	}}
	f.Fuzz(func(t *testing.T, raw []byte) {
		var m kinegatev1.EventBlock
		if proto.Unmarshal(raw, &m) != nil {
			return
		}
		reply, err := s.bulk.JudgeBlock(t.Context(), &kinegatev1.JudgeBlockRequest{
			Selection: &kinegatev1.SelectionSource{Source: &kinegatev1.SelectionSource_Given{Given: selection}},
			Entries:   kinegatev1.EntryDetail_ENTRY_DETAIL_ALL,
			Block:     &m,
		})
		if err != nil {
			if r := Explain(err).Reason; r != BlockInvalid && r != ReplyTooLarge {
				t.Fatalf("refused as %s: %v", r, err)
			}
			return
		}
		if int(reply.GetVerdict().GetEventCount()) != len(m.GetEventIds())/8 {
			t.Errorf("%d verdicts for %d bytes of ids", reply.GetVerdict().GetEventCount(), len(m.GetEventIds()))
		}
	})
}

// TestBrokenLawOfSelection wants the name of the law in the fault and in the refusal.
func TestBrokenLawOfSelection(t *testing.T) {
	t.Parallel()
	const says = "energy is not conserved in pi0 -> mu+ mu-"
	reply := checkText(t, "name: law\nhypotheses:\n  - name: a\n    reaction: \"gamma p -> p pi0, pi0 -> mu+ mu-\"\n")
	if f := reply.GetFaults(); len(f) != 1 || !strings.Contains(f[0].GetMessage(), says) || f[0].GetField() != "hypotheses[0].reaction" ||
		f[0].GetReason() != string(LawBroken) {
		t.Errorf("faults %v", f)
	}
	block, _ := dimuon()
	_, err := newServices(t).bulk.JudgeBlock(t.Context(), &kinegatev1.JudgeBlockRequest{
		Selection: &kinegatev1.SelectionSource{Source: &kinegatev1.SelectionSource_Given{Given: reply.GetSelection()}}, Block: block,
	})
	if err == nil || !strings.Contains(err.Error(), "hypotheses[0].reaction: "+says) {
		t.Errorf("the refusal is %v", err)
	}
}
