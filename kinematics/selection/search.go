package selection

import (
	"math"

	"example.org/kinegate/kinematics/constraint"
	"example.org/kinegate/kinematics/event"
)

// search is the state of one search through the assignments of a hypothesis.
type search struct {
	// signatures are those of the slots, of the hypothesis or of its conjugate.
	signatures []uint16
	// must are the objects that no rule lets stay unassigned.
	must set
	// possible looks for the best possible assignment, whatever the condition says.
	possible bool
	// tried counts complete assignments and incomplete ones that a window ended.
	tried int32
	// witness, unless it is nil, is told of every assignment that is tried: the candidate,
	// nil where a window ended it before, the number of slots that have objects, whether
	// it passes and its rank.
	witness func(c *candidate, placed int, passed bool, rank float64)
	// exhausted says that the budget ended the search.
	exhausted bool
	// found, rank and objects are the best possible assignment.
	found   bool
	rank    float64
	objects [MaxProducts]uint8
}

// test tests the event against hypothesis h, appends its entries, and notes its rank and
// whether the work budget ended before all was tried.
func (w *Worker) test(h int, entries *event.Entries) {
	hypothesis := &w.program.hypotheses[h]
	w.hypothesis, w.number = hypothesis, h
	w.rank[h], w.unfinished[h] = math.NaN(), false
	w.used = 0
	w.search = search{}
	if !w.findCandidates() || !w.allowExtra() || !w.fits() {
		return
	}
	w.prepare()
	if w.openCandidates() {
		w.try()
	}
	w.unfinished[h] = w.search.exhausted
	for i := range w.candidates {
		if c := &w.candidates[i]; c.accepted && !(w.rank[h] <= c.standing(hypothesis)) {
			w.rank[h] = c.standing(hypothesis)
		}
	}
	if entries != nil {
		w.report(h, entries)
	}
}

// allowExtra applies the rule on extra objects: how many there are is known, since
// every assignment takes as many objects as there are slots. It sets the objects
// that must be assigned, and returns false where no assignment can follow the rule.
func (w *Worker) allowExtra() bool {
	h, o := w.hypothesis, &w.objects
	extra := o.count - len(h.slots)
	if extra < 0 {
		return false
	}
	switch h.extra {
	case AnyExtraObjects:
		return true
	case SoftPhotons:
		w.search.must = upTo(o.count) &^ o.photons
		for rest := o.photons; rest != 0; rest &= rest - 1 {
			if j := rest.lowest(); !(o.length[j] < h.extraEnergyGeV) {
				w.search.must |= 1 << j
			}
		}
		return extra <= h.extraCount && w.search.must.count() <= len(h.slots)
	case NoExtraObjects:
	}
	w.search.must = upTo(o.count)
	return extra == 0
}

// fits reports whether the hypothesis or its conjugate has objects for every slot and
// a slot for every object that must be assigned.
func (w *Worker) fits() bool {
	for _, signatures := range w.hypothesis.variants {
		var all set
		fit := true
		for _, s := range signatures {
			all |= w.matching[s]
			fit = fit && w.matching[s] != 0
		}
		if fit && w.search.must&^all == 0 {
			return true
		}
	}
	return false
}

// prepare computes what the windows of the hypothesis need of the objects.
func (w *Worker) prepare() {
	p := w.program
	for _, k := range w.hypothesis.kinds {
		if m := &w.motions[k]; !m.ready {
			m.load(p.kinds[k], &w.objects, w.block, w.index)
		}
	}
	for _, k := range w.hypothesis.tables {
		if t := &w.tables[k]; !t.ready {
			pair := p.tables[k]
			t.load(&w.objects, &w.motions[pair.first], &w.motions[pair.second], pair.first == pair.second)
		}
	}
}

// try searches the assignments of the hypothesis and of its conjugate.
func (w *Worker) try() {
	for _, signatures := range w.hypothesis.variants {
		w.search.signatures = signatures
		if !w.place(0) {
			return
		}
	}
}

// place tries every object for slot k and those after it, in ascending order. It
// returns false where the search is to end.
func (w *Worker) place(k int) bool {
	h, s := w.hypothesis, &w.search
	if k == len(h.slots) {
		return w.complete()
	}
	slot := &h.slots[k]
	free := w.matching[s.signatures[k]] &^ w.used
	choices := free
	if slot.after >= 0 {
		choices &= above(int(w.assigned[slot.after]))
	}
	if must := s.must &^ w.used; must != 0 {
		if must.count() == len(h.slots)-k {
			choices &= must
		}
		if slot.lowest {
			choices &= upTo(must.lowest() + 1)
		}
	}
	if choices == 0 {
		return w.deadEnd()
	}
	for ; choices != 0; choices &= choices - 1 {
		if w.interrupted(1) {
			s.exhausted = true
			return false
		}
		object := choices.lowest()
		if slot.higher > 0 && (free&above(object)).count() < slot.higher {
			break // the later slots that need a higher object would lack one
		}
		w.assigned[k] = uint8(object) //nolint:gosec // below maxObjects
		w.used |= 1 << object
		var more bool
		if s.possible || w.all(h.steps[k]) {
			more = w.place(k + 1)
		} else if more = w.spend(); more {
			s.tried++
			s.tell(nil, k+1, false, 0)
		}
		w.used &^= 1 << object
		if !more {
			return false
		}
	}
	return true
}

