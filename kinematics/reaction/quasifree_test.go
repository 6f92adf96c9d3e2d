package reaction_test

import (
	"errors"
	"math"
	"testing"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/particle"
	"example.org/kinegate/kinematics/reaction"
)

// bound answers for a reaction on a nucleon in a nucleus of the table.
func bound(tb testing.TB, tab *particle.Table, text, nucleus string, fermi float64) reaction.QuasiFree {
	tb.Helper()
	a, err := tab.Named(nucleus)
	if err != nil {
		tb.Fatal(err)
	}
	q, err := reaction.BoundNucleon(tab, parse(tb, tab, text), a, fermi)
	if err != nil {
		tb.Fatal(err)
	}
	return q
}

// TestBoundNucleonAgainstScan holds the range against a scan over momentum and angle
// with the textbook formula s = m1^2 + m2^2 + 2 (E1 E2 - p1 k cos) solved by bisection.
func TestBoundNucleonAgainstScan(t *testing.T) {
	tab := table(t)
	cases := []struct {
		text, nucleus string
		fermi         float64
	}{
		{"gamma p -> K+ Lambda", "d", 0.3},
		{"gamma n -> pi- p", "d", 0.05},
		{"gamma p -> p eta", "He3", 0.2},
		{"gamma p -> p phi", "alpha", 0.22},
		{"gamma n -> n pi0", "t3", 0.5},
		{"pi- p -> K+ Sigma-", "Li7", 0.2},
		{"p n -> p n eta", "alpha", 0.15},
	}
	for _, c := range cases {
		t.Run(c.text+" in "+c.nucleus, func(t *testing.T) {
			use := tab
			if c.nucleus == "Li7" {
				var err error
				use, err = particle.New(particle.File{Data: []byte("nucleus_z,nucleus_a,aliases,mass_gev\n2,6,He6,5.605537\n")})
				if err != nil {
					t.Fatal(err)
				}
			}
			q := bound(t, use, c.text, c.nucleus, c.fermi)
			r := parse(t, use, c.text)
			m1, sum := r.Initial[0].Mass, 0.0
			for _, n := range r.Top {
				sum += r.Products[n].Particle.Mass
			}
			solve := func(k, cos float64) float64 {
				e2 := q.Nucleus.Mass - math.Hypot(q.Spectator.Mass, k)
				low, high := 0.0, 1e3
				for range 200 {
					p := (low + high) / 2
					if s := m1*m1 + e2*e2 - k*k + 2*(math.Hypot(m1, p)*e2-p*k*cos); s < sum*sum {
						low = p
					} else {
						high = p
					}
				}
				return math.Hypot(m1, high)
			}
			least, most := math.Inf(1), 0.0
			for i := range 401 {
				for j := range 21 {
					e := solve(c.fermi*float64(i)/400, float64(j)/10-1)
					least, most = min(least, e), max(most, e)
				}
			}
			for what, pair := range map[string][2]float64{
				"lowest": {q.Lowest.Beam.Total, least}, "highest": {q.Highest.Beam.Total, most},
				"at rest": {q.AtRest.Beam.Total, solve(0, 1)},
			} {
				if !(math.Abs(pair[0]-pair[1]) <= 1e-5*pair[1]) {
					t.Errorf("%s %v, the scan gives %v", what, pair[0], pair[1])
				}
			}
			if q.Lowest.Beam.Total > least*(1+1e-12) || q.Absolute.Beam.Total > q.Lowest.Beam.Total*(1+1e-12) {
				t.Errorf("absolute %v, lowest %v, scan %v", q.Absolute.Beam.Total, q.Lowest.Beam.Total, least)
			}
		})
	}
}

func TestCoherent(t *testing.T) {
	tab := table(t)
	q := bound(t, tab, "gamma p -> p eta", "He3", 0.2)
	m, eta := q.Nucleus.Mass, 0.547862
	if want := eta + eta*eta/(2*m); q.Coherent == nil || !(math.Abs(q.Coherent.Beam.Total-want) <= 1e-14) {
		t.Errorf("coherent threshold %+v, want %v", q.Coherent, want)
	}
	if q := bound(t, tab, "gamma p -> K+ Lambda", "d", 0.2); q.Coherent != nil || q.Spectator.Name != "n" {
		t.Errorf("%+v", q)
	}
}

// Each nucleus of a usual target has its spectators, and these the masses that the energies needed
// to take off one nucleon say. Those are of the atomic mass evaluation of 2020, from memory, in
// MeV; they are of atoms, whose electrons are bound more tightly by up to 0.5 keV.
func TestSpectators(t *testing.T) {
	tab := table(t)
	for _, c := range []struct {
		nucleus, nucleon, spectator string
		separation                  float64
	}{
		{"Li7", "p", "He6", 9.974}, {"Li7", "n", "Li6", 7.251},
		{"Be9", "p", "Li8", 16.886}, {"Be9", "n", "Be8", 1.665},
		{"C12", "p", "B11", 15.957}, {"C12", "n", "C11", 18.721},
		{"O16", "p", "N15", 12.127}, {"O16", "n", "O15", 15.664},
		{"He4", "p", "t3", 19.814}, {"He4", "n", "He3", 20.578},
	} {
		q := bound(t, tab, "gamma "+c.nucleon+" -> "+c.nucleon+" eta", c.nucleus, 0.2)
		nucleon, err := tab.Named(c.nucleon)
		if err != nil {
			t.Fatal(err)
		}
		spectator, err := tab.Named(c.spectator)
		if err != nil {
			t.Fatal(err)
		}
		if q.Spectator.Number != spectator.Number {
			t.Errorf("%s without %s is %s, not %s", c.nucleus, c.nucleon, q.Spectator.Name, c.spectator)
		}
		energy := 1e3 * (q.Spectator.Mass + nucleon.Mass - q.Nucleus.Mass)
		if math.Abs(energy-c.separation) > 0.0015 {
			t.Errorf("%s takes %.4f MeV to lose %s, not %.3f", c.nucleus, energy, c.nucleon, c.separation)
		}
	}
}

func TestBoundNucleonFaults(t *testing.T) {
	tab := table(t)
	cases := []struct {
		text, nucleus string
		fermi         float64
		field         string
	}{
		{"gamma d -> p n", "d", 0.1, "reaction"},
		{"gamma p -> p eta", "d", -0.1, "fermi_momentum_gev"},
		{"gamma p -> p eta", "d", math.NaN(), "fermi_momentum_gev"},
		{"gamma p -> p eta", "Li6", 0.2, "nucleus"}, // the remainder, He5, is not bound
		{"gamma p -> p eta", "p", 0.2, "nucleus"},
		{"gamma p -> p eta", "dbar", 0.2, "nucleus"},
	}
	for _, c := range cases {
		a, err := tab.Named(c.nucleus)
		if err != nil {
			t.Fatal(err)
		}
		_, err = reaction.BoundNucleon(tab, parse(t, tab, c.text), a, c.fermi)
		var e *fault.Error
		if !errors.As(err, &e) || e.Kind != fault.Invalid || e.Field != c.field {
			t.Errorf("%s in %s: %v, want an invalid %s", c.text, c.nucleus, err, c.field)
		}
	}
}
