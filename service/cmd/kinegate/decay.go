package main

import (
	"fmt"

	"github.com/spf13/cobra"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/cmd/kinegate/internal/quantity"
	"example.org/kinegate/service/cmd/kinegate/internal/text"
)

// decayCommand describes a decay at rest or in flight.
func decayCommand(p program) *cobra.Command {
	e := newEnvironment(p)
	var total, kinetic, momentum string
	var distances []string
	c := &cobra.Command{
		Use:   "decay TEXT",
		Short: "Say what a decay releases and where its daughters go, at rest or in flight",
		Long: "decay says what energy a decay releases, where its daughters go, and how far the parent\n" +
			"flies. It exits with 0 if the decay is open and with 3 if it is closed.",
		Example: `  kinegate decay "Lambda -> p pi-" --parent-momentum "1 GeV" --distance "5 cm"
  kinegate decay "pi0 -> gamma gamma" --parent "2 GeV"`,
		Args: usage(cobra.ExactArgs(1)),
		RunE: func(c *cobra.Command, args []string) error {
			request := &kinegatev1.DescribeDecayRequest{Decay: args[0]}
			var err error
			if request.Parent, err = motion("--parent", total, kinetic, momentum, false); err != nil {
				return err
			}
			for _, d := range distances {
				x, err := quantity.Parse(d, quantity.Length)
				if err != nil {
					return badInput("--distance: %w", err)
				}
				request.DistancesM = append(request.DistancesM, x)
			}
			client, closeClient, err := e.connect(c.Context())
			if err != nil {
				return err
			}
			defer closeClient()
			ctx, cancel := e.calling(c.Context())
			defer cancel()
			reply, err := client.Decays.DescribeDecay(ctx, request)
			if err != nil {
				return underline(err, args[0])
			}
			if done, err := e.reply(reply); err != nil {
				return err
			} else if !done {
				if err := e.describeDecay(reply, distances); err != nil {
					return err
				}
			}
			if reply.GetState() == kinegatev1.ChannelState_CHANNEL_STATE_CLOSED {
				return errNo
			}
			return nil
		},
	}
	e.flags(c)
	f := c.Flags()
	f.StringVar(&total, "parent", "", "total energy of the parent; at rest if none of the three is given")
	f.StringVar(&kinetic, "parent-kinetic", "", "kinetic energy of the parent")
	f.StringVar(&momentum, "parent-momentum", "", "momentum of the parent")
	f.StringArrayVar(&distances, "distance", nil, "distance at which the surviving fraction is wanted; may be given several times")
	return c
}

func (e *environment) describeDecay(r *kinegatev1.DescribeDecayResponse, distances []string) error {
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
		t.Row("surviving after "+distances[i], fmt.Sprintf("%.6g", fraction))
	}
	if o := r.GetOpeningAngle(); o != nil && parent.GetMomentumGev() > 0 {
		t.Row("opening angle", angleRange(o))
	}
	if err := t.Write(e.out); err != nil {
		return err
	}
	if len(r.GetDaughters()) > 0 {
		e.print("")
		t := text.NewTable("daughter", ">momentum (rest)", ">energy (lab)", ">momentum (lab)", ">angle (lab)")
		for _, d := range r.GetDaughters() {
			t.Row(d.GetProduct(), energyRange(d.GetRestFrameMomentum()), energyRange(d.GetLaboratoryEnergy()),
				energyRange(d.GetLaboratoryMomentum()), angleRange(d.GetLaboratoryAngle()))
		}
		if err := t.Write(e.out); err != nil {
			return err
		}
	}
	e.print("\n  angles from the parent's direction; particle table %s", r.GetTableVersion())
	return nil
}
