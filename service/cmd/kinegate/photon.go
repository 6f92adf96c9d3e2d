package main

import (
	"context"
	"fmt"
	"math"
	"strings"

	"github.com/spf13/cobra"

	kinegate "example.org/kinegate/clients/go"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/cmd/kinegate/internal/plot"
	"example.org/kinegate/service/cmd/kinegate/internal/quantity"
)

// photonCommand holds the processes with real photons together. Each has a file of its
// own.
func photonCommand(p program) *cobra.Command {
	c := &cobra.Command{
		Use:   "photon",
		Short: "Describe processes with real photons: pairs, Compton, backscattered light, annihilation",
		Long: "photon gives cross-sections, spectra, edges and thresholds of processes with real\n" +
			"photons in the lowest order of quantum electrodynamics. Every answer says what it\n" +
			"leaves out.",
		Args: func(_ *cobra.Command, arguments []string) error { return unknownCommand(arguments) },
		RunE: func(c *cobra.Command, _ []string) error { return c.Help() },
	}
	c.AddCommand(photonPairCommand(p), photonComptonCommand(p), photonBackscatterCommand(p),
		photonAnnihilationCommand(p), photonFieldPairCommand(p))
	return c
}

// drawing is the flag that asks for a picture.
type drawing struct{ file string }

func (d *drawing) flag(c *cobra.Command) {
	c.Flags().StringVar(&d.file, "plot", "", "draw a picture into this file, as SVG or PNG by its extension")
}

// asked tells whether a picture is wanted, and refuses names that none can have.
func (d *drawing) asked() (bool, error) {
	if d.file == "" {
		return false, nil
	}
	if err := plot.Check(d.file); err != nil {
		return false, badInput("--plot: %w", err)
	}
	return true, nil
}

// save draws the picture and says so.
func (d *drawing) save(e *environment, p *plot.Picture) error {
	if err := p.Save(d.file); err != nil {
		return err
	}
	if !e.json {
		e.print("\n  picture: %s", d.file)
	}
	return nil
}

// photonProcess asks for one process.
func (e *environment) photonProcess(
	ctx context.Context, request *kinegatev1.DescribePhotonProcessRequest,
) (*kinegatev1.DescribePhotonProcessResponse, error) {
	var reply *kinegatev1.DescribePhotonProcessResponse
	err := e.asking(ctx, "", func(ctx context.Context, client *kinegate.Client) error {
		var err error
		reply, err = client.Photons.DescribePhotonProcess(ctx, request)
		return err
	})
	return reply, err
}

// photonAnswer asks for one process and prints the answer; describe prints it for people.
func (e *environment) photonAnswer(
	ctx context.Context, request *kinegatev1.DescribePhotonProcessRequest,
	describe func(*kinegatev1.DescribePhotonProcessResponse) error,
) (*kinegatev1.DescribePhotonProcessResponse, error) {
	reply, err := e.photonProcess(ctx, request)
	if err != nil {
		return nil, err
	}
	return reply, e.tell(reply, func() error {
		if err := describe(reply); err != nil {
			return err
		}
		e.omissions(reply.GetOmissions(), reply.GetTableVersion())
		return nil
	})
}

// omissions prints what an answer leaves out.
func (e *environment) omissions(list []string, version string) {
	e.print("")
	for i, line := range list {
		head := "  left out: "
		if i > 0 {
			head = "            "
		}
		e.print("%s%s", head, line)
	}
	e.print("  particle table %s", version)
}

// flagList reads flags that may be given several times.
func flagList(flag string, values []string, dimension quantity.Dimension) ([]float64, error) {
	var list []float64
	for _, value := range values {
		x, err := quantity.Parse(value, dimension)
		if err != nil {
			return nil, badInput("%s: %w", flag, err)
		}
		list = append(list, x)
	}
	return list, nil
}

// photonEnergy reads a flag that is the energy, wavelength or frequency of a photon.
func photonEnergy(flag, value string) (float64, error) {
	if value == "" {
		return 0, badInput("%s is required", flag)
	}
	x, err := quantity.ParsePhotonEnergy(value)
	if err != nil {
		return 0, badInput("%s: %w", flag, err)
	}
	return x, nil
}

