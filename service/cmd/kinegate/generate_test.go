package main

import (
	"bufio"
	"errors"
	"io"
	"os"
	"path/filepath"
	"runtime"
	"slices"
	"strings"
	"testing"
	"time"

	"google.golang.org/protobuf/encoding/protodelim"

	kinegate "example.org/kinegate/clients/go"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/cmd/kinegate/internal/eventfile"
)

const detectorText = `name: small
calorimeter:
  theta: {min_rad: 0.1, max_rad: 2.6}
  stochastic: 0.03
  theta_sigma_rad: 0.01
  phi_sigma_rad: 0.01
  threshold_gev: 0.03
recoil: {theta: {min_rad: 0.1, max_rad: 2.6}, angle_sigma_rad: 0.01}
tagger: {sigma_gev: 0.0015, time_sigma_ns: 1}
`

const generationText = `name: two
seed: 5
initial_state:
  beam_on_target:
    beam: {bremsstrahlung: {electron_gev: 3, min_gev: 1.2, max_gev: 2.4, complete_screening: true, channel_count: 24}}
channels:
  - {name: one pion, reaction: "gamma p -> p pi0, pi0 -> gamma gamma", fraction: 3}
  - {name: eta, reaction: "gamma p -> p eta, eta -> gamma gamma", angle: {product: eta, slope_per_gev2: 2}}
`

// write puts a text into a file of the test.
func write(t *testing.T, name, text string) string {
	t.Helper()
	path := filepath.Join(t.TempDir(), name)
	if err := os.WriteFile(path, []byte(text), 0o600); err != nil {
		t.Fatal(err)
	}
	return path
}

func TestGenerate(t *testing.T) {
	t.Parallel()
	detector, generation := write(t, "detector.yaml", detectorText), write(t, "generation.yaml", generationText)
	faulty := write(t, "faulty.yaml", strings.Replace(generationText, "fraction", "fration", 1))
	below := strings.NewReplacer("1.2", "0.3", "2.4", "0.4").Replace(generationText)
	closed := write(t, "closed.yaml", below)
	closedAndFaulty := write(t, "closed-and-faulty.yaml", below+"detector: {name: \"a b\"}\n")
	for _, c := range []struct {
		arguments string
		code      int
		says      string
	}{
		{`generate "` + omegaExample + `" --beam-range "1.2 GeV:2.4 GeV" --events 500`, exitWell, "effective events      500"},
		{`generate "` + omegaExample + `" --beam "1.5 GeV" --events 500 --show 0 --observable "mass omega"`, exitWell, "true mass of omega"},
		{`generate "gamma p -> K+ Lambda" --beam "1.5 GeV" --events 50 --show 0 --observable "energy K+"`, exitWell, "true laboratory energy of K+"},
		{`generate "gamma p -> p pi0 pi0" --beam "1.5 GeV" --events 50 --show 0 --observable "angle p, pi0[1]"`, exitWell, "true laboratory angle of p pi0[1]"},
		{`generate "gamma p -> p eta" --beam "1 GeV" --observable "mas eta"`, exitUsage, "write mass, energy or angle"},
		{`generate "gamma p -> p eta" --beam "1 GeV" --observable mass`, exitUsage, "write mass, energy or angle"},
		{`generate "gamma p -> p eta" --beam "1 GeV" --events 0 --observable "mass eta"`, exitUsage, "nothing to draw"},
		{`generate "gamma p -> p eta" --beam "1 GeV" --events 0 --plot /nowhere/a.svg`, exitUsage, "nothing to draw"},

		{`generate "gamma p -> p rho0, rho0 -> e+ e-" --beam "2 GeV" --events 5`, exitWell, "rho0 -> e+ e-: its branching fraction is not known"},
		{`generate "gamma p -> p rho0, rho0 -> pi+ pi-" --beam "2 GeV" --events 5`, exitWell, "branching fraction    1, "},
		{`generate "omega -> pi+ pi- pi0" --events 5 --weighted`, exitWell, "of the sample"},
		{`generate "gamma gamma -> e+ e-" --beam "1 GeV" --beam2 "1 MeV" --angle "90 deg" --events 5`, exitWell, "e-"},
		{`generate --request ` + generation + ` --detector ` + detector + ` --events 100`, exitWell, "with an object seen"},
		{`generate --request ` + generation + ` --events 0`, exitWell, "0, from 0 on, seed 5"},
		{`generate --request ` + generation + ` --events 10 --json`, exitWell, `"generation_digest"`},
		{`generate "gamma p -> p eta" --beam "700 MeV"`, exitNo, "the channel is closed"},
		{`generate "gamma p -> K+ X" --beam "2 GeV"`, exitUsage, "an inclusive reaction has no products"},
		{`bound "gamma p -> K+ X" --beam "2 GeV"`, exitUsage, "an inclusive reaction has no products"},
		{`generate --request ` + generation + ` --detector ` + detector + ` --events 4 --show 4`, exitWell, "seen: photon"},
		{`generate "gamma p -> p etha" --beam "1 GeV"`, exitUsage, "\n               ^"},
		{`generate "gamma p -> p eta"`, exitUsage, "only a decay needs none"},
		{`generate "gamma p -> p eta" --beam-range "1 GeV"`, exitUsage, "LOW:HIGH"},
		{`generate "gamma p -> p eta" --beam "1 GeV" --beam-range "1 GeV:2 GeV"`, exitUsage, "one or the other"},
		{`generate "gamma p -> p eta" --beam "1 GeV" --out events.txt`, exitUsage, ".parquet"},
		{`generate "gamma p -> p eta" --beam "1 GeV" --observable "mass pi0"`, exitUsage, "the products are p, eta"},
		{`generate "gamma p -> p eta" --beam "1 GeV" --events -1`, exitUsage, "event_count"},
		{`generate`, exitUsage, "--request"},
		{`generate --request ` + generation + ` --events 0 --seed 9`, exitWell, "seed 9"},
		{`generate --request ` + closed, exitNo, "the channel is closed"},
		{`bound --request ` + closed, exitNo, "the channel is closed"},
	} {
		wantCommand(t, c.arguments, c.code, c.says)
	}
	if code, _, errs := command(t, "generate", "--request", closedAndFaulty); code != exitUsage {
		t.Errorf("code %d, %s", code, errs)
	}
	if code, _, errs := command(t, "generate", "--request", faulty); code != exitUsage || !strings.HasPrefix(errs, faulty+":7:") {
		t.Errorf("code %d, %s", code, errs)
	}
}

