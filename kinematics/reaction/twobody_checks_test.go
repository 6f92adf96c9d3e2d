package reaction

import (
	"strings"
	"testing"

	"example.org/kinegate/kinematics/internal/reference"
	"example.org/kinegate/kinematics/momentum"
)

// TestChecksTwoBodyScattering works in MeV where the file does: all functions are
// homogeneous. The checks on photon pairs are those of package decay.
func TestChecksTwoBodyScattering(t *testing.T) {
	limits := func(c reference.Check, beam Body, target, first, second float64) TwoBodyLimits {
		t.Helper()
		collision, err := OnTarget(beam, target)
		if err != nil {
			t.Fatalf("%s: %v", c.ID, err)
		}
		r, err := collision.TwoBody(first, second)
		if err != nil {
			t.Fatalf("%s: %v", c.ID, err)
		}
		return r.Limits()
	}
	reference.Checks(t, "two-body-scattering", func(c reference.Check) (any, bool) {
		switch {
		case c.Has("m_J_GeV"):
			collision, err := AtExcess(0, c.Float("m_p_GeV"), 0, c.Float("m_J_GeV"), c.Float("m_p_GeV"))
			if err != nil {
				t.Fatalf("%s: %v", c.ID, err)
			}
			r, err := collision.TwoBody(c.Float("m_J_GeV"), c.Float("m_p_GeV"))
			if err != nil {
				t.Fatalf("%s: %v", c.ID, err)
			}
			return r.Limits().Transfer[0].Forward, true
		case c.Has("E_beam_total_GeV"):
			beam := Body{Mass: c.Float("m1_GeV"), Given: ByTotal, Value: c.Float("E_beam_total_GeV")}
			return limits(c, beam, c.Float("m2_GeV"), c.Float("m3_GeV"), c.Float("m4_GeV")).Transfer[0].Backward, true
		case strings.HasPrefix(c.Quantity, "largest lab angle"):
			m1, m2 := c.Float("m1_MeV"), c.Float("m2_MeV")
			return limits(c, Body{Mass: m1, Value: m1}, m2, m1, m2).MaxAngle[0], true
		case c.Has("gamma"):
			return symmetricOpening(t, c.Float("gamma")), true
		case c.Has("p_MeV"):
			m, me := c.Float("m_MeV"), c.Float("m_e_MeV")
			return limits(c, Body{Mass: m, Value: c.Float("p_MeV")}, me, m, me).Products[1].Kinetic.Max, true
		case c.Has("E2_GeV"):
			p := func(energy, mass string) float64 {
				motion, err := momentum.MotionFromTotal(c.Float(mass), c.Float(energy))
				if err != nil {
					t.Fatalf("%s: %v", c.ID, err)
				}
				return motion.Momentum
			}
			collision, err := HeadOn(
				Body{Mass: c.Float("m1_GeV"), Value: p("E1_GeV", "m1_GeV")},
				Body{Mass: c.Float("m2_GeV"), Value: p("E2_GeV", "m2_GeV")})
			if err != nil {
				t.Fatalf("%s: %v", c.ID, err)
			}
			return collision.CentreOfMass().SqrtS, true
		}
		return nil, false
	})
}

// symmetricOpening returns the angle between equal masses scattered to 90 degrees in
// the centre-of-mass frame.
func symmetricOpening(t *testing.T, gamma float64) float64 {
	t.Helper()
	collision, err := OnTarget(Body{Mass: 1, Given: ByTotal, Value: gamma}, 1)
	if err != nil {
		t.Fatal(err)
	}
	r, err := collision.TwoBody(1, 1)
	if err != nil {
		t.Fatal(err)
	}
	b := solve(t, &r, CMCosine, 0, 0)[0]
	return b.Products[0].LabAngle + b.Products[1].LabAngle
}
