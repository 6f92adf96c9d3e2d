package selection

import (
	"cmp"
	"fmt"
	"math"
	"slices"

	"example.org/kinegate/kinematics/constraint"
	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/momentum"
)

// Explanation lays the verdict on one event open.
type Explanation struct {
	Status event.Status
	Gate   bool
	// Hypotheses are those of the selection; none unless the event was judged.
	Hypotheses []HypothesisExplanation
}

// HypothesisExplanation is what one hypothesis made of the event.
type HypothesisExplanation struct {
	// Accepted says that an assignment passes, Kept that the prescale keeps the event.
	Accepted, Kept bool
	// Unfinished says that the work budget was used up before every assignment was tried.
	Unfinished bool
	// Obstacle says why no assignment could be tried; empty where one was.
	Obstacle string
	// Tried counts the assignments, each once for each beam candidate, also those that a
	// window ended early.
	Tried int64
	// Assignments are the best of them: those that pass by rank, then the complete ones
	// that fail, then those that ended early.
	Assignments []AssignmentExplanation
}

// AssignmentExplanation is one assignment with one beam candidate.
type AssignmentExplanation struct {
	// BeamRow is the candidate within the event, -1 for none.
	BeamRow int
	Weight  float64
	// Objects are those of the products, -1 for none, or none yet.
	Objects []int
	// Complete says that every product has its object, Passed that the condition and the
	// fit hold, Best that the entry describes this assignment.
	Complete, Passed, Best bool
	// RankDistance is the sum of squared distances of a ranking by closest masses, NaN for
	// others.
	RankDistance float64
	Windows      []WindowExplanation
	// Fit is nil where none was made.
	Fit *FitExplanation
}

// WindowExplanation is one window on one assignment.
type WindowExplanation struct {
	// Path is that of the window in the hypothesis, Label its name or what it looks at.
	Path, Label string
	// Unit is GeV, GeV^2, rad, ns, m or empty.
	Unit string
	// Value and Uncertainty of the observable; NaN where they cannot be computed.
	Value, Uncertainty float64
	// AboveMin is the value less the lower limit, BelowMax the upper limit less the value;
	// NaN without a limit.
	AboveMin, BelowMax float64
	Inside             bool
}

// FitExplanation is the fit of one assignment.
type FitExplanation struct {
	Result      constraint.Result
	Constraints []ConstraintExplanation
	Particles   []FittedParticle
	// VertexZ and VertexSigma are the fitted vertex in metres, NaN where it is exact.
	VertexZ, VertexSigma float64
}

// ConstraintExplanation is one constraint of a fit.
type ConstraintExplanation struct {
	Name, Unit    string
	Before, After float64
}

// FittedParticle is one particle of a fit.
type FittedParticle struct {
	// Name is the reference of a product, or beam or target.
	Name string
	// Object is that of the product, -1 for none.
	Object int
	// Measured is nil where not all of it is measured.
	Measured   *momentum.Four
	Fitted     momentum.Four
	Parameters []FittedParameter
}

// FittedParameter is one parameter of a particle of a fit.
type FittedParameter struct {
	Name, Unit string
	// Measured and Uncertainty are NaN for a parameter that is not measured, Pull where it
	// has none.
	Measured, Uncertainty, Fitted, Pull float64
}

// trial is an assignment that was tried.
type trial struct {
	candidate        int // -1 where a window ended it before
	placed           int
	passed, complete bool
	rank             float64
	number           int64
	objects          [MaxProducts]uint8
}

// before orders trials: those that pass, complete ones, the others; by rank, then as
// they were tried.
func (t *trial) before(o *trial) int {
	class := func(t *trial) int {
		switch {
		case t.passed:
			return 0
		case t.complete:
			return 1
		}
		return 2
	}
	return cmp.Or(cmp.Compare(class(t), class(o)), cmp.Compare(t.rank, o.rank), cmp.Compare(t.number, o.number))
}

