package selection

import "example.org/kinegate/kinematics/reaction"

// Limits of a selection.
const (
	// MaxHypotheses is the largest number of hypotheses of a selection.
	MaxHypotheses = 64
	// MaxNameLength is the largest length of a name in bytes.
	MaxNameLength = 64
	// MaxProducts is the largest number of products of a hypothesis, intermediates
	// included.
	MaxProducts = reaction.MaxProducts
	// MaxWindows is the largest number of windows of a hypothesis, recorded
	// observables included.
	MaxWindows = 128
	// MaxNesting is the largest depth of a condition tree.
	MaxNesting = 16
	// MaxReferences is the largest number of masses of a ranking.
	MaxReferences = 8
	// DefaultBudget is the assignment budget of a selection that gives none.
	DefaultBudget = 100_000
	// MaxBudget is the largest assignment budget.
	MaxBudget = 1 << 40
)

// Selection is a set of hypotheses that together take the gate decision.
type Selection struct {
	// Name has letters, digits, "-" and "_", at most MaxNameLength of them.
	Name string
	// Description says what the selection is for.
	Description string
	// Hypotheses are one to MaxHypotheses.
	Hypotheses []Hypothesis
	// Groups of comparable hypotheses; only within a group is one best.
	Groups []Group
	// AssignmentBudget is the most assignments to try for one event over all
	// hypotheses and beam candidates, vetoes first; 0 means DefaultBudget.
	AssignmentBudget int64
}

// Hypothesis is one reaction an event may be, and what must hold for it.
type Hypothesis struct {
	// Name is unique in the selection and written as the selection's.
	Name string
	// Reaction is the reaction or decay in text; exactly one of this and
	// Structured must be given.
	Reaction string
	// Structured is the same in structured form.
	Structured *Reaction
	// AlsoConjugate tests the charge conjugate too.
	AlsoConjugate bool
	// Measurements say how products are seen. A product not listed is seen in full
	// if it is a photon or charged, missing if it is a neutrino, and else seen in
	// direction only.
	Measurements []ProductMeasurement
	// Beam says where the beam energy comes from; absent for a decay.
	Beam *BeamSource
	// ExtraObjects is the rule for other objects; absent means none.
	ExtraObjects *ExtraObjects
	// Condition must hold; absent means that an assignment is enough.
	Condition *Condition
	// Fit is the constrained fit; absent for none.
	Fit *Fit
	// Ranking orders competing assignments; absent means by fit probability where
	// there is a fit with a degree of freedom, and else in index order.
	Ranking *Ranking
	// Record lists observables to report with each entry, without limits.
	Record []Window
	// RecordUncertainties reports their standard deviations too.
	RecordUncertainties bool
	// Prescale keeps one of this many accepted events, chosen by event id; 0 and 1
	// keep all.
	Prescale int64
	// Role is what acceptance does to the gate; zero means Gate.
	Role Role
}

// Reaction is the structured form of a reaction or decay.
type Reaction = reaction.Spec

// Product is one product of the structured form and how it decays.
type Product = reaction.ProductSpec

// Role is what a hypothesis does to the gate.
type Role uint8

// The roles.
const (
	// Gate opens the gate by acceptance.
	Gate Role = iota + 1
	// Shadow reports acceptance and never opens the gate.
	Shadow
	// Veto closes the gate by acceptance, whatever the others say.
	Veto
)

// Group is a set of hypotheses of which the one whose best assignment ranks first
// can be called best.
type Group struct {
	// Name is unique among the groups and written as the selection's.
	Name string
	// Hypotheses are the names of two or more, all ranked in the same way.
	Hypotheses []string
}

// ProductMeasurement says how one product is seen.
type ProductMeasurement struct {
	// Product is the reference of a product that does not decay.
	Product string
	// Measurement says what of it is measured; zero means the default.
	Measurement Measurement
	// MassFromEvent takes the mass from the event's mass or energy column instead
	// of the particle table. In an event without such a column no object can stand
	// for the product.
	MassFromEvent bool
	// Merged says that one photon cluster stands for the product; absent for a
	// product that is seen as itself.
	Merged *MergedPhotons
}

// MergedPhotons is a photon cluster that stands for a neutral product whose photons
// are too close to be told apart. Energy and direction are those of the cluster, the
// mass that of the product.
type MergedPhotons struct {
	// MinEnergyGeV is the least energy of the cluster, above the mass of the product.
	MinEnergyGeV float64
}

// Measurement is how much of a product is seen.
type Measurement uint8

// The measurements.
const (
	// Full is momentum (or energy) and direction.
	Full Measurement = iota + 1
	// Direction is the direction only.
	Direction
	// Missing is nothing: no object stands for the product.
	Missing
)

// BeamSource says where the energy of the initial state comes from. Exactly one
// member must be set.
type BeamSource struct {
	// Tagged takes the tagged candidates of the event, along +z on a target at rest.
	Tagged *TaggedBeam
	// Fixed is the same known initial state for every event.
	Fixed *InitialState
}

// TaggedBeam chooses among the tagged beam candidates of an event. Each candidate
// inside a window makes its own entry with that window's weight.
type TaggedBeam struct {
	// Prompt is the window of true coincidences; absent: every candidate, weight 1.
	Prompt *TimeWindow
	// SideBands are the windows of chance coincidences. No two windows overlap.
	SideBands []TimeWindow
}

// TimeWindow is a half-open window [MinNS, MaxNS) on the time of a beam candidate; an
// absent limit does not cut.
type TimeWindow struct {
	MinNS, MaxNS *float64
	// Weight of an entry with a candidate in this window; absent means 1.
	Weight *float64
}

// ExtraObjects says what objects beyond the assigned ones an event may have.
type ExtraObjects struct {
	Rule ExtraRule
	// MaxCount is the most photons that SoftPhotons allows, at least 1.
	MaxCount int64
	// MaxEnergyGeV is the energy that each of them must be below, above 0.
	MaxEnergyGeV float64
}

// ExtraRule is a rule for extra objects.
type ExtraRule uint8

// The rules.
const (
	// NoExtraObjects allows none.
	NoExtraObjects ExtraRule = iota + 1
	// SoftPhotons allows a number of photons below an energy.
	SoftPhotons
	// AnyExtraObjects allows any.
	AnyExtraObjects
)

// Condition is a tree of windows. Exactly one of its members must be set.
type Condition struct {
	// Window is a window on one observable.
	Window *Window
	// AllOf must hold every one.
	AllOf []Condition
	// AnyOf must hold at least one.
	AnyOf []Condition
	// NoneOf must not hold any one.
	NoneOf []Condition
}

// Ranking orders the assignments of one hypothesis; the first is its best. Ties go
// to the lowest tuple of object indices. Exactly one of its members must be set.
type Ranking struct {
	// ClosestMasses are one to MaxReferences distances, added in quadrature.
	ClosestMasses []MassReference
	// FitProbability ranks the largest fit probability first.
	FitProbability bool
}

// MassReference is the distance of an invariant mass from a reference.
type MassReference struct {
	// Products are references of products.
	Products []string
	// MassGeV is the reference mass, at least 0; absent means the table mass of the
	// one product named.
	MassGeV *float64
	// ScaleGeV is the distance that counts as one, above 0; absent means 1 GeV.
	ScaleGeV *float64
}
