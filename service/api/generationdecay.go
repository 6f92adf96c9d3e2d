package api

import (
	"math"
	"strconv"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/generation"
	"example.org/kinegate/kinematics/reaction"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// overrides converts the options of a channel's decays.
func (g *generationForm) overrides(path string, r *reaction.Reaction, m *kinegatev1.GenerationChannel) []generation.Override {
	if w := m.GetSharpBelowGev(); !(w >= 0 && w <= math.MaxFloat64) {
		g.faults = append(g.faults, fault.Number(path+".sharp_below_gev", w, ">= 0 and finite"))
	}
	plain, _, err := generation.ProductsOf(r, 0)
	if err != nil {
		return nil // the caller finds the same fault
	}
	places := placesOf(path+".products", plain)
	taken := map[int]bool{}
	var list []generation.Override
	for i, d := range m.GetDecays() {
		here := index(path+".decays", i)
		number, err := r.Product(g.table, d.GetProduct())
		if err != nil {
			g.found(err, at(here+".product"))
			continue
		}
		place := places[number]
		if place.product.Decay == nil || taken[number] {
			g.need(here+".product", d.GetProduct(), "a product that decays, each once")
			continue
		}
		taken[number] = true
		list = append(list, g.override(here, number, place, d))
	}
	return list
}

// place is a product of a channel with the path that the core has for it.
type place struct {
	path    string
	product *generation.Product
}

// placesOf lists products and daughters depth first.
func placesOf(path string, products []generation.Product) []place {
	var list []place
	for i := range products {
		here := index(path, i)
		list = append(list, place{here, &products[i]})
		if d := products[i].Decay; d != nil {
			list = append(list, placesOf(here+".decay.products", d.Products)...)
		}
	}
	return list
}

// override converts the options of one decay.
func (g *generationForm) override(path string, number int, p place, m *kinegatev1.DecayOptions) generation.Override {
	o := generation.Override{Product: number, Branching: m.GetBranchingFraction()}
	g.move(p.path+".decay.branching", path+".branching_fraction")
	if m.BranchingFraction != nil && m.GetBranchingFraction() == 0 {
		g.need(path+".branching_fraction", "0", "> 0 and <= 1")
	}
	if shape := m.GetLineShape(); shape != nil {
		here := path + ".line_shape"
		g.move(p.path+".shape", here)
		g.move(p.path+".shape.l", here+".angular_momentum")
		wave := p.product.Shape.L
		if shape.AngularMomentum != nil {
			wave = int(shape.GetAngularMomentum())
		}
		o.Shape = &generation.LineShape{
			L: wave, RadiusPerGeV: shape.GetRadiusPerGev(), ConstantWidth: shape.GetConstantWidth(),
			LowGeV: shape.GetMinGev(), HighGeV: shape.GetMaxGev(),
		}
		if low, high := shape.GetMinGev(), shape.GetMaxGev(); high > 0 && high <= low {
			g.faults = append(g.faults, fault.Number(here+".max_gev", high, "> min_gev"))
		}
	}
	var name string
	switch density := m.GetDensity().(type) {
	case *kinegatev1.DecayOptions_DalitzPolynomial:
		name = "dalitz_polynomial"
		polynomial := generation.DalitzPolynomial{}
		terms := density.DalitzPolynomial.GetTerms()
		if len(terms) > maxTerms {
			g.need(path+"."+name+".terms", strconv.Itoa(len(terms))+" terms", "at most "+strconv.Itoa(maxTerms))
			terms = terms[:1]
		}
		for _, t := range terms {
			polynomial.Terms = append(polynomial.Terms, generation.DalitzTerm{
				Coefficient: t.GetCoefficient(), PowerX: int(t.GetPowerX()), PowerY: int(t.GetPowerY()),
			})
		}
		o.Density = polynomial
	case *kinegatev1.DecayOptions_VectorToThree:
		name, o.Density = "vector_to_three", generation.VectorToThree{}
	case *kinegatev1.DecayOptions_LeptonDecay:
		name, o.Density = "lepton_decay", generation.LeptonDecay{}
	case *kinegatev1.DecayOptions_BetaDecay:
		name, o.Density = "beta_decay", generation.BetaDecay{}
	}
	if name != "" {
		g.move(p.path+".decay.density", path+"."+name)
	}
	g.move(p.path+".decay.cos_theta", path+".cosine")
	o.CosTheta = g.cosine(p.path+".decay.cos_theta", path+".cosine", m.GetCosine())
	return o
}

// maxTerms bounds the terms of a polynomial: those of all powers to 8 in both variables.
const maxTerms = 81
