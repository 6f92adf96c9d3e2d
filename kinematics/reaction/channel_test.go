package reaction_test

import (
	"errors"
	"math"
	"math/rand/v2"
	"slices"
	"strconv"
	"strings"
	"testing"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/particle"
	"example.org/kinegate/kinematics/reaction"
)

// onTarget is a beam of a total energy on a target at rest.
func onTarget(energy float64) reaction.InitialState {
	return reaction.InitialState{Kind: reaction.BeamOnTarget, Beam1: reaction.BeamMotion{Given: reaction.ByTotal, Value: energy}}
}

// photons is two photon beams.
func photons(e1, e2, angle float64) reaction.InitialState {
	return reaction.InitialState{
		Kind: reaction.TwoBeams, Angle: angle,
		Beam1: reaction.BeamMotion{Given: reaction.ByTotal, Value: e1},
		Beam2: reaction.BeamMotion{Given: reaction.ByTotal, Value: e2},
	}
}

// describe answers for a reaction in an initial state that must be possible.
func describe(tb testing.TB, tab *particle.Table, text string, in reaction.InitialState) reaction.Channel {
	tb.Helper()
	c, err := reaction.Describe(parse(tb, tab, text), in)
	if err != nil {
		tb.Fatalf("Describe(%q, %+v): %v", text, in, err)
	}
	return c
}

func TestStates(t *testing.T) {
	tab := table(t)
	ten := 10 * math.Pi / 180
	kLambda := "gamma p -> K+ Lambda, Lambda -> p pi-"
	threshold := describe(t, tab, kLambda, reaction.InitialState{}).Nominal.Threshold.Beam.Total
	pi0 := 0.1349768 / 2
	cases := []struct {
		text string
		in   reaction.InitialState
		want reaction.State
	}{
		{kLambda, reaction.InitialState{}, reaction.Unknown},
		{kLambda, onTarget(1.3), reaction.Open},
		{kLambda, onTarget(0.9), reaction.Closed}, // a sharp Lambda does not open by its decay
		{kLambda, onTarget(threshold), reaction.AtThreshold},
		{kLambda, onTarget(math.Nextafter(threshold, 2)), reaction.AtThreshold},
		{kLambda, onTarget(threshold * (1 + 1e-14)), reaction.Open},
		{kLambda, onTarget(threshold * (1 - 1e-14)), reaction.Closed},
		{"gamma p -> p rho0, rho0 -> pi+ pi-", onTarget(1.0), reaction.OpenThroughWidth},
		{"gamma p -> p rho0, rho0 -> pi+ pi-", onTarget(1.2), reaction.Open},
		{"gamma p -> p rho0, rho0 -> pi+ pi-", onTarget(0.3), reaction.Closed},
		{"gamma p -> p rho0", onTarget(1.0), reaction.Closed}, // no stated decay: nominal
		{"gamma p -> p a0(980)0, a0(980)0 -> K+ K-", onTarget(1.5), reaction.Closed},
		{"gamma p -> p a0(980)0, a0(980)0 -> pi0 eta", onTarget(1.4), reaction.OpenThroughWidth},
		{"gamma gamma -> e+ e-", photons(1e-3, 0.5e-3, math.Pi), reaction.Open},
		{"gamma gamma -> e+ e-", photons(1e-3, 0.5e-3, ten), reaction.Closed},
		{"gamma gamma -> e+ e-", photons(1e-3, 0.5e-3, 0), reaction.Closed},
		{"gamma gamma -> pi0", photons(pi0, pi0, math.Pi), reaction.OnPoint},
		{"gamma gamma -> pi0", photons(2*pi0, pi0/2, math.Pi), reaction.OnPoint},
		{"gamma gamma -> pi0", photons(pi0, pi0, 3), reaction.OffPoint},
		{"gamma p -> K+ X", onTarget(1.0), reaction.Open},
		{"gamma p -> K+ X", onTarget(0.9), reaction.Closed},
		{"gamma p -> X", onTarget(0.001), reaction.Open},
		{"gamma p -> X", onTarget(1e-17), reaction.AtThreshold},
		{"gamma gamma -> t X", photons(1, 1, math.Pi), reaction.Unknown},
		{"p t3 -> n He3", onTarget(0.94), reaction.Open},
		{"K+ -> mu+ nu_mu", reaction.InitialState{}, reaction.Open},
		{"a0(980)0 -> K+ K-", reaction.InitialState{}, reaction.OpenThroughWidth},
		{"e+ e- -> J/psi", reaction.InitialState{Kind: reaction.TotalMass, SqrtS: 3.0969}, reaction.OnPoint},
		{"e+ e- -> mu+ mu-", reaction.InitialState{Kind: reaction.TotalMass, SqrtS: 2 * 0.1056583755}, reaction.AtThreshold},
		{"p p -> p p pi0", reaction.InitialState{Kind: reaction.FourMomenta, Momenta: [2]momentum.Four{
			momentum.WithMass(momentum.Three{X: 0.4}, 0.93827208943), momentum.WithMass(momentum.Three{X: -0.4}, 0.93827208943),
		}}, reaction.Open},
	}
	for _, c := range cases {
		t.Run(c.text, func(t *testing.T) {
			got := describe(t, tab, c.text, c.in)
			if got.State != c.want {
				t.Errorf("%+v: %v, want %v (excess %v and %v)", c.in, got.State, c.want, got.Nominal.Excess, got.Lightest.Excess)
			}
			if got.Frame == "" {
				t.Error("the frame has no name")
			}
		})
	}
}

