package event

import (
	"strconv"

	"example.org/kinegate/kinematics/fault"
)

// Validate checks the structure of the block: known kinds and bits, columns of
// exactly the right length, offsets that start at 0, never decrease and end at
// the number of rows, and the limits. It returns every fault as a fault.List,
// or nil. What may be wrong with the numbers of one event is that event's
// Status and no fault of the block.
func (b *Block) Validate() error {
	c := checker{}
	events, rows := b.Events(), b.Rows()
	if events > MaxEvents {
		c.fault("event_ids", strconv.Itoa(events), "at most "+strconv.Itoa(MaxEvents)+" events")
	}
	if rows > MaxObjects {
		c.fault("object_offsets", strconv.Itoa(rows), "at most "+strconv.Itoa(MaxObjects)+" objects")
	}
	c.offsets("object_offsets", b.ObjectOffsets, events, rows)
	for i, class := range b.Class {
		if !class.Valid() {
			c.fault(indexed("object_classes", i), strconv.Itoa(int(class)), "1 to "+strconv.Itoa(int(classCount)-1))
		}
	}
	c.coordinates(&b.Coordinates, rows)
	c.mask("measured_mask", b.Measured, rows, AllMeasured)
	c.mask("species_mask", b.Species, rows, SpeciesAll)
	c.covariance("covariance", b.Covariance, rows)
	c.beam(b.Beam, events)
	if b.Vertex != nil {
		c.positions("vertex", &b.Vertex.Positions, events)
		c.covariance("vertex.covariance", b.Vertex.Covariance, events)
	}
	c.groups(b)
	if b.Clusters != nil {
		c.positions("cluster_position", b.Clusters, rows)
	}
	if p := b.Polarisation; p != nil {
		c.length("polarisation.linear_degree", len(p.Linear), events)
		c.length("polarisation.plane_rad", len(p.PlaneRad), events)
		c.length("polarisation.circular_degree", len(p.Circular), events)
	}
	return c.found.Err()
}

// maxFaults bounds the faults kept, so that a block of garbage cannot make an
// error larger than itself.
const maxFaults = 256

// checker gathers faults.
type checker struct {
	found fault.List
}

func (c *checker) fault(field, value, allowed string) {
	if len(c.found) < maxFaults {
		c.found = append(c.found, fault.New(fault.Invalid, field, value, allowed).In("event.Validate"))
	}
}

func (c *checker) length(field string, got, want int) bool {
	if got != want {
		c.fault(field+".length", strconv.Itoa(got), strconv.Itoa(want))
	}
	return got == want
}

// offsets checks an offsets column over n owners of total rows.
func (c *checker) offsets(field string, offsets []int32, n, total int) bool {
	if !c.length(field, len(offsets), n+1) {
		return false
	}
	good := true
	if offsets[0] != 0 {
		c.fault(indexed(field, 0), strconv.Itoa(int(offsets[0])), "0")
		good = false
	}
	for i := 1; i <= n; i++ {
		if offsets[i] < offsets[i-1] {
			c.fault(indexed(field, i), strconv.Itoa(int(offsets[i])), "at least "+strconv.Itoa(int(offsets[i-1])))
			good = false
		}
	}
	if int(offsets[n]) != total {
		c.fault(indexed(field, n), strconv.Itoa(int(offsets[n])), strconv.Itoa(total)+", the number of rows")
		good = false
	}
	return good
}

func (c *checker) coordinates(x *Coordinates, rows int) {
	if !x.Kind.Valid() {
		c.fault("coordinates.kind", strconv.Itoa(int(x.Kind)), "1 to "+strconv.Itoa(int(kindCount)-1))
		return
	}
	for i, column := range x.Columns {
		if i < x.Kind.Columns() {
			c.length(x.Kind.String()+"."+x.Kind.ColumnName(i), len(column), rows)
		} else if column != nil {
			c.fault("coordinates.columns", strconv.Itoa(i+1), strconv.Itoa(x.Kind.Columns())+" columns")
		}
	}
}

func (c *checker) mask(field string, m *Mask, rows int, all uint8) {
	if m == nil {
		return
	}
	c.length(field, len(m.Bits), rows)
	for i, bits := range m.Bits {
		if bits&^all != 0 {
			c.fault(indexed(field, i), strconv.Itoa(int(bits)), "1 to "+strconv.Itoa(int(all)))
		}
	}
}

func (c *checker) covariance(field string, v *Covariance, rows int) {
	if v != nil {
		c.length(field, len(v.Packed), CovarianceSize*rows)
	}
}

func (c *checker) positions(field string, p *Positions, rows int) {
	c.length(field+".x_m", len(p.X), rows)
	c.length(field+".y_m", len(p.Y), rows)
	c.length(field+".z_m", len(p.Z), rows)
}

func (c *checker) beam(beam *Beam, events int) {
	if beam == nil {
		return
	}
	rows := len(beam.EnergyGeV)
	if rows > MaxObjects {
		c.fault("beam.offsets", strconv.Itoa(rows), "at most "+strconv.Itoa(MaxObjects)+" beam rows")
	}
	c.offsets("beam.offsets", beam.Offsets, events, rows)
	c.length("beam.sigma_gev", len(beam.SigmaGeV), rows)
	c.length("beam.time_ns", len(beam.TimeNS), rows)
}

func (c *checker) groups(b *Block) {
	g := b.Groups
	if g == nil {
		return
	}
	rows := len(g.Position.X)
	if rows > MaxObjects {
		c.fault("vertex_group.offsets", strconv.Itoa(rows), "at most "+strconv.Itoa(MaxObjects)+" groups")
	}
	sound := c.offsets("vertex_group.offsets", g.Offsets, b.Events(), rows)
	c.positions("vertex_group", &g.Position, rows)
	c.covariance("vertex_group.covariance", g.Covariance, rows)
	sound = c.length("vertex_group.groups", len(g.OfObject), b.Rows()) && sound
	if !sound || len(c.found) > 0 {
		return // the object offsets may be unsound too, and the loop leans on them
	}
	for i := range b.EventIDs {
		count := g.Offsets[i+1] - g.Offsets[i]
		first, end := b.Objects(i)
		for row := first; row < end; row++ {
			if k := g.OfObject[row]; k < 0 || k > count {
				c.fault(indexed("vertex_group.groups", row), strconv.Itoa(int(k)), "0 to "+strconv.Itoa(int(count)))
			}
		}
	}
}

// indexed is the field path of entry i.
func indexed(field string, i int) string { return field + "[" + strconv.Itoa(i) + "]" }
