// Package plot draws the pictures of the commands: one or two panels of curves with
// named axes, in black on white, told apart by their line and by their weight, as SVG
// or PNG.
package plot

import (
	"bytes"
	"fmt"
	"image/color"
	"io"
	"math"
	"os"
	"path/filepath"
	"strings"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
	"gonum.org/v1/plot/vg/vgimg"
	"gonum.org/v1/plot/vg/vgsvg"
)

// Picture is panels side by side below a title.
type Picture struct {
	// Title says what is shown.
	Title string
	// Panels from left to right.
	Panels []Panel
}

// Panel is one pair of axes with what is drawn on them.
type Panel struct {
	// X and Y are the axes.
	X, Y Axis
	// Curves, in the order of the key.
	Curves []Curve
	// Points are single places with a text beside them.
	Points []Point
	// Rulers are straight lines across the panel with a text along them.
	Rulers []Ruler
	// Note stands above the right end.
	Note string
	// Key says where the names of the curves stand; panels of one curve without a
	// name have none.
	Key Corner
	// Higher makes the panel as much higher than usual, 0 as 1.
	Higher float64
}

// Axis is one axis.
type Axis struct {
	// Label names the quantity and its unit.
	Label string
	// Log makes the axis logarithmic.
	Log bool
	// Min and Max are the ends; both 0 takes them from the curves and points, and
	// starts a linear axis at 0 where 0 is near enough.
	Min, Max float64
	// Step is the distance of ticks on a linear axis; 0 chooses one.
	Step float64
	// Tick writes the value at a tick; nil writes the plain number.
	Tick func(float64) string
	// Bare leaves out ticks and their labels.
	Bare bool
}

// Stroke is how a curve is drawn.
type Stroke int

// The strokes, which a copy in grey keeps apart.
const (
	Solid Stroke = iota
	Dashed
	Dotted
	DashDotted
)

// Curve is a line through points; a number that is not finite interrupts it.
type Curve struct {
	// Name stands in the key; empty is not listed.
	Name string
	// X and Y are the points, as many of each.
	X, Y []float64
	// Stroke and Heavy say how it is drawn.
	Stroke Stroke
	Heavy  bool
}

// Point is a single place.
type Point struct {
	X, Y float64
	// Text stands on one side of the point.
	Text string
	Side Side
	// Hollow draws a ring in place of a disc.
	Hollow bool
	// Unmarked draws the text alone.
	Unmarked bool
}

// Side is a side of a point.
type Side int

// The sides.
const (
	Right Side = iota
	Left
	Above
	Below
	Middle // on the point
)

// Ruler is a thin straight line across the panel at one value.
type Ruler struct {
	// At is the value, on X, or on Y if Level is set.
	At    float64
	Level bool
	// Text stands above the upper end, or on the right end of a level ruler.
	Text string
}

// Corner is a corner of a panel.
type Corner int

// The corners.
const (
	TopRight Corner = iota
	TopLeft
	BottomLeft
	BottomRight
)

// Sizes of the paper.
const (
	panelWidth, panelHeight = 5.4 * vg.Inch, 4.1 * vg.Inch
	margin                  = 0.14 * vg.Inch
	titleHeight             = 0.36 * vg.Inch
	headHeight              = 0.46 * vg.Inch // the label of Y and the texts of rulers
	footHeight              = 0.24 * vg.Inch // the label of X
	dotsPerInch             = 110
	small, medium, large    = vg.Length(10), vg.Length(11.5), vg.Length(13)
)

// Check refuses a name that no picture can have, before any work is done for it.
func Check(name string) error {
	switch extension(name) {
	case ".svg", ".png":
		return nil
	}
	return fmt.Errorf("picture %q: the name must end in .svg or .png", name)
}

func extension(name string) string { return strings.ToLower(filepath.Ext(name)) }

// Save writes the picture in the form that the extension of the name says.
func (p *Picture) Save(name string) error {
	if err := Check(name); err != nil {
		return err
	}
	file, err := os.Create(name)
	if err != nil {
		return err
	}
	if err := p.Write(file, extension(name)); err != nil {
		_ = file.Close()
		return err
	}
	return file.Close()
}

