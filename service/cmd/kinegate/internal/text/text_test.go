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
