package particle_test

import (
	"errors"
	"math"
	"strings"
	"testing"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/particle"
)

// table returns the standard table with files laid over it.
func table(tb testing.TB, files ...particle.File) *particle.Table {
	tb.Helper()
	tab, err := particle.New(files...)
	if err != nil {
		tb.Fatalf("New: %v", err)
	}
	return tab
}

// named returns a particle that the table must have.
func named(tb testing.TB, tab *particle.Table, name string) particle.Particle {
	tb.Helper()
	p, err := tab.Named(name)
	if err != nil {
		tb.Fatalf("Named(%q): %v", name, err)
	}
	return p
}

// TestStandardTable walks all rows: names lead back to their particle, charges add to
// zero with the antiparticle, the order is by number.
func TestStandardTable(t *testing.T) {
	tab := table(t)
	list := tab.List()
	if len(list) != 235 || tab.Len() != 235 {
		t.Fatalf("%d particles, want 135 rows and 100 antiparticles", len(list))
	}
	for i, p := range list {
		for _, name := range append(p.Aliases(), p.Name) {
			if q := named(t, tab, name); q.Number != p.Number {
				t.Errorf("%q leads to %d, not %d", name, q.Number, p.Number)
			}
		}
		anti, err := tab.Conjugate(p)
		if err != nil {
			t.Errorf("%s: %v", p.Name, err)
			continue
		}
		if anti.Numbers != p.Numbers.Neg() || anti.Mass != p.Mass || anti.AntiNumber != p.Number {
			t.Errorf("%s and its antiparticle %s do not mirror each other", p.Name, anti.Name)
		}
		if anti.MassOwner() != p.MassOwner() {
			t.Errorf("%s and its antiparticle do not share their mass", p.Name)
		}
		if i == 0 {
			continue
		}
		before := list[i-1]
		a, b := max(before.Number, -before.Number), max(p.Number, -p.Number)
		if a > b || (a == b && before.Number < p.Number) {
			t.Errorf("%s stands before %s", before.Name, p.Name)
		}
	}
}

// TestLife checks that width and mean life are each other's hbar over it, against
// values of hbar in GeV s of the CODATA 2022 adjustment (6.582 119 569...e-25, exact).
func TestLife(t *testing.T) {
	tab := table(t)
	cases := []struct {
		name              string
		life              particle.Life
		width, err, tau   float64
		stable, sharpAtMe bool
	}{
		{"gamma", particle.LifeStable, 0, 0, math.Inf(1), true, true},
		{"p", particle.LifeStable, 0, 0, math.Inf(1), true, true},
		{"pi0", particle.LifeMeanLife, 7.807971019583708e-09, 7.807971019583708e-09 * 0.13 / 8.43, 8.43e-17, false, true},
		{"rho0", particle.LifeWidth, 0.1474, 0.0008, 4.46548138e-24, false, false},
		{"K0", particle.LifeUnknown, 0, 0, 0, false, true},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			p := named(t, tab, c.name)
			if p.Life != c.life || p.Stable() != c.stable || p.Sharp(particle.SharpWidth) != c.sharpAtMe {
				t.Errorf("life %d, stable %v, sharp %v", p.Life, p.Stable(), p.Sharp(particle.SharpWidth))
			}
			within(t, "width", p.Width, c.width, 1e-12)
			within(t, "width error", p.WidthError, c.err, 1e-12)
			within(t, "mean life", p.MeanLife, c.tau, 1e-8)
		})
	}
	within(t, "hbar", particle.HBar, 6.582119569509066e-25, 1e-15)
}

// within fails unless got is within a relative tolerance of want.
func within(t *testing.T, what string, got, want, tolerance float64) {
	t.Helper()
	if got != want && !(math.Abs(got-want) <= tolerance*math.Abs(want)) {
		t.Errorf("%s = %v, want %v within %v", what, got, want, tolerance)
	}
}

