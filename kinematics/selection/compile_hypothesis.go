package selection

import (
	"slices"
	"strconv"
	"strings"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/particle"
	"example.org/kinegate/kinematics/reaction"
)

// drafter compiles one hypothesis.
type drafter struct {
	*compiler

	at       string
	from     *Hypothesis
	reaction *reaction.Reaction
	// seen is how each product that does not decay is measured, massFromEvent where
	// its mass comes from, slotOf its slot or -1.
	// merged is the least energy of the cluster that stands for it, 0 for none.
	seen          []Measurement
	massFromEvent []bool
	merged        []float64
	slotOf        []int
	// windows counts the windows so far.
	windows int
	out     hypothesis
}

// hypothesis checks and compiles a hypothesis.
func (c *compiler) hypothesis(at string, i int, h *Hypothesis) {
	d := &drafter{compiler: c, at: at, from: h}
	d.out.salt = salt(h.Name)
	d.role()
	readable := d.readReaction()
	d.measurements()
	if readable {
		d.slots()
		d.conjugate()
	}
	d.beam()
	d.extraObjects()
	d.fit()
	d.condition()
	d.ranking()
	labels := d.record()
	if !readable {
		return
	}
	d.order()
	d.out.uncertain = h.RecordUncertainties && len(d.out.record) > 0
	switch {
	case d.out.byFit:
		c.orders[i] = byProbability
	case len(d.out.ranking) > 0:
		c.orders[i] = byMasses
	default:
		c.orders[i] = byIndex
	}
	products := make([]string, len(d.reaction.Products))
	for i := range products {
		products[i] = d.reaction.Products[i].Name
	}
	c.program.hypotheses = append(c.program.hypotheses, d.out)
	c.program.outlines = append(c.program.outlines, Outline{
		Name: h.Name, Reaction: d.reaction.String(), Products: products, Observables: labels,
		DegreesOfFreedom: d.out.degreesOfFreedom(),
	})
	c.program.fits = c.program.fits || d.out.fit != nil
	c.program.uncertain = c.program.uncertain || d.out.uncertain
}

// role checks the role and the prescale.
func (d *drafter) role() {
	h := d.from
	d.out.role = h.Role
	if h.Role == 0 {
		d.out.role = Gate
	}
	if h.Role > Veto {
		d.fault(d.at+".role", strconv.Itoa(int(h.Role)), "gate, shadow or veto")
	}
	if h.Prescale < 0 {
		d.fault(d.at+".prescale_count", strconv.FormatInt(h.Prescale, 10), ">= 0")
		return
	}
	if h.Prescale > 1 && h.Role == Veto {
		d.fault(d.at+".prescale_count", strconv.FormatInt(h.Prescale, 10), "0 or 1 for a veto")
	}
	d.out.prescale = uint64(h.Prescale)
}

// readReaction reads the reaction and reports whether it could.
func (d *drafter) readReaction() bool {
	h := d.from
	var err error
	switch {
	case (h.Reaction == "") == (h.Structured == nil):
		value := "neither"
		if h.Structured != nil {
			value = "both"
		}
		d.fault(d.at+".reaction", value, "exactly one of reaction and structured_reaction")
		return false
	case h.Structured != nil:
		if d.reaction, err = reaction.New(d.table, *h.Structured); err != nil {
			d.adoptStructured(err)
		}
	default:
		if d.reaction, err = reaction.Parse(d.table, h.Reaction); err != nil {
			d.adopt(d.at+".reaction", err)
		}
	}
	if err != nil {
		return false
	}
	d.out.products = len(d.reaction.Products)
	return true
}

// adoptStructured adds the faults of a structured reaction, whose paths lie below it.
func (d *drafter) adoptStructured(err error) {
	before := len(d.faults)
	d.adopt(d.at+".structured_reaction", err)
	var list fault.List
	switch e := err.(type) { //nolint:errorlint // what reaction returns is not wrapped
	case fault.List:
		list = e
	case *fault.Error:
		list = fault.List{e}
	}
	for k, e := range list {
		if e.Field != "" {
			d.faults[before+k].Field += "." + e.Field
		}
	}
}

