package selection

import (
	"math"
	"slices"

	"example.org/kinegate/kinematics/constraint"
	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/momentum"
)

// Detail says which entries a verdict block carries.
type Detail uint8

// The details.
const (
	// NoEntries is none; the zero value means it too.
	NoEntries Detail = iota + 1
	// AcceptedEntries are those of hypotheses that accept.
	AcceptedEntries
	// AllEntries are those of every hypothesis with a possible assignment.
	AllEntries
)

// Worker judges events with a Program. It serves one goroutine at a time; several
// workers may share the Program.
type Worker struct {
	// Stop is asked now and then while an event is judged, at least once in some
	// hundred assignments, and ends the judging by true; nil never does.
	Stop func() bool

	program *Program
	detail  Detail

	// The event being judged.
	block   *event.Block
	index   int
	objects objects
	motions []motion
	tables  []table
	// matching are the objects that fit each signature.
	matching []set
	// left is what is left of the work budget, and ends of the ways that may end for want
	// of an object; work counts steps of searches, and stopped says that Stop ended the
	// judging.
	left, ends int64
	work       uint
	stopped    bool

	// The hypothesis being tested: its beam candidates, the initial state being
	// tried, and the objects of the slots.
	hypothesis *hypothesis
	number     int
	candidates []candidate
	incoming   *incoming
	beamRow    int
	assigned   [MaxProducts]uint8
	used       set
	search     search
	// fitters are those of the hypotheses, nil for one without a fit; fit is the result
	// for the assignment being looked at.
	fitters []*constraint.Fitter
	fit     constraint.Result

	// rank is the best rank of each hypothesis that accepts, NaN otherwise; unfinished says
	// that the work budget ended before all of a hypothesis was tried.
	rank       []float64
	unfinished []bool
	// early are the entries of the vetoes of one event, which are judged first.
	early      event.Entries
	fours      [MaxProducts + 2]momentum.Four
	values     []float64
	spreads    []float64
	assignment []int16
}

// candidate is a beam candidate of the event in a window of the hypothesis, or the
// one initial state that needs none, and what was found for it.
type candidate struct {
	// row within the event, -1 for none.
	row    int
	weight float64
	state  incoming
	// open says that the conditions on the candidate alone hold.
	open bool
	// accepted says that an assignment passes; objects are those of the best one, rank is
	// its rank and fit its fit.
	accepted bool
	rank     float64
	objects  [MaxProducts]uint8
	fit      constraint.Result
	// tried says that an assignment was fitted and did not pass; nearest are the objects of
	// the best such one and failed its fit.
	tried   bool
	nearest [MaxProducts]uint8
	failed  constraint.Result
}

// NewWorker returns a worker that reports entries as detail says.
func (p *Program) NewWorker(detail Detail) *Worker {
	w := &Worker{
		program:  p,
		detail:   detail,
		motions:  make([]motion, len(p.kinds)),
		tables:   make([]table, len(p.tables)),
		matching: make([]set, len(p.signatures)),
		fitters:  make([]*constraint.Fitter, len(p.hypotheses)),
		rank:     make([]float64, len(p.hypotheses)),

		unfinished: make([]bool, len(p.hypotheses)),
	}
	for i := range p.hypotheses {
		if f := p.hypotheses[i].fit; f != nil {
			w.fitters[i] = f.problem.NewFitter()
		}
	}
	return w
}

// Reset empties out, and keeps its memory, for verdicts of this worker's program.
func (w *Worker) Reset(out *event.VerdictBlock) {
	out.Status = out.Status[:0]
	out.Gate = out.Gate[:0]
	out.Accepted = resized(out.Accepted, len(w.program.hypotheses))
	for i := range out.Accepted {
		out.Accepted[i] = out.Accepted[i][:0]
	}
	out.Best = resized(out.Best, len(w.program.groups))
	for i := range out.Best {
		out.Best[i] = out.Best[i][:0]
	}
	if w.detail != AcceptedEntries && w.detail != AllEntries {
		out.Entries = nil
		return
	}
	if out.Entries == nil {
		out.Entries = &event.Entries{}
	}
	out.Entries.Reset(w.program.fits, w.program.uncertain)
}

// resized returns s with n elements, keeping those it has.
func resized[T any](s []T, n int) []T {
	for len(s) < n {
		var zero T
		s = append(s, zero)
	}
	return s[:n]
}

// Judge appends the verdicts on events [from, to) of the block to out and returns how
// many it appended: all, unless Stop ended the judging. The last one then is Expired,
// and so should be the rest.
func (w *Worker) Judge(block *event.Block, from, to int, out *event.VerdictBlock) int {
	w.block, w.stopped = block, false
	i := from
	for ; i < to && !w.stopped; i++ {
		appendEvent(out)
		status := block.Check(i)
		if status == event.Good && tooManyCandidates(block, i) {
			status = event.TooManyObjects
		}
		if status == event.Good {
			status = w.event(i, out)
		}
		out.Status = append(out.Status, status)
		if out.Entries != nil {
			out.Entries.EndEvent()
		}
	}
	w.block = nil
	return i - from
}

// MaxCandidates is the largest number of tagged beam candidates of an event. An
// event above it gets the status TooManyObjects.
const MaxCandidates = event.MaxObjectsPerEvent

