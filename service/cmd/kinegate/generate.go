package main

import (
	"context"
	"errors"
	"fmt"
	"os"
	"strings"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"

	kinegate "example.org/kinegate/clients/go"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/api"
	"example.org/kinegate/service/cmd/kinegate/internal/quantity"
)

// generateCommand makes simulated events.
func generateCommand(p program) *cobra.Command {
	g := &generateRun{environment: newEnvironment(p)}
	c := &cobra.Command{
		Use:   "generate REACTION... | --request FILE.yaml",
		Short: "Make simulated events, decayed and measured, into a table or a file",
		Long: "generate makes events of a reaction, or of a mixture of several with equal shares, and\n" +
			"prints the first ones and a summary. Event i of a seed is the same event whatever slice it\n" +
			"is made in. With --detector the events are measured too, and the table shows what is seen\n" +
			"below the true particles. Files: .csv and .kgb, which kinegate judge reads, hold what is\n" +
			"seen and no truth, .parquet (one row an event) both. A .kgb file holds event blocks, each\n" +
			"behind its length, with covariances and vertices, for which .csv has no columns. Without a\n" +
			"detector a file holds the true particles that would reach one. --request takes the full\n" +
			"form: shares, bounds, energy and angular shapes, spectra, targets, decays. Beside it only\n" +
			"--seed and --detector say what is simulated, and take the place of the file's own.",
		Example: `  kinegate generate "` + omegaExample + `" --beam-range "1.2 GeV:2.4 GeV" --events 10000 --seed 1
  kinegate generate "gamma p -> K+ Lambda, Lambda -> p pi-" --beam "1.5 GeV" --detector hall.yaml --out events.csv
  kinegate generate "omega -> pi+ pi- pi0" --events 1000 --out decays.parquet
  kinegate generate --request sample.yaml --seed 2 --first-event 100000 --events 50000 --out slice.kgb`,
		RunE: func(c *cobra.Command, args []string) error {
			g.seeded = c.Flags().Changed("seed")
			return g.run(c.Context(), args)
		},
	}
	g.flags(c)
	g.sample(c)
	g.described.BoolVar(&g.weighted, "weighted", false, "events with weights, in place of unweighted ones; of one reaction only")
	g.described.Float64Var(&g.bound, "bound", 0, "unweighting bound as kinegate bound measures it, above 0; of one reaction only; left out it\n"+
		"is measured first, and printed")
	f := c.Flags()
	f.AddFlagSet(g.described)
	f.Int64Var(&g.events, "events", 1000, "number of events, at least 0")
	f.Int64Var(&g.first, "first-event", 0, "number of the first event")
	f.Int64Var(&g.seed, "seed", 1, "seed of the events; beside --request it takes the place of the file's seed")
	f.StringVar(&g.detectorFile, "detector", "", "detector file (YAML), in place of the detector of --request; without one there is only the truth")
	f.StringVar(&g.outFile, "out", "", "write the events to this file: .csv, .parquet or .kgb")
	f.IntVar(&g.show, "show", 2, "number of events to print")
	f.StringVar(&g.observable, "observable", "", "what is drawn of the true events: the mass, or the energy or polar angle in the laboratory,\n"+
		"of a product or of the sum of several, such as \"mass omega\", \"energy K+\", \"angle p, pi0[1]\";\n"+
		"with --plot alone the mass of the first product without a sharp one, or else the energy of\n"+
		"the first product")
	g.picture.flag(c)
	return c
}

// eventsPerBlock is at most what kinegate judge sends in a block by default.
const eventsPerBlock = 1000

const omegaExample = "gamma p -> p omega, omega -> pi0 gamma, pi0 -> gamma gamma"

// sample adds the flags that say what is simulated.
func (g *generateRun) sample(c *cobra.Command) {
	inPlace := &cobra.Command{}
	g.initial.add(inPlace)
	f := inPlace.Flags()
	f.StringVar(&g.beamRange, "beam-range", "", `energies of the beam, equally likely, as "LOW:HIGH"`)
	f.StringVar(&g.electrons, "bremsstrahlung", "", "energy of the electrons whose radiated photons the beam is, with complete screening; needs --beam-range")
	g.described = f
	c.Flags().AddFlagSet(f)
	c.Flags().StringVar(&g.requestFile, "request", "", "generation file (YAML), in place of reactions and flags of the beam")
}

// asked checks that there is something to simulate, once.
func (g *generateRun) asked(reactions []string) error {
	if (len(reactions) == 0) == (g.requestFile == "") {
		return badInput("name a reaction, or a file with --request; one or the other")
	}
	if g.requestFile == "" {
		return nil
	}
	var ignored []string
	g.described.VisitAll(func(f *pflag.Flag) {
		if f.Changed {
			ignored = append(ignored, "--"+f.Name)
		}
	})
	switch len(ignored) {
	case 0:
		return nil
	case 1:
		return badInput("%s is for reactions named here; the file of --request says this itself", ignored[0])
	}
	return badInput("%s are for reactions named here; the file of --request says this itself", strings.Join(ignored, ", "))
}

