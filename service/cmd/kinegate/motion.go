package main

import (
	"context"
	"fmt"
	"math"
	"strings"

	"github.com/spf13/cobra"

	kinegate "example.org/kinegate/clients/go"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/cmd/kinegate/internal/quantity"
	"example.org/kinegate/service/cmd/kinegate/internal/text"
)

// motionFlags say which body moves and how.
type motionFlags struct {
	mass, charge                                                            string
	energy, kinetic, momentum, beta, gamma, rigidity, wavelength, frequency string
	distances, indices                                                      string
}

// motionCommand converts a motion.
func motionCommand(p program) *cobra.Command {
	e := newEnvironment(p)
	flags := &motionFlags{}
	c := &cobra.Command{
		Use:   "motion [PARTICLE]",
		Short: "Turn energy, momentum, speed, rigidity or wavelength of a particle into all others",
		Long: "motion turns one quantity of a particle's motion into all others, and gives times of\n" +
			"flight over --distance and Cherenkov light at a refractive --index. A particle that is\n" +
			"not in the table is given by --mass and --charge.",
		Example: `  kinegate motion K+ --momentum "1.2 GeV" --distance "3 m" --index 1.05
  kinegate motion gamma --wavelength "351.1 nm"
  kinegate motion --mass "2.8 GeV" --charge 2 --rigidity "1.5 GV"`,
		Args: usage(cobra.MaximumNArgs(1)),
		RunE: func(c *cobra.Command, args []string) error {
			request, err := flags.request(args)
			if err != nil {
				return err
			}
			return e.asking(c.Context(), "", func(ctx context.Context, client *kinegate.Client) error {
				reply, err := client.Reactions.ConvertMotion(ctx, request)
				if err != nil {
					return err
				}
				return e.tell(reply, func() error { return e.printMotion(reply) })
			})
		},
	}
	e.flags(c)
	f := c.Flags()
	f.StringVar(&flags.mass, "mass", "", "mass of the body, in place of a particle's name")
	f.StringVar(&flags.charge, "charge", "", `charge of the body beside --mass in units of the positron's, such as "-1" or "2/3"; neutral if not given`)
	f.StringVar(&flags.energy, "energy", "", "total energy")
	f.StringVar(&flags.kinetic, "kinetic", "", "kinetic energy")
	f.StringVar(&flags.momentum, "momentum", "", "momentum")
	f.StringVar(&flags.beta, "beta", "", "speed over that of light")
	f.StringVar(&flags.gamma, "gamma", "", "Lorentz factor")
	f.StringVar(&flags.rigidity, "rigidity", "", `momentum over charge, such as "1.5 GV"`)
	f.StringVar(&flags.wavelength, "wavelength", "", `wavelength of a photon in vacuum, such as "351.1 nm"`)
	f.StringVar(&flags.frequency, "frequency", "", `frequency of a photon, such as "300 THz"`)
	f.StringVar(&flags.distances, "distance", "", `lengths of flight, such as "3 m" or "1 to 5 by 1 m"`)
	f.StringVar(&flags.indices, "index", "", `refractive indices, such as "1.0003, 1.05, 1.33"`)
	return c
}

// request reads the flags.
func (f *motionFlags) request(args []string) (*kinegatev1.ConvertMotionRequest, error) {
	r := &kinegatev1.ConvertMotionRequest{}
	switch {
	case (len(args) == 1) == (f.mass != ""):
		return nil, badInput("name a particle or give --mass, one of them")
	case len(args) == 1 && f.charge != "":
		return nil, badInput("--charge belongs to --mass; %s has its own", args[0])
	case len(args) == 1:
		r.Body = &kinegatev1.ConvertMotionRequest_Particle{Particle: args[0]}
	default:
		mass, err := energy("--mass", f.mass)
		if err != nil {
			return nil, err
		}
		r.Body = &kinegatev1.ConvertMotionRequest_MassGev{MassGev: mass}
		if r.ChargeThirds, err = thirds(f.charge); err != nil {
			return nil, err
		}
	}
	if err := f.value(r); err != nil {
		return nil, err
	}
	var err error
	if f.distances != "" {
		if r.DistancesM, err = quantity.ParseList(f.distances, quantity.Length); err != nil {
			return nil, badInput("--distance: %w", err)
		}
	}
	if f.indices != "" {
		if r.RefractiveIndices, err = quantity.ParseNumbers(f.indices); err != nil {
			return nil, badInput("--index: %w", err)
		}
	}
	return r, nil
}

// thirds reads a charge in units of the positron's.
func thirds(text string) (int32, error) {
	if text == "" {
		return 0, nil
	}
	const perCharge = 3
	whole, isThird := strings.CutSuffix(text, "/3")
	x, err := quantity.ParseNumber(whole)
	if !isThird {
		x *= perCharge
	}
	if err != nil || x != math.Trunc(x) || math.Abs(x) > 1e6 {
		return 0, badInput("--charge %q: a whole number or thirds are allowed, such as 1, -2 or 2/3", text)
	}
	return int32(x), nil
}