// deadEndsPerAssignment is how many ways may end for want of an object for each assignment
// of the budget. Sixteen take less time than one assignment with a fit, and place looks
// ahead, so that only products that compete for the same objects make any.
const deadEndsPerAssignment = 16

// refill gives the worker the whole work budget. It counts assignments that are tried; the
// ways that end before there is one to try are bounded apart from it.
func (w *Worker) refill() {
	w.left = w.program.budget
	w.ends = deadEndsPerAssignment * w.left
}

// spend takes an assignment from the work budget. It returns false where none is left.
func (w *Worker) spend() bool {
	if w.left <= 0 {
		w.search.exhausted = true
		return false
	}
	w.left--
	return true
}

// deadEnd counts a way that ends for want of an object. It returns false where the search
// has had too many.
func (w *Worker) deadEnd() bool {
	if w.ends <= 0 {
		w.search.exhausted = true
		return false
	}
	w.ends--
	return true
}

// askEvery is the number of steps of the search between two questions to Stop, and
// stepsOfFit what a fit counts as.
const (
	askEvery   = 256
	stepsOfFit = 64
)

// interrupted counts steps of the search and reports whether Stop ends the judging.
func (w *Worker) interrupted(steps uint) bool {
	if w.work += steps; w.work >= askEvery {
		w.work = 0
		if w.Stop != nil && w.Stop() {
			w.stopped = true
		}
	}
	return w.stopped
}

// complete judges a complete assignment with every open candidate. It returns false
// where the search is to end: without a ranking the first that passes is the best.
func (w *Worker) complete() bool {
	h, s := w.hypothesis, &w.search
	rank := w.distance()
	if s.possible {
		if !w.spend() {
			return false
		}
		if !s.found || rank < s.rank {
			s.found, s.rank, s.objects = true, rank, w.assigned
		}
		return len(h.ranking) > 0
	}
	if w.left > 0 {
		s.tried++
	}
	waiting := h.ranked()
	for i := range w.candidates {
		c := &w.candidates[i]
		if !c.open {
			continue
		}
		if !w.spend() {
			return false
		}
		if c.accepted && !h.byFit && !(rank < c.rank) && s.witness == nil {
			continue
		}
		w.enter(c)
		if h.fit != nil && w.interrupted(stepsOfFit) {
			s.exhausted = true
			return false
		}
		w.settle(c, rank)
		waiting = waiting || !c.accepted
	}
	return waiting
}

// settle accepts the assignment for a candidate if its windows and its fit let it, and it
// ranks before what was accepted. Within a hypothesis the larger probability is the
// smaller chi-square, which orders where the probability is too small for a number.
func (w *Worker) settle(c *candidate, rank float64) {
	h, s := w.hypothesis, &w.search
	if !w.all(h.final) {
		s.tell(c, len(h.slots), false, math.Inf(1))
		return
	}
	if h.fit != nil {
		w.makeFit(c)
		if w.fit.Status != constraint.Converged || !w.all(h.fitted) {
			c.miss(&w.fit, &w.assigned)
			s.tell(c, len(h.slots), false, w.fit.ChiSquare)
			return
		}
		if h.byFit {
			rank = w.fit.ChiSquare
		}
	}
	s.tell(c, len(h.slots), true, rank)
	if !c.accepted || rank < c.rank {
		c.accepted, c.rank, c.objects, c.fit = true, rank, w.assigned, w.fit
	}
}

// tell tells the witness, if there is one.
func (s *search) tell(c *candidate, placed int, passed bool, rank float64) {
	if s.witness != nil {
		s.witness(c, placed, passed, rank)
	}
}

// miss keeps the best of the assignments that were fitted and did not pass: one whose
// fit converged before others, then the smallest chi-square.
func (c *candidate) miss(fit *constraint.Result, objects *[MaxProducts]uint8) {
	better := !c.tried
	if c.tried && fit.Status == constraint.Converged {
		better = c.failed.Status != constraint.Converged || fit.ChiSquare < c.failed.ChiSquare
	}
	if better {
		c.tried, c.nearest, c.failed = true, *objects, *fit
	}
}