// measurements settles how each product is seen.
func (d *drafter) measurements() {
	var products []reaction.Product
	if d.reaction != nil {
		products = d.reaction.Products
	}
	d.seen = make([]Measurement, len(products))
	d.massFromEvent = make([]bool, len(products))
	d.merged = make([]float64, len(products))
	listed := make([]bool, len(products))
	for i := range products {
		if len(products[i].Daughters) == 0 {
			d.seen[i] = defaultMeasurement(&products[i].Particle)
		}
	}
	for k := range d.from.Measurements {
		m := &d.from.Measurements[k]
		at := indexed(d.at+".measurements", k)
		i, ok := d.product(at+".product", m.Product)
		if m.Measurement > Missing {
			d.fault(at+".measurement", strconv.Itoa(int(m.Measurement)), "full, direction or missing")
		}
		if !ok {
			continue
		}
		switch {
		case len(products[i].Daughters) > 0:
			d.fault(at+".product", m.Product, "a product that does not decay").Because("decays")
			continue
		case listed[i]:
			d.fault(at+".product", m.Product, "each product once").Because("stands twice")
			continue
		}
		listed[i] = true
		if m.Measurement != 0 {
			d.seen[i] = m.Measurement
		}
		if m.Merged != nil {
			d.mergedPhotons(at, m, i)
		}
		if m.MassFromEvent && d.seen[i] != Full {
			d.fault(at+".mass_from_event", "true", "a product that is measured in full")
		}
		d.massFromEvent[i] = m.MassFromEvent
	}
}

// mergedPhotons lets a photon cluster stand for product i.
func (d *drafter) mergedPhotons(at string, m *ProductMeasurement, i int) {
	p := &d.reaction.Products[i].Particle
	if m.Measurement != 0 && m.Measurement != Full {
		d.fault(at+".measurement", strconv.Itoa(int(m.Measurement)), "absent or full where one cluster stands for the product")
	}
	if m.MassFromEvent {
		d.fault(at+".mass_from_event", "true", "false where one cluster stands for the product")
	}
	if p.ChargeThirds() != 0 || !(p.Mass > 0) {
		d.fault(at+".merged_photons", p.Name, "a neutral product with a mass")
		return
	}
	if x := m.Merged.MinEnergyGeV; !(x > p.Mass) || !finite(x) {
		d.fault(at+".merged_photons.min_energy_gev", fault.Text(x), "> "+fault.Text(p.Mass)+", the mass of "+p.Name)
	}
	d.seen[i], d.merged[i] = Full, m.Merged.MinEnergyGeV
}

// defaultMeasurement is how a product that is not listed is seen.
func defaultMeasurement(p *particle.Particle) Measurement {
	switch {
	case p.Number == numberPhoton || p.ChargeThirds() != 0:
		return Full
	case isNeutrino(p):
		return Missing
	}
	return Direction
}

// product resolves a reference to a product.
func (d *drafter) product(field, reference string) (int, bool) {
	if d.reaction == nil {
		return 0, false // the reaction has its own fault
	}
	i, err := d.reaction.Product(d.table, reference)
	if err != nil {
		d.adopt(field, err)
		return 0, false
	}
	return i, true
}

// slots lists the products that objects stand for.
func (d *drafter) slots() {
	products := d.reaction.Products
	d.slotOf = make([]int, len(products))
	var signatures []uint16
	for i := range products {
		d.slotOf[i] = -1
		if len(products[i].Daughters) > 0 || d.seen[i] == Missing {
			continue
		}
		d.slotOf[i] = len(d.out.slots)
		k := kind{mass: products[i].Particle.Mass, fromEvent: d.massFromEvent[i], merged: d.merged[i] > 0}
		if k.fromEvent {
			k.mass = 0
		}
		s := slot{product: i, kind: d.kind(k), full: d.seen[i] == Full, after: -1, minEnergy: d.merged[i]}
		d.out.slots = append(d.out.slots, s)
		if s.full && !slices.Contains(d.out.kinds, s.kind) {
			d.out.kinds = append(d.out.kinds, s.kind)
		}
		signatures = append(signatures, d.signature(&products[i].Particle, &s))
	}
	d.out.steps = make([][]check, len(d.out.slots))
	d.out.variants = [][]uint16{signatures}
}

// signature returns the number of what an object must be to stand for a particle.
func (d *drafter) signature(p *particle.Particle, s *slot) uint16 {
	class := classOf(p)
	if s.minEnergy > 0 {
		class = event.Photon
	}
	return intern(&d.program.signatures, signature{
		class: uint8(class), species: speciesOf(p), full: s.full, kind: s.kind, minEnergy: s.minEnergy,
	})
}

// classOf is the class of object that a particle leaves.
func classOf(p *particle.Particle) event.Class {
	switch {
	case p.Number == numberPhoton:
		return event.Photon
	case p.ChargeThirds() > 0:
		return event.Positive
	case p.ChargeThirds() < 0:
		return event.Negative
	}
	return event.Neutral
}

