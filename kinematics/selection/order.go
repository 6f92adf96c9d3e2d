package selection

import (
	"math"
	"slices"
	"strconv"
	"strings"
)

// order finds which identical products the hypothesis does not tell apart and gives
// their slots a canonical order, so that each set of assignments that differ only by
// an exchange of such products is tried once, by its lowest tuple of objects.
//
// Two daughters of one parent are identical if they are the same particle, measured in
// the same way, with identical daughters. The hypothesis does not tell them apart if
// its condition and its ranking stay the same when the two are exchanged with all that
// they decay to. Exchanges that leave it the same join daughters to classes; within a
// class every permutation does, since transpositions of neighbours make them all.
// Ordering each class by the object of the first slot picks one permutation, because
// no object stands for two products, and inside each member the same holds again.
func (d *drafter) order() {
	plain := d.text(nil)
	d.orderDaughters(d.reaction.Top, plain)
	for i := range d.reaction.Products {
		d.orderDaughters(d.reaction.Products[i].Daughters, plain)
	}
	for k := range d.out.slots {
		s := &d.out.slots[k]
		s.higher = d.followers(k)
		s.lowest = s.higher == len(d.out.slots)-1-k
	}
}

// orderDaughters orders the identical ones among some daughters.
func (d *drafter) orderDaughters(daughters []int, plain string) {
	for k, b := range daughters {
		slots := d.slotsOf(b)
		if len(slots) == 0 {
			continue
		}
		// The nearest earlier daughter of the class comes before; the class holds together
		// by exchanges, so that any member tells it.
		for i := k - 1; i >= 0; i-- {
			a := daughters[i]
			if d.identical(a, b) && d.text(d.exchange(a, b)) == plain && d.sameFit(a, b) {
				d.out.slots[slots[0]].after = d.slotsOf(a)[0]
				break
			}
		}
	}
}

// identical reports whether two products are alike with all that they decay to.
func (d *drafter) identical(a, b int) bool {
	p, q := &d.reaction.Products[a], &d.reaction.Products[b]
	return p.Particle.Number == q.Particle.Number && d.seen[a] == d.seen[b] &&
		d.massFromEvent[a] == d.massFromEvent[b] && d.merged[a] == d.merged[b] &&
		slices.EqualFunc(p.Daughters, q.Daughters, d.identical)
}

// slotsOf returns the slots of a product or of what it decays to, in order.
func (d *drafter) slotsOf(i int) []int {
	var slots []int
	for _, leaf := range d.leaves(i) {
		if s := d.slotOf[leaf]; s >= 0 {
			slots = append(slots, s)
		}
	}
	return slots
}

// exchange returns the slots with those of two identical products exchanged.
func (d *drafter) exchange(a, b int) []uint8 {
	slots := make([]uint8, len(d.out.slots))
	for k := range slots {
		slots[k] = uint8(k)
	}
	first, second := d.slotsOf(a), d.slotsOf(b)
	for k := range first {
		slots[first[k]], slots[second[k]] = slots[second[k]], slots[first[k]]
	}
	return slots
}

// followers counts the slots after k that must have a higher object than k. They have its
// signature: only first slots of identical products are ordered, and what such a slot
// leads within its own product is ordered for the same reason.
func (d *drafter) followers(k int) int {
	count := 0
	for later := k + 1; later < len(d.out.slots); later++ {
		before := later
		for before > k {
			before = d.out.slots[before].after
		}
		if before == k {
			count++
		}
	}
	return count
}

// sameFit reports whether the fit stays the same when two identical products are
// exchanged with all that they decay to.
func (d *drafter) sameFit(a, b int) bool {
	if d.out.fit == nil {
		return true
	}
	exchanged := make([]int, len(d.reaction.Products))
	for k := range exchanged {
		exchanged[k] = k
	}
	first, second := d.leaves(a), d.leaves(b)
	for k := range first {
		exchanged[first[k]], exchanged[second[k]] = second[k], first[k]
	}
	return d.out.fit.text(nil) == d.out.fit.text(exchanged)
}

// text renders the condition and the ranking with the slots renamed, nil for as they
// are, such that the order of parts that commute does not show.
func (d *drafter) text(slots []uint8) string {
	var parts []string
	for _, list := range append([][]check{d.out.event, d.out.candidate, d.out.final}, d.out.steps...) {
		for i := range list {
			parts = append(parts, list[i].text(slots))
		}
	}
	slices.Sort(parts)
	distances := make([]string, 0, len(d.out.ranking))
	for i := range d.out.ranking {
		r := &d.out.ranking[i]
		distances = append(distances, r.mass.text(slots)+number(r.reference)+number(r.scale))
	}
	slices.Sort(distances)
	return strings.Join(parts, "&") + "/" + strings.Join(distances, "+")
}

// text renders a check with the slots renamed.
func (c *check) text(slots []uint8) string {
	if c.operation == opWindow {
		return c.window.text(slots)
	}
	parts := make([]string, 0, len(c.parts))
	for i := range c.parts {
		parts = append(parts, c.parts[i].text(slots))
	}
	slices.Sort(parts)
	return strconv.Itoa(int(c.operation)) + "(" + strings.Join(parts, " ") + ")"
}

// text renders a window with the slots renamed.
func (w *window) text(slots []uint8) string {
	first, second := renamed(w.slots, slots), renamed(w.second, slots)
	if w.observable == OpeningAngle && second < first {
		first, second = second, first
	}
	return strings.Join([]string{
		w.observable.String(), strconv.Itoa(int(w.frame)), strconv.Itoa(int(w.initial)),
		first, second, number(w.low), number(w.high),
	}, ",")
}

// renamed renders a set of slots under their new names.
func renamed(set, slots []uint8) string {
	names := make([]string, 0, len(set))
	for _, k := range set {
		if slots != nil {
			k = slots[k]
		}
		names = append(names, strconv.Itoa(int(k)))
	}
	slices.Sort(names)
	return strings.Join(names, " ")
}

// number renders the bits of a number.
func number(x float64) string { return ":" + strconv.FormatUint(math.Float64bits(x), 16) }
