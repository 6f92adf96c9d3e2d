package generation

import (
	"errors"
	"math"
	"slices"
	"strings"
	"testing"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/particle"
	"example.org/kinegate/kinematics/reaction"
)

func parse(t testing.TB, text string) *reaction.Reaction {
	t.Helper()
	table, err := particle.New()
	if err != nil {
		t.Fatal(err)
	}
	r, err := reaction.Parse(table, text)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

func productsOf(t testing.TB, text string, overrides ...Override) []Product {
	t.Helper()
	products, _, err := ProductsOf(parse(t, text), 0, overrides...)
	if err != nil {
		t.Fatal(err)
	}
	return products
}

func TestProductsOf(t *testing.T) {
	p := productsOf(t, "gamma p -> p omega, omega -> pi0 gamma, pi0 -> gamma gamma")
	omega := p[1]
	if omega.Number != 223 || omega.WidthGeV == 0 || omega.Shape.L != 1 || omega.Decay.Branching != 0.0835 {
		t.Errorf("omega is %+v", omega)
	}
	if pi0 := omega.Decay.Products[0]; pi0.WidthGeV != 0 || pi0.MeanLifeS == 0 || pi0.Decay.Branching != 0.98823 {
		t.Errorf("pi0 is %+v", pi0)
	}
	if b := branching(p); math.Abs(b-0.0835*0.98823) > 1e-16 {
		t.Errorf("branching %v", b)
	}
	for text, l := range map[string]int{
		"gamma p -> p rho0, rho0 -> pi+ pi-": 1, "gamma p -> p phi, phi -> K+ K-": 1,
		"gamma p -> pi- Delta(1232)++, Delta(1232)++ -> p pi+": 1,
	} {
		list := productsOf(t, text)
		if got := list[1].Shape.L; got != l {
			t.Errorf("%s: L = %d, want %d", text, got, l)
		}
	}
	muon := productsOf(t, "pi+ -> mu+ nu_mu, mu+ -> e+ nu_e nu_mubar")
	if _, ok := muon[0].Decay.Density.(LeptonDecay); !ok {
		t.Errorf("a muon decays by %T", muon[0].Decay.Density)
	}
	lambda := productsOf(t, "gamma p -> K+ Lambda, Lambda -> p pi-", Override{Product: 1, Branching: 0.5})
	if lambda[1].Decay.Branching != 0.5 || lambda[1].MeanLifeS == 0 {
		t.Errorf("Lambda is %+v", lambda[1])
	}
}

// A decay that the table lacks is told, once, and not where a fraction is given.
func TestUnknownFractions(t *testing.T) {
	for text, want := range map[string][]string{
		"gamma p -> p omega, omega -> pi0 gamma, pi0 -> gamma gamma": nil,
		"gamma p -> p rho0, rho0 -> pi+ pi-":                         nil, // 1 as it stands in the table
		"gamma p -> p rho0, rho0 -> e+ e-":                           {"rho0 -> e+ e-"},
		"gamma p -> p rho0 rho0, rho0 -> e+ e-":                      {"rho0 -> e+ e-"},
		"gamma p -> Delta(1232)+ pi0, Delta(1232)+ -> p pi0, pi0 -> gamma gamma": {
			"Delta+ -> p pi0",
		},
	} {
		products, remarks, err := ProductsOf(parse(t, text), 0)
		if err != nil {
			t.Fatal(err)
		}
		var unknown []string
		for _, r := range remarks {
			if decay, found := strings.CutSuffix(r, ": its branching fraction is not known and counts as 1"); found {
				unknown = append(unknown, decay)
			}
		}
		if !slices.Equal(unknown, want) {
			t.Errorf("%s: not known are %q, want %q, of %q", text, unknown, want, remarks)
		}
		if b := branching(products); len(want) > 0 && math.Abs(b-math.Pow(0.98823, float64(strings.Count(text, "pi0 -> gamma")*2))) > 1e-15 {
			t.Errorf("%s: branching %v, with more than the known fractions", text, b)
		}
	}
	_, remarks, err := ProductsOf(parse(t, "gamma p -> p rho0, rho0 -> e+ e-"), 0, Override{Product: 1, Branching: 4.7e-5})
	if err != nil || len(remarks) > 0 {
		t.Errorf("with a fraction given: %q, %v", remarks, err)
	}
}

func TestProductsOfFaults(t *testing.T) {
	if _, _, err := ProductsOf(parse(t, "gamma p -> K+ X"), 0); !errors.Is(err, fault.Unsupported) {
		t.Errorf("an inclusive reaction gives %v", err)
	}
	_, _, err := ProductsOf(parse(t, "gamma p -> p eta"), 0, Override{Product: 1})
	if !errors.Is(err, fault.NotFound) {
		t.Errorf("an override of a product that does not decay gives %v", err)
	}
}

// No particle decays more often than always, and every number is known.
func TestBranchingTable(t *testing.T) {
	table, err := particle.New()
	if err != nil {
		t.Fatal(err)
	}
	rows, err := BranchingFractions()
	if err != nil {
		t.Fatal(err)
	}
	sums := map[int64]float64{}
	for _, row := range rows {
		sums[row.Parent] += row.Fraction
		if row.Fraction <= 0 || row.Source == "" {
			t.Errorf("row %+v", row)
		}
		mass, charge := 0.0, 0
		for _, n := range append([]int64{row.Parent}, row.Daughters...) {
			p, err := table.Numbered(n)
			if err != nil {
				t.Fatal(err)
			}
			sign := -1
			if mass == 0 {
				mass, sign = p.Mass, 1
			} else {
				mass -= p.Mass
			}
			charge += sign * p.ChargeThirds()
		}
		if mass <= 0 || charge != 0 {
			t.Errorf("row %+v breaks a law: energy left %v, charge %d/3", row, mass, charge)
		}
	}
	for parent, sum := range sums {
		if sum > 1.0001 {
			t.Errorf("the fractions of %d add up to %v", parent, sum)
		}
	}
}