// Monte Carlo particle numbers of the Review of Particle Physics.
const (
	numberPhoton   = 22
	numberElectron = 11
	numberMuon     = 13
	numberPion     = 211
	numberKaon     = 321
	numberProton   = 2212
	numberDeuteron = 1000010020
)

// speciesOf is the species bit of a particle and its antiparticle, 0 for one without.
func speciesOf(p *particle.Particle) uint8 {
	switch max(p.Number, -p.Number) {
	case numberElectron:
		return event.SpeciesElectron
	case numberMuon:
		return event.SpeciesMuon
	case numberPion:
		return event.SpeciesPion
	case numberKaon:
		return event.SpeciesKaon
	case numberProton:
		return event.SpeciesProton
	case numberDeuteron:
		return event.SpeciesDeuteron
	}
	return 0
}

// isNeutrino reports whether a particle is a neutrino.
func isNeutrino(p *particle.Particle) bool {
	n := p.Numbers
	return p.ChargeThirds() == 0 && n.BaryonThirds == 0 && (n.Electron != 0 || n.Muon != 0 || n.Tau != 0)
}

// conjugate adds the charge conjugate as a second variant, unless its products are
// the same set, when its assignments are those of the hypothesis itself.
func (d *drafter) conjugate() {
	if !d.from.AlsoConjugate {
		return
	}
	at := d.at + ".also_conjugate"
	left := make([]int64, 0, len(d.reaction.Initial))
	anti := make([]int64, 0, len(d.reaction.Initial))
	for i := range d.reaction.Initial {
		left = append(left, d.reaction.Initial[i].Number)
		anti = append(anti, d.reaction.Initial[i].AntiNumber)
	}
	slices.Sort(left)
	slices.Sort(anti)
	if len(left) == 2 && !slices.Equal(left, anti) {
		d.fault(at, "true", "false, or an initial state that is its own charge conjugate")
		return
	}
	if d.selfConjugate() {
		return
	}
	signatures := make([]uint16, len(d.out.slots))
	for k := range d.out.slots {
		s := &d.out.slots[k]
		p, err := d.table.Conjugate(d.reaction.Products[s.product].Particle)
		if err != nil {
			d.adopt(at, err)
			return
		}
		signatures[k] = d.signature(&p, s)
	}
	if !slices.Equal(signatures, d.out.variants[0]) {
		d.out.variants = append(d.out.variants, signatures)
	}
}

// selfConjugate reports whether the products and their charge conjugates are the same
// tree up to order.
func (d *drafter) selfConjugate() bool {
	return d.shape(d.reaction.Top, false) == d.shape(d.reaction.Top, true)
}

// shape renders products as a text that does not depend on their order.
func (d *drafter) shape(products []int, conjugate bool) string {
	parts := make([]string, 0, len(products))
	for _, i := range products {
		p := &d.reaction.Products[i]
		number := p.Particle.Number
		if conjugate {
			number = p.Particle.AntiNumber
		}
		part := strconv.FormatInt(number, 10) + "/" + strconv.Itoa(int(d.seen[i]))
		if d.massFromEvent[i] {
			part += "m"
		}
		part += fault.Text(d.merged[i])
		parts = append(parts, part+d.shape(p.Daughters, conjugate))
	}
	slices.Sort(parts)
	return "(" + strings.Join(parts, " ") + ")"
}

// extraObjects compiles the rule for extra objects.
func (d *drafter) extraObjects() {
	x := d.from.ExtraObjects
	d.out.extra = NoExtraObjects
	if x == nil {
		return
	}
	at := d.at + ".extra_objects"
	switch x.Rule {
	case NoExtraObjects, AnyExtraObjects:
	case SoftPhotons:
		if x.MaxCount < 1 {
			d.fault(at+".soft_photons.max_count", strconv.FormatInt(x.MaxCount, 10), ">= 1")
		}
		if !(x.MaxEnergyGeV > 0) || !finite(x.MaxEnergyGeV) {
			d.fault(at+".soft_photons.max_energy_gev", fault.Text(x.MaxEnergyGeV), "> 0")
		}
	default:
		d.fault(at, strconv.Itoa(int(x.Rule)), "none, soft_photons or any")
	}
	d.out.extra, d.out.extraCount, d.out.extraEnergyGeV = x.Rule, int(x.MaxCount), x.MaxEnergyGeV
}

// finite reports whether x is neither NaN nor infinite.
func finite(x float64) bool { return x-x == 0 }
