package reaction

import (
	"strconv"
	"strings"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/particle"
)

// Product returns the number of the product that a reference means: pi0[2], a name or
// alias and the count of products of that name, depth first from 0, intermediates
// included; a bare name where there is only one such product; or a place such as
// products[1].daughters[0]. Faults are of kind Invalid.
func (r *Reaction) Product(t *particle.Table, reference string) (int, error) {
	fail := func(problem, allowed string) (int, error) {
		return 0, fault.New(fault.Invalid, "product", reference, allowed).In("reaction.Product").Because(problem)
	}
	if strings.HasPrefix(reference, "products[") {
		for n := range r.Products {
			if r.Products[n].Path == reference {
				return n, nil
			}
		}
		return fail("no such product", r.references())
	}
	count := -1
	name, bracket, counted := strings.Cut(reference, "[")
	if counted {
		digits, closed := strings.CutSuffix(bracket, "]")
		k, err := strconv.Atoi(digits)
		if !closed || err != nil || k < 0 || strconv.Itoa(k) != digits {
			return fail("malformed reference", "such as pi0[2] or products[1].daughters[0]")
		}
		count = k
	}
	p, err := t.Named(name)
	if err != nil {
		e := fault.New(fault.Invalid, "product", reference, "").In("reaction.Product").Because("unknown particle")
		e.Nearest = t.Nearest(name)
		return 0, e
	}
	found, last := 0, 0
	for n := range r.Products {
		if r.Products[n].Particle.Number != p.Number {
			continue
		}
		if found == count {
			return n, nil
		}
		found, last = found+1, n
	}
	switch {
	case found == 0 || count >= 0:
		return fail("no such product", r.references())
	case found > 1:
		return fail("several products of this name", p.Name+"[0] to "+p.Name+"["+strconv.Itoa(found-1)+"]")
	}
	return last, nil
}

// references lists the products' references by name.
func (r *Reaction) references() string {
	list := make([]string, len(r.Products))
	for n := range r.Products {
		list[n] = r.Products[n].Name
	}
	return strings.Join(list, ", ")
}
