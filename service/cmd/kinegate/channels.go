package main

import (
	"context"
	"fmt"
	"strings"

	"github.com/spf13/cobra"

	kinegate "example.org/kinegate/clients/go"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/cmd/kinegate/internal/text"
)

// channelsFlags say which channels are wanted.
type channelsFlags struct {
	bodies, leastBodies int64
	products            []string
	ignored             []string
	rules               bool
	limit               int
}

// channelsCommand lists open channels.
func channelsCommand(p program) *cobra.Command {
	e := newEnvironment(p)
	initial := &initialFlags{}
	flags := &channelsFlags{}
	var picture drawing
	c := &cobra.Command{
		Use:   "channels BEAM TARGET",
		Short: "List every final state that the conservation laws and the energy allow",
		Long: "channels lists the final states of up to five bodies that the conservation laws allow and\n" +
			"the energy opens, by the sum of their masses, and the one that opens next. Channels are\n" +
			"made of what is stable against the strong decay, with eta, omega, eta' and phi, unless\n" +
			"--products names others. Spin, C and Bose symmetry forbid more; --spin-rules applies them.\n" +
			"It exits with 3 if no channel is open.",
		Example: `  kinegate channels gamma p --beam "1.2 GeV"
  kinegate channels gamma p --beam "1.2 GeV" --bodies 3 --products "p n pi+ pi- pi0"
  kinegate channels gamma gamma --sqrt-s "1 GeV" --spin-rules`,
		Args: usage(cobra.ExactArgs(2)),
		RunE: func(c *cobra.Command, args []string) error {
			request, err := flags.request(args)
			if err != nil {
				return err
			}
			if request.InitialState, err = initial.required(strings.Join(args, " ") + " ->"); err != nil {
				return err
			}
			client, closeClient, err := e.connect(c.Context())
			if err != nil {
				return err
			}
			defer closeClient()
			return e.listChannels(c.Context(), client, request, flags.limit, &picture)
		},
	}
	e.flags(c)
	initial.add(c)
	picture.flag(c)
	f := c.Flags()
	f.Int64Var(&flags.bodies, "bodies", 2, "largest number of bodies, 1 to 5")
	f.Int64Var(&flags.leastBodies, "least-bodies", 0, "least number of bodies, 1 to 5; 2 or --bodies if not given")
	f.StringSliceVar(&flags.products, "products", nil, `particles of which channels are made, such as "p n pi+ pi-"`)
	f.StringSliceVar(&flags.ignored, "ignore", nil, "laws that are not applied, such as strangeness or charm")
	f.BoolVar(&flags.rules, "spin-rules", false, "also apply what spin, C and Bose symmetry forbid; two real photons make no spin 1")
	f.IntVar(&flags.limit, "limit", 50, "most channels to print, 0 for all")
	return c
}

// request reads the flags.
func (f *channelsFlags) request(names []string) (*kinegatev1.ListOpenChannelsRequest, error) {
	request := &kinegatev1.ListOpenChannelsRequest{
		InitialParticles: names, MinBodyCount: f.leastBodies, MaxBodyCount: f.bodies, WithSpinCBose: f.rules,
	}
	for _, list := range f.products {
		request.Products = append(request.Products, strings.Fields(list)...)
	}
	for _, name := range f.ignored {
		law, ok := kinegatev1.ConservationLaw_value["CONSERVATION_LAW_"+strings.ToUpper(strings.NewReplacer(" ", "_", "-", "_").Replace(name))]
		if !ok || law == 0 {
			return nil, badInput("--ignore: there is no law %q; laws are charge, baryon-number, electron-number, muon-number,\n"+
				"tau-number, strangeness, charm, bottomness and topness", name)
		}
		request.IgnoredLaws = append(request.IgnoredLaws, kinegatev1.ConservationLaw(law))
	}
	if f.limit < 0 {
		return nil, badInput("--limit %d: at least 0", f.limit)
	}
	return request, nil
}

