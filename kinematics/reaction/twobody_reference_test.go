package reaction

import (
	"testing"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/internal/reference"
)

// twoBodyOf returns the collision of a precision case.
func twoBodyOf(t *testing.T, in reference.Input) (TwoBody, string) {
	t.Helper()
	var c Collision
	var err error
	if in.Has("s") {
		c, err = AtSquare(in.Float("m1"), in.Float("m2"), in.Float("s"))
	} else {
		c, err = OnTarget(Body{Mass: in.Float("m1"), Value: in.Float("p1")}, in.Float("m2"))
	}
	if err != nil {
		t.Fatalf("%s: %v", in.ID, err)
	}
	r, err := c.TwoBody(in.Float("m3"), in.Float("m4"))
	if kind, _ := fault.KindOf(err); kind == fault.BelowThreshold {
		return TwoBody{}, "below_threshold"
	}
	if err != nil {
		t.Fatalf("%s: %v", in.ID, err)
	}
	return r, ""
}

func solve(t *testing.T, r *TwoBody, v Variable, product int, x float64) []Branch {
	t.Helper()
	solutions, err := r.Solve(Query{Variable: v, Product: product, Values: []float64{x}})
	if err != nil {
		t.Fatalf("Solve(%d, %v): %v", v, x, err)
	}
	return solutions[0].Branches
}

func TestPrecisionLabAngleSolutions(t *testing.T) {
	reference.Precision(t, "lab_angle_solutions", func(in reference.Input) (reference.Output, string) {
		r, refusal := twoBodyOf(t, in)
		if refusal != "" {
			return nil, refusal
		}
		branches := solve(t, &r, LabAngle, 0, in.Float("theta3"))
		momenta, energies := []float64{}, []float64{}
		for _, b := range branches {
			momenta = append(momenta, b.Products[0].LabMomentum)
			energies = append(energies, b.Products[0].LabEnergy)
		}
		return reference.Output{"n": len(branches), "p3": momenta, "E3": energies}, ""
	})
}

func TestPrecisionMaxLabAngle(t *testing.T) {
	reference.Precision(t, "max_lab_angle", func(in reference.Input) (reference.Output, string) {
		r, refusal := twoBodyOf(t, in)
		limits := r.Limits()
		return reference.Output{"theta_max": limits.MaxAngle[0], "two_branch": limits.TwoBranch[0]}, refusal
	})
}

func TestPrecisionTRange(t *testing.T) {
	reference.Precision(t, "t_range", func(in reference.Input) (reference.Output, string) {
		r, refusal := twoBodyOf(t, in)
		ends := r.Limits().Transfer[0]
		return reference.Output{"t0": ends.Forward, "t1": ends.Backward}, refusal
	})
}

func TestPrecisionJacobian(t *testing.T) {
	reference.Precision(t, "jacobian", func(in reference.Input) (reference.Output, string) {
		r, refusal := twoBodyOf(t, in)
		if refusal != "" {
			return nil, refusal
		}
		p := solve(t, &r, CMCosine, 0, in.Float("cos_cm"))[0].Products[0]
		return reference.Output{
			"p3_lab": p.LabMomentum, "theta3_lab": p.LabAngle, "dOmegaCM_dOmegaLab": p.CMPerLab,
		}, ""
	})
}
