// Package event holds measured events and the verdicts on them as plain
// columns: one slice per quantity, one entry per event, object or beam row.
// Units are GeV (c = 1), radian and metre; detector times are in nanoseconds.
// An optional column is a pointer: nil means absent, never an empty slice.
package event

// Limits of one block. They hold together with the size limits of the
// transport, which this package does not know.
const (
	// MaxEvents is the largest number of events in a block.
	MaxEvents = 4096
	// MaxObjects is the largest number of object rows in a block.
	MaxObjects = 65536
	// MaxObjectsPerEvent is the largest number of objects in an event. An
	// event above it gets a status; the block stays valid.
	MaxObjectsPerEvent = 64
	// CovarianceSize is the number of entries of a packed symmetric 3x3
	// matrix: the upper triangle row by row, 11 12 13 22 23 33.
	CovarianceSize = 6
)

// Class says what kind of signal an object left.
type Class uint8

// The object classes. They start at 1, so that a column of zeros is a fault and
// not a column of photons.
const (
	Photon   Class = iota + 1 // a calorimeter cluster without a track
	Positive                  // a track of positive charge
	Negative                  // a track of negative charge
	Neutral                   // a neutral hadron: in general a direction only
	classCount
)

// Valid reports whether the class is one of the four known ones.
func (c Class) Valid() bool { return c >= Photon && c < classCount }

// Bits of the measured mask: which of the three parameters of the coordinate
// set are measured. An absent mask column means AllMeasured.
const (
	FirstMeasured uint8 = 1 << iota
	SecondMeasured
	ThirdMeasured

	// AllMeasured has the bits of all three parameters set.
	AllMeasured = FirstMeasured | SecondMeasured | ThirdMeasured
	// DirectionMeasured is the mask of an object whose direction alone is
	// known, in a set whose first parameter is the size of the momentum.
	DirectionMeasured = SecondMeasured | ThirdMeasured
)

// Bits of the species mask: the particles that an object may be. Zero, like an
// absent column, allows any.
const (
	SpeciesElectron uint8 = 1 << iota
	SpeciesMuon
	SpeciesPion
	SpeciesKaon
	SpeciesProton
	SpeciesDeuteron

	// SpeciesAll has every defined species bit set.
	SpeciesAll = SpeciesElectron | SpeciesMuon | SpeciesPion | SpeciesKaon | SpeciesProton | SpeciesDeuteron
)

// Block is a batch of measured events. Event i owns the object rows from
// ObjectOffsets[i] up to, not including, ObjectOffsets[i+1].
type Block struct {
	// EventIDs names each event; its length is the number of events.
	EventIDs []int64
	// RunNumber is the run that all events belong to.
	RunNumber int64
	// ObjectOffsets has one entry more than EventIDs, starts with 0, never
	// decreases and ends with the number of object rows.
	ObjectOffsets []int32
	// Coordinates are the momenta of the objects.
	Coordinates Coordinates
	// Class is the class of each object.
	Class []Class
	// Measured says which parameters of each object are measured; absent: all.
	Measured *Mask
	// Species says which particles each object may be; absent: any.
	Species *Mask
	// Covariance of each object's three parameters; absent: no fits.
	Covariance *Covariance
	// Beam holds the tagged beam candidates; absent: the beam is not measured
	// event by event.
	Beam *Beam
	// Vertex is the interaction point of each event; absent: the origin.
	Vertex *Vertex
	// Groups ties objects to displaced vertices; absent: all objects come from
	// the event's vertex.
	Groups *Groups
	// Clusters is where each photon hit the calorimeter; absent: unknown.
	Clusters *Positions
	// Polarisation of each event's beam photon; absent: unpolarised.
	Polarisation *Polarisation
}

// Mask is a column of bits, one byte per object.
type Mask struct {
	Bits []uint8
}

// Covariance is a column of symmetric 3x3 matrices, CovarianceSize numbers per
// row. Entries of unmeasured parameters are zero; rows are independent.
type Covariance struct {
	Packed []float64
}

// Row returns the six numbers of a row.
func (c *Covariance) Row(i int) []float64 {
	return c.Packed[CovarianceSize*i : CovarianceSize*(i+1) : CovarianceSize*(i+1)]
}

// Beam holds the tagged beam candidates. Event i owns the rows from Offsets[i]
// up to, not including, Offsets[i+1]; it may own none.
type Beam struct {
	Offsets []int32
	// EnergyGeV is the candidate's energy, positive.
	EnergyGeV []float64
	// SigmaGeV is its standard deviation, not negative.
	SigmaGeV []float64
	// TimeNS is the candidate's time minus the event's own.
	TimeNS []float64
}

// Positions is a column of points in metres.
type Positions struct {
	X, Y, Z []float64
}

// Vertex is the interaction point of each event in metres.
type Vertex struct {
	Positions

	// Covariance of each point in m^2; absent: the points are exact.
	Covariance *Covariance
}

// Groups are the displaced vertices. Event i owns the groups from Offsets[i]
// up to, not including, Offsets[i+1].
type Groups struct {
	// OfObject is the group of each object: 0 for the event's own vertex, g for
	// the g-th group of its event.
	OfObject []int32
	// Offsets counts the groups before each event.
	Offsets []int32
	// Position of each group in metres.
	Position Positions
	// Covariance of each position in m^2; absent: the positions are exact.
	Covariance *Covariance
}

// Polarisation of the beam photon of each event.
type Polarisation struct {
	// Linear is the degree of linear polarisation, 0 to 1.
	Linear []float64
	// PlaneRad is the azimuth of the polarisation plane in radians.
	PlaneRad []float64
	// Circular is the signed degree of circular polarisation, -1 to 1.
	Circular []float64
}

// Events is the number of events in the block.
func (b *Block) Events() int { return len(b.EventIDs) }

// Rows is the number of object rows in the block.
func (b *Block) Rows() int { return len(b.Class) }

// Objects returns the range [first, end) of the object rows of event i.
func (b *Block) Objects(i int) (first, end int) {
	return int(b.ObjectOffsets[i]), int(b.ObjectOffsets[i+1])
}

// MeasuredMask returns the measured mask of an object row.
func (b *Block) MeasuredMask(row int) uint8 {
	if b.Measured == nil {
		return AllMeasured
	}
	return b.Measured.Bits[row]
}

// SpeciesMask returns the species mask of an object row, 0 for any.
func (b *Block) SpeciesMask(row int) uint8 {
	if b.Species == nil {
		return 0
	}
	return b.Species.Bits[row]
}

// Candidates returns the range [first, end) of the beam rows of event i; it is
// empty when the block has no beam column.
func (b *Block) Candidates(i int) (first, end int) {
	if b.Beam == nil {
		return 0, 0
	}
	return int(b.Beam.Offsets[i]), int(b.Beam.Offsets[i+1])
}
