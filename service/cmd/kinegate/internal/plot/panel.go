package plot

import (
	"fmt"
	"image/color"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// plot makes the panel.
func (p *Panel) plot() (*plot.Plot, error) {
	g := plot.New()
	g.BackgroundColor = nil
	p.prepare(&g.X, &p.X)
	p.prepare(&g.Y, &p.Y)
	net := plotter.NewGrid()
	for _, l := range []*draw.LineStyle{&net.Vertical, &net.Horizontal} {
		*l = draw.LineStyle{Color: color.Gray{Y: 232}, Width: vg.Points(0.6)}
	}
	g.Add(net)
	for i := range p.Curves {
		if err := p.addCurve(g, &p.Curves[i]); err != nil {
			return nil, err
		}
	}
	p.key(g)
	for _, x := range p.Points {
		g.X.Min, g.X.Max = min(g.X.Min, x.X), max(g.X.Max, x.X)
		g.Y.Min, g.Y.Max = min(g.Y.Min, x.Y), max(g.Y.Max, x.Y)
	}
	g.Add(notes{p})
	p.limit(&g.X, &p.X)
	p.limit(&g.Y, &p.Y)
	return g, nil
}

// labels names the axes around the area of the data: Y above its left end, where it
// reads without turning the head, X below the middle.
func (p *Panel) labels(whole, data draw.Canvas) {
	style := letters(medium)
	style.YAlign = text.YTop
	data.FillText(style, vg.Point{X: whole.Min.X, Y: data.Max.Y + headHeight - vg.Points(2)}, p.Y.Label)
	style.XAlign = text.XRight
	data.FillText(style, vg.Point{X: data.Max.X, Y: data.Max.Y + headHeight - vg.Points(2)}, p.Note)
	style.XAlign = text.XCenter
	data.FillText(style, vg.Point{X: data.Center().X, Y: whole.Min.Y - vg.Points(4)}, p.X.Label)
}

// prepare gives an axis its scale and letters. Its label is left to labels.
func (p *Panel) prepare(g *plot.Axis, a *Axis) {
	tick := letters(small)
	tick.XAlign, tick.YAlign = g.Tick.Label.XAlign, g.Tick.Label.YAlign
	g.Tick.Label = tick
	g.Tick.Length = vg.Points(5)
	g.Tick.Marker = ticks{a}
	g.Padding = 0
	if a.Log {
		g.Scale = plot.LogScale{}
	}
	if a.Bare {
		g.Tick.Marker = plot.ConstantTicks(nil)
	}
}

// limit sets the ends of an axis, once everything that is drawn has been added. Ends
// that come from the data get a little room on linear axes.
func (*Panel) limit(g *plot.Axis, a *Axis) {
	if a.Min != 0 || a.Max != 0 {
		g.Min, g.Max = a.Min, a.Max
		return
	}
	if g.Min == g.Max {
		g.Min, g.Max = g.Min-1, g.Max+1
		if a.Log {
			g.Min, g.Max = (g.Max-1)/2, (g.Max-1)*2
		}
	}
	if !a.Log {
		if g.Min > 0 && g.Min < g.Max/2 {
			g.Min = 0
		}
		room := (g.Max - g.Min) / 25
		if g.Min != 0 {
			g.Min -= room
		}
		if g.Max != 0 {
			g.Max += room
		}
	}
}

// addCurve draws a curve.
func (p *Panel) addCurve(g *plot.Plot, c *Curve) error {
	for _, part := range c.parts(p.X.Log, p.Y.Log) {
		l, err := plotter.NewLine(part)
		if err != nil {
			return fmt.Errorf("curve %q: %w", c.Name, err)
		}
		l.LineStyle = c.Stroke.line(c.Heavy)
		g.Add(l)
	}
	return nil
}

// key names the curves.
func (p *Panel) key(g *plot.Plot) {
	g.Legend.TextStyle = letters(small)
	g.Legend.TextStyle.YAlign = text.YBottom
	g.Legend.ThumbnailWidth = 0.45 * vg.Inch
	g.Legend.Padding = vg.Points(3)
	g.Legend.Top = p.Key == TopRight || p.Key == TopLeft
	g.Legend.Left = p.Key == TopLeft || p.Key == BottomLeft
	g.Legend.XOffs, g.Legend.YOffs = vg.Points(-8), vg.Points(-8)
	if g.Legend.Left {
		g.Legend.XOffs = -g.Legend.XOffs
	}
	if !g.Legend.Top {
		g.Legend.YOffs = -g.Legend.YOffs
	}
	for i := range p.Curves {
		c := &p.Curves[i]
		if c.Name != "" {
			g.Legend.Add(c.Name, &plotter.Line{LineStyle: c.Stroke.line(c.Heavy)})
		}
	}
}

// notes draws rulers and points with their texts.
type notes struct{ panel *Panel }

// Plot draws them.
func (n notes) Plot(c draw.Canvas, g *plot.Plot) {
	toX, toY := g.Transforms(&c)
	for _, r := range n.panel.Rulers {
		n.ruler(c, g, r)
	}
	for _, x := range n.panel.Points {
		if x.X < g.X.Min || x.X > g.X.Max || x.Y < g.Y.Min || x.Y > g.Y.Max {
			continue
		}
		n.point(c, x, vg.Point{X: toX(x.X), Y: toY(x.Y)})
	}
}

// point draws one point with its text.
func (n notes) point(c draw.Canvas, x Point, at vg.Point) {
	const radius = vg.Length(3.6)
	gap := 2 * radius
	switch {
	case x.Unmarked:
		gap = 0
	case x.Hollow:
		c.DrawGlyphNoClip(draw.GlyphStyle{Color: color.White, Radius: radius, Shape: draw.CircleGlyph{}}, at)
		ring := draw.LineStyle{Color: color.Black, Width: vg.Points(1.4)}
		var path vg.Path
		path.Move(vg.Point{X: at.X + radius, Y: at.Y})
		path.Arc(at, radius, 0, turn)
		c.SetLineStyle(ring)
		c.Stroke(path)
	default:
		c.DrawGlyphNoClip(draw.GlyphStyle{Color: color.Black, Radius: radius, Shape: draw.CircleGlyph{}}, at)
	}
	style := letters(small)
	if width := style.Width(x.Text) + gap; x.Side == Left && at.X-width < c.Min.X {
		x.Side = Right // there is no room
	} else if x.Side == Right && at.X+width > c.Max.X {
		x.Side = Left
	}
	switch x.Side {
	case Right:
		at.X += gap
	case Left:
		style.XAlign = text.XRight
		at.X -= gap
	case Above:
		style.XAlign, style.YAlign = text.XCenter, text.YBottom
		at.Y += gap
	case Middle:
		style.XAlign = text.XCenter
	case Below:
		style.XAlign, style.YAlign = text.XCenter, text.YTop
		at.Y -= gap
	}
	// White behind the letters keeps them readable across lines.
	if box := style.Rectangle(x.Text); x.Text != "" {
		c.SetColor(color.White)
		c.Fill(box.Add(at).Path())
	}
	c.FillText(style, at, x.Text)
}

// turn is a full circle.
const turn = 6.283185307179586

// ruler draws one ruler.
func (n notes) ruler(c draw.Canvas, g *plot.Plot, r Ruler) {
	toX, toY := g.Transforms(&c)
	style := letters(small)
	style.YAlign = text.YBottom
	line := draw.LineStyle{Color: color.Gray{Y: 110}, Width: vg.Points(0.8), Dashes: []vg.Length{vg.Points(3), vg.Points(2)}}
	if r.Level {
		if r.At <= g.Y.Min || r.At >= g.Y.Max {
			return
		}
		y := toY(r.At)
		c.StrokeLine2(line, c.Min.X, y, c.Max.X, y)
		style.XAlign = text.XRight
		c.FillText(style, vg.Point{X: c.Max.X - vg.Points(6), Y: y + vg.Points(2)}, r.Text)
		return
	}
	if r.At <= g.X.Min || r.At >= g.X.Max {
		return
	}
	x := toX(r.At)
	c.StrokeLine2(line, x, c.Min.Y, x, c.Max.Y)
	half := style.Width(r.Text) / 2
	style.XAlign = text.XCenter
	c.FillText(style, vg.Point{X: min(max(x, c.Min.X+half), c.Max.X-half), Y: c.Max.Y + vg.Points(2)}, r.Text)
}
