package main

import (
	"bytes"
	"encoding/csv"
	"encoding/hex"
	"math"
	"os"
	"path/filepath"
	"regexp"
	"strconv"
	"strings"
	"testing"

	"example.org/kinegate/proto/column"
)

// The samples of these tests: chance candidates beside the prompt one, for side bands, and
// events with weights, some of them 0 below the threshold.
const (
	chanceText = `name: chance
initial_state: {beam_on_target: {beam: {bremsstrahlung: {electron_gev: 3, min_gev: 1.2, max_gev: 2.4, complete_screening: true, channel_count: 24}}}}
channels: [{reaction: "gamma p -> p pi0, pi0 -> gamma gamma"}]
accidentals: {rate_hz: 1.0e+8, window_ns: 20}
`
	omegaSelection = `name: omegas
hypotheses:
  - name: omega
    reaction: "gamma p -> p omega, omega -> pi0 gamma, pi0 -> gamma gamma"
    measurements: [{product: p, measurement: MEASUREMENT_MISSING}]
    beam: {tagged: {}}
    extra_objects: {any: {}}
    condition: {window: {invariant_mass: {products: [omega], min_gev: 0.6, max_gev: 0.95}}}
    record: [{name: M, invariant_mass: {products: [omega]}}]
`
	withTagger    = "../../../testdata/detectors/tagger-channels.yaml"
	missingProton = "../../../testdata/selections/missing-proton.yaml"
)

// ran is what a command prints, which must go well.
func ran(t *testing.T, arguments ...string) string {
	t.Helper()
	code, out, errs := command(t, arguments...)
	if code != exitWell {
		t.Fatalf("%v: code %d, %s", arguments, code, errs)
	}
	return out
}

// csvRows reads a CSV file, each row by the names of its columns.
func csvRows(t *testing.T, name string) []map[string]string {
	t.Helper()
	file, err := os.Open(name)
	if err != nil {
		t.Fatal(err)
	}
	defer file.Close() //nolint:errcheck // only read
	reader := csv.NewReader(file)
	reader.Comment = '#'
	lines, err := reader.ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	rows := make([]map[string]string, len(lines)-1)
	for i, line := range lines[1:] {
		rows[i] = map[string]string{}
		for k, name := range lines[0] {
			rows[i][name] = line[k]
		}
	}
	return rows
}

func parsed(t *testing.T, cell string) float64 {
	t.Helper()
	x, err := strconv.ParseFloat(cell, 64)
	if err != nil {
		t.Fatal(err)
	}
	return x
}

// figures are the numbers of the first line of a text that holds a word.
func figures(t *testing.T, out, word string) []float64 {
	t.Helper()
	for line := range strings.Lines(out) {
		if _, rest, found := strings.Cut(line, word); found {
			var xs []float64
			for _, cell := range regexp.MustCompile(`-?[0-9][0-9.]*(e[-+][0-9]+)?`).FindAllString(rest, -1) {
				xs = append(xs, parsed(t, cell))
			}
			return xs
		}
	}
	t.Fatalf("no %q in\n%s", word, out)
	return nil
}

// near compares a printed figure with a sum, to the digits that are printed.
func near(t *testing.T, what string, got, want, relative float64) {
	t.Helper()
	if !(math.Abs(got-want) <= relative*math.Abs(want)) {
		t.Errorf("%s is %g, want %g", what, got, want)
	}
}

// Six and three significant digits are printed.
const sixDigits, threeDigits = 5e-6, 5e-3

