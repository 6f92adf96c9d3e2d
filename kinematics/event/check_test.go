package event_test

import (
	"errors"
	"math"
	"slices"
	"strings"
	"testing"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/fault"
)

// sample is a valid block of three events with every optional column: two
// objects, none, and one.
func sample() *event.Block {
	column := func(n int) []float64 {
		c := make([]float64, n)
		for i := range c {
			c[i] = 0.5
		}
		return c
	}
	positions := func(n int) event.Positions {
		return event.Positions{X: column(n), Y: column(n), Z: column(n)}
	}
	clusters := positions(3)
	return &event.Block{
		EventIDs: []int64{7, 8, 9}, RunNumber: 1, ObjectOffsets: []int32{0, 2, 2, 3},
		Coordinates: event.Coordinates{
			Kind:    event.MomentumAngles,
			Columns: [4][]float64{column(3), column(3), column(3)},
		},
		Class:      []event.Class{event.Photon, event.Positive, event.Neutral},
		Measured:   &event.Mask{Bits: []uint8{7, 7, 6}},
		Species:    &event.Mask{Bits: []uint8{0, event.SpeciesProton, 0}},
		Covariance: &event.Covariance{Packed: column(18)},
		Beam: &event.Beam{
			Offsets: []int32{0, 1, 1, 3}, EnergyGeV: column(3), SigmaGeV: column(3), TimeNS: column(3),
		},
		Vertex: &event.Vertex{Positions: positions(3), Covariance: &event.Covariance{Packed: column(18)}},
		Groups: &event.Groups{
			OfObject: []int32{0, 1, 0}, Offsets: []int32{0, 1, 1, 1},
			Position: positions(1), Covariance: &event.Covariance{Packed: column(6)},
		},
		Clusters:     &clusters,
		Polarisation: &event.Polarisation{Linear: column(3), PlaneRad: column(3), Circular: column(3)},
	}
}

func TestValidateAcceptsTheSample(t *testing.T) {
	if err := sample().Validate(); err != nil {
		t.Fatal(err)
	}
	bare := &event.Block{ObjectOffsets: []int32{0}}
	if err := bare.Validate(); err != nil {
		t.Fatalf("a block of no events: %v", err)
	}
}

func TestValidateFindsEachFault(t *testing.T) {
	cases := []struct {
		field string
		spoil func(*event.Block)
	}{
		{"object_offsets.length", func(b *event.Block) { b.ObjectOffsets = b.ObjectOffsets[:3] }},
		{"object_offsets.length", func(b *event.Block) { b.ObjectOffsets = nil }},
		{"object_offsets[0]", func(b *event.Block) { b.ObjectOffsets[0] = 1 }},
		{"object_offsets[2]", func(b *event.Block) { b.ObjectOffsets[2] = 1 }},
		{"object_offsets[3]", func(b *event.Block) { b.ObjectOffsets[3] = 4 }},
		{"object_classes[1]", func(b *event.Block) { b.Class[1] = 5 }},
		{"coordinates.kind", func(b *event.Block) { b.Coordinates.Kind = 9 }},
		{"momentum_angles.theta_rad.length", func(b *event.Block) { b.Coordinates.Columns[1] = nil }},
		{"coordinates.columns", func(b *event.Block) { b.Coordinates.Columns[3] = []float64{1, 2, 3} }},
		{"measured_mask[0]", func(b *event.Block) { b.Measured.Bits[0] = 8 }},
		{"measured_mask.length", func(b *event.Block) { b.Measured.Bits = nil }},
		{"species_mask[2]", func(b *event.Block) { b.Species.Bits[2] = 64 }},
		{"covariance.length", func(b *event.Block) { b.Covariance.Packed = b.Covariance.Packed[1:] }},
		{"beam.offsets[2]", func(b *event.Block) { b.Beam.Offsets[2] = 0 }},
		{"beam.sigma_gev.length", func(b *event.Block) { b.Beam.SigmaGeV = nil }},
		{"beam.time_ns.length", func(b *event.Block) { b.Beam.TimeNS = nil }},
		{"vertex.y_m.length", func(b *event.Block) { b.Vertex.Y = nil }},
		{"vertex.covariance.length", func(b *event.Block) { b.Vertex.Covariance.Packed = nil }},
		{"vertex_group.groups[1]", func(b *event.Block) { b.Groups.OfObject[1] = 2 }},
		{"vertex_group.groups[2]", func(b *event.Block) { b.Groups.OfObject[2] = -1 }},
		{"vertex_group.z_m.length", func(b *event.Block) { b.Groups.Position.Z = nil }},
		{"vertex_group.covariance.length", func(b *event.Block) { b.Groups.Covariance.Packed = nil }},
		{"cluster_position.x_m.length", func(b *event.Block) { b.Clusters.X = nil }},
		{"polarisation.circular_degree.length", func(b *event.Block) { b.Polarisation.Circular = nil }},
		{"event_ids", func(b *event.Block) {
			*b = event.Block{
				EventIDs: make([]int64, event.MaxEvents+1), ObjectOffsets: make([]int32, event.MaxEvents+2)}
		}},
	}
	for _, c := range cases {
		t.Run(c.field, func(t *testing.T) {
			b := sample()
			c.spoil(b)
			err := b.Validate()
			var list fault.List
			if !errors.As(err, &list) {
				t.Fatalf("got %v, want a fault.List", err)
			}
			for _, f := range list {
				if f.Field == c.field {
					return
				}
			}
			t.Errorf("no fault names %s: %v", c.field, err)
		})
	}
}

