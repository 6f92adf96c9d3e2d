package main

import (
	"math"

	"example.org/kinegate/proto/column"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/cmd/kinegate/internal/plot"
)

// dalitzPicture is the boundaries in two of the pairs' masses squared, and the bands.
func dalitzPicture(r *kinegatev1.TraceDalitzBoundaryResponse, bands []string) (*plot.Picture, error) {
	name := r.GetProducts()
	panel := plot.Panel{
		X: plot.Axis{Label: "mass squared of " + name[0] + " " + name[1] + " (GeV^2)"},
		Y: plot.Axis{Label: "mass squared of " + name[1] + " " + name[2] + " (GeV^2)"},
	}
	for _, b := range r.GetBoundaries() {
		x, err := column.Float64s(b.GetFirstSecondGev2())
		if err != nil {
			return nil, err
		}
		y, err := column.Float64s(b.GetSecondThirdGev2())
		if err != nil {
			return nil, err
		}
		if len(x) == 0 || len(x) != len(y) {
			continue
		}
		closed := plot.Curve{X: append(x, x[0]), Y: append(y, y[0]), Stroke: plot.Stroke(len(panel.Curves) % strokes), Heavy: true}
		if len(r.GetBoundaries()) > 1 {
			closed.Name = "sqrt(s) " + shortEnergy(b.GetSqrtSGev())
		} else {
			panel.Note = "sqrt(s) " + shortEnergy(b.GetSqrtSGev())
		}
		panel.Curves = append(panel.Curves, closed)
	}
	if len(panel.Curves) == 0 {
		return nil, badInput("--plot: the channel is closed at every energy; there is nothing to draw")
	}
	// The bands at the largest region, so that their names do not lie over each other.
	widest := r.GetBoundaries()[0]
	for _, b := range r.GetBoundaries() {
		if b.GetSqrtSGev() > widest.GetSqrtSGev() {
			widest = b
		}
	}
	for i, band := range widest.GetBands() {
		if !band.GetInside() {
			continue
		}
		from, to := band.GetStart(), band.GetEnd()
		panel.Curves = append(panel.Curves, plot.Curve{
			X:      []float64{from.GetFirstSecondGev2(), to.GetFirstSecondGev2()},
			Y:      []float64{from.GetSecondThirdGev2(), to.GetSecondThirdGev2()},
			Stroke: plot.DashDotted,
		})
		side := plot.Middle
		if math.Abs(from.GetSecondThirdGev2()-to.GetSecondThirdGev2()) > math.Abs(from.GetFirstSecondGev2()-to.GetFirstSecondGev2()) {
			side = plot.Right
		}
		panel.Points = append(panel.Points, plot.Point{
			X:    (2*from.GetFirstSecondGev2() + to.GetFirstSecondGev2()) / 3,
			Y:    (2*from.GetSecondThirdGev2() + to.GetSecondThirdGev2()) / 3,
			Text: bands[i], Unmarked: true, Side: side,
		})
	}
	return &plot.Picture{Title: "Region of " + r.GetProcess(), Panels: []plot.Panel{panel}}, nil
}

// strokes is the number of strokes that follow each other.
const strokes = 3
