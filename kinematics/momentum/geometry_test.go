package momentum

import (
	"math"
	"testing"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/num"
)

// near reports whether two vectors agree within the bound times the length of b.
func near(a, b Three, bound float64) bool { return a.Sub(b).Norm() <= bound*b.Norm() }

func TestBoostThereAndBack(t *testing.T) {
	s := newSampler()
	for range 20_000 {
		q, m := s.vector(), s.magnitude(-2, 2)
		boost, err := NewBoost(q, m)
		if err != nil {
			t.Fatal(err)
		}
		p := WithMass(s.vector(), s.mass())
		back := boost.ToRest(boost.FromRest(p))
		// There and back each lose up to gamma^2 of an ulp of the energy.
		bound := 1e-15 * boost.Gamma() * boost.Gamma() * p.E
		if off := math.Abs(back.E-p.E) + back.P.Sub(p.P).Norm(); !(off <= 4*bound) {
			t.Fatalf("boost %v/%v of %+v comes back as %+v, off by %.3g", q, m, p, back, off)
		}
		rest := boost.ToRest(WithMass(q, m))
		if off := rest.P.Norm(); !(off <= 1e-15*boost.Gamma()*WithMass(q, m).E) {
			t.Fatalf("the body itself has momentum %.3g in its rest frame", off)
		}
	}
}

func TestBoostOfBeta(t *testing.T) {
	boost, err := BoostOfBeta(Three{Z: 0.6})
	if err != nil {
		t.Fatal(err)
	}
	// gamma = 1.25, gamma beta = 0.75: exact decimal textbook values.
	got := boost.FromRest(Four{E: 4})
	if math.Abs(got.E-5) > 1e-15 || math.Abs(got.P.Z-3) > 1e-15 || got.P.X != 0 || got.P.Y != 0 {
		t.Errorf("got %+v, want energy 5 and pz 3", got)
	}
	_, err = BoostOfBeta(Three{X: 1})
	checkFault(t, err, fault.Outside, "beta")
	_, err = NewBoost(Three{X: 1}, 0)
	checkFault(t, err, fault.Invalid, "mass_gev")
	_, err = NewBoost(Three{X: math.NaN()}, 1)
	checkFault(t, err, fault.Invalid, "mass_gev")
}

// checkAxes holds a frame to right-handed orthogonal unit axes.
func checkAxes(t *testing.T, f Frame) {
	t.Helper()
	const bound = 4e-15
	for _, c := range []struct {
		name      string
		got, want float64
	}{
		{"|x|", f.X.Norm(), 1},
		{"|y|", f.Y.Norm(), 1},
		{"|z|", f.Z.Norm(), 1},
		{"x.y", f.X.Dot(f.Y), 0},
		{"y.z", f.Y.Dot(f.Z), 0},
		{"z.x", f.Z.Dot(f.X), 0},
		{"(x cross y).z", f.X.Cross(f.Y).Dot(f.Z), 1},
	} {
		if math.Abs(c.got-c.want) > bound {
			t.Errorf("%s = %.17g, want %v", c.name, c.got, c.want)
		}
	}
}

func TestBeamFrame(t *testing.T) {
	for _, c := range []struct {
		name   string
		p1, p2 Three
		x, z   Three
	}{
		{"right angle", Three{X: 5}, Three{Y: 2}, Three{1, 1, 0}, Three{1, -1, 0}},
		{"head on along z", Three{Z: 7}, Three{Z: -4}, Three{X: 1}, Three{Z: 1}},
		{"head on along -z", Three{Z: -7}, Three{Z: 4}, Three{X: 1}, Three{Z: -1}},
		{"head on along x", Three{X: 7}, Three{X: -4}, Three{Y: 1}, Three{X: 1}},
		{"parallel along z", Three{Z: 7}, Three{Z: 4}, Three{X: 1}, Three{Z: 1}},
		{"small crossing angle", Three{0.01, 0, 7}, Three{0.01, 0, -7}, Three{X: 1}, Three{Z: 1}},
	} {
		t.Run(c.name, func(t *testing.T) {
			f, err := BeamFrame(c.p1, c.p2)
			if err != nil {
				t.Fatal(err)
			}
			checkAxes(t, f)
			if !near(f.X, c.x.Unit(), 4e-15) || !near(f.Z, c.z.Unit(), 4e-15) {
				t.Errorf("x = %v, z = %v, want %v, %v", f.X, f.Z, c.x.Unit(), c.z.Unit())
			}
		})
	}
	s := newSampler()
	for range 2000 {
		a := s.vector()
		b := s.vector()
		if s.IntN(2) == 0 {
			b = s.nudged(a.Neg())
		}
		f, err := BeamFrame(a, b)
		if err != nil {
			t.Fatal(err)
		}
		checkAxes(t, f)
		v := s.vector()
		if !near(f.OutOf(f.Into(v)), v, 4e-15) {
			t.Fatalf("%v comes back as %v", v, f.OutOf(f.Into(v)))
		}
	}
	_, err := BeamFrame(Three{}, Three{Z: 1})
	checkFault(t, err, fault.Invalid, "momentum_1")
	_, err = BeamFrame(Three{Z: 1}, Three{Z: math.NaN()})
	checkFault(t, err, fault.Invalid, "momentum_2")
}

