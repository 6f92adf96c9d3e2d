package selection

import (
	"math"
	"slices"
	"strconv"
	"strings"

	"example.org/kinegate/kinematics/fault"
)

// window checks and compiles a window; limits says whether it may have limits.
func (d *drafter) window(at string, v *Window, limits bool) (window, bool) {
	if d.windows++; d.windows == MaxWindows+1 {
		d.fault(at, "more than "+strconv.Itoa(MaxWindows), "at most "+strconv.Itoa(MaxWindows)+" windows in a hypothesis")
	}
	f, known := v.Observable.form()
	if !known {
		d.fault(at, "no observable", "exactly one observable")
		return window{}, false
	}
	before := len(d.faults)
	at += "." + f.name
	w := window{observable: v.Observable, frame: v.Frame, initial: v.Initial}
	d.limits(at, f, v, limits, &w)
	d.options(at, f, v, &w)
	w.slots = d.list(at, f.products, f.single, v.Products, d.needsFull(v))
	w.second = d.list(at, f.second, f.single, v.Second, d.needsFull(v))
	d.incoming(at, f, v)
	d.decaying(at, v)
	if d.reaction == nil || len(d.faults) > before {
		return window{}, false
	}
	return d.finish(at, v, w)
}

// limits compiles the limits of a window.
func (d *drafter) limits(at string, f form, v *Window, allowed bool, w *window) {
	lowName, highName := f.limits()
	low, high := at+"."+lowName, at+"."+highName
	w.low, w.high = math.Inf(-1), math.Inf(1)
	if !allowed {
		if v.Min != nil {
			d.fault(low, fault.Text(*v.Min), "absent in a recorded observable")
		}
		if v.Max != nil {
			d.fault(high, fault.Text(*v.Max), "absent in a recorded observable")
		}
		return
	}
	if v.Min != nil && d.finite(low, *v.Min) {
		w.low = *v.Min
	}
	if v.Max != nil && d.finite(high, *v.Max) {
		w.high = *v.Max
	}
	if v.Observable == FitProbability {
		d.probability(low, v.Min)
		d.probability(high, v.Max)
	}
	if v.Min != nil && v.Max != nil && !(w.low < w.high) {
		d.fault(high, fault.Text(w.high), "> "+lowName+" = "+fault.Text(w.low))
	}
	if v.Observable == InvariantMass || v.Observable == MissingMass {
		w.squared = true
		w.low, w.high = leastSquare(w.low), leastSquare(w.high)
	}
}

// probability checks a limit that is a probability.
func (d *drafter) probability(field string, limit *float64) {
	if limit != nil && finite(*limit) && !(*limit >= 0 && *limit <= 1) {
		d.fault(field, fault.Text(*limit), "0 to 1")
	}
}

// leastSquare returns the smallest double s >= 0 whose rounded root is at least m, so
// that sqrt(s) >= m and s >= leastSquare(m) are the same and no root need be taken.
// The root is rounded correctly and rises with s; the loops end after a few steps,
// since m*m is within an ulp of the answer save at the ends of the range.
func leastSquare(m float64) float64 {
	if !(m > 0) {
		return 0
	}
	s := m * m
	for math.Sqrt(s) < m {
		s = math.Float64frombits(math.Float64bits(s) + 1)
	}
	for s > 0 {
		below := math.Float64frombits(math.Float64bits(s) - 1)
		if math.Sqrt(below) < m {
			break
		}
		s = below
	}
	return s
}

// options checks the members that only some observables have.
func (d *drafter) options(at string, f form, v *Window, w *window) {
	switch {
	case v.Frame > CentreOfMass || (!f.frame && v.Frame != 0):
		d.fault(at+".frame", strconv.Itoa(int(v.Frame)), "laboratory or centre of mass, where the observable has a frame")
	case v.Frame == 0:
		w.frame = Laboratory
	}
	if f.initial && v.Initial != Beam && v.Initial != Target {
		d.fault(at+".initial", strconv.Itoa(int(v.Initial)), "beam or target")
	}
	if !f.initial && v.Initial != 0 {
		d.fault(at+".initial", strconv.Itoa(int(v.Initial)), "absent for this observable")
	}
}

// needsFull reports whether the products of a window must be measured in full: not
// where a direction in the laboratory is enough.
func (d *drafter) needsFull(v *Window) bool {
	switch v.Observable {
	case Angle, OpeningAngle, Coplanarity:
		return v.Frame == CentreOfMass
	case MissingDirection:
		return false
	default:
		return true
	}
}

