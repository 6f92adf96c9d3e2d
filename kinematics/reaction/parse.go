package reaction

import (
	"slices"
	"strconv"
	"strings"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/particle"
)

const (
	opParse   = "reaction.Parse"
	opNew     = "reaction.New"
	remainder = "X"
)

// Parse reads a reaction as papers print it, in ASCII:
//
//	gamma p -> K+ Lambda, Lambda -> p pi-
//	gamma p -> K+ X
//	eta -> pi+ pi- pi0, pi0 -> gamma gamma
//
// The first part has two particles on the left, one for a decay, or none where the
// initial state is not stated. Each further part adds the decay of a product: every
// product of that name, at any depth, decays so; the order of the parts does not
// matter. X, once among the products of the first part, is everything else. Names and
// aliases are those of the table; round brackets and "*" belong to names.
//
// The process must obey the laws (see Laws). Every fault carries its column, counted in
// bytes from 1; several faults come as a fault.List. Kinds: Invalid for the text and
// for unknown names, with the nearest names; Forbidden for a broken law, with both
// sides' sums.
func Parse(t *particle.Table, text string) (*Reaction, error) {
	if len(text) > MaxTextBytes {
		return nil, fault.New(fault.Invalid, "reaction", strconv.Itoa(len(text))+" bytes",
			"at most "+strconv.Itoa(MaxTextBytes)+" bytes").In(opParse)
	}
	parts, list := statements(text)
	p := parser{table: t, list: list}
	r := p.first(&parts[0])
	decays := p.decays(parts[1:])
	if err := p.list.Err(); err != nil {
		return nil, single(p.list)
	}
	products := p.expand(r.products, decays)
	if err := p.list.Err(); err != nil {
		return nil, single(p.list)
	}
	return assemble(opParse, t, r.initial, products, r.inclusive, position{column: parts[0].arrow})
}

// single orders a list by column and returns a list of one as its only fault.
func single(list fault.List) error {
	if len(list) == 1 {
		return list[0]
	}
	slices.SortStableFunc(list, func(a, b *fault.Error) int { return a.Column - b.Column })
	return list.Err()
}

// parser collects the faults of a text.
type parser struct {
	table *particle.Table
	list  fault.List
}

// head is the first part of a text.
type head struct {
	initial   []particle.Particle
	products  []branch
	inclusive bool
}

// stated is the decay of all products of one particle.
type stated struct {
	parent   particle.Particle
	products []branch
	at       token
	used     bool
}

func (p *parser) fault(column int, e *fault.Error) {
	p.list = append(p.list, e.In(opParse).At(0, column))
}

// particle looks one name up.
func (p *parser) particle(name token) (particle.Particle, bool) {
	found, err := p.table.Named(name.text)
	if err != nil {
		p.fault(name.column, unknownName(p.table, name.text))
		return found, false
	}
	return found, true
}

// particles looks names up and leaves unknown ones out.
func (p *parser) particles(names []token) []branch {
	list := make([]branch, 0, len(names))
	for _, name := range names {
		if found, ok := p.particle(name); ok {
			list = append(list, branch{particle: found, at: position{column: name.column}})
		}
	}
	return list
}

// noArrow explains a part without an arrow, and points at what was meant for one.
func (p *parser) noArrow(what string, s *statement, column int, form string) {
	for _, name := range s.left {
		if isArrow(name.text) {
			p.fault(name.column, unknownName(p.table, name.text))
			return
		}
	}
	p.fault(column, fault.New(fault.Invalid, what, "", form).Because("no arrow"))
}

