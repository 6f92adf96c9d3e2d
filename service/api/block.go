package api

import (
	"errors"
	"strconv"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/proto/column"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// eventBlock converts the columns of a message to those of the core and checks
// their structure. The error is a fault.List with the paths of the message.
// Statuses and classes have the same numbers in both. The block may share the
// message's columns of bytes and keeps its numbers in c.
func eventBlock(m *kinegatev1.EventBlock, c *columns) (*event.Block, error) {
	c.reset()
	b := &event.Block{
		EventIDs:      c.int64s("event_ids", m.GetEventIds()),
		RunNumber:     m.GetRunNumber(),
		ObjectOffsets: c.int32s("object_offsets", m.GetObjectOffsets()),
		Class:         c.classes(m.GetObjectClasses()),
	}
	b.Coordinates = c.coordinates(m)
	if x := m.GetMeasuredMask(); x != nil {
		b.Measured = &event.Mask{Bits: x.GetMasks()}
	}
	if x := m.GetSpeciesMask(); x != nil {
		b.Species = &event.Mask{Bits: x.GetMasks()}
	}
	if x := m.GetCovariance(); x != nil {
		b.Covariance = &event.Covariance{Packed: c.float64s("covariance.elements", x.GetElements())}
	}
	if x := m.GetBeam(); x != nil {
		b.Beam = &event.Beam{
			Offsets:   c.int32s("beam.offsets", x.GetOffsets()),
			EnergyGeV: c.float64s("beam.energy_gev", x.GetEnergyGev()),
			SigmaGeV:  c.float64s("beam.sigma_gev", x.GetSigmaGev()),
			TimeNS:    c.float64s("beam.time_ns", x.GetTimeNs()),
		}
	}
	if x := m.GetVertex(); x != nil {
		b.Vertex = &event.Vertex{
			Positions:  c.positions("vertex", x),
			Covariance: c.covariance("vertex.covariance_m2", x.GetCovarianceM2()),
		}
	}
	if x := m.GetVertexGroup(); x != nil {
		b.Groups = &event.Groups{
			OfObject:   c.int32s("vertex_group.groups", x.GetGroups()),
			Offsets:    c.int32s("vertex_group.offsets", x.GetOffsets()),
			Position:   c.positions("vertex_group", x),
			Covariance: c.covariance("vertex_group.covariance_m2", x.GetCovarianceM2()),
		}
	}
	if x := m.GetClusterPosition(); x != nil {
		p := c.positions("cluster_position", x)
		b.Clusters = &p
	}
	if x := m.GetPolarisation(); x != nil {
		b.Polarisation = &event.Polarisation{
			Linear:   c.float64s("polarisation.linear_degree", x.GetLinearDegree()),
			PlaneRad: c.float64s("polarisation.plane_rad", x.GetPlaneRad()),
			Circular: c.float64s("polarisation.circular_degree", x.GetCircularDegree()),
		}
	}
	if x := m.GetWeight(); x != nil && len(x.GetWeights()) != len(m.GetEventIds()) { // eight bytes each
		c.faults = append(c.faults, fault.New(fault.Invalid, "weight.weights.length", strconv.Itoa(len(x.GetWeights()))+" bytes",
			strconv.Itoa(len(m.GetEventIds()))+" bytes"))
	}
	if err := c.faults.Err(); err != nil {
		return nil, err
	}
	return b, b.Validate()
}

// columns reads byte columns and collects what is wrong with their lengths. Its
// memory is used again for the next block.
type columns struct {
	faults fault.List

	numbers []float64
	longs   []int64
	ints    []int32
	class   []event.Class
}

func (c *columns) reset() {
	*c = columns{numbers: c.numbers[:0], longs: c.longs[:0], ints: c.ints[:0], class: c.class[:0]}
}

// note keeps a length that does not fit.
func (c *columns) note(field string, err error) {
	if broken, ok := errors.AsType[*column.LengthError](err); ok {
		c.faults = append(c.faults, fault.New(fault.Invalid, field+".length", strconv.Itoa(broken.Bytes)+" bytes",
			"a multiple of "+strconv.Itoa(broken.Size)+" bytes"))
	}
}

func (c *columns) float64s(field string, raw []byte) []float64 {
	xs, err := read(&c.numbers, raw, column.AppendFloat64s)
	c.note(field, err)
	return xs
}

func (c *columns) int64s(field string, raw []byte) []int64 {
	xs, err := read(&c.longs, raw, column.AppendInt64s)
	c.note(field, err)
	return xs
}

func (c *columns) int32s(field string, raw []byte) []int32 {
	xs, err := read(&c.ints, raw, column.AppendInt32s)
	c.note(field, err)
	return xs
}

func (c *columns) classes(raw []byte) []event.Class {
	start := len(c.class)
	c.class = column.AppendUint8s(c.class, raw)
	return c.class[start:]
}

// read decodes a column behind those that are in the arena already. Should the arena
// move, they stay where they were.
func read[T any](arena *[]T, raw []byte, decode func([]T, []byte) ([]T, error)) ([]T, error) {
	start := len(*arena)
	xs, err := decode(*arena, raw)
	*arena = xs
	return xs[start:len(xs):len(xs)], err
}

// points is any message with a column per coordinate of a point.
type points interface {
	GetXM() []byte
	GetYM() []byte
	GetZM() []byte
}

func (c *columns) positions(field string, m points) event.Positions {
	return event.Positions{
		X: c.float64s(field+".x_m", m.GetXM()),
		Y: c.float64s(field+".y_m", m.GetYM()),
		Z: c.float64s(field+".z_m", m.GetZM()),
	}
}

// covariance reads an optional column; nil is absent, empty is not.
func (c *columns) covariance(field string, raw []byte) *event.Covariance {
	if raw == nil {
		return nil
	}
	return &event.Covariance{Packed: c.float64s(field, raw)}
}

// coordinates reads the coordinate set that the message carries, its columns in
// the core's order.
func (c *columns) coordinates(m *kinegatev1.EventBlock) event.Coordinates {
	var x event.Coordinates
	var raw [4][]byte
	switch set := m.GetCoordinates().(type) {
	case *kinegatev1.EventBlock_EnergyMomentum:
		s := set.EnergyMomentum
		x.Kind, raw = event.EnergyMomentum, [4][]byte{s.GetPxGev(), s.GetPyGev(), s.GetPzGev(), s.GetEnergyGev()}
	case *kinegatev1.EventBlock_MomentumMass:
		s := set.MomentumMass
		x.Kind, raw = event.MomentumMass, [4][]byte{s.GetPxGev(), s.GetPyGev(), s.GetPzGev(), s.GetMassGev()}
	case *kinegatev1.EventBlock_TransverseMomentum:
		s := set.TransverseMomentum
		x.Kind = event.TransverseMomentum
		raw = [4][]byte{s.GetTransverseMomentumGev(), s.GetPseudorapidity(), s.GetPhiRad(), s.GetMassGev()}
	case *kinegatev1.EventBlock_MomentumAngles:
		s := set.MomentumAngles
		x.Kind, raw = event.MomentumAngles, [4][]byte{s.GetMomentumGev(), s.GetThetaRad(), s.GetPhiRad()}
	case *kinegatev1.EventBlock_MomentumSlopes:
		s := set.MomentumSlopes
		x.Kind, raw = event.MomentumSlopes, [4][]byte{s.GetMomentumGev(), s.GetSlopeX(), s.GetSlopeY()}
	default:
		c.faults = append(c.faults, fault.New(fault.Invalid, "coordinates", "absent", "one coordinate set"))
		return x
	}
	for i := range x.Kind.Columns() {
		x.Columns[i] = c.float64s(x.Kind.String()+"."+x.Kind.ColumnName(i), raw[i])
	}
	return x
}