// TestGenerateMeasuresBounds holds that many particles make events without a word about bounds,
// and that the bound which was measured, given as input, makes the same events.
func TestGenerateMeasuresBounds(t *testing.T) {
	t.Parallel()
	const many = `"gamma p -> p` + " pi0 pi0 pi0 pi0 pi0 pi0 pi0 pi0 pi0 pi0 pi0" + `" --beam "10 GeV" --events 3`
	digest := func(out string) string {
		_, after, _ := strings.Cut(out, "digest of the sample  ")
		return strings.TrimSpace(after)
	}
	code, out, errs := command(t, shellWords("generate "+many)...)
	bound, _, found := strings.Cut(strings.TrimPrefix(errs, "bound "), ", measured with 100000 draws, of gamma p -> p pi0")
	if code != exitWell || !found || !strings.Contains(out, "measured bound        "+bound+", gamma p -> p pi0") {
		t.Fatalf("code %d, %s%s", code, errs, out)
	}
	again, repeated, _ := command(t, shellWords("generate "+many+" --bound "+bound)...)
	if again != exitWell || digest(repeated) != digest(out) || digest(out) == "" {
		t.Errorf("with the bound given: code %d, %s in place of %s", again, repeated, out)
	}
	if _, weighted, errs := command(t, shellWords("generate "+many+" --weighted")...); strings.Contains(weighted+errs, "measured") {
		t.Errorf("weighted events have a bound: %s%s", errs, weighted)
	}
	// A sample that lacks events has failed, whatever form it is printed in.
	for _, flag := range []string{"", " --json"} {
		wantCommand(t, "generate "+many+" --bound 1"+flag, exitFailed, "3 of 3 events were given up")
	}
	// Two reactions, a bound each.
	_, out, _ = command(t, shellWords(`generate "gamma p -> p pi+ pi-" "gamma p -> p pi+ pi- pi0" --beam "2 GeV" --events 20`)...)
	if strings.Count(out, "measured bound") != 2 {
		t.Errorf("of two reactions: %s", out)
	}
}