// list resolves references to the slots of their products that objects stand for, in
// ascending order.
func (d *drafter) list(at, field string, single bool, references []string, full bool) []uint8 {
	path := func(k int) string {
		if single {
			return at + "." + field
		}
		return indexed(at+"."+field, k)
	}
	switch {
	case field == "":
		if len(references) > 0 {
			d.fault(at, strings.Join(references, " "), "no products")
		}
		return nil
	case len(references) == 0:
		d.fault(at+"."+field, "none", "at least one reference of a product")
		return nil
	case single && len(references) > 1:
		d.fault(at+"."+field, strconv.Itoa(len(references)), "one reference of a product")
		return nil
	}
	var slots []uint8
	for k, reference := range references {
		i, ok := d.product(path(k), reference)
		if !ok {
			continue
		}
		leaves := d.leaves(i)
		for _, leaf := range leaves {
			name := d.reaction.Products[leaf].Name
			s := d.slotOf[leaf]
			switch {
			case s < 0:
				d.fault(path(k), reference, "a product that is measured").Because(name + " is missing")
			case d.seen[leaf] == Direction && (full || len(leaves)+len(references) > 2):
				d.fault(path(k), reference, "a product that is measured in full").Because(name + " has a direction only")
			case slices.Contains(slots, uint8(s)): //nolint:gosec // below MaxProducts
				d.fault(path(k), reference, "each product once").Because(name + " stands twice")
			default:
				slots = append(slots, uint8(s)) //nolint:gosec // below MaxProducts
			}
		}
	}
	slices.Sort(slots)
	return slots
}

// leaves returns the products that product i is made of in the end.
func (d *drafter) leaves(i int) []int {
	daughters := d.reaction.Products[i].Daughters
	if len(daughters) == 0 {
		return []int{i}
	}
	var all []int
	for _, k := range daughters {
		all = append(all, d.leaves(k)...)
	}
	return all
}

// incoming checks that the initial state is known where a window needs it.
func (d *drafter) incoming(at string, f form, v *Window) {
	source := d.from.Beam
	if (f.incoming || v.Frame == CentreOfMass) && source == nil {
		d.fault(at, "no beam", "a hypothesis with a beam")
	}
	if v.Observable == TimeDifference && (source == nil || source.Tagged == nil) {
		d.fault(at, "no tagged beam", "a hypothesis with a tagged beam")
	}
}

// decaying checks what the windows on a displaced decay and on the fit need.
func (d *drafter) decaying(at string, v *Window) {
	switch v.Observable {
	case FlightDistance, Pointing:
		if d.reaction == nil || len(v.Products) != 1 {
			return
		}
		if i, err := d.reaction.Product(d.table, v.Products[0]); err == nil && len(d.reaction.Products[i].Daughters) == 0 {
			d.fault(at+".product", v.Products[0], "a product that decays in the reaction").Because("does not decay")
		}
	case FitProbability:
		if d.from.Fit == nil {
			d.fault(at, "no fit", "a hypothesis with a fit")
		} else if d.out.fit != nil && d.out.fit.problem.DegreesOfFreedom() == 0 {
			d.fault(at, "0 degrees of freedom", "a fit with at least 1 degree of freedom")
		}
	default:
	}
}

// finish fills in what the evaluation of a sound window needs.
func (d *drafter) finish(at string, v *Window, w window) (window, bool) {
	switch v.Observable {
	case InvariantMass, InvariantMassSquared:
		return w, d.masses(at, &w)
	case MissingDirection:
		return w, d.others(at, &w)
	case OpeningAngle, Coplanarity:
		if slices.ContainsFunc(w.second, func(k uint8) bool { return slices.Contains(w.slots, k) }) {
			d.fault(at, strings.Join(slices.Concat(v.Products, v.Second), " "), "two sets without a common product")
			return w, false
		}
	case MomentumTransferPrime:
		d.out.centre = true
	default:
	}
	d.out.centre = d.out.centre || v.Frame == CentreOfMass
	return w, true
}

// maxTables bounds the memory of a worker, 32 KiB a table.
const maxTables = 128

// masses sets the squares and the pairs of an invariant mass.
func (d *drafter) masses(at string, w *window) bool {
	for i, a := range w.slots {
		first := d.out.slots[a].kind
		if mass := d.program.kinds[first]; mass.fromEvent {
			w.eventSquares = append(w.eventSquares, a)
		} else {
			w.squares += float64(mass.mass * mass.mass)
		}
		for _, b := range w.slots[:i] {
			second := d.out.slots[b].kind
			low, high := a, b
			pair := kindPair{first, second}
			if first > second {
				low, high, pair = b, a, kindPair{second, first}
			}
			t := intern(&d.program.tables, pair)
			if int(t) >= maxTables {
				d.fault(at, "more than "+strconv.Itoa(maxTables), "at most "+strconv.Itoa(maxTables)+" different pairs of masses in a selection")
				return false
			}
			if !slices.Contains(d.out.tables, t) {
				d.out.tables = append(d.out.tables, t)
			}
			w.pairs = append(w.pairs, slotPair{table: t, first: low, second: high})
		}
	}
	return true
}

// others sets the slots other than the one of a missing direction, of which the
// missing momentum is the balance.
func (d *drafter) others(at string, w *window) bool {
	if len(w.slots) != 1 {
		d.fault(at+".product", strconv.Itoa(len(w.slots))+" products", "a product that does not decay")
		return false
	}
	for _, leaf := range d.reaction.Leaves() {
		s := d.slotOf[leaf]
		if s == int(w.slots[0]) {
			continue
		}
		if d.seen[leaf] != Full {
			d.fault(at, d.reaction.Products[leaf].Name, "all other products measured in full")
			return false
		}
		w.second = append(w.second, uint8(s)) //nolint:gosec // below MaxProducts
	}
	if d.reaction.Inclusive || len(w.second) == 0 {
		d.fault(at, "inclusive or alone", "a reaction whose other products are all stated")
		return false
	}
	return true
}
