package server

import (
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"

	"github.com/prometheus/client_golang/prometheus"
	"github.com/rs/zerolog"

	kinegate "example.org/kinegate/clients/go"
	"example.org/kinegate/clients/go/history"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/api"
	"example.org/kinegate/service/telemetry"
)

// pairsFile is a selection file; the upper limit makes versions.
func pairsFile(name string, maximum float64) []byte {
	return []byte("name: " + name + "\nhypotheses:\n  - name: pair\n    reaction: \"pi0 -> gamma gamma\"\n    extra_objects: {any: {}}\n" +
		"    condition:\n      window:\n        invariant_mass: {products: [\"gamma[0]\", \"gamma[1]\"], min_gev: 0.1, max_gev: " +
		strconv.FormatFloat(maximum, 'g', -1, 64) + "}\n")
}

// put replaces a file as editors and orchestrators do: all at once.
func put(t *testing.T, path string, data []byte) {
	t.Helper()
	writeFile(t, path+".new", data)
	if err := os.Rename(path+".new", path); err != nil {
		t.Fatal(err)
	}
}

// settle lets the folder look twice, as it does before it takes a file.
func settle(r *running) {
	r.folder.refresh()
	r.folder.refresh()
}

func namedPairs(follow bool) *kinegatev1.JudgeOpen {
	return &kinegatev1.JudgeOpen{
		Selection: &kinegatev1.SelectionSource{Source: &kinegatev1.SelectionSource_Named{Named: &kinegatev1.SelectionReference{Name: "pairs"}}},
		Follow:    follow,
	}
}

// TestReloadMidStream: a stream keeps the selection it was opened with, over a reload
// and a break; one that follows takes the new one at a block boundary, once.
func TestReloadMidStream(t *testing.T) {
	path := t.TempDir()
	file := filepath.Join(path, "pairs.yaml")
	writeFile(t, file, pairsFile("pairs", 0.16))
	r := start(t, func(o *Options, _ *Deps) { o.SelectionFolder = path })
	const events, perBlock = 4000, 100
	before := learned(t, r, namedPairs(false), events)
	follower := learned(t, r, namedPairs(false), events/2)
	l := r.gateLine()
	reload := func(from int) {
		if from == events/2 {
			put(t, file, pairsFile("pairs", 0.2))
			settle(r)
			l.cut()
		}
	}
	digests := map[string]bool{}
	verify(t, before, history.Run{
		Client: r.client(t, l.through), Open: namedPairs(false), Events: events, PerBlock: perBlock, Before: reload,
		Answered: func(v *kinegatev1.VerdictBlock) { digests[v.GetSelectionDigest()] = true },
	})
	if len(digests) != 1 {
		t.Errorf("%d digests on a stream that does not follow", len(digests))
	}
	// Back to the first version for the one that follows.
	put(t, file, pairsFile("pairs", 0.16))
	settle(r)
	var order []string
	verify(t, follower, history.Run{
		Client: r.client(t), Open: namedPairs(true), Events: events / 2, PerBlock: perBlock,
		Options: kinegate.JudgeOptions{Queue: 1},
		Answered: func(v *kinegatev1.VerdictBlock) {
			if n := len(order); n == 0 || order[n-1] != v.GetSelectionDigest() {
				order = append(order, v.GetSelectionDigest())
			}
		},
	})
	stream, err := r.client(t).Judge(t.Context(), namedPairs(true), kinegate.JudgeOptions{})
	if err != nil {
		t.Fatal(err)
	}
	defer stream.Close()
	for i := range 10 {
		if i == 5 {
			put(t, file, pairsFile("pairs", 0.2))
			settle(r)
		}
		if err := stream.Send(history.Photons(i*perBlock, perBlock)); err != nil {
			t.Fatal(err)
		}
		v, err := stream.Recv()
		if err != nil {
			t.Fatal(err)
		}
		if n := len(order); order[n-1] != v.GetSelectionDigest() {
			if i != 5 {
				t.Errorf("the selection changes at block %d", i)
			}
			order = append(order, v.GetSelectionDigest())
		}
	}
	if len(order) != 2 || !digests[order[0]] {
		t.Errorf("digests %v", order)
	}
}

