package constraint_test

import (
	"encoding/json"
	"maps"
	"math"
	"os"
	"path/filepath"
	"slices"
	"testing"

	"example.org/kinegate/kinematics/constraint"
	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/momentum"
)

// outside is testdata/fit/events.json: events fitted with scipy by reference.py beside it.
type outside struct {
	Topologies map[string]topology `json:"topologies"`
	Events     []outsideEvent      `json:"events"`
}

type topology struct {
	Objects []struct {
		Form      string     `json:"form"`
		Measured  uint8      `json:"measured"`
		MassGeV   float64    `json:"mass_gev"`
		Beam      bool       `json:"beam"`
		Along     [3]float64 `json:"along"`
		Repointed bool       `json:"repointed"`
	} `json:"objects"`
	Known     [4]float64 `json:"known"`
	Conserved bool       `json:"conserved"`
	Vertex    string     `json:"vertex"`
}

type outsideEvent struct {
	Topology string     `json:"topology"`
	Case     string     `json:"case"`
	Vertex   [3]float64 `json:"vertex"`
	Masses   []struct {
		Objects []int   `json:"objects"`
		GeV     float64 `json:"gev"`
	} `json:"masses"`
	Objects []struct {
		Kind       string     `json:"kind"`
		Values     []float64  `json:"values"`
		Covariance [6]float64 `json:"covariance"`
		Origin     [3]float64 `json:"origin"`
		Cluster    [3]float64 `json:"cluster"`
	} `json:"objects"`
	Answer struct {
		Status string    `json:"status"`
		Minima []minimum `json:"minima"`
	} `json:"answer"`
}

// minimum is one that scipy found; Residual is its own optimality residual.
type minimum struct {
	ChiSquare  float64     `json:"chi_square"`
	Residual   float64     `json:"residual"`
	Parameters [][]float64 `json:"parameters"`
	VertexZ    float64     `json:"vertex_z"`
}

func loadOutside(t testing.TB) *outside {
	t.Helper()
	text, err := os.ReadFile(filepath.Join("..", "..", "testdata", "fit", "events.json"))
	if err != nil {
		t.Fatal(err)
	}
	var all outside
	if err := json.Unmarshal(text, &all); err != nil {
		t.Fatal(err)
	}
	return &all
}

func three(v [3]float64) momentum.Three { return momentum.Three{X: v[0], Y: v[1], Z: v[2]} }

var forms = map[string]constraint.Form{
	"coordinates": constraint.Coordinates, "along": constraint.Along, "missing": constraint.Missing,
}

var kinds = map[string]event.Kind{
	"energy_momentum": event.EnergyMomentum, "momentum_mass": event.MomentumMass,
	"transverse_momentum": event.TransverseMomentum, "momentum_angles": event.MomentumAngles,
	"momentum_slopes": event.MomentumSlopes,
}

// fitterOf makes a fitter loaded with an event.
func fitterOf(t testing.TB, top *topology, e *outsideEvent) *constraint.Fitter {
	t.Helper()
	spec := &constraint.Spec{Known: momentum.Four{P: three([3]float64(top.Known[:3])), E: top.Known[3]}}
	if top.Conserved {
		spec.Conserved = constraint.AllComponents
	}
	switch top.Vertex {
	case "free":
		spec.Vertex = constraint.VertexFree
	case "measured":
		spec.Vertex = constraint.VertexMeasured
	}
	for _, o := range top.Objects {
		spec.Objects = append(spec.Objects, constraint.Object{
			Beam: o.Beam, Form: forms[o.Form], Measured: o.Measured, MassGeV: o.MassGeV,
			Along: three(o.Along), Repointed: o.Repointed,
		})
	}
	for _, m := range e.Masses {
		spec.Masses = append(spec.Masses, constraint.Mass{Objects: m.Objects, GeV: m.GeV})
	}
	problem, err := constraint.Compile(spec)
	if err != nil {
		t.Fatal(err)
	}
	f := problem.NewFitter()
	f.Vertex.Position = three(e.Vertex)
	for i, o := range e.Objects {
		m := &f.Measurements[i]
		m.Kind = kinds[o.Kind]
		copy(m.Values[:], o.Values)
		m.Covariance = o.Covariance
		m.Origin, m.Cluster = three(o.Origin), three(o.Cluster)
	}
	return f
}

