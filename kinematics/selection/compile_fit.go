package selection

import (
	"slices"
	"strconv"
	"strings"

	"example.org/kinegate/kinematics/constraint"
	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/momentum"
)

// fitPlan is a compiled fit.
type fitPlan struct {
	problem *constraint.Problem
	objects []fitObject
	masses  []fitMass
	vertex  VertexTreatment
	// repointed says that an object follows the vertex.
	repointed bool
	// names are those of the constraints, as an explanation shows them.
	names []string
}

// fitObject is a particle of a fit: an initial one, or a product that does not decay.
type fitObject struct {
	name string
	// initial is the initial particle, 0 for a product.
	initial Initial
	// sigma is the standard deviation of the energy of an initial particle; tagged says
	// that the candidate has it.
	sigma  float64
	tagged bool
	// unmeasured says that the energy of an initial particle is not measured.
	unmeasured bool
	// product is the number of the product and slot its slot, -1 for a missing one.
	product, slot int
	// direction says that the direction alone is used, merged that a cluster of merged
	// photons stands for the product.
	direction, merged bool
	mass              float64
}

// fitMass is a compiled mass constraint, its sums by the numbers of products.
type fitMass struct {
	name         string
	products, as []int
	mass         float64
}

// degreesOfFreedom are those of the fit, NoFit without one.
func (h *hypothesis) degreesOfFreedom() int {
	if h.fit == nil {
		return NoFit
	}
	return h.fit.problem.DegreesOfFreedom()
}

// fit compiles the fit.
func (d *drafter) fit() {
	f := d.from.Fit
	if f == nil {
		return
	}
	at := d.at + ".fit"
	before := len(d.faults)
	plan := &fitPlan{vertex: f.Vertex}
	if f.Vertex > FreeVertexZ {
		d.fault(at+".vertex", strconv.Itoa(int(f.Vertex)), "exact, measured or free_z")
	}
	if f.Vertex == 0 {
		plan.vertex = ExactVertex
	}
	if f.Conservation > ConserveNothing {
		d.fault(at+".conservation", strconv.Itoa(int(f.Conservation)), "four_momentum, transverse_momentum or none")
	}
	spec := constraint.Spec{}
	if d.reaction == nil {
		return
	}
	d.conservation(at, f, plan, &spec)
	d.fitProducts(plan, &spec)
	d.fitMasses(at, f, plan)
	if len(d.faults) > before {
		return
	}
	if d.independent(at, f, plan, &spec); len(d.faults) > before {
		return
	}
	switch {
	case plan.repointed && plan.vertex == MeasuredVertex:
		spec.Vertex = constraint.VertexMeasured
	case plan.repointed:
		spec.Vertex = constraint.VertexFree
	case plan.vertex != ExactVertex:
		d.fault(at+".vertex", "given", "exact where no photon is seen, since photons alone follow the vertex")
		return
	}
	d.compileFit(at, plan, &spec)
}

// compileFit hands the fit to the constraint package.
func (d *drafter) compileFit(at string, plan *fitPlan, spec *constraint.Spec) {
	index := func(products []int) []int {
		var list []int
		for _, p := range products {
			list = append(list, slices.IndexFunc(plan.objects, func(o fitObject) bool { return o.initial == 0 && o.product == p }))
		}
		return list
	}
	for i := range plan.masses {
		m := &plan.masses[i]
		spec.Masses = append(spec.Masses, constraint.Mass{Objects: index(m.products), As: index(m.as), GeV: m.mass})
	}
	if spec.Conserved == 0 && len(spec.Masses) == 0 {
		e := d.fault(at, "no constraints", "conservation or at least one mass")
		if d.beamless() {
			_ = e.Because(beamMissing)
		}
		return
	}
	problem, err := constraint.Compile(spec)
	if err != nil {
		if one, ok := err.(*fault.Error); ok && one.Field == "degrees_of_freedom" { //nolint:errorlint // not wrapped
			d.fault(at, one.Value+" degrees of freedom", "at least as many constraints as unmeasured parameters")
			return
		}
		d.adopt(at, err)
		return
	}
	plan.problem = problem
	for k := range problem.Constraints() {
		name := problem.ConstraintName(k)
		if n := k - (problem.Constraints() - len(plan.masses)); n >= 0 {
			name = plan.masses[n].name
		}
		plan.names = append(plan.names, name)
	}
	d.out.fit = plan
}

