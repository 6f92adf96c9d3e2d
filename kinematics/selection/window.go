package selection

// Observable is a kind of quantity that a window cuts on.
type Observable uint8

// The observables. Their units are those of the limits: GeV, GeV^2, radian, ns, m.
const (
	// InvariantMass is the invariant mass of Products.
	InvariantMass Observable = iota + 1
	// InvariantMassSquared is its signed square.
	InvariantMassSquared
	// MissingMass is the mass recoiling against Products.
	MissingMass
	// MissingMassSquared is its signed square.
	MissingMassSquared
	// Energy is the total energy of Products in Frame.
	Energy
	// Momentum is the momentum of Products in Frame.
	Momentum
	// TransverseMomentum is the momentum of Products across z in Frame.
	TransverseMomentum
	// Angle is the angle of Products from +z in Frame.
	Angle
	// OpeningAngle is the angle between the one product of Products and the one of
	// Second in Frame.
	OpeningAngle
	// Coplanarity is the azimuth of Products minus that of Second minus pi, folded
	// into (-pi, pi].
	Coplanarity
	// MissingDirection is the angle between the one product of Products and the
	// momentum missing to all the others.
	MissingDirection
	// MomentumTransfer is t(Initial, Products), signed.
	MomentumTransfer
	// MomentumTransferPrime is t_forward - t, at least 0.
	MomentumTransferPrime
	// TimeDifference is the time of the beam candidate minus the event's own.
	TimeDifference
	// UnusedPhotonEnergy is the summed energy of photons that no product uses.
	UnusedPhotonEnergy
	// VertexZ is z of the event vertex.
	VertexZ
	// FlightDistance is the distance from the event vertex to the vertex group of the
	// objects that the one product of Products decays to.
	FlightDistance
	// Pointing is the angle between the momentum of that product and its flight.
	Pointing
	// FitProbability is the probability of a chi-square above that of the fit.
	FitProbability
	observableCount
)

// Frame is the frame in which an energy, momentum or angle is taken.
type Frame uint8

// The frames.
const (
	// Laboratory is the frame of the measurement; the zero value means it too.
	Laboratory Frame = iota + 1
	// CentreOfMass is the frame where beam and target have no momentum together: a
	// pure boost from the laboratory.
	CentreOfMass
)

// Initial is a particle of the initial state.
type Initial uint8

// The initial particles.
const (
	// Beam is the first particle on the left of the reaction.
	Beam Initial = iota + 1
	// Target is the second.
	Target
)

// Window is a half-open window [Min, Max) on one observable. A limit that is absent
// does not cut. Members that an observable does not use must be zero.
type Window struct {
	// Name is the label in explanations and metrics; may be empty.
	Name string
	// Observable is the quantity.
	Observable Observable
	// Products are references of products.
	Products []string
	// Second are the references of the second product or set of products of
	// OpeningAngle and Coplanarity.
	Second []string
	// Frame of Energy, Momentum, TransverseMomentum, Angle and OpeningAngle.
	Frame Frame
	// Initial is the initial particle of MomentumTransfer and its prime.
	Initial Initial
	// Min and Max are the limits in the unit of the observable.
	Min, Max *float64
}

// form says how the contract writes one observable: the name of its member, the
// suffix of its limits, and which other members it has.
type form struct {
	name, unit string
	// products is the name of the field of Products, second that of Second.
	products, second string
	// single says that each of them is one reference.
	single bool
	frame  bool
	// initial says that the observable names an initial particle.
	initial bool
	// incoming says that the initial state must be known.
	incoming bool
}

// form returns the form of a known observable, and false for any other.
func (o Observable) form() (form, bool) {
	const (
		several, one   = "products", "product"
		gev, gev2, rad = "gev", "gev2", "rad"
		first, second  = "first", "second"
	)
	switch o {
	case InvariantMass:
		return form{name: "invariant_mass", unit: gev, products: several}, true
	case InvariantMassSquared:
		return form{name: "invariant_mass_squared", unit: gev2, products: several}, true
	case MissingMass:
		return form{name: "missing_mass", unit: gev, products: several, incoming: true}, true
	case MissingMassSquared:
		return form{name: "missing_mass_squared", unit: gev2, products: several, incoming: true}, true
	case Energy:
		return form{name: "energy", unit: gev, products: several, frame: true}, true
	case Momentum:
		return form{name: "momentum", unit: gev, products: several, frame: true}, true
	case TransverseMomentum:
		return form{name: "transverse_momentum", unit: gev, products: several, frame: true}, true
	case Angle:
		return form{name: "angle", unit: rad, products: several, frame: true}, true
	case OpeningAngle:
		return form{name: "opening_angle", unit: rad, products: first, second: second, single: true, frame: true}, true
	case Coplanarity:
		return form{name: "coplanarity", unit: rad, products: first, second: second}, true
	case MissingDirection:
		return form{name: "missing_direction", unit: rad, products: one, single: true, incoming: true}, true
	case MomentumTransfer:
		return form{name: "momentum_transfer", unit: gev2, products: several, initial: true, incoming: true}, true
	case MomentumTransferPrime:
		return form{name: "momentum_transfer_prime", unit: gev2, products: several, initial: true, incoming: true}, true
	case TimeDifference:
		return form{name: "time_difference", unit: "ns"}, true
	case UnusedPhotonEnergy:
		return form{name: "unused_photon_energy", unit: gev}, true
	case VertexZ:
		return form{name: "vertex_z", unit: "m"}, true
	case FlightDistance:
		return form{name: "flight_distance", unit: "m", products: one, single: true}, true
	case Pointing:
		return form{name: "pointing", unit: rad, products: one, single: true}, true
	case FitProbability:
		return form{name: "fit_probability"}, true
	case observableCount:
	}
	return form{}, false
}

// limits are the names of the limits in the contract.
func (f *form) limits() (low, high string) {
	if f.unit == "" {
		return "min", "max"
	}
	return "min_" + f.unit, "max_" + f.unit
}

// String is the name of the observable in the contract.
func (o Observable) String() string {
	if f, ok := o.form(); ok {
		return f.name
	}
	return "unknown"
}
