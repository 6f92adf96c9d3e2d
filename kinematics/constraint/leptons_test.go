package constraint_test

import (
	"encoding/csv"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"testing"

	"example.org/kinegate/kinematics/constraint"
	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/num"
)

// zMass is the mass of the Z in GeV and muon that of the muon, of particles.csv.
const (
	zMass = 91.188
	muon  = 0.1056583755
)

// lepton is one measured lepton of testdata/open.
type lepton struct {
	charge, kind int
	p            momentum.Three
	mass         float64
}

// fourLeptons reads the events of a file.
func fourLeptons(t *testing.T, name string) [][]lepton {
	t.Helper()
	file, err := os.Open(filepath.Join("..", "..", "testdata", "open", name))
	if err != nil {
		t.Fatal(err)
	}
	defer func() { _ = file.Close() }()
	lines, err := csv.NewReader(file).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	var events [][]lepton
	for _, line := range lines[1:] {
		row := map[string]float64{}
		for k, column := range lines[0] {
			if row[column], err = strconv.ParseFloat(line[k], 64); err != nil {
				t.Fatal(err)
			}
		}
		var found []lepton
		for _, n := range []string{"1", "2", "3", "4"} {
			l := lepton{charge: int(row["Q"+n]), kind: int(math.Abs(row["PID"+n])), mass: muon}
			l.p = momentum.Three{X: row["px"+n], Y: row["py"+n], Z: row["pz"+n]}
			if l.kind == 11 {
				l.mass = electron
			}
			found = append(found, l)
		}
		events = append(events, found)
	}
	return events
}

// measuredLepton assumes resolutions, since the files state none: 1.5 % in transverse
// momentum and 1 mrad in azimuth and in polar angle, at the measured value.
func measuredLepton(l *lepton) constraint.Measurement {
	pt := l.p.Transverse()
	sigma := 0.015 * pt
	return constraint.Measurement{
		Kind: event.TransverseMomentum, MassGeV: l.mass,
		Values: [3]float64{pt, momentum.Pseudorapidity(l.p), l.p.Phi()},
		// d eta = d theta/sin theta, and 1/sin theta = cosh eta.
		Covariance: [6]float64{sigma * sigma, 0, 0, num.Pow(0.001*l.p.Norm()/pt, 2), 0, 1e-6},
	}
}

// The four-lepton events of testdata/open with assumed resolutions, the opposite-charge
// pair of one flavour nearest the Z forced to its mass: the fit converges, the mass
// is met, the other pair stays, and the chi-square is that of the distance of the pair's
// mass from the Z's in its standard deviations, to the order of the curvature.
func TestFourLeptonsAtZMass(t *testing.T) {
	counted, steps, worst := 0, 0, 0.0
	for _, name := range []string{"4mu_2011.csv", "4e_2011.csv", "2e2mu_2011.csv"} {
		for n, found := range fourLeptons(t, name) {
			first, second, nearest := -1, -1, math.Inf(1)
			for i := range found {
				for j := range i {
					a, b := &found[i], &found[j]
					if a.kind != b.kind || a.charge == b.charge {
						continue
					}
					m, _ := momentum.Mass(momentum.MassSquared(momentum.WithMass(a.p, a.mass), momentum.WithMass(b.p, b.mass)))
					if math.Abs(m-zMass) < math.Abs(nearest-zMass) {
						first, second, nearest = i, j, m
					}
				}
			}
			spec := &constraint.Spec{Masses: []constraint.Mass{{Objects: []int{first, second}, GeV: zMass}}}
			for i := range found {
				spec.Objects = append(spec.Objects, object(found[i].mass))
			}
			f := fitter(t, spec)
			for i := range found {
				f.Measurements[i] = measuredLepton(&found[i])
			}
			r := f.Fit()
			if r.Status != constraint.Converged {
				t.Fatalf("%s event %d: %+v", name, n, r)
			}
			m, _ := momentum.Mass(momentum.MassSquared(f.Momentum(first), f.Momentum(second)))
			if math.Abs(m-zMass) > 1e-9 {
				t.Errorf("%s event %d: fitted mass %g", name, n, m)
			}
			for i := range found {
				if i != first && i != second && f.Momentum(i).P.Sub(found[i].p).Norm() > 1e-12*found[i].p.Norm() {
					t.Errorf("%s event %d: lepton %d moved", name, n, i)
				}
			}
			// Each energy counts half in the mass: sigma(m)/m = 1.5 %/sqrt 2, the
			// angles little.
			pull := (nearest - zMass) / (0.015 / math.Sqrt2 * nearest)
			if math.Abs(pull) < 3 {
				worst = max(worst, math.Abs(r.ChiSquare-pull*pull)/(1+pull*pull))
			}
			counted++
			steps = max(steps, r.Iterations)
		}
	}
	if worst > 0.2 {
		t.Errorf("chi-square is off by %.2g of 1 + that of the mass alone", worst)
	}
	t.Logf("%d events, at most %d steps, chi-square within %.2g of 1 + that of the mass alone", counted, steps, worst)
}