// conservation compiles what is conserved and the initial particles.
func (d *drafter) conservation(at string, f *Fit, plan *fitPlan, spec *constraint.Spec) {
	conserved := f.Conservation
	b := &d.out.beam
	if conserved == 0 {
		conserved = ConserveNothing
		if b.known {
			conserved = ConserveFourMomentum
		}
	}
	if conserved == ConserveNothing {
		for i, e := range [...]*InitialEnergy{f.BeamEnergy, f.TargetEnergy} {
			if e != nil {
				d.fault(at+[...]string{".beam_energy", ".target_energy"}[i], "given", "absent unless four-momentum is conserved")
			}
		}
		return
	}
	if !b.known {
		e := d.fault(at+".conservation", "given", "none for a hypothesis without a beam")
		if d.beamless() {
			_ = e.Because(beamMissing)
		}
		return
	}
	if d.reaction.Inclusive {
		d.fault(at+".conservation", "given", "none for an inclusive reaction, whose products are not all stated")
		return
	}
	spec.Conserved = constraint.AllComponents
	if conserved == ConserveTransverseMomentum {
		spec.Conserved = constraint.X | constraint.Y
	}
	d.initialEnergy(at+".beam_energy", f.BeamEnergy, Beam, plan, spec)
	d.initialEnergy(at+".target_energy", f.TargetEnergy, Target, plan, spec)
}

// beamMissing is what is wrong where a beamless hypothesis has a fit that needs its beam.
const beamMissing = "beam is missing, and without it no four-momentum is conserved"

// beamless reports whether the hypothesis could have a beam and has none.
func (d *drafter) beamless() bool { return d.from.Beam == nil && len(d.reaction.Initial) == 2 }

// initialEnergy makes an initial particle an object of the fit, or a part of what is
// known exactly.
func (d *drafter) initialEnergy(at string, e *InitialEnergy, which Initial, plan *fitPlan, spec *constraint.Spec) {
	b := &d.out.beam
	tagged := b.tagged && which == Beam
	state := b.fixed.side(which)
	mass := b.mass
	if which == Target {
		mass = b.target
		if b.tagged {
			state = momentum.Four{E: b.target}
		}
	}
	knowledge := ExactEnergy
	if tagged {
		knowledge = MeasuredEnergy
	}
	object := fitObject{name: [...]string{Beam: "beam", Target: "target"}[which], initial: which, mass: mass, slot: -1}
	if e != nil {
		knowledge = e.Knowledge
		switch {
		case e.Knowledge < ExactEnergy || e.Knowledge > UnmeasuredEnergy:
			d.fault(at, strconv.Itoa(int(e.Knowledge)), "exactly one of exact, measured and unmeasured")
			return
		case e.Knowledge == MeasuredEnergy && !tagged && e.SigmaGeV == nil:
			d.fault(at+".measured.sigma_gev", "absent", "given where the event does not have it")
			return
		case e.SigmaGeV != nil && (tagged || e.Knowledge != MeasuredEnergy):
			d.fault(at+".measured.sigma_gev", fault.Text(*e.SigmaGeV), "absent, since the candidates of a tagged beam carry their own")
			return
		case e.SigmaGeV != nil:
			if object.sigma = *e.SigmaGeV; !(object.sigma >= 0) || !finite(object.sigma) {
				d.fault(at+".measured.sigma_gev", fault.Text(object.sigma), ">= 0")
				return
			}
		}
	}
	along := state.P
	if tagged {
		along = momentum.Three{Z: 1}
	} else if knowledge == ExactEnergy {
		spec.Known = spec.Known.Add(state)
		return
	}
	if along == (momentum.Three{}) {
		d.fault(at, "given", "absent or exact for a particle at rest")
		return
	}
	o := constraint.Object{Beam: true, Form: constraint.Along, Along: along, MassGeV: mass, Measured: event.FirstMeasured}
	if knowledge == UnmeasuredEnergy {
		o.Measured = 0
	}
	object.tagged, object.unmeasured = tagged && knowledge == MeasuredEnergy, knowledge == UnmeasuredEnergy
	plan.objects = append(plan.objects, object)
	spec.Objects = append(spec.Objects, o)
}

