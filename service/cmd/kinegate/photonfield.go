package main

import (
	"context"
	"fmt"
	"math"

	"github.com/spf13/cobra"

	kinegate "example.org/kinegate/clients/go"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/cmd/kinegate/internal/plot"
	"example.org/kinegate/service/cmd/kinegate/internal/quantity"
	"example.org/kinegate/service/cmd/kinegate/internal/text"
)

// fieldFlags are the flags of a field of photons.
type fieldFlags struct {
	particle, temperature string
	redshift, index       float64
	low, high, density    string
	photons               []string
	distance              string
}

// photonFieldCommand says how a field of photons absorbs photons.
func photonFieldCommand(p program) *cobra.Command {
	e := newEnvironment(p)
	flags := &fieldFlags{}
	var picture drawing
	c := &cobra.Command{
		Use:   "photon-field",
		Short: "Absorption of photons in a black-body or power-law field of photons",
		Long: "photon-field gives the mean free path of photons that make pairs with an isotropic field\n" +
			"of photons: a black body by --temperature and --redshift, or a power law by --index,\n" +
			"--min-energy, --max-energy and --density. Photon energies are those where the field is.",
		Example: `  kinegate photon-field --temperature "2.7255 K" --photon "100 TeV" --photon "2 PeV" --distance "8 kpc"
  kinegate photon-field --index 2 --min-energy "0.01 eV" --max-energy "10 eV" --density "1 /cm3" --photon "1 TeV"`,
		Args: usage(cobra.NoArgs),
		RunE: func(c *cobra.Command, _ []string) error {
			q, err := flags.request(c)
			if err != nil {
				return err
			}
			draw, err := picture.asked()
			if err != nil {
				return err
			}
			return e.asking(c.Context(), "", func(ctx context.Context, client *kinegate.Client) error {
				reply, err := client.Photons.DescribePhotonField(ctx, q)
				if err != nil {
					return err
				}
				if err := e.tell(reply, func() error { return e.describeField(reply, q) }); err != nil {
					return err
				}
				if !draw {
					return nil
				}
				asked := q.GetPhotonEnergiesGev()
				if q.PhotonEnergiesGev = fieldSpan(reply); q.GetPhotonEnergiesGev() == nil {
					return badInput("--plot: the field absorbs nothing; there is nothing to draw")
				}
				curve, err := client.Photons.DescribePhotonField(ctx, q)
				if err != nil {
					return err
				}
				return picture.save(e, fieldPicture(reply, curve, q, len(asked) <= mostMarks))
			})
		},
	}
	e.flags(c)
	f := c.Flags()
	f.StringVar(&flags.particle, "particle", "e-", "lepton of the pairs")
	f.StringVar(&flags.temperature, "temperature", "", `temperature of a black body at redshift 0, such as "2.7255 K"`)
	f.Float64Var(&flags.redshift, "redshift", 0, "redshift, which raises the temperature by the factor 1 + redshift")
	f.Float64Var(&flags.index, "index", 2, "index of a power law, n(e) ~ e^-index")
	f.StringVar(&flags.low, "min-energy", "", "lowest energy of the photons of a power law")
	f.StringVar(&flags.high, "max-energy", "", "highest energy of the photons of a power law")
	f.StringVar(&flags.density, "density", "", `photons of a power law per volume, such as "411 /cm3"`)
	f.StringArrayVar(&flags.photons, "photon", nil, "energy of a photon that crosses the field; may be given several times")
	f.StringVar(&flags.distance, "distance", "", `length of the way for the optical depth, such as "8 kpc"`)
	picture.flag(c)
	return c
}

