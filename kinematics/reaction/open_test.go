package reaction_test

import (
	"errors"
	"math"
	"slices"
	"strconv"
	"strings"
	"testing"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/particle"
	"example.org/kinegate/kinematics/reaction"
)

// search returns a search for two particles by name.
func search(tb testing.TB, tab *particle.Table, first, second string, in reaction.InitialState, bodies int) reaction.Search {
	tb.Helper()
	r, err := reaction.New(tab, reaction.Spec{Initial: []string{first, second}, Inclusive: true})
	if err != nil {
		tb.Fatal(err)
	}
	return reaction.Search{First: r.Initial[0], Second: r.Initial[1], State: in, MaxBodies: bodies}
}

// listOpen returns the channels of a search that must be well formed.
func listOpen(tb testing.TB, tab *particle.Table, s *reaction.Search) *reaction.Channels {
	tb.Helper()
	c, err := reaction.ListOpen(tab, *s)
	if err != nil {
		tb.Fatal(err)
	}
	return c
}

// namesOf joins the names of particles.
func namesOf(list []particle.Particle) string {
	names := make([]string, len(list))
	for i := range list {
		names[i] = list[i].Name
	}
	return strings.Join(names, " ")
}

// channels lists the names of all channels.
func channels(c *reaction.Channels) []string {
	list := make([]string, c.Len())
	for i := range list {
		list[i] = namesOf(c.At(i).Particles)
	}
	return list
}

// TestChannelsByHand: the two-body channels of a photon of 1.3 GeV on the proton, and
// what opens next, as any photoproduction review has them.
func TestChannelsByHand(t *testing.T) {
	tab := table(t)
	s := search(t, tab, "gamma", "p", onTarget(1.3), 2)
	c := listOpen(t, tab, &s)
	want := []string{
		"gamma p", "pi0 p", "pi+ n", "eta p", "K+ Lambda", "K+ Sigma0", "K0 Sigma+", "omega p",
	}
	if got := channels(c); !slices.Equal(got, want) || !c.Complete || c.Bodies != 2 {
		t.Errorf("channels %v, want %v", got, want)
	}
	if c.Next == nil || namesOf(c.Next.Particles) != "p eta'" || c.Next.State != reaction.Closed ||
		!(math.Abs(c.Next.Threshold.Beam.Total-1.4466) < 1e-4) {
		t.Errorf("next channel %+v", c.Next)
	}
	lambda := c.At(4)
	if lambda.State != reaction.Open || !(math.Abs(lambda.Threshold.Beam.Total-0.911081718755641) < 1e-14) || lambda.Threshold.BeamError.Total == 0 {
		t.Errorf("K+ Lambda is %+v", lambda)
	}
}

// TestChannelsAgainstBruteForce tries every set of particles through New, which holds it
// against the laws, and through Describe, which holds it against the energy.
func TestChannelsAgainstBruteForce(t *testing.T) {
	tab := table(t)
	cases := []struct {
		first, second string
		in            reaction.InitialState
		bodies        int
		list          string
	}{
		{"gamma", "p", onTarget(2.5), 4, "gamma pi0 pi+ pi- eta K+ K- K0 K0bar n p Lambda Sigma+"},
		{"gamma", "p", onTarget(2.5), 4, "pi0 pi+ pi- K+ K- K0_S K0_L n p Lambda Sigma0"},
		{"K0_L", "p", onTarget(2), 3, "pi0 pi+ pi- K+ K- K0_S K0 K0bar n p Lambda Sigma+"},
		{"gamma", "d", onTarget(0.6), 4, "gamma pi0 pi+ pi- n p d eta"},
		{"e+", "e-", reaction.InitialState{Kind: reaction.TotalMass, SqrtS: 1.2}, 4, "gamma e+ e- mu+ mu- nu_mu nu_mubar pi0 pi+ pi- K0_S K0_L"},
		{"gamma", "gamma", photons(1, 0.4, 2.5), 5, "pi0 pi+ pi- eta K+ K- gamma"},
	}
	for _, c := range cases {
		t.Run(c.first+" "+c.second, func(t *testing.T) {
			s := search(t, tab, c.first, c.second, c.in, c.bodies)
			for name := range strings.FieldsSeq(c.list) {
				p, err := tab.Named(name)
				if err != nil {
					t.Fatal(err)
				}
				s.Particles = append(s.Particles, p)
			}
			found := listOpen(t, tab, &s)
			open, next := bruteForce(t, tab, &s, c.first, c.second)
			got := sorted(channels(found))
			if !slices.Equal(got, open) || len(open) < 10 || !found.Complete {
				t.Errorf("%d channels, brute force finds %d: %v, %v", len(got), len(open), got, open)
			}
			if math.IsInf(next, 1) != (found.Next == nil) || (found.Next != nil && found.Next.Threshold.Mass != next) {
				t.Errorf("next is %+v, brute force finds %v GeV", found.Next, next)
			}
			for i := 1; i < found.Len(); i++ {
				if found.At(i).Threshold.Mass < found.At(i-1).Threshold.Mass {
					t.Errorf("channel %d is lighter than the one before", i)
				}
			}
		})
	}
}

