package kinegate

import (
	"example.org/kinegate/proto/column"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// Coordinates is a set in which objects are measured. Energies, momenta and masses
// are in GeV, angles in radian.
type Coordinates int

// The coordinate sets, with what Object.Values holds.
const (
	MomentumMass       Coordinates = iota // px, py, pz, mass
	EnergyMomentum                        // px, py, pz, energy
	TransverseMomentum                    // transverse momentum, pseudorapidity, phi, mass
	MomentumAngles                        // momentum (a photon's energy), theta, phi
	MomentumSlopes                        // momentum (a photon's energy), px/pz, py/pz
)

// Object is one measured object.
type Object struct {
	// Values are the columns of the builder's coordinate set, in its order.
	Values [4]float64
	// Class is what kind of signal the object left.
	Class kinegatev1.ObjectClass
	// Species is the species mask of the contract; 0 means any.
	Species uint8
	// Measured is the measured mask of the contract; 0 means all three parameters.
	Measured uint8
}

// BeamCandidate is one tagged beam candidate: energy and its standard deviation in
// GeV, time relative to the event's own in ns.
type BeamCandidate struct {
	Energy, Sigma, Time float64
}

// Builder gathers events and makes blocks of them.
type Builder struct {
	// RunNumber is written into every block.
	RunNumber int64

	coordinates Coordinates
	ids         []int64
	offsets     []int32
	values      [4][]float64
	classes     []kinegatev1.ObjectClass
	species     []byte
	measured    []byte
	beamOffsets []int32
	beam        [3][]float64
	// A column that no event needs is left out.
	anySpecies, anyMeasured, anyBeam bool
}

// NewBuilder returns a builder for objects in one coordinate set.
func NewBuilder(coordinates Coordinates) *Builder {
	b := &Builder{coordinates: coordinates}
	b.reset()
	return b
}

func (b *Builder) reset() {
	*b = Builder{
		RunNumber: b.RunNumber, coordinates: b.coordinates,
		offsets: []int32{0}, beamOffsets: []int32{0},
	}
}

// allMeasured is the measured mask of an object that is measured in full.
const allMeasured = 7

// Add appends an event. A nil beam says nothing about beam candidates, an empty one
// that there are none.
func (b *Builder) Add(id int64, objects []Object, beam []BeamCandidate) {
	for _, o := range objects {
		for i, v := range o.Values {
			b.values[i] = append(b.values[i], v)
		}
		b.classes = append(b.classes, o.Class)
		b.species = append(b.species, o.Species)
		b.anySpecies = b.anySpecies || o.Species != 0
		b.anyMeasured = b.anyMeasured || o.Measured != 0
		if o.Measured == 0 {
			o.Measured = allMeasured
		}
		b.measured = append(b.measured, o.Measured)
	}
	for _, c := range beam {
		for i, v := range [...]float64{c.Energy, c.Sigma, c.Time} {
			b.beam[i] = append(b.beam[i], v)
		}
	}
	b.anyBeam = b.anyBeam || beam != nil
	b.ids = append(b.ids, id)
	b.offsets = append(b.offsets, int32(len(b.classes)))         //nolint:gosec // blocks are small
	b.beamOffsets = append(b.beamOffsets, int32(len(b.beam[0]))) //nolint:gosec // blocks are small
}

// Events is the number of events gathered.
func (b *Builder) Events() int { return len(b.ids) }

// Objects is the number of objects gathered.
func (b *Builder) Objects() int { return len(b.classes) }

// Take returns the events gathered as a block and empties the builder.
func (b *Builder) Take() *kinegatev1.EventBlock {
	block := &kinegatev1.EventBlock{
		EventIds:      column.Int64(b.ids),
		RunNumber:     b.RunNumber,
		ObjectOffsets: column.Int32(b.offsets),
		ObjectClasses: make([]byte, len(b.classes)),
	}
	b.setCoordinates(block)
	for i, c := range b.classes {
		block.ObjectClasses[i] = byte(c) //nolint:gosec // the contract's classes fit a byte
	}
	if b.anySpecies {
		block.SpeciesMask = &kinegatev1.SpeciesMaskColumn{Masks: b.species}
	}
	if b.anyMeasured {
		block.MeasuredMask = &kinegatev1.MeasuredMaskColumn{Masks: b.measured}
	}
	if b.anyBeam {
		block.Beam = &kinegatev1.BeamColumns{
			Offsets:   column.Int32(b.beamOffsets),
			EnergyGev: column.Float64(b.beam[0]),
			SigmaGev:  column.Float64(b.beam[1]),
			TimeNs:    column.Float64(b.beam[2]),
		}
	}
	b.reset()
	return block
}

func (b *Builder) setCoordinates(block *kinegatev1.EventBlock) {
	var c [4][]byte
	for i, v := range b.values {
		c[i] = column.Float64(v)
	}
	switch b.coordinates {
	case MomentumMass:
		block.Coordinates = &kinegatev1.EventBlock_MomentumMass{MomentumMass: &kinegatev1.MomentumMassColumns{
			PxGev: c[0], PyGev: c[1], PzGev: c[2], MassGev: c[3],
		}}
	case EnergyMomentum:
		block.Coordinates = &kinegatev1.EventBlock_EnergyMomentum{EnergyMomentum: &kinegatev1.EnergyMomentumColumns{
			PxGev: c[0], PyGev: c[1], PzGev: c[2], EnergyGev: c[3],
		}}
	case TransverseMomentum:
		block.Coordinates = &kinegatev1.EventBlock_TransverseMomentum{TransverseMomentum: &kinegatev1.TransverseMomentumColumns{
			TransverseMomentumGev: c[0], Pseudorapidity: c[1], PhiRad: c[2], MassGev: c[3],
		}}
	case MomentumAngles:
		block.Coordinates = &kinegatev1.EventBlock_MomentumAngles{MomentumAngles: &kinegatev1.MomentumAnglesColumns{
			MomentumGev: c[0], ThetaRad: c[1], PhiRad: c[2],
		}}
	case MomentumSlopes:
		block.Coordinates = &kinegatev1.EventBlock_MomentumSlopes{MomentumSlopes: &kinegatev1.MomentumSlopesColumns{
			MomentumGev: c[0], SlopeX: c[1], SlopeY: c[2],
		}}
	}
}