func TestValidateReportsAllAtOnce(t *testing.T) {
	b := sample()
	b.Class[0], b.Beam.TimeNS, b.Clusters.X = 77, nil, nil
	text := b.Validate().Error()
	for _, field := range []string{"object_classes[0]", "beam.time_ns.length", "cluster_position.x_m.length"} {
		if !strings.Contains(text, field) {
			t.Errorf("%s is missing from %q", field, text)
		}
	}
}

func TestCheck(t *testing.T) {
	cases := []struct {
		name  string
		want  event.Status
		spoil func(*event.Block)
	}{
		{"sound", event.Good, func(*event.Block) {}},
		{"nan", event.NonFinite, func(b *event.Block) { b.Coordinates.Columns[2][1] = math.NaN() }},
		{"inf", event.NonFinite, func(b *event.Block) { b.Coordinates.Columns[0][0] = math.Inf(1) }},
		{"negative momentum", event.NegativeEnergy, func(b *event.Block) { b.Coordinates.Columns[0][0] = -1 }},
		{"theta", event.OutOfRange, func(b *event.Block) { b.Coordinates.Columns[1][0] = 3.2 }},
		{"variance", event.NegativeSpread, func(b *event.Block) { b.Covariance.Packed[3] = -1 }},
		{"beam energy", event.NegativeEnergy, func(b *event.Block) { b.Beam.EnergyGeV[0] = -1 }},
		{"beam sigma", event.NegativeSpread, func(b *event.Block) { b.Beam.SigmaGeV[0] = -1 }},
		{"beam time", event.NonFinite, func(b *event.Block) { b.Beam.TimeNS[0] = math.NaN() }},
		{"vertex", event.NonFinite, func(b *event.Block) { b.Vertex.Z[0] = math.NaN() }},
		{"group", event.NonFinite, func(b *event.Block) { b.Groups.Position.X[0] = math.NaN() }},
		{"polarisation", event.OutOfRange, func(b *event.Block) { b.Polarisation.Circular[0] = -1.5 }},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			b := sample()
			c.spoil(b)
			if got := b.Check(0); got != c.want {
				t.Errorf("event 0 is %v, want %v", got, c.want)
			}
			if got := b.Check(1); got != event.Good {
				t.Errorf("the neighbour is %v", got)
			}
		})
	}
	t.Run("unmeasured parameters hold anything", func(t *testing.T) {
		b := sample()
		b.Coordinates.Columns[0][2] = math.NaN()
		if got := b.Check(2); got != event.Good {
			t.Errorf("a direction without a momentum is %v", got)
		}
	})
	t.Run("too many objects", func(t *testing.T) {
		b := &event.Block{
			EventIDs: []int64{1}, ObjectOffsets: []int32{0, 65}, Class: slices.Repeat([]event.Class{event.Photon}, 65),
		}
		for k := range 4 {
			b.Coordinates.Columns[k] = make([]float64, 65)
		}
		if err := b.Validate(); err != nil {
			t.Fatal(err)
		}
		if got := b.Check(0); got != event.TooManyObjects {
			t.Errorf("got %v", got)
		}
	})
}
