package selection

// operation is what a node of a compiled condition does.
type operation uint8

const (
	opWindow operation = iota
	opAll
	opAny
	opNone
)

// check is a node of a compiled condition.
type check struct {
	operation operation
	window    window
	parts     []check
}

// window is a compiled window.
type window struct {
	observable Observable
	frame      Frame
	initial    Initial
	// slots are the measured products of Products, second those of Second, or for
	// MissingDirection all slots but the one in slots.
	slots, second []uint8
	// low and high bound the value, or its square where squared is set.
	low, high float64
	squared   bool
	// squares is the sum of the squares of the table masses of slots, eventSquares
	// the slots whose squares come from the event.
	squares      float64
	eventSquares []uint8
	// pairs are the pairs of slots with the table of their products.
	pairs []slotPair
}

// slotPair is a pair of slots and the table that has the product of their momenta,
// rows for first.
type slotPair struct {
	table         uint16
	first, second uint8
}

// holds reports whether the condition holds for the objects of the slots. What it
// needs must have been set.
func (w *Worker) holds(c *check) bool {
	switch c.operation {
	case opWindow:
		return w.inside(&c.window)
	case opAll:
		return w.all(c.parts)
	case opAny:
		return w.any(c.parts)
	case opNone:
		return !w.any(c.parts)
	}
	return false
}

// all reports whether every check holds.
func (w *Worker) all(checks []check) bool {
	for i := range checks {
		if !w.holds(&checks[i]) {
			return false
		}
	}
	return true
}

// any reports whether at least one check holds.
func (w *Worker) any(checks []check) bool {
	for i := range checks {
		if w.holds(&checks[i]) {
			return true
		}
	}
	return false
}

// inside reports whether the observable lies in its window. NaN, which stands for
// what cannot be computed, lies outside.
func (w *Worker) inside(v *window) bool {
	if v.squared {
		square := w.square(v)
		return square >= v.low && square < v.high
	}
	value := w.value(v)
	return value >= v.low && value < v.high
}
