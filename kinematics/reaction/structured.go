package reaction

import (
	"strconv"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/particle"
)

// New makes a reaction from its structured form, with the rules and faults of Parse;
// faults name the path of the field, such as products[1].daughters[0].particle.
func New(t *particle.Table, spec Spec) (*Reaction, error) {
	var list fault.List
	look := func(name, path string) particle.Particle {
		found, err := t.Named(name)
		if err != nil {
			e := fault.New(fault.Invalid, path, name, "").In(opNew).Because("unknown particle")
			e.Nearest = t.Nearest(name)
			list = append(list, e)
		}
		return found
	}
	if n := len(spec.Initial); n > 2 {
		list = append(list, fault.New(fault.Invalid, "initial", strconv.Itoa(n)+" particles", "at most two").In(opNew))
	}
	initial := make([]particle.Particle, 0, len(spec.Initial))
	for i, name := range spec.Initial {
		initial = append(initial, look(name, "initial["+strconv.Itoa(i)+"]"))
	}
	if len(spec.Products) == 0 && !spec.Inclusive {
		list = append(list, fault.New(fault.Invalid, "products", "none", "at least one product, or X").In(opNew))
	}
	count := 0
	var grow func(specs []ProductSpec, path string) []branch
	grow = func(specs []ProductSpec, path string) []branch {
		branches := make([]branch, 0, len(specs))
		for i := range specs {
			here := path + "[" + strconv.Itoa(i) + "]"
			if count++; count > MaxProducts {
				return branches
			}
			b := branch{particle: look(specs[i].Particle, here+".particle"), at: position{path: here}, decayAt: position{path: here}}
			if len(specs[i].Daughters) == 1 {
				list = append(list, fault.New(fault.Invalid, here+".daughters", "1 product", "none, or two or more").In(opNew))
			}
			b.daughters = grow(specs[i].Daughters, here+".daughters")
			branches = append(branches, b)
		}
		return branches
	}
	products := grow(spec.Products, "products")
	if count > MaxProducts {
		list = append(list, tooMany().In(opNew))
	}
	if len(list) > 0 {
		return nil, single(list)
	}
	return assemble(opNew, t, initial, products, spec.Inclusive, position{path: "products"})
}

// Spec returns the structured form of the reaction, with canonical names.
func (r *Reaction) Spec() Spec {
	spec := Spec{Inclusive: r.Inclusive}
	for i := range r.Initial {
		spec.Initial = append(spec.Initial, r.Initial[i].Name)
	}
	var product func(n int) ProductSpec
	product = func(n int) ProductSpec {
		p := ProductSpec{Particle: r.Products[n].Particle.Name}
		for _, d := range r.Products[n].Daughters {
			p.Daughters = append(p.Daughters, product(d))
		}
		return p
	}
	for _, n := range r.Top {
		spec.Products = append(spec.Products, product(n))
	}
	return spec
}

// Conjugate returns the charge conjugate: every particle replaced by its antiparticle.
func Conjugate(t *particle.Table, r *Reaction) (*Reaction, error) {
	spec := r.Spec()
	var err error
	conjugate := func(name *string) {
		p, lookup := t.Named(*name)
		if lookup == nil {
			p, lookup = t.Conjugate(p)
		}
		if lookup != nil && err == nil {
			err = lookup
		}
		*name = p.Name
	}
	for i := range spec.Initial {
		conjugate(&spec.Initial[i])
	}
	var walk func(list []ProductSpec)
	walk = func(list []ProductSpec) {
		for i := range list {
			conjugate(&list[i].Particle)
			walk(list[i].Daughters)
		}
	}
	walk(spec.Products)
	if err != nil {
		return nil, err
	}
	return New(t, spec)
}