// sorted puts the names of each channel, and the channels, in alphabetical order.
func sorted(list []string) []string {
	for i := range list {
		names := strings.Fields(list[i])
		slices.Sort(names)
		list[i] = strings.Join(names, " ")
	}
	slices.Sort(list)
	return list
}

// bruteForce returns the open channels and the mass of the lightest closed one.
func bruteForce(t *testing.T, tab *particle.Table, s *reaction.Search, first, second string) (open []string, next float64) {
	t.Helper()
	next = math.Inf(1)
	var try func(products []reaction.ProductSpec, from int)
	try = func(products []reaction.ProductSpec, from int) {
		if r, err := reaction.New(tab, reaction.Spec{Initial: []string{first, second}, Products: products}); err == nil && len(products) >= 2 {
			c, err := reaction.Describe(r, s.State)
			switch {
			case err != nil:
				t.Fatal(err)
			case c.State == reaction.Open:
				open = append(open, sorted([]string{namesOf(c.Nominal.Particles)})[0])
			default:
				next = min(next, c.Nominal.Threshold.Mass)
			}
		}
		if len(products) == s.MaxBodies {
			return
		}
		for i := from; i < len(s.Particles); i++ {
			try(append(slices.Clone(products), reaction.ProductSpec{Particle: s.Particles[i].Name}), i)
		}
	}
	try(nil, 0)
	slices.Sort(open)
	return open, next
}

// TestIgnoredLaws: without strangeness and families, weak and forbidden channels appear.
func TestIgnoredLaws(t *testing.T) {
	tab := table(t)
	s := search(t, tab, "gamma", "p", onTarget(1.3), 2)
	strict := channels(listOpen(t, tab, &s))
	s.Ignored = reaction.Laws(0).With(reaction.Strangeness)
	loose := channels(listOpen(t, tab, &s))
	for _, name := range strict {
		if !slices.Contains(loose, name) {
			t.Errorf("%s is lost without a law", name)
		}
	}
	if !slices.Contains(loose, "pi0 Sigma+") || !slices.Contains(loose, "K+ n") || slices.Contains(strict, "K+ n") {
		t.Errorf("without strangeness: %v", loose)
	}
	s.Ignored = reaction.AllLaws
	s.Particles = nil
	all := listOpen(t, tab, &s)
	if all.Len() < 300 || !all.Complete {
		t.Errorf("without laws: %d channels", all.Len())
	}
}

// TestTwoPhotonRules: what two real photons make, and what they do not.
func TestTwoPhotonRules(t *testing.T) {
	tab := table(t)
	s := search(t, tab, "gamma", "gamma", photons(0.7, 0.7, math.Pi), 3)
	s.MinBodies, s.Particles = 1, tab.List()
	all := channels(listOpen(t, tab, &s))
	s.SpinAndC = true
	ruled := channels(listOpen(t, tab, &s))
	for _, name := range []string{"pi0", "eta", "eta'", "f0(980)", "f2(1270)", "pi0 pi0", "pi+ pi-", "gamma rho0", "K0_S K0_S", "pi0 eta", "gamma gamma"} {
		if !slices.Contains(ruled, name) {
			t.Errorf("%s is missing", name)
		}
	}
	for _, name := range []string{"rho0", "phi", "gamma pi0", "pi0 rho0", "pi0 omega", "K0_L K0_S", "gamma gamma gamma", "f1(1285)"} {
		if slices.Contains(ruled, name) {
			t.Errorf("%s is listed", name)
		}
		if !slices.Contains(all, name) {
			t.Errorf("%s is missing without the rules", name)
		}
	}
	q := search(t, tab, "gamma", "p", onTarget(1.3), 2)
	q.Ignored, q.SpinAndC = reaction.AllLaws, true
	for _, name := range channels(listOpen(t, tab, &q)) {
		if name == "gamma gamma" || name == "e- p" {
			t.Errorf("%s has the wrong number of half-integer spins", name)
		}
	}
}