// generateRun is one run of the command.
type generateRun struct {
	*environment

	// described are the flags whose place a file takes.
	described                          *pflag.FlagSet
	initial                            initialFlags
	beamRange, electrons               string
	events, first, seed                int64
	seeded, weighted                   bool
	bound                              float64
	measured                           []measuredBound // bounds that were not given
	detectorFile, requestFile, outFile string
	show                               int
	observable                         string
	picture                            drawing
}

func (g *generateRun) run(ctx context.Context, reactions []string) error {
	draw, err := g.picture.asked()
	if err != nil {
		return err
	}
	if err := g.asked(reactions); err != nil {
		return err
	}
	var drawn *observableSample
	if draw || g.observable != "" {
		if g.events == 0 {
			return badInput("--events 0 leaves nothing to draw")
		}
		if drawn, err = newObservableSample(g.observable); err != nil {
			return err
		}
	}
	client, closeClient, err := g.connect(ctx)
	if err != nil {
		return err
	}
	defer closeClient()
	generation, err := g.generation(ctx, client, reactions)
	if err != nil {
		return err
	}
	sink, err := newEventSink(g.outFile)
	if err != nil {
		return err
	}
	if sink != nil {
		defer sink.abandon()
	}
	request := &kinegatev1.GenerateEventsRequest{
		Generation: generation, FirstEvent: g.first, EventCount: g.events, BlockEventCount: eventsPerBlock,
	}
	s := &generated{environment: g.environment, sink: sink, show: g.show, drawn: drawn}
	err = g.settleBounds(ctx, client, generation)
	if err == nil {
		s.bounds = g.measured
		err = s.receive(ctx, client, request)
	}
	if err != nil {
		if len(reactions) == 1 {
			err = underline(err, reactions[0])
		}
		return err
	}
	if err := s.report(g.outFile); err != nil {
		return err
	}
	switch {
	case draw:
		err = g.picture.save(g.environment, drawn.picture())
	case drawn != nil:
		err = drawn.write(g.environment)
	}
	return errors.Join(err, s.givenUp())
}

// generation reads the files and flags.
func (g *generateRun) generation(ctx context.Context, client *kinegate.Client, reactions []string) (*kinegatev1.Generation, error) {
	m, err := g.named(reactions)
	if g.requestFile != "" {
		m, err = g.readGeneration(ctx, client)
	}
	if err != nil || g.detectorFile == "" {
		return m, err
	}
	yaml, err := os.ReadFile(g.detectorFile)
	if err != nil {
		return nil, badInput("%w", err)
	}
	ctx, cancel := g.calling(ctx)
	defer cancel()
	reply, err := client.Generation.CheckDetector(ctx, &kinegatev1.CheckDetectorRequest{
		Form: &kinegatev1.CheckDetectorRequest_Yaml{Yaml: string(yaml)},
	})
	if err != nil {
		return nil, err
	}
	m.Detector = reply.GetDetector()
	return m, g.faults(g.detectorFile, reply.GetFaults())
}

// named is a generation of reactions and flags; nil without a reaction.
func (g *generateRun) named(reactions []string) (*kinegatev1.Generation, error) {
	if len(reactions) == 0 {
		return nil, nil //nolint:nilnil // a file says it all
	}
	channels, err := g.channels(reactions)
	if err != nil {
		return nil, err
	}
	state, err := g.initialState(reactions[0])
	return &kinegatev1.Generation{Seed: g.seed, Weighted: g.weighted, Channels: channels, InitialState: state}, err
}

// channels are reactions with equal shares.
func (g *generateRun) channels(reactions []string) ([]*kinegatev1.GenerationChannel, error) {
	list := make([]*kinegatev1.GenerationChannel, 0, len(reactions))
	for _, text := range reactions {
		list = append(list, &kinegatev1.GenerationChannel{Reaction: text})
	}
	switch flag := g.described.Lookup("bound"); {
	case flag == nil || !flag.Changed:
		return list, nil
	case len(reactions) > 1:
		return nil, badInput("--bound is of one reaction; with several write a file for --request")
	case !(g.bound > 0):
		return nil, badInput("--bound %v: allowed > 0", g.bound)
	}
	list[0].Bound = &g.bound
	return list, nil
}

