package reaction_test

import (
	"strings"
	"testing"

	"example.org/kinegate/kinematics/particle"
	"example.org/kinegate/kinematics/reaction"
)

// TestConservation holds well-known processes that happen, and some that never do.
func TestConservation(t *testing.T) {
	tab := table(t)
	for _, text := range []string{
		"gamma p -> K0 Sigma+", "gamma p -> K0_S Sigma+", "gamma p -> K0_L Sigma+", "K0_L p -> K+ n", "K0_L p -> Lambda pi+",
		"pi- p -> K+ Sigma-", "K- p -> Omega- K+ K0", "gamma p -> p K0_S K0_L", "gamma p -> p K0_S K0_S",
		"gamma p -> D0bar Lambda_c+", "gamma gamma -> B_s0 B_s0bar", "nu_mu n -> mu- p", "e+ e- -> mu+ mu-", "gamma gamma -> t tbar",
		"gamma d -> p n", "gamma He3 -> p d", "gamma alpha -> n He3", "p t3 -> n He3", "gamma gamma -> W+ W-", "gamma d -> d pi0",
	} {
		if _, err := reaction.Parse(tab, text); err != nil {
			t.Errorf("%s: %v", text, err)
		}
	}
	for text, law := range map[string]string{
		"gamma p -> K+ p pi-": "strangeness", "p p -> p p pi+ pi0": "charge", "gamma p -> K0_S K+ n": "", "gamma n -> p pi0": "charge",
		"gamma p -> K0_S p pi0": "strangeness", "gamma d -> p p": "charge", "gamma He3 -> p p": "baryon number",
		"e+ e- -> mu+ e-": "electron number", "nu_tau n -> mu- p": "muon number", "gamma gamma -> B_s0 B0bar": "strangeness",
		"gamma gamma -> D0 D_s-": "charge",
	} {
		_, err := reaction.Parse(tab, text)
		if law == "" && err != nil {
			t.Errorf("%s: %v", text, err)
		}
		if law != "" && (err == nil || !strings.Contains(err.Error(), law)) {
			t.Errorf("%s gives %v, want a fault of %s", text, err, law)
		}
	}
}

// TestDecayClasses: the class of decays as the Review of Particle Physics lists them,
// from memory.
func TestDecayClasses(t *testing.T) {
	tab := table(t)
	classes := map[reaction.DecayClass][]string{
		reaction.Strong: {
			"rho0 -> pi+ pi-", "Delta++ -> p pi+", "phi -> K+ K-", "phi -> K0_S K0_L", "K*0 -> K+ pi-", "D*+ -> D0 pi+",
			"Lambda(1520) -> K- p", "Sigma_c++ -> Lambda_c+ pi+", "f2(1270) -> pi0 pi0", "eta -> pi+ pi- pi0",
		},
		reaction.Electromagnetic: {
			"pi0 -> gamma gamma", "Sigma0 -> Lambda gamma", "J/psi -> e+ e-", "omega -> pi0 gamma", "pi0 -> e+ e- gamma",
			"B*+ -> B+ gamma", "eta' -> rho0 gamma",
		},
		reaction.Weak: {
			"Lambda -> p pi-", "K0_S -> pi+ pi-", "K0_L -> pi0 pi0 pi0", "K+ -> mu+ nu_mu", "pi+ -> mu+ nu_mu", "mu- -> e- nu_ebar nu_mu",
			"n -> p e- nu_ebar", "tau- -> pi- nu_tau", "B_s0 -> J/psi phi", "Omega- -> Lambda K-", "Z -> mu+ mu-", "t -> W+ s", "D0 -> K- pi+",
			"H -> gamma gamma", "W+ -> e+ nu_e", "K0_L -> mu+ mu-",
		},
	}
	user, err := particle.New(particle.File{Data: []byte("particle_number,aliases,mass_gev\n3,s,0.095\n")})
	if err != nil {
		t.Fatal(err)
	}
	for class, texts := range classes {
		for _, text := range texts {
			use := tab
			if strings.HasPrefix(text, "t ") {
				use = user
			}
			r, err := reaction.Parse(use, text)
			if err != nil {
				t.Errorf("%s: %v", text, err)
				continue
			}
			if len(r.Decays) != 1 || r.Decays[0].Class != class {
				t.Errorf("%s: %+v, want %v", text, r.Decays, class)
			}
		}
	}
}

func TestDecaysOfProducts(t *testing.T) {
	r := parse(t, table(t), "gamma p -> p a0(980)0, a0(980)0 -> K+ K-")
	if len(r.Decays) != 1 || r.Decays[0].Product != 1 || !(r.Decays[0].Released < 0) || r.Decays[0].Text != "a0(980)0 -> K+ K-" {
		t.Errorf("decays %+v", r.Decays)
	}
	if leaves := r.Leaves(); len(leaves) != 3 || leaves[0] != 0 || leaves[1] != 2 || leaves[2] != 3 {
		t.Errorf("leaves %v", leaves)
	}
}

// TestRemainder: what is left for X, and the lightest X.
func TestRemainder(t *testing.T) {
	tab := table(t)
	cases := []struct{ text, lightest string }{
		{"gamma p -> K+ X", "Lambda"},
		{"gamma p -> n X", "pi+"},
		{"gamma p -> p X", "gamma"},
		{"gamma p -> X", "p"},
		{"gamma gamma -> X", "gamma"},
		{"gamma p -> K0_S X", "Sigma+"},
		{"gamma p -> K+ K+ X", "Xi-"},
		{"gamma p -> K+ K+ K0 X", "Omega-"},
		{"gamma p -> D0bar X", "Lambda_c+"},
		{"p p -> pi- pi- pi- X", "pi+ pi+ pi+ p p"},
		{"gamma O16 -> p X", "N15"},
		{"nu_mu p -> X", "nu_mu p"},
		{"nu_mu p -> mu- X", "pi+ p"},
		{"tau- -> pi- X", "nu_tau"},
		{"n -> p X", "e- nu_ebar"},
		{"D0 -> K- X", "e+ nu_e"},
		{"gamma gamma -> t X", ""}, // quarks do not fly free
	}
	for _, c := range cases {
		t.Run(c.text, func(t *testing.T) {
			r := parse(t, tab, c.text)
			names := make([]string, len(r.Remainder.Lightest))
			for i, p := range r.Remainder.Lightest {
				names[i] = p.Name
			}
			if got := strings.Join(names, " "); got != c.lightest {
				t.Errorf("lightest X is %q, want %q (numbers %+v)", got, c.lightest, r.Remainder.Numbers)
			}
		})
	}
	if s := parse(t, tab, "gamma p -> K0_S X").Remainder.Strangenesses; len(s) != 2 || s[0] != -1 || s[1] != 1 {
		t.Errorf("X beside K0_S may have strangeness %v", s)
	}
	if m := parse(t, tab, "D0 -> K- X").Remainder; !m.FlavourOpen || m.Numbers.Charm != 0 || m.Numbers.ChargeThirds != 3 {
		t.Errorf("X of a decay is %+v", m)
	}
}

func TestConjugate(t *testing.T) {
	tab := table(t)
	r := parse(t, tab, "gamma p -> K+ Lambda, Lambda -> p pi-")
	c, err := reaction.Conjugate(tab, r)
	if err != nil || c.String() != "gamma pbar -> K- Lambdabar, Lambdabar -> pbar pi+" {
		t.Fatalf("conjugate %v, %v", c, err)
	}
	again, err := reaction.Conjugate(tab, c)
	if err != nil || again.String() != r.String() {
		t.Errorf("conjugate twice %v, %v", again, err)
	}
}
