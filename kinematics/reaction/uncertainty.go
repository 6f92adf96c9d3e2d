package reaction

import (
	"cmp"
	"math"
	"slices"

	"example.org/kinegate/kinematics/particle"
)

// share is how one measured mass of the table enters a reaction.
type share struct {
	owner         int64
	err           float64
	products      float64 // how often among the products
	first, second float64 // how often on the left, 0 or 1
}

// shares collects the measured masses of a reaction, by the table row that owns them.
func shares(first, second *particle.Particle, products []particle.Particle) []share {
	var list []share
	at := func(p *particle.Particle) *share {
		owner := p.MassOwner()
		for i := range list {
			if list[i].owner == owner {
				list[i].err = max(list[i].err, p.MassError)
				return &list[i]
			}
		}
		list = append(list, share{owner: owner, err: p.MassError})
		return &list[len(list)-1]
	}
	at(first).first++
	at(second).second++
	for i := range products {
		at(&products[i]).products++
	}
	slices.SortFunc(list, func(a, b share) int { return cmp.Compare(a.owner, b.owner) })
	return list
}

// slopes are the derivatives of the first particle's total energy at threshold by the
// mass of the final state, by m1 and by m2.
//
//	F = E1 E2 - p1 p2 cos theta - (M^2 - m1^2 - m2^2)/2 = 0,  W = p1 E2 - p2 E1 cos theta
//	dE1/dM  =  M p1/W
//	dE1/dm1 = -m1 (E2/E1 + 1) p1/W + m1/E1
//	dE1/dm2 = -(m2 + E1 dE2/dm2 - p1 cos theta dp2/dm2) p1/W
//
// with the given quantity of the second particle's motion fixed:
//
//	momentum:        dE2/dm2 = m2/E2,  dp2/dm2 = 0
//	kinetic energy:  dE2/dm2 = 1,      dp2/dm2 = T2/p2
//	total energy:    dE2/dm2 = 0,      dp2/dm2 = -m2/p2
//
// and dE2/dm2 = 1, dp2/dm2 = 0 for a particle at rest.
type slopes struct{ products, first, second float64 }

// slopes returns the derivatives at a threshold that is not open at rest.
func (g *geometry) slopes(t *Threshold) slopes {
	p1, e1 := t.Beam.Momentum, t.Beam.Total
	p2, t2, e2, cos := g.p.Float(), g.t.Float(), g.e.Float(), g.cos.Float()
	de2, dp2 := 1.0, 0.0
	if p2 > 0 {
		switch g.given {
		case ByMomentum:
			de2 = g.m2 / e2
		case ByKinetic:
			dp2 = t2 / p2
		case ByTotal:
			de2, dp2 = 0, -g.m2/p2
		}
	}
	w := (float64(p1*e2) - float64(p2*e1*cos)) / p1
	second := g.m2 + float64(e1*de2) - float64(p1*cos*dp2)
	return slopes{
		products: t.Mass / w,
		first:    g.m1/e1 - float64(g.m1*(e2/e1+1))/w,
		second:   -second / w,
	}
}

// uncertainties fills the errors of a threshold. With x a measured mass,
//
//	dT1/dx = dE1/dx - dm1/dx,  dp1/dx = (E1 dE1/dx - m1 dm1/dx)/p1
func (g *geometry) uncertainties(t *Threshold, list []share) {
	var mass, total, kinetic, momentum float64
	var d slopes
	if t.Reached && !t.OpenAtRest {
		d = g.slopes(t)
	}
	for _, s := range list {
		sum := s.products * s.err
		mass += float64(sum * sum)
		if !t.Reached {
			continue
		}
		de := float64(d.products*s.products) + float64(d.first*s.first) + float64(d.second*s.second)
		if t.OpenAtRest {
			de = s.first
		}
		e := de * s.err
		k := (de - s.first) * s.err
		total += float64(e * e)
		kinetic += float64(k * k)
		if t.Beam.Momentum > 0 {
			p := (float64(t.Beam.Total*de) - float64(g.m1*s.first)) / t.Beam.Momentum * s.err
			momentum += float64(p * p)
		}
	}
	t.MassError = math.Sqrt(mass)
	t.BeamError = BeamPoint{math.Sqrt(total), math.Sqrt(kinetic), math.Sqrt(momentum)}
}