// away returns the largest distance of the fitted parameters from others in standard
// deviations: of the measurement where there is one, else of the fit.
func away(f *constraint.Fitter, top *topology, e *outsideEvent, minimum int) float64 {
	worst := 0.0
	for i, want := range e.Answer.Minima[minimum].Parameters {
		got, fitted := f.Unfolded(i), f.ParameterCovariance(i)
		for a, w := range want {
			at := [3]int{0, 3, 5}[a]
			variance := e.Objects[i].Covariance[at]
			if top.Objects[i].Measured>>a&1 == 0 {
				variance = fitted[at]
			}
			if variance == 0 && got[a] == w {
				continue
			}
			if d := math.Abs(got[a]-w) / math.Sqrt(variance); !(d <= worst) {
				worst = d
			}
		}
	}
	return worst
}

// Fits against scipy: the status, the chi-square within 1e-8 of max(1, chi-square) and
// the parameters within 1e-6 standard deviations. Where scipy found more than one
// minimum, the fit must be at one of them, and how often at the lowest is counted.
func TestOutsideMinimiser(t *testing.T) {
	all := loadOutside(t)
	type tally struct{ events, converged, infeasible, several, lowest, wrong int }
	counts := map[string]*tally{}
	worstSquare, worstPlace, converged, steps := 0.0, 0.0, 0, [2]int{}
	for n := range all.Events {
		e := &all.Events[n]
		top := all.Topologies[e.Topology]
		f := fitterOf(t, &top, e)
		r := f.Fit()
		c := counts[e.Case]
		if c == nil {
			c = &tally{}
			counts[e.Case] = c
		}
		c.events++
		if r.Status.String() != e.Answer.Status {
			c.wrong++
			t.Errorf("event %d (%s, %s): %+v, want %s", n, e.Topology, e.Case, r, e.Answer.Status)
			continue
		}
		if r.Status == constraint.Infeasible {
			c.infeasible++
			continue
		}
		c.converged++
		converged++
		steps[0] += r.Iterations
		steps[1] = max(steps[1], r.Iterations)
		if len(e.Answer.Minima) > 1 {
			c.several++
		}
		which := slices.IndexFunc(e.Answer.Minima, func(m minimum) bool {
			return math.Abs(r.ChiSquare-m.ChiSquare) <= 1e-6*max(1, m.ChiSquare)
		})
		if which < 0 {
			c.wrong++
			t.Errorf("event %d (%s, %s): chi-square %.12g (%+v), want %.12g", n, e.Topology, e.Case, r.ChiSquare, r, e.Answer.Minima[0].ChiSquare)
			continue
		}
		if which == 0 {
			c.lowest++
		} else {
			t.Logf("event %d (%s, %s): at the minimum %.6g, the lowest is %.6g", n, e.Topology, e.Case,
				r.ChiSquare, e.Answer.Minima[0].ChiSquare)
		}
		m := &e.Answer.Minima[which]
		if !(m.Residual <= 1e-9) {
			t.Errorf("event %d: the reference has an optimality residual of %g", n, m.Residual)
		}
		square := math.Abs(r.ChiSquare-m.ChiSquare) / max(1, m.ChiSquare)
		place := away(f, &top, e, which)
		if !(square <= 1e-8) || !(place <= 1e-6) {
			t.Errorf("event %d (%s, %s): chi-square off by %.3g, parameters by %.3g standard deviations", n, e.Topology, e.Case, square, place)
		}
		worstSquare, worstPlace = max(worstSquare, square), max(worstPlace, place)
	}
	for _, name := range slices.Sorted(maps.Keys(counts)) {
		t.Logf("%-12s %+v", name, *counts[name])
	}
	if len(all.Events) < 500 {
		t.Errorf("%d events", len(all.Events))
	}
	t.Logf("%d events, chi-square within %.2g, parameters within %.2g standard deviations, %.2f steps to converge on average, at most %d",
		len(all.Events), worstSquare, worstPlace, float64(steps[0])/float64(converged), steps[1])
}
