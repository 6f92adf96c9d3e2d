package main

import (
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/cmd/kinegate/internal/text"
)

// printDaughters prints where daughters and granddaughters can go.
func (e *environment) printDaughters(r *kinegatev1.DescribeDecayResponse) error {
	if len(r.GetDaughters()) == 0 {
		return nil
	}
	e.print("")
	t := text.NewTable("daughter", "from", ">energy (rest)", ">momentum (rest)", ">energy (lab)", ">momentum (lab)", ">angle (lab)")
	row := func(d *kinegatev1.DaughterLimits, from string) {
		t.Row(d.GetProduct(), from, energyRange(d.GetRestFrameEnergy()), energyRange(d.GetRestFrameMomentum()),
			energyRange(d.GetLaboratoryEnergy()), energyRange(d.GetLaboratoryMomentum()), angleRange(d.GetLaboratoryAngle()))
	}
	for _, d := range r.GetDaughters() {
		row(d, "")
	}
	for _, g := range r.GetGranddaughters() {
		row(g.GetLimits(), g.GetParent())
	}
	if err := t.Write(e.out); err != nil {
		return err
	}
	for _, d := range r.GetDaughters() {
		if d.LaboratoryEnergyDensityPerGev != nil {
			e.print("  the energy (lab) of %s is spread evenly, %s per GeV", d.GetProduct(), number(d.GetLaboratoryEnergyDensityPerGev()))
		}
	}
	for _, g := range r.GetGranddaughters() {
		if g.RestFrameEnergyDensityPerGev != nil {
			e.print("  the energy (rest) of %s is spread evenly, %s per GeV", g.GetLimits().GetProduct(), number(g.GetRestFrameEnergyDensityPerGev()))
		}
	}
	return nil
}

// printOpenings prints density and fraction of the opening angles asked for.
func (e *environment) printOpenings(r *kinegatev1.DescribeDecayResponse, values *decayValues) error {
	if len(r.GetOpeningAngles()) == 0 {
		return nil
	}
	e.print("")
	t := text.NewTable(">opening angle", ">density per rad", ">fraction below")
	for i, o := range r.GetOpeningAngles() {
		density := "infinite"
		if o.DensityPerRad != nil {
			density = number(o.GetDensityPerRad())
		}
		t.Row(degrees(values.openings[i]), density, number(o.GetFractionBelow()))
	}
	return t.Write(e.out)
}

// printPairs prints where both daughters go in the directions asked for.
func (e *environment) printPairs(r *kinegatev1.DescribeDecayResponse, values *decayValues) error {
	if len(r.GetRestFramePairs())+len(r.GetLaboratorySolutions()) == 0 {
		return nil
	}
	first, second := r.GetDaughters()[0].GetProduct(), r.GetDaughters()[1].GetProduct()
	e.print("")
	t := text.NewTable(">"+first+": given", ">angle (rest)", ">angle (lab)", ">momentum (lab)", ">rest/lab",
		">"+second+": angle (lab)", ">momentum (lab)", ">opening angle")
	row := func(given string, pair *kinegatev1.DecayPair) {
		a, b := pair.GetDaughters()[0], pair.GetDaughters()[1]
		t.Row(given, degrees(a.GetRestFrameAngleRad()), degrees(a.GetLaboratoryAngleRad()), gevs(a.GetLaboratoryMomentumGev()),
			shown(a.RestFramePerLaboratory != nil, a.GetRestFramePerLaboratory(), number),
			degrees(b.GetLaboratoryAngleRad()), gevs(b.GetLaboratoryMomentumGev()),
			degrees(pair.GetOpeningAngleRad()))
	}
	for i, pair := range r.GetRestFramePairs() {
		row("cosine "+number(values.restCosines[i]), pair)
	}
	for i, solution := range r.GetLaboratorySolutions() {
		given := degrees(values.labAngles[i])
		if len(solution.GetPairs()) == 0 {
			t.Row(given, "none")
		}
		for _, pair := range solution.GetPairs() {
			row(given, pair)
			given = ""
		}
	}
	return t.Write(e.out)
}
