package main

import (
	"fmt"
	"math"

	"github.com/spf13/cobra"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/cmd/kinegate/internal/plot"
	"example.org/kinegate/service/cmd/kinegate/internal/quantity"
	"example.org/kinegate/service/cmd/kinegate/internal/text"
)

// photonPairCommand describes gamma gamma -> a pair.
func photonPairCommand(p program) *cobra.Command {
	e := newEnvironment(p)
	var first, second, angle, sqrtS string
	var cosines []float64
	var maxCosine float64
	var picture drawing
	c := &cobra.Command{
		Use:   "pair [PARTICLE]",
		Short: "gamma gamma -> a pair of leptons or point-like scalars, by photon helicities",
		Long: "pair gives the cross-section of gamma gamma -> particle antiparticle, for photons without\n" +
			"polarisation and with equal and opposite helicities. The particle is e-, mu-, tau- or a\n" +
			"charged particle of spin 0 taken as a point; e- if none is given.\n" +
			"It exits with 0 if the energy suffices and with 3 if it does not.",
		Example: `  kinegate photon pair --photon "1 TeV" --photon2 "1 eV"
  kinegate photon pair mu- --sqrt-s "400 MeV" --cosine 0 --cosine 0.9 --max-cosine 0.95 --plot pair.svg`,
		Args: usage(cobra.MaximumNArgs(1)),
		RunE: func(c *cobra.Command, args []string) error {
			q := &kinegatev1.PairCreation{Particle: named(args), Cosines: cosines}
			if c.Flags().Changed("max-cosine") {
				q.MaxCosine = &maxCosine
			}
			if err := createdFrom(q, first, second, angle, sqrtS); err != nil {
				return err
			}
			draw, err := picture.asked()
			if err != nil {
				return err
			}
			request := &kinegatev1.DescribePhotonProcessRequest{
				Process: &kinegatev1.DescribePhotonProcessRequest_PairCreation{PairCreation: q},
			}
			reply, err := e.photonAnswer(c.Context(), request, func(r *kinegatev1.DescribePhotonProcessResponse) error {
				return e.describePair(r.GetPairCreation(), maxCosine)
			})
			if err != nil {
				return err
			}
			a := reply.GetPairCreation()
			if draw {
				q.Cosines = cosineSpan(maxCosine, a.GetSqrtSGev(), a.GetThresholdSqrtSGev())
				q.TotalsAtSqrtSGev = span(a.GetThresholdSqrtSGev(), pairReach(a), 400, true)
				if reply, err = e.photonProcess(c.Context(), request); err != nil {
					return err
				}
				if err := picture.save(e, pairPicture(reply.GetPairCreation(), q)); err != nil {
					return err
				}
			}
			if a.GetRelativeExcess() < 0 {
				return errNo
			}
			return nil
		},
	}
	e.flags(c)
	f := c.Flags()
	f.StringVar(&first, "photon", "", `energy, wavelength or frequency of the first photon, such as "1 TeV"`)
	f.StringVar(&second, "photon2", "", `the same of the second photon, such as "500 nm"`)
	f.StringVar(&angle, "angle", "", `angle between the directions of the photons, such as "90 deg"; head on if not given`)
	f.StringVar(&sqrtS, "sqrt-s", "", "energy in the centre of mass, in place of photons")
	f.Float64SliceVar(&cosines, "cosine", nil,
		"cosine of the particle's angle in the centre of mass at which the cross-section is wanted; may be given several times")
	f.Float64Var(&maxCosine, "max-cosine", 1, "also give the cross-section with both particles within this |cosine|")
	picture.flag(c)
	return c
}

// createdFrom reads the energy of the photons.
func createdFrom(q *kinegatev1.PairCreation, first, second, angle, sqrtS string) error {
	if sqrtS != "" {
		if first != "" || second != "" || angle != "" {
			return badInput("--sqrt-s stands in place of photons; give one or the other")
		}
		x, err := energy("--sqrt-s", sqrtS)
		q.Energy = &kinegatev1.PairCreation_SqrtSGev{SqrtSGev: x}
		return err
	}
	two := &kinegatev1.TwoPhotons{}
	var err error
	if two.FirstEnergyGev, err = photonEnergy("--photon", first); err != nil {
		return err
	}
	if two.SecondEnergyGev, err = photonEnergy("--photon2", second); err != nil {
		return err
	}
	two.AngleBetweenPhotonsRad, err = angleFlag("--angle", angle)
	q.Energy = &kinegatev1.PairCreation_TwoPhotons{TwoPhotons: two}
	return err
}

