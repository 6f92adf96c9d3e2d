package main

import (
	"context"
	"math"

	kinegate "example.org/kinegate/clients/go"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/cmd/kinegate/internal/plot"
)

// drawDecay draws density and fraction of the opening angle of two photons.
func (e *environment) drawDecay(
	ctx context.Context, client *kinegate.Client, asked *kinegatev1.DescribeDecayRequest,
	reply *kinegatev1.DescribeDecayResponse, picture *drawing,
) error {
	opening := reply.GetOpeningAngle()
	least, most := opening.GetMinRad(), opening.GetMaxRad()
	if opening == nil || least >= most {
		return badInput("--plot draws the opening angle of a parent that decays in flight to two photons")
	}
	// Nine decays in ten open by less than about twice the smallest angle; the density
	// has no finite value at the smallest one, and most decays lie close to it.
	const points, reach, nearest = 800, 4, 1e-5
	reachRad := math.Min(most, reach*least)
	angles := []float64{least}
	for _, x := range span(nearest, 1, points, true) {
		angles = append(angles, math.Min(most, least+x*(reachRad-least)))
	}
	curve, err := client.Decays.DescribeDecay(ctx, &kinegatev1.DescribeDecayRequest{
		Form: &kinegatev1.DescribeDecayRequest_Decay{Decay: asked.GetDecay()}, Parent: asked.GetParent(), OpeningAnglesRad: angles,
	})
	if err != nil {
		return err
	}
	unit, factor := angleScale(reachRad)
	density, below := make([]float64, len(angles)), make([]float64, len(angles))
	median := math.NaN()
	for i, x := range curve.GetOpeningAngles() {
		density[i] = math.NaN()
		if x.DensityPerRad != nil {
			density[i] = x.GetDensityPerRad() / factor
		}
		below[i] = x.GetFractionBelow()
		if math.IsNaN(median) && below[i] >= 0.5 {
			median = angles[i]
		}
	}
	shown := scaled(angles, factor)
	smallest := plot.Ruler{At: least * factor, Text: "smallest " + narrow(least, 4)}
	x := plot.Axis{Label: "opening angle in the laboratory (" + unit + ")", Max: reachRad * factor * 1.02}
	x.Min = math.Max(0, least-0.1*(reachRad-least)) * factor
	// The density grows without end towards the smallest angle; what is cut off holds
	// less than a fourth of the decays.
	top := density[0]
	for i, y := range below {
		if y >= 0.25 && !math.IsNaN(density[i]) {
			top = 1.5 * density[i]
			break
		}
	}
	for i := range density {
		if density[i] > top {
			density[i] = math.NaN()
		}
	}
	return picture.save(e, &plot.Picture{
		Title: reply.GetDecay() + " from a parent of " + shortEnergy(reply.GetParent().GetTotalEnergyGev()),
		Panels: []plot.Panel{{
			X: x, Y: plot.Axis{Label: "decays per angle (1/" + unit + ")", Max: top},
			Curves: []plot.Curve{{X: shown, Y: density, Heavy: true}},
			Rulers: []plot.Ruler{smallest},
		}, {
			X: x, Y: plot.Axis{Label: "fraction of decays with a smaller opening angle", Max: 1.04},
			Curves: []plot.Curve{{X: shown, Y: below, Heavy: true}},
			Rulers: []plot.Ruler{{At: median * factor, Text: "half below " + narrow(median, 4)}},
		}},
	})
}