// readGeneration reads the generation file on the server; a seed that was given is its seed.
func (g *generateRun) readGeneration(ctx context.Context, client *kinegate.Client) (*kinegatev1.Generation, error) {
	yaml, err := os.ReadFile(g.requestFile)
	if err != nil {
		return nil, badInput("%w", err)
	}
	ctx, cancel := g.calling(ctx)
	defer cancel()
	reply, err := client.Generation.CheckGeneration(ctx, &kinegatev1.CheckGenerationRequest{
		Form: &kinegatev1.CheckGenerationRequest_Yaml{Yaml: string(yaml)},
	})
	if err != nil {
		return nil, err
	}
	if g.seeded && reply.GetGeneration() != nil {
		reply.Generation.Seed = g.seed
	}
	return reply.GetGeneration(), g.faults(g.requestFile, reply.GetFaults())
}

// faults prints the faults of a file and refuses it if there are any. A file whose channels
// are closed and that is sound otherwise gets the answer no.
func (g *generateRun) faults(name string, faults []*kinegatev1.FieldFault) error {
	if len(faults) == 0 {
		return nil
	}
	sound := true
	for _, f := range faults {
		_, _ = fmt.Fprintln(g.err, faultText(name, f))
		sound = sound && f.GetReason() == string(api.ChannelClosed)
	}
	if sound {
		return errNo
	}
	return badInput("%s cannot be used", name)
}

// initialState reads the flags of the beam.
func (g *generateRun) initialState(reaction string) (*kinegatev1.GenerationInitialState, error) {
	state, err := g.initial.initialState(reaction)
	if err != nil {
		return nil, err
	}
	if g.beamRange != "" {
		if state != nil {
			return nil, badInput("--beam-range stands in place of --beam and --sqrt-s; give one or the other")
		}
		spectrum, err := g.spectrum()
		return &kinegatev1.GenerationInitialState{Kind: &kinegatev1.GenerationInitialState_BeamOnTarget{
			BeamOnTarget: &kinegatev1.SpectrumOnTarget{Beam: spectrum},
		}}, err
	}
	if g.electrons != "" {
		return nil, badInput("--bremsstrahlung needs --beam-range, the tagged range")
	}
	switch kind := state.GetKind().(type) {
	case *kinegatev1.InitialState_BeamOnTarget:
		return &kinegatev1.GenerationInitialState{Kind: &kinegatev1.GenerationInitialState_BeamOnTarget{
			BeamOnTarget: &kinegatev1.SpectrumOnTarget{Beam: fixedSpectrum(kind.BeamOnTarget.GetBeam())},
		}}, nil
	case *kinegatev1.InitialState_TwoBeams:
		return &kinegatev1.GenerationInitialState{Kind: &kinegatev1.GenerationInitialState_TwoBeams{TwoBeams: &kinegatev1.TwoSpectra{
			Beam1: fixedSpectrum(kind.TwoBeams.GetBeam1()), Beam2: fixedSpectrum(kind.TwoBeams.GetBeam2()),
			AngleBetweenBeamsRad: kind.TwoBeams.AngleBetweenBeamsRad,
		}}}, nil
	case *kinegatev1.InitialState_SqrtSGev:
		return &kinegatev1.GenerationInitialState{Kind: &kinegatev1.GenerationInitialState_Total{
			Total: &kinegatev1.TotalMotion{SqrtSGev: &kind.SqrtSGev},
		}}, nil
	}
	return nil, nil //nolint:nilnil // a decay needs none, and the server says so of others
}

func fixedSpectrum(m *kinegatev1.BeamMotion) *kinegatev1.BeamSpectrum {
	return &kinegatev1.BeamSpectrum{Kind: &kinegatev1.BeamSpectrum_Fixed{Fixed: m}}
}

// spectrum reads a range of beam energies.
func (g *generateRun) spectrum() (*kinegatev1.BeamSpectrum, error) {
	low, high, found := strings.Cut(g.beamRange, ":")
	if !found {
		return nil, badInput("--beam-range %q: write LOW:HIGH, each with a unit", g.beamRange)
	}
	ends, err := flagList("--beam-range", []string{low, high}, quantity.Energy)
	if err != nil {
		return nil, err
	}
	if g.electrons == "" {
		return &kinegatev1.BeamSpectrum{Kind: &kinegatev1.BeamSpectrum_Even{
			Even: &kinegatev1.EnergyRange{MinGev: ends[0], MaxGev: ends[1]},
		}}, nil
	}
	electron, err := energy("--bremsstrahlung", g.electrons)
	return &kinegatev1.BeamSpectrum{Kind: &kinegatev1.BeamSpectrum_Bremsstrahlung{Bremsstrahlung: &kinegatev1.BremsstrahlungSpectrum{
		ElectronGev: electron, MinGev: ends[0], MaxGev: ends[1], CompleteScreening: true,
	}}}, err
}