// request reads the flags.
func (f *fieldFlags) request(c *cobra.Command) (*kinegatev1.DescribePhotonFieldRequest, error) {
	q := &kinegatev1.DescribePhotonFieldRequest{Particle: f.particle}
	power := f.low != "" || f.high != "" || f.density != "" || c.Flags().Changed("index")
	switch {
	case f.temperature != "" && power:
		return nil, badInput("--temperature is for a black body, --index, --min-energy, --max-energy and --density for a power law; give one field")
	case f.temperature != "":
		kelvin, err := quantity.Parse(f.temperature, quantity.Temperature)
		if err != nil {
			return nil, badInput("--temperature: %w", err)
		}
		q.Field = &kinegatev1.DescribePhotonFieldRequest_BlackBody{
			BlackBody: &kinegatev1.BlackBodyField{TemperatureK: kelvin, Redshift: f.redshift},
		}
	case f.low == "" || f.high == "" || f.density == "":
		return nil, badInput("give --temperature, or --min-energy, --max-energy and --density")
	case c.Flags().Changed("redshift"):
		return nil, badInput("--redshift is for a black body")
	default:
		ends, err := flagList("--min-energy and --max-energy", []string{f.low, f.high}, quantity.Energy)
		if err != nil {
			return nil, err
		}
		density, err := quantity.Parse(f.density, quantity.Density)
		if err != nil {
			return nil, badInput("--density: %w", err)
		}
		q.Field = &kinegatev1.DescribePhotonFieldRequest_PowerLaw{PowerLaw: &kinegatev1.PowerLawField{
			Index: f.index, MinGev: ends[0], MaxGev: ends[1], DensityPerM3: density,
		}}
	}
	var err error
	if q.PhotonEnergiesGev, err = flagList("--photon", f.photons, quantity.Energy); err != nil {
		return nil, err
	}
	if f.distance != "" {
		if q.DistanceM, err = quantity.Parse(f.distance, quantity.Length); err != nil {
			return nil, badInput("--distance: %w", err)
		}
	}
	return q, nil
}

func (e *environment) describeField(r *kinegatev1.DescribePhotonFieldResponse, q *kinegatev1.DescribePhotonFieldRequest) error {
	e.print("%s", fieldName(r, q))
	t := text.NewTable("", "")
	t.Row("photons", quantity.Format(r.GetDensityPerM3(), quantity.Density, digits))
	if r.ThresholdGev != nil {
		t.Row("absorbs from", gev(r.GetThresholdGev()))
	}
	if x := r.GetStrongest(); x != nil {
		t.Row("smallest mean free path", kiloparsec(x.GetMeanFreePathKpc(), digits)+" at "+quantity.Format(x.GetPhotonEnergyGev(), quantity.Energy, 5))
	}
	if err := t.Write(e.out); err != nil {
		return err
	}
	if len(r.GetAbsorptions()) > 0 {
		e.print("")
		t = text.NewTable(">photon", ">mean free path", ">", ">per metre", ">optical depth", ">passes")
		for _, x := range r.GetAbsorptions() {
			path, metres := "no absorption", ""
			if x.MeanFreePathKpc != nil {
				path, metres = kiloparsec(x.GetMeanFreePathKpc(), digits), fmt.Sprintf("%.6e m", x.GetMeanFreePathM())
			}
			// Without a way there is no depth: a 0 would read as a transparent field.
			depth, passes := "-", "-"
			if q.GetDistanceM() > 0 {
				depth, passes = fmt.Sprintf("%.6g", x.GetOpticalDepth()), fmt.Sprintf("%.6g", math.Exp(-x.GetOpticalDepth()))
			}
			t.Row(gev(x.GetPhotonEnergyGev()), path, metres, fmt.Sprintf("%.6e", x.GetAbsorptionPerM()), depth, passes)
		}
		if err := t.Write(e.out); err != nil {
			return err
		}
	}
	e.omissions(r.GetOmissions(), r.GetTableVersion())
	return nil
}

// fieldName says which field it is.
func fieldName(r *kinegatev1.DescribePhotonFieldResponse, q *kinegatev1.DescribePhotonFieldRequest) string {
	if p := q.GetPowerLaw(); p != nil {
		return fmt.Sprintf("Power law e^-%g from %s to %s, pairs %s", p.GetIndex(),
			trimZeros(gev(p.GetMinGev())), trimZeros(gev(p.GetMaxGev())), pairNames(r.GetParticle()))
	}
	name := fmt.Sprintf("Black body of %.6g K", r.GetTemperatureK())
	if z := q.GetBlackBody().GetRedshift(); z != 0 {
		name += fmt.Sprintf(" at redshift %g", z)
	}
	return name + ", pairs " + pairNames(r.GetParticle())
}

