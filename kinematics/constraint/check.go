package constraint

import (
	"math"
	"math/bits"
	"strconv"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/fault"
)

// faults returns what is wrong with a specification.
func (spec *Spec) faults() fault.List {
	c := checker{}
	c.count("objects.length", len(spec.Objects), 1, MaxObjects)
	c.count("masses.length", len(spec.Masses), 0, MaxMasses)
	if spec.Conserved&^AllComponents != 0 {
		c.add("conserved", strconv.Itoa(int(spec.Conserved)), "bits 0 to 3")
	}
	if spec.Vertex >= vertexEnd {
		c.add("vertex", strconv.Itoa(int(spec.Vertex)), "0 to "+strconv.Itoa(int(vertexEnd)-1))
	}
	for _, x := range []float64{spec.Known.P.X, spec.Known.P.Y, spec.Known.P.Z, spec.Known.E} {
		if !finite(x) {
			c.add("known", fault.Text(x), "finite")
		}
	}
	for i := range spec.Objects {
		c.object("objects["+strconv.Itoa(i)+"]", &spec.Objects[i])
	}
	for i := range spec.Masses {
		m, field := &spec.Masses[i], "masses["+strconv.Itoa(i)+"]"
		c.members(field+".objects", m.Objects, len(spec.Objects))
		if m.As != nil {
			c.members(field+".as", m.As, len(spec.Objects))
		}
		c.mass(field+".mass_gev", m.GeV)
	}
	return c.list
}

type checker struct {
	list fault.List
}

func (c *checker) add(field, value, allowed string) {
	c.list = append(c.list, fault.New(fault.Invalid, field, value, allowed).In("constraint.Compile"))
}

func (c *checker) count(field string, n, low, high int) {
	if n < low || n > high {
		c.add(field, strconv.Itoa(n), strconv.Itoa(low)+" to "+strconv.Itoa(high))
	}
}

func (c *checker) mass(field string, m float64) {
	if !(m >= 0 && m <= maxMagnitude) {
		c.add(field, fault.Text(m), ">= 0 and <= "+fault.Text(maxMagnitude))
	}
}

func (c *checker) members(field string, members []int, objects int) {
	c.count(field+".length", len(members), 1, MaxObjects)
	var seen uint64
	for _, i := range members {
		if i < 0 || i >= objects || i >= MaxObjects {
			c.add(field, strconv.Itoa(i), "0 to "+strconv.Itoa(objects-1))
			continue
		}
		seen |= 1 << i
	}
	if bits.OnesCount64(seen) < len(members) && len(c.list) == 0 {
		c.add(field, strconv.Itoa(len(members)), "each object at most once")
	}
}

func (c *checker) object(field string, o *Object) {
	allowed := event.AllMeasured
	switch o.Form {
	case Coordinates:
	case Along:
		allowed = event.FirstMeasured
		if n := o.Along.Norm(); !(n > 0 && n <= maxMagnitude) {
			c.add(field+".along", fault.Text(n), "a direction")
		}
	case Missing, MissingMass:
		allowed = 0
	case formEnd:
		fallthrough
	default:
		c.add(field+".form", strconv.Itoa(int(o.Form)), "1 to "+strconv.Itoa(int(formEnd)-1))
	}
	if o.Measured&^allowed != 0 {
		c.add(field+".measured", strconv.Itoa(int(o.Measured)), "bits of "+strconv.Itoa(int(allowed)))
	}
	if o.Repointed && o.Form != Coordinates {
		c.add(field+".repointed", "true", "false unless the form is Coordinates")
	}
	c.mass(field+".mass_gev", o.MassGeV)
}

// maxMagnitude bounds masses, momenta and positions, far from overflow in fourth powers.
const maxMagnitude = 1e30

// finite tells whether x is a number of a magnitude that can be worked with.
func finite(x float64) bool { return math.Abs(x) <= maxMagnitude }