// TestVersionPassedOver: a stream that follows keeps the version that it has where the newer one
// could make replies that are too large, or for which no room is left, and says so once.
func TestVersionPassedOver(t *testing.T) {
	for _, c := range []struct {
		reason   api.Reason
		recorded int // observables of the newer version
		room     Bytes
	}{{api.ReplyTooLarge, 127, 64 * mebi}, {api.ServerOverloaded, 40, 3 * mebi}} {
		t.Run(string(c.reason), func(t *testing.T) {
			path := t.TempDir()
			file := filepath.Join(path, "pairs.yaml")
			writeFile(t, file, pairsFile("pairs", 0.16))
			r := start(t, func(o *Options, _ *Deps) {
				o.SelectionFolder, o.CreditPool = path, o.CreditLimit+c.room
			})
			open := namedPairs(true)
			open.Entries = kinegatev1.EntryDetail_ENTRY_DETAIL_ACCEPTED
			stream, err := r.client(t).Judge(t.Context(), open, kinegate.JudgeOptions{})
			if err != nil {
				t.Fatal(err)
			}
			defer stream.Close()
			const perBlock = 10
			next := 0
			judged := func() string {
				if err := stream.Send(history.Photons(next, perBlock)); err != nil {
					t.Fatal(err)
				}
				next += perBlock
				v, err := stream.Recv()
				if err != nil {
					t.Fatal(err)
				}
				return v.GetSelectionDigest()
			}
			first := judged()
			for version := range 2 {
				var larger strings.Builder
				larger.Write(pairsFile("pairs", 0.17+float64(version)/100))
				larger.WriteString("    record:\n")
				for i := range c.recorded {
					fmt.Fprintf(&larger, "      - {name: M%d, invariant_mass: {products: [\"gamma[0]\", \"gamma[1]\"]}}\n", i)
				}
				put(t, file, []byte(larger.String()))
				settle(r)
				for range 3 {
					if got := judged(); got != first {
						t.Errorf("judged by %s", got)
					}
				}
				if got := r.metric(t, "kinegate_judge_versions_passed_over_total", string(c.reason)); got != float64(version+1) {
					t.Errorf("counted %v times after version %d", got, version)
				}
			}
			if n := strings.Count(r.log.String(), "cannot take the newer version"); n != 2 {
				t.Errorf("%d lines:\n%s", n, r.log)
			}
			put(t, file, pairsFile("pairs", 0.2))
			settle(r)
			if judged() == first {
				t.Error("a version that fits is not taken")
			}
		})
	}
}

// TestBadFilesKeepTheOldVersion, with log and metric, and are forgiven once mended.
func TestBadFilesKeepTheOldVersion(t *testing.T) {
	path := t.TempDir()
	file := filepath.Join(path, "pairs.yaml")
	writeFile(t, file, pairsFile("pairs", 0.16))
	writeFile(t, filepath.Join(path, "notes.txt"), []byte("not read"))
	r := start(t, func(o *Options, _ *Deps) { o.SelectionFolder = path })
	info := func() []string {
		reply, err := kinegatev1.NewInfoServiceClient(r.general(t)).GetInfo(t.Context(), &kinegatev1.GetInfoRequest{})
		if err != nil {
			t.Fatal(err)
		}
		var names []string
		for _, s := range reply.GetSelections() {
			names = append(names, s.GetName()+" "+strconv.Itoa(len(s.GetDigests())))
		}
		return names
	}
	step := func(what string, good float64, names ...string) {
		t.Helper()
		settle(r)
		if got := r.metric(t, "kinegate_selection_reload_success"); got != good {
			t.Errorf("%s: metric %v", what, got)
		}
		if got := info(); !slices.Equal(got, names) {
			t.Errorf("%s: %v", what, got)
		}
	}
	step("start", 1, "pairs 1")
	put(t, file, []byte("name: pairs\nhypotheses: [{name: pair, reaction: \"pi0 -> gama\"}]\n"))
	step("bad", 0, "pairs 1")
	if !strings.Contains(r.log.String(), "gama") {
		t.Errorf("log: %s", r.log.String())
	}
	step("still bad", 0, "pairs 1")
	if n := strings.Count(r.log.String(), "gama"); n != 1 {
		t.Errorf("%d log lines about one bad file", n)
	}
	other := filepath.Join(path, "other.yml")
	put(t, other, pairsFile("pairs", 0.17))
	step("a name twice", 0, "pairs 1")
	put(t, other, pairsFile("others", 0.17))
	step("another beside a bad one", 0, "others 1", "pairs 1")
	put(t, file, pairsFile("pairs", 0.18))
	step("mended", 1, "others 1", "pairs 2")
	if err := os.Remove(other); err != nil {
		t.Fatal(err)
	}
	step("a file gone", 1, "others 1", "pairs 2")
}