// Write writes the picture as ".svg" or ".png".
func (p *Picture) Write(w io.Writer, extension string) error {
	height := panelHeight + titleHeight
	for i := range p.Panels {
		height = max(height, panelHeight*vg.Length(p.Panels[i].Higher)+titleHeight)
	}
	width := panelWidth * vg.Length(len(p.Panels))
	var sheet interface {
		vg.CanvasSizer
		io.WriterTo
	}
	if extension == ".png" {
		sheet = vgimg.PngCanvas{Canvas: vgimg.NewWith(vgimg.UseWH(width, height), vgimg.UseDPI(dotsPerInch))}
	} else {
		sheet = vgsvg.New(width, height)
	}
	if err := p.draw(draw.New(sheet)); err != nil {
		return err
	}
	if extension == ".png" {
		_, err := sheet.WriteTo(w)
		return err
	}
	var picture bytes.Buffer
	if _, err := sheet.WriteTo(&picture); err != nil {
		return err
	}
	// Letters of the same widths where the first are not installed.
	_, err := w.Write(bytes.ReplaceAll(picture.Bytes(), []byte("font-family:Liberation Sans;"),
		[]byte("font-family:Liberation Sans,Arial,Helvetica,sans-serif;")))
	return err
}

func (p *Picture) draw(c draw.Canvas) error {
	paper := c.Path()
	c.SetColor(color.White)
	c.Fill(paper)
	row := make([]*plot.Plot, len(p.Panels))
	for i := range p.Panels {
		var err error
		if row[i], err = p.Panels[i].plot(); err != nil {
			return err
		}
	}
	inner := draw.Crop(c, margin, -margin, margin+footHeight, -titleHeight-headHeight)
	tiles := draw.Tiles{Rows: 1, Cols: len(row), PadX: 0.35 * vg.Inch}
	for i, at := range plot.Align([][]*plot.Plot{row}, tiles, inner)[0] {
		row[i].Draw(at)
		p.Panels[i].labels(at, row[i].DataCanvas(at))
	}
	style := letters(large)
	style.YAlign = text.YTop
	c.FillText(style, vg.Point{X: c.Min.X + margin, Y: c.Max.Y - 0.12*vg.Inch}, p.Title)
	return nil
}

// letters is upright text of a size.
func letters(size vg.Length) text.Style {
	face := font.Font{Typeface: "Liberation", Variant: "Sans", Size: size}
	return text.Style{Color: color.Black, Font: face, Handler: plot.DefaultTextHandler, XAlign: text.XLeft, YAlign: text.YCenter}
}

// line is the style of a stroke.
func (s Stroke) line(heavy bool) draw.LineStyle {
	width := vg.Points(1.1)
	if heavy {
		width = vg.Points(2)
	}
	dashes := map[Stroke][]vg.Length{
		Dashed: {vg.Points(7), vg.Points(3.5)}, Dotted: {vg.Points(1.6), vg.Points(2.6)},
		DashDotted: {vg.Points(8), vg.Points(3), vg.Points(1.6), vg.Points(3)},
	}
	return draw.LineStyle{Color: color.Black, Width: width, Dashes: dashes[s]}
}

// parts cuts a curve where a number is not finite, or not above 0 on a logarithmic axis.
func (c *Curve) parts(logX, logY bool) []plotter.XYs {
	var list []plotter.XYs
	var open plotter.XYs
	for i := range c.X {
		x, y := c.X[i], c.Y[i]
		if usable(x, logX) && usable(y, logY) {
			open = append(open, plotter.XY{X: x, Y: y})
			continue
		}
		list, open = keep(list, open), nil
	}
	return keep(list, open)
}

func keep(list []plotter.XYs, part plotter.XYs) []plotter.XYs {
	if len(part) == 0 {
		return list
	}
	return append(list, part)
}

func usable(x float64, logarithmic bool) bool {
	return !math.IsNaN(x) && !math.IsInf(x, 0) && (!logarithmic || x > 0)
}
