package main

import (
	"context"
	"fmt"
	"math"

	"github.com/spf13/cobra"

	kinegate "example.org/kinegate/clients/go"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/cmd/kinegate/internal/quantity"
	"example.org/kinegate/service/cmd/kinegate/internal/text"
)

// decayFlags say how the parent moves and what is wanted beside the limits.
type decayFlags struct {
	total, kinetic, momentum         string
	distances, stretches             []string
	openings, restCosines, labAngles string
}

// decayValues are the lists of the flags, for the headings of what is printed.
type decayValues struct {
	openings, restCosines, labAngles []float64
}

// decayCommand describes a decay at rest or in flight.
func decayCommand(p program) *cobra.Command {
	e := newEnvironment(p)
	flags := &decayFlags{}
	var picture drawing
	c := &cobra.Command{
		Use:   "decay TEXT",
		Short: "Say what a decay releases and where its daughters go, at rest or in flight",
		Long: "decay says what energy a decay releases, where its daughters go, and how far the parent\n" +
			"flies. A comma adds the decay of a daughter, whose daughters then have limits too.\n" +
			"It exits with 0 if the decay is open and with 3 if it is closed.",
		Example: `  kinegate decay "Lambda -> p pi-" --parent-momentum "1 GeV" --distance "5 cm" --between "5 to 20 cm"
  kinegate decay "pi0 -> gamma gamma" --parent "2 GeV" --opening-angle "8, 10, 12 deg"
  kinegate decay "Sigma0 -> Lambda gamma, Lambda -> p pi-" --parent "2 GeV"`,
		Args: usage(cobra.ExactArgs(1)),
		RunE: func(c *cobra.Command, args []string) error {
			request, values, err := flags.request(args[0])
			if err != nil {
				return err
			}
			draw, err := picture.asked()
			if err != nil {
				return err
			}
			return e.asking(c.Context(), args[0], func(ctx context.Context, client *kinegate.Client) error {
				reply, err := client.Decays.DescribeDecay(ctx, request)
				if err != nil {
					return err
				}
				if err := e.tell(reply, func() error { return e.describeDecay(reply, flags, values) }); err != nil {
					return err
				}
				if draw {
					if err := e.drawDecay(ctx, client, request, reply, &picture); err != nil {
						return err
					}
				}
				if reply.GetState() == kinegatev1.ChannelState_CHANNEL_STATE_CLOSED {
					return errNo
				}
				return nil
			})
		},
	}
	e.flags(c)
	picture.flag(c)
	f := c.Flags()
	f.StringVar(&flags.total, "parent", "", "total energy of the parent; at rest if none of the three is given")
	f.StringVar(&flags.kinetic, "parent-kinetic", "", "kinetic energy of the parent")
	f.StringVar(&flags.momentum, "parent-momentum", "", "momentum of the parent")
	f.StringArrayVar(&flags.distances, "distance", nil, "distance at which the surviving fraction is wanted; may be given several times")
	f.StringArrayVar(&flags.stretches, "between", nil,
		`stretch of the flight in which the decaying fraction is wanted, such as "5 to 20 cm" or "20 cm on"; may be given several times`)
	f.StringVar(&flags.openings, "opening-angle", "", "opening angles of two photons at which density and fraction are wanted")
	f.StringVar(&flags.restCosines, "rest-cosine", "", "cosines of the first of two daughters in the rest frame for which both are wanted")
	f.StringVar(&flags.labAngles, "lab-angle", "", "laboratory angles of the first of two daughters for which both are wanted")
	return c
}

// request reads the flags.
func (f *decayFlags) request(decay string) (*kinegatev1.DescribeDecayRequest, *decayValues, error) {
	request, values := &kinegatev1.DescribeDecayRequest{Form: &kinegatev1.DescribeDecayRequest_Decay{Decay: decay}}, &decayValues{}
	var err error
	if request.Parent, err = motion("--parent", f.total, f.kinetic, f.momentum, false); err != nil {
		return nil, nil, err
	}
	for _, d := range f.distances {
		x, err := quantity.Parse(d, quantity.Length)
		if err != nil {
			return nil, nil, badInput("--distance: %w", err)
		}
		request.DistancesM = append(request.DistancesM, x)
	}
	for _, s := range f.stretches {
		from, to, err := quantity.ParseRange(s, quantity.Length)
		if err != nil {
			return nil, nil, badInput("--between: %w", err)
		}
		interval := &kinegatev1.DistanceInterval{FromM: from}
		if !math.IsInf(to, 0) {
			interval.ToM = &to
		}
		request.Intervals = append(request.Intervals, interval)
	}
	for _, list := range []struct {
		name, text string
		read       func(string) ([]float64, error)
		into       *[]float64
	}{
		{"opening-angle", f.openings, angles, &values.openings},
		{"rest-cosine", f.restCosines, quantity.ParseNumbers, &values.restCosines},
		{"lab-angle", f.labAngles, angles, &values.labAngles},
	} {
		if list.text == "" {
			continue
		}
		if *list.into, err = list.read(list.text); err != nil {
			return nil, nil, badInput("--%s: %w", list.name, err)
		}
	}
	request.OpeningAnglesRad, request.RestFrameCosines = values.openings, values.restCosines
	request.LaboratoryAnglesRad = values.labAngles
	return request, values, nil
}

func (e *environment) describeDecay(r *kinegatev1.DescribeDecayResponse, flags *decayFlags, values *decayValues) error {
	e.print("%s%s", r.GetDecay(), stateText(r.GetState()))
	t := text.NewTable("", "")
	t.Row("class", decayClassText(r.GetDecayClass()))
	t.Row("energy released", gev(r.GetReleasedEnergyGev())+plusMinus(r.GetReleasedEnergyUncertaintyGev()))
	parent := r.GetParent()
	if parent.GetMomentumGev() > 0 {
		t.Row("parent", fmt.Sprintf("energy %s, momentum %s, beta %.6f, gamma %.6g",
			gev(parent.GetTotalEnergyGev()), gev(parent.GetMomentumGev()), parent.GetBeta(), parent.GetGamma()))
	} else {
		t.Row("parent", "at rest, mass "+gev(parent.GetMassGev()))
	}
	if parent.MeanLifeS != nil {
		t.Row("mean life", quantity.Format(parent.GetMeanLifeS(), quantity.Time, digits))
	}
	if parent.MeanFlightM != nil && parent.GetMomentumGev() > 0 {
		t.Row("mean flight", quantity.Format(parent.GetMeanFlightM(), quantity.Length, digits))
	}
	for i, fraction := range r.GetSurvivingFractions() {
		t.Row("surviving after "+flags.distances[i], fmt.Sprintf("%.6g", fraction))
	}
	for i, fraction := range r.GetDecayingFractions() {
		t.Row("decaying in "+flags.stretches[i], fmt.Sprintf("%.6g", fraction))
	}
	if o := r.GetOpeningAngle(); o != nil && parent.GetMomentumGev() > 0 {
		t.Row("opening angle", angleRange(o))
	}
	for _, remark := range r.GetRemarks() {
		t.Row("remark", remark)
	}
	if err := t.Write(e.out); err != nil {
		return err
	}
	if err := e.printDaughters(r); err != nil {
		return err
	}
	if err := e.printOpenings(r, values); err != nil {
		return err
	}
	if err := e.printPairs(r, values); err != nil {
		return err
	}
	e.print("\n  angles from the parent's direction; particle table %s", r.GetTableVersion())
	return nil
}
