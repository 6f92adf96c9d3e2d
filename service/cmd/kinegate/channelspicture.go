package main

import (
	"strings"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/cmd/kinegate/internal/plot"
	"example.org/kinegate/service/cmd/kinegate/internal/quantity"
)

// mostRungs is the most channels of a picture, the first to open.
const mostRungs = 40

// channelsPicture is the open channels as a ladder: a rung for each, from its threshold
// to the energy there is, and the channel that opens next.
func channelsPicture(
	initial []string, channels []*kinegatev1.OpenChannel, reply *kinegatev1.ListOpenChannelsResponse,
) *plot.Picture {
	sqrtS := reply.GetCentreOfMass().GetSqrtSGev()
	rungs := channels[:min(len(channels), mostRungs)]
	unit, factor := scaleFor(sqrtS, quantity.Energy)
	panel := plot.Panel{
		X:      plot.Axis{Label: "energy in the centre of mass, sqrt(s) (" + unit + ")"},
		Y:      plot.Axis{Label: "channel (beam energy at its threshold)", Bare: true},
		Rulers: []plot.Ruler{{At: sqrtS * factor, Text: "sqrt(s) " + shortEnergy(sqrtS)}},
	}
	low, high := sqrtS, sqrtS
	for i, c := range rungs {
		threshold := c.GetThreshold().GetSqrtSGev()
		low = min(low, threshold)
		y := float64(i)
		panel.Curves = append(panel.Curves, plot.Curve{X: []float64{threshold * factor, sqrtS * factor}, Y: []float64{y, y}, Heavy: true})
		panel.Points = append(panel.Points, plot.Point{X: threshold * factor, Y: y, Text: rungText(c), Side: plot.Left})
	}
	if next := reply.GetNextToOpen(); next != nil && len(channels) <= mostRungs {
		high = next.GetThreshold().GetSqrtSGev()
		panel.Points = append(panel.Points, plot.Point{
			X: high * factor, Y: float64(len(rungs)), Text: rungText(next), Side: plot.Left, Hollow: true,
		})
	}
	// The names stand to the left of the rungs.
	const forNames, beyond, heightOfRungs = 0.9, 0.06, 15
	width := max(high-low, 1e-3*sqrtS)
	panel.X.Min, panel.X.Max = max(0, low-forNames*width)*factor, (high+beyond*width)*factor
	panel.Y.Min, panel.Y.Max = -1, float64(len(rungs))+1
	panel.Higher = max(1, float64(len(rungs))/heightOfRungs)
	title := strings.Join(initial, " ") + " -> open channels"
	if len(channels) > mostRungs || int64(len(channels)) < reply.GetChannelCount() {
		title += ", the first"
	}
	return &plot.Picture{Title: title, Panels: []plot.Panel{panel}}
}

// rungText names a channel and the beam energy that opens it.
func rungText(c *kinegatev1.OpenChannel) string {
	name := strings.Join(c.GetProducts(), " ")
	switch t := c.GetThreshold(); {
	case t.GetOpenAtRest():
		return name + " (at rest)"
	case t.TotalEnergyGev != nil:
		return name + " (" + shortEnergy(t.GetTotalEnergyGev()) + ")"
	}
	return name
}
