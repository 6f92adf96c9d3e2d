package particle_test

import (
	"errors"
	"math"
	"strings"
	"testing"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/particle"
)

// file makes a particle file from its lines.
func file(lines ...string) particle.File {
	return particle.File{Name: "mine.csv", Data: []byte(strings.Join(lines, "\n") + "\n")}
}

func TestFileOverrides(t *testing.T) {
	standard := table(t)
	tab := table(t,
		file("particle_number,mass_gev,mass_err_gev", "221,0.5473,0.0001"),
		file("# a remark", "particle_number,width_gev", "13,1e-9", "3122,", "11,"))
	if eta := named(t, tab, "eta"); eta.Mass != 0.5473 || eta.MassError != 0.0001 || eta.Width != named(t, standard, "eta").Width {
		t.Errorf("eta is %+v", eta)
	}
	mu := named(t, tab, "mu+")
	if mu.Life != particle.LifeWidth || mu.Width != 1e-9 || mu.MeanLifeError != 0 {
		t.Errorf("a width does not replace the mean life: %+v", mu)
	}
	if named(t, tab, "Lambda").Width != named(t, standard, "Lambda").Width {
		t.Error("an empty cell overrides")
	}
	if tab.Digest() == standard.Digest() || tab.Version() == standard.Version() ||
		!strings.HasPrefix(tab.Version(), particle.StandardVersion+"+"+tab.Digest()[:12]) {
		t.Errorf("version %q does not show the files", tab.Version())
	}
}

func TestFileAdds(t *testing.T) {
	tab := table(t, file(
		"nucleus_z,nucleus_a,particle_number,aliases,mass_gev,charge_thirds,antiparticle_number,mean_life_s,not_breit_wigner",
		"82,208,,Pb208,193.6876,,,stable,",
		"1,3,1010010030,hypertriton,2.99116,,,2.6e-10,",
		",,9900022,A'|dark,0.017,,,,a guess",
		",,37,H+,150,3,-37,,",
	))
	lead := named(t, tab, "Pb208")
	if lead.Number != 1000822080 || lead.Nucleus.A != 208 || lead.ChargeThirds() != 246 || !lead.IsNucleus() || !lead.Stable() {
		t.Errorf("lead is %+v", lead)
	}
	if anti := named(t, tab, "anti-Pb208"); anti.Number != -lead.Number {
		t.Errorf("antilead is %+v", anti)
	}
	if dark := named(t, tab, "dark"); !dark.SelfConjugate() || dark.Title != "A'" || dark.NotBreitWigner != "a guess" {
		t.Errorf("the dark photon is %+v", dark)
	}
	if higgs := named(t, tab, "anti-H+"); higgs.ChargeThirds() != -3 {
		t.Errorf("the charged scalar's antiparticle is %+v", higgs)
	}
}