// TestJudgeTakesSideBandsOff adds up what --entries writes: the summary and the histogram
// are the sums with the weights.
func TestJudgeTakesSideBandsOff(t *testing.T) {
	t.Parallel()
	folder := t.TempDir()
	sample, entries := filepath.Join(folder, "e.kgb"), filepath.Join(folder, "entries.csv")
	ran(t, "generate", "--request", write(t, "chance.yaml", chanceText), "--detector", withTagger, "--events", "800", "--show", "0", "--out", sample)
	judge := []string{"judge", "--selection", missingProton, sample}
	out := ran(t, append(judge, "--out", entries, "--entries", "all", "--histogram", "pi0/missing=0.5 GeV:1.5 GeV:1", "--histogram", "pi0/time=-4 ns:4 ns:1")...)
	var sum, squares, products, prompt float64
	count, accepted := 0, map[string]bool{}
	rejected := 0
	rows := csvRows(t, entries)
	for _, r := range rows {
		w := parsed(t, r["weight"])
		side := math.Abs(parsed(t, r["beam_time_ns"])) > 4
		if want := map[bool]float64{false: 1, true: -2. / 3}[side]; w != want || parsed(t, r["window_weight"]) != want || r["event_weight"] != "1" {
			t.Fatalf("an entry of weight %s: %v", r["weight"], r)
		}
		if r["pi0/time"] != r["beam_time_ns"] || r["hypothesis"] != "pi0" || r["beam_energy_gev"] == "" || r["objects"] == "" {
			t.Fatalf("an entry %v", r)
		}
		if r["entry_status"] != "accepted" {
			rejected++
			continue
		}
		count++
		accepted[r["event"]] = true
		sum, squares, products = sum+w, squares+w*w, products+w*parsed(t, r["pi0/missing"])
		if !side {
			prompt++
		}
	}
	if rejected == 0 || count < len(accepted)+100 {
		t.Fatalf("%d rejected entries, %d accepted of %d events: too few to tell", rejected, count, len(accepted))
	}
	row := figures(t, out, "\n  pi0 "[1:])
	near(t, "accepted", row[0], float64(len(accepted)), 0)
	near(t, "weighted", row[2], sum, sixDigits)
	near(t, "its error", row[3], math.Sqrt(squares), threeDigits)
	row = figures(t, out, "  pi0/missing ")
	near(t, "entries", row[0], float64(count), 0)
	near(t, "the mean", row[1], products/sum, sixDigits)
	bars := out[strings.Index(out, "pi0/missing: accepted entries with their weights, so that side bands are taken off"):]
	row = figures(t, bars, "# ")
	near(t, "the histogram", row[0], sum, threeDigits)
	near(t, "its error", row[1], math.Sqrt(squares), 5e-2)
	bars = out[strings.Index(out, "pi0/time: "):] // the axis is in the unit that was asked for
	near(t, "the prompt bin", figures(t, bars, "# ")[0], prompt, threeDigits)

	// Entries that were accepted alone, and the same columns in Parquet.
	ran(t, append(judge, "--out", entries, "--entries", "accepted")...)
	if got := len(csvRows(t, entries)); got != count {
		t.Errorf("%d accepted entries, want %d", got, count)
	}
	rows = csvRows(t, entries)
	table := filepath.Join(folder, "entries.parquet")
	ran(t, append(judge, "--out", table, "--entries", "accepted")...)
	wantColumns(t, table, rows, "weight", "pi0/missing", "beam_time_ns")
	verdicts := filepath.Join(folder, "verdicts.csv")
	ran(t, append(judge, "--out", verdicts)...)
	table = filepath.Join(folder, "verdicts.parquet")
	ran(t, append(judge, "--out", table)...)
	wantColumns(t, table, csvRows(t, verdicts), "weight", "pi0/missing")
}

// wantColumns holds that a Parquet file, whose values are plain, has columns of a CSV file.
func wantColumns(t *testing.T, name string, rows []map[string]string, columns ...string) {
	t.Helper()
	raw, err := os.ReadFile(name)
	if err != nil {
		t.Fatal(err)
	}
	for _, c := range columns {
		xs := make([]float64, len(rows))
		for i, r := range rows {
			xs[i] = math.NaN()
			if r[c] != "" {
				xs[i] = parsed(t, r[c])
			}
		}
		if want := column.Float64(xs); !bytes.Contains(raw, want) {
			t.Errorf("%s: no column %s that begins %s", name, c, hex.EncodeToString(want[:16]))
		}
	}
}

