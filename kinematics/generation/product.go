package generation

import (
	"math"
	"strconv"
	"strings"

	"example.org/kinegate/kinematics/fault"
)

// Product is a particle that a reaction or a decay makes.
type Product struct {
	// Number is the Monte Carlo particle number.
	Number int64
	// MassGeV is the nominal mass.
	MassGeV float64
	// WidthGeV is the total width; 0 means sharp: always the nominal mass. A
	// particle without a stated decay is sharp too.
	WidthGeV float64
	// Shape is the line shape of a broad particle. Its L and radius shape the masses of
	// two daughters with a broad one among them for a sharp particle too.
	Shape LineShape
	// MeanLifeS is the mean life at rest in seconds; 0 means that it decays where
	// it came into being. It counts only with a stated decay.
	MeanLifeS float64
	// Decay is how it decays; nil for a particle that reaches the detector.
	Decay *Decay
}

// Decay is the decay of a Product.
type Decay struct {
	// Products are the daughters, 2 to MaxBodies.
	Products []Product
	// Density shapes the decay; nil means phase space.
	Density Density
	// CosTheta, for two daughters only, is the density of cos theta between the
	// first daughter, in the decaying particle's rest frame, and the particle's
	// own direction in its parent's rest frame, or in the centre of mass for a
	// product of the reaction (the helicity frame); nil means isotropic.
	CosTheta *Curve
	// Branching is the branching fraction, which weights carry; 0 means that it is not
	// known, and counts as 1.
	Branching float64
}

// lightest is the lowest mass: for a broad particle that of the lightest stated
// final state, within the limits of its line shape.
func (p *Product) lightest() float64 {
	if !p.broad() {
		return p.MassGeV
	}
	sum := 0.0
	for i := range p.Decay.Products {
		sum += p.Decay.Products[i].lightest()
	}
	low, _ := p.Shape.limits(p.MassGeV, p.WidthGeV, sum)
	return low
}

// broad reports whether the mass is drawn.
func (p *Product) broad() bool { return p.WidthGeV > 0 && p.Decay != nil }

// limited says of which products the given limit of the mass, not the lightest final
// state, is the lowest mass; for a channel that is closed.
func limited(products []Product) string {
	var text strings.Builder
	for i := range products {
		p := &products[i]
		if !p.broad() {
			continue
		}
		free := *p
		free.Shape.LowGeV = 0
		if low := p.lightest(); low > free.lightest() {
			text.WriteString("; min_gev = " + sevenDigits(low) + " of the line shape of particle " + strconv.FormatInt(p.Number, 10) +
				" counts in it, without it that particle would start at " + sevenDigits(free.lightest()) + " GeV")
		}
		text.WriteString(limited(p.Decay.Products))
	}
	return text.String()
}

// maxDepth bounds the nesting of decays.
const maxDepth = 16

// productFaults appends what is wrong with the products of a reaction or decay.
func productFaults(list fault.List, field string, products []Product, depth int) fault.List {
	if depth > maxDepth {
		return append(list, fault.New(fault.Invalid, field, "", "decays nested at most "+strconv.Itoa(maxDepth)+" deep"))
	}
	if len(products) < 2 || len(products) > MaxBodies {
		list = append(list, fault.New(fault.Invalid, field, strconv.Itoa(len(products))+" products", "2 to "+strconv.Itoa(MaxBodies)+" products"))
	}
	for i := range products {
		list = products[i].faults(list, field+"["+strconv.Itoa(i)+"]", depth)
	}
	return list
}

func (p *Product) faults(list fault.List, field string, depth int) fault.List {
	known := len(list)
	for _, v := range []struct {
		name  string
		value float64
	}{
		{"mass_gev", p.MassGeV}, {"width_gev", p.WidthGeV}, {"mean_life_s", p.MeanLifeS},
		{"shape.min_gev", p.Shape.LowGeV}, {"shape.max_gev", p.Shape.HighGeV}, {"shape.radius_per_gev", p.Shape.RadiusPerGeV},
	} {
		if !(v.value >= 0 && v.value <= math.MaxFloat64) {
			list = append(list, fault.Number(field+"."+v.name, v.value, ">= 0 and finite"))
		}
	}
	if p.Shape.L < 0 || p.Shape.L > 2 {
		list = append(list, fault.New(fault.Invalid, field+".shape.l", strconv.Itoa(p.Shape.L), "0 to 2"))
	}
	if p.Decay == nil {
		return list
	}
	d := p.Decay
	if !(d.Branching >= 0 && d.Branching <= 1) {
		list = append(list, fault.Number(field+".decay.branching", d.Branching, "0 to 1"))
	}
	list = productFaults(list, field+".decay.products", d.Products, depth+1)
	if d.Density != nil {
		list = d.Density.faults(list, field+".decay.density", d.Products)
	}
	if d.CosTheta != nil {
		if len(d.Products) != 2 {
			list = append(list, fault.New(fault.Invalid, field+".decay.cos_theta", strconv.Itoa(len(d.Products))+" daughters", "2 daughters"))
		}
		list = d.CosTheta.faults(list, field+".decay.cos_theta", -1, 1)
	}
	if len(list) > known {
		return list // masses mean nothing yet
	}
	return p.massFaults(list, field)
}

// massFaults checks that the particle can decay as stated.
func (p *Product) massFaults(list fault.List, field string) fault.List {
	sum := 0.0
	for i := range p.Decay.Products {
		sum += p.Decay.Products[i].lightest()
	}
	if !p.broad() {
		if !(p.MassGeV > sum) {
			f := fault.New(fault.BelowThreshold, field+".decay", fault.Text(p.MassGeV), "a mass > "+fault.Text(sum)+" GeV, the sum of the lightest daughters")
			list = append(list, f)
		}
		return list
	}
	if low, high := p.Shape.limits(p.MassGeV, p.WidthGeV, sum); !(high > low) {
		list = append(list, fault.New(fault.Infeasible, field+".shape.max_gev", fault.Text(high), "> "+fault.Text(low)+", the lowest mass"))
	}
	return list
}

// branching is the product of the branching fractions of a chain.
func branching(products []Product) float64 {
	b := 1.0
	for i := range products {
		if d := products[i].Decay; d != nil {
			if d.Branching > 0 {
				b *= d.Branching
			}
			b *= branching(d.Products)
		}
	}
	return b
}
