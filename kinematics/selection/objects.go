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
	// angular holds 2(|p||q| - p.q) of every pair, row by row above the diagonal.
	angular      [maxObjects * (maxObjects - 1) / 2]float64
	angularReady bool
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
	o.full, o.directed, o.photons, o.angularReady = 0, 0, 0, false
	x := &block.Coordinates
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

// angle returns 2(|p||q| - p.q) = |p||q| |u - v|^2 of objects i < j with directions
// u, v. It is within 5 x 2^-53 relative of the formula for the stored directions,
// whose rounding moves it by at most 12 x 2^-53 over the angle between them.
func (o *objects) angle(i, j int) float64 {
	if !o.angularReady {
		momentum.PhotonPairMassesSquared(o.angular[:], o.length[:o.count], o.direction[:o.count])
		o.angularReady = true
	}
	return o.angular[i*(2*o.count-i-1)/2+j-i-1]
}

// motion is what the objects of an event are under one kind of mass.
type motion struct {
	ready bool
	// energy and square, the signed mass squared, of each object.
	energy, square [maxObjects]float64
}

// load sets the motion of the objects of event i that have a whole momentum.
func (m *motion) load(k kind, o *objects, block *event.Block, i int) {
	m.ready = true
	first, _ := block.Objects(i)
	for j := range o.count {
		m.energy[j], m.square[j] = math.NaN(), math.NaN()
		switch {
		case !o.full.has(j):
		case k.fromEvent:
			m.fromEvent(o, block, first+j, j)
		case k.mass == 0:
			m.energy[j], m.square[j] = o.length[j], 0
		default:
			m.square[j] = k.mass * k.mass
			m.energy[j] = math.Sqrt(float64(o.length[j]*o.length[j]) + m.square[j])
		}
	}
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
		m.square[j] = mass * mass
		m.energy[j] = math.Sqrt(float64(o.length[j]*o.length[j]) + m.square[j])
	case event.MomentumAngles, event.MomentumSlopes:
	}
}

// givesMass reports whether the events of a coordinate set state a mass or an energy.
func givesMass(k event.Kind) bool {
	return k == event.EnergyMomentum || k == event.MomentumMass || k == event.TransverseMomentum
}

// table holds the invariant products of every pair of objects under two kinds of
// mass, row first for the first kind.
type table struct {
	ready   bool
	product [maxObjects * maxObjects]float64
}

// at is the place of the product of objects i and j.
func at(i, j uint8) int { return int(i)*maxObjects + int(j) }

// load computes the products
//
//	Ea Eb - pa.pb = (sa Eb^2 + sb pa^2)/(Ea Eb + |pa||pb|) + (|pa||pb| - pa.pb)
//
// with the signed mass squared s = E^2 - p^2 of each, a sum of positive terms where
// both are positive: within 12 x 2^-53 relative of what the stored directions say.
// It follows from (Ea Eb)^2 - (pa pb)^2 = sa Eb^2 + sb pa^2.
func (t *table) load(o *objects, a, b *motion, same bool) {
	t.ready = true
	for i := range o.count {
		if !o.full.has(i) {
			continue
		}
		for j := range o.count {
			if j == i || !o.full.has(j) {
				continue
			}
			low, high := min(i, j), max(i, j)
			if same && low != i {
				t.product[i*maxObjects+j] = t.product[j*maxObjects+i]
				continue
			}
			product := o.angle(low, high) / 2
			if a.square[i] != 0 || b.square[j] != 0 {
				lengths := float64(o.length[i] * o.length[j])
				energies := float64(a.energy[i] * b.energy[j])
				if sum := energies + lengths; sum > 0 {
					first := float64(a.square[i] * float64(b.energy[j]*b.energy[j]))
					second := float64(b.square[j] * float64(o.length[i]*o.length[i]))
					product += (first + second) / sum
				}
			}
			t.product[i*maxObjects+j] = product
		}
	}
}
