package constraint

import (
	"slices"
	"strconv"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/fault"
)

// maxParameters is the largest number of parameters of an object.
const maxParameters = 4

// Problem is a compiled Spec. It does not change, so that any number of Fitters can
// share it.
//
// The unknowns stand in one order everywhere: the measured parameters, those of
// each cluster together; the border, which is the unmeasured parameters and the
// vertex; the multipliers of the constraints. A cluster is a set of objects whose
// second derivatives mix, that is, objects joined by mass constraints. Clusters do
// not mix with each other but through the border.
type Problem struct {
	parts    []part
	clusters []cluster
	known    vector
	// balance are the conservation constraints, masses the mass constraints; their
	// multipliers stand in this order.
	balance []component
	masses  []massRow
	// measured is the number of measured parameters, variables that of all.
	measured, variables int
	// z is the variable of the vertex, or none.
	z      int
	vertex VertexZ
	// sign is that of the object of each variable but the vertex.
	sign []float64
	// weight is 1 for a measured variable and 0 for an unmeasured one.
	weight []float64
	// unmeasured is the number of variables of weight 0.
	unmeasured int
}

// none stands for a variable that a problem does not have.
const none = -1

// part is what the problem knows of an object.
type part struct {
	form      Form
	sign      float64 // +1 for a product, -1 for a beam
	mass      float64
	along     [3]float64
	repointed bool
	count     int // parameters
	mask      uint8
	vars      [maxParameters]int
	// whole says that its parameters are three neighbours, all measured or none.
	whole bool
}

// component is a combination of the components of the four-momentum.
type component uint8

// The components. Where energy and z are both conserved, their difference and
// their sum are: for what flies forward the two are nearly equal, and their
// difference is lost in the rounding of either.
const (
	balanceX component = iota
	balanceY
	balanceZ
	balanceEnergy
	balanceMinus // energy - z
	balancePlus  // energy + z
)

// massRow is a mass constraint (sum of left)^2 - (sum of right)^2 - square = 0.
type massRow struct {
	left, right side
	square      float64
}

// side is one sum of four-momenta.
type side struct {
	objects []int
	vars    []int // the variables of its objects but the vertex, rising
	z       bool  // whether it depends on the vertex
}

// cluster is a set of measured variables whose second derivatives mix.
type cluster struct {
	first, size int
	// rows are the unknowns of the border and the multipliers that it mixes with,
	// in rising order.
	rows []int
}

// constraints is the number of constraints.
func (p *Problem) constraints() int { return len(p.balance) + len(p.masses) }

// DegreesOfFreedom returns the number of constraints less that of unmeasured parameters.
func (p *Problem) DegreesOfFreedom() int { return p.constraints() - p.unmeasured }

// Compile checks a specification and prepares it. It returns every fault as a
// fault.List. A problem with more unmeasured parameters than constraints is
// refused; one with equally many is solved, with a chi-square of 0.
func Compile(spec *Spec) (*Problem, error) {
	if list := spec.faults(); len(list) > 0 {
		return nil, list.Err()
	}
	p := &Problem{
		known:  vector{spec.Known.P.X, spec.Known.P.Y, spec.Known.P.Z, spec.Known.E},
		z:      none,
		vertex: spec.Vertex,
	}
	for i := range spec.Objects {
		p.parts = append(p.parts, newPart(&spec.Objects[i]))
	}
	p.balance = balanceOf(spec.Conserved)
	owners := newUnion(len(p.parts))
	for _, m := range spec.Masses {
		owners.join(m.Objects)
		owners.join(m.As)
	}
	p.number(owners, spec.Vertex)
	for _, m := range spec.Masses {
		row := massRow{left: p.side(m.Objects), right: p.side(m.As)}
		if m.As == nil {
			row.square = m.GeV * m.GeV
		}
		p.masses = append(p.masses, row)
	}
	p.connect(owners)
	if dof := p.DegreesOfFreedom(); dof < 0 {
		return nil, fault.New(fault.Invalid, "degrees_of_freedom", strconv.Itoa(dof), ">= 0").In("constraint.Compile")
	}
	return p, nil
}

func newPart(o *Object) part {
	r := part{form: o.Form, sign: 1, mass: o.MassGeV, repointed: o.Repointed, mask: o.Measured, count: 3}
	if o.Beam {
		r.sign = -1
	}
	switch o.Form {
	case Along:
		u := o.Along.Unit()
		r.along, r.count = [3]float64{u.X, u.Y, u.Z}, 1
	case MissingMass:
		r.count = 4
	case Coordinates, Missing, formEnd:
	}
	return r
}

