package main

import (
	"fmt"
	"slices"
	"strings"

	"github.com/spf13/cobra"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/cmd/kinegate/internal/plot"
	"example.org/kinegate/service/cmd/kinegate/internal/quantity"
	"example.org/kinegate/service/cmd/kinegate/internal/text"
)

// backscatterFlags are the flags of a photon beam made by light.
type backscatterFlags struct {
	total, kinetic, momentum string
	light, angle             string
	energies, collimators    []string
	windows                  []string
	circular, linear, beam   float64
}

// photonBackscatterCommand describes a photon beam made by light.
func photonBackscatterCommand(p program) *cobra.Command {
	e := newEnvironment(p)
	flags := &backscatterFlags{}
	var picture drawing
	c := &cobra.Command{
		Use:   "backscatter [PARTICLE]",
		Short: "A photon beam from light on a lepton beam: edge, spectrum, fractions, polarisation",
		Long: "backscatter gives edge, spectrum, angles and polarisation of the photons that a beam of\n" +
			"charged leptons, e- if none is given, scatters out of light. With a polarisation flag\n" +
			"the spectrum is that of polarised beams, which must meet head on.",
		Example: `  kinegate photon backscatter --beam "3 GeV" --light "351.1 nm" --window "300 MeV:400 MeV" --collimator "0.1 mrad"
  kinegate photon backscatter --beam "3 GeV" --light "351.1 nm" --circular 1 --plot beam.png`,
		Args: usage(cobra.MaximumNArgs(1)),
		RunE: func(c *cobra.Command, args []string) error {
			q, err := flags.request(c, named(args))
			if err != nil {
				return err
			}
			draw, err := picture.asked()
			if err != nil {
				return err
			}
			request := &kinegatev1.DescribePhotonProcessRequest{
				Process: &kinegatev1.DescribePhotonProcessRequest_Backscatter{Backscatter: q},
			}
			if _, err := e.photonAnswer(c.Context(), request, func(r *kinegatev1.DescribePhotonProcessResponse) error {
				return e.describeBackscatter(r.GetBackscatter(), q)
			}); err != nil || !draw {
				return err
			}
			q.EvenEnergyCount, q.EnergiesGev = 600, nil
			reply, err := e.photonProcess(c.Context(), request)
			if err != nil {
				return err
			}
			return picture.save(e, backscatterPicture(reply.GetBackscatter(), q))
		},
	}
	e.flags(c)
	flags.add(c)
	picture.flag(c)
	return c
}

func (b *backscatterFlags) add(c *cobra.Command) {
	f := c.Flags()
	f.StringVar(&b.total, "beam", "", "total energy of the leptons")
	f.StringVar(&b.kinetic, "beam-kinetic", "", "kinetic energy of the leptons, in place of --beam")
	f.StringVar(&b.momentum, "beam-momentum", "", "momentum of the leptons, in place of --beam")
	f.StringVar(&b.light, "light", "", `energy, wavelength or frequency of the light, such as "351.1 nm"`)
	f.StringVar(&b.angle, "angle", "", "angle between the directions of beam and light; head on if not given")
	f.StringArrayVar(&b.energies, "energy", nil, "energy of the scattered photon at which the spectrum is wanted; may be given several times")
	f.StringArrayVar(&b.collimators, "collimator", nil, "angle whose energy and fraction of photons inside are wanted; may be given several times")
	f.StringArrayVar(&b.windows, "window", nil, `window "LOW:HIGH" of the energy whose fraction of photons is wanted; may be given several times`)
	f.Float64Var(&b.circular, "circular", 0, "mean helicity of the light, -1 to 1")
	f.Float64Var(&b.linear, "linear", 0, "degree of linear polarisation of the light, 0 to 1")
	f.Float64Var(&b.beam, "beam-polarisation", 0, "twice the mean helicity of the leptons, -1 to 1")
}

// request reads the flags.
func (b *backscatterFlags) request(c *cobra.Command, particle string) (*kinegatev1.LaserBackscatter, error) {
	q := &kinegatev1.LaserBackscatter{Particle: particle}
	var err error
	if q.Beam, err = motion("--beam", b.total, b.kinetic, b.momentum, false); err != nil {
		return nil, err
	}
	if q.GetBeam() == nil {
		return nil, badInput("--beam is required")
	}
	if q.LightEnergyGev, err = photonEnergy("--light", b.light); err != nil {
		return nil, err
	}
	if q.AngleBetweenBeamsRad, err = angleFlag("--angle", b.angle); err != nil {
		return nil, err
	}
	if q.EnergiesGev, err = flagList("--energy", b.energies, quantity.Energy); err != nil {
		return nil, err
	}
	if q.AnglesRad, err = flagList("--collimator", b.collimators, quantity.Angle); err != nil {
		return nil, err
	}
	for _, text := range b.windows {
		low, high, found := strings.Cut(text, ":")
		if !found {
			return nil, badInput("--window %q: write LOW:HIGH, each with a unit", text)
		}
		ends, err := flagList("--window", []string{low, high}, quantity.Energy)
		if err != nil {
			return nil, err
		}
		q.Windows = append(q.Windows, &kinegatev1.EnergyRange{MinGev: ends[0], MaxGev: ends[1]})
	}
	for _, name := range []string{"circular", "linear", "beam-polarisation"} {
		if c.Flags().Changed(name) {
			q.Polarisation = &kinegatev1.BackscatterPolarisation{CircularDegree: b.circular, LinearDegree: b.linear, BeamDegree: b.beam}
		}
	}
	return q, nil
}

