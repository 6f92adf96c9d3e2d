package selection

// Fit is the constrained fit of a hypothesis. It is made last, for assignments that
// every other window of the condition lets through; an assignment whose fit does not
// converge is not accepted. The particles of the fit are the products that do not
// decay, with the masses of their particles, and the initial particles where
// four-momentum is conserved.
type Fit struct {
	// Conservation says which components of the four-momentum are conserved; zero
	// means all with a beam and none without.
	Conservation Conservation
	// Masses are sets of products with a known invariant mass.
	Masses []FitMass
	// EqualMasses are pairs of sets of products with equal invariant masses.
	EqualMasses []FitEqualMasses
	// Vertex says what is known of the event vertex along z; zero means ExactVertex.
	Vertex VertexTreatment
	// BeamEnergy says what is known of the energy of the first initial particle;
	// absent means measured for a tagged beam and exact for a fixed one.
	BeamEnergy *InitialEnergy
	// TargetEnergy is the same of the second; absent means exact. A target at rest
	// has none.
	TargetEnergy *InitialEnergy
}

// Conservation is a set of components of the four-momentum.
type Conservation uint8

// The sets.
const (
	// ConserveFourMomentum is energy and momentum.
	ConserveFourMomentum Conservation = iota + 1
	// ConserveTransverseMomentum is the momentum across z.
	ConserveTransverseMomentum
	// ConserveNothing leaves the masses alone to constrain.
	ConserveNothing
)

// FitMass holds the invariant mass of products at a value.
type FitMass struct {
	// Products are references of products, seen or missing.
	Products []string
	// MassGeV is the mass, at least 0; absent means the table mass of the one product
	// named, which must decay.
	MassGeV *float64
}

// FitEqualMasses holds the invariant masses of two sets of products equal.
type FitEqualMasses struct {
	First, Second []string
}

// VertexTreatment is what a fit knows of the event vertex along z.
type VertexTreatment uint8

// The treatments.
const (
	// ExactVertex takes the directions of all objects as given.
	ExactVertex VertexTreatment = iota + 1
	// MeasuredVertex moves the vertex within its covariance; the direction of a photon
	// follows it from its cluster position.
	MeasuredVertex
	// FreeVertexZ does the same with a vertex that is not measured along z.
	FreeVertexZ
)

// InitialEnergy is what a fit knows of the energy of an initial particle.
type InitialEnergy struct {
	Knowledge EnergyKnowledge
	// SigmaGeV is the standard deviation of MeasuredEnergy, at least 0; absent for a
	// tagged beam, whose candidates carry their own.
	SigmaGeV *float64
}

// EnergyKnowledge is whether an energy is known.
type EnergyKnowledge uint8

// The kinds of knowledge.
const (
	// ExactEnergy is exact.
	ExactEnergy EnergyKnowledge = iota + 1
	// MeasuredEnergy has a standard deviation.
	MeasuredEnergy
	// UnmeasuredEnergy is not measured.
	UnmeasuredEnergy
)
