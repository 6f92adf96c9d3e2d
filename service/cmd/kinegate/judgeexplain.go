package main

import (
	"context"
	"fmt"
	"strconv"
	"strings"

	kinegate "example.org/kinegate/clients/go"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/cmd/kinegate/internal/eventfile"
	"example.org/kinegate/service/cmd/kinegate/internal/text"
)

// explainEvent finds the event in the files and prints why it was judged as it was.
func (j *judgeRun) explainEvent(
	ctx context.Context, client *kinegate.Client, files []string, next func() (*batch[eventfile.Event], error),
) error {
	if j.assignments < 1 || j.assignments > 1000 {
		return badInput("--assignments %d: 1 to 1000 are allowed", j.assignments)
	}
	wanted, err := parseEventName(j.explain)
	if err != nil {
		return err
	}
	found, err := wanted.find(next)
	if err != nil {
		return err
	}
	switch len(found) {
	case 0:
		return badInput("no event %s in %s", j.explain, strings.Join(files, ", "))
	case 1:
	default:
		return badInput("--explain %s: %s have an event of that number; choose one, such as --explain %d:%d",
			j.explain, runNames(found), found[0].run, wanted.event)
	}
	one := found[0]
	ctx, cancel := j.calling(ctx)
	defer cancel()
	reply, err := client.Selections.ExplainVerdict(ctx, &kinegatev1.ExplainVerdictRequest{
		Selection: &kinegatev1.SelectionSource{Source: &kinegatev1.SelectionSource_Given{Given: j.checked.GetSelection()}},
		Block:     one.block, EventIndex: int32(one.at), MaxAssignmentCount: int64(j.assignments), //nolint:gosec // at most 4,096
	})
	if err != nil {
		return err
	}
	return j.tell(reply, func() error {
		if one.count > 1 {
			j.print("the files have run %d, event %d %d times; this is the first", one.run, wanted.event, one.count)
		}
		return j.printExplanation(one.run, reply, j.checked.GetSelection())
	})
}

// printExplanation prints why an event was judged as it was.
func (e *environment) printExplanation(run int64, r *kinegatev1.ExplainVerdictResponse, of *kinegatev1.Selection) error {
	e.print("run %d, event %d: %s; the gate %s", run, r.GetEventId(), words(r.GetStatus().String(), "EVENT_STATUS_"), gateWords(r))
	for k, h := range r.GetHypotheses() {
		e.print("")
		e.print("hypothesis %s: %s", h.GetName(), h.GetReaction())
		verdict := map[bool]string{true: "accepts the event", false: "does not accept the event"}[h.GetAccepted()]
		if h.GetAccepted() && !h.GetKept() {
			verdict += ", and its prescale leaves it out"
		}
		if h.GetObstacle() != "" {
			e.print("  %s: %s", verdict, h.GetObstacle())
			continue
		}
		if h.GetBudgetUsed() {
			verdict += "; the work budget was used up before all was tried"
		}
		e.print("  %s; %s tried, %d shown", verdict, plural(h.GetAssignmentCount(), "assignment"), len(h.GetAssignments()))
		for i, a := range h.GetAssignments() {
			if err := e.printAssignment(h, of.GetHypotheses()[k].GetCondition(), i, a); err != nil {
				return err
			}
		}
	}
	return nil
}

// gateWords says what the gate does, and why where no hypothesis is the reason.
func gateWords(r *kinegatev1.ExplainVerdictResponse) string {
	switch {
	case !r.GetGate():
		return "does not accept it"
	case r.GetStatus() == kinegatev1.EventStatus_EVENT_STATUS_BUDGET_USED:
		return "accepts it: a hypothesis that opens it accepts or was not finished, and no veto accepts"
	}
	return "accepts it"
}

func plural(n int64, noun string) string {
	if n == 1 {
		return "1 " + noun
	}
	return fmt.Sprintf("%d %ss", n, noun)
}

// words is an enum value in words.
func words(name, prefix string) string {
	return strings.ToLower(strings.ReplaceAll(strings.TrimPrefix(name, prefix), "_", " "))
}

