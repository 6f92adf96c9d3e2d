package fault

import "strconv"

// Kind is the class of a fault. A Kind is itself an error, for use with errors.Is.
type Kind uint8

// The kinds of fault. The list is closed: Kinds returns all of them.
const (
	// Invalid marks a value that is malformed or outside its allowed range.
	Invalid Kind = iota + 1
	// NotFound marks a name or number that nothing is known by.
	NotFound
	// Forbidden marks a process that a conservation law forbids.
	Forbidden
	// BelowThreshold marks a process for which the energy does not suffice.
	BelowThreshold
	// Outside marks a point outside the physical region, such as an angle that no
	// product reaches.
	Outside
	// Infeasible marks conditions that no solution can meet together.
	Infeasible
	// NotConverged marks an iteration that did not reach its stated bound.
	NotConverged
	// Exhausted marks work that stopped because its stated budget was used up.
	Exhausted
	// Unsupported marks a request that is well formed but that nothing here answers.
	Unsupported
)

// Kinds returns every kind in order.
func Kinds() []Kind {
	kinds := make([]Kind, 0, Unsupported)
	for k := Invalid; k <= Unsupported; k++ {
		kinds = append(kinds, k)
	}
	return kinds
}

// Error returns the kind in words.
func (k Kind) Error() string {
	switch k {
	case Invalid:
		return "invalid"
	case NotFound:
		return "not found"
	case Forbidden:
		return "forbidden by a conservation law"
	case BelowThreshold:
		return "below threshold"
	case Outside:
		return "outside the physical region"
	case Infeasible:
		return "infeasible"
	case NotConverged:
		return "not converged"
	case Exhausted:
		return "budget used up"
	case Unsupported:
		return "unsupported"
	}
	return "fault.Kind(" + strconv.Itoa(int(k)) + ")"
}
