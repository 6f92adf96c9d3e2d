package main

import (
	"context"
	"errors"
	"io"
	"os"
	"path/filepath"
	"time"

	"github.com/spf13/cobra"

	kinegate "example.org/kinegate/clients/go"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/api"
	"example.org/kinegate/service/cmd/kinegate/internal/eventfile"
	"example.org/kinegate/service/cmd/kinegate/internal/hall"
	"example.org/kinegate/service/cmd/kinegate/internal/jsonform"
	"example.org/kinegate/service/cmd/kinegate/internal/quantity"
	"example.org/kinegate/service/cmd/kinegate/internal/text"
)

// demoCommand runs the main job once on an invented experiment.
func demoCommand(p program) *cobra.Command {
	d := &demo{environment: newEnvironment(p)}
	c := &cobra.Command{
		Use:   "demo",
		Short: "Run the main job once, on the invented Marrow Hall",
		Long: "demo starts a server on a loopback port, asks it which channels are open in the tagged\n" +
			"range of Marrow Hall, an invented experiment, streams simulated events to it and prints\n" +
			"what a shift physicist wants to know. The events come from the server too, and are the\n" +
			"same for the same seed.",
		Example: `  kinegate demo
  kinegate demo --keep hall`,
		Args: usage(cobra.NoArgs),
		RunE: func(c *cobra.Command, _ []string) error { return d.run(c.Context()) },
	}
	d.flags(c)
	f := c.Flags()
	f.IntVar(&d.events, "events", 40000, "number of events, 100 to 1000000")
	f.Uint64Var(&d.seed, "seed", 1, "seed of the events")
	f.StringVar(&d.keep, "keep", "", "folder to write the selection, the events and the detector to, for kinegate judge and generate")
	return c
}

// demo is one run of the command.
type demo struct {
	*environment

	events int
	seed   uint64
	keep   string
}

// demoBlockEvents is the size of the demo's blocks, hallRun its run number.
const (
	demoBlockEvents = 500
	hallRun         = 1
)

func (d *demo) run(ctx context.Context) error {
	if d.events < 100 || d.events > 1000000 {
		return badInput("--events %d: 100 to 1000000 are allowed", d.events)
	}
	client, gate, closeClients, err := d.connectGate(ctx, "")
	if err != nil {
		return err
	}
	defer closeClients()
	d.print("Marrow Hall: an invented experiment with invented rates. Tagged photons of %s to %s on hydrogen.\n",
		gev(hall.LowGeV), gev(hall.HighGeV))
	if err := d.openChannels(ctx, client); err != nil {
		return err
	}
	selection, err := d.selection(ctx, client)
	if err != nil {
		return err
	}
	start := time.Now()
	events, err := hall.Events(ctx, client.Generation, d.seed, d.events)
	if err != nil {
		return err
	}
	d.print("\n%d events simulated in %.1f s, seed %d: %.0f s of beam at %d Hz after the pre-trigger.",
		len(events), time.Since(start).Seconds(), d.seed, float64(len(events))/hall.RateHz, hall.RateHz)
	shift := newShift(selection, events)
	if err := d.judge(ctx, gate, selection, events, shift); err != nil {
		return err
	}
	if err := shift.write(d.environment); err != nil {
		return err
	}
	return d.next(events)
}

// openChannels says where each reaction of the mixture opens.
func (d *demo) openChannels(ctx context.Context, client *kinegate.Client) error {
	t := text.NewTable("reaction", ">threshold", "at "+gev(hall.LowGeV), "at "+gev(hall.HighGeV), ">excess there")
	for _, c := range hall.Mix() {
		if c.Reaction == "" {
			continue
		}
		row := []string{c.Reaction, ""}
		for _, energy := range []float64{hall.LowGeV, hall.HighGeV} {
			reply, err := d.describe(ctx, client, c.Reaction, energy)
			if err != nil {
				return err
			}
			row[1] = quantity.Format(reply.GetThreshold().GetTotalEnergyGev(), quantity.Energy, 5)
			row = append(row, stateText(reply.GetState())[3:])
			if energy == hall.HighGeV {
				row = append(row, quantity.Format(reply.GetExcessEnergyGev(), quantity.Energy, 4))
			}
		}
		t.Row(row...)
	}
	return t.Write(d.out)
}

func (d *demo) describe(ctx context.Context, client *kinegate.Client, reaction string, energy float64) (*kinegatev1.DescribeReactionResponse, error) {
	ctx, cancel := d.calling(ctx)
	defer cancel()
	return client.Reactions.DescribeReaction(ctx, &kinegatev1.DescribeReactionRequest{
		Form: &kinegatev1.DescribeReactionRequest_Reaction{Reaction: reaction},
		InitialState: &kinegatev1.InitialState{Kind: &kinegatev1.InitialState_BeamOnTarget{BeamOnTarget: &kinegatev1.BeamOnTarget{
			Beam: &kinegatev1.BeamMotion{Value: &kinegatev1.BeamMotion_TotalEnergyGev{TotalEnergyGev: energy}},
		}}},
	})
}