// printAssignment prints one assignment.
func (e *environment) printAssignment(
	h *kinegatev1.HypothesisExplanation, condition *kinegatev1.Condition, i int, a *kinegatev1.AssignmentExplanation,
) error {
	e.print("")
	outcome := "fails"
	switch {
	case a.GetPassed():
		outcome = "passes"
	case !a.GetComplete():
		outcome = "ended by a window before it was complete"
	}
	switch {
	case a.GetBest() && a.GetPassed():
		outcome += ", the best"
	case a.GetBest():
		outcome += "; the best that was possible"
	}
	if a.GetBeamRow() >= 0 {
		outcome += fmt.Sprintf("; beam candidate %d with weight %g", a.GetBeamRow(), a.GetWeight())
	}
	e.print("  assignment %d: %s", i+1, outcome)
	if objects := objectsText(h.GetProducts(), a.GetObjects()); objects != "" {
		e.print("    objects %s", objects)
	}
	if why := unmet(condition, a); why != "" {
		e.print("    %s", why)
	}
	if err := e.printWindows(a.GetWindows()); err != nil {
		return err
	}
	return e.printFit(h, a.GetFit())
}

// explainIndent indents tables like the other lines on an assignment.
const explainIndent = 2

// printWindows prints each window with its margins.
func (e *environment) printWindows(windows []*kinegatev1.WindowExplanation) error {
	if len(windows) == 0 {
		return nil
	}
	table := text.NewTable("window", ">value", ">+-", ">above min", ">below max", "unit", "").Under(explainIndent)
	for _, w := range windows {
		verdict := map[bool]string{true: "inside", false: "OUTSIDE"}[w.GetInside()]
		if strings.HasPrefix(w.GetPath(), "record[") {
			verdict = "recorded"
		}
		table.Row(w.GetLabel(), figure(w.GetValue()), optionalFigure(w.Uncertainty), optionalFigure(w.AboveMin),
			optionalFigure(w.BelowMax), w.GetUnit(), verdict)
	}
	return table.Write(e.out)
}

// printFit prints the constraints, particles and pulls of a fit.
func (e *environment) printFit(h *kinegatev1.HypothesisExplanation, f *kinegatev1.FitExplanation) error {
	if f == nil {
		return nil
	}
	line := fmt.Sprintf("    fit %s: chi-square %s for %s", words(f.GetStatus().String(), "FIT_STATUS_"),
		figure(f.GetChiSquare()), plural(int64(h.GetDegreesOfFreedom()), "degree")+" of freedom")
	if f.Probability != nil {
		line += ", probability " + figure(f.GetProbability())
	}
	e.print("%s, %s", line, plural(f.GetIterationCount(), "step"))
	if f.VertexZM != nil {
		e.print("    vertex z %s +- %s m", figure(f.GetVertexZM()), optionalFigure(f.VertexZSigmaM))
	}
	constraints := text.NewTable("constraint", ">before", ">after", "unit").Under(explainIndent)
	for _, c := range f.GetConstraints() {
		constraints.Row(c.GetName(), figure(c.GetBefore()), fmt.Sprintf("%.1g", c.GetAfter()), c.GetUnit())
	}
	if err := constraints.Write(e.out); err != nil {
		return err
	}
	parameters := text.NewTable("particle", "parameter", ">measured", ">+-", ">fitted", ">pull", "unit").Under(explainIndent)
	momenta := text.NewTable("four-momentum", "", ">E", ">px", ">py", ">pz", "unit").Under(explainIndent)
	for _, p := range f.GetParticles() {
		for _, q := range p.GetParameters() {
			pull := ""
			if q.Pull != nil {
				pull = fmt.Sprintf("%+.2f", q.GetPull())
			}
			parameters.Row(p.GetName(), q.GetName(), optionalFigure(q.Measured), optionalFigure(q.Uncertainty),
				figure(q.GetFitted()), pull, q.GetUnit())
		}
		if p.GetMeasured() != nil {
			fourRow(momenta, p.GetName(), "measured", p.GetMeasured())
		}
		fourRow(momenta, p.GetName(), "fitted", p.GetFitted())
	}
	if err := parameters.Write(e.out); err != nil {
		return err
	}
	return momenta.Write(e.out)
}

func fourRow(t *text.Table, name, what string, p *kinegatev1.FourMomentum) {
	t.Row(name, what, figure(p.GetEnergyGev()), figure(p.GetPxGev()), figure(p.GetPyGev()), figure(p.GetPzGev()), "GeV")
}

// figure is a number as an explanation shows it.
func figure(x float64) string { return strconv.FormatFloat(x, 'g', 6, 64) }

// optionalFigure is the same for a number that may be absent.
func optionalFigure(x *float64) string {
	if x == nil {
		return ""
	}
	return figure(*x)
}
