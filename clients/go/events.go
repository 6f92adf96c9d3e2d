package kinegate

import (
	"example.org/kinegate/proto/column"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// Object is one measured object in (px, py, pz, m), the form that event files
// usually hold. Momentum and mass are in GeV.
type Object struct {
	Px, Py, Pz, Mass float64
	Class            kinegatev1.ObjectClass
	// Species is the species mask of the contract; 0 means any.
	Species uint8
}

// BeamCandidate is one tagged beam candidate: energy and its standard deviation in
// GeV, time relative to the event's own in ns.
type BeamCandidate struct {
	Energy, Sigma, Time float64
}

// Builder gathers events in (px, py, pz, m) and makes blocks of them. The zero
// value is ready; Take empties it for the next block.
type Builder struct {
	// RunNumber is written into every block.
	RunNumber int64

	ids                      []int64
	offsets, beamOffsets     []int32
	px, py, pz, mass         []float64
	classes                  []kinegatev1.ObjectClass
	species                  []uint8
	beamE, beamSigma, beamNs []float64
	anySpecies, anyBeam      bool
}

// Add appends an event.
func (b *Builder) Add(id int64, objects []Object, beam []BeamCandidate) {
	if len(b.offsets) == 0 {
		b.offsets, b.beamOffsets = append(b.offsets, 0), append(b.beamOffsets, 0)
	}
	for _, o := range objects {
		b.px, b.py, b.pz = append(b.px, o.Px), append(b.py, o.Py), append(b.pz, o.Pz)
		b.mass = append(b.mass, o.Mass)
		b.classes = append(b.classes, o.Class)
		b.species = append(b.species, o.Species)
		b.anySpecies = b.anySpecies || o.Species != 0
	}
	for _, c := range beam {
		b.beamE, b.beamSigma = append(b.beamE, c.Energy), append(b.beamSigma, c.Sigma)
		b.beamNs = append(b.beamNs, c.Time)
	}
	b.anyBeam = b.anyBeam || beam != nil
	b.ids = append(b.ids, id)
	b.offsets = append(b.offsets, int32(len(b.px)))            //nolint:gosec // blocks are small
	b.beamOffsets = append(b.beamOffsets, int32(len(b.beamE))) //nolint:gosec // blocks are small
}

// Events is the number of events gathered.
func (b *Builder) Events() int { return len(b.ids) }

// Objects is the number of objects gathered.
func (b *Builder) Objects() int { return len(b.px) }

// Take returns the events gathered as a block and empties the builder. The block
// has beam columns if any event was added with a beam, even an empty one.
func (b *Builder) Take() *kinegatev1.EventBlock {
	block := &kinegatev1.EventBlock{
		EventIds:      column.Int64(b.ids),
		RunNumber:     b.RunNumber,
		ObjectOffsets: column.Int32(b.offsets),
		Coordinates: &kinegatev1.EventBlock_MomentumMass{MomentumMass: &kinegatev1.MomentumMassColumns{
			PxGev: column.Float64(b.px), PyGev: column.Float64(b.py),
			PzGev: column.Float64(b.pz), MassGev: column.Float64(b.mass),
		}},
		ObjectClasses: make([]byte, len(b.classes)),
	}
	for i, c := range b.classes {
		block.ObjectClasses[i] = byte(c) //nolint:gosec // the contract's classes fit a byte
	}
	if b.anySpecies {
		block.SpeciesMask = &kinegatev1.SpeciesMaskColumn{Masks: append([]byte(nil), b.species...)}
	}
	if b.anyBeam {
		block.Beam = &kinegatev1.BeamColumns{
			Offsets:   column.Int32(b.beamOffsets),
			EnergyGev: column.Float64(b.beamE),
			SigmaGev:  column.Float64(b.beamSigma),
			TimeNs:    column.Float64(b.beamNs),
		}
	}
	*b = Builder{RunNumber: b.RunNumber}
	return block
}
