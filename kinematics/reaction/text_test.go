package reaction_test

import (
	"errors"
	"math/rand/v2"
	"reflect"
	"strings"
	"testing"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/particle"
	"example.org/kinegate/kinematics/reaction"
)

// table returns the standard particle table.
func table(tb testing.TB) *particle.Table {
	tb.Helper()
	tab, err := particle.New()
	if err != nil {
		tb.Fatalf("particle.New: %v", err)
	}
	return tab
}

// parse returns a reaction that must be well formed.
func parse(tb testing.TB, tab *particle.Table, text string) *reaction.Reaction {
	tb.Helper()
	r, err := reaction.Parse(tab, text)
	if err != nil {
		tb.Fatalf("Parse(%q): %v", text, err)
	}
	return r
}

func TestParse(t *testing.T) {
	tab := table(t)
	cases := []struct{ text, canonical, products string }{
		{"gamma p -> K+ Lambda, Lambda -> p pi-", "", "K+ Lambda p pi-"},
		{" gamma\tp->K+ Lambda0 ,Lambda->proton pi- ", "gamma p -> K+ Lambda, Lambda -> p pi-", "K+ Lambda p pi-"},
		{"gamma p -> K+ X", "", "K+"},
		{"gamma p -> X K+", "gamma p -> K+ X", "K+"},
		{"gamma p -> X", "", ""},
		{"eta -> pi+ pi- pi0, pi0 -> gamma gamma", "", "pi+ pi- pi0 gamma[0] gamma[1]"},
		{"gamma p -> p pi0 pi0, pi0 -> gamma gamma", "", "p pi0[0] gamma[0] gamma[1] pi0[1] gamma[2] gamma[3]"},
		{
			"gamma p -> K+ Sigma0, pi0 -> gamma gamma, Sigma0 -> Lambda gamma, Lambda -> n pi0",
			"gamma p -> K+ Sigma0, Sigma0 -> Lambda gamma, Lambda -> n pi0, pi0 -> gamma gamma",
			"K+ Sigma0 Lambda n pi0 gamma[0] gamma[1] gamma[2]",
		},
		{"pi- p->n K+ pi- anti-K0", "pi- p -> n K+ pi- K0bar", "n K+ pi- K0bar"},
		{"mu-->e- nu_ebar nu_mu", "mu- -> e- nu_ebar nu_mu", "e- nu_ebar nu_mu"},
		{"gamma p -> f2'(1525) p, f2'(1525) -> K*(892)+ K-", "gamma p -> f2'(1525) p, f2'(1525) -> K*+ K-", "f2'(1525) K*+ K- p"},
		{"gamma gamma -> e+ positron e- e-", "gamma gamma -> e+ e+ e- e-", "e+[0] e+[1] e-[0] e-[1]"},
		{"-> pi0 pi0", "", "pi0[0] pi0[1]"},
		{"gamma p -> p J/psi, J/psi -> e+ e-", "", "p J/psi e+ e-"},
	}
	for _, c := range cases {
		t.Run(c.text, func(t *testing.T) {
			r := parse(t, tab, c.text)
			if c.canonical == "" {
				c.canonical = c.text
			}
			if got, ok := r.Text(); got != c.canonical || !ok {
				t.Errorf("canonical text %q, want %q", got, c.canonical)
			}
			names := make([]string, len(r.Products))
			for i := range r.Products {
				names[i] = r.Products[i].Name
				for _, reference := range []string{r.Products[i].Name, r.Products[i].Path} {
					if n, err := r.Product(tab, reference); n != i || err != nil {
						t.Errorf("%s is product %d, not %d (%v)", reference, i, n, err)
					}
				}
			}
			if got := strings.Join(names, " "); got != c.products {
				t.Errorf("products %s, want %s", got, c.products)
			}
		})
	}
}

