package main

import (
	"context"
	"fmt"
	"strconv"

	"github.com/spf13/cobra"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/cmd/kinegate/internal/text"
)

// boundCommand measures unweighting bounds.
func boundCommand(p program) *cobra.Command {
	b := &boundRun{generateRun: generateRun{environment: newEnvironment(p)}}
	c := &cobra.Command{
		Use:   "bound REACTION... | --request FILE.yaml",
		Short: "Measure the bound that unweighted events need",
		Long: "bound draws weights of each reaction and prints the largest and the mean one, as fractions\n" +
			"of a ceiling that no weight of phase space exceeds, and the bound to give to kinegate\n" +
			"generate --bound or to the bound of a generation file: the largest with a tenth of room.\n" +
			"The share of the draws that become events is the mean over the bound; without a bound it is\n" +
			"the mean. Events above a bound are kept with a weight above 1 and counted as overflows.",
		Example: `  kinegate bound "gamma p -> p pi+ pi- pi0" --beam "2 GeV"
  kinegate bound --request sample.yaml --draws 1000000`,
		RunE: func(c *cobra.Command, args []string) error { return b.run(c.Context(), args) },
	}
	b.flags(c)
	b.sample(c)
	c.Flags().Int64Var(&b.draws, "draws", 100_000, "number of draws for each reaction, 1 to 10000000")
	return c
}

// boundRun is one run of the command.
type boundRun struct {
	generateRun

	draws int64
	// unbounded are the channels that no bound makes faster, such as one of two products at
	// one energy, of which every draw is an event.
	unbounded []string
}

// boundRoom is the room above the largest weight that was drawn.
const boundRoom = 1.1

func (b *boundRun) run(ctx context.Context, reactions []string) error {
	if err := b.asked(reactions); err != nil {
		return err
	}
	if b.draws < 1 {
		return badInput("--draws %d: at least 1", b.draws)
	}
	client, closeClient, err := b.connect(ctx)
	if err != nil {
		return err
	}
	defer closeClient()
	generation, err := b.generation(ctx, client, reactions)
	if err != nil {
		return err
	}
	t := text.NewTable("reaction", ">largest", ">mean", ">bound", ">share kept")
	for i, c := range generation.GetChannels() {
		reply, err := client.Generation.MeasureBound(ctx, &kinegatev1.MeasureBoundRequest{
			Generation: generation, ChannelIndex: int32(i), DrawCount: b.draws,
		})
		if err != nil {
			if len(reactions) == 1 {
				err = underline(err, reactions[0])
			}
			return err
		}
		if err := b.tell(reply, func() error {
			b.row(t, c, reply)
			return nil
		}); err != nil {
			return err
		}
	}
	if b.json {
		return nil
	}
	if err := t.Write(b.out); err != nil {
		return err
	}
	for _, name := range b.unbounded {
		b.print("  %s: no bound below 1 fits; leave it out", name)
	}
	return nil
}

// row adds what was measured of a channel.
func (b *boundRun) row(t *text.Table, c *kinegatev1.GenerationChannel, m *kinegatev1.MeasureBoundResponse) {
	name := c.GetName()
	if name == "" {
		name = c.GetReaction()
	}
	bound, kept := min(1, boundRoom*m.GetLargest()), 0.0
	if bound > 0 {
		kept = m.GetMean() / bound
	}
	if bound == 1 {
		b.unbounded = append(b.unbounded, name)
	}
	t.Row(name, significant(m.GetLargest()), significant(m.GetMean()), significant(bound), fmt.Sprintf("%.1f %%", 100*kept))
}

func significant(x float64) string { return strconv.FormatFloat(x, 'g', 4, 64) }