// Explain lays the verdict on event i of a block open, with at most limit assignments
// for each hypothesis. It allocates.
func (w *Worker) Explain(block *event.Block, i, limit int) Explanation {
	var out event.VerdictBlock
	w.Reset(&out)
	w.Judge(block, i, i+1, &out)
	e := Explanation{Status: out.Status[0], Gate: out.Gate.Get(0)}
	if e.Status != event.Good && e.Status != event.BudgetUsed {
		return e
	}
	w.block, w.stopped = block, false
	w.refill()
	e.Hypotheses = make([]HypothesisExplanation, len(w.program.hypotheses))
	for _, h := range w.program.order {
		e.Hypotheses[h] = HypothesisExplanation{
			Accepted: out.Accepted[h].Get(0), Kept: w.program.hypotheses[h].kept(block.EventIDs[i]),
		}
		w.explainHypothesis(h, limit, &e.Hypotheses[h])
	}
	w.search.witness, w.block = nil, nil
	return e
}

// explainHypothesis tests the event against hypothesis h again, with a witness.
func (w *Worker) explainHypothesis(h, limit int, x *HypothesisExplanation) {
	hypothesis := &w.program.hypotheses[h]
	w.hypothesis, w.number = hypothesis, h
	w.used = 0
	w.search = search{}
	if x.Obstacle = w.obstacle(); x.Obstacle != "" {
		return
	}
	w.prepare()
	var trials []trial
	add := func(t trial) {
		x.Tried++
		t.number = x.Tried
		at, _ := slices.BinarySearchFunc(trials, t, func(a, b trial) int { return a.before(&b) })
		if at >= limit {
			return
		}
		if len(trials) == limit {
			trials = trials[:limit-1]
		}
		trials = slices.Insert(trials, at, t)
	}
	if w.openCandidates() {
		w.search.witness = func(c *candidate, placed int, passed bool, rank float64) {
			t := trial{candidate: -1, placed: placed, passed: passed, rank: rank, objects: w.assigned}
			if c == nil {
				t.rank = -float64(placed)
			} else {
				t.candidate, t.complete = w.candidateNumber(c), true
			}
			add(t)
		}
		w.try()
		w.search.witness = nil
	}
	if x.Unfinished = w.search.exhausted; x.Unfinished && x.Tried == 0 {
		x.Obstacle = "the work budget was used up before this hypothesis"
		return
	}
	for k := range w.candidates {
		if !w.candidates[k].open {
			add(trial{candidate: k})
		}
	}
	for k := range trials {
		x.Assignments = append(x.Assignments, w.explainTrial(&trials[k]))
	}
}

// candidateNumber is the place of a candidate in the list.
func (w *Worker) candidateNumber(c *candidate) int {
	for k := range w.candidates {
		if c == &w.candidates[k] {
			return k
		}
	}
	return -1
}

// obstacle says why no assignment can be tried, and is empty where one can.
func (w *Worker) obstacle() string {
	h := w.hypothesis
	if !w.findCandidates() {
		if w.block.Beam == nil {
			return "the events have no beam columns"
		}
		first, end := w.block.Candidates(w.index)
		return fmt.Sprintf("none of the event's %d beam candidates lies in a time window", end-first)
	}
	if !w.allowExtra() {
		return fmt.Sprintf("the event has %d objects, the products need %d, and the rule on extra objects forbids the difference",
			w.objects.count, len(h.slots))
	}
	if w.fits() {
		return ""
	}
	names := w.program.outlines[w.number].Products
	var taken set
	for k, s := range h.variants[0] {
		if w.matching[s] == 0 {
			return "no object can stand for " + names[h.slots[k].product]
		}
		taken |= w.matching[s]
	}
	return fmt.Sprintf("no product takes object %d, and the rule on extra objects does not let it be left over",
		(w.search.must &^ taken).lowest())
}

// explainTrial evaluates everything about an assignment.
func (w *Worker) explainTrial(t *trial) AssignmentExplanation {
	h := w.hypothesis
	x := AssignmentExplanation{
		BeamRow: -1, Weight: 1, Complete: t.complete, Passed: t.passed, RankDistance: math.NaN(),
		Objects: make([]int, h.products),
	}
	for k := range x.Objects {
		x.Objects[k] = -1
	}
	w.assigned, w.used = t.objects, 0
	for k := range t.placed {
		x.Objects[h.slots[k].product] = int(w.assigned[k])
		w.used |= 1 << w.assigned[k]
	}
	var c *candidate
	if t.candidate >= 0 {
		c = &w.candidates[t.candidate]
		w.enter(c)
		x.BeamRow, x.Weight = c.row, c.weight
	}
	if t.complete {
		x.Best = w.isEntry(c)
		if len(h.ranking) > 0 {
			x.RankDistance = w.distance()
		}
		if h.fit != nil && w.all(h.final) {
			w.makeFit(c)
			x.Fit = w.explainFit(c)
		}
	}
	for k := range h.shown {
		v := &h.shown[k]
		if v.last >= t.placed || (v.candidate && c == nil) || (v.window.observable == FitProbability && x.Fit == nil) {
			continue
		}
		x.Windows = append(x.Windows, w.explainWindow(v))
	}
	return x
}

