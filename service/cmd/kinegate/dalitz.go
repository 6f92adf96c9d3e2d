package main

import (
	"context"
	"fmt"
	"strings"

	"github.com/spf13/cobra"

	kinegate "example.org/kinegate/clients/go"
	"example.org/kinegate/proto/column"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/cmd/kinegate/internal/quantity"
	"example.org/kinegate/service/cmd/kinegate/internal/text"
)

// dalitzCommand traces the boundary of three bodies.
func dalitzCommand(p program) *cobra.Command {
	e := newEnvironment(p)
	initial := &initialFlags{}
	var bands []string
	var resolution float64
	var points bool
	var picture drawing
	c := &cobra.Command{
		Use:   "dalitz TEXT",
		Short: "Trace the Dalitz boundary of a decay or reaction to three bodies",
		Long: "dalitz gives the region that three bodies can reach in the masses of their pairs, for a\n" +
			"decay or for a reaction at one or several energies, and the bands of resonances.\n" +
			"--points prints the closed curve of the boundary, squared masses in GeV^2.\n" +
			"It exits with 3 if the channel is closed at every energy.",
		Example: `  kinegate dalitz "omega -> pi+ pi- pi0" --points --resolution 0.05
  kinegate dalitz "gamma p -> p pi+ pi-" --sqrt-s "1.6 to 2.2 by 0.2 GeV" --band "pi+ pi- at 775 MeV"`,
		Args: usage(cobra.ExactArgs(1)),
		RunE: func(c *cobra.Command, args []string) error {
			request := &kinegatev1.TraceDalitzBoundaryRequest{
				Form:       &kinegatev1.TraceDalitzBoundaryRequest_Process{Process: args[0]},
				Resolution: resolution,
			}
			if err := readEnergies(request, initial, args[0]); err != nil {
				return err
			}
			for _, band := range bands {
				b, err := bandOf(band)
				if err != nil {
					return err
				}
				request.Bands = append(request.Bands, b)
			}
			draw, err := picture.asked()
			if err != nil {
				return err
			}
			return e.asking(c.Context(), args[0], func(ctx context.Context, client *kinegate.Client) error {
				reply, err := client.Decays.TraceDalitzBoundary(ctx, request)
				if err != nil {
					return err
				}
				if err := e.tell(reply, func() error { return e.printDalitz(reply, bands, points) }); err != nil {
					return err
				}
				if draw {
					drawn, err := dalitzPicture(reply, bands)
					if err != nil {
						return err
					}
					if err := picture.save(e, drawn); err != nil {
						return err
					}
				}
				for _, b := range reply.GetBoundaries() {
					if b.GetState() != kinegatev1.ChannelState_CHANNEL_STATE_CLOSED {
						return nil
					}
				}
				return errNo
			})
		},
	}
	e.flags(c)
	initial.add(c)
	picture.flag(c)
	f := c.Flags()
	f.Lookup("sqrt-s").Usage = `energies in the centre-of-mass frame, such as "1.8 GeV" or "1.6 to 2.2 by 0.2 GeV", in place of beams`
	f.StringArrayVar(&bands, "band", nil, `pair and mass whose stretch of the region is wanted, such as "pi+ pi- at 775 MeV"; may be given several times`)
	f.Float64Var(&resolution, "resolution", 0, "largest step along the boundary as a fraction of the region's extent, 0.0005 to 1; 0.01 if not given")
	f.BoolVar(&points, "points", false, "print the points of the boundary")
	return c
}

// readEnergies reads the energies: a list of sqrt(s), or beams.
func readEnergies(request *kinegatev1.TraceDalitzBoundaryRequest, initial *initialFlags, process string) error {
	list := initial.sqrtS
	if list == "" {
		left, _, _ := strings.Cut(process, "->")
		read := initial.initialState
		if len(strings.Fields(left)) > 1 { // a decay has its energy
			read = initial.required
		}
		state, err := read(process)
		request.InitialState = state
		return err
	}
	beams := *initial
	beams.sqrtS = ""
	if state, err := beams.initialState(process); err != nil {
		return err
	} else if state != nil {
		return badInput("--sqrt-s stands in place of beams; give one or the other")
	}
	energies, err := quantity.ParseList(list, quantity.Energy)
	if err != nil {
		return badInput("--sqrt-s: %w", err)
	}
	request.SqrtSGev = energies
	return nil
}

