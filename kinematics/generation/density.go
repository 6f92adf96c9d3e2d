package generation

import (
	"math"
	"strconv"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/momentum"
)

// Density shapes a decay: the events follow phase space times the density. Its
// implementations are the densities of this package.
type Density interface {
	// faults appends what does not fit the decay's products.
	faults(list fault.List, field string, products []Product) fault.List
	// shaper prepares evaluation for the decay's products in their order.
	shaper(products []Product) shaper
}

// shaper evaluates a density for a decay at rest of a particle of mass m, as a
// fraction of an upper bound: 0 to 1.
type shaper interface {
	fraction(m float64, daughters []momentum.Four) float64
}

// DalitzTerm is the term Coefficient X^PowerX Y^PowerY.
type DalitzTerm struct {
	Coefficient    float64
	PowerX, PowerY int
}

// DalitzPolynomial is a density of a three-body decay over the Dalitz plot, a
// polynomial in the variables of the listings of eta and kaon decays,
//
//	X = sqrt(3) (T1 - T2)/Q,  Y = 3 T3/Q - 1,  Q = T1 + T2 + T3,
//
// with the daughters' kinetic energies in the decaying particle's rest frame.
// Where the polynomial is negative the density is zero.
type DalitzPolynomial struct {
	Terms []DalitzTerm
}

// maxPower bounds the powers of a DalitzPolynomial.
const maxPower = 8

func (d DalitzPolynomial) faults(list fault.List, field string, products []Product) fault.List {
	list = threeBodies(list, field, products)
	if len(d.Terms) == 0 {
		list = append(list, fault.New(fault.Invalid, field+".terms.length", "0", ">= 1"))
	}
	known := len(list)
	for i, term := range d.Terms {
		at := field + ".terms[" + strconv.Itoa(i) + "]"
		if !(math.Abs(term.Coefficient) <= math.MaxFloat64) {
			list = append(list, fault.Number(at+".coefficient", term.Coefficient, "finite"))
		}
		for _, power := range []int{term.PowerX, term.PowerY} {
			if power < 0 || power > maxPower {
				list = append(list, fault.New(fault.Invalid, at+".power", strconv.Itoa(power), "0 to "+strconv.Itoa(maxPower)))
			}
		}
	}
	if len(list) == known && !(d.largest() > 0) {
		list = append(list, fault.New(fault.Invalid, field+".terms", "", "a polynomial that is positive somewhere"))
	}
	return list
}

func (d DalitzPolynomial) shaper([]Product) shaper {
	return &dalitz{terms: d.Terms, largest: d.largest()}
}

// largest bounds the polynomial from above over the triangle of all shares
// T_i/Q that add up to one, which holds every Dalitz plot. On a grid of step h
// the polynomial between two points cannot rise by more than its slope allows:
// half a step in two directions times the sum of |c| (|px| + |py|) 3^(px+py),
// since |X| and |Y| are below 2; a fine grid and two per cent do for the low
// powers of real decays, and an event that passes is an overflow.
func (d DalitzPolynomial) largest() float64 {
	const grid = 100
	top := 0.0
	for i := range grid + 1 {
		for j := range grid + 1 - i {
			a, b := float64(i)/grid, float64(j)/grid
			top = max(top, polynomial(d.Terms, a, b, float64(grid-i-j)/grid))
		}
	}
	return 1.02 * top
}

// polynomial evaluates the terms for the three shares T_i/Q.
func polynomial(terms []DalitzTerm, a, b, c float64) float64 {
	x := math.Sqrt(3) * (a - b)
	y := float64(3*c) - 1
	sum := 0.0
	var px, py [maxPower + 1]float64
	px[0], py[0] = 1, 1
	for n := range maxPower {
		px[n+1], py[n+1] = px[n]*x, py[n]*y
	}
	for i := range terms {
		term := &terms[i]
		sum += float64(term.Coefficient * px[term.PowerX] * py[term.PowerY])
	}
	return sum
}

type dalitz struct {
	terms   []DalitzTerm
	largest float64
}

func (d *dalitz) fraction(_ float64, p []momentum.Four) float64 {
	t := [3]float64{kinetic(p[0]), kinetic(p[1]), kinetic(p[2])}
	q := t[0] + t[1] + t[2]
	return max(0, polynomial(d.terms, t[0]/q, t[1]/q, t[2]/q)) / d.largest
}

// kinetic is E - m = p^2/(E + m) with m from the four-momentum; at the energies
// of a decay at rest the difference of squares costs nothing that matters to a
// density.
func kinetic(p momentum.Four) float64 {
	square := p.P.Square()
	m := math.Sqrt(max(0, float64(p.E*p.E)-square))
	return square / (p.E + m)
}

