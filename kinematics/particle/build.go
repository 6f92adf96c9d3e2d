package particle

import (
	"slices"
	"strconv"

	"example.org/kinegate/kinematics/fault"
)

// build makes the particle of a merged row, and its antiparticle if it is not its own.
func build(number int64, r *row) ([]Particle, fault.List) {
	var list fault.List
	c, known := decode(number)
	if !known {
		list = append(list, r.fault(colNumber, "a number that the digit rules cover: quarks, leptons, "+
			"bosons 21-40, dark matter 51-60, mesons, baryons, nuclei, or 9900001-9999999 for private use"))
		return nil, list
	}
	p := Particle{
		Number: number, Title: r.cells[colName].text, Source: r.cells[colSource].text,
		NotBreitWigner: r.cells[colNotBreitWigner].text,
		Numbers:        c.numbers, Nucleus: c.nucleus, EitherStrangeness: c.eitherStrangeness,
	}
	if r.cells[colMass].text == "" {
		list = append(list, r.fault(colMass, "a mass, 0 or more"))
	}
	p.Mass = r.decimal(colMass, maxMass, &list)
	p.MassError = r.decimal(colMassError, maxMass, &list)
	r.life(&p, &list)
	r.charge(&p, c, &list)
	r.spin(&p, c, &list)
	names := r.names(colAliases, &list)
	switch {
	case len(names) > 0:
		p.Name, p.aliases = names[0], names[1:]
	case r.cells[colAliases].text == "":
		list = append(list, r.fault(colAliases, "at least one name"))
	}
	anti := r.antiparticle(&p, c, &list)
	if p.NotBreitWigner == "" {
		p.NotBreitWigner = notBreitWigner(number)
	}
	if p.Source == "" {
		p.Source = "particle file, no source given"
	}
	if p.Title == "" {
		p.Title = p.Name
	}
	if len(list) > 0 {
		return nil, list
	}
	if p.SelfConjugate() {
		return []Particle{p}, nil
	}
	return []Particle{p, p.conjugate(mirrored(p.Name, anti))}, nil
}

// charge takes the charge from the number and holds a stated one against it.
func (r *row) charge(p *Particle, c content, list *fault.List) {
	stated, ok := r.integer(colCharge, -999, 999, list)
	switch {
	case c.free:
		p.Numbers.ChargeThirds = int(stated)
	case ok && int(stated) != c.numbers.ChargeThirds:
		*list = append(*list, r.fault(colCharge, strconv.Itoa(c.numbers.ChargeThirds)+
			", which the particle number says"))
	}
}

// spin takes spin and parities and holds the spin against the number.
func (r *row) spin(p *Particle, c content, list *fault.List) {
	p.TwiceSpin = r.twiceSpin(list)
	p.Parity = r.sign(colParity, list)
	p.CParity = r.sign(colCParity, list)
	switch {
	case c.twiceSpin < 0:
	case p.TwiceSpin < 0:
		p.TwiceSpin = c.twiceSpin
	case p.TwiceSpin != c.twiceSpin:
		*list = append(*list, r.fault(colSpin, halves(c.twiceSpin)+", which the particle number says"))
	}
}

// halves renders a spin.
func halves(twice int) string {
	if twice%2 == 0 {
		return strconv.Itoa(twice / 2)
	}
	return strconv.Itoa(twice) + "/2"
}

// antiparticle sets the antiparticle's number and returns its names.
func (r *row) antiparticle(p *Particle, c content, list *fault.List) []string {
	self := c.selfConjugate && p.Numbers == (Numbers{})
	p.AntiNumber = -p.Number
	if self {
		p.AntiNumber = p.Number
	}
	if stated, ok := r.integer(colAntiNumber, -lastNucleus, lastNucleus, list); ok {
		switch {
		case stated != p.Number && stated != -p.Number,
			stated == p.Number && !self, stated == -p.Number && self && !c.free:
			*list = append(*list, r.fault(colAntiNumber, strconv.FormatInt(p.AntiNumber, 10)))
		default:
			p.AntiNumber = stated
		}
	}
	names := r.names(colAntiAliases, list)
	switch {
	case p.SelfConjugate() && names != nil:
		*list = append(*list, r.fault(colAntiAliases, "empty for a self-conjugate state"))
	case !p.SelfConjugate() && p.CParity != 0:
		*list = append(*list, r.fault(colCParity, "empty for a state that is not self-conjugate"))
	}
	if names == nil {
		names = []string{"anti-" + p.Name}
	}
	return names
}

// mirrored puts the name that differs from the particle's only in the sign of the charge
// first, so that the antiparticle of e- is called e+ and not positron. Without such a
// name the order stays.
func mirrored(name string, anti []string) []string {
	stem, sign := name[:len(name)-1], name[len(name)-1]
	for i, other := range anti {
		if (sign == '-' && other == stem+"+") || (sign == '+' && other == stem+"-") {
			return slices.Insert(slices.Delete(slices.Clone(anti), i, i+1), 0, other)
		}
	}
	return anti
}