// TestPlotChoosesAnObservable holds that without a word from the user no sharp mass is drawn.
func TestPlotChoosesAnObservable(t *testing.T) {
	t.Parallel()
	for line, label := range map[string]string{
		`"` + omegaExample + `" --beam "1.5 GeV"`:                   "true mass of omega",
		`"gamma p -> p pi0, pi0 -> gamma gamma" --beam "1 GeV"`:     "true laboratory energy of p",
		`"gamma p -> K+ Lambda" --beam "1.5 GeV"`:                   "true laboratory energy of K+",
		`"eta -> gamma gamma"`:                                      "events, all at 273.",
		`"gamma p -> p eta" --beam "1 GeV" --observable "mass eta"`: "events, all at 547.",
	} {
		file := filepath.Join(t.TempDir(), "a.svg")
		if code, _, errs := command(t, shellWords("generate "+line+" --events 300 --show 0 --plot "+file)...); code != exitWell {
			t.Fatalf("%s: %s", line, errs)
		}
		picture, err := os.ReadFile(file)
		if err != nil {
			t.Fatal(err)
		}
		if !strings.Contains(string(picture), label) {
			t.Errorf("%s: the picture does not say %q", line, label)
		}
	}
}

// TestSharpObservable holds that equal values stand in one bin, rounding included.
func TestSharpObservable(t *testing.T) {
	t.Parallel()
	s := &observableSample{kind: observableKinds()[0]}
	for k := range 100 {
		s.values, s.weights = append(s.values, 0.547862*(1+float64(k-50)*1e-15)), append(s.weights, 1)
	}
	for _, bins := range []int{24, observableBins} {
		if most := slices.Max(s.histogram(bins).Counts); most != 100 {
			t.Errorf("%d bins: the fullest has %v of 100", bins, most)
		}
	}
}

// TestRequestRefusesWhatItWouldIgnore holds that no flag of the sample stands unheard beside
// a file that says the same.
func TestRequestRefusesWhatItWouldIgnore(t *testing.T) {
	t.Parallel()
	generation := write(t, "generation.yaml", generationText)
	flags := []string{
		`--beam "1 GeV"`, `--beam-kinetic "1 GeV"`, `--beam-momentum "1 GeV"`, `--beam2 "1 GeV"`, `--beam2-kinetic "1 GeV"`,
		`--beam2-momentum "1 GeV"`, `--angle "1 deg"`, `--sqrt-s "2 GeV"`, `--beam-range "1 GeV:2 GeV"`, `--bremsstrahlung "3 GeV"`,
	}
	for _, flag := range flags {
		name, _, _ := strings.Cut(flag, " ")
		for _, verb := range []string{"generate", "bound"} {
			wantCommand(t, verb+` --request `+generation+` `+flag, exitUsage, name+" is for reactions named here")
		}
	}
	for _, flag := range []string{"--weighted", "--weighted=false", "--bound 0.5", "--bound 0"} {
		name, _, _ := strings.Cut(strings.Replace(flag, "=", " ", 1), " ")
		wantCommand(t, `generate --request `+generation+` `+flag, exitUsage, name+" is for reactions named here")
	}
	wantCommand(t, `generate "gamma p -> p eta" --beam "1 GeV" --bound 0`, exitUsage, "--bound 0")
}