// listChannels walks the pages and prints them.
func (e *environment) listChannels(
	ctx context.Context, client *kinegate.Client, request *kinegatev1.ListOpenChannelsRequest, limit int, picture *drawing,
) error {
	draw, err := picture.asked()
	if err != nil {
		return err
	}
	var channels []*kinegatev1.OpenChannel
	t := text.NewTable("channel", ">excess energy", ">beam energy at threshold", "")
	const largestPage = 1000
	for {
		request.PageSize = largestPage
		if limit > 0 {
			request.PageSize = int32(min(largestPage, limit-t.Rows())) //nolint:gosec // at most largestPage
		}
		calling, cancel := e.calling(ctx)
		reply, err := client.Reactions.ListOpenChannels(calling, request)
		cancel()
		if err != nil {
			return err
		}
		for _, channel := range reply.GetChannels() {
			channelRow(t, channel)
		}
		if draw {
			channels = append(channels, reply.GetChannels()...)
		}
		request.PageToken = reply.GetNextPageToken()
		last := request.GetPageToken() == "" || limit > 0 && t.Rows() >= limit
		if err := e.tell(reply, func() error {
			if !last {
				return nil
			}
			return e.printChannels(t, request, reply)
		}); err != nil {
			return err
		}
		if !last {
			continue
		}
		if draw {
			if err := picture.save(e, channelsPicture(request.GetInitialParticles(), channels, reply)); err != nil {
				return err
			}
		}
		if reply.GetChannelCount() == 0 {
			return errNo
		}
		return nil
	}
}

// channelRow adds one channel.
func channelRow(t *text.Table, c *kinegatev1.OpenChannel) {
	threshold := "-"
	switch {
	case c.GetThreshold().GetOpenAtRest():
		threshold = "open at rest"
	case c.GetThreshold().TotalEnergyGev != nil:
		threshold = gev(c.GetThreshold().GetTotalEnergyGev()) + plusMinus(c.GetThreshold().GetEnergyUncertaintyGev())
	}
	state := ""
	if c.GetState() != kinegatev1.ChannelState_CHANNEL_STATE_OPEN {
		state = strings.TrimSpace(stateText(c.GetState()))
	}
	t.Row(strings.Join(c.GetProducts(), " "), gev(c.GetExcessEnergyGev()), threshold, state)
}

// printChannels prints the rows and what belongs to all of them.
func (e *environment) printChannels(
	t *text.Table, request *kinegatev1.ListOpenChannelsRequest, reply *kinegatev1.ListOpenChannelsResponse,
) error {
	e.print("%s at sqrt(s) %s", strings.Join(request.GetInitialParticles(), " "), gev(reply.GetCentreOfMass().GetSqrtSGev()))
	shownRows := t.Rows()
	if next := reply.GetNextToOpen(); next != nil {
		t.Row()
		channelRow(t, next)
	}
	if err := t.Write(e.out); err != nil {
		return err
	}
	counted := fmt.Sprintf("%d channels", reply.GetChannelCount())
	if int64(shownRows) < reply.GetChannelCount() {
		counted = fmt.Sprintf("%d of %d channels (--limit 0 prints all)", shownRows, reply.GetChannelCount())
	}
	e.print("\n  %s of up to %d bodies, made of %d particles", counted, reply.GetCompleteBodyCount(), len(reply.GetProducts()))
	if !reply.GetComplete() {
		e.print("  complete to %d bodies only: more are too much work; name fewer --products", reply.GetCompleteBodyCount())
	}
	if names := request.GetInitialParticles(); !request.GetWithSpinCBose() && len(names) == 2 && names[0] == "gamma" && names[1] == "gamma" {
		e.print("  spin, C and Bose symmetry are not applied and forbid some of these: --spin-rules")
	}
	e.print("  %s; particle table %s", reply.GetFrame(), reply.GetTableVersion())
	return nil
}