// selection reads the hall's selection on the server.
func (d *demo) selection(ctx context.Context, client *kinegate.Client) (*kinegatev1.CheckSelectionResponse, error) {
	ctx, cancel := d.calling(ctx)
	defer cancel()
	reply, err := client.Selections.CheckSelection(ctx, &kinegatev1.CheckSelectionRequest{
		Form: &kinegatev1.CheckSelectionRequest_Yaml{Yaml: hall.Selection},
	})
	if err != nil {
		return nil, err
	}
	if len(reply.GetFaults()) > 0 {
		return nil, errors.New(faultText("selection.yaml", reply.GetFaults()[0]))
	}
	return reply, nil
}

// judge streams the events.
func (d *demo) judge(ctx context.Context, gate *kinegate.Client, selection *kinegatev1.CheckSelectionResponse, events []hall.Event, shift *shift) error {
	progress := text.NewProgress(d.err, d.terminal, "judging", int64(len(events)))
	defer progress.Done()
	open := &kinegatev1.JudgeOpen{
		Selection: &kinegatev1.SelectionSource{Source: &kinegatev1.SelectionSource_Given{Given: selection.GetSelection()}},
		Entries:   kinegatev1.EntryDetail_ENTRY_DETAIL_ACCEPTED,
		Limits: &kinegatev1.Limits{
			BlockEventCount: demoBlockEvents, BlockCandidateCount: candidatesPerEvent * demoBlockEvents,
		},
	}
	left := events
	next := func() (*batch[hall.Event], error) {
		if len(left) == 0 {
			return nil, io.EOF
		}
		n := min(demoBlockEvents, len(left))
		b := &batch[hall.Event]{events: left[:n], block: hallBlock(left[:n])}
		left = left[n:]
		return b, nil
	}
	start := time.Now()
	err := pump(ctx, gate, open, next, func(b *batch[hall.Event], v *kinegate.Verdicts) error {
		shift.add(b, v)
		progress.Set(int64(shift.tally.events))
		return nil
	})
	shift.elapsed = time.Since(start)
	return err
}

func hallBlock(events []hall.Event) *kinegatev1.EventBlock {
	builder := kinegate.NewBuilder(kinegate.MomentumAngles)
	builder.RunNumber = hallRun
	for _, e := range events {
		builder.Add(e.ID, e.Objects, e.Beam)
	}
	return builder.Take()
}

// next says what to try, and writes the files for it if that was asked for.
func (d *demo) next(events []hall.Event) error {
	folder := d.keep
	if folder != "" {
		if err := keepFiles(folder, events); err != nil {
			return err
		}
		d.print("\nWritten into %s: selection.yaml, events.csv and detector.yaml", folder)
	}
	d.print("\nWhat to try next:")
	if folder == "" {
		d.print("  kinegate demo --keep hall            keep the selection and the events as files")
		folder = "hall"
	}
	d.print("  kinegate judge --selection %s %s --histogram \"omega/omega mass=700 MeV:860 MeV:32\"",
		filepath.Join(folder, "selection.yaml"), filepath.Join(folder, "events.csv"))
	d.print("  kinegate check %s", filepath.Join(folder, "selection.yaml"))
	d.print("  kinegate reaction \"gamma p -> p eta'\" --beam \"1.5 GeV\"")
	d.print("  kinegate serve                       run the server for others; kinegate serve --help lists its settings")
	d.print("\n%s", api.Caution)
	return nil
}

// keepFiles writes the selection, the detector and the events into a folder.
func keepFiles(folder string, events []hall.Event) error {
	if err := os.MkdirAll(folder, 0o755); err != nil { //nolint:gosec // files to look at
		return err
	}
	// A JSON text is a YAML text too.
	detector, err := jsonform.Marshal(hall.Detector())
	if err != nil {
		return err
	}
	for name, text := range map[string][]byte{"selection.yaml": []byte(hall.Selection), "detector.yaml": append(detector, '\n')} {
		if err := os.WriteFile(filepath.Join(folder, name), text, 0o644); err != nil { //nolint:gosec // as above
			return err
		}
	}
	return writeEvents(filepath.Join(folder, "events.csv"), events)
}

// writeEvents keeps the events with their true channels.
func writeEvents(name string, events []hall.Event) error {
	mix := hall.Mix()
	rows := make([]eventfile.Event, len(events))
	for i, e := range events {
		rows[i] = eventfile.Event{
			Run: hallRun, ID: e.ID, Objects: e.Objects, Beam: e.Beam, Other: map[string]string{"channel": mix[e.Channel].Name},
		}
	}
	file, err := os.Create(name)
	if err != nil {
		return err
	}
	comment := "Simulated events of Marrow Hall, an invented experiment."
	return errors.Join(eventfile.Write(file, comment, kinegate.MomentumAngles, rows), file.Close())
}
