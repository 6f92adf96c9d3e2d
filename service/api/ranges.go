package api

import (
	"math"
	"strconv"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/momentum/breakup"
	"example.org/kinegate/kinematics/particle"
	"example.org/kinegate/kinematics/reaction"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// everythingElse is the reference of X in an inclusive reaction.
const everythingElse = "X"

// rangeBodies are the bodies that the ranges of a channel are for: the products of the
// right side and, in an inclusive reaction, X.
//
// X stands there as two bodies, its lightest set of particles taken together and a
// massless one. Their mass then starts at that of the lightest X and goes on from there,
// as X may be anything heavier, and all ranges are exactly those beside such an X.
type rangeBodies struct {
	names   []string
	sets    []reaction.Subset // of the masses, one for each name
	numbers []int             // of the products
	masses  []float64
	kind    kinegatev1.LimitMasses
}

// rangeBodiesOf returns the bodies of a channel that moves and is open; else nil.
func rangeBodiesOf(r *reaction.Reaction, c *reaction.Channel) *rangeBodies {
	kind := limitMasses(c)
	if !c.Moving || kind == kinegatev1.LimitMasses_LIMIT_MASSES_UNSPECIFIED {
		return nil
	}
	b := &rangeBodies{kind: kind, masses: topMasses(r, kind), numbers: r.Top}
	b.names, b.sets = make([]string, 0, len(r.Top)+1), make([]reaction.Subset, 0, len(r.Top)+1)
	for i, number := range r.Top {
		b.names = append(b.names, r.Products[number].Name)
		b.sets = append(b.sets, 1<<i)
	}
	if r.Inclusive {
		n := len(b.masses)
		mass, _ := r.Remainder.Mass() // known, since the state is
		b.names = append(b.names, everythingElse)
		b.masses = append(b.masses, mass, 0)
		b.sets = append(b.sets, reaction.SubsetOf(n, n+1))
	}
	return b
}

// limitMasses chooses the masses that the state of a channel leaves energy for.
func limitMasses(c *reaction.Channel) kinegatev1.LimitMasses {
	switch {
	case (c.State == reaction.Open || c.State == reaction.AtThreshold) && c.Nominal.Excess >= 0:
		return kinegatev1.LimitMasses_LIMIT_MASSES_NOMINAL
	case (c.State == reaction.OpenThroughWidth || c.State == reaction.AtThreshold) && c.Lightest.Excess >= 0:
		return kinegatev1.LimitMasses_LIMIT_MASSES_LIGHTEST
	}
	return kinegatev1.LimitMasses_LIMIT_MASSES_UNSPECIFIED
}

// topMasses are the masses of the products of the right side.
func topMasses(r *reaction.Reaction, kind kinegatev1.LimitMasses) []float64 {
	masses := make([]float64, len(r.Top))
	for i, number := range r.Top {
		masses[i] = r.Products[number].Particle.Mass
		if kind == kinegatev1.LimitMasses_LIMIT_MASSES_LIGHTEST {
			masses[i] = r.LightestMass(number)
		}
	}
	return masses
}

// named lists the names of a set of bodies; it is false for a set that splits X.
func (b *rangeBodies) named(set reaction.Subset) ([]string, bool) {
	var names []string
	left := set
	for i, part := range b.sets {
		if set&part == part {
			names = append(names, b.names[i])
			left &^= part
		}
	}
	return names, left == 0
}

// transferForm is one squared momentum transfer in the core's form.
type transferForm struct {
	initial reaction.Initial
	// places are those in the right side as a set; that after the last is X.
	places uint64
}

// maxTransfers bounds the squared momentum transfers of one request.
const maxTransfers = 500

// transferForms converts the squared momentum transfers asked for; none means those of
// every single product.
func transferForms(
	table *particle.Table, r *reaction.Reaction, asked []*kinegatev1.MomentumTransferPair,
) ([]transferForm, error) {
	if len(asked) > maxTransfers {
		return nil, fault.New(fault.Invalid, "momentum_transfers", strconv.Itoa(len(asked)), "at most "+strconv.Itoa(maxTransfers))
	}
	bodies := len(r.Top)
	if r.Inclusive {
		bodies++
	}
	if len(asked) == 0 {
		forms := make([]transferForm, 0, 2*bodies)
		for _, initial := range [...]reaction.Initial{reaction.FromBeam, reaction.FromTarget} {
			for i := range bodies {
				forms = append(forms, transferForm{initial, 1 << i})
			}
		}
		return forms, nil
	}
	forms := make([]transferForm, 0, len(asked))
	f := &former{}
	for i, pair := range asked {
		at := index("momentum_transfers", i)
		form := transferForm{initial: reaction.FromBeam}
		switch pair.GetInitial() {
		case kinegatev1.InitialParticle_INITIAL_PARTICLE_BEAM:
		case kinegatev1.InitialParticle_INITIAL_PARTICLE_TARGET:
			form.initial = reaction.FromTarget
		case kinegatev1.InitialParticle_INITIAL_PARTICLE_UNSPECIFIED:
			fallthrough
		default:
			f.need(at+".initial", strconv.Itoa(int(pair.GetInitial())), "INITIAL_PARTICLE_BEAM or INITIAL_PARTICLE_TARGET")
		}
		places := f.places(at+".products", table, r, pair.GetProducts())
		for _, place := range places {
			form.places |= 1 << place
		}
		if n := len(places); n == 0 || n == bodies {
			f.need(at+".products", strconv.Itoa(n)+" products", "some of the products, not all")
		}
		forms = append(forms, form)
	}
	return forms, f.faults.Err()
}

// places finds products of the right side by their references.
func (f *former) places(at string, table *particle.Table, r *reaction.Reaction, references []string) []int {
	var places []int
	seen := map[int]bool{}
	for i, reference := range references {
		place, err := placeOf(table, r, reference)
		switch {
		case err != nil:
			f.faults = append(f.faults, fault.New(fault.Invalid, index(at, i), reference, "").Because(sentenceOf(err)))
		case seen[place]:
			f.need(index(at, i), reference, "each product once")
		default:
			seen[place] = true
			places = append(places, place)
		}
	}
	return places
}

// sentenceOf is the text of a fault of the core for a caller.
func sentenceOf(err error) string { return Explain(err).Message }

// placeOf is the place in the right side of the product that a reference means; that after
// the last is X.
func placeOf(table *particle.Table, r *reaction.Reaction, reference string) (int, error) {
	if reference == everythingElse && r.Inclusive {
		return len(r.Top), nil
	}
	number, err := r.Product(table, reference)
	if err != nil {
		return 0, err
	}
	for i, top := range r.Top {
		if top == number {
			return i, nil
		}
	}
	return 0, fault.New(fault.Invalid, "product", reference, "a product of the right side").Because("it comes from a decay")
}

// limitsOf adds where the products can go, for two to eight bodies.
func limitsOf(m *kinegatev1.DescribeReactionResponse, r *reaction.Reaction, c *reaction.Channel, transfers []transferForm, volume bool) {
	b := rangeBodiesOf(r, c)
	if b == nil || len(b.masses) < 2 || len(r.Top) == 0 {
		return
	}
	if len(b.masses) > reaction.MaxRangeBodies {
		m.Remarks = append(m.Remarks, "no limits of the products: they are given for at most eight bodies, X counting as two")
		return
	}
	final, err := c.Collision.FinalState(b.masses...)
	if err != nil {
		m.Remarks = append(m.Remarks, "no limits of the products: "+Explain(err).Message)
		return
	}
	m.LimitMasses = b.kind
	limits := final.Limits()
	for i, number := range b.numbers {
		m.Products = append(m.Products, productLimits(b.names[i], number, b.masses[i], &limits[i]))
	}
	if len(limits) == 2 {
		m.CentreOfMass.FinalMomentumGev = &limits[0].RestMomentum.Max
	}
	m.SubsetMasses = subsetMasses(&final, b)
	m.MomentumTransfers = transferLimits(&final, b, transfers)
	if volume && !r.Inclusive {
		m.PhaseSpaceVolume, m.Remarks = volumeMessage(&final, len(b.masses), m.GetRemarks())
	}
	if b.kind == kinegatev1.LimitMasses_LIMIT_MASSES_LIGHTEST {
		m.Remarks = append(m.Remarks, "the limits are for the least masses that the stated decays allow")
	}
}

// productLimitMessages are the messages of one product, made in one piece.
type productLimitMessages struct {
	limits                                     kinegatev1.ProductLimits
	restEnergy, restMomentum, energy, momentum kinegatev1.EnergyRange
	angle                                      kinegatev1.AngleRange
}

// productLimits converts where one product can go.
func productLimits(name string, number int, mass float64, l *breakup.Limits) *kinegatev1.ProductLimits {
	m := &productLimitMessages{}
	into := func(e *kinegatev1.EnergyRange, r breakup.Range) *kinegatev1.EnergyRange {
		e.MinGev, e.MaxGev = r.Min, r.Max
		return e
	}
	m.angle.MinRad, m.angle.MaxRad = l.Angle.Min, l.Angle.Max
	m.limits.Product, m.limits.Number, m.limits.MassGev = name, int32Of(number), mass
	m.limits.CentreOfMassEnergy, m.limits.CentreOfMassMomentum = into(&m.restEnergy, l.RestEnergy), into(&m.restMomentum, l.RestMomentum)
	m.limits.LaboratoryEnergy, m.limits.LaboratoryMomentum = into(&m.energy, l.Energy), into(&m.momentum, l.Momentum)
	m.limits.LaboratoryAngle = &m.angle
	return &m.limits
}

// subsetMasses are the ranges of the mass of every proper set of two or more bodies, and
// that of X.
func subsetMasses(final *reaction.FinalState, b *rangeBodies) []*kinegatev1.SubsetMassLimits {
	var list []*kinegatev1.SubsetMassLimits
	for _, set := range final.Subsets() {
		names, whole := b.named(set)
		if !whole {
			continue
		}
		mass, err := final.SubsetMass(set)
		if err != nil {
			continue // Subsets lists only those that have a mass
		}
		list = append(list, &kinegatev1.SubsetMassLimits{Products: names, Mass: energyRange(mass)})
	}
	return list
}

// transferLimits are the ends of the squared momentum transfers asked for. The messages
// are made in one piece, as they are many. Since momentum is conserved, t(beam, some) is
// t(target, all others), and is then taken over.
func transferLimits(final *reaction.FinalState, b *rangeBodies, forms []transferForm) []*kinegatev1.MomentumTransferLimits {
	messages := make([]kinegatev1.MomentumTransferLimits, len(forms))
	list := make([]*kinegatev1.MomentumTransferLimits, len(forms))
	all := reaction.Subset(1<<len(b.masses) - 1)
	sets := make([]reaction.Subset, len(forms))
forms:
	for i, form := range forms {
		m := &messages[i]
		list[i] = m
		m.Initial = kinegatev1.InitialParticle(form.initial) + kinegatev1.InitialParticle_INITIAL_PARTICLE_BEAM
		var set reaction.Subset
		for place := range b.names {
			if form.places>>place&1 == 0 {
				continue
			}
			set |= b.sets[place]
			if m.Products == nil {
				m.Products = b.names[place : place+1 : place+1] // shared where it stays the only one
			} else {
				m.Products = append(m.Products, b.names[place])
			}
		}
		sets[i] = set
		for k := range i {
			if forms[k].initial != form.initial && sets[k] == all&^set {
				m.TForwardGev2, m.TBackwardGev2 = messages[k].GetTForwardGev2(), messages[k].GetTBackwardGev2()
				continue forms
			}
		}
		// The forms name some of the bodies and not all: these always have ends of t.
		if t, err := final.Transfer(form.initial, set); err == nil {
			m.TForwardGev2, m.TBackwardGev2 = t.Forward, t.Backward
		}
	}
	return list
}

// volumeMessage gives the volume of phase space, or a remark where there is none.
func volumeMessage(final *reaction.FinalState, bodies int, remarks []string) (*kinegatev1.PhaseSpaceVolume, []string) {
	volume, err := final.PhaseSpaceVolume()
	switch {
	case err != nil:
		return nil, append(remarks, "no volume of phase space: "+Explain(err).Message)
	case math.IsInf(volume, 0):
		return nil, append(remarks, "no volume of phase space: it is beyond the largest number")
	}
	return &kinegatev1.PhaseSpaceVolume{Volume: volume, GevPower: int32Of(2*bodies - 4)}, remarks //nolint:mnd // see its definition
}

func energyRange(r breakup.Range) *kinegatev1.EnergyRange {
	return &kinegatev1.EnergyRange{MinGev: r.Min, MaxGev: r.Max}
}

func angleRange(r breakup.Range) *kinegatev1.AngleRange {
	return &kinegatev1.AngleRange{MinRad: r.Min, MaxRad: r.Max}
}
