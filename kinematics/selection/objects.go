package selection

import (
	"math"
	"math/bits"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/momentum"
)

// maxObjects is the number of objects that a set of objects can hold.
const maxObjects = event.MaxObjectsPerEvent

// objects are the objects of one event, those of one quantity side by side. A set of
// objects is a bit mask. Only what an object has measured is set.
type objects struct {
	count int
	// full are those with the whole momentum measured, directed those with a
	// direction, photons and classes those of a class.
	full, directed set
	photons        set
	class          [maxObjects]event.Class
	species        [maxObjects]uint8
	direction      [maxObjects]momentum.Three
	momentum       [maxObjects]momentum.Three
	// length is that of the momentum, the energy of a photon.
	length [maxObjects]float64
	// coordinates are those of the block, and first is the event's first row.
	coordinates *event.Coordinates
	first       int
	// apart holds |p||q| - p.q of every pair, row by row above the diagonal.
	apart      [maxObjects * (maxObjects - 1) / 2]float64
	apartReady bool
}

// set is a set of objects.
type set uint64

func (s set) has(i int) bool { return s>>i&1 == 1 }
func (s set) count() int     { return bits.OnesCount64(uint64(s)) }
func (s set) lowest() int    { return bits.TrailingZeros64(uint64(s)) }

// upTo are the objects 0 to n-1.
func upTo(n int) set {
	if n >= maxObjects {
		return ^set(0)
	}
	return 1<<n - 1
}

// above are the objects above i.
func above(i int) set { return ^set(0) << i << 1 }

// load sets the objects to those of event i of the block.
//
// A direction in a Cartesian set takes all three components, and one of zero length
// is no direction.
func (o *objects) load(block *event.Block, i int) {
	first, end := block.Objects(i)
	o.count = end - first
	o.full, o.directed, o.photons, o.apartReady = 0, 0, 0, false
	x := &block.Coordinates
	o.coordinates, o.first = x, first
	cartesian := x.Kind == event.EnergyMomentum || x.Kind == event.MomentumMass
	for k := range o.count {
		row := first + k
		o.class[k] = block.Class[row]
		o.species[k] = block.SpeciesMask(row)
		bit := set(1) << k
		if o.class[k] == event.Photon {
			o.photons |= bit
		}
		mask := block.MeasuredMask(row)
		full := mask == event.AllMeasured
		o.direction[k], o.momentum[k], o.length[k] = momentum.Three{}, momentum.Three{}, math.NaN()
		if full || (!cartesian && mask&event.DirectionMeasured == event.DirectionMeasured) {
			o.direction[k] = x.Direction(row)
			if o.direction[k] != (momentum.Three{}) {
				o.directed |= bit
			}
		}
		if !full {
			continue
		}
		o.full |= bit
		switch x.Kind {
		case event.MomentumAngles, event.MomentumSlopes:
			o.length[k] = x.Columns[0][row]
			o.momentum[k] = o.direction[k].Scale(o.length[k])
		default:
			o.momentum[k] = x.Momentum(row)
			o.length[k] = o.momentum[k].Norm()
		}
	}
}

// motion is what the objects of an event are under one kind of mass.
type motion struct {
	ready bool
	// merged says that the objects are clusters of merged photons.
	merged bool
	// energy and square, the signed mass squared, of each object, and scale, what the
	// measured momentum is to be multiplied with.
	energy, square, scale [maxObjects]float64
}

// load sets the motion of the objects of event i that have a whole momentum.
func (m *motion) load(k kind, o *objects, block *event.Block, i int) {
	m.ready, m.merged = true, k.merged
	first, _ := block.Objects(i)
	for j := range o.count {
		m.energy[j], m.square[j], m.scale[j] = math.NaN(), math.NaN(), 1
		switch {
		case !o.full.has(j):
		case k.merged:
			m.energy[j], m.square[j] = o.length[j], float64(k.mass*k.mass)
			m.scale[j] = mergedScale(o.length[j], k.mass)
		case k.fromEvent:
			m.fromEvent(o, block, first+j, j)
		case k.mass == 0:
			m.energy[j], m.square[j] = o.length[j], 0
		default:
			m.square[j] = float64(k.mass * k.mass)
			m.energy[j] = math.Sqrt(float64(o.length[j]*o.length[j]) + m.square[j])
		}
	}
}

// mergedScale returns the momentum over the energy of what leaves merged photons,
//
//	p/E = sqrt((E-m)(E+m))/E
//
// NaN below the mass.
func mergedScale(energy, mass float64) float64 {
	return math.Sqrt((energy-mass)*(energy+mass)) / energy
}

// fromEvent sets the motion of an object by its mass or energy column.
func (m *motion) fromEvent(o *objects, block *event.Block, row, j int) {
	x := &block.Coordinates
	switch x.Kind {
	case event.EnergyMomentum:
		m.energy[j] = x.Columns[3][row]
		m.square[j] = momentum.MassSquared(momentum.Four{P: o.momentum[j], E: m.energy[j]})
	case event.MomentumMass, event.TransverseMomentum:
		mass := x.Columns[3][row]
		m.square[j] = float64(mass * mass)
		m.energy[j] = math.Sqrt(float64(o.length[j]*o.length[j]) + m.square[j])
	case event.MomentumAngles, event.MomentumSlopes:
	}
}

// givesMass reports whether the events of a coordinate set state a mass or an energy.
func givesMass(k event.Kind) bool {
	return k == event.EnergyMomentum || k == event.MomentumMass || k == event.TransverseMomentum
}