// first reads the part before the first comma.
func (p *parser) first(s *statement) head {
	var h head
	const form = `such as "gamma p -> K+ Lambda"`
	if s.arrow == 0 {
		p.noArrow("reaction", s, s.start, form)
		return h
	}
	known := len(p.list)
	for _, b := range p.particles(s.left) {
		h.initial = append(h.initial, b.particle)
	}
	if len(s.left) > 2 && len(p.list) == known {
		p.fault(s.left[2].column, fault.New(fault.Invalid, "particle", s.left[2].text, "").
			Because("more than two particles on the left"))
	}
	names := slices.DeleteFunc(slices.Clone(s.right), func(name token) bool {
		first := name.text == remainder && !h.inclusive
		h.inclusive = h.inclusive || first
		return first
	})
	h.products = p.particles(names)
	if len(s.right) == 0 {
		p.fault(s.end, fault.New(fault.Invalid, "reaction", "", form).Because("no products"))
	}
	return h
}

// decays reads the parts after the first.
func (p *parser) decays(parts []statement) []stated {
	list := make([]stated, 0, len(parts))
	for i := range parts {
		s := &parts[i]
		const form = `such as "Lambda -> p pi-"`
		switch {
		case len(s.left)+len(s.right) == 0 && s.arrow == 0:
			p.fault(s.start, fault.New(fault.Invalid, "decay", "", form).Because("nothing after the comma"))
			continue
		case s.arrow == 0:
			p.noArrow("decay", s, s.left[0].column, form)
			continue
		case len(s.left) != 1:
			p.fault(s.start, fault.New(fault.Invalid, "decay", strconv.Itoa(len(s.left))+" parents", form).
				Because("a decay has one particle on the left"))
			continue
		}
		daughters := p.particles(s.right)
		parent, ok := p.particle(s.left[0])
		if len(s.right) < 2 {
			p.fault(s.end, fault.New(fault.Invalid, "decay", strconv.Itoa(len(s.right))+" products", form).
				Because("a decay has two products or more"))
			continue
		}
		if !ok {
			continue
		}
		if slices.ContainsFunc(list, func(d stated) bool { return d.parent.Number == parent.Number }) {
			p.fault(s.left[0].column, fault.New(fault.Invalid, "decay", s.left[0].text, "").
				Because("stated twice; two alike that decay differently need the structured form"))
			continue
		}
		list = append(list, stated{parent: parent, products: daughters, at: s.left[0]})
	}
	return list
}

// expand hangs the decays under every product of their parent's name.
func (p *parser) expand(products []branch, decays []stated) []branch {
	count := 0
	var grow func(list []branch, above []int64) []branch
	grow = func(list []branch, above []int64) []branch {
		out := slices.Clone(list)
		for i := range out {
			b := &out[i]
			if count++; count > MaxProducts {
				return out
			}
			if slices.Contains(above, b.particle.Number) {
				p.fault(b.at.column, fault.New(fault.Invalid, "decay", b.particle.Name, "").
					Because("a particle cannot be among its own decay products"))
				return out
			}
			for k := range decays {
				if d := &decays[k]; d.parent.Number == b.particle.Number {
					d.used = true
					b.decayAt = position{column: d.at.column}
					b.daughters = grow(d.products, append(slices.Clip(above), b.particle.Number))
				}
			}
			if len(p.list) > 0 {
				return out
			}
		}
		return out
	}
	out := grow(products, nil)
	if count > MaxProducts {
		p.fault(1, tooMany())
	}
	if len(p.list) > 0 {
		return out
	}
	for _, d := range decays {
		if !d.used {
			p.fault(d.at.column, fault.New(fault.Invalid, "decay", d.at.text, "a product: "+strings.Join(names(out), ", ")).
				Because("the decaying particle is no product"))
		}
	}
	return out
}

func tooMany() *fault.Error {
	return fault.New(fault.Invalid, "products", "more than "+strconv.Itoa(MaxProducts),
		"at most "+strconv.Itoa(MaxProducts)+", intermediates included")
}

// names lists the names in a tree once each.
func names(list []branch) []string {
	var all []string
	for i := range list {
		for _, name := range append([]string{list[i].particle.Name}, names(list[i].daughters)...) {
			if !slices.Contains(all, name) {
				all = append(all, name)
			}
		}
	}
	return all
}
