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

// photonAnnihilationCommand describes a pair of leptons -> gamma gamma.
func photonAnnihilationCommand(p program) *cobra.Command {
	e := newEnvironment(p)
	var sqrtS, kinetic string
	var cosines []float64
	var maxCosine float64
	var picture drawing
	c := &cobra.Command{
		Use:   "annihilation [PARTICLE]",
		Short: "A pair of charged leptons -> gamma gamma",
		Long: "annihilation gives the cross-section of a pair of charged leptons, e- e+ if none is\n" +
			"given, to two photons, at an energy in the centre of mass or for one lepton that meets\n" +
			"the other at rest.",
		Example: `  kinegate photon annihilation --beam-kinetic "511 keV"
  kinegate photon annihilation --sqrt-s "10.58 GeV" --max-cosine 0.8`,
		Args: usage(cobra.MaximumNArgs(1)),
		RunE: func(c *cobra.Command, args []string) error {
			q := &kinegatev1.PairAnnihilation{Particle: named(args), Cosines: cosines}
			if c.Flags().Changed("max-cosine") {
				q.MaxCosine = &maxCosine
			}
			if (sqrtS == "") == (kinetic == "") {
				return badInput("give one of --sqrt-s and --beam-kinetic")
			}
			if sqrtS != "" {
				x, err := energy("--sqrt-s", sqrtS)
				if err != nil {
					return err
				}
				q.Energy = &kinegatev1.PairAnnihilation_SqrtSGev{SqrtSGev: x}
			} else {
				x, err := energy("--beam-kinetic", kinetic)
				if err != nil {
					return err
				}
				q.Energy = &kinegatev1.PairAnnihilation_KineticEnergyOnRestGev{KineticEnergyOnRestGev: x}
			}
			draw, err := picture.asked()
			if err != nil {
				return err
			}
			request := &kinegatev1.DescribePhotonProcessRequest{
				Process: &kinegatev1.DescribePhotonProcessRequest_Annihilation{Annihilation: q},
			}
			reply, err := e.photonAnswer(c.Context(), request, func(r *kinegatev1.DescribePhotonProcessResponse) error {
				return e.describeAnnihilation(r.GetAnnihilation(), maxCosine)
			})
			if err != nil || !draw {
				return err
			}
			a := reply.GetAnnihilation()
			threshold := 2 * a.GetMassGev()
			q.Cosines = cosineSpan(maxCosine, a.GetSqrtSGev(), threshold)
			q.TotalsAtSqrtSGev = span(threshold*(1+1e-4), math.Max(10*threshold, 3*a.GetSqrtSGev()), 400, true)
			if reply, err = e.photonProcess(c.Context(), request); err != nil {
				return err
			}
			return picture.save(e, annihilationPicture(reply.GetAnnihilation()))
		},
	}
	e.flags(c)
	f := c.Flags()
	f.StringVar(&sqrtS, "sqrt-s", "", "energy in the centre of mass")
	f.StringVar(&kinetic, "beam-kinetic", "", "kinetic energy of one lepton, the other at rest")
	f.Float64SliceVar(&cosines, "cosine", nil,
		"cosine of a photon's angle in the centre of mass at which the cross-section is wanted; may be given several times")
	f.Float64Var(&maxCosine, "max-cosine", 1, "also give the cross-section with both photons within this |cosine|")
	picture.flag(c)
	return c
}

func (e *environment) describeAnnihilation(a *kinegatev1.AnnihilationAnswer, maxCosine float64) error {
	e.print("%s -> gamma gamma", pairNames(a.GetParticle()))
	t := text.NewTable("", "")
	t.Row("sqrt(s)", gev(a.GetSqrtSGev()))
	t.Row("beta in the centre of mass", fmt.Sprintf("%.*g", digits, a.GetBeta()))
	if a.TotalBarn == nil {
		t.Row("cross-section", "infinite: both are at rest")
		return t.Write(e.out)
	}
	t.Row("cross-section", barn(a.GetTotalBarn())+", the two photons counted once")
	if a.WithinBarn != nil {
		t.Row(fmt.Sprintf("  within |cos| %g", maxCosine), barn(a.GetWithinBarn()))
	}
	if a.MasslessWithinBarn != nil {
		t.Row("  with no mass", barn(a.GetMasslessWithinBarn()))
	}
	for _, x := range a.GetDifferentials() {
		t.Row(fmt.Sprintf("  per sr at cos %g", x.GetCosine()), barn(x.GetDifferentialBarnPerSr())+", either photon")
	}
	return t.Write(e.out)
}

// annihilationPicture is the cross-section against energy, and against angle at the
// energy asked for.
func annihilationPicture(a *kinegatev1.AnnihilationAnswer) *plot.Picture {
	var energies, totals, cosines, densities []float64
	for _, x := range a.GetTotals() {
		energies, totals = append(energies, x.GetSqrtSGev()), append(totals, x.GetTotalBarn())
	}
	for _, x := range a.GetDifferentials() {
		cosines, densities = append(cosines, x.GetCosine()), append(densities, x.GetDifferentialBarnPerSr())
	}
	panels := []plot.Panel{{
		X:      plot.Axis{Label: "energy in the centre of mass, sqrt(s)", Log: true, Tick: energyTick},
		Y:      plot.Axis{Label: "cross-section", Log: true, Tick: barnTick},
		Curves: []plot.Curve{{X: energies, Y: totals, Heavy: true}},
		Rulers: []plot.Ruler{{At: a.GetSqrtSGev(), Text: shortEnergy(a.GetSqrtSGev())}},
	}}
	if len(cosines) > 0 {
		unit, factor := scaleFor(largest(densities), quantity.CrossSection)
		panels = append(panels, plot.Panel{
			X:      plot.Axis{Label: "cosine of a photon's angle in the centre of mass", Min: -1, Max: 1},
			Y:      perSolidAngle(unit, scaled(densities, factor)),
			Curves: []plot.Curve{{X: cosines, Y: scaled(densities, factor), Heavy: true}},
			Note:   "at " + shortEnergy(a.GetSqrtSGev()),
		})
	}
	return &plot.Picture{Title: pairNames(a.GetParticle()) + " -> gamma gamma", Panels: panels}
}

// barnTick writes a cross-section at a tick of a logarithmic axis.
func barnTick(x float64) string { return trimZeros(quantity.Format(x, quantity.CrossSection, 3)) }
