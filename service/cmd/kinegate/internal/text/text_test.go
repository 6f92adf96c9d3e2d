package text_test

import (
	"math"
	"strconv"
	"strings"
	"testing"

	"example.org/kinegate/service/cmd/kinegate/internal/text"
)

func TestTable(t *testing.T) {
	t.Parallel()
	table := text.NewTable("name", ">mass")
	table.Row("p", "938.272 MeV")
	table.Row("pi0", "134.977 MeV", "dropped")
	table.Row("X")
	var b strings.Builder
	if err := table.Write(&b); err != nil {
		t.Fatal(err)
	}
	want := "  name         mass\n  ----  -----------\n  p     938.272 MeV\n  pi0   134.977 MeV\n  X\n"
	if b.String() != want {
		t.Errorf("got\n%swant\n%s", b.String(), want)
	}
}

func TestHistogram(t *testing.T) {
	t.Parallel()
	h := text.NewHistogram(2, 0, 1)
	for _, x := range []float64{-0.1, 0, 0.4999, 0.5, 1, math.NaN(), math.Inf(1)} {
		h.Add(x, 1)
	}
	if h.Counts[0] != 2 || h.Counts[1] != 1 || h.Under != 1 || h.Over != 2 || h.NaN != 1 {
		t.Errorf("%+v", h)
	}
	var b strings.Builder
	if err := h.Write(&b, "x", func(x float64) string { return strconv.FormatFloat(x, 'f', 1, 64) }); err != nil {
		t.Fatal(err)
	}
	if !strings.Contains(b.String(), "0.5 |"+strings.Repeat("#", 24)+" ") || !strings.Contains(b.String(), "not computed 1") {
		t.Errorf("got\n%s", b.String())
	}
}

// TestWeightedHistogram: weights that are not 1 show their sums with the roots of the sums of
// their squares, a sum below zero too, which has no bar.
func TestWeightedHistogram(t *testing.T) {
	t.Parallel()
	h := text.NewHistogram(3, 0, 3)
	for _, c := range [][2]float64{{0.5, 3}, {0.5, 4}, {1.5, -0.25}, {9, 0.125}} {
		h.Add(c[0], c[1])
	}
	var b strings.Builder
	if err := h.Write(&b, "x", func(x float64) string { return strconv.FormatFloat(x, 'f', 1, 64) }); err != nil {
		t.Fatal(err)
	}
	blank := strings.Repeat(" ", 48)
	for _, line := range []string{
		"  0.0 |" + strings.Repeat("#", 48) + " 7 +- 5\n", "  1.0 |" + blank + " -0.25 +- 0.25\n", "  2.0 |" + blank + " 0\n", "above 0.125,",
	} {
		if !strings.Contains(b.String(), line) {
			t.Errorf("no line %q in\n%s", line, b.String())
		}
	}
}