func (e *environment) describePair(a *kinegatev1.PairCreationAnswer, maxCosine float64) error {
	state := "OPEN"
	switch x := a.GetRelativeExcess(); {
	case x < 0:
		state = "CLOSED"
	case x == 0:
		state = "AT THRESHOLD"
	}
	e.print("gamma gamma -> %s   %s", pairNames(a.GetParticle()), state)
	t := text.NewTable("", "")
	t.Row("sqrt(s)", gev(a.GetSqrtSGev())+", threshold "+gev(a.GetThresholdSqrtSGev()))
	if a.FirstEnergyThresholdGev != nil {
		t.Row("first photon at threshold", gev(a.GetFirstEnergyThresholdGev()))
	}
	t.Row("s/(2 m)^2 - 1", fmt.Sprintf("%.*g", digits, a.GetRelativeExcess()))
	t.Row("beta in the centre of mass", fmt.Sprintf("%.*g", digits, a.GetBeta()))
	if p := a.GetPeak(); p != nil {
		t.Row("largest cross-section", fmt.Sprintf("%s at sqrt(s) %s, beta %.4f", barn(p.GetUnpolarisedBarn()), gev(p.GetSqrtSGev()), p.GetBeta()))
	}
	if err := t.Write(e.out); err != nil {
		return err
	}
	e.print("")
	t = text.NewTable("", ">unpolarised", ">equal helicities", ">opposite helicities")
	row := func(name string, x *kinegatev1.HelicityCrossSection) {
		t.Row(name, barn(x.GetUnpolarisedBarn()), barn(x.GetEqualBarn()), barn(x.GetOppositeBarn()))
	}
	row("cross-section", a.GetTotal())
	if x := a.GetWithinMaxCosine(); x != nil {
		row(fmt.Sprintf("  within |cos| %g", maxCosine), x)
	}
	for _, d := range a.GetDifferentials() {
		t.Row(fmt.Sprintf("  per sr at cos %g", d.GetCosine()),
			barn(d.GetUnpolarisedBarnPerSr()), barn(d.GetEqualBarnPerSr()), barn(d.GetOppositeBarnPerSr()))
	}
	if x := a.GetMeanCosineSquared(); x != nil {
		t.Row("mean cos^2", fmt.Sprintf("%.6f", x.GetUnpolarised()), fmt.Sprintf("%.6f", x.GetEqual()), fmt.Sprintf("%.6f", x.GetOpposite()))
	}
	return t.Write(e.out)
}

// pairReach is how far the picture of a pair goes in sqrt(s).
func pairReach(a *kinegatev1.PairCreationAnswer) float64 {
	return a.GetThresholdSqrtSGev() * math.Max(10, 3*math.Sqrt(1+math.Min(1e12, a.GetRelativeExcess())))
}

// pairPicture is the cross-section against energy, and against angle at the energy
// asked for.
func pairPicture(a *kinegatev1.PairCreationAnswer, q *kinegatev1.PairCreation) *plot.Picture {
	var unpolarised, equal, opposite []float64
	for _, x := range a.GetTotals() {
		unpolarised = append(unpolarised, x.GetUnpolarisedBarn())
		equal = append(equal, x.GetEqualBarn())
		opposite = append(opposite, x.GetOppositeBarn())
	}
	unit, factor := scaleFor(largest(unpolarised, equal, opposite), quantity.CrossSection)
	curves := func(x, unpolarised, equal, opposite []float64, factor float64) []plot.Curve {
		return []plot.Curve{
			{Name: "unpolarised", X: x, Y: scaled(unpolarised, factor), Heavy: true},
			{Name: "equal helicities", X: x, Y: scaled(equal, factor), Stroke: plot.Dashed},
			{Name: "opposite helicities", X: x, Y: scaled(opposite, factor), Stroke: plot.Dotted, Heavy: true},
		}
	}
	energies := plot.Panel{
		X:      plot.Axis{Label: "energy in the centre of mass, sqrt(s)", Log: true, Tick: energyTick},
		Y:      plot.Axis{Label: "cross-section (" + unit + ")"},
		Curves: curves(q.GetTotalsAtSqrtSGev(), unpolarised, equal, opposite, factor),
		Rulers: []plot.Ruler{{At: a.GetSqrtSGev(), Text: shortEnergy(a.GetSqrtSGev())}},
	}
	if high, low := pairReach(a), a.GetThresholdSqrtSGev(); high > 20*low {
		energies.Y = plot.Axis{Label: "cross-section", Log: true, Tick: barnTick}
		for i, y := range [][]float64{unpolarised, equal, opposite} {
			energies.Curves[i].Y = y
		}
		energies.Y.Max = 1.5 * largest(unpolarised, equal, opposite)
		energies.Y.Min = unpolarised[len(unpolarised)-1] / 30
		energies.Key = plot.BottomLeft
	} else {
		energyUnit, f := scaleFor(high, quantity.Energy)
		energies.X = plot.Axis{Label: "energy in the centre of mass, sqrt(s) (" + energyUnit + ")"}
		for i := range energies.Curves {
			energies.Curves[i].X = scaled(energies.Curves[i].X, f)
		}
		energies.Rulers[0].At *= f
	}
	panels := []plot.Panel{energies}
	if a.GetRelativeExcess() > 0 {
		unpolarised, equal, opposite = nil, nil, nil
		for _, x := range a.GetDifferentials() {
			unpolarised = append(unpolarised, x.GetUnpolarisedBarnPerSr())
			equal = append(equal, x.GetEqualBarnPerSr())
			opposite = append(opposite, x.GetOppositeBarnPerSr())
		}
		unit, factor = scaleFor(largest(unpolarised, equal, opposite), quantity.CrossSection)
		named := curves(q.GetCosines(), unpolarised, equal, opposite, factor)
		for i := range named {
			named[i].Name = "" // the key stands in the panel beside
		}
		panels = append(panels, plot.Panel{
			X:      plot.Axis{Label: "cosine of the particle's angle in the centre of mass", Min: -1, Max: 1},
			Y:      perSolidAngle(unit, scaled(unpolarised, factor), scaled(equal, factor), scaled(opposite, factor)),
			Curves: named,
			Note:   "at " + shortEnergy(a.GetSqrtSGev()),
		})
	}
	return &plot.Picture{Title: "gamma gamma -> " + pairNames(a.GetParticle()), Panels: panels}
}
