package main

import (
	"context"
	"fmt"
	"slices"
	"strings"

	"google.golang.org/protobuf/proto"

	kinegate "example.org/kinegate/clients/go"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/cmd/kinegate/internal/text"
)

// Bounds of what is asked to tell why a hypothesis accepts nothing: the first events, and no
// more of them than blocks of this many bytes together, since each is asked for with its block.
const (
	whyEvents = 100
	whyBytes  = 64 << 20
	whyShown  = 5
)

// reasons say why hypotheses accept nothing of the first events.
type reasons struct {
	blocks []*kinegatev1.EventBlock
	events []int // of each block

	asked int
	// counts has the number of events by reason, by hypothesis.
	counts []map[string]int
}

// keep keeps the first blocks.
func (r *reasons) keep(block *kinegatev1.EventBlock, events int) {
	kept := 0
	for _, n := range r.events {
		kept += n
	}
	if kept < whyEvents {
		r.blocks = append(r.blocks, block)
		r.events = append(r.events, events)
	}
}

// ask asks for the verdicts on the first events.
func (r *reasons) ask(ctx context.Context, j *judgeRun, client *kinegate.Client) error {
	r.counts = make([]map[string]int, len(j.checked.GetHypotheses()))
	for h := range r.counts {
		r.counts[h] = map[string]int{}
	}
	left := whyBytes
	for b, block := range r.blocks {
		size := proto.Size(block)
		for at := range r.events[b] {
			if r.asked == whyEvents || r.asked > 0 && left < size {
				return nil
			}
			left -= size
			ctx, cancel := j.calling(ctx)
			reply, err := client.Selections.ExplainVerdict(ctx, &kinegatev1.ExplainVerdictRequest{
				Selection: &kinegatev1.SelectionSource{Source: &kinegatev1.SelectionSource_Given{Given: j.checked.GetSelection()}},
				Block:     block, EventIndex: int32(at), MaxAssignmentCount: 1,
			})
			cancel()
			if err != nil {
				return err
			}
			r.asked++
			for h, x := range reply.GetHypotheses() {
				r.counts[h][reasonAgainst(x, j.checked.GetSelection().GetHypotheses()[h].GetCondition())]++
			}
			for h := len(reply.GetHypotheses()); h < len(r.counts); h++ {
				r.counts[h]["not judged: "+words(reply.GetStatus().String(), "EVENT_STATUS_")]++
			}
		}
	}
	return nil
}

// reasonAgainst says in a clause what kept an event from a hypothesis: of the assignment that
// came furthest, where there was one.
func reasonAgainst(h *kinegatev1.HypothesisExplanation, condition *kinegatev1.Condition) string {
	switch {
	case h.GetAccepted():
		return "accepted, and left out by the prescale"
	case h.GetObstacle() != "":
		return "no assignment: " + h.GetObstacle()
	case len(h.GetAssignments()) == 0:
		return "no assignment: no choice of objects fits the products"
	}
	a := h.GetAssignments()[0]
	// A fit is made where all but the windows on it hold, and without one they say nothing.
	if s := a.GetFit().GetStatus(); a.GetFit() != nil && s != kinegatev1.FitStatus_FIT_STATUS_CONVERGED {
		return "fit failed: " + words(s.String(), "FIT_STATUS_")
	}
	if why := unmet(condition, a); why != "" {
		return why
	}
	if !a.GetComplete() {
		return "no assignment: no choice of objects fits the products"
	}
	return "condition not met"
}

// unmet says in a clause which windows keep an assignment from meeting the condition; empty
// where it meets it, or where the windows that were looked at do not tell.
func unmet(condition *kinegatev1.Condition, a *kinegatev1.AssignmentExplanation) string {
	if condition == nil {
		return ""
	}
	windows := map[string]*kinegatev1.WindowExplanation{}
	for _, w := range a.GetWindows() {
		windows[w.GetPath()] = w
	}
	if answer, why := meets(condition, "condition", windows); answer == no {
		return "condition not met: " + why
	}
	return ""
}

// What is known of a condition.
type known int

const (
	no   known = -1
	open known = 0
	yes  known = 1
)

// meets tells whether a part of the condition holds, and the windows that make it so.
func meets(c *kinegatev1.Condition, path string, windows map[string]*kinegatev1.WindowExplanation) (answer known, why string) {
	switch {
	case c.GetWindow() != nil:
		w := windows[path+".window"]
		switch {
		case w == nil:
			return open, ""
		case w.GetInside():
			return yes, "inside the window on " + w.GetLabel()
		}
		return no, "outside the window on " + w.GetLabel()
	case len(c.GetAllOf()) > 0:
		return meetOne(c.GetAllOf(), no, path+".all_of", windows)
	case len(c.GetNoneOf()) > 0:
		answer, why = meetOne(c.GetNoneOf(), yes, path+".none_of", windows)
		return -answer, why
	}
	return meetOne(c.GetAnyOf(), yes, path+".any_of", windows)
}

// meetOne tells what members give of which one decides by its answer; for the other answer it takes
// them all.
func meetOne(members []*kinegatev1.Condition, decides known, path string, windows map[string]*kinegatev1.WindowExplanation) (answer known, why string) {
	answer = -decides
	var all []string
	for i, member := range members {
		one, because := meets(member, fmt.Sprintf("%s[%d]", path, i), windows)
		if one == decides {
			return decides, because
		}
		if one == open {
			answer = open
		}
		all = append(all, because)
	}
	return answer, strings.Join(all, " and ")
}

// write prints the reasons of the hypotheses that accept nothing.
func (r *reasons) write(e *environment, t *tally) error {
	for h, o := range t.outline {
		if t.accepted[h] > 0 || r.asked == 0 {
			continue
		}
		first := fmt.Sprintf("the first %d events", r.asked)
		if r.asked == t.events {
			first = "all " + plural(int64(r.asked), "event")
		}
		e.print("\n  %s accepts nothing; of %s, each by its best assignment (--explain shows one event):", o.GetName(), first)
		var list []string
		for reason := range r.counts[h] {
			list = append(list, reason)
		}
		slices.SortFunc(list, func(a, b string) int {
			if d := r.counts[h][b] - r.counts[h][a]; d != 0 {
				return d
			}
			return strings.Compare(a, b)
		})
		table, rest := text.NewTable(">", "").Under(explainIndent), r.asked
		for _, reason := range list[:min(len(list), whyShown)] {
			table.Row(fmt.Sprint(r.counts[h][reason]), reason)
			rest -= r.counts[h][reason]
		}
		if rest > 0 {
			table.Row(fmt.Sprint(rest), "for other reasons")
		}
		if err := table.Write(e.out); err != nil {
			return err
		}
	}
	return nil
}