// TestParseFaults has a row for each way to be wrong: the column, the field and its
// value, and a part of what is said.
func TestParseFaults(t *testing.T) {
	tab := table(t)
	cases := []struct {
		text         string
		kind         fault.Kind
		column       int
		field, value string
		say          string
	}{
		{"gamma p -> K+ Lamda", fault.Invalid, 15, "particle", "Lamda", "nearest: Lambda"},
		{"gama p -> K+ Lambda", fault.Invalid, 1, "particle", "gama", "nearest: gamma"},
		{"gamma p -> pi p", fault.Invalid, 12, "particle", "pi", "nearest: pi0, pi+, pi-"},
		{"gamma p -> K* Lambda", fault.Invalid, 12, "particle", "K*", "nearest: K*+"},
		{"gamma e -> gamma e-", fault.Invalid, 7, "particle", "e", "nearest: e-, e+"},
		{"gamma p -> K+ lambda", fault.Invalid, 15, "particle", "lambda", "nearest: Lambda"},
		{"gamma p -> K+ Lambda, Lamda -> p pi-", fault.Invalid, 23, "particle", "Lamda", "nearest: Lambda"},
		{"gamma + p -> K+ Lambda", fault.Invalid, 7, "particle", "+", "no plus sign"},
		{"gamma p → K+ Lambda", fault.Invalid, 9, "particle", "→", "the arrow is written ->"},
		{"γ p -> p pi0", fault.Invalid, 1, "particle", "γ", "in ASCII, nearest: gamma"},
		{"gamma p -> p π⁰", fault.Invalid, 14, "particle", "π⁰", "in ASCII, nearest: pi0"},
		{"gamma gamma -> e+ e−", fault.Invalid, 19, "particle", "e−", "in ASCII, nearest: e-"},
		{"gamma p -> p pi0, pi0 => gamma gamma", fault.Invalid, 23, "particle", "=>", "the arrow is written ->"},
		{"gamma p --> K+ Lambda", fault.Invalid, 9, "particle", "-", "the arrow is written ->"},
		{"gamma p -> 2gamma p", fault.Invalid, 12, "particle", "2gamma", "written several times, nearest: gamma"},
		{"gamma p -> p pi0[0]", fault.Invalid, 14, "particle", "pi0[0]", "product references"},
		{"gamma p -> X X", fault.Invalid, 14, "particle", "X", "once"},
		{"X p -> X", fault.Invalid, 1, "particle", "X", "once"},
		{"gamma p p -> p p", fault.Invalid, 9, "particle", "p", "more than two"},
		{"", fault.Invalid, 1, "reaction", "", "no arrow"},
		{"gamma p ->", fault.Invalid, 11, "reaction", "", "no products"},
		{"gamma p -> p, ", fault.Invalid, 14, "decay", "", "nothing after the comma"},
		{"gamma p -> p pi0, pi0", fault.Invalid, 19, "decay", "", "no arrow"},
		{"gamma p -> p pi0 -> gamma gamma", fault.Invalid, 18, "arrow", "", "a decay follows a comma"},
		{"gamma p -> p pi0, pi0 p -> gamma", fault.Invalid, 18, "decay", "2 parents", "one particle on the left"},
		{"gamma p -> p pi0, pi0 -> gamma", fault.Invalid, 31, "decay", "1 products", "two products or more"},
		{"gamma p -> p pi0, eta -> gamma gamma", fault.Invalid, 19, "decay", "eta", "a product: p, pi0"},
		{"gamma p -> p pi0, pi0 -> gamma gamma, pi0 -> e+ e-", fault.Invalid, 39, "decay", "pi0", "stated twice"},
		{"gamma p -> p rho0, rho0 -> pi+ rho-, rho- -> rho0 pi-", fault.Invalid, 46, "decay", "rho0", "among its own decay products"},
		{"gamma p -> K0_L Sigma+, K0_L -> K0 pi0", fault.Forbidden, 25, "energy", "left 0.497611 GeV, right 0.6325878 GeV", "not conserved in K0_L -> K0 pi0"},
		{"gamma p -> K0 Sigma+, K0 -> pi+ pi-", fault.Invalid, 23, "decay", "K0", "allowed: K0_S or K0_L"},
		{"eta -> gamma", fault.Invalid, 5, "decay", "1 products", "two products or more"},
		{"gamma p -> K+ n", fault.Forbidden, 9, "strangeness", "left 0, right +1", "not conserved in gamma p -> K+ n"},
		{"gamma p -> K0 Lambda", fault.Forbidden, 9, "charge", "left +1, right 0", "charge is not conserved in gamma p -> K0 Lambda: left +1, right 0"},
		{"p p -> p pi+", fault.Forbidden, 5, "baryon number", "left +2, right +1", "not conserved"},
		{"gamma p -> p t", fault.Forbidden, 9, "charge", "left +1, right +5/3", "not conserved"},
		{"nu_mu n -> e- p", fault.Forbidden, 9, "electron number", "left 0, right +1", "not conserved"},
		{"gamma p -> D0 p", fault.Forbidden, 9, "charm", "left 0, right +1", "not conserved"},
		{"gamma p -> K0_S p", fault.Forbidden, 9, "strangeness", "left 0, right 0 and +1 or -1 from each of 1 K0_S or K0_L", "not conserved"},
		{"gamma p -> K+ Lambda, Lambda -> p pi0", fault.Forbidden, 23, "charge", "left 0, right +1", "in Lambda -> p pi0"},
		{"gamma p -> K+ Lambda, Lambda -> p K-", fault.Forbidden, 23, "energy", "left 1.115683 GeV, right 1.43194908943 GeV", "heavy"},
		{"mu- -> e- gamma", fault.Forbidden, 5, "electron number", "left 0, right +1", "not conserved"},
		{strings.Repeat("x", reaction.MaxTextBytes+1), fault.Invalid, 0, "reaction", "4097 bytes", "at most 4096 bytes"},
		{"gamma p -> p" + strings.Repeat(" gamma", 64), fault.Invalid, 1, "products", "more than 64", "at most 64"},
	}
	for _, c := range cases {
		t.Run(c.text[:min(len(c.text), 60)], func(t *testing.T) {
			_, err := reaction.Parse(tab, c.text)
			var e *fault.Error
			if !errors.As(err, &e) {
				t.Fatalf("Parse gives %v", err)
			}
			if e.Kind != c.kind || e.Column != c.column || e.Field != c.field || e.Value != c.value || e.Op != "reaction.Parse" {
				t.Errorf("got %v, column %d, %s %q: %v", e.Kind, e.Column, e.Field, e.Value, err)
			}
			if !strings.Contains(e.Error(), c.say) {
				t.Errorf("%q does not say %q", e.Error(), c.say)
			}
		})
	}
}