// TestJudgeWeighsSimulatedEvents: the weights of simulated events, those of overflows and of
// empty events included, count in sums, means and shares, by whatever file they come.
func TestJudgeWeighsSimulatedEvents(t *testing.T) {
	t.Parallel()
	selection := write(t, "omegas.yaml", omegaSelection)
	for name, flags := range map[string][]string{
		"weighted":  {"--weighted", "--beam-range", "0.1 GeV:2.4 GeV"},
		"overflows": {"--bound", "0.2", "--beam-range", "1.0 GeV:2.4 GeV"},
		"plain":     {"--beam-range", "1.2 GeV:2.4 GeV"},
	} {
		t.Run(name, func(t *testing.T) {
			t.Parallel()
			folder := t.TempDir()
			var summaries []string
			for _, extension := range []string{".csv", ".kgb"} {
				sample := filepath.Join(folder, "e"+extension)
				ran(t, append([]string{"generate", omegaExample, "--detector", withTagger, "--events", "1200", "--show", "0", "--out", sample}, flags...)...)
				out := ran(t, "judge", "--selection", selection, sample, "--out", filepath.Join(folder, "v"+extension+".csv"))
				summaries = append(summaries, out[strings.Index(out, "the gate accepts"):strings.Index(out, "rows written")])
			}
			weights := csvRows(t, filepath.Join(folder, "e.csv"))
			verdicts := csvRows(t, filepath.Join(folder, "v.kgb.csv"))
			var all, empty, sum, squares, products float64
			for i, v := range verdicts {
				w := parsed(t, weights[i]["weight"])
				if parsed(t, v["weight"]) != w || v["event"] != weights[i]["event"] {
					t.Fatalf("event %d has the weight %s, and %s in the other file", i, v["weight"], weights[i]["weight"])
				}
				all += w
				if w == 0 {
					empty++
				}
				if v["omega"] == "1" {
					sum, squares, products = sum+w, squares+w*w, products+w*parsed(t, v["omega/M"])
				}
			}
			plain := name == "plain"
			for i, out := range summaries {
				row := figures(t, out, "  omega ")
				near(t, "share", row[1]/100, sum/all, threeDigits)
				near(t, "weighted", row[2], sum, sixDigits)
				near(t, "its error", row[3], math.Sqrt(squares), threeDigits)
				near(t, "the mean", figures(t, out, "  omega/M ")[1], products/sum, sixDigits)
				stated := strings.Contains(out, "the files state weights")
				if stated != (!plain || i == 0) { // a .kgb file leaves weights of 1 out
					t.Errorf("weights are stated: %v in\n%s", stated, out)
				}
				if stated {
					row = figures(t, out, "the files state weights: ")
					near(t, "the sum", row[0], all, sixDigits)
					near(t, "that of the gate", row[2], sum, sixDigits)
					near(t, "the number of empty events", row[5], empty, 0)
				}
			}
			if plain != (sum == math.Trunc(sum)) || name == "weighted" != (empty > 0) {
				t.Errorf("the weights add up to %g, %g events are empty", sum, empty)
			}
		})
	}
}

// TestWeightsMustBeNumbers: a weight that cannot be added up is refused with its place.
func TestWeightsMustBeNumbers(t *testing.T) {
	t.Parallel()
	selection := write(t, "omegas.yaml", omegaSelection)
	for _, cell := range []string{"", "heavy", "NaN", "Inf"} {
		file := write(t, "e.csv", "event,weight,class1,p1,theta1,phi1\n1,2.5,photon,1,1,1\n2,"+cell+",photon,1,1,1\n")
		code, _, errs := command(t, "judge", "--selection", selection, file)
		if code != exitUsage || !strings.Contains(errs, "line 3: column weight: ") {
			t.Errorf("weight %q: code %d, %s", cell, code, errs)
		}
	}
	for flags, says := range map[string]string{
		"--entries all": "give one of them", "--entries some --json": "accepted or all", "--out v.txt": "end in .csv or .parquet",
	} {
		wantCommand(t, "judge --selection "+selection+" "+pionsEvents+" "+flags, exitUsage, says)
	}
}
