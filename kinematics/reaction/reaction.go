// Package reaction holds reactions and decays as papers print them, the laws they
// obey, the initial states they start from, and what follows in closed form:
// thresholds, the state of a channel, two-body kinematics and the channels that are
// open.
//
// Units are GeV (c = 1) and radian.
package reaction

import (
	"strconv"

	"example.org/kinegate/kinematics/particle"
)

// Reaction is a process that the conservation laws allow: two particles on the left
// (or one for a decay, or none where the initial state is not stated), products on
// the right that may decay further, and possibly X, everything else. It is made by
// Parse or New and is read only.
type Reaction struct {
	// Initial is the left side: none, one or two particles.
	Initial []particle.Particle
	// Products are numbered depth first from 0, intermediates included.
	Products []Product
	// Top lists the products of the right side by number, in order.
	Top []int
	// Inclusive says that X, anything else, comes out too.
	Inclusive bool
	// Decays are the stated decays: first that of the left side if it is one
	// particle, then those of the products by number.
	Decays []Decay
	// Remainder is what is left for X; nil unless Inclusive with a left side.
	Remainder *Remainder

	final finalStates
}

// Product is one product of a reaction.
type Product struct {
	// Particle is the state.
	Particle particle.Particle
	// Parent is the number of the product whose daughter this is, or -1.
	Parent int
	// Daughters are the numbers of the daughters, empty for a product that is not
	// said to decay.
	Daughters []int
	// Name is the reference by name: the bare name of the only product so named, and
	// otherwise such as pi0[2], the name with the count of products of that name,
	// depth first from 0.
	Name string
	// Path is the reference by place, such as products[1].daughters[0].
	Path string
}

// Spec is the structured form of a reaction. It can say what the text cannot: two
// products of one name that decay differently.
type Spec struct {
	// Initial are the names on the left: none, one or two.
	Initial []string
	// Products are the right side.
	Products []ProductSpec
	// Inclusive adds X.
	Inclusive bool
}

// ProductSpec is one product and its stated decay.
type ProductSpec struct {
	// Particle is a name or alias.
	Particle string
	// Daughters are the products of its decay, empty if none is stated.
	Daughters []ProductSpec
}

// Limits of one reaction. The products fit a verdict's assignment, and every text
// that is worth reading fits.
const (
	// MaxProducts bounds the products of a reaction, intermediates included.
	MaxProducts = 64
	// MaxTextBytes bounds the text of a reaction.
	MaxTextBytes = 4096
)

// Leaves returns the numbers of the products that are not said to decay.
func (r *Reaction) Leaves() []int {
	leaves := make([]int, 0, len(r.Products))
	for i := range r.Products {
		if len(r.Products[i].Daughters) == 0 {
			leaves = append(leaves, i)
		}
	}
	return leaves
}

// IsDecay reports whether the left side is one particle.
func (r *Reaction) IsDecay() bool { return len(r.Initial) == 1 }

// branch is a product while the tree is made, with the position of its name.
type branch struct {
	particle  particle.Particle
	daughters []branch
	at        position
	decayAt   position // where the decay is stated
}

// position is a column of a text or a path in a structured form.
type position struct {
	column int
	path   string
}

// number lays the tree out depth first.
func (r *Reaction) number(products []branch) {
	counts := map[int64]int{}
	var add func(b *branch, parent int, path string) int
	add = func(b *branch, parent int, path string) int {
		n := len(r.Products)
		count := counts[b.particle.Number]
		counts[b.particle.Number]++
		r.Products = append(r.Products, Product{
			Particle: b.particle, Parent: parent, Path: path,
			Name: b.particle.Name + "[" + strconv.Itoa(count) + "]",
		})
		daughters := make([]int, 0, len(b.daughters))
		for i := range b.daughters {
			daughters = append(daughters, add(&b.daughters[i], n, path+".daughters["+strconv.Itoa(i)+"]"))
		}
		if len(daughters) > 0 {
			r.Products[n].Daughters = daughters
		}
		return n
	}
	for i := range products {
		r.Top = append(r.Top, add(&products[i], -1, "products["+strconv.Itoa(i)+"]"))
	}
	for n := range r.Products {
		if p := &r.Products[n]; counts[p.Particle.Number] == 1 {
			p.Name = p.Particle.Name
		}
	}
}