// value reads the one quantity of the motion.
func (f *motionFlags) value(r *kinegatev1.ConvertMotionRequest) error {
	given := ""
	for _, q := range []struct {
		name, text string
		set        func(float64)
		read       func(string) (float64, error)
	}{
		{"energy", f.energy, func(x float64) { r.Value = &kinegatev1.ConvertMotionRequest_TotalEnergyGev{TotalEnergyGev: x} }, of(quantity.Energy)},
		{"kinetic", f.kinetic, func(x float64) {
			r.Value = &kinegatev1.ConvertMotionRequest_KineticEnergyGev{KineticEnergyGev: x}
		}, of(quantity.Energy)},
		{"momentum", f.momentum, func(x float64) { r.Value = &kinegatev1.ConvertMotionRequest_MomentumGev{MomentumGev: x} }, of(quantity.Energy)},
		{"beta", f.beta, func(x float64) { r.Value = &kinegatev1.ConvertMotionRequest_Beta{Beta: x} }, quantity.ParseNumber},
		{"gamma", f.gamma, func(x float64) { r.Value = &kinegatev1.ConvertMotionRequest_Gamma{Gamma: x} }, quantity.ParseNumber},
		{"rigidity", f.rigidity, func(x float64) { r.Value = &kinegatev1.ConvertMotionRequest_RigidityGv{RigidityGv: x} }, of(quantity.Rigidity)},
		{"wavelength", f.wavelength, func(x float64) { r.Value = &kinegatev1.ConvertMotionRequest_WavelengthM{WavelengthM: x} }, of(quantity.Length)},
		{"frequency", f.frequency, func(x float64) { r.Value = &kinegatev1.ConvertMotionRequest_FrequencyHz{FrequencyHz: x} }, of(quantity.Frequency)},
	} {
		if q.text == "" {
			continue
		}
		if given != "" {
			return badInput("--%s and --%s both say how fast it is; give one", given, q.name)
		}
		given = q.name
		x, err := q.read(q.text)
		if err != nil {
			return badInput("--%s: %w", q.name, err)
		}
		q.set(x)
	}
	if given == "" {
		return badInput("say how fast it is: --energy, --kinetic, --momentum, --beta, --gamma, --rigidity, --wavelength or --frequency")
	}
	return nil
}

// of reads a quantity of a dimension.
func of(dimension quantity.Dimension) func(string) (float64, error) {
	return func(text string) (float64, error) { return quantity.Parse(text, dimension) }
}

func (e *environment) printMotion(r *kinegatev1.ConvertMotionResponse) error {
	name := r.GetParticle()
	if name == "" {
		name = "body"
	}
	e.print("%s  mass %s, charge %s", name, gevs(r.GetMassGev()), thirdsText(r.GetChargeThirds()))
	t := text.NewTable("", "")
	t.Row("total energy", gev(r.GetTotalEnergyGev()))
	t.Row("kinetic energy", gev(r.GetKineticEnergyGev()))
	t.Row("momentum", gev(r.GetMomentumGev()))
	t.Row("beta", fmt.Sprintf("%.9g, 1 - beta = %.7g", r.GetBeta(), r.GetOneMinusBeta()))
	if r.Gamma != nil {
		t.Row("gamma", fmt.Sprintf("%.9g, beta gamma = %.7g", r.GetGamma(), r.GetBetaGamma()))
	}
	if r.RigidityGv != nil {
		t.Row("rigidity", quantity.Format(r.GetRigidityGv(), quantity.Rigidity, digits))
	}
	if r.WavelengthM != nil {
		t.Row("wavelength", quantity.Format(r.GetWavelengthM(), quantity.Length, digits))
		t.Row("frequency", quantity.Format(r.GetFrequencyHz(), quantity.Frequency, digits))
	}
	if err := t.Write(e.out); err != nil {
		return err
	}
	if len(r.GetFlights()) > 0 {
		e.print("")
		t := text.NewTable(">flight over", ">takes", ">later than light")
		seconds := func(x float64) string { return quantity.Format(x, quantity.Time, digits) }
		for _, f := range r.GetFlights() {
			t.Row(trimZeros(quantity.Format(f.GetDistanceM(), quantity.Length, digits)),
				shown(f.TimeS != nil, f.GetTimeS(), seconds), shown(f.DelayAfterLightS != nil, f.GetDelayAfterLightS(), seconds))
		}
		if err := t.Write(e.out); err != nil {
			return err
		}
	}
	if len(r.GetCherenkovLights()) > 0 {
		e.print("")
		t := text.NewTable(">refractive index", ">Cherenkov angle", ">threshold beta", ">momentum", ">kinetic energy")
		for _, c := range r.GetCherenkovLights() {
			angle := shown(c.AngleRad != nil, c.GetAngleRad(), degrees)
			if !c.GetRadiates() {
				angle = "no light"
			}
			t.Row(number(c.GetRefractiveIndex()), angle, shown(c.ThresholdBeta != nil, c.GetThresholdBeta(), number),
				shown(c.ThresholdMomentumGev != nil, c.GetThresholdMomentumGev(), gevs),
				shown(c.ThresholdKineticEnergyGev != nil, c.GetThresholdKineticEnergyGev(), gevs))
		}
		if err := t.Write(e.out); err != nil {
			return err
		}
	}
	e.print("\n  particle table %s", r.GetTableVersion())
	return nil
}
