package event

import "example.org/kinegate/kinematics/momentum"

// NoParent is the parent of a particle that the initial state made.
const NoParent = -1

// Truth holds simulated events as they happened, before any measurement. Event
// i owns the particle rows from Offsets[i] up to, not including, Offsets[i+1]:
// every product and every daughter, depth first in the order of the reaction's
// text, so that a parent stands before its daughters.
type Truth struct {
	// EventIDs names each event.
	EventIDs []int64
	// Channel is the reaction that each event was drawn from, by its place in
	// the mixture.
	Channel []int16
	// Weight of each event: 0 for one that cannot happen, 1 for unweighted events,
	// above 1 where the unweighting bound was exceeded.
	Weight []float64
	// Initial is the four-momentum of the initial state.
	Initial []momentum.Four
	// Vertex is the interaction point in metres.
	Vertex Positions

	// Offsets has one entry more than EventIDs.
	Offsets []int32
	// Number is the Monte Carlo particle number.
	Number []int64
	// Momentum is the four-momentum in the laboratory.
	Momentum []momentum.Four
	// Mass is the mass that the particle has in this event.
	Mass []float64
	// Parent is the row of the parent within the event, or NoParent.
	Parent []int16
	// Decayed tells the intermediate particles from those that reach a detector.
	Decayed []bool
	// Origin is where the particle came into being, in metres.
	Origin Positions
	// ProperTimeS is the particle's age at its decay in its rest frame, in
	// seconds; 0 for one that does not decay or decays at once.
	ProperTimeS []float64

	// BeamOffsets has one entry more than EventIDs and bounds the beam rows of
	// each event. The first row of an event is the particle that interacted.
	BeamOffsets []int32
	// BeamEnergyGeV is the true energy of a beam candidate.
	BeamEnergyGeV []float64
	// BeamTimeNS is its true time minus the event's.
	BeamTimeNS []float64

	// Polarisation of each event's beam photon; nil: unpolarised.
	Polarisation *Polarisation
}

// Polarise appends the polarisation of the beam photon of one event.
func (t *Truth) Polarise(linear, planeRad, circular float64) {
	if t.Polarisation == nil {
		t.Polarisation = &Polarisation{}
	}
	p := t.Polarisation
	p.Linear = append(p.Linear, linear)
	p.PlaneRad = append(p.PlaneRad, planeRad)
	p.Circular = append(p.Circular, circular)
}

// Events is the number of events.
func (t *Truth) Events() int { return len(t.EventIDs) }

// Particles returns the range [first, end) of the particle rows of event i.
func (t *Truth) Particles(i int) (first, end int) { return int(t.Offsets[i]), int(t.Offsets[i+1]) }

// Reset empties the columns and keeps their memory.
func (t *Truth) Reset() {
	*t = Truth{
		EventIDs: t.EventIDs[:0], Channel: t.Channel[:0], Weight: t.Weight[:0],
		Initial: t.Initial[:0], Vertex: t.Vertex.emptied(),
		Offsets: append(t.Offsets[:0], 0), Number: t.Number[:0], Momentum: t.Momentum[:0],
		Mass: t.Mass[:0], Parent: t.Parent[:0], Decayed: t.Decayed[:0],
		Origin: t.Origin.emptied(), ProperTimeS: t.ProperTimeS[:0],
		BeamOffsets:   append(t.BeamOffsets[:0], 0),
		BeamEnergyGeV: t.BeamEnergyGeV[:0], BeamTimeNS: t.BeamTimeNS[:0],
		Polarisation: t.Polarisation,
	}
	if p := t.Polarisation; p != nil {
		*p = Polarisation{Linear: p.Linear[:0], PlaneRad: p.PlaneRad[:0], Circular: p.Circular[:0]}
	}
}

// Append adds a point.
func (p *Positions) Append(x, y, z float64) {
	p.X = append(p.X, x)
	p.Y = append(p.Y, y)
	p.Z = append(p.Z, z)
}

func (p *Positions) emptied() Positions {
	return Positions{X: p.X[:0], Y: p.Y[:0], Z: p.Z[:0]}
}
