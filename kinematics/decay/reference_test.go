package decay

import (
	"strings"
	"testing"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/internal/reference"
	"example.org/kinegate/kinematics/momentum/breakup"
)

func must[T any](t *testing.T) func(T, error) T {
	t.Helper()
	return func(value T, err error) T {
		t.Helper()
		if err != nil {
			t.Fatal(err)
		}
		return value
	}
}

func TestPrecisionPhotonOpeningLimits(t *testing.T) {
	reference.Precision(t, "photon_opening_limits", func(in reference.Input) (reference.Output, string) {
		g := must[PhotonPair](t)(NewPhotonPair(Parent{Mass: in.Float("m"), Value: in.Float("p")}))
		angle, energy := g.OpeningRange(), g.EnergyRange()
		return reference.Output{
			"theta_min": angle.Min, "theta_max": angle.Max, "E_min": energy.Min, "E_max": energy.Max,
		}, ""
	})
}

// TestTwoBodyAgreesWithPhotonPair holds the general decay against the same cases.
func TestTwoBodyAgreesWithPhotonPair(t *testing.T) {
	reference.Precision(t, "photon_opening_limits", func(in reference.Input) (reference.Output, string) {
		d := must[TwoBody](t)(NewTwoBody(Parent{Mass: in.Float("m"), Value: in.Float("p")}, 0, 0))
		limits := must[Description](t)(Describe(Parent{Mass: in.Float("m"), Value: in.Float("p")}, 0, 0))
		angle, energy := d.Opening(), limits.Daughters[1].Energy
		return reference.Output{
			"theta_min": angle.Min, "theta_max": angle.Max, "E_min": energy.Min, "E_max": energy.Max,
		}, ""
	})
}

func TestPrecisionPhotonOpening(t *testing.T) {
	reference.Precision(t, "photon_opening", func(in reference.Input) (reference.Output, string) {
		d := must[TwoBody](t)(NewTwoBody(Parent{Mass: in.Float("m"), Value: in.Float("p")}, 0, 0))
		p := must[Pair](t)(d.At(in.Float("cos_cm")))
		return reference.Output{
			"E1": p.Daughters[0].Energy, "E2": p.Daughters[1].Energy, "theta": p.Opening,
		}, ""
	})
}

func TestPrecisionDalitzLimits(t *testing.T) {
	reference.Precision(t, "dalitz_limits", func(in reference.Input) (reference.Output, string) {
		d := must[Dalitz](t)(NewDalitz(in.Float("M"), [3]float64{in.Float("m1"), in.Float("m2"), in.Float("m3")}))
		chord, err := d.At(Couple01, in.Float("m12sq"))
		if kind, _ := fault.KindOf(err); kind == fault.Outside {
			return nil, "outside_region"
		}
		if err != nil {
			t.Fatalf("%s: %v", in.ID, err)
		}
		return reference.Output{
			"m13sq_min": chord.From.M02, "m13sq_max": chord.To.M02,
			"m23sq_min": chord.To.M12, "m23sq_max": chord.From.M12,
		}, ""
	})
}

func TestChecksDecayMomentum(t *testing.T) {
	reference.Checks(t, "decay-momentum", func(c reference.Check) (any, bool) {
		return must[float64](t)(LargestMomentum(c.Float("m_parent_MeV"), c.Floats("m_daughters_MeV")...)), true
	})
}

// TestChecksEndpoint works in MeV throughout: all functions are homogeneous.
func TestChecksEndpoint(t *testing.T) {
	const keV, eV = 1e3, 1e6
	limits := func(parent float64, daughters ...float64) breakup.Limits {
		return must[Description](t)(Describe(Parent{Mass: parent}, daughters...)).Daughters[0].Limits
	}
	reference.Checks(t, "endpoint", func(c reference.Check) (any, bool) {
		switch c.ID {
		case "EP-001":
			return limits(c.Float("m_mu_MeV"), c.Float("m_e_MeV"), 0, 0).RestEnergy.Max, true
		case "EP-003":
			return limits(c.Float("m_pi_MeV"), c.Float("m_mu_MeV"), 0).RestKinetic.Max, true
		case "EP-005":
			return limits(c.Float("m_K_MeV"), c.Float("m_mu_MeV"), 0).RestMomentum.Max, true
		case "EP-007":
			return limits(c.Float("m_n_MeV"), c.Float("m_e_MeV"), c.Float("m_p_MeV"), 0).RestKinetic.Max * keV, true
		case "EP-009":
			return limits(c.Float("m_t_MeV"), c.Float("m_e_MeV"), c.Float("m_h_MeV"), 0).RestKinetic.Max * keV, true
		case "EP-011": // Without energy for the neutrino the recoil is that of two bodies.
			return limits(c.Float("m_t_MeV"), c.Float("m_h_MeV"), c.Float("m_e_MeV")).RestKinetic.Max * eV, true
		}
		return nil, false
	})
}

func TestChecksDalitz(t *testing.T) {
	reference.Checks(t, "dalitz", func(c reference.Check) (any, bool) {
		if c.ID == "DZ-022" {
			pi := c.Float("m_pi_MeV")
			d := must[Description](t)(Describe(Parent{Mass: c.Float("m_K_MeV")}, pi, pi, pi))
			return d.Daughters[0].RestKinetic.Max, true
		}
		m := c.Floats("m_GeV")
		d := must[Dalitz](t)(NewDalitz(c.Float("M_GeV"), [3]float64(m)))
		switch {
		case strings.HasPrefix(c.Quantity, "largest m12^2"):
			return must[breakup.Range](t)(d.MassSquaredRange(Couple01)).Max, true
		case strings.HasPrefix(c.Quantity, "m23sq_max"):
			return must[Chord](t)(d.At(Couple01, c.Float("m12sq"))).From.M12, true
		}
		return nil, false
	})
}

// TestChecksTimeDilation works in MeV where the file does.
func TestChecksTimeDilation(t *testing.T) {
	scale := map[string]float64{"m": 1, "cm": 1e2, "um": 1e6}
	reference.Checks(t, "time-dilation", func(c reference.Check) (any, bool) {
		switch {
		case c.Has("gamma"): // In microseconds.
			parent := Parent{Mass: 1, Given: breakup.ByTotal, Value: c.Float("gamma")}
			return must[Flight](t)(NewFlight(parent, c.Float("tau0_us"))).MeanLife, true
		case c.Has("p_MeV"):
			parent := Parent{Mass: c.Float("m_MeV"), Value: c.Float("p_MeV")}
			return must[Flight](t)(NewFlight(parent, c.Float("tau_s"))).MeanLength, true
		}
		return must[Flight](t)(NewFlight(Parent{Mass: 1}, c.Float("tau_s"))).AtRestLength * scale[c.Unit], true
	})
}

// TestChecksTwoBodyScatteringPhotons are the checks of class two-body-scattering that
// ask for a decay; package reaction has the others.
func TestChecksTwoBodyScatteringPhotons(t *testing.T) {
	reference.Checks(t, "two-body-scattering", func(c reference.Check) (any, bool) {
		if !strings.HasPrefix(c.Quantity, "smallest opening angle") {
			return nil, false
		}
		parent := Parent{Mass: c.Float("m_MeV"), Given: breakup.ByTotal, Value: c.Float("E_MeV")}
		g := must[PhotonPair](t)(NewPhotonPair(parent))
		return g.OpeningRange().Min, true
	})
}