func tooManyCandidates(block *event.Block, i int) bool {
	first, end := block.Candidates(i)
	return end-first > MaxCandidates
}

// Expire appends count events that were not judged for lack of time.
func (w *Worker) Expire(count int, out *event.VerdictBlock) {
	for range count {
		appendEvent(out)
		out.Status = append(out.Status, event.Expired)
		if out.Entries != nil {
			out.Entries.EndEvent()
		}
	}
}

// appendEvent makes room for one more event whose bits are clear and best are none.
func appendEvent(out *event.VerdictBlock) {
	if n := len(out.Status); n%8 == 0 {
		out.Gate = append(out.Gate, 0)
		for i := range out.Accepted {
			out.Accepted[i] = append(out.Accepted[i], 0)
		}
	}
	for i := range out.Best {
		out.Best[i] = append(out.Best[i], -1)
	}
}

// Append appends all verdicts of part, made with the same program and detail, to out.
func (w *Worker) Append(out, part *event.VerdictBlock) {
	for i := range part.Status {
		appendEvent(out)
		at := len(out.Status)
		if part.Gate.Get(i) {
			out.Gate.Set(at)
		}
		for k := range out.Accepted {
			if part.Accepted[k].Get(i) {
				out.Accepted[k].Set(at)
			}
		}
		for k := range out.Best {
			out.Best[k][at] = part.Best[k][i]
		}
		out.Status = append(out.Status, part.Status[i])
		if out.Entries == nil {
			continue
		}
		for k := part.Entries.Offsets[i]; k < part.Entries.Offsets[i+1]; k++ {
			out.Entries.Append(part.Entries.Row(int(k)))
		}
		out.Entries.EndEvent()
	}
}

// event judges event i, whose numbers are good, and sets its bits.
func (w *Worker) event(i int, out *event.VerdictBlock) event.Status {
	w.index = i
	w.refill()
	w.objects.load(w.block, i)
	for k := range w.motions {
		w.motions[k].ready = false
	}
	for k := range w.tables {
		w.tables[k].ready = false
	}
	w.match()
	w.testAll(out.Entries)
	if w.stopped {
		if out.Entries != nil {
			out.Entries.DropEvent()
		}
		return event.Expired
	}
	w.decide(out)
	if slices.Contains(w.unfinished, true) {
		return event.BudgetUsed
	}
	return event.Good
}

// testAll tests the event against every hypothesis. Vetoes have the work budget before the
// others: a veto that is not finished cannot close the gate. Entries stand in the order of
// the hypotheses all the same, so those of vetoes wait for their place.
func (w *Worker) testAll(entries *event.Entries) {
	p := w.program
	early := entries
	if entries != nil && p.hypotheses[p.order[0]].role == Veto {
		early = &w.early
		early.Reset(p.fits, p.uncertain)
	}
	placed := 0
	place := func(before int) {
		for ; early != entries && placed < early.Len() && int(early.Hypothesis[placed]) < before; placed++ {
			entries.Append(early.Row(placed))
		}
	}
	for _, h := range p.order {
		if p.hypotheses[h].role == Veto {
			w.test(h, early)
			continue
		}
		place(h)
		w.test(h, entries)
	}
	place(len(p.hypotheses))
}

// decide sets the bits of the event from the ranks of the hypotheses. Where the work budget
// ended nothing is lost: the gate opens for a hypothesis that was not finished as it does
// for one that accepts, unless a veto accepts.
func (w *Worker) decide(out *event.VerdictBlock) {
	p := w.program
	at := len(out.Status)
	gate, veto := false, false
	for h := range p.hypotheses {
		accepted := w.accepted(h)
		if accepted {
			out.Accepted[h].Set(at)
		}
		hypothesis := &p.hypotheses[h]
		switch hypothesis.role {
		case Gate:
			gate = gate || (accepted || w.unfinished[h]) && hypothesis.kept(w.block.EventIDs[w.index])
		case Veto:
			veto = veto || accepted
		case Shadow:
		}
	}
	if gate && !veto {
		out.Gate.Set(at)
	}
	for g, members := range p.groups {
		out.Best[g][at] = w.best(members)
	}
}

// accepted reports whether hypothesis h accepts the event.
func (w *Worker) accepted(h int) bool { return !math.IsNaN(w.rank[h]) }

// best returns the hypothesis that accepts with the lowest rank, -1 if none does.
func (w *Worker) best(members []int) int16 {
	best := -1
	for _, h := range members {
		if w.accepted(h) && (best < 0 || w.rank[h] < w.rank[best]) {
			best = h
		}
	}
	return int16(best)
}

// match finds the objects that fit each signature.
func (w *Worker) match() {
	o := &w.objects
	massGiven := givesMass(w.block.Coordinates.Kind)
	for k, s := range w.program.signatures {
		w.matching[k] = 0
		if w.program.kinds[s.kind].fromEvent && !massGiven {
			continue
		}
		eligible := o.directed
		if s.full {
			eligible = o.full
		}
		for j := range o.count {
			fits := eligible.has(j) && uint8(o.class[j]) == s.class && (o.species[j] == 0 || o.species[j]&s.species != 0)
			if fits && (s.minEnergy == 0 || o.length[j] >= s.minEnergy) {
				w.matching[k] |= 1 << j
			}
		}
	}
}