// TestDeficits holds that the missing energy, added, puts the channel at its threshold.
func TestDeficits(t *testing.T) {
	tab := table(t)
	near := func(what string, got, want float64) {
		t.Helper()
		if !(math.Abs(got-want) <= 1e-13*math.Abs(want)) {
			t.Errorf("%s is %v, want %v", what, got, want)
		}
	}
	c := describe(t, tab, "gamma p -> K+ Lambda", onTarget(0.9))
	near("deficit", c.Nominal.DeficitEnergy, 0.0110817187556411497) // TG-006 of the checks less 900 MeV
	near("deficit in sqrt(s)", -c.Nominal.Excess, 0.493677+1.115683-math.Sqrt(0.93827208943*(0.93827208943+1.8)))

	c = describe(t, tab, "gamma gamma -> e+ e-", photons(1e-3, 0.5e-3, 10*math.Pi/180))
	m, sin := 0.51099895069e-3, math.Sin(5*math.Pi/180)
	near("threshold of two photons", c.Nominal.Threshold.Beam.Total, m*m/(0.5e-3*sin*sin))
	near("deficit of two photons", c.Nominal.DeficitEnergy, m*m/(0.5e-3*sin*sin)-1e-3)

	c = describe(t, tab, "gamma gamma -> e+ e-", photons(1, 1, 0))
	if c.Nominal.Threshold.Reached || c.Nominal.HasDeficitEnergy || c.Moving || len(c.Remarks) != 1 {
		t.Errorf("two photons in one direction: %+v", c)
	}
	c = describe(t, tab, "gamma gamma -> f2(1270)", photons(1, 0.25, math.Pi))
	near("s - m^2", c.Square, 1-1.2754*1.2754)
	near("mass of the object", c.Collision.CentreOfMass().SqrtS, 1)
	near("its velocity", c.Collision.CentreOfMass().Beta, 0.6)
}

// TestSpinRemark: two real photons make no state of spin 1, and the answer says so.
func TestSpinRemark(t *testing.T) {
	tab := table(t)
	for text, forbidden := range map[string]bool{
		"gamma gamma -> J/psi": true, "gamma gamma -> pi0": false, "gamma gamma -> f2(1270)": false, "gamma gamma -> omega": true,
		"gamma gamma -> pi+ pi-": false, "gamma p -> p omega": false, "gamma gamma -> X": false, "gamma gamma -> pi0 omega": true,
	} {
		c := describe(t, tab, text, reaction.InitialState{Kind: reaction.TotalMass, SqrtS: 4})
		got := slices.ContainsFunc(c.Remarks, func(s string) bool { return strings.Contains(s, "forbid "+text) })
		if got != forbidden {
			t.Errorf("%s: %q, forbidden %t", text, c.Remarks, forbidden)
		}
	}
}

