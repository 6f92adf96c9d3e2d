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
	for i, number := range r.Top {
		b.names = append(b.names, r.Products[number].Name)
		b.sets = append(b.sets, reaction.SubsetOf(i))
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
	places  []int // in the products of the right side; that after the last is X
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
	var forms []transferForm
	if len(asked) == 0 {
		for _, initial := range []reaction.Initial{reaction.FromBeam, reaction.FromTarget} {
			for i := range bodies {
				forms = append(forms, transferForm{initial, []int{i}})
			}
		}
		return forms, nil
	}
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
		form.places = f.places(at+".products", table, r, pair.GetProducts())
		if n := len(form.places); n == 0 || n == bodies {
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
	for _, t := range transfers {
		m.MomentumTransfers = append(m.MomentumTransfers, transferLimits(&final, b, t))
	}
	if volume && !r.Inclusive {
		m.PhaseSpaceVolume, m.Remarks = volumeMessage(&final, len(b.masses), m.GetRemarks())
	}
	if b.kind == kinegatev1.LimitMasses_LIMIT_MASSES_LIGHTEST {
		m.Remarks = append(m.Remarks, "the limits are for the least masses that the stated decays allow")
	}
}

func productLimits(name string, number int, mass float64, l *breakup.Limits) *kinegatev1.ProductLimits {
	return &kinegatev1.ProductLimits{
		Product: name, Number: int32Of(number), MassGev: mass,
		CentreOfMassEnergy: energyRange(l.RestEnergy), CentreOfMassMomentum: energyRange(l.RestMomentum),
		LaboratoryEnergy: energyRange(l.Energy), LaboratoryMomentum: energyRange(l.Momentum),
		LaboratoryAngle: angleRange(l.Angle),
	}
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

func transferLimits(final *reaction.FinalState, b *rangeBodies, form transferForm) *kinegatev1.MomentumTransferLimits {
	m := &kinegatev1.MomentumTransferLimits{
		Initial: kinegatev1.InitialParticle(form.initial) + kinegatev1.InitialParticle_INITIAL_PARTICLE_BEAM,
	}
	var set reaction.Subset
	for _, place := range form.places {
		set |= b.sets[place]
		m.Products = append(m.Products, b.names[place])
	}
	// The forms name some of the bodies and not all: these always have ends of t.
	if t, err := final.Transfer(form.initial, set); err == nil {
		m.TForwardGev2, m.TBackwardGev2 = t.Forward, t.Backward
	}
	return m
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