// kiloparsec writes a length given in kpc in the unit that suits it.
func kiloparsec(x float64, digits int) string {
	for _, u := range []struct {
		name  string
		least float64
	}{{"Gpc", 1e6}, {"Mpc", 1e3}, {"kpc", 1}, {"pc", 1e-3}} {
		if x >= u.least*(1-1e-12) && x < 1e10 {
			return fmt.Sprintf("%.*g %s", digits, x/u.least, u.name)
		}
	}
	return trimZeros(quantity.Format(x*1000*quantity.MetrePerParsec, quantity.Length, digits))
}

// mostMarks is the most photons that a picture names one by one.
const mostMarks = 4

// fieldSpan is the photon energies of a picture, nil where nothing is absorbed.
func fieldSpan(r *kinegatev1.DescribePhotonFieldResponse) []float64 {
	const points = 500
	if x := r.GetStrongest(); x != nil {
		return span(x.GetPhotonEnergyGev()/40, x.GetPhotonEnergyGev()*1e4, points, true)
	}
	if r.ThresholdGev != nil {
		return span(r.GetThresholdGev()*1.0001, r.GetThresholdGev()*1e5, points, true)
	}
	return nil
}

// fieldPicture is the mean free path against photon energy.
func fieldPicture(
	asked, curve *kinegatev1.DescribePhotonFieldResponse, q *kinegatev1.DescribePhotonFieldRequest, mark bool,
) *plot.Picture {
	var paths []float64
	least, best := math.Inf(1), 0.0
	for _, x := range curve.GetAbsorptions() {
		path := math.Inf(1)
		if x.MeanFreePathKpc != nil {
			path = x.GetMeanFreePathKpc()
		}
		if path < least {
			least, best = path, x.GetPhotonEnergyGev()
		}
		paths = append(paths, path)
	}
	// Five decades above the smallest; the rise towards low energies has no end.
	low, high := least/5, least*1e5
	for i, x := range paths {
		if x > high {
			paths[i] = math.NaN()
		}
	}
	panel := plot.Panel{
		X:      plot.Axis{Label: "energy of the photon", Log: true, Tick: energyTick},
		Y:      plot.Axis{Label: "mean free path", Log: true, Min: low, Max: high, Tick: func(x float64) string { return kiloparsec(x, 4) }},
		Curves: []plot.Curve{{X: q.GetPhotonEnergiesGev(), Y: paths, Heavy: true}},
	}
	panel.X.Min, panel.X.Max = q.GetPhotonEnergiesGev()[0], q.GetPhotonEnergiesGev()[len(paths)-1]
	if x := asked.GetStrongest(); x != nil {
		panel.Points = append(panel.Points, plot.Point{
			X: x.GetPhotonEnergyGev(), Y: x.GetMeanFreePathKpc(), Hollow: true, Side: plot.Below,
			Text: "smallest: " + kiloparsec(x.GetMeanFreePathKpc(), 4) + " at " + shortEnergy(x.GetPhotonEnergyGev()),
		})
	}
	if mark {
		for _, x := range asked.GetAbsorptions() {
			if x.MeanFreePathKpc == nil {
				continue
			}
			// The text stands below the curve, on the side where that falls away.
			side := plot.Right
			if x.GetPhotonEnergyGev() < best {
				side = plot.Left
			}
			panel.Points = append(panel.Points, plot.Point{
				X: x.GetPhotonEnergyGev(), Y: x.GetMeanFreePathKpc(), Side: side, Text: energyTick(x.GetPhotonEnergyGev()),
			})
		}
	}
	if d := q.GetDistanceM(); d > 0 {
		d /= 1000 * quantity.MetrePerParsec
		panel.Rulers = append(panel.Rulers, plot.Ruler{At: d, Level: true, Text: "the distance, " + kiloparsec(d, 4)})
	}
	return &plot.Picture{Title: fieldName(asked, q), Panels: []plot.Panel{panel}}
}