func TestBeamsAtAngleLieInTheirFrame(t *testing.T) {
	for _, angle := range []float64{0, 1e-9, 0.3, math.Pi / 2, 3, math.Pi} {
		a, b := BeamsAtAngle(0.938, 7, 0.000511, 2, angle)
		if got := a.P.Angle(b.P); math.Abs(got-angle) > 4e-15 {
			t.Errorf("angle %v comes back as %v", angle, got)
		}
		f, err := BeamFrame(a.P, b.P)
		if err != nil {
			t.Fatal(err)
		}
		if !near(f.X, Three{X: 1}, 4e-15) || !near(f.Z, Three{Z: 1}, 4e-15) {
			t.Errorf("angle %v: axes %+v, want the laboratory's", angle, f)
		}
		want := CollideBeams(0.938, 7, 0.000511, 2, angle)
		// The components are rounded, which the sum of large energies amplifies.
		if got := MassSquared(a, b); math.Abs(got-want.S) > 1e-15*(a.E+b.E)*(a.E+b.E) {
			t.Errorf("angle %v: s = %v, want %v", angle, got, want.S)
		}
	}
}

func TestHelicityFrame(t *testing.T) {
	f, err := HelicityFrame(Three{1, 1, 0}, Three{Z: 1})
	if err != nil {
		t.Fatal(err)
	}
	checkAxes(t, f)
	if !near(f.Z, Three{1, 1, 0}.Unit(), 1e-15) || !near(f.Y, Three{-1, 1, 0}.Unit(), 1e-15) {
		t.Errorf("got %+v", f)
	}
	_, err = HelicityFrame(Three{Z: 2}, Three{Z: -1})
	checkFault(t, err, fault.Invalid, "normal")
}

func TestRotate(t *testing.T) {
	got := Three{X: 2}.Rotate(Three{Z: 1}, math.Pi/2)
	if !near(got, Three{Y: 2}, 1e-15) {
		t.Errorf("got %v, want y", got)
	}
	s := newSampler()
	for range 2000 {
		a, axis, angle := s.vector(), s.direction(), 6*s.Float64()-3
		turned := a.Rotate(axis, angle)
		if off := num.RelativeError(turned.Norm(), a.Norm()); off > 4e-15 {
			t.Fatalf("the length changes by %.3g", off)
		}
		if !near(turned.Rotate(axis, -angle), a, 4e-15) {
			t.Fatalf("%v does not come back", a)
		}
	}
}

func TestCoordinatesThereAndBack(t *testing.T) {
	s := newSampler()
	for range 5000 {
		theta, phi, p := math.Pi*s.Float64(), math.Pi*(2*s.Float64()-1), s.magnitude(-3, 3)
		a := FromAngles(p, theta, phi)
		if math.Abs(a.Theta()-theta) > 4e-15 || math.Abs(a.Phi()-phi) > 4e-15 || num.RelativeError(a.Norm(), p) > 1e-15 {
			t.Fatalf("(%v, %v, %v) comes back as (%v, %v, %v)", p, theta, phi, a.Norm(), a.Theta(), a.Phi())
		}
		sx, sy := s.Float64()-0.5, s.Float64()-0.5
		backX, backY := FromSlopes(p, sx, sy).Slopes()
		if num.RelativeError(backX, sx) > 1e-15 || num.RelativeError(backY, sy) > 1e-15 {
			t.Fatalf("slopes (%v, %v) come back as (%v, %v)", sx, sy, backX, backY)
		}
		eta := 12*s.Float64() - 6
		b := FromPseudorapidity(p, eta, phi)
		if math.Abs(Pseudorapidity(b)-eta) > 4e-15*math.Max(1, math.Abs(eta)) || num.RelativeError(b.Transverse(), p) > 1e-15 {
			t.Fatalf("pseudorapidity %v comes back as %v", eta, Pseudorapidity(b))
		}
	}
}

func TestDirectionsOnTheAxis(t *testing.T) {
	minus := math.Copysign(0, -1)
	for _, c := range []struct {
		name       string
		a          Three
		theta, phi float64
	}{
		{"zero", Three{}, 0, 0},
		{"along z", Three{Z: 1}, 0, 0},
		{"against z", Three{Z: -1}, math.Pi, 0},
		{"against x", Three{X: -1}, math.Pi / 2, math.Pi},
		{"against x from below", Three{X: -1, Y: minus}, math.Pi / 2, math.Pi},
	} {
		if c.a.Theta() != c.theta || c.a.Phi() != c.phi {
			t.Errorf("%s: theta %v, phi %v, want %v, %v", c.name, c.a.Theta(), c.a.Phi(), c.theta, c.phi)
		}
	}
}

