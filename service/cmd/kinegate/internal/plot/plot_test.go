package plot_test

import (
	"bytes"
	"image/png"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"example.org/kinegate/service/cmd/kinegate/internal/plot"
)

// sample has everything that a panel can hold, and numbers that cannot be drawn.
func sample() *plot.Picture {
	nan := math.NaN()
	return &plot.Picture{Title: "a title", Panels: []plot.Panel{
		{
			X: plot.Axis{Label: "across"}, Y: plot.Axis{Label: "upwards", Log: true, Tick: func(float64) string { return "tick" }},
			Curves: []plot.Curve{
				{Name: "broken", X: []float64{1, 2, 3, 4, 5}, Y: []float64{1, nan, 0, 1e3, 1e4}, Heavy: true},
				{Name: "dotted", X: []float64{1, 2}, Y: []float64{10, math.Inf(1)}, Stroke: plot.Dotted},
			},
			Points: []plot.Point{{X: 2, Y: 100, Text: "ring", Hollow: true}, {X: 5, Y: 100, Text: "a long text at the end"}},
			Rulers: []plot.Ruler{{At: 3, Text: "upright"}, {At: 20, Level: true, Text: "level"}},
		},
		{X: plot.Axis{Label: "one", Min: -1, Max: 1}, Curves: []plot.Curve{{X: []float64{0}, Y: []float64{7}}}, Key: plot.BottomLeft, Note: "noted"},
	}}
}

func TestWritePNG(t *testing.T) {
	t.Parallel()
	var b bytes.Buffer
	if err := sample().Write(&b, ".png"); err != nil {
		t.Fatal(err)
	}
	picture, err := png.Decode(&b)
	if err != nil {
		t.Fatal(err)
	}
	if size := picture.Bounds().Size(); size.X < 1000 || size.Y < 400 {
		t.Errorf("size %v", size)
	}
	// Black on white: nothing has a colour, so that a grey copy says the same.
	dark := 0
	for y := range picture.Bounds().Dy() {
		for x := range picture.Bounds().Dx() {
			r, g, b, _ := picture.At(x, y).RGBA()
			if r != g || g != b {
				t.Fatalf("colour at %d, %d", x, y)
			}
			if r < 0x4000 {
				dark++
			}
		}
	}
	if dark < 1000 {
		t.Errorf("%d dark dots: nothing is drawn", dark)
	}
}

func TestWriteSVGHoldsEveryText(t *testing.T) {
	t.Parallel()
	var b bytes.Buffer
	if err := sample().Write(&b, ".svg"); err != nil {
		t.Fatal(err)
	}
	for _, text := range []string{
		"a title", "across", "upwards", "tick", "broken", "dotted", "ring", "a long text", "upright", "level", "one", "noted", "stroke-dasharray", "Arial",
	} {
		if !strings.Contains(b.String(), text) {
			t.Errorf("%q is missing", text)
		}
	}
}

func TestSave(t *testing.T) {
	t.Parallel()
	for _, name := range []string{"a.pdf", "a", ".hidden/a"} {
		if err := sample().Save(name); err == nil || !strings.Contains(err.Error(), ".svg or .png") {
			t.Errorf("%s: %v", name, err)
		}
	}
	name := filepath.Join(t.TempDir(), "a.SVG")
	if err := sample().Save(name); err != nil {
		t.Fatal(err)
	}
	if text, err := os.ReadFile(name); err != nil || !strings.HasPrefix(string(text), "<?xml") {
		t.Errorf("%.20s %v", text, err)
	}
	if err := sample().Save(filepath.Join(t.TempDir(), "none", "a.png")); err == nil {
		t.Error("a picture went into a folder that is not there")
	}
}