// standing returns the rank by which an accepted candidate compares with other
// hypotheses. Where a probability is too small for a number the chi-square ranks, after
// all those that are numbers.
func (c *candidate) standing(h *hypothesis) float64 {
	if h.byFit && c.fit.Probability > 0 {
		return -c.fit.Probability
	}
	return c.rank
}

// ranked reports whether every assignment must be tried to find the best.
func (h *hypothesis) ranked() bool { return len(h.ranking) > 0 || h.byFit }

// distance returns the rank of the assignment: the sum of the squared distances, 0
// without a ranking and +Inf where a mass cannot be computed.
func (w *Worker) distance() float64 {
	sum := 0.0
	for i := range w.hypothesis.ranking {
		r := &w.hypothesis.ranking[i]
		d := (w.value(&r.mass) - r.reference) / r.scale
		sum += float64(d * d)
	}
	if math.IsNaN(sum) {
		return math.Inf(1)
	}
	return sum
}

// report appends the entries of hypothesis h, one per candidate.
func (w *Worker) report(h int, entries *event.Entries) {
	tried := w.search.tried
	possible := false
	for i := range w.candidates {
		c := &w.candidates[i]
		row := event.Entry{
			Hypothesis: int16(h), BeamRow: int16(c.row), //nolint:gosec // at most MaxHypotheses, MaxCandidates
			Weight: c.weight, Status: event.Accepted, Tried: tried,
		}
		w.enter(c)
		w.assigned, w.fit = c.objects, c.fit
		if !c.accepted {
			if w.detail != AllEntries {
				continue
			}
			switch {
			case c.tried:
				w.assigned, w.fit = c.nearest, c.failed
			case w.unfinished[h]:
				row.Status = event.Unfinished
				w.describeNothing(&row)
				entries.Append(row)
				continue
			case w.lookForPossible(&possible):
				w.enter(c)
				if w.assigned = w.search.objects; w.hypothesis.fit != nil {
					w.makeFit(c)
				}
			default:
				continue
			}
			row.Status = w.statusOfFailed(h)
		}
		row.Fit = w.fitOfEntry()
		w.describe(&row)
		entries.Append(row)
	}
}

// statusOfFailed is the status of an entry without an assignment that passes.
func (w *Worker) statusOfFailed(h int) event.EntryStatus {
	switch {
	case w.unfinished[h]:
		return event.Unfinished
	case w.hypothesis.fit != nil && w.fit.Status != constraint.Converged:
		return event.FitFailed
	}
	return event.Rejected
}

// lookForPossible finds the best possible assignment, once, and reports whether there
// is one. It has a budget of its own, so that what entries are asked for changes no
// verdict; where that ends first, the best of those tried stands.
func (w *Worker) lookForPossible(done *bool) bool {
	if !*done {
		*done = true
		must, left, ends := w.search.must, w.left, w.ends
		w.search = search{must: must, possible: true}
		w.used = 0
		w.refill()
		w.try()
		w.left, w.ends = left, ends
	}
	return w.search.found
}

// describeNothing sets no object, no observable and no fit in an entry.
func (w *Worker) describeNothing(row *event.Entry) {
	w.assignment, w.values, w.spreads = w.assignment[:0], w.values[:0], w.spreads[:0]
	for range w.hypothesis.products {
		w.assignment = append(w.assignment, -1)
	}
	for range w.hypothesis.record {
		w.values, w.spreads = append(w.values, math.NaN()), append(w.spreads, math.NaN())
	}
	row.Assignment, row.Observables, row.Uncertainties = w.assignment, w.values, w.spreads
	row.Fit = event.Fit{Status: event.NoFit, ChiSquare: math.NaN(), Probability: math.NaN()}
}

// describe sets the assignment and the recorded observables of an entry.
func (w *Worker) describe(row *event.Entry) {
	h := w.hypothesis
	w.assignment = w.assignment[:0]
	for range h.products {
		w.assignment = append(w.assignment, -1)
	}
	w.used = 0
	for k := range h.slots {
		object := w.assigned[k]
		w.assignment[h.slots[k].product] = int16(object)
		w.used |= 1 << object
	}
	w.values, w.spreads = w.values[:0], w.spreads[:0]
	for i := range h.record {
		w.values = append(w.values, w.value(&h.record[i]))
		spread := math.NaN()
		if h.uncertain {
			spread = w.uncertainty(&h.record[i])
		}
		w.spreads = append(w.spreads, spread)
	}
	row.Assignment, row.Observables, row.Uncertainties = w.assignment, w.values, w.spreads
}