// TestAngle uses a right triangle whose small angle is known: atan(d) for (1, d).
func TestAngle(t *testing.T) {
	for _, d := range []float64{1e-70, 1e-20, 1e-9, 1e-3, 1} {
		got := Three{X: 1}.Angle(Three{1, d, 0})
		if off := num.RelativeError(got, num.Atan(d)); off > 1e-15 {
			t.Errorf("d = %v: got %v, relative error %.3g", d, got, off)
		}
	}
	if got := (Three{X: 1}).Angle(Three{X: -2}); got != math.Pi {
		t.Errorf("opposite vectors: %v, want pi", got)
	}
}

func TestRapidityOnTheAxis(t *testing.T) {
	inf := math.Inf(1)
	if got := Rapidity(Three{Z: -3}, 0); got != -inf {
		t.Errorf("a photon along -z: %v, want -Inf", got)
	}
	if got := Pseudorapidity(Three{}); !math.IsNaN(got) {
		t.Errorf("no direction: %v, want NaN", got)
	}
}

func TestPhotonPairMasses(t *testing.T) {
	energies, directions := photonEvent(6)
	out := make([]float64, PhotonPairCount(6))
	masses := PhotonPairMasses(out, energies, directions)
	if len(masses) != 15 {
		t.Fatalf("%d masses, want 15", len(masses))
	}
	k := 0
	for i := range energies {
		for j := i + 1; j < len(energies); j++ {
			a := NewOnShell(directions[i].Scale(energies[i]), 0)
			b := NewOnShell(directions[j].Scale(energies[j]), 0)
			squared := PhotonPairMassSquared(energies[i], energies[j], directions[i], directions[j])
			if masses[k] != math.Sqrt(squared) {
				t.Errorf("pair %d, %d: %v, single %v", i, j, masses[k], math.Sqrt(squared))
			}
			if off := num.RelativeError(squared, MassSquaredOnShell(a, b)); off > closedForm {
				t.Errorf("pair %d, %d: relative difference %.3g from the on-shell form", i, j, off)
			}
			angles := PhotonPairMassSquaredAngles(energies[i], directions[i].Theta(), directions[i].Phi(),
				energies[j], directions[j].Theta(), directions[j].Phi())
			if off := num.RelativeError(squared, angles); off > closedForm {
				t.Errorf("pair %d, %d: relative difference %.3g from the form in angles", i, j, off)
			}
			k++
		}
	}
	for _, c := range []struct{ room, n, want int }{{0, 6, 0}, {7, 6, 7}, {15, 1, 0}, {15, 0, 0}} {
		if got := PhotonPairMasses(make([]float64, c.room), energies[:c.n], directions); len(got) != c.want {
			t.Errorf("room %d, %d photons: %d masses, want %d", c.room, c.n, len(got), c.want)
		}
	}
}

// TestPhotonPairSmallAngles compares the form in angles with E1 E2 d^2, its limit, where the
// next term d^2/12 is below a rounding.
func TestPhotonPairSmallAngles(t *testing.T) {
	for _, d := range []float64{0x1p-30, 0x1p-40, 0x1p-50} {
		got := PhotonPairMassSquaredAngles(3, 0.5, 1, 5, 0.5+d, 1)
		if off := num.RelativeError(got, 15*d*d); off > closedForm {
			t.Errorf("polar difference %v: relative error %.3g", d, off)
		}
		sine := num.Sin(0.5)
		got = PhotonPairMassSquaredAngles(3, 0.5, 1, 5, 0.5, 1+d)
		if off := num.RelativeError(got, 15*d*d*sine*sine); off > closedForm {
			t.Errorf("azimuth difference %v: relative error %.3g", d, off)
		}
	}
}

func TestCollideTarget(t *testing.T) {
	// A photon on a proton at the threshold of gamma p -> p pi0: s = (mp + mpi)^2 by
	// E = mpi (1 + mpi/(2 mp)).
	const proton, pion = 0.93827208943, 0.1349768
	energy := pion * (1 + pion/(2*proton))
	state := CollideTarget(0, energy, proton)
	if off := num.RelativeError(state.Excess, pion); off > closedForm {
		t.Errorf("excess %v, want %v", state.Excess, pion)
	}
	if off := num.RelativeError(state.SqrtS, proton+pion); off > closedForm {
		t.Errorf("sqrt(s) %v, want %v", state.SqrtS, proton+pion)
	}
	s := newSampler()
	for range 5000 {
		m1, m2, p := s.mass(), s.magnitude(-4, 2), s.magnitude(-6, 6)
		beams, target := CollideBeams(m1, p, m2, 0, 0), CollideTarget(m1, NewOnShell(Three{Z: p}, m1).Kinetic(), m2)
		if off := num.RelativeError(beams.Excess, target.Excess); off > closedForm {
			t.Fatalf("m1 %v, m2 %v, p %v: excess %v and %v", m1, m2, p, beams.Excess, target.Excess)
		}
	}
}