// TestFileFaults starts from a good file and breaks one thing in each case.
func TestFileFaults(t *testing.T) {
	const header = "particle_number,aliases,mass_gev,width_gev,mean_life_s,charge_thirds,J,P,C,antiparticle_number"
	cases := []struct {
		name, lines       string
		line, column      int
		field, value, say string
	}{
		{"empty file", "", 1, 1, "file", "", "no columns"},
		{"unknown column", "particle_number,mass", 1, 17, "column", "mass", "mass_gev"},
		{"column twice", "J,J", 1, 3, "column", "J", "twice"},
		{"no number", header + "\n,x,1,,,,,,,", 2, 1, "particle_number", "", "nucleus_z"},
		{"bad number", header + "\nabc,x,1,,,,,,,", 2, 1, "particle_number", "abc", "an integer from 1"},
		{"antiparticle's number", header + "\n-211,x,1,,,,,,,", 2, 1, "particle_number", "-211", "an integer from 1"},
		{"unknown scheme", header + "\n2203,x,1,,,,,,,", 2, 1, "particle_number", "2203", "digit rules"},
		{"too few values", header + "\n221,x", 2, 1, "row", "2 values", "10 values"},
		{"negative mass", header + "\n221,,-1,,,,,,,", 2, 6, "mass_gev", "-1", "from 0 to 1e+06"},
		{"not a number", header + "\n221,,NaN,,,,,,,", 2, 6, "mass_gev", "NaN", "from 0"},
		{"infinite", header + "\n221,,Inf,,,,,,,", 2, 6, "mass_gev", "Inf", "from 0"},
		{"hexadecimal", header + "\n221,,0x1p-3,,,,,,,", 2, 6, "mass_gev", "0x1p-3", "decimal"},
		{"mass missing", header + "\n9900001,x,,,,,,,,", 2, 11, "mass_gev", "", "a mass"},
		{"name missing", header + "\n9900001,,1,,,,,,,", 2, 9, "aliases", "", "at least one name"},
		{"name taken", header + "\n9900001,eta,1,,,,,,,", 2, 9, "aliases", "eta", "particle 221"},
		{"name with a blank", header + "\n9900001,a b,1,,,,,,,", 2, 9, "aliases", "a b", "printable"},
		{"name X", header + "\n9900001,X,1,,,,,,,", 2, 9, "aliases", "X", "X"},
		{"name a number", header + "\n9900001,12,1,,,,,,,", 2, 9, "aliases", "12", "no integer"},
		{"width and mean life", header + "\n221,,,1,1,,,,,", 2, 9, "mean_life_s", "1", "not both"},
		{"width zero", header + "\n221,,,0,,,,,,", 2, 7, "width_gev", "0", "> 0"},
		{"mean life zero", header + "\n221,,,,0,,,,,", 2, 8, "mean_life_s", "0", "> 0 or stable"},
		{"wrong charge", header + "\n221,,,,,3,,,,", 2, 9, "charge_thirds", "3", "0, which the particle number says"},
		{"wrong spin", header + "\n221,,,,,,1/2,,,", 2, 10, "J", "1/2", "0, which the particle number says"},
		{"no spin", header + "\n221,,,,,,2/2,,,", 2, 10, "J", "2/2", "a spin such as"},
		{"no parity", header + "\n221,,,,,,,1,,", 2, 11, "P", "1", "+ or -"},
		{"C of a charged state", header + "\n211,,,,,,,,+,", 2, 12, "C", "+", "not self-conjugate"},
		{"wrong antiparticle", header + "\n211,,,,,,,,,211", 2, 13, "antiparticle_number", "211", "-211"},
		{"twice in a file", header + "\n221,,1,,,,,,,\n221,,2,,,,,,,", 3, 1, "particle_number", "221", "once"},
		{"open quote", header + "\n221,\"a,,,,,,,,", 2, 16, "file", "", "quote"},
		{"Z without A", "nucleus_z,aliases,mass_gev\n2,x,3", 2, 1, "nucleus_z", "2", "together"},
		{"Z above A", "nucleus_z,nucleus_a,aliases,mass_gev\n4,3,x,3", 2, 1, "nucleus_z", "4", "<= nucleus_a"},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			_, err := particle.New(file(c.lines))
			var e *fault.Error
			if !errors.As(err, &e) {
				t.Fatalf("New gives %v", err)
			}
			if e.Kind != fault.Invalid || e.Line != c.line || e.Column != c.column || e.Field != c.field || e.Value != c.value {
				t.Errorf("got line %d column %d %s %q (%v)", e.Line, e.Column, e.Field, e.Value, e)
			}
			if !strings.Contains(e.Error(), c.say) || !strings.HasPrefix(err.Error(), "mine.csv: ") {
				t.Errorf("%q does not say %q", err, c.say)
			}
		})
	}
}

// TestAllFaultsAtOnce counts: every fault of every file is reported, by position.
func TestAllFaultsAtOnce(t *testing.T) {
	_, err := particle.New(
		file("particle_number,mass_gev,J,charge_thirds", "221,-1,7,1", "x,1,,", "211,,,1"),
		file("mass"))
	var list fault.List
	if !errors.As(err, &list) {
		t.Fatalf("New gives %v", err)
	}
	got := make([]string, 0, len(list))
	for _, e := range list {
		got = append(got, e.Field)
	}
	if want := "mass_gev J charge_thirds particle_number charge_thirds"; strings.Join(got, " ") != want {
		t.Errorf("faults of the first file: %s, want %s", strings.Join(got, " "), want)
	}
	if !strings.Contains(err.Error(), "unknown column") {
		t.Errorf("the second file's fault is missing in %v", err)
	}
	if _, err := particle.New(particle.File{Name: "big", Data: make([]byte, particle.MaxFileBytes+1)}); !errors.Is(err, fault.Invalid) {
		t.Errorf("a file over the limit gives %v", err)
	}
}

// FuzzNew holds that no file makes New panic, and that a table it accepts has finite
// masses and names that lead back.
func FuzzNew(f *testing.F) {
	f.Add("particle_number,mass_gev\n221,0.5\n")
	f.Add("nucleus_z,nucleus_a,aliases,mass_gev\n82,208,Pb,193\n")
	f.Add("aliases,mass_gev,particle_number,mean_life_s\n\"a|b\",1,9900001,stable\n")
	f.Fuzz(func(t *testing.T, text string) {
		tab, err := particle.New(particle.File{Data: []byte(text)})
		if err != nil {
			return
		}
		for _, p := range tab.List() {
			if math.IsInf(p.Mass, 0) || math.IsNaN(p.Mass) || math.IsNaN(p.MeanLife) || math.IsInf(p.Width, 0) {
				t.Fatalf("%+v", p)
			}
			if q := named(t, tab, p.Name); q.Number != p.Number {
				t.Fatalf("%s leads to %d, not %d", p.Name, q.Number, p.Number)
			}
		}
	})
}
