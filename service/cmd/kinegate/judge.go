package main

import (
	"context"
	"errors"
	"fmt"
	"os"
	"slices"
	"strings"
	"time"

	"github.com/spf13/cobra"
	"google.golang.org/genproto/googleapis/rpc/errdetails"
	"google.golang.org/grpc/status"

	kinegate "example.org/kinegate/clients/go"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/api"
	"example.org/kinegate/service/cmd/kinegate/internal/eventfile"
	"example.org/kinegate/service/cmd/kinegate/internal/text"
)

// judgeCommand judges measured events from files.
func judgeCommand(p program) *cobra.Command {
	j := &judgeRun{environment: newEnvironment(p)}
	c := &cobra.Command{
		Use:   "judge --selection FILE EVENTS.csv...",
		Short: "Judge measured events from CSV files against a selection",
		Long: "judge streams events from CSV files, or from .kgb files of kinegate generate, to a server,\n" +
			"which judges them against a selection, and prints a summary, with the reasons against the\n" +
			"first 100 events for each hypothesis that accepts nothing. Columns: run, event; px1, py1,\n" +
			"pz1, m1 or p1, theta1, phi1 or pt1, eta1, phi1, m1 for each object (GeV, rad); class1\n" +
			"(photon, positive, negative, neutral), q1 (charge) or pid1 (particle number); beam_energy1,\n" +
			"beam_sigma1, beam_time1 (GeV, GeV, ns) for each tagged candidate; weight of a simulated event.\n" +
			"Other columns are kept for --compare. Sums, means and histograms take each accepted entry with\n" +
			"its weight, that of its event times that of its time window, so that side bands are taken off.",
		Example: `  kinegate judge --selection dimuon.yaml dimuon_2011A.csv
  kinegate judge --selection dimuon.yaml dimuon_2011A.csv --out verdicts.csv --histogram "dimuon/M=2 GeV:110 GeV:27"
  kinegate judge --selection pions.yaml events.kgb --out entries.parquet --entries all
  kinegate judge --selection dimuon.yaml dimuon_2011A.csv --compare M=dimuon/M
  kinegate judge --selection dimuon.yaml dimuon_2011A.csv --explain 74969122`,
		Args: usage(cobra.MinimumNArgs(1)),
		RunE: func(c *cobra.Command, args []string) error {
			j.explaining = c.Flags().Changed("explain")
			j.blocksAsked = c.Flags().Changed("block-events")
			return j.run(c.Context(), args)
		},
	}
	j.flags(c)
	f := c.Flags()
	f.StringVar(&j.selectionFile, "selection", "", "selection file (YAML); required")
	f.StringVar(&j.outFile, "out", "", "write one row per event with its verdicts to this file: .csv or .parquet")
	f.StringVar(&j.entries, "entries", "",
		"accepted or all: write one row per entry in place of one per event,\nwith its beam candidate, weights, fit and objects")
	f.StringArrayVar(&j.compare, "compare", nil, "compare a column with a recorded observable, as COLUMN=NAME/LABEL; NAME is a hypothesis or a group")
	f.StringArrayVar(&j.histograms, "histogram", nil, `draw a recorded observable, as NAME/LABEL=LOW:HIGH:BINS`)
	f.StringVar(&j.assume, "assume-resolution", "",
		`resolution of momentum and direction for files without the covariances that fits need, as "PART:ANGLE", such as "1.5 %:1 mrad"`)
	f.StringVar(&j.explain, "explain", "", "explain the verdict on one event, as EVENT or RUN:EVENT, and judge no other")
	f.IntVar(&j.assignments, "assignments", 3, "assignments to show for a hypothesis with --explain, 1 to 1000") //nolint:mnd // a default
	f.IntVar(&j.blockEvents, "block-events", 1000, "events per block of .csv, and most events of a block of .kgb; 1 to 4096")
	f.StringVar(&j.gateAddress, "gate-address", "", "server for the judge stream, if not that of --address")
	return c
}

// judgeRun is one run of the command.
type judgeRun struct {
	*environment

	selectionFile, outFile, gateAddress string
	// entries says which entries --out has rows of; empty for rows of events.
	entries             string
	compare, histograms []string
	blockEvents         int
	blocksAsked         bool

	assume      string
	explaining  bool
	explain     string
	assignments int

	checked *kinegatev1.CheckSelectionResponse
}

// candidatesPerEvent is a promise to the server, on average over a block. It leaves
// room in one reply for all entries of ordinary selections.
const candidatesPerEvent = 4

