package reaction

import (
	"strconv"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/num"
	"example.org/kinegate/kinematics/particle"
)

// assemble numbers the tree, holds it against the laws and classes its decays.
func assemble(
	op string, t *particle.Table, initial []particle.Particle, products []branch, inclusive bool, at position,
) (*Reaction, error) {
	r := &Reaction{Initial: initial, Inclusive: inclusive}
	if len(initial) == 0 {
		r.Initial = nil
	}
	r.number(products)
	var list fault.List
	switch len(initial) {
	case 1:
		d, faults := r.decay(op, &initial[0], -1, r.Top, inclusive, at)
		list = append(list, faults...)
		r.Decays = append(r.Decays, d)
		if len(r.Top) < 2 && !inclusive {
			list = append(list, placed(fault.New(fault.Invalid, "decay", strconv.Itoa(len(r.Top))+" products", "two products or more").
				In(op).Because("a decay has two products or more"), at))
		}
	case 2:
		left, right := r.sums()
		if !inclusive {
			list = append(list, lawFaults(op, r.headText(), differ(AllLaws, left, right), left, right, at)...)
		}
	}
	list = append(list, r.productDecays(op, products)...)
	if len(list) > 0 {
		return nil, single(list)
	}
	if inclusive && len(initial) > 0 {
		r.Remainder = r.remainder(t)
	}
	r.final = r.finalStates()
	return r, nil
}

// placed sets a fault's position.
func placed(e *fault.Error, at position) *fault.Error {
	switch {
	case at.path != "" && e.Kind == fault.Forbidden:
		e = e.Move(at.path)
	case at.path != "":
		e.Field = at.path + ": " + e.Field
	}
	return e.At(0, at.column)
}

// sums returns the sums of the left side and of the products of the right side.
func (r *Reaction) sums() (left, right sum) {
	for i := range r.Initial {
		left.add(&r.Initial[i])
	}
	for _, n := range r.Top {
		right.add(&r.Products[n].Particle)
	}
	return left, right
}

// headText is the first part of the text.
func (r *Reaction) headText() string {
	head := Reaction{Initial: r.Initial, Inclusive: r.Inclusive, Top: r.Top}
	head.Products = make([]Product, len(r.Products))
	for n := range r.Products {
		head.Products[n].Particle = r.Products[n].Particle
	}
	return head.String()
}

// productDecays checks and classes the decays of the products, by number. One decay
// stated for several products alike is a single fault.
func (r *Reaction) productDecays(op string, products []branch) fault.List {
	var list fault.List
	reported := map[position]bool{}
	n := 0
	var walk func(branches []branch)
	walk = func(branches []branch) {
		for i := range branches {
			b := &branches[i]
			number := n
			n++
			if len(b.daughters) > 0 {
				d, faults := r.decay(op, &b.particle, number, r.Products[number].Daughters, false, b.decayAt)
				if !reported[b.decayAt] {
					list = append(list, faults...)
				}
				reported[b.decayAt] = len(faults) > 0
				r.Decays = append(r.Decays, d)
			}
			walk(b.daughters)
		}
	}
	walk(products)
	return list
}

// Decay is one stated decay.
type Decay struct {
	// Product is the number of the decaying product, or -1 for the left side.
	Product int
	// Text is the decay alone, such as "Lambda -> p pi-".
	Text string
	// Class is the interaction by which it goes.
	Class DecayClass
	// Released is the parent's mass less those of the daughters in GeV. It is negative
	// for a decay that needs the parent's width or a daughter's.
	Released float64

	// sharp says that neither the parent nor a daughter has a width to draw on.
	sharp bool
}

// decay checks and classes one decay.
func (r *Reaction) decay(
	op string, parent *particle.Particle, number int, daughters []int, inclusive bool, at position,
) (Decay, fault.List) {
	var left, right sum
	left.add(parent)
	d := Decay{Product: number, Text: r.decayText(parent.Name, daughters), Class: Weak}
	masses := make([]float64, 0, len(daughters))
	sharp := parent.Sharp(particle.SharpWidth)
	for _, n := range daughters {
		p := &r.Products[n].Particle
		right.add(p)
		masses = append(masses, p.Mass)
		sharp = sharp && p.Sharp(particle.SharpWidth)
	}
	released, side := momentum.Excess(parent.Mass, masses...)
	d.Released, d.sharp = released, sharp
	if inclusive {
		d.Text += " " + remainder
		return d, nil
	}
	d.Class = r.classify(parent, daughters, left, right)
	list := lawFaults(op, d.Text, differ(AlwaysLaws, left, right), left, right, at)
	// For the decay that is asked about itself, being closed is an answer.
	if sharp && side == num.Below && number >= 0 {
		list = append(list, placed(fault.New(fault.Forbidden, "energy",
			"left "+fault.Text(parent.Mass)+" GeV, right "+fault.Text(parent.Mass-released)+" GeV",
			"a parent at least as heavy as its products").In(op).Because("not conserved in "+d.Text), at))
	}
	if parent.IsNeutralKaon() {
		e := fault.New(fault.Invalid, "decay", parent.Name, "K0_S or K0_L").In(op).
			Because("a neutral kaon in flight decays as K0_S or K0_L; name the one that is meant")
		list = append(list, placed(e, at))
	}
	return d, list
}