// TestGenerateCSV holds that the file reads back as the events that the block file holds,
// but for the masses, which the hypotheses state.
func TestGenerateCSV(t *testing.T) {
	t.Parallel()
	detector, folder := write(t, "detector.yaml", detectorText), t.TempDir()
	for _, flags := range [][]string{{"--detector", detector}, nil} {
		line := []string{"generate", omegaExample, "--beam-range", "1.2 GeV:2.4 GeV", "--events", "300", "--first-event", "9"}
		csv, kgb := filepath.Join(folder, "e.csv"), filepath.Join(folder, "e.kgb")
		for _, name := range []string{csv, kgb} {
			if code, _, errs := command(t, append(append(line, flags...), "--out", name)...); code != exitWell {
				t.Fatal(errs)
			}
		}
		coordinates, want := readBlocks(t, kgb)
		file, err := os.Open(csv)
		if err != nil {
			t.Fatal(err)
		}
		reader, err := eventfile.NewReader(file)
		if err != nil {
			t.Fatal(err)
		}
		if reader.Coordinates != coordinates {
			t.Errorf("coordinates %d, want %d", reader.Coordinates, coordinates)
		}
		for i := range want {
			got, err := reader.Next()
			if err != nil {
				t.Fatal(err)
			}
			if got.ID != want[i].ID || len(got.Objects) != len(want[i].Objects) || len(got.Beam) != len(want[i].Beam) {
				t.Fatalf("event %+v, want %+v", got, want[i])
			}
			for k, o := range got.Objects {
				if w := want[i].Objects[k]; [3]float64(o.Values[:3]) != [3]float64(w.Values[:3]) || o.Class != w.Class {
					t.Errorf("object %+v, want %+v", o, w)
				}
			}
		}
		if _, err := reader.Next(); !errors.Is(err, io.EOF) {
			t.Errorf("more than %d events: %v", len(want), err)
		}
		_ = file.Close()
	}
}

func readBlocks(t *testing.T, name string) (kinegate.Coordinates, []kinegate.Measured) {
	t.Helper()
	file, err := os.Open(name)
	if err != nil {
		t.Fatal(err)
	}
	defer func() { _ = file.Close() }()
	r := bufio.NewReader(file)
	var all []kinegate.Measured
	var coordinates kinegate.Coordinates
	for {
		m := &kinegatev1.EventBlock{}
		if err := protodelim.UnmarshalFrom(r, m); errors.Is(err, io.EOF) {
			return coordinates, all
		} else if err != nil {
			t.Fatal(err)
		}
		var events []kinegate.Measured
		if coordinates, events, err = kinegate.ReadEvents(m); err != nil {
			t.Fatal(err)
		}
		all = append(all, events...)
	}
}

const etaSelection = `name: eta
hypotheses:
  - name: eta
    reaction: "gamma p -> p eta, eta -> gamma gamma"
    condition:
      window:
        invariant_mass: {products: [eta], min_gev: 0.4, max_gev: 0.7}
    record:
      - name: M
        invariant_mass: {products: [eta]}
`

// TestJudgeReadsBlocks holds that the lines and the blocks of the same events get the same
// verdicts, also one file after the other.
func TestJudgeReadsBlocks(t *testing.T) {
	t.Parallel()
	folder := t.TempDir()
	detector := write(t, "detector.yaml", detectorText)
	lines, blocks := filepath.Join(folder, "e.csv"), filepath.Join(folder, "e.kgb")
	for _, name := range []string{lines, blocks} {
		if code, _, errs := command(t, "generate", "gamma p -> p eta, eta -> gamma gamma", "--beam-range", "1.2 GeV:2.4 GeV",
			"--events", "2500", "--detector", detector, "--out", name); code != exitWell {
			t.Fatal(errs)
		}
	}
	selection := write(t, "selection.yaml", etaSelection)
	verdicts := func(files ...string) string {
		out := filepath.Join(folder, "verdicts.csv")
		if code, _, errs := command(t, append([]string{"judge", "--selection", selection, "--out", out}, files...)...); code != exitWell {
			t.Fatal(errs)
		}
		text, err := os.ReadFile(out)
		if err != nil {
			t.Fatal(err)
		}
		return string(text)
	}
	want := verdicts(lines)
	if got := verdicts(blocks); got != want || strings.Count(want, "\n") < 2500 {
		t.Errorf("the blocks get %d bytes of verdicts, the lines %d", len(got), len(want))
	}
	if n := strings.Count(verdicts(lines, blocks, lines), "\n"); n != 3*(strings.Count(want, "\n")-1)+1 {
		t.Errorf("%d lines of verdicts on three files", n)
	}
	whole, err := os.ReadFile(blocks)
	if err != nil {
		t.Fatal(err)
	}
	for _, c := range []struct {
		name, content, says string
		flags               []string
	}{
		{"cut.kgb", string(whole[:len(whole)-7]), "cut.kgb: block", nil},
		{"text.kgb", "run,event\n1,2\n", "text.kgb: block 1", nil},
		{"small.kgb", string(whole), "--block-events allows 10", []string{"--block-events", "10"}},
	} {
		path := filepath.Join(folder, c.name)
		if err := os.WriteFile(path, []byte(c.content), 0o600); err != nil {
			t.Fatal(err)
		}
		line := append([]string{"judge", "--selection", selection, path}, c.flags...)
		if code, _, errs := command(t, line...); code != exitUsage || !strings.Contains(errs, c.says) {
			t.Errorf("%s: code %d, %s", c.name, code, errs)
		}
	}
}