// fitProducts makes the products that do not decay objects of the fit.
func (d *drafter) fitProducts(plan *fitPlan, spec *constraint.Spec) {
	for _, i := range d.reaction.Leaves() {
		p := &d.reaction.Products[i]
		object := fitObject{name: p.Name, product: i, slot: d.slotOf[i], merged: d.merged[i] > 0, mass: p.Particle.Mass}
		o := constraint.Object{Form: constraint.Coordinates, Measured: event.AllMeasured, MassGeV: p.Particle.Mass}
		switch d.seen[i] {
		case Direction:
			o.Measured, object.direction = event.DirectionMeasured, true
		case Missing:
			o.Form, o.Measured = constraint.Missing, 0
		case Full:
		}
		photon := p.Particle.Number == numberPhoton || object.merged
		o.Repointed = photon && object.slot >= 0 && plan.vertex != ExactVertex
		plan.repointed = plan.repointed || o.Repointed
		plan.objects = append(plan.objects, object)
		spec.Objects = append(spec.Objects, o)
	}
}

// fitMasses compiles the mass constraints.
func (d *drafter) fitMasses(at string, f *Fit, plan *fitPlan) {
	if n := len(f.Masses) + len(f.EqualMasses); n > constraint.MaxMasses {
		d.fault(at+".masses", strconv.Itoa(n), "at most "+strconv.Itoa(constraint.MaxMasses)+" masses and equal masses")
		return
	}
	for k := range f.Masses {
		m := &f.Masses[k]
		field := indexed(at+".masses", k)
		out := fitMass{name: "mass of " + strings.Join(m.Products, " "), products: d.fitSet(field+".products", m.Products)}
		single, decays := -1, false
		if len(m.Products) == 1 {
			if i, err := d.reaction.Product(d.table, m.Products[0]); err == nil {
				single, decays = i, len(d.reaction.Products[i].Daughters) > 0
			}
		}
		switch {
		case single >= 0 && !decays:
			d.fault(field+".products[0]", m.Products[0], "a product that decays, or several").Because("has its mass anyhow")
		case m.MassGeV != nil:
			if out.mass = *m.MassGeV; !(out.mass >= 0) || !finite(out.mass) {
				d.fault(field+".mass_gev", fault.Text(out.mass), ">= 0")
			}
		case single >= 0:
			out.mass = d.reaction.Products[single].Particle.Mass
		case len(m.Products) > 1:
			d.fault(field+".mass_gev", "absent", "given, since several products have no table mass together")
		}
		plan.masses = append(plan.masses, out)
	}
	for k := range f.EqualMasses {
		m := &f.EqualMasses[k]
		field := indexed(at+".equal_masses", k)
		out := fitMass{products: d.fitSet(field+".first", m.First), as: d.fitSet(field+".second", m.Second)}
		if slices.ContainsFunc(out.as, func(i int) bool { return slices.Contains(out.products, i) }) {
			d.fault(field, strings.Join(slices.Concat(m.First, m.Second), " "), "two sets without a common product")
		}
		out.name = "mass of " + strings.Join(m.First, " ") + " as that of " + strings.Join(m.Second, " ")
		plan.masses = append(plan.masses, out)
	}
}

// fitSet resolves references to the products that they are made of in the end.
func (d *drafter) fitSet(at string, references []string) []int {
	if len(references) == 0 {
		d.fault(at, "none", "at least one reference of a product")
	}
	var all []int
	for k, reference := range references {
		i, ok := d.product(indexed(at, k), reference)
		if !ok {
			continue
		}
		for _, leaf := range d.leaves(i) {
			if slices.Contains(all, leaf) {
				d.fault(indexed(at, k), reference, "each product once").Because(d.reaction.Products[leaf].Name + " stands twice")
				continue
			}
			all = append(all, leaf)
		}
	}
	slices.Sort(all)
	return all
}

// text renders the constraints with the products renamed, nil for as they are, such that
// the order of parts that commute does not show.
func (p *fitPlan) text(products []int) string {
	set := func(list []int) string {
		names := make([]string, 0, len(list))
		for _, i := range list {
			if products != nil {
				i = products[i]
			}
			names = append(names, strconv.Itoa(i))
		}
		slices.Sort(names)
		return strings.Join(names, " ")
	}
	parts := make([]string, 0, len(p.masses))
	for i := range p.masses {
		m := &p.masses[i]
		first, second := set(m.products), set(m.as)
		if m.as != nil && second < first {
			first, second = second, first
		}
		parts = append(parts, first+"="+second+number(m.mass))
	}
	slices.Sort(parts)
	return strings.Join(parts, "&")
}
