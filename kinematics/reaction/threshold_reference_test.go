package reaction_test

import (
	"math"
	"strings"
	"testing"

	"example.org/kinegate/kinematics/internal/reference"
	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/reaction"
)

func TestPrecisionThreshold(t *testing.T) {
	reference.Precision(t, "threshold", func(in reference.Input) (reference.Output, string) {
		th, err := reaction.ThresholdOnTarget(in.Float("m_beam"), in.Float("m_target"), in.Floats("m_final")...)
		if err != nil {
			t.Errorf("%s: %v", in.ID, err)
		}
		return reference.Output{
			"sqrt_s": th.SqrtS, "E_beam": th.Beam.Total, "T_beam": th.Beam.Kinetic, "p_beam": th.Beam.Momentum,
			"open_at_rest": th.OpenAtRest,
		}, ""
	})
}

// thresholdOfCheck answers a check from its masses, and again from the names of its
// particles through text and table. Masses in MeV are used as they stand: the formulas
// have no unit.
func thresholdOfCheck(t *testing.T, c reference.Check) (any, bool) {
	t.Helper()
	if c.Has("m_nucleus_MeV") {
		excess, _ := momentum.Excess(c.Float("m_nucleus_MeV"), c.Floats("m_parts_MeV")...)
		return -excess, true
	}
	th, err := reaction.ThresholdOnTarget(c.Float("m_beam_MeV"), c.Float("m_target_MeV"), c.Floats("m_final_MeV")...)
	if err != nil {
		t.Errorf("%s: %v", c.ID, err)
	}
	r := parse(t, table(t), c.Text("beam")+" "+c.Text("target")+" -> "+strings.Join(c.Texts("final"), " "))
	channel, err := reaction.Describe(r, reaction.InitialState{})
	if err != nil {
		t.Errorf("%s: %v", c.ID, err)
	}
	pick := func(b reaction.BeamPoint) float64 {
		switch c.Text("kind") {
		case "kinetic energy":
			return b.Kinetic
		case "momentum":
			return b.Momentum
		}
		return b.Total
	}
	value := pick(th.Beam)
	if named := pick(channel.Nominal.Threshold.Beam) * 1000; !(math.Abs(named-value) <= 1e-12*value) {
		t.Errorf("%s: %v MeV from names, %v MeV from masses", c.ID, named, value)
	}
	if strings.HasPrefix(c.Unit, "GeV") {
		return value / 1000, true
	}
	return value, true
}

func TestChecksThresholdPhoton(t *testing.T) {
	reference.Checks(t, "threshold-photon", func(c reference.Check) (any, bool) { return thresholdOfCheck(t, c) })
}

func TestChecksThresholdHadronLepton(t *testing.T) {
	reference.Checks(t, "threshold-hadron-lepton", func(c reference.Check) (any, bool) { return thresholdOfCheck(t, c) })
}

func TestChecksPairProductionField(t *testing.T) {
	reference.Checks(t, "pair-production-field", func(c reference.Check) (any, bool) {
		name := "m_e_MeV"
		if !c.Has(name) {
			name = "m_pair_MeV"
		}
		lepton, target := c.Float(name), c.Float("m_target_MeV")
		th, err := reaction.ThresholdOnTarget(0, target, lepton, lepton, target)
		if err != nil {
			t.Errorf("%s: %v", c.ID, err)
		}
		return th.Beam.Total, true
	})
}

// TestChecksCosmicThreshold goes through text, table and two beams.
func TestChecksCosmicThreshold(t *testing.T) {
	tab := table(t)
	reference.Checks(t, "cosmic-threshold", func(c reference.Check) (any, bool) {
		text := "gamma gamma -> e+ e-"
		switch {
		case strings.Contains(c.Quantity, "p pi0"):
			text = "p gamma -> p pi0"
		case strings.Contains(c.Quantity, "p e+ e-"):
			text = "p gamma -> p e+ e-"
		}
		angle := math.Pi
		if c.Has("angle") {
			angle = c.Float("angle")
		}
		channel, err := reaction.Describe(parse(t, tab, text), reaction.InitialState{
			Kind: reaction.TwoBeams, Angle: angle,
			Beam1: reaction.BeamMotion{Given: reaction.ByTotal, Value: 1},
			Beam2: reaction.BeamMotion{Given: reaction.ByTotal, Value: c.Float("photon_energy_eV") * 1e-9},
		})
		if err != nil {
			t.Errorf("%s: %v", c.ID, err)
		}
		return channel.Nominal.Threshold.Beam.Total * 1e9, true
	})
}
