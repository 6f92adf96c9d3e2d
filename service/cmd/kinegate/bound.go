package main

import (
	"context"
	"fmt"
	"strconv"

	"github.com/spf13/cobra"

	kinegate "example.org/kinegate/clients/go"
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
			"The share of the draws that become events is the mean over the bound. kinegate generate\n" +
			"measures the bounds that it is not given in the same way. Events above a bound are kept with a weight above 1 and counted as overflows.",
		Example: `  kinegate bound "gamma p -> p pi+ pi- pi0" --beam "2 GeV"
  kinegate bound --request sample.yaml --draws 1000000`,
		RunE: func(c *cobra.Command, args []string) error { return b.run(c.Context(), args) },
	}
	b.flags(c)
	b.sample(c)
	c.Flags().Int64Var(&b.draws, "draws", boundDraws, "number of draws for each reaction, 1 to 10000000")
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
		reply, err := measureBound(ctx, client, generation, i, b.draws)
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
	name := channelName(c)
	bound, kept := boundOf(m), 0.0
	if bound > 0 {
		kept = m.GetMean() / bound
	}
	if bound == 1 {
		b.unbounded = append(b.unbounded, name)
	}
	t.Row(name, significant(m.GetLargest()), significant(m.GetMean()), significant(bound), fmt.Sprintf("%.1f %%", 100*kept))
}

// channelName is what a channel is called.
func channelName(c *kinegatev1.GenerationChannel) string {
	if c.GetName() != "" {
		return c.GetName()
	}
	return c.GetReaction()
}

// measureBound asks for the weights of channel i.
func measureBound(
	ctx context.Context, client *kinegate.Client, generation *kinegatev1.Generation, i int, draws int64,
) (*kinegatev1.MeasureBoundResponse, error) {
	return client.Generation.MeasureBound(ctx, &kinegatev1.MeasureBoundRequest{
		Generation: generation, ChannelIndex: int32(i), DrawCount: draws, //nolint:gosec // the server allows few channels
	})
}

// boundOf is the bound for the weights that were drawn, as it is printed: so it can be given
// again, and the sample is the same.
func boundOf(m *kinegatev1.MeasureBoundResponse) float64 {
	bound, err := strconv.ParseFloat(significant(boundRoom*m.GetLargest()), 64)
	if err != nil { // never, as it has just been printed
		return 1
	}
	return min(1, bound)
}

// settleBounds gives a bound to every channel of an unweighted sample that has none: the one
// that kinegate bound prints for this seed. Without it events of many particles would be given
// up, since hardly any draw comes near the ceiling.
func (g *generateRun) settleBounds(ctx context.Context, client *kinegate.Client, generation *kinegatev1.Generation) error {
	if generation.GetWeighted() {
		return nil
	}
	for i, c := range generation.GetChannels() {
		if c.Bound != nil {
			continue
		}
		reply, err := measureBound(ctx, client, generation, i, boundDraws)
		if err != nil {
			return err
		}
		if bound := boundOf(reply); bound > 0 && bound < 1 {
			c.Bound = &bound
			g.measured = append(g.measured, measuredBound{channelName(c), significant(bound)})
		}
	}
	for _, m := range g.measured {
		_, _ = fmt.Fprintf(g.err, "bound %s, measured with %d draws, of %s\n", m.bound, boundDraws, m.channel)
	}
	return nil
}

// boundDraws is the number of draws of a bound that is not given, and of kinegate bound.
const boundDraws = 100_000

// measuredBound is a bound that was not given.
type measuredBound struct{ channel, bound string }

func significant(x float64) string { return strconv.FormatFloat(x, 'g', 4, 64) }