// angleFlag reads an angle that may be absent.
func angleFlag(flag, value string) (*float64, error) {
	if value == "" {
		return nil, nil //nolint:nilnil // an angle that is not given
	}
	x, err := quantity.Parse(value, quantity.Angle)
	if err != nil {
		return nil, badInput("%s: %w", flag, err)
	}
	return &x, nil
}

// named is the particle of a command; the electron if none is given.
func named(args []string) string {
	if len(args) == 0 {
		return "e-"
	}
	return args[0]
}

func barn(x float64) string {
	if x == 0 {
		return "0 b"
	}
	return quantity.Format(x, quantity.CrossSection, digits)
}

// pairNames writes a pair with its particle in front.
func pairNames(name string) string {
	switch sign := name[len(name)-1:]; sign {
	case "-":
		return name + " " + strings.TrimSuffix(name, sign) + "+"
	case "+":
		return name + " " + strings.TrimSuffix(name, sign) + "-"
	}
	return name + " pair"
}

// narrow writes an angle in degrees, or in milliradian and below where it is small.
func narrow(x float64, digits int) string {
	const small = 0.01
	switch {
	case x == 0 || x >= small:
		return quantity.Format(x, quantity.Angle, digits)
	case x >= small/1000:
		return fmt.Sprintf("%.*g mrad", digits, x*1e3)
	}
	return fmt.Sprintf("%.*g urad", digits, x*1e6)
}

// span is n values from low to high in even steps, of their logarithm if wanted.
func span(low, high float64, n int, logarithmic bool) []float64 {
	list := make([]float64, n)
	for i := range list {
		share := float64(i) / float64(n-1)
		if logarithmic {
			list[i] = low * math.Pow(high/low, share)
		} else {
			list[i] = low*(1-share) + high*share
		}
	}
	list[0], list[n-1] = low, high
	return list
}

// scaleFor is the unit for an axis that reaches up to a value, and the factor that turns
// base units into it.
func scaleFor(most float64, dimension quantity.Dimension) (unit string, factor float64) {
	shown := quantity.Format(most, dimension, 3)
	number, unit, _ := strings.Cut(shown, " ")
	var x float64
	if _, err := fmt.Sscan(number, &x); err != nil || x == 0 || most == 0 {
		return unit, 1
	}
	return unit, math.Pow(10, math.Round(math.Log10(x/most)))
}

// scaled is a list times a factor.
func scaled(list []float64, factor float64) []float64 {
	out := make([]float64, len(list))
	for i, x := range list {
		out[i] = x * factor
	}
	return out
}

// largest is the largest finite number of lists.
func largest(lists ...[]float64) float64 {
	most := 0.0
	for _, list := range lists {
		for _, x := range list {
			if x > most && !math.IsInf(x, 0) {
				most = x
			}
		}
	}
	return most
}

// shortEnergy writes an energy with few digits.
func shortEnergy(x float64) string { return trimZeros(quantity.Format(x, quantity.Energy, 4)) }

// cosineSpan is the cosines of a picture, closer together towards the ends: all, or up
// to the largest asked for. High above the threshold, where nearly everything lies at
// |cosine| = 1, it leaves these ends out.
func cosineSpan(maxCosine, sqrtS, threshold float64) []float64 {
	const points, high, inner = 401, 10, 0.99
	reach := 1.0
	switch {
	case maxCosine > 0 && maxCosine < 1:
		reach = maxCosine
	case sqrtS > high*threshold:
		reach = inner
	}
	list := make([]float64, points)
	for i, angle := range span(math.Pi, 0, points, false) {
		list[i] = reach * math.Cos(angle)
	}
	return list
}

// perSolidAngle is the axis of a differential cross-section: logarithmic where it spans
// much, over five decades at most.
func perSolidAngle(unit string, lists ...[]float64) plot.Axis {
	most := largest(lists...)
	least := most
	for _, list := range lists {
		for _, x := range list {
			if x > 0 {
				least = math.Min(least, x)
			}
		}
	}
	a := plot.Axis{Label: "cross-section per solid angle (" + unit + "/sr)"}
	if first := lists[0]; most > 100*first[len(first)/2] {
		const decades, room = 1e-5, 1.5
		a.Log, a.Min, a.Max = true, math.Max(least/room, most*decades), most*room
	}
	return a
}

// energyTick writes an energy at a tick of a logarithmic axis.
func energyTick(x float64) string { return trimZeros(quantity.Format(x, quantity.Energy, 3)) }