// VectorToThree is the density of a vector particle's decay to three
// pseudoscalars, such as omega -> pi+ pi- pi0, summed over the spin:
// |p1 x p2|^2. Source: C. Zemach, Phys. Rev. 133 (1964) B1201 (from memory).
type VectorToThree struct{}

func (VectorToThree) faults(list fault.List, field string, products []Product) fault.List {
	return threeBodies(list, field, products)
}
func (VectorToThree) shaper([]Product) shaper { return crossProduct{} }

type crossProduct struct{}

// fraction divides by a bound: |p1 x p2| is twice the area of the triangle of
// the three momenta, whose perimeter is below the mass m; the largest triangle
// of a perimeter is the equilateral one, with 2 area = m^2/(6 sqrt(3)).
func (crossProduct) fraction(m float64, p []momentum.Four) float64 {
	square := m * m
	return p[0].P.Cross(p[1].P).Square() * 108 / (square * square)
}

// LeptonDecay is the density of the unpolarised decay of a lepton to a lighter
// lepton and two neutrinos, such as mu- -> e- nu_ebar nu_mu:
//
//	(P.p_a)(p_l.p_b)
//
// with the neutrino a that belongs to the light lepton l and the other one b.
// Source: L. Michel, Proc. Phys. Soc. A 63 (1950) 514, for the V-A couplings
// (from memory).
type LeptonDecay struct{}

func (LeptonDecay) faults(list fault.List, field string, products []Product) fault.List {
	list = threeBodies(list, field, products)
	if len(products) == 3 {
		if _, _, ok := leptons(products); !ok {
			list = append(list, fault.New(fault.Invalid, field, "", "an electron or muon, its own neutrino and another neutrino"))
		}
	}
	return list
}

func (LeptonDecay) shaper(products []Product) shaper {
	light, own, _ := leptons(products)
	return leptonDecay{light: light, own: own, other: 3 - light - own, mass: products[light].MassGeV}
}

// leptons finds the charged lepton and its own neutrino, whose particle number
// is one above in size, of the opposite sign.
func leptons(products []Product) (light, own int, ok bool) {
	light, own = -1, -1
	for i := range products {
		if n := products[i].Number; n == 11 || n == -11 || n == 13 || n == -13 {
			light = i
		}
	}
	if light < 0 {
		return 0, 0, false
	}
	n := products[light].Number
	want := -n - 1
	if n < 0 {
		want = -n + 1
	}
	for i := range products {
		if products[i].Number == want {
			own = i
		}
	}
	return light, own, own >= 0
}

type leptonDecay struct {
	light, own, other int
	mass              float64
}

// fraction: with P.p_a = M E_a and p_l.p_b = (M^2 - m^2)/2 - M E_a the density
// is y (c - y) with y = M E_a and 2c = M^2 - m^2, whose largest value is c^2/4.
func (d leptonDecay) fraction(m float64, p []momentum.Four) float64 {
	c := float64((m - d.mass) * (m + d.mass) / 2)
	y := float64(m * p[d.own].E)
	return max(0, y*(c-y)) * 4 / (c * c)
}

// BetaDecay is the density of an allowed beta decay, such as n -> p e- nu_ebar,
// for a constant matrix element: E_e E_nu over the relativistic phase space, so
// that the electron's spectrum is p E (E0 - E)^2 for a heavy recoil. There is no
// Coulomb correction. Source: E. Fermi, Z. Phys. 88 (1934) 161 (from memory).
type BetaDecay struct{}

func (BetaDecay) faults(list fault.List, field string, products []Product) fault.List {
	list = threeBodies(list, field, products)
	if len(products) == 3 {
		if _, _, ok := leptons(products); !ok {
			list = append(list, fault.New(fault.Invalid, field, "", "an electron or muon, its own neutrino and another particle"))
		}
	}
	return list
}

func (BetaDecay) shaper(products []Product) shaper {
	light, own, _ := leptons(products)
	heavy := products[3-light-own].MassGeV
	return betaDecay{light: light, own: own, heavy: heavy}
}

type betaDecay struct {
	light, own int
	heavy      float64
}

// fraction: the two energies add up to at most M - m_heavy, so their product is
// at most a quarter of its square.
func (d betaDecay) fraction(m float64, p []momentum.Four) float64 {
	most := m - d.heavy
	return p[d.light].E * p[d.own].E * 4 / (most * most)
}

// threeBodies appends a fault unless there are three products.
func threeBodies(list fault.List, field string, products []Product) fault.List {
	if len(products) != 3 {
		list = append(list, fault.New(fault.Invalid, field, strconv.Itoa(len(products))+" daughters", "3 daughters"))
	}
	return list
}