// isEntry reports whether the entry of the candidate describes the assignment.
func (w *Worker) isEntry(c *candidate) bool {
	n := len(w.hypothesis.slots)
	switch {
	case c.accepted:
		return slices.Equal(c.objects[:n], w.assigned[:n])
	case c.tried:
		return slices.Equal(c.nearest[:n], w.assigned[:n])
	}
	return false
}

// explainWindow evaluates a window.
func (w *Worker) explainWindow(v *shownWindow) WindowExplanation {
	value := w.value(&v.window)
	x := WindowExplanation{
		Path: v.path, Label: v.label, Unit: v.window.observable.unit(),
		Value: value, Uncertainty: w.uncertainty(&v.window), Inside: w.inside(&v.window),
		AboveMin: math.NaN(), BelowMax: math.NaN(),
	}
	if v.low != nil {
		x.AboveMin = value - *v.low
	}
	if v.high != nil {
		x.BelowMax = *v.high - value
	}
	return x
}

// explainFit describes the last fit.
func (w *Worker) explainFit(c *candidate) *FitExplanation {
	plan, fitter := w.hypothesis.fit, w.fitters[w.number]
	x := &FitExplanation{Result: w.fit, VertexZ: math.NaN(), VertexSigma: math.NaN()}
	if w.fit.Status == constraint.Singular && math.IsNaN(w.fit.ChiSquare) {
		return x // nothing was fitted
	}
	for k, name := range plan.names {
		r := fitter.Residual(k)
		unit := "GeV"
		if k >= len(plan.names)-len(plan.masses) {
			unit = InvariantMassSquared.unit()
		}
		x.Constraints = append(x.Constraints, ConstraintExplanation{Name: name, Unit: unit, Before: r.Before, After: r.After})
	}
	if plan.repointed {
		x.VertexZ, x.VertexSigma = fitter.VertexZ()
	}
	for k := range plan.objects {
		x.Particles = append(x.Particles, w.explainParticle(c, k))
	}
	return x
}

// explainParticle describes particle k of the last fit.
func (w *Worker) explainParticle(c *candidate, k int) FittedParticle {
	o, fitter := &w.hypothesis.fit.objects[k], w.fitters[w.number]
	m := &fitter.Measurements[k]
	p := FittedParticle{Name: o.name, Object: -1, Fitted: fitter.Momentum(k)}
	mask, kind := uint8(0), event.MomentumMass
	count := 3
	switch {
	case o.initial != 0:
		count, kind = 1, event.MomentumAngles // the size of the momentum
		if !o.unmeasured {
			state := c.state.side(o.initial)
			p.Measured, mask = &state, event.FirstMeasured
		}
	case o.slot >= 0:
		p.Object = int(w.assigned[o.slot])
		kind, mask = m.Kind, event.DirectionMeasured
		if !o.direction {
			four := w.four(uint8(o.slot)) //nolint:gosec // below MaxProducts
			p.Measured, mask = &four, event.AllMeasured
		}
	}
	fitted := fitter.Unfolded(k)
	for a := range count {
		name, unit := parameterName(kind, a)
		q := FittedParameter{
			Name: name, Unit: unit, Fitted: fitted[a],
			Measured: math.NaN(), Uncertainty: math.NaN(), Pull: math.NaN(),
		}
		if mask>>a&1 == 1 {
			q.Measured = m.Values[a]
			q.Uncertainty = math.Sqrt(m.Covariance[packedIndex(a, a)])
			q.Pull = fitter.Pull(k, a)
		}
		p.Parameters = append(p.Parameters, q)
	}
	return p
}
