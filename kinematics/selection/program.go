package selection

import (
	"example.org/kinegate/kinematics/momentum"
)

// Program is a compiled selection. It is immutable and safe for concurrent use.
type Program struct {
	budget     int64
	hypotheses []hypothesis
	// order is that in which hypotheses are tested: vetoes before the others.
	order []int
	// groups are the hypotheses of each declared group, ascending.
	groups [][]int
	// kinds are the mass hypotheses of all slots, signatures what their objects must
	// be, tables the pairs of kinds of which products are needed.
	kinds      []kind
	signatures []signature
	tables     []kindPair
	outlines   []Outline
	// fits and uncertain say that a hypothesis has a fit, or reports uncertainties.
	fits, uncertain bool
}

// Outline is how one hypothesis was understood.
type Outline struct {
	Name string
	// Reaction is its canonical text.
	Reaction string
	// Products are the references of all products in depth-first order: the meaning
	// of an entry's assignment.
	Products []string
	// Observables are the labels of the recorded observables: the meaning of an
	// entry's observables.
	Observables []string
	// DegreesOfFreedom are those of the fit, NoFit without one.
	DegreesOfFreedom int
}

// NoFit stands for the degrees of freedom of a hypothesis without a fit.
const NoFit = -1

// Outlines returns how the hypotheses were understood, in order. The caller must
// not change them.
func (p *Program) Outlines() []Outline { return p.outlines }

// kind is where the mass of a product comes from, the table or the event, and whether
// what is measured of it is the energy of merged photons and not the momentum.
type kind struct {
	mass      float64
	fromEvent bool
	merged    bool
}

// kindPair is a pair of kinds, first <= second.
type kindPair struct{ first, second uint16 }

// signature is what an object must be to stand for a product.
type signature struct {
	class uint8
	// species is the bit of the product's species, 0 for one that has none.
	species uint8
	// full asks for the momentum, otherwise the direction is enough.
	full bool
	// kind is the mass that the object must be able to have.
	kind uint16
	// minEnergy is the least energy of the object, 0 for any.
	minEnergy float64
}

// hypothesis is a compiled hypothesis. A slot is a product that an object stands
// for; slots are numbered depth first.
type hypothesis struct {
	// products is the number of all products.
	products int
	slots    []slot
	// variants are the signatures of the slots, one set for the hypothesis and one
	// more for its conjugate where that is to be tested and differs.
	variants [][]uint16
	// tables are those of Program.tables that the windows and the ranking need.
	tables []uint16
	// kinds are those of Program.kinds that the slots have.
	kinds []uint16

	extra          ExtraRule
	extraCount     int
	extraEnergyGeV float64

	beam beam

	// The condition is a conjunction. event holds its parts that need the event
	// alone, candidate those that need the beam candidate besides, steps[k] those
	// that need no slot above k, final those that need both slots and candidate, fitted
	// those that need the fit.
	event, candidate []check
	steps            [][]check
	final, fitted    []check

	ranking []distance
	// byFit says that the fit probability ranks.
	byFit  bool
	record []window
	// uncertain says that the uncertainties of the recorded observables are reported.
	uncertain bool
	// fit is the constrained fit, nil for none.
	fit *fitPlan
	// shown are all windows of the condition and all recorded observables, as an
	// explanation shows them.
	shown []shownWindow

	prescale uint64
	salt     uint64
	role     Role
	// centre says that the rest frame of the initial state is needed.
	centre bool
}

// slot is a product that an object stands for.
type slot struct {
	// product is its number among all products.
	product int
	kind    uint16
	full    bool
	// minEnergy is the least energy of the photon cluster that stands for the product,
	// 0 for a product that is seen as itself.
	minEnergy float64
	// after is a slot that must have a lower object, or -1: the canonical order of
	// identical products.
	after int
	// higher is the number of later slots that must have a higher object, all of them of
	// the same signature, and lowest says that every later slot is one of them.
	higher int
	lowest bool
}

// beam says where the initial state comes from.
type beam struct {
	// known says that there is one; tagged that it changes with the candidate.
	known, tagged bool
	// fixed is the initial state that is not tagged.
	fixed incoming
	// mass and target are the masses of the beam particle and of the target at rest.
	mass, target float64
	// windows are the time windows, none to take every candidate.
	windows []timeWindow
}

type timeWindow struct{ low, high, weight float64 }

// incoming is an initial state: the four-momenta of both particles, and the boost to
// their rest frame where there is one and it is needed.
type incoming struct {
	first, second momentum.Four
	boost         momentum.Boost
	// moving says that boost is set.
	moving bool
}

// distance is a compiled reference of the ranking.
type distance struct {
	mass      window
	reference float64
	scale     float64
}