// bandOf reads a pair and a mass.
func bandOf(band string) (*kinegatev1.DalitzBandRequest, error) {
	pair, mass, ok := strings.Cut(band, " at ")
	if !ok {
		return nil, badInput("--band %q: write a pair and a mass, such as \"pi+ pi- at 775 MeV\"", band)
	}
	m, err := energy("--band", mass)
	if err != nil {
		return nil, err
	}
	return &kinegatev1.DalitzBandRequest{Products: strings.Fields(pair), MassSquaredGev2: m * m}, nil
}

func (e *environment) printDalitz(r *kinegatev1.TraceDalitzBoundaryResponse, bands []string, points bool) error {
	e.print("%s", r.GetProcess())
	name := r.GetProducts()
	pairs := [3]string{name[0] + " " + name[1], name[1] + " " + name[2], name[0] + " " + name[2]}
	t := text.NewTable(">sqrt(s)", "state", ">m2("+pairs[0]+")/GeV^2", ">m2("+pairs[1]+")/GeV^2", ">m2("+pairs[2]+")/GeV^2", ">points")
	for _, b := range r.GetBoundaries() {
		t.Row(gev(b.GetSqrtSGev()), strings.TrimSpace(stateText(b.GetState())), squareRange(b.GetFirstSecond()), squareRange(b.GetSecondThird()),
			squareRange(b.GetFirstThird()), fmt.Sprint(len(b.GetFirstSecondGev2())/8)) //nolint:mnd // bytes of a float64
	}
	if err := t.Write(e.out); err != nil {
		return err
	}
	if len(bands) > 0 {
		if err := e.printBands(r, pairs, bands); err != nil {
			return err
		}
	}
	if points {
		for _, b := range r.GetBoundaries() {
			if err := e.printPoints(b, pairs); err != nil {
				return err
			}
		}
	}
	e.print("\n  particle table %s", r.GetTableVersion())
	return nil
}

// printBands prints the ends of every band.
func (e *environment) printBands(r *kinegatev1.TraceDalitzBoundaryResponse, pairs [3]string, bands []string) error {
	e.print("")
	t := text.NewTable("band", ">sqrt(s)", "", ">m2("+pairs[0]+")", ">m2("+pairs[1]+")", ">m2("+pairs[2]+")")
	for _, b := range r.GetBoundaries() {
		for i, band := range b.GetBands() {
			if !band.GetInside() {
				t.Row(bands[i], gev(b.GetSqrtSGev()), "outside")
				continue
			}
			t.Row(bands[i], gev(b.GetSqrtSGev()), "from", number(band.GetStart().GetFirstSecondGev2()),
				number(band.GetStart().GetSecondThirdGev2()), number(band.GetStart().GetFirstThirdGev2()))
			t.Row("", "", "to", number(band.GetEnd().GetFirstSecondGev2()),
				number(band.GetEnd().GetSecondThirdGev2()), number(band.GetEnd().GetFirstThirdGev2()))
		}
	}
	return t.Write(e.out)
}

// printPoints prints the boundary at one energy.
func (e *environment) printPoints(b *kinegatev1.DalitzBoundary, pairs [3]string) error {
	var columns [3][]float64
	for i, raw := range [][]byte{b.GetFirstSecondGev2(), b.GetSecondThirdGev2(), b.GetFirstThirdGev2()} {
		xs, err := column.Float64s(raw)
		if err != nil {
			return err
		}
		columns[i] = xs
	}
	if len(columns[0]) != len(columns[1]) || len(columns[0]) != len(columns[2]) {
		return fmt.Errorf("the columns of the boundary have %d, %d and %d points", len(columns[0]), len(columns[1]), len(columns[2]))
	}
	e.print("\n  boundary at sqrt(s) %s", gev(b.GetSqrtSGev()))
	t := text.NewTable(">m2("+pairs[0]+")", ">m2("+pairs[1]+")", ">m2("+pairs[2]+")")
	for i := range columns[0] {
		t.Row(number(columns[0][i]), number(columns[1][i]), number(columns[2][i]))
	}
	return t.Write(e.out)
}

func squareRange(r *kinegatev1.SquareRange) string {
	if r == nil {
		return "-"
	}
	return number(r.GetMinGev2()) + " to " + number(r.GetMaxGev2())
}
