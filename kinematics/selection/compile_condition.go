package selection

import (
	"math"
	"slices"
	"strconv"
	"strings"

	"example.org/kinegate/kinematics/fault"
)

// condition compiles the condition: the parts of the conjunction at its top go where
// everything they need is known first.
func (d *drafter) condition() {
	if d.from.Condition == nil {
		return
	}
	root, ok := d.check(d.at+".condition", d.from.Condition, 1)
	if !ok {
		return
	}
	for _, part := range conjuncts(root) {
		last, candidate := d.needs(&part)
		switch {
		case needsFit(&part):
			d.out.fitted = append(d.out.fitted, part)
		case last < 0 && candidate:
			d.out.candidate = append(d.out.candidate, part)
		case last < 0:
			d.out.event = append(d.out.event, part)
		case candidate:
			d.out.final = append(d.out.final, part)
		default:
			d.out.steps[last] = append(d.out.steps[last], part)
		}
	}
}

// check compiles a node of the condition tree.
func (d *drafter) check(at string, c *Condition, depth int) (check, bool) {
	members := 0
	for _, is := range [...]bool{c.Window != nil, len(c.AllOf) > 0, len(c.AnyOf) > 0, len(c.NoneOf) > 0} {
		if is {
			members++
		}
	}
	if members != 1 {
		d.fault(at, strconv.Itoa(members)+" members", "exactly one of window, all_of, any_of, none_of; lists not empty")
		return check{}, false
	}
	if depth > MaxNesting {
		d.fault(at, "deeper than "+strconv.Itoa(MaxNesting), "at most "+strconv.Itoa(MaxNesting)+" levels")
		return check{}, false
	}
	switch {
	case c.Window != nil:
		w, ok := d.window(at+".window", c.Window, true)
		d.show(at+".window", c.Window, &w)
		return check{operation: opWindow, window: w}, ok
	case len(c.AllOf) > 0:
		return d.checks(at+".all_of", opAll, c.AllOf, depth+1)
	case len(c.AnyOf) > 0:
		return d.checks(at+".any_of", opAny, c.AnyOf, depth+1)
	}
	return d.checks(at+".none_of", opNone, c.NoneOf, depth+1)
}

// checks compiles a list of nodes.
func (d *drafter) checks(at string, o operation, list []Condition, depth int) (check, bool) {
	node, good := check{operation: o}, true
	for i := range list {
		part, ok := d.check(indexed(at, i), &list[i], depth)
		node.parts = append(node.parts, part)
		good = good && ok
	}
	return node, good
}

// conjuncts returns the parts of a conjunction, nested ones taken apart; none of several is a
// conjunction of as many parts.
func conjuncts(c check) []check {
	var all []check
	switch c.operation {
	case opAll:
		for _, part := range c.parts {
			all = append(all, conjuncts(part)...)
		}
	case opNone:
		for i := range c.parts {
			all = append(all, check{operation: opNone, parts: c.parts[i : i+1]})
		}
	case opWindow, opAny:
		all = []check{c}
	}
	return all
}

// needs returns the last slot that a check needs, -1 for none, and whether it needs a
// tagged beam candidate.
func (d *drafter) needs(c *check) (last int, candidate bool) {
	last = -1
	if c.operation == opWindow {
		w := &c.window
		for _, k := range slices.Concat(w.slots, w.second) {
			last = max(last, int(k))
		}
		if w.observable == UnusedPhotonEnergy {
			last = len(d.out.slots) - 1
		}
		f, _ := w.observable.form()
		uses := f.incoming || w.frame == CentreOfMass || w.observable == TimeDifference
		return last, uses && d.out.beam.tagged
	}
	for i := range c.parts {
		slot, uses := d.needs(&c.parts[i])
		last, candidate = max(last, slot), candidate || uses
	}
	return last, candidate
}

// needsFit reports whether a check needs the fit.
func needsFit(c *check) bool {
	if c.operation == opWindow {
		return c.window.observable == FitProbability
	}
	for i := range c.parts {
		if needsFit(&c.parts[i]) {
			return true
		}
	}
	return false
}

// ranking compiles the ranking.
func (d *drafter) ranking() {
	free := d.out.fit != nil && d.out.fit.problem.DegreesOfFreedom() > 0
	if d.from.Ranking == nil {
		d.out.byFit = free
		return
	}
	references := d.from.Ranking.ClosestMasses
	if d.from.Ranking.FitProbability {
		d.out.byFit = free
		switch {
		case len(references) > 0:
			d.fault(d.at+".ranking", "both", "exactly one of closest_masses and fit_probability")
		case d.from.Fit == nil:
			d.fault(d.at+".ranking.fit_probability", "no fit", "a hypothesis with a fit")
		case d.out.fit != nil && !free:
			d.fault(d.at+".ranking.fit_probability", "0 degrees of freedom", "a fit with at least 1 degree of freedom")
		}
		return
	}
	at := d.at + ".ranking.closest_masses.masses"
	if n := len(references); n < 1 || n > MaxReferences {
		d.fault(at, strconv.Itoa(n), "1 to "+strconv.Itoa(MaxReferences)+" masses")
		return
	}
	for k := range references {
		d.reference(indexed(at, k), &references[k])
	}
}

// reference compiles one distance of the ranking.
func (d *drafter) reference(at string, r *MassReference) {
	out := distance{scale: 1}
	out.mass = window{observable: InvariantMass, frame: Laboratory, low: math.Inf(-1), high: math.Inf(1)}
	before := len(d.faults)
	out.mass.slots = d.list(at, "products", false, r.Products, true)
	switch {
	case r.MassGeV != nil:
		out.reference = *r.MassGeV
		if !(out.reference >= 0) || !finite(out.reference) {
			d.fault(at+".mass_gev", fault.Text(out.reference), ">= 0")
		}
	case len(r.Products) == 1 && d.reaction != nil:
		if i, err := d.reaction.Product(d.table, r.Products[0]); err == nil {
			out.reference = d.reaction.Products[i].Particle.Mass
		}
	case len(r.Products) > 1:
		d.fault(at+".mass_gev", "absent", "given, since several products have no table mass together")
	}
	if r.ScaleGeV != nil {
		out.scale = *r.ScaleGeV
		if !(out.scale > 0) || !finite(out.scale) {
			d.fault(at+".scale_gev", fault.Text(out.scale), "> 0")
		}
	}
	if d.reaction != nil && len(d.faults) == before && d.masses(at, &out.mass) {
		d.out.ranking = append(d.out.ranking, out)
	}
}

// record compiles the recorded observables and returns their labels.
func (d *drafter) record() []string {
	var labels []string
	for k := range d.from.Record {
		v := &d.from.Record[k]
		w, ok := d.window(indexed(d.at+".record", k), v, false)
		if !ok {
			continue
		}
		d.show(indexed(d.at+".record", k), v, &w)
		d.out.record = append(d.out.record, w)
		labels = append(labels, label(v))
	}
	return labels
}

// label is the name of a recorded observable, or else its kind and products.
func label(v *Window) string {
	if v.Name != "" {
		return v.Name
	}
	text := v.Observable.String()
	products := strings.Join(v.Products, ", ")
	if len(v.Second) > 0 {
		products += "; " + strings.Join(v.Second, ", ")
	}
	if products == "" {
		return text
	}
	return text + "(" + products + ")"
}
