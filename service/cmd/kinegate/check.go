package main

import (
	"fmt"
	"os"
	"slices"
	"strings"

	"github.com/spf13/cobra"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/cmd/kinegate/internal/text"
)

// checkCommand reports every fault of a selection file.
func checkCommand(p program) *cobra.Command {
	e := newEnvironment(p)
	c := &cobra.Command{
		Use:   "check FILE...",
		Short: "Report every fault of selection files, with line and column",
		Long: "check reads selection files and reports every fault at once, with line and column. It\n" +
			"exits with 0 if all can be used and with 3 if one cannot.",
		Args: usage(cobra.MinimumNArgs(1)),
		RunE: func(c *cobra.Command, args []string) error {
			client, closeClient, err := e.connect(c.Context())
			if err != nil {
				return err
			}
			defer closeClient()
			faulty := false
			for _, name := range args {
				yaml, err := os.ReadFile(name)
				if err != nil {
					return badInput("%w", err)
				}
				ctx, cancel := e.calling(c.Context())
				reply, err := client.Selections.CheckSelection(ctx, &kinegatev1.CheckSelectionRequest{
					Form: &kinegatev1.CheckSelectionRequest_Yaml{Yaml: string(yaml)},
				})
				cancel()
				if err != nil {
					return err
				}
				faulty = faulty || len(reply.GetFaults()) > 0
				if err := e.tell(reply, func() error { return e.describeCheck(name, reply) }); err != nil {
					return err
				}
			}
			if faulty {
				return errNo
			}
			return nil
		},
	}
	e.flags(c)
	return c
}

func (e *environment) describeCheck(name string, r *kinegatev1.CheckSelectionResponse) error {
	for _, f := range r.GetFaults() {
		e.print("%s", faultText(name, f))
	}
	if n := len(r.GetFaults()); n > 0 {
		e.print("%s: %d fault%s", name, n, map[bool]string{true: "", false: "s"}[n == 1])
		return nil
	}
	e.print("%s: selection %s can be used, digest %s", name, r.GetSelection().GetName(), r.GetSelectionDigest())
	t := text.NewTable("hypothesis", "reaction", ">products", "records")
	for _, h := range r.GetHypotheses() {
		t.Row(h.GetName(), h.GetReaction(), fmt.Sprint(len(h.GetProducts())), strings.Join(h.GetObservables(), ", "))
	}
	if err := t.Write(e.out); err != nil {
		return err
	}
	for i, h := range r.GetSelection().GetHypotheses() {
		// A fit without degrees of freedom has no probability to look at.
		if h.GetFit() != nil && r.GetHypotheses()[i].GetDegreesOfFreedom() > 0 && !looksAtProbability(h.GetCondition()) {
			e.print("  %s has a fit and no fit_probability window in its condition: every fit that converges is accepted, however improbable",
				h.GetName())
		}
	}
	e.print("  largest reply to a block with all entries: %.1f MiB", float64(r.GetLargestReplyByteCount())/(1<<20))
	return nil
}

// looksAtProbability reports whether a window of the condition is on the fit probability.
func looksAtProbability(c *kinegatev1.Condition) bool {
	parts := slices.Concat(c.GetAllOf(), c.GetAnyOf(), c.GetNoneOf())
	return c.GetWindow().GetFitProbability() != nil || slices.ContainsFunc(parts, looksAtProbability)
}

// faultText is a fault in the form that editors jump to.
func faultText(name string, f *kinegatev1.FieldFault) string {
	message := f.GetMessage()
	if f.GetField() != "" {
		message = f.GetField() + ": " + message
	}
	return fmt.Sprintf("%s:%d:%d: %s", name, f.GetLine(), f.GetColumn(), message)
}
