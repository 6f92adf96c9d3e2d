package selection

import (
	"slices"
	"strconv"
	"strings"

	"example.org/kinegate/kinematics/constraint"
)

// bond says that the invariant masses of two sets of products are bound to each other, or
// that of one set to a number, which is the set without products.
type bond struct{ name, first, second string }

// independent reports every mass constraint of a fit that the ones before it and what is
// known anyhow bind already. One such makes the matrix of the fit singular for every event,
// whether it repeats the others or contradicts them. Bonds are the edges of a graph whose
// nodes are sets of products: a constraint between two sets that are connected is bound.
func (d *drafter) independent(at string, f *Fit, plan *fitPlan, spec *constraint.Spec) {
	var bonds []bond
	for _, leaf := range d.reaction.Leaves() {
		bonds = append(bonds, bond{name: "the particles' own masses", first: setKey([]int{leaf})})
	}
	uncertain := slices.ContainsFunc(plan.objects, func(o fitObject) bool { return o.initial != 0 })
	if spec.Conserved == constraint.AllComponents && !uncertain {
		all := slices.Sorted(slices.Values(d.reaction.Leaves()))
		bonds = append(bonds, bond{name: "the conservation of four-momentum", first: setKey(all)})
	}
	for k := range plan.masses {
		m := &plan.masses[k]
		name := indexed("masses", k)
		if n := k - len(f.Masses); n >= 0 {
			name = indexed("equal_masses", n)
		}
		next := bond{name: name, first: setKey(m.products), second: setKey(m.as)}
		if path, bound := connection(bonds, next.first, next.second); bound {
			d.fault(at+"."+name, strings.TrimPrefix(m.name, "mass of "), "constraints that are independent").
				Because("the mass is bound already, by " + strings.Join(path, " and "))
			continue
		}
		bonds = append(bonds, next)
	}
}

// setKey is the node of a set of products in ascending order.
func setKey(products []int) string {
	var key strings.Builder
	for _, i := range products {
		key.WriteString(strconv.Itoa(i) + " ")
	}
	return key.String()
}

// connection returns the names of the bonds that lead from one node to another. No bond
// closes a circle, so there is one way at most, and each bond is used up on it.
func connection(bonds []bond, from, to string) (names []string, found bool) {
	if from == to {
		return nil, true
	}
	for k, b := range bonds {
		next := b.second
		switch from {
		case b.first:
		case b.second:
			next = b.first
		default:
			continue
		}
		rest := slices.Delete(slices.Clone(bonds), k, k+1)
		if names, found = connection(rest, next, to); found {
			if !slices.Contains(names, b.name) {
				names = append([]string{b.name}, names...)
			}
			return names, true
		}
	}
	return nil, false
}