func TestAllFaultsInOrder(t *testing.T) {
	_, err := reaction.Parse(table(t), "gama q -> K+ Lamda, Lamda -> p pi")
	var list fault.List
	if !errors.As(err, &list) {
		t.Fatalf("Parse gives %v", err)
	}
	columns := make([]int, 0, len(list))
	for _, e := range list {
		columns = append(columns, e.Column)
	}
	if want := []int{1, 6, 14, 21, 32}; !reflect.DeepEqual(columns, want) {
		t.Errorf("columns %v, want %v", columns, want)
	}
	_, err = reaction.Parse(table(t), "gamma p -> K+ pi0 pi+")
	var laws []string
	if errors.As(err, &list) {
		for _, e := range list {
			laws = append(laws, e.Field)
		}
	}
	if got := strings.Join(laws, ", "); got != "charge, baryon number, strangeness" {
		t.Errorf("three broken laws give %v", err)
	}
}

// randomSpec makes a random reaction that obeys the laws: random decay chains of real
// particles hung under products that balance the left side.
func randomSpec(random *rand.Rand) reaction.Spec {
	decays := map[string][][]string{
		"pi0":     {{"gamma", "gamma"}, {"e+", "e-", "gamma"}},
		"eta":     {{"gamma", "gamma"}, {"pi+", "pi-", "pi0"}, {"pi0", "pi0", "pi0"}},
		"omega":   {{"pi0", "gamma"}, {"pi+", "pi-", "pi0"}},
		"Lambda":  {{"p", "pi-"}, {"n", "pi0"}},
		"Sigma0":  {{"Lambda", "gamma"}},
		"phi":     {{"K+", "K-"}, {"K0_S", "K0_L"}},
		"K0_S":    {{"pi+", "pi-"}, {"pi0", "pi0"}},
		"Delta++": {{"p", "pi+"}},
		"eta'":    {{"pi+", "pi-", "eta"}, {"pi0", "pi0", "eta"}, {"omega", "gamma"}},
	}
	heads := [][]string{
		{"K+", "Lambda"}, {"K+", "Sigma0"}, {"p", "eta"}, {"p", "pi0", "pi0"}, {"p", "eta", "eta"}, {"p", "omega", "pi0"},
		{"p", "phi"}, {"Delta++", "pi-"}, {"p", "eta'", "eta'"}, {"K0_S", "Sigma+"}, {"p", "K0_S", "K0_S"},
	}
	var grow func(name string) reaction.ProductSpec
	grow = func(name string) reaction.ProductSpec {
		p := reaction.ProductSpec{Particle: name}
		if ways := decays[name]; len(ways) > 0 && random.IntN(3) > 0 {
			for _, daughter := range ways[random.IntN(len(ways))] {
				p.Daughters = append(p.Daughters, grow(daughter))
			}
		}
		return p
	}
	spec := reaction.Spec{Initial: []string{"gamma", "p"}, Inclusive: random.IntN(5) == 0}
	for _, name := range heads[random.IntN(len(heads))] {
		spec.Products = append(spec.Products, grow(name))
	}
	return spec
}