func TestBound(t *testing.T) {
	t.Parallel()
	generation := write(t, "generation.yaml", generationText)
	wantCommand(t, `bound "gamma p -> p pi+ pi- pi0" --beam "2 GeV" --draws 20000`, exitWell, "share kept")
	wantCommand(t, `bound --request `+generation+` --draws 1000`, exitWell, "one pion")
	wantCommand(t, `bound "gamma p -> p eta" --beam "1 GeV" --draws 100`, exitWell, "gamma p -> p eta: no bound below 1 fits; leave it out")
	wantCommand(t, `bound "gamma p -> p eta" --beam "1 GeV" --json --draws 100`, exitWell, `"largest"`)
	wantCommand(t, `bound "gamma p -> p eta" --beam "700 MeV"`, exitNo, "the channel is closed")
	wantCommand(t, `bound`, exitUsage, "--request")
	wantCommand(t, `bound "gamma p -> p eta" --beam "1 GeV" --draws 0`, exitUsage, "--draws 0")
	wantCommand(t, `generate "gamma p -> p pi+ pi- pi0" --beam "2 GeV" --bound 0.12 --events 300`, exitWell, "overflows             0")
	wantCommand(t, `generate "gamma p -> p pi+ pi- pi0" --beam "2 GeV" --bound 0.05 --events 300`, exitWell, "A bound larger by this factor has none")
	wantCommand(t, `generate --bound 0.5 --request `+generation, exitUsage, "--bound is for reactions named here")
	wantCommand(t, `generate "gamma p -> p eta" "gamma p -> p pi0" --beam "1 GeV" --bound 0.5`, exitUsage, "--bound is of one reaction")
}

// TestGenerateKeepsNoEvents holds that a CSV file of many events takes no more memory
// than one of few: they wait in a temporary file, which is gone afterwards.
func TestGenerateKeepsNoEvents(t *testing.T) {
	folder := t.TempDir()
	t.Setenv("TMPDIR", folder)
	out := filepath.Join(t.TempDir(), "e.csv")
	peak := func(events string) uint64 {
		done, most := make(chan struct{}), uint64(0)
		go func() {
			defer close(done)
			if code, _, errs := command(t, "generate", "gamma p -> p pi+ pi-", "--beam", "2 GeV", "--events", events, "--show", "0", "--out", out); code != exitWell {
				t.Error(errs)
			}
		}()
		for {
			select {
			case <-done:
				return most
			case <-time.After(5 * time.Millisecond):
				var m runtime.MemStats
				runtime.ReadMemStats(&m)
				most = max(most, m.HeapInuse)
			}
		}
	}
	few, many := peak("2000"), peak("60000")
	t.Logf("%d kB with 2,000 events, %d kB with 60,000", few>>10, many>>10)
	if many > few+24<<20 { // kept events would take 60 MB and more
		t.Errorf("%d kB with 2,000 events, %d kB with 60,000", few>>10, many>>10)
	}
	left, err := os.ReadDir(folder)
	if err != nil || len(left) > 0 {
		t.Errorf("left behind: %v, %v", left, err)
	}
}
