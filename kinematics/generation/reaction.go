package generation

import (
	"slices"
	"strconv"
	"strings"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/particle"
	"example.org/kinegate/kinematics/reaction"
)

// Override replaces what the tables say of one product's decay. Nil and zero
// parts replace nothing.
type Override struct {
	// Product is the product's number in the reaction; Reaction.Product finds it
	// from a reference.
	Product int
	// Branching is the branching fraction of its stated decay.
	Branching float64
	Shape     *LineShape
	Density   Density
	CosTheta  *Curve
}

// ProductsOf returns the products of a reaction or, for one particle on the
// left, of its decay, ready for a Channel: masses, widths and mean lives from
// the reaction's particles, branching fractions from the table here. Rows of a
// Truth made of them are numbered as the reaction numbers its products.
//
// A width below sharpBelow counts as sharp; 0 means particle.SharpWidth. The
// orbital angular momentum of a line shape is the lowest that spins and
// parities allow. Decays of muons, taus and neutrons to leptons get their
// spectra; all others are phase space.
//
// The second result is what the caller should know: broad products that no
// Breit-Wigner describes, and decays whose branching fraction is not known.
// Faults: an inclusive reaction (Unsupported), an override of a product that is
// not there or does not decay (NotFound).
func ProductsOf(r *reaction.Reaction, sharpBelow float64, overrides ...Override) (products []Product, remarks []string, err error) {
	if r.Inclusive {
		return nil, nil, fault.New(fault.Unsupported, "reaction", "X", "").In("generation.ProductsOf").
			Because("an inclusive reaction has no products to generate")
	}
	table, err := BranchingFractions()
	if err != nil {
		return nil, nil, err
	}
	if sharpBelow == 0 {
		sharpBelow = particle.SharpWidth
	}
	m := maker{reaction: r, table: table, sharp: sharpBelow, overrides: overrides, used: make([]bool, len(overrides))}
	for _, top := range r.Top {
		products = append(products, m.product(top))
	}
	var missing fault.List
	for i, o := range overrides {
		if !m.used[i] {
			f := fault.New(fault.NotFound, "overrides.product", strconv.Itoa(o.Product), "a product that decays")
			missing = append(missing, f.In("generation.ProductsOf"))
		}
	}
	return products, m.remarks, missing.Err()
}

type maker struct {
	reaction  *reaction.Reaction
	table     []BranchingFraction
	sharp     float64
	overrides []Override
	used      []bool
	remarks   []string
}

func (m *maker) product(i int) Product {
	p := &m.reaction.Products[i]
	state := &p.Particle
	made := Product{Number: state.Number, MassGeV: state.Mass}
	if len(p.Daughters) == 0 {
		return made
	}
	if !state.Sharp(m.sharp) {
		made.WidthGeV = state.Width
		if state.NotBreitWigner != "" {
			m.remark(p.Name + ": " + state.NotBreitWigner)
		}
	}
	if state.Life == particle.LifeMeanLife {
		made.MeanLifeS = state.MeanLife
	}
	made.Decay = m.decay(state, p.Daughters)
	made.Shape.L = m.wave(state, p.Daughters)
	for k := range m.overrides {
		if o := &m.overrides[k]; o.Product == i {
			m.used[k] = true
			o.apply(&made)
		}
	}
	if made.Decay.Branching == 0 {
		m.remark(m.text(i) + ": its branching fraction is not known and counts as 1")
	}
	return made
}

// remark adds a sentence, once where it holds of several products alike.
func (m *maker) remark(sentence string) {
	if !slices.Contains(m.remarks, sentence) {
		m.remarks = append(m.remarks, sentence)
	}
}

// text is the decay of a product.
func (m *maker) text(i int) string {
	p := &m.reaction.Products[i]
	names := make([]string, 0, len(p.Daughters))
	for _, k := range p.Daughters {
		names = append(names, m.reaction.Products[k].Particle.Name)
	}
	return p.Particle.Name + " -> " + strings.Join(names, " ")
}

func (o *Override) apply(p *Product) {
	if o.Branching != 0 {
		p.Decay.Branching = o.Branching
	}
	if o.Shape != nil {
		p.Shape = *o.Shape
	}
	if o.Density != nil {
		p.Decay.Density = o.Density
	}
	if o.CosTheta != nil {
		p.Decay.CosTheta = o.CosTheta
	}
}

func (m *maker) decay(parent *particle.Particle, daughters []int) *Decay {
	d := &Decay{}
	numbers := make([]int64, 0, len(daughters))
	conjugates := make([]int64, 0, len(daughters))
	for _, k := range daughters {
		d.Products = append(d.Products, m.product(k))
		numbers = append(numbers, m.reaction.Products[k].Particle.Number)
		conjugates = append(conjugates, m.reaction.Products[k].Particle.AntiNumber)
	}
	d.Branching = lookUp(m.table, parent.Number, numbers)
	if d.Branching == 0 && parent.Number != parent.AntiNumber {
		d.Branching = lookUp(m.table, parent.AntiNumber, conjugates)
	}
	d.Density = leptonic(parent.Number, d.Products)
	return d
}

// leptonic is the density of a muon, tau or neutron decay to leptons, and nil
// for any other decay.
func leptonic(parent int64, products []Product) Density {
	if len(products) != 3 {
		return nil
	}
	if _, _, ok := leptons(products); !ok {
		return nil
	}
	switch max(parent, -parent) {
	case 13, 15:
		return LeptonDecay{}
	case 2112:
		return BetaDecay{}
	}
	return nil
}

// wave is the lowest orbital angular momentum, 0 to 2, of a decay to two
// particles that total spin and, where all are known, parities allow; 0 where
// nothing is known.
func (m *maker) wave(parent *particle.Particle, daughters []int) int {
	if len(daughters) != 2 {
		return 0
	}
	a, b := &m.reaction.Products[daughters[0]].Particle, &m.reaction.Products[daughters[1]].Particle
	if parent.TwiceSpin < 0 || a.TwiceSpin < 0 || b.TwiceSpin < 0 {
		return 0
	}
	parity := parent.Parity * a.Parity * b.Parity
	for l := range 3 {
		if parity != 0 && parity != 1-2*(l%2) {
			continue
		}
		low, high := max(a.TwiceSpin-b.TwiceSpin, b.TwiceSpin-a.TwiceSpin), a.TwiceSpin+b.TwiceSpin
		for s := low; s <= high; s += 2 {
			if parent.TwiceSpin >= max(s-2*l, 2*l-s) && parent.TwiceSpin <= s+2*l {
				return l
			}
		}
	}
	return 0
}