// TestSearchBounds: too much work is an answer, with what is complete.
func TestSearchBounds(t *testing.T) {
	tab := table(t)
	s := search(t, tab, "gamma", "p", onTarget(100), 5)
	s.Particles, s.Ignored = tab.List(), reaction.AllLaws
	c := listOpen(t, tab, &s)
	if c.Complete || c.Bodies != 2 || c.Len() == 0 {
		t.Errorf("complete %v to %d bodies, %d channels", c.Complete, c.Bodies, c.Len())
	}
	for i := range c.Len() {
		if n := len(c.At(i).Particles); n > c.Bodies {
			t.Fatalf("a channel of %d bodies", n)
		}
	}
}

func TestSearchFaults(t *testing.T) {
	tab := table(t)
	good := search(t, tab, "gamma", "p", onTarget(1), 2)
	for field, spoil := range map[string]func(*reaction.Search){
		"max_bodies":            func(s *reaction.Search) { s.MaxBodies = 6 },
		"min_bodies":            func(s *reaction.Search) { s.MinBodies = 3 },
		"initial_state":         func(s *reaction.Search) { s.State = reaction.InitialState{} },
		"beam.total_energy_gev": func(s *reaction.Search) { s.State = onTarget(-1) },
		"particles":             func(s *reaction.Search) { s.Particles = make([]particle.Particle, reaction.MaxListed+1) },
	} {
		s := good
		spoil(&s)
		_, err := reaction.ListOpen(tab, s)
		var e *fault.Error
		if !errors.As(err, &e) || e.Kind != fault.Invalid || e.Field != field {
			t.Errorf("got %v, want an invalid %s", err, field)
		}
	}
}

func BenchmarkListOpen(b *testing.B) {
	tab := table(b)
	for bodies := 2; bodies <= reaction.MaxBodies; bodies++ {
		b.Run(strconv.Itoa(bodies)+" bodies", func(b *testing.B) {
			s := search(b, tab, "gamma", "p", onTarget(9), bodies)
			b.ReportAllocs()
			for b.Loop() {
				listOpen(b, tab, &s)
			}
		})
	}
}

// TestListOpenStops checks that Stop ends a search, which then says that it is incomplete.
func TestListOpenStops(t *testing.T) {
	tab := table(t)
	asked := 0
	s := search(t, tab, "gamma", "p", onTarget(10), 4)
	s.Particles = tab.List()
	s.Stop = func() bool {
		asked++
		return asked == 2
	}
	stopped, err := reaction.ListOpen(tab, s)
	if err != nil {
		t.Fatal(err)
	}
	if asked != 2 || stopped.Complete || stopped.Bodies >= s.MaxBodies {
		t.Errorf("asked %d times, %d bodies, complete %v", asked, stopped.Bodies, stopped.Complete)
	}
}

// TestLightestMass checks the mass that stated decays allow at least.
func TestLightestMass(t *testing.T) {
	r := parse(t, table(t), "gamma p -> Delta(1232)+ rho0, rho0 -> pi+ pi-, Delta(1232)+ -> p pi0, pi0 -> gamma gamma")
	mass := func(name string) float64 {
		p, err := table(t).Named(name)
		if err != nil {
			t.Fatal(err)
		}
		return p.Mass
	}
	if got, want := r.LightestMass(r.Top[0]), mass("p")+mass("pi0"); got != want {
		t.Errorf("Delta+ %v, want %v", got, want)
	}
	if got, want := r.LightestMass(r.Top[1]), 2*mass("pi+"); got != want {
		t.Errorf("rho0 %v, want %v", got, want)
	}
}