// unwatched is a folder that is looked at by the test alone.
func unwatched(t *testing.T, path string) *folder {
	t.Helper()
	table, err := loadTable(nil)
	if err != nil {
		t.Fatal(err)
	}
	metrics, err := telemetry.NewMetrics(prometheus.NewRegistry(), "test")
	if err != nil {
		t.Fatal(err)
	}
	log := zerolog.Nop()
	f, err := loadFolder(path, api.NewLibrary(table), nil, metrics, func() *zerolog.Logger { return &log })
	if err != nil {
		t.Fatal(err)
	}
	return f
}

// TestFileThatIsBeingWritten: the first part of a file may be a sound selection without
// its last hypothesis, and is not taken.
func TestFileThatIsBeingWritten(t *testing.T) {
	path := t.TempDir()
	file := filepath.Join(path, "pairs.yaml")
	part := pairsFile("pairs", 0.16)
	whole := slices.Concat(part, []byte("  - name: all\n    reaction: \"pi0 -> gamma gamma\"\n    role: ROLE_VETO\n"))
	writeFile(t, file, whole)
	f := unwatched(t, path)
	look := func(what string, taken int) {
		t.Helper()
		if changed, err := f.reread(); err != nil || len(changed) != taken {
			t.Errorf("%s: %d versions are taken, error %v", what, len(changed), err)
		}
	}
	writeFile(t, file, part)
	look("half written", 0)
	writeFile(t, file, slices.Concat(whole, []byte("\n")))
	look("written", 0)
	look("unchanged since", 1)
	look("known", 0)
}

// TestNamesOfFiles: a name is a file's own only while the file has it.
func TestNamesOfFiles(t *testing.T) {
	path := t.TempDir()
	a, b := filepath.Join(path, "a.yaml"), filepath.Join(path, "b.yaml")
	put(t, a, pairsFile("day", 0.16))
	f := unwatched(t, path)
	step := func(what string, names map[string]string) {
		t.Helper()
		for range 2 {
			if _, err := f.reread(); err != nil {
				t.Log(what, err)
			}
		}
		for file, name := range names {
			if got := f.files[file]; got.name != name || (got.bad == nil) != (name != "") {
				t.Errorf("%s: %s has the name %q, want %q; %v", what, file, got.name, name, got.bad)
			}
		}
	}
	put(t, b, pairsFile("day", 0.17))
	step("a name twice", map[string]string{a: "day", b: ""})
	put(t, a, pairsFile("night", 0.16))
	step("the first has another name", map[string]string{a: "night", b: "day"})
	put(t, a, pairsFile("day", 0.16))
	put(t, b, pairsFile("night", 0.17))
	step("names changed for each other", map[string]string{a: "day", b: "night"})
	put(t, b, pairsFile("day", 0.17))
	step("twice again", map[string]string{a: "day", b: ""})
	if err := os.Remove(a); err != nil {
		t.Fatal(err)
	}
	step("the first is gone", map[string]string{b: "day"})
}

// TestBadFolderRefusesToStart names the setting.
func TestBadFolderRefusesToStart(t *testing.T) {
	for name, prepare := range map[string]func(path string) string{
		"no folder": func(path string) string { return filepath.Join(path, "none") },
		"bad file": func(path string) string {
			writeFile(t, filepath.Join(path, "a.yaml"), []byte("name: a\n"))
			return path
		},
	} {
		o := quick()
		o.SelectionFolder = prepare(t.TempDir())
		if _, err := New(o, Deps{}); err == nil {
			t.Errorf("%s: it starts", name)
		}
	}
}

// TestFolderIsWatched: a new file of the folder is found without being told.
func TestFolderIsWatched(t *testing.T) {
	path := t.TempDir()
	r := start(t, func(o *Options, _ *Deps) { o.SelectionFolder = path })
	put(t, filepath.Join(path, "pairs.yaml"), pairsFile("pairs", 0.16))
	eventually(t, "the new selection", func() bool {
		return strings.Contains(r.log.String(), `"selection":"pairs"`)
	})
	_, opened := openJudge(t, r, namedPairs(false))
	if len(opened.GetSelection().GetSelectionDigest()) != 64 {
		t.Errorf("opened %v", opened)
	}
}