// TestThresholdAgainstExcess finds thresholds of random initial states and holds them
// against the excess energy just below and just above, from the other end of the code.
func TestThresholdAgainstExcess(t *testing.T) {
	tab := table(t)
	random := rand.New(rand.NewPCG(3, 5)) //nolint:gosec // test points
	texts := []string{
		"gamma p -> K+ Lambda", "p gamma -> p pi0", "gamma gamma -> mu+ mu-", "p p -> p p p pbar", "e- gamma -> e- e+ e-",
		"K- p -> Omega- K+ K0", "p t3 -> n He3", "gamma d -> p n",
	}
	given := []reaction.Given{reaction.ByMomentum, reaction.ByKinetic, reaction.ByTotal}
	reached, again, never := 0, 0, 0
	for range 3000 {
		text := texts[random.IntN(len(texts))]
		r := parse(t, tab, text)
		m2 := r.Initial[1].Mass
		in := reaction.InitialState{
			Kind: reaction.TwoBeams, Angle: math.Pi * random.Float64(),
			Beam1: reaction.BeamMotion{Given: reaction.ByKinetic, Value: 1},
			Beam2: reaction.BeamMotion{Given: given[random.IntN(3)], Value: m2 + math.Pow(10, 6*random.Float64()-4)},
		}
		if random.IntN(4) == 0 {
			in.Angle = []float64{0, math.Pi}[random.IntN(2)]
		}
		c, err := reaction.Describe(r, in)
		if err != nil {
			if in.Angle == 0 && r.Initial[0].Mass == 0 && m2 == 0 {
				never++
				continue
			}
			t.Fatalf("%s %+v: %v", text, in, err)
		}
		state := func(kinetic float64) reaction.State {
			in.Beam1.Value = kinetic
			return describe(t, tab, text, in).State
		}
		check := func(kinetic float64, below, above reaction.State) {
			if got := state(kinetic * (1 - 1e-6)); got != below {
				t.Errorf("%s %+v: %v below the threshold", text, in, got)
			}
			if got := state(kinetic * (1 + 1e-6)); got != above {
				t.Errorf("%s %+v: %v above the threshold", text, in, got)
			}
		}
		th := c.Nominal.Threshold
		switch {
		case !th.Reached:
			never++
			if got := state(1e6); got != reaction.Closed {
				t.Errorf("%s %+v: no threshold and %v", text, in, got)
			}
		case !th.OpenAtRest:
			reached++
			check(th.Beam.Kinetic, reaction.Closed, reaction.Open)
		case th.Closed != nil:
			again++
			check(th.Closed.Below.Kinetic, reaction.Open, reaction.Closed)
			if !math.IsInf(th.Closed.Above.Kinetic, 1) {
				check(th.Closed.Above.Kinetic, reaction.Closed, reaction.Open)
			}
		default:
			if r.Initial[0].Mass > 0 && state(1e-9) == reaction.Closed {
				t.Errorf("%s %+v: open at rest and closed", text, in)
			}
		}
	}
	t.Logf("%d thresholds, %d open at rest and closed again, %d never", reached, again, never)
	if reached < 1000 || again < 50 || never < 10 {
		t.Error("a kind of threshold was hardly met")
	}
}

