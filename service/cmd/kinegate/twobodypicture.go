package main

import (
	"context"
	"math"

	kinegate "example.org/kinegate/clients/go"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/cmd/kinegate/internal/plot"
	"example.org/kinegate/service/cmd/kinegate/internal/quantity"
)

// drawTwoBody draws the laboratory angles of both products against their energies, with
// the solutions of the command's own values as points.
func (e *environment) drawTwoBody(
	ctx context.Context, client *kinegate.Client, asked *kinegatev1.SolveTwoBodyRequest,
	reply *kinegatev1.SolveTwoBodyResponse, picture *drawing,
) error {
	if len(reply.GetProducts()) == 0 {
		return badInput("--plot: the channel is closed; there is nothing to draw")
	}
	const directions = 1001
	curve, err := client.Reactions.SolveTwoBody(ctx, &kinegatev1.SolveTwoBodyRequest{
		Form: asked.GetForm(), InitialState: asked.GetInitialState(), CentreOfMassAnglesRad: span(0, math.Pi, directions, false),
	})
	if err != nil {
		return err
	}
	var angle, energy [2][]float64
	for _, s := range curve.GetSolutions() {
		for _, b := range s.GetBranches() {
			for k, x := range b.GetProducts() {
				if x.LaboratoryAngleRad != nil {
					angle[k] = append(angle[k], x.GetLaboratoryAngleRad()*180/math.Pi)
					energy[k] = append(energy[k], x.GetLaboratoryTotalEnergyGev())
				}
			}
		}
	}
	if len(angle[0]) == 0 {
		return badInput("--plot: beams at an angle leave the laboratory angle open; there is nothing to draw")
	}
	unit, factor := scaleFor(largest(energy[0], energy[1]), quantity.Energy)
	panel := plot.Panel{
		X:    plot.Axis{Label: "angle in the laboratory (deg)"},
		Y:    plot.Axis{Label: "total energy in the laboratory (" + unit + ")"},
		Note: "sqrt(s) " + shortEnergy(reply.GetCentreOfMass().GetSqrtSGev()),
	}
	if most := largest(angle[0], angle[1]); most > 45 { //nolint:mnd // wide ranges have ticks of 15 or 30 degrees
		panel.X.Step = 15
		if most > 120 { //nolint:mnd // as above
			panel.X.Step = 30
		}
	}
	for k, p := range reply.GetProducts() {
		panel.Curves = append(panel.Curves, plot.Curve{
			Name: p.GetLimits().GetProduct(), X: angle[k], Y: scaled(energy[k], factor), Stroke: plot.Stroke(k), Heavy: k == 0,
		})
	}
	for _, s := range reply.GetSolutions() {
		for _, b := range s.GetBranches() {
			for k, x := range b.GetProducts() {
				panel.Points = append(panel.Points, plot.Point{
					X: x.GetLaboratoryAngleRad() * 180 / math.Pi, Y: x.GetLaboratoryTotalEnergyGev() * factor, Hollow: k == 1,
				})
			}
		}
	}
	return picture.save(e, &plot.Picture{Title: reply.GetReaction(), Panels: []plot.Panel{panel}})
}
