package constraint

import (
	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/momentum"
)

// Limits of a Spec.
const (
	// MaxObjects is the largest number of objects.
	MaxObjects = 32
	// MaxMasses is the largest number of mass constraints.
	MaxMasses = 32
)

// Spec says what is fitted: the objects, what is known of each, and the constraints.
type Spec struct {
	// Objects are the beams and the products, at most MaxObjects.
	Objects []Object
	// Known is the part of the initial state that is known exactly, such as a target
	// at rest.
	Known momentum.Four
	// Conserved are the components of the four-momentum in which the products must
	// add up to the beams and Known; zero means that none is.
	Conserved Components
	// Masses are the mass constraints, at most MaxMasses.
	Masses []Mass
	// Vertex says what is known of the vertex along z; it matters to re-pointed
	// objects only.
	Vertex VertexZ
}

// Components is a set of components of the four-momentum.
type Components uint8

// The components.
const (
	X Components = 1 << iota
	Y
	Z
	Energy

	// AllComponents is the whole four-momentum.
	AllComponents = X | Y | Z | Energy
)

// Object is a beam particle or a product that does not decay within the fit.
type Object struct {
	// Beam puts the object into the initial state.
	Beam bool
	// Form says which parameters the object has.
	Form Form
	// Measured are the bits of those parameters that are measured (event.AllMeasured
	// for all of them). Form Missing and MissingMass have none.
	Measured uint8
	// MassGeV is the mass; MissingMass has none.
	MassGeV float64
	// Along is the direction of form Along; its length does not matter.
	Along momentum.Three
	// Repointed says that the object flew straight from the event vertex to where it
	// was found, so that its direction follows the vertex along z. It needs form
	// Coordinates.
	Repointed bool
}

// Form says which parameters an object has.
type Form uint8

// The forms.
const (
	// Coordinates is the three parameters of the coordinate set in which the object
	// is measured.
	Coordinates Form = iota + 1
	// Along is the size of the momentum along a known direction, as of a beam.
	Along
	// Missing is the three components of an unmeasured momentum.
	Missing
	// MissingMass is the three components of an unmeasured momentum and an
	// unmeasured energy.
	MissingMass
	formEnd
)

// Mass is one mass constraint.
type Mass struct {
	// Objects are the indices of the objects whose four-momenta are added.
	Objects []int
	// As are the objects of another sum that has the same mass; nil means that the
	// mass is GeV.
	As []int
	// GeV is the mass, at least 0.
	GeV float64
}

// VertexZ is what is known of the vertex along z.
type VertexZ uint8

// The kinds of knowledge.
const (
	// VertexKnown is exact: the vertex is where it is given.
	VertexKnown VertexZ = iota
	// VertexMeasured has the standard deviation that is given with it.
	VertexMeasured
	// VertexFree is not measured; the z given is where the fit starts.
	VertexFree
	vertexEnd
)

// Measurement is what the event says of one object.
type Measurement struct {
	// Kind is the coordinate set of form Coordinates.
	Kind event.Kind
	// Values are the parameters of the coordinate set; for form Along the first is
	// the size of the momentum. Unmeasured ones may hold anything.
	Values [3]float64
	// Covariance of the parameters, packed 11 12 13 22 23 33; entries of unmeasured
	// ones may hold anything.
	Covariance [event.CovarianceSize]float64
	// MassGeV is the object's mass; a new Fitter has that of the Spec.
	MassGeV float64
	// Origin is the point in metres from which a re-pointed object's direction is
	// measured and Cluster is where it was found, along it. Only their distance is used: the
	// fitted direction from Origin, continued over that distance, is the fitted
	// cluster position.
	Origin, Cluster momentum.Three
}

// Vertex is the event vertex in metres.
type Vertex struct {
	Position momentum.Three
	// SigmaZ is the standard deviation along z of VertexMeasured; the position across
	// is taken as exact.
	SigmaZ float64
}

// Beam returns the measurement of an object of form Along: the size p of its momentum
// with its standard deviation, and its mass, in GeV.
func Beam(p, sigma, mass float64) Measurement {
	return Measurement{
		Values: [3]float64{p}, Covariance: [event.CovarianceSize]float64{sigma * sigma}, MassGeV: mass,
	}
}