// TestTextAndSpecRoundTrip holds that New undoes Spec, that Parse undoes Text where the
// text says all, and that Text says so exactly where two alike differ.
func TestTextAndSpecRoundTrip(t *testing.T) {
	tab := table(t)
	random := rand.New(rand.NewPCG(2, 7)) //nolint:gosec // test points
	plain, structured := 0, 0
	for range 2000 {
		spec := randomSpec(random)
		r, err := reaction.New(tab, spec)
		if err != nil {
			t.Fatalf("New(%+v): %v", spec, err)
		}
		if again, err := reaction.New(tab, r.Spec()); err != nil || !reflect.DeepEqual(r, again) {
			t.Fatalf("New(Spec) differs for %s: %v", r, err)
		}
		text, ok := r.Text()
		if !ok {
			structured++
			if !strings.Contains(text, "] -> ") {
				t.Errorf("%q does not tell the alike apart", text)
			}
			continue
		}
		plain++
		if again := parse(t, tab, text); !reflect.DeepEqual(r, again) {
			t.Errorf("Parse(Text) differs for %q", text)
		}
	}
	if plain < 500 || structured < 200 {
		t.Errorf("%d plain and %d structured reactions are too few of one kind", plain, structured)
	}
}

func TestNewFaults(t *testing.T) {
	tab := table(t)
	pair := func(a, b reaction.ProductSpec) []reaction.ProductSpec { return []reaction.ProductSpec{a, b} }
	name := func(s string, d ...reaction.ProductSpec) reaction.ProductSpec {
		return reaction.ProductSpec{Particle: s, Daughters: d}
	}
	gp := []string{"gamma", "p"}
	deep := name("gamma")
	for range 100 {
		deep = name("pi0", deep, name("gamma"))
	}
	cases := []struct {
		name  string
		spec  reaction.Spec
		field string
	}{
		{"unknown left", reaction.Spec{Initial: []string{"gamma", "q"}, Products: pair(name("p"), name("pi0"))}, "initial[1]"},
		{"three on the left", reaction.Spec{Initial: []string{"p", "p", "p"}, Products: pair(name("p"), name("p"))}, "initial"},
		{"no products", reaction.Spec{Initial: gp}, "products"},
		{"unknown daughter", reaction.Spec{Initial: gp, Products: pair(name("p"), name("pi0", name("gamma"), name("gama")))}, "products[1].daughters[1].particle"},
		{"one daughter", reaction.Spec{Initial: gp, Products: pair(name("p"), name("pi0", name("gamma")))}, "products[1].daughters"},
		{"broken law", reaction.Spec{Initial: gp, Products: pair(name("n"), name("pi0"))}, "products charge"},
		{"broken law below", reaction.Spec{Initial: gp, Products: pair(name("p"), name("pi0", name("gamma"), name("pi+")))}, "products[1] charge"},
		{"too deep", reaction.Spec{Initial: gp, Products: pair(name("p"), deep)}, "products"},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			_, err := reaction.New(tab, c.spec)
			var e *fault.Error
			if !errors.As(err, &e) || strings.TrimSpace(e.Field+" "+e.Law) != c.field || e.Op != "reaction.New" {
				t.Errorf("got %v, want a fault at %s", err, c.field)
			}
		})
	}
}

