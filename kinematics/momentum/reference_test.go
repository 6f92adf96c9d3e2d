package momentum

import (
	"testing"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/internal/reference"
)

func fours(rows [][]float64) []Four {
	out := make([]Four, len(rows))
	for i, r := range rows {
		out[i] = four(r)
	}
	return out
}

func four(r []float64) Four { return Four{Three{r[0], r[1], r[2]}, r[3]} }

func components(p Four) []float64 { return []float64{p.P.X, p.P.Y, p.P.Z, p.E} }

// massOutput is the mass squared and, where it exists, the mass.
func massOutput(squared float64) reference.Output {
	out := reference.Output{"m2": squared}
	if m, ok := Mass(squared); ok {
		out["m"] = m
	}
	return out
}

// refusal translates a fault to the word of the reference file.
func refusal(t *testing.T, err error) string {
	t.Helper()
	if err == nil {
		return ""
	}
	kind, ok := fault.KindOf(err)
	if !ok || kind != fault.BelowThreshold {
		t.Fatalf("unexpected error: %v", err)
	}
	return "below_threshold"
}

func TestPrecisionInvariantMassE(t *testing.T) {
	reference.Precision(t, "invariant_mass_E", func(in reference.Input) (reference.Output, string) {
		return massOutput(MassSquared(fours(in.Rows("p4"))...)), ""
	})
}

func TestPrecisionInvariantMassM(t *testing.T) {
	reference.Precision(t, "invariant_mass_m", func(in reference.Input) (reference.Output, string) {
		rows := in.Rows("p3m")
		particles := make([]OnShell, len(rows))
		for i, r := range rows {
			particles[i] = NewOnShell(Three{r[0], r[1], r[2]}, r[3])
		}
		return massOutput(MassSquaredOnShell(particles...)), ""
	})
}

func TestPrecisionPhotonPairMass(t *testing.T) {
	reference.Precision(t, "photon_pair_mass", func(in reference.Input) (reference.Output, string) {
		return reference.Output{"m": PhotonPairMass(in.Float("E1"), in.Float("E2"), in.Float("theta"))}, ""
	})
}

func TestPrecisionKallen(t *testing.T) {
	reference.Precision(t, "kallen", func(in reference.Input) (reference.Output, string) {
		return reference.Output{"lambda": KallenSquares(in.Float("a"), in.Float("b"), in.Float("c"))}, ""
	})
}

func TestPrecisionTwoBodyMomentum(t *testing.T) {
	reference.Precision(t, "two_body_momentum", func(in reference.Input) (reference.Output, string) {
		r, err := TwoBodyMomentum(in.Float("M"), in.Float("m1"), in.Float("m2"))
		return reference.Output{"p": r.P, "E1": r.E1, "E2": r.E2}, refusal(t, err)
	})
}

func TestPrecisionTwoBodyMomentumS(t *testing.T) {
	reference.Precision(t, "two_body_momentum_s", func(in reference.Input) (reference.Output, string) {
		r, err := TwoBodyMomentumS(in.Float("s"), in.Float("m1"), in.Float("m2"))
		return reference.Output{"p": r.P}, refusal(t, err)
	})
}

func boostOf(t *testing.T, in reference.Input) *Boost {
	t.Helper()
	q := in.Floats("q")
	b, err := NewBoost(Three{q[0], q[1], q[2]}, q[3])
	if err != nil {
		t.Fatalf("%s: %v", in.ID, err)
	}
	return &b
}

func TestPrecisionBoostToRest(t *testing.T) {
	reference.Precision(t, "boost_to_rest", func(in reference.Input) (reference.Output, string) {
		return reference.Output{"p": components(boostOf(t, in).ToRest(four(in.Floats("p"))))}, ""
	})
}

func TestPrecisionBoostFromRest(t *testing.T) {
	reference.Precision(t, "boost_from_rest", func(in reference.Input) (reference.Output, string) {
		return reference.Output{"p": components(boostOf(t, in).FromRest(four(in.Floats("p"))))}, ""
	})
}

func TestPrecisionColliderSqrtS(t *testing.T) {
	reference.Precision(t, "collider_sqrt_s", func(in reference.Input) (reference.Output, string) {
		state := CollideBeams(in.Float("m1"), in.Float("p1"), in.Float("m2"), in.Float("p2"), in.Float("angle"))
		return reference.Output{"sqrt_s": state.SqrtS}, ""
	})
}

func TestPrecisionRapidity(t *testing.T) {
	reference.Precision(t, "rapidity", func(in reference.Input) (reference.Output, string) {
		p := Three{in.Float("px"), in.Float("py"), in.Float("pz")}
		return reference.Output{"rapidity": Rapidity(p, in.Float("m")), "pseudorapidity": Pseudorapidity(p)}, ""
	})
}