func (j *judgeRun) run(ctx context.Context, files []string) error {
	if j.selectionFile == "" {
		return badInput("--selection is required")
	}
	if j.blockEvents < 1 || j.blockEvents > 4096 {
		return badInput("--block-events %d: 1 to 4096 are allowed", j.blockEvents)
	}
	detail, err := j.detail()
	if err != nil {
		return err
	}
	yaml, err := os.ReadFile(j.selectionFile)
	if err != nil {
		return badInput("%w", err)
	}
	client, gate, closeClients, err := j.connectGate(ctx, j.gateAddress)
	if err != nil {
		return err
	}
	defer closeClients()
	if err := j.check(ctx, client, string(yaml)); err != nil {
		return err
	}
	source := &eventSource{files: files, perBlock: j.blockEvents}
	next, err := j.blocks(source)
	if err != nil {
		return err
	}
	if j.explaining {
		return j.refused(j.explainEvent(ctx, client, files, next))
	}
	sinks, err := j.sinks()
	if err != nil {
		return err
	}
	if !j.json && j.blocksAsked && slices.ContainsFunc(files, isBlockFile) {
		j.print("the blocks of .kgb files are judged as they are; --block-events bounds them")
	}
	sums := newTally(j.checked.GetHypotheses())
	why := &reasons{}
	progress := text.NewProgress(j.err, j.terminal, "judging", source.size())
	open := &kinegatev1.JudgeOpen{
		Selection: &kinegatev1.SelectionSource{Source: &kinegatev1.SelectionSource_Given{Given: j.checked.GetSelection()}},
		Entries:   detail,
		Limits: &kinegatev1.Limits{
			BlockEventCount: int64(j.blockEvents), BlockCandidateCount: int64(candidatesPerEvent * j.blockEvents),
		},
	}
	start := time.Now()
	err = pump(ctx, gate, open, next, func(b *batch[eventfile.Event], v *kinegate.Verdicts) error {
		sums.add(b.events, v)
		why.keep(b.block, len(b.events))
		progress.Set(source.read.Load())
		if err := j.tell(v.Block, nil); err != nil || j.json && j.outFile == "" {
			return err
		}
		for _, s := range sinks {
			if err := s.add(b.events, v); err != nil {
				return err
			}
		}
		return nil
	})
	progress.Done()
	if err != nil {
		return j.refused(err)
	}
	elapsed := time.Since(start)
	if !j.json && slices.Contains(sums.accepted, 0) {
		if err := why.ask(ctx, j, client); err != nil {
			return err
		}
	}
	return j.report(sums, why, sinks, elapsed)
}

// detail is which entries are asked for: summaries need those that are accepted.
func (j *judgeRun) detail() (kinegatev1.EntryDetail, error) {
	switch {
	case j.entries != "" && j.outFile == "" && !j.json:
		return 0, badInput("--entries says what --out and --json have; give one of them")
	case j.entries == "all":
		return kinegatev1.EntryDetail_ENTRY_DETAIL_ALL, nil
	case j.entries == "" || j.entries == "accepted":
		return kinegatev1.EntryDetail_ENTRY_DETAIL_ACCEPTED, nil
	}
	return 0, badInput("--entries %q: accepted or all", j.entries)
}

// blocks returns what gives the blocks of the files, with the resolution that is assumed.
func (j *judgeRun) blocks(source *eventSource) (next func() (*batch[eventfile.Event], error), err error) {
	if j.assume == "" {
		return source.next, nil
	}
	assumed, err := parseResolution(j.assume)
	if err != nil {
		return nil, err
	}
	return func() (*batch[eventfile.Event], error) {
		b, err := source.next()
		if err != nil {
			return nil, err
		}
		if b.block.GetCovariance() != nil {
			return nil, badInput("--assume-resolution: the events of %s have covariances of their own", source.file.Name())
		}
		return b, assumed.fill(b.block)
	}, nil
}

// refused says of events without the covariances that a fit needs how to state them. That,
// like everything else for which a block is refused, is a fault of what was given.
func (j *judgeRun) refused(err error) error {
	message, field := "", ""
	if rejected, ok := errors.AsType[*rejectedBlock](err); ok {
		message, field = rejected.Error(), rejected.GetField()
	} else if s, ok := status.FromError(err); ok && reasonOf(s) == string(api.BlockInvalid) {
		message = describeStatus(s)
		for _, d := range s.Details() {
			if bad, ok := d.(*errdetails.BadRequest); ok && len(bad.GetFieldViolations()) > 0 {
				field = bad.GetFieldViolations()[0].GetField()
			}
		}
	}
	switch {
	case message == "":
		return err
	case strings.TrimPrefix(field, "block.") == "covariance" && j.assume == "":
		return badInput("%s\n  the events have no covariances, for which .csv has no columns: "+
			"state them with --assume-resolution, such as \"1.5 %%:1 mrad\"", message)
	}
	return badInput("%s", message)
}

// check reads the selection on the server, which also gives it in its own form.
func (j *judgeRun) check(ctx context.Context, client *kinegate.Client, yaml string) error {
	ctx, cancel := j.calling(ctx)
	defer cancel()
	reply, err := client.Selections.CheckSelection(ctx, &kinegatev1.CheckSelectionRequest{
		Form: &kinegatev1.CheckSelectionRequest_Yaml{Yaml: yaml},
	})
	if err != nil {
		return err
	}
	for _, f := range reply.GetFaults() {
		_, _ = fmt.Fprintln(j.err, faultText(j.selectionFile, f))
	}
	if len(reply.GetFaults()) > 0 {
		return badInput("%s cannot be used", j.selectionFile)
	}
	j.checked = reply
	return nil
}

// report prints the summary and closes the sinks.
func (j *judgeRun) report(sums *tally, why *reasons, sinks []sink, elapsed time.Duration) error {
	if !j.json {
		j.print("selection %s, digest %s", j.checked.GetSelection().GetName(), j.checked.GetSelectionDigest())
		if err := sums.write(j.environment); err != nil {
			return err
		}
		if err := why.write(j.environment, sums); err != nil {
			return err
		}
	}
	for _, s := range sinks {
		if err := s.finish(j.environment); err != nil {
			return err
		}
	}
	if !j.json && elapsed > 0 {
		j.print("\n  %s events/s including reading", rateText(float64(sums.events)/elapsed.Seconds()))
	}
	return nil
}

// rateText is a rate in whole numbers, or in two digits where it is small.
func rateText(perSecond float64) string {
	const small = 10
	if perSecond < small {
		return fmt.Sprintf("%.2g", perSecond)
	}
	return fmt.Sprintf("%.0f", perSecond)
}