// TestUncertaintyByDifferences moves each mass of the table, for particle and
// antiparticle at once, and adds the changes of the threshold in quadrature.
func TestUncertaintyByDifferences(t *testing.T) {
	cases := []struct {
		text string
		in   reaction.InitialState
		rows []string
	}{
		{"gamma p -> K+ Lambda", reaction.InitialState{}, []string{"p", "K+", "Lambda"}},
		{"gamma p -> p pi0", reaction.InitialState{}, []string{"p", "pi0"}},
		{"pi- p -> p pi- pi+ pi-", reaction.InitialState{}, []string{"p", "pi+"}},
		{"p p -> p p p pbar", reaction.InitialState{}, []string{"p"}},
		{"K- p -> Omega- K+ K0", reaction.InitialState{}, []string{"p", "K+", "Omega-", "K0"}},
		{"gamma p -> K0_S K0_L p", reaction.InitialState{}, []string{"p", "K0"}},
		{"K- p -> Omega- K+ K0", reaction.InitialState{
			Kind: reaction.TwoBeams, Angle: 2.2,
			Beam2: reaction.BeamMotion{Given: reaction.ByKinetic, Value: 0.2}, Beam1: reaction.BeamMotion{Given: reaction.ByKinetic, Value: 1},
		}, []string{"p", "K+", "Omega-", "K0"}},
		{"K- p -> Omega- K+ K0", reaction.InitialState{
			Kind: reaction.TwoBeams, Angle: 0.4,
			Beam2: reaction.BeamMotion{Given: reaction.ByTotal, Value: 1.2}, Beam1: reaction.BeamMotion{Given: reaction.ByKinetic, Value: 1},
		}, []string{"p", "K+", "Omega-", "K0"}},
		{"K- p -> Omega- K+ K0", reaction.InitialState{
			Kind: reaction.TwoBeams, Angle: 1.1,
			Beam2: reaction.BeamMotion{Given: reaction.ByMomentum, Value: 0.7}, Beam1: reaction.BeamMotion{Given: reaction.ByKinetic, Value: 1},
		}, []string{"p", "K+", "Omega-", "K0"}},
		{"K- p -> Omega- K+ K0", reaction.InitialState{Kind: reaction.FourMomenta, Momenta: [2]momentum.Four{
			momentum.WithMass(momentum.Three{X: 1, Y: 2, Z: 3}, 0.493677), momentum.WithMass(momentum.Three{X: 0.2, Y: -0.3, Z: 0.1}, 0.93827208943),
		}}, []string{"p", "K+", "Omega-", "K0"}},
		{"p gamma -> p pi0", photons(10, 1e-4, 3), []string{"p", "pi0"}},
	}
	standard := table(t)
	for _, c := range cases {
		t.Run(c.text+" "+strconv.Itoa(int(c.in.Kind)), func(t *testing.T) {
			th := describe(t, standard, c.text, c.in).Nominal.Threshold
			var sum [3]float64
			for _, name := range c.rows {
				p, err := standard.Named(name)
				if err != nil {
					t.Fatal(err)
				}
				moved := func(shift float64) reaction.BeamPoint {
					line := "particle_number,mass_gev\n" + strconv.FormatInt(p.Number, 10) + "," + fault.Text(p.Mass+shift) + "\n"
					if name == "K0" { // K0_S and K0_L have the same mass
						line += "310," + fault.Text(p.Mass+shift) + "\n130," + fault.Text(p.Mass+shift) + "\n"
					}
					tab, err := particle.New(particle.File{Data: []byte(line)})
					if err != nil {
						t.Fatal(err)
					}
					return describe(t, tab, c.text, c.in).Nominal.Threshold.Beam
				}
				const h = 1e-6
				up, down := moved(h), moved(-h)
				for i, d := range []float64{up.Total - down.Total, up.Kinetic - down.Kinetic, up.Momentum - down.Momentum} {
					d *= p.MassError / (2 * h)
					sum[i] += d * d
				}
			}
			for i, got := range []float64{th.BeamError.Total, th.BeamError.Kinetic, th.BeamError.Momentum} {
				if want := math.Sqrt(sum[i]); !(math.Abs(got-want) <= 1e-5*want) || want == 0 {
					t.Errorf("uncertainty %d is %v, differences give %v", i, got, want)
				}
			}
		})
	}
}

func TestDescribeFaults(t *testing.T) {
	tab := table(t)
	off := momentum.WithMass(momentum.Three{X: 1}, 0.938)
	off.E *= 1.1
	cases := []struct {
		name, text string
		in         reaction.InitialState
		field      string
	}{
		{"no left side", "-> pi0 pi0", reaction.InitialState{}, "reaction"},
		{"decay with a beam", "K+ -> mu+ nu_mu", onTarget(1), "initial_state"},
		{"below the mass", "p p -> p p", onTarget(0.9), "beam.total_energy_gev"},
		{"negative", "gamma p -> p pi0", onTarget(-1), "beam.total_energy_gev"},
		{"not a number", "gamma p -> p pi0", onTarget(math.NaN()), "beam.total_energy_gev"},
		{"too large", "gamma p -> p pi0", onTarget(1e31), "beam.total_energy_gev"},
		{"massless target", "gamma gamma -> e+ e-", onTarget(1), "target.mass_gev"},
		{"angle", "gamma gamma -> e+ e-", photons(1, 1, 3.2), "angle_between_beams_rad"},
		{"sqrt(s) below the masses", "p p -> p p", reaction.InitialState{Kind: reaction.TotalMass, SqrtS: 1}, "sqrt_s_gev"},
		{"off the mass shell", "p p -> p p", reaction.InitialState{Kind: reaction.FourMomenta, Momenta: [2]momentum.Four{off, off}}, "first.energy_gev"},
		{"photons without energy", "gamma gamma -> e+ e-", photons(0, 1, 0), "sqrt_s_gev"},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			_, err := reaction.Describe(parse(t, tab, c.text), c.in)
			var e *fault.Error
			if !errors.As(err, &e) || e.Kind != fault.Invalid || e.Field != c.field {
				t.Errorf("got %v, want an invalid %s", err, c.field)
			}
		})
	}
}

func TestRemarks(t *testing.T) {
	c := describe(t, table(t), "gamma p -> p f0(980) a0(980)0, a0(980)0 -> K+ K-", onTarget(5))
	if text := strings.Join(c.Remarks, "\n"); !strings.Contains(text, "f0(980) is no Breit-Wigner") ||
		!strings.Contains(text, "a0(980)0 -> K+ K- needs the width") {
		t.Errorf("remarks %q", c.Remarks)
	}
}