// balanceOf lists the conservation constraints.
func balanceOf(c Components) []component {
	var rows []component
	if c&X != 0 {
		rows = append(rows, balanceX)
	}
	if c&Y != 0 {
		rows = append(rows, balanceY)
	}
	z, energy := c&Z != 0, c&Energy != 0
	switch {
	case z && energy:
		rows = append(rows, balanceMinus, balancePlus)
	case z:
		rows = append(rows, balanceZ)
	case energy:
		rows = append(rows, balanceEnergy)
	}
	return rows
}

// number gives every parameter its variable.
func (p *Problem) number(owners union, vertex VertexZ) {
	repointed := false
	for root := range p.parts {
		if owners.find(root) != root {
			continue
		}
		c := cluster{first: len(p.weight)}
		for i := range p.parts {
			if owners.find(i) != root {
				continue
			}
			repointed = repointed || p.parts[i].repointed
			p.parts[i].number(true, &p.weight)
		}
		if c.size = len(p.weight) - c.first; c.size > 0 {
			p.clusters = append(p.clusters, c)
		}
	}
	p.measured = len(p.weight)
	for i := range p.parts {
		p.parts[i].number(false, &p.weight)
	}
	p.unmeasured = len(p.weight) - p.measured
	p.sign = make([]float64, len(p.weight))
	for i := range p.parts {
		r := &p.parts[i]
		for _, v := range r.vars[:r.count] {
			p.sign[v] = r.sign
		}
		r.whole = r.count == 3 && (r.mask == 0 || r.mask == event.AllMeasured)
	}
	if repointed && vertex != VertexKnown {
		p.z = len(p.weight)
		if vertex == VertexMeasured {
			p.weight = append(p.weight, 1)
		} else {
			p.weight = append(p.weight, 0)
			p.unmeasured++
		}
	}
	p.variables = len(p.weight)
}

// number gives the measured or the other parameters of an object the next variables.
func (r *part) number(measured bool, weight *[]float64) {
	for a := range r.count {
		if (r.mask>>a&1 == 1) != measured {
			continue
		}
		r.vars[a] = len(*weight)
		*weight = append(*weight, float64(r.mask>>a&1))
	}
}

func (p *Problem) side(objects []int) side {
	s := side{objects: append([]int(nil), objects...)}
	for _, i := range objects {
		s.vars = append(s.vars, p.parts[i].vars[:p.parts[i].count]...)
		s.z = s.z || p.parts[i].repointed && p.z != none
	}
	slices.Sort(s.vars)
	return s
}

// connect lists what each cluster mixes with.
func (p *Problem) connect(owners union) {
	for k := range p.clusters {
		c := &p.clusters[k]
		root := none
		for i := range p.parts {
			for _, v := range p.parts[i].vars[:p.parts[i].count] {
				if v == c.first {
					root = owners.find(i)
				}
			}
		}
		mixes := make([]bool, p.variables+p.constraints())
		for i := range p.parts {
			if owners.find(i) != root {
				continue
			}
			for _, v := range p.parts[i].vars[:p.parts[i].count] {
				mixes[v] = v >= p.measured
			}
			if p.parts[i].repointed && p.z != none {
				mixes[p.z] = true
			}
		}
		for b := range p.balance {
			mixes[p.variables+b] = true
		}
		for m := range p.masses {
			left, right := &p.masses[m].left, &p.masses[m].right
			mixes[p.variables+len(p.balance)+m] = left.in(owners, root) || right.in(owners, root)
		}
		for r, yes := range mixes {
			if yes {
				c.rows = append(c.rows, r)
			}
		}
	}
}

func (s *side) in(owners union, root int) bool {
	return len(s.objects) > 0 && owners.find(s.objects[0]) == root
}

// union is a disjoint-set forest over the objects; the root is the lowest index.
type union []int

func newUnion(n int) union {
	u := make(union, n)
	for i := range u {
		u[i] = i
	}
	return u
}

func (u union) find(i int) int {
	for u[i] != i {
		i = u[i]
	}
	return i
}

func (u union) join(members []int) {
	for _, i := range members {
		a, b := u.find(members[0]), u.find(i)
		u[max(a, b)] = min(a, b)
	}
}