func (e *environment) describeBackscatter(a *kinegatev1.BackscatterAnswer, q *kinegatev1.LaserBackscatter) error {
	e.print("gamma %s -> gamma %s, light of %s on %s of %s", a.GetParticle(), a.GetParticle(),
		gev(q.GetLightEnergyGev()), a.GetParticle(), gev(a.GetBeamEnergyGev()))
	t := text.NewTable("", "")
	t.Row("edge", gev(a.GetMaxGev())+", the largest energy of a photon")
	t.Row("smallest energy", gev(a.GetMinGev()))
	t.Row("mean energy", gev(a.GetMeanGev()))
	t.Row("cross-section", barn(a.GetTotalBarn()))
	t.Row("s/m^2 - 1", fmt.Sprintf("%.*g", digits, a.GetRelativeExcess()))
	for i, share := range a.GetWindowFractions() {
		t.Row("fraction in "+energyRange(q.GetWindows()[i]), fmt.Sprintf("%.6g", share))
	}
	for _, x := range a.GetAngles() {
		t.Row("within "+narrow(x.GetAngleRad(), 5), fmt.Sprintf("fraction %.6g, from %s", x.GetFractionWithin(), gev(x.GetEnergyGev())))
	}
	if err := t.Write(e.out); err != nil || len(a.GetPoints()) == 0 {
		return err
	}
	e.print("")
	t = text.NewTable(">energy", ">angle", ">cross-section per GeV", ">circular", ">linear")
	if q.GetPolarisation() == nil {
		t = text.NewTable(">energy", ">angle", ">cross-section per GeV")
	}
	for _, x := range a.GetPoints() {
		t.Row(gev(x.GetEnergyGev()), narrow(x.GetAngleRad(), digits), barn(x.GetDifferentialBarnPerGev()),
			fmt.Sprintf("%.6f", x.GetCircularDegree()), fmt.Sprintf("%.6f", x.GetLinearDegree()))
	}
	return t.Write(e.out)
}

// backscatterPicture is the spectrum, the angle against energy and, for polarised
// beams, the polarisation.
func backscatterPicture(a *kinegatev1.BackscatterAnswer, q *kinegatev1.LaserBackscatter) *plot.Picture {
	n := len(a.GetPoints())
	energy, spectrum, angle, circular, linear :=
		make([]float64, n), make([]float64, n), make([]float64, n), make([]float64, n), make([]float64, n)
	for i, x := range a.GetPoints() {
		energy[i], spectrum[i], angle[i] = x.GetEnergyGev(), x.GetDifferentialBarnPerGev(), x.GetAngleRad()
		circular[i], linear[i] = x.GetCircularDegree(), x.GetLinearDegree()
	}
	unit, factor := scaleFor(a.GetMaxGev(), quantity.Energy)
	x := plot.Axis{Label: "energy of the scattered photon (" + unit + ")", Min: 0, Max: 1.1 * a.GetMaxGev() * factor}
	energy = scaled(energy, factor)
	perUnit, perFactor := scaleFor(largest(spectrum)/factor, quantity.CrossSection)
	per := scaled(spectrum, perFactor/factor)
	edge := plot.Ruler{At: a.GetMaxGev() * factor, Text: "edge " + shortEnergy(a.GetMaxGev())}
	mean := plot.Ruler{At: a.GetMeanGev() * factor, Text: "mean " + shortEnergy(a.GetMeanGev())}
	// The spectrum falls from its end to 0 at the edge.
	spectrumX, spectrumY := slices.Concat(energy, energy[n-1:]), slices.Concat(per, []float64{0})
	panels := []plot.Panel{{
		X:      x,
		Y:      plot.Axis{Label: "spectrum (" + perUnit + "/" + unit + ")", Min: 0, Max: 1.1 * largest(per)},
		Curves: []plot.Curve{{X: spectrumX, Y: spectrumY, Heavy: true}},
		Rulers: []plot.Ruler{edge, mean},
	}}
	// Half of the energies lie inside of twice this angle.
	middle := a.GetPoints()[n/2].GetAngleRad()
	angleUnit, angleFactor := angleScale(5 * middle)
	panels = append(panels, plot.Panel{
		X:      x,
		Y:      plot.Axis{Label: "angle of the scattered photon (" + angleUnit + ")", Min: 0, Max: 5 * middle * angleFactor},
		Curves: []plot.Curve{{X: energy, Y: scaled(angle, angleFactor), Heavy: true}},
		Rulers: []plot.Ruler{edge},
	})
	if q.GetPolarisation() != nil {
		panel := plot.Panel{
			X:      x,
			Y:      plot.Axis{Label: "polarisation of the scattered photon", Min: -1.08, Max: 1.08},
			Rulers: []plot.Ruler{edge},
			Key:    plot.BottomLeft,
		}
		if largest(linear) > 0 {
			panel.Curves = append(panel.Curves, plot.Curve{Name: "linear (degree)", X: energy, Y: linear, Stroke: plot.Dashed})
		}
		if largest(circular, scaled(circular, -1)) > 0 || len(panel.Curves) == 0 {
			panel.Curves = append(panel.Curves, plot.Curve{Name: "circular (mean helicity)", X: energy, Y: circular, Heavy: true})
		}
		panels = append(panels, panel)
	}
	title := fmt.Sprintf("Light of %s on %s of %s", shortEnergy(q.GetLightEnergyGev()), a.GetParticle(), shortEnergy(a.GetBeamEnergyGev()))
	return &plot.Picture{Title: title, Panels: panels}
}

// angleScale is the unit for an axis of angles up to a value, and the factor from radian.
func angleScale(most float64) (unit string, factor float64) {
	const degree = 57.29577951308232
	switch {
	case most >= 0.2:
		return "deg", degree
	case most >= 5e-4:
		return "mrad", 1e3
	}
	return "urad", 1e6
}
