package kinegate

import (
	"errors"
	"fmt"

	"example.org/kinegate/proto/column"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// Measured is one event of a block.
type Measured struct {
	// ID is the event's id.
	ID int64
	// Objects are its measured objects.
	Objects []Object
	// Beam are its tagged beam candidates; nil where the block has no beam columns.
	Beam []BeamCandidate
	// Weight is that of a simulated event; 1 where the block states none.
	Weight float64
}

var errNoCoordinates = errors.New("the block has no coordinate set")

// ReadEvents takes a block apart, in the manner in which a Builder puts one together.
func ReadEvents(block *kinegatev1.EventBlock) (Coordinates, []Measured, error) {
	r := &blockReader{}
	coordinates, values, err := r.coordinates(block)
	if err != nil {
		return coordinates, nil, err
	}
	ids, err := column.Int64s(block.GetEventIds())
	r.keep(err)
	rows := len(block.GetObjectClasses())
	offsets := r.offsets(block.GetObjectOffsets(), len(ids), rows)
	for _, v := range values {
		r.length(len(v), rows)
	}
	measured, species := block.GetMeasuredMask().GetMasks(), block.GetSpeciesMask().GetMasks()
	if block.GetMeasuredMask() != nil {
		r.length(len(measured), rows)
	}
	if block.GetSpeciesMask() != nil {
		r.length(len(species), rows)
	}
	beamOffsets, beam := r.beam(block.GetBeam(), len(ids))
	var weights []float64
	if m := block.GetWeight(); m != nil {
		weights = r.numbers(m.GetWeights())
		r.length(len(weights), len(ids))
	}
	if r.err != nil {
		return coordinates, nil, r.err
	}
	events := make([]Measured, len(ids))
	for i, id := range ids {
		e := Measured{ID: id, Weight: 1}
		if weights != nil {
			e.Weight = weights[i]
		}
		for row := offsets[i]; row < offsets[i+1]; row++ {
			o := Object{Class: kinegatev1.ObjectClass(block.GetObjectClasses()[row])}
			for k, v := range values {
				o.Values[k] = v[row]
			}
			if measured != nil {
				o.Measured = measured[row]
			}
			if species != nil {
				o.Species = species[row]
			}
			e.Objects = append(e.Objects, o)
		}
		if beamOffsets != nil {
			e.Beam = beam[beamOffsets[i]:beamOffsets[i+1]:beamOffsets[i+1]]
		}
		events[i] = e
	}
	return coordinates, events, nil
}

// blockReader keeps the first thing wrong with a block.
type blockReader struct{ err error }

func (r *blockReader) keep(err error) {
	if r.err == nil {
		r.err = err
	}
}

func (r *blockReader) length(got, want int) {
	if got != want {
		r.keep(fmt.Errorf("a column has %d rows, not %d", got, want))
	}
}

func (r *blockReader) numbers(raw []byte) []float64 {
	xs, err := column.Float64s(raw)
	r.keep(err)
	return xs
}

// offsets reads the rows of n events: they rise from 0 to the number of rows.
func (r *blockReader) offsets(raw []byte, n, rows int) []int32 {
	xs, err := column.Int32s(raw)
	r.keep(err)
	r.length(len(xs), n+1)
	if r.err != nil {
		return nil
	}
	last := int32(0)
	for _, x := range xs {
		if x < last {
			r.keep(errors.New("offsets do not rise"))
		}
		last = x
	}
	if xs[0] != 0 || int(last) != rows {
		r.keep(fmt.Errorf("offsets from %d to %d do not bound %d rows", xs[0], last, rows))
	}
	return xs
}

// beam reads the candidates of n events; nil without beam columns.
func (r *blockReader) beam(m *kinegatev1.BeamColumns, n int) ([]int32, []BeamCandidate) {
	if m == nil {
		return nil, nil
	}
	energy, sigma, time := r.numbers(m.GetEnergyGev()), r.numbers(m.GetSigmaGev()), r.numbers(m.GetTimeNs())
	r.length(len(sigma), len(energy))
	r.length(len(time), len(energy))
	offsets := r.offsets(m.GetOffsets(), n, len(energy))
	if r.err != nil {
		return nil, nil
	}
	list := make([]BeamCandidate, len(energy))
	for i := range energy {
		list[i] = BeamCandidate{Energy: energy[i], Sigma: sigma[i], Time: time[i]}
	}
	return offsets, list
}

// coordinates reads the coordinate set, its columns in the order of an Object's values.
func (r *blockReader) coordinates(m *kinegatev1.EventBlock) (Coordinates, [][]float64, error) {
	var set Coordinates
	var raw [][]byte
	switch x := m.GetCoordinates().(type) {
	case *kinegatev1.EventBlock_MomentumMass:
		c := x.MomentumMass
		set, raw = MomentumMass, [][]byte{c.GetPxGev(), c.GetPyGev(), c.GetPzGev(), c.GetMassGev()}
	case *kinegatev1.EventBlock_EnergyMomentum:
		c := x.EnergyMomentum
		set, raw = EnergyMomentum, [][]byte{c.GetPxGev(), c.GetPyGev(), c.GetPzGev(), c.GetEnergyGev()}
	case *kinegatev1.EventBlock_TransverseMomentum:
		c := x.TransverseMomentum
		set, raw = TransverseMomentum, [][]byte{c.GetTransverseMomentumGev(), c.GetPseudorapidity(), c.GetPhiRad(), c.GetMassGev()}
	case *kinegatev1.EventBlock_MomentumAngles:
		c := x.MomentumAngles
		set, raw = MomentumAngles, [][]byte{c.GetMomentumGev(), c.GetThetaRad(), c.GetPhiRad()}
	case *kinegatev1.EventBlock_MomentumSlopes:
		c := x.MomentumSlopes
		set, raw = MomentumSlopes, [][]byte{c.GetMomentumGev(), c.GetSlopeX(), c.GetSlopeY()}
	default:
		return set, nil, errNoCoordinates
	}
	var values [][]float64
	for _, c := range raw {
		values = append(values, r.numbers(c))
	}
	return set, values, r.err
}
