package selection_test

import (
	"encoding/csv"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"testing"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/selection"
)

// The masses that the experiment printed beside its measured momenta (see
// testdata/open/README.md) are recomputed through the judge from (px, py, pz) and the
// table masses of the leptons.

// measured is one file of measured events as a block, with its printed columns.
type measured struct {
	block *event.Block
	text  []map[string]string
}

// number is a printed column of event i.
func (m *measured) number(t *testing.T, i int, column string) float64 {
	t.Helper()
	x, err := strconv.ParseFloat(m.text[i][column], 64)
	if err != nil {
		t.Fatal(err)
	}
	return x
}

// open reads a file of n leptons an event; the species come from the particle number
// where the file has one and are muons otherwise.
func open(t *testing.T, name string, n int) *measured {
	t.Helper()
	file, err := os.Open(filepath.Join("..", "..", "testdata", "open", name))
	if err != nil {
		t.Fatal(err)
	}
	defer func() { _ = file.Close() }()
	lines, err := csv.NewReader(file).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	m := &measured{block: &event.Block{ObjectOffsets: []int32{0}, Species: &event.Mask{}}}
	m.block.Coordinates.Kind = event.MomentumMass
	for i, line := range lines[1:] {
		row := map[string]string{}
		for k, column := range lines[0] {
			row[column] = line[k]
		}
		m.text = append(m.text, row)
		m.block.EventIDs = append(m.block.EventIDs, int64(i))
		for k := 1; k <= n; k++ {
			at := strconv.Itoa(k)
			class, species := event.Positive, event.SpeciesMuon
			if row["Q"+at] == "-1" {
				class = event.Negative
			}
			if pid := row["PID"+at]; pid == "11" || pid == "-11" {
				species = event.SpeciesElectron
			}
			m.block.Class = append(m.block.Class, class)
			m.block.Species.Bits = append(m.block.Species.Bits, species)
			for c, column := range []string{"px", "py", "pz"} {
				m.block.Coordinates.Columns[c] = append(m.block.Coordinates.Columns[c], m.number(t, i, column+at))
			}
			m.block.Coordinates.Columns[3] = append(m.block.Coordinates.Columns[3], 0)
		}
		m.block.ObjectOffsets = append(m.block.ObjectOffsets, int32(len(m.block.Class)))
	}
	return m
}

// worst keeps the largest relative difference.
func worst(figure *float64, got, printed float64) {
	*figure = max(*figure, math.Abs(got-printed)/printed)
}

func TestOpenDimuons(t *testing.T) {
	m := open(t, "dimuon_2011A.csv", 2)
	h := selection.Hypothesis{Reaction: "-> mu+ mu-", ExtraObjects: anything(), Record: []selection.Window{
		{Observable: selection.InvariantMass, Products: []string{"mu+", "mu-"}},
	}}
	same := func(reaction, a, b string) selection.Hypothesis {
		h := h
		h.Reaction = reaction
		h.Record = []selection.Window{{Observable: selection.InvariantMass, Products: []string{a, b}}}
		return h
	}
	p := compile(t, h, same("-> mu+ mu+", "mu+[0]", "mu+[1]"), same("-> mu- mu-", "mu-[0]", "mu-[1]"))
	figure, judged := 0.0, 0
	out := judge(t, p, m.block, selection.AcceptedEntries)
	for i := range m.block.Events() {
		for k := out.Entries.Offsets[i]; k < out.Entries.Offsets[i+1]; k++ {
			worst(&figure, out.Entries.Row(int(k)).Observables[0], m.number(t, i, "M"))
			judged++
		}
	}
	t.Logf("%d dimuon masses, worst relative difference %.1e", judged, figure)
	if judged != m.block.Events() || figure > 1e-4 {
		t.Errorf("%d of %d events judged, worst %v", judged, m.block.Events(), figure)
	}
}

// TestOpenFourLeptons uses the pairing rule of the files: mZ1 is the mass of the pair of
// opposite charge and same flavour nearest the Z mass, mZ2 that of the other pair. The
// ranking by the mass of the first pair alone tells the pairs apart.
func TestOpenFourLeptons(t *testing.T) {
	electrons, muons := "Z0 -> e+ e-", "Z0 -> mu+ mu-"
	nearest := func(reaction string) selection.Hypothesis {
		return selection.Hypothesis{
			Reaction: reaction, Ranking: closest("Z0[0]"),
			Record: []selection.Window{
				{Observable: selection.InvariantMass, Products: []string{"Z0[0]"}},
				{Observable: selection.InvariantMass, Products: []string{"Z0[1]"}},
				{Observable: selection.InvariantMass, Products: []string{"Z0[0]", "Z0[1]"}},
			},
		}
	}
	// Two Z of different decays, each of which may be the first: the structured form.
	mixed := func(first, second string) selection.Hypothesis {
		h := nearest("")
		h.Structured = &selection.Reaction{Products: []selection.Product{
			{Particle: "Z0", Daughters: []selection.Product{{Particle: first + "+"}, {Particle: first + "-"}}},
			{Particle: "Z0", Daughters: []selection.Product{{Particle: second + "+"}, {Particle: second + "-"}}},
		}}
		return h
	}
	for _, c := range []struct {
		file       string
		hypotheses []selection.Hypothesis
		events     int
	}{
		{"4e_2011.csv", []selection.Hypothesis{nearest("-> Z0 Z0, " + electrons)}, 7},
		{"4mu_2011.csv", []selection.Hypothesis{nearest("-> Z0 Z0, " + muons)}, 18},
		{"2e2mu_2011.csv", []selection.Hypothesis{mixed("e", "mu"), mixed("mu", "e")}, 13},
	} {
		t.Run(c.file, func(t *testing.T) {
			m := open(t, c.file, 4)
			s := selection.Selection{Hypotheses: c.hypotheses}
			if len(c.hypotheses) > 1 {
				s.Groups = []selection.Group{{Name: "best", Hypotheses: []string{"h00", "h01"}}}
			}
			out := judge(t, compileAll(t, s), m.block, selection.AcceptedEntries)
			var figures [3]float64
			judged := 0
			for i := range m.block.Events() {
				best := int16(0)
				if len(out.Best) > 0 {
					best = out.Best[0][i]
				}
				for k := out.Entries.Offsets[i]; k < out.Entries.Offsets[i+1]; k++ {
					e := out.Entries.Row(int(k))
					if e.Hypothesis != best {
						continue
					}
					judged++
					for x, column := range []string{"mZ1", "mZ2", "M"} {
						worst(&figures[x], e.Observables[x], m.number(t, i, column))
					}
				}
			}
			t.Logf("%d events, worst relative difference of mZ1 %.1e, mZ2 %.1e, M %.1e", judged, figures[0], figures[1], figures[2])
			if judged != c.events || max(figures[0], figures[1], figures[2]) > 1e-4 {
				t.Errorf("%d of %d events judged, worst %v", judged, c.events, figures)
			}
		})
	}
}