func TestLookup(t *testing.T) {
	tab := table(t)
	for text, number := range map[string]int64{
		"e+": -11, "positron": -11, "22": 22, "-321": -321, "K*0bar": -313, "eta'": 331, "K_S0": 310,
	} {
		if p, err := tab.Lookup(text); err != nil || p.Number != number {
			t.Errorf("Lookup(%q) gives %d, %v", text, p.Number, err)
		}
	}
	if p := named(t, tab, "positron"); p.Name != "e+" || p.Parity != 0 {
		t.Errorf("the antiparticle of e- is called %q", p.Name)
	}
	if pbar := named(t, tab, "pbar"); pbar.Parity != -1 || pbar.TwiceSpin != 1 {
		t.Error("an antifermion has the parity of its fermion")
	}
	for _, text := range []string{"Lamda", "999999", "", "99999999999999999999"} {
		_, err := tab.Lookup(text)
		if !errors.Is(err, fault.NotFound) {
			t.Errorf("Lookup(%q) gives %v", text, err)
		}
	}
}

func TestNearest(t *testing.T) {
	tab := table(t)
	cases := []struct{ text, want string }{
		{"Lamda", "Lambda"},
		{"lambda", "Lambda Lambdabar"},
		{"pi", "pi0 pi+ pi- p phi"},
		{"K*", "K*+ K*- K*0 K+ K-"},
		{"e", "e- e+"},
		{"rho", "rho+ rho- rho0"},
		{"GAMMA", "gamma"},
		{"γ", "gamma"},
		{"π⁺", "pi+ pi0 pi- p"},
		{"KS0x", "K0_S"},
		{"photon", "gamma"},
		{"electron", "e-"},
		{"J/Psi", "J/psi"},
		{"anti-proton", "pbar"},
		{"sigma0", "Sigma0"},
		{"", ""},
		{"no such thing", ""},
		{strings.Repeat("K", 10_000), ""},
	}
	for _, c := range cases {
		t.Run(c.text[:min(20, len(c.text))], func(t *testing.T) {
			got := strings.Join(tab.Nearest(c.text), " ")
			if got != c.want && !strings.HasPrefix(got, c.want+" ") || (c.want == "" && got != "") {
				t.Errorf("nearest to %q: %q, want %q first", c.text, got, c.want)
			}
		})
	}
}

// TestStrongStability holds the rule from masses and quantum numbers against a second
// definition: hadrons whose mean life is stated, or that are stable, are those that do
// not decay strongly. The states whose width is too small to be measured are listed.
func TestStrongStability(t *testing.T) {
	unmeasured := map[string]bool{
		"K0": true, "B*0": true, "B*+": true, "B_s*0": true, "Xi_c'0": true, "Xi_c'+": true, "Omega_c(2770)0": true,
	}
	for _, p := range table(t).List() {
		if p.Number < 0 || p.Number < 100 {
			continue
		}
		want := p.Stable() || p.Life == particle.LifeMeanLife || unmeasured[p.Name]
		if p.StrongStable != want {
			t.Errorf("%s: stable against strong decay %v, want %v", p.Name, p.StrongStable, want)
		}
	}
}

func TestDefaultProducts(t *testing.T) {
	names := map[string]bool{}
	for _, p := range table(t).DefaultProducts() {
		names[p.Name] = true
	}
	for _, name := range []string{"gamma", "e+", "pi0", "K0", "eta", "omega", "eta'", "phi", "Lambda", "Omega-", "d", "pbar"} {
		if !names[name] {
			t.Errorf("%s is missing", name)
		}
	}
	for _, name := range []string{"K0_S", "K0_L", "rho0", "Delta+", "t", "J/psi", "D*0"} {
		if names[name] {
			t.Errorf("%s is listed", name)
		}
	}
}

func TestStatesWithoutBreitWigner(t *testing.T) {
	tab := table(t)
	for _, name := range []string{"f0(980)", "a0(980)0", "a0(980)-", "Lambda(1405)", "anti-Lambda(1405)", "K0*(1430)+"} {
		if named(t, tab, name).NotBreitWigner == "" {
			t.Errorf("%s counts as a Breit-Wigner", name)
		}
	}
	for _, name := range []string{"rho0", "Delta++", "phi", "Lambda(1520)"} {
		if named(t, tab, name).NotBreitWigner != "" {
			t.Errorf("%s counts as no Breit-Wigner", name)
		}
	}
}