func TestProductReferences(t *testing.T) {
	tab := table(t)
	r := parse(t, tab, "gamma p -> p pi0 eta, eta -> pi0 pi0 pi0, pi0 -> gamma gamma")
	for reference, want := range map[string]int{
		"p": 0, "proton": 0, "pi0[0]": 1, "eta": 4, "pi0[3]": 11, "gamma[7]": 13, "products[2].daughters[1]": 8,
	} {
		if n, err := r.Product(tab, reference); n != want || err != nil {
			t.Errorf("%s is %d, want %d (%v)", reference, n, want, err)
		}
	}
	for reference, say := range map[string]string{
		"pi0": "pi0[0] to pi0[3]", "pi0[4]": "no such product", "K+": "no such product", "Eta": "nearest: eta",
		"": "unknown particle", "pi0[": "malformed", "pi0[-1]": "malformed", "pi0[01]": "malformed", "pi0[1]x": "malformed",
		"products[9]": "no such product", "products[": "no such product", "[0]": "unknown particle",
	} {
		_, err := r.Product(tab, reference)
		if !errors.Is(err, fault.Invalid) || !strings.Contains(err.Error(), say) {
			t.Errorf("%q gives %v, want %q", reference, err, say)
		}
	}
}

// FuzzParse holds that no text makes Parse panic, that an accepted text renders to one
// that means the same, and that columns lie inside the text.
func FuzzParse(f *testing.F) {
	for _, text := range []string{
		"gamma p -> K+ Lambda, Lambda -> p pi-", "gamma p -> K+ X", "eta -> pi+ pi- pi0, pi0 -> gamma gamma",
		"mu-->e- nu_ebar nu_mu", "-> pi0 pi0", "gamma p -> f2'(1525) p", "a -> b, b -> a a", "p p -> p p, p -> p p",
		"K0_L p -> K+ n", "gamma gamma -> J/psi\x00 X,,,->->",
	} {
		f.Add(text)
	}
	tab := table(f)
	f.Fuzz(func(t *testing.T, text string) {
		r, err := reaction.Parse(tab, text)
		if err != nil {
			var e *fault.Error
			if !errors.As(err, &e) || e.Column < 0 || e.Column > len(text)+1 {
				t.Fatalf("Parse(%q) gives %v", text, err)
			}
			return
		}
		canonical, ok := r.Text()
		if !ok {
			t.Fatalf("the text %q needs the structured form", text)
		}
		if again := parse(t, tab, canonical); !reflect.DeepEqual(r, again) {
			t.Fatalf("%q and its canonical text %q differ", text, canonical)
		}
	})
}
