package momentum

import (
	"math"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/num"
)

// TwoBody is the state of two particles in their common rest frame, in GeV.
type TwoBody struct {
	// P is the momentum of each.
	P float64
	// E1 and E2 are their total energies.
	E1, E2 float64
	// T1 and T2 are their kinetic energies, not rebuilt from E1 and E2.
	T1, T2 float64
	// Excess is the energy above threshold, the total mass less both masses; it
	// equals T1 + T2.
	Excess float64
}

// TwoBodyMomentum returns the momentum and energies of two particles of masses m1
// and m2 in the rest frame of their total mass m:
//
//	P  = sqrt((m-m1-m2)(m+m1+m2)(m-m1+m2)(m+m1-m2)) / (2m)
//	T1 = (m-m1-m2)(m-m1+m2) / (2m),  E1 = m1 + T1
//
// All terms are positive above threshold and each factor is exact to one rounding
// (see num.Sum3), so every field is within 10 x 2^-53 relative however near the
// threshold.
//
// Domain: m > 0; m1, m2 >= 0; all 0 or within 1e-75..1e75 GeV. Special cases:
// m = m1 + m2 exactly gives P = 0; m < m1 + m2 is a BelowThreshold fault whose
// value is the deficit.
//
// Source: Review of Particle Physics (2024), Kinematics, two-body decays (equation
// numbers not at hand); E. Byckling and K. Kajantie, Particle Kinematics (1973),
// section II.6.
func TwoBodyMomentum(m, m1, m2 float64) (TwoBody, error) {
	if err := checkTwoBody("momentum.TwoBodyMomentum", "mass_gev", m, m1, m2); err != nil {
		return TwoBody{}, err
	}
	q := num.Sum3(m, -m1, -m2)
	if q < 0 {
		return TwoBody{}, belowThreshold("momentum.TwoBodyMomentum", -q)
	}
	return twoBody(q, m, num.Sum3(m, m1, m2), num.Sum3(m, m1, -m2), num.Sum3(m, -m1, m2), m1, m2), nil
}

// TwoBodyMomentumS returns the same as TwoBodyMomentum for the total mass squared
// s in GeV^2, with the excess energy from ExcessS and the same accuracy.
func TwoBodyMomentumS(s, m1, m2 float64) (TwoBody, error) {
	if err := checkTwoBody("momentum.TwoBodyMomentumS", "s_gev2", s, m1, m2); err != nil {
		return TwoBody{}, err
	}
	q, side := ExcessS(s, m1, m2)
	if side == num.Below {
		return TwoBody{}, belowThreshold("momentum.TwoBodyMomentumS", -q)
	}
	return twoBodyAt(q, math.Sqrt(s), m1, m2), nil
}

// TwoBodyFromExcess returns the same as TwoBodyMomentum for a given excess energy
// q = m - m1 - m2 in GeV, which may be too small beside the masses for m to carry.
//
// Domain: q >= 0; m1, m2 >= 0; q + m1 + m2 > 0.
func TwoBodyFromExcess(q, m1, m2 float64) (TwoBody, error) {
	const op = "momentum.TwoBodyFromExcess"
	if q < 0 {
		return TwoBody{}, belowThreshold(op, -q)
	}
	m := q + m1 + m2
	if err := checkTwoBody(op, "excess_gev", m, m1, m2); err != nil {
		return TwoBody{}, err
	}
	return twoBodyAt(q, m, m1, m2), nil
}

// twoBodyAt writes the factors with the excess energy, as sums of positive terms:
// m-m1+m2 = q+2m2 and m+m1-m2 = q+2m1.
func twoBodyAt(q, m, m1, m2 float64) TwoBody {
	return twoBody(q, m, m+m1+m2, q+float64(2*m1), q+float64(2*m2), m1, m2)
}

// twoBody puts the four factors q = m-m1-m2, sum = m+m1+m2, heavy1 = m+m1-m2 and
// heavy2 = m-m1+m2 together.
func twoBody(q, m, sum, heavy1, heavy2, m1, m2 float64) TwoBody {
	t1 := q * heavy2 / (2 * m)
	t2 := q * heavy1 / (2 * m)
	return TwoBody{
		P:  math.Sqrt(q*sum) * math.Sqrt(heavy1*heavy2) / (2 * m),
		E1: m1 + t1, E2: m2 + t2,
		T1: t1, T2: t2,
		Excess: q,
	}
}

// checkTwoBody refuses a total that is not a positive finite number and masses that
// are not finite or negative.
func checkTwoBody(op, field string, total, m1, m2 float64) error {
	if !(total > 0) || math.IsInf(total, 0) {
		return fault.Number(field, total, "> 0 and finite").In(op)
	}
	for _, m := range [...]struct {
		field string
		value float64
	}{{"mass_1_gev", m1}, {"mass_2_gev", m2}} {
		if err := checkMass(op, m.field, m.value); err != nil {
			return err
		}
	}
	return nil
}

// checkMass refuses a mass that is negative, infinite or not a number.
func checkMass(op, field string, m float64) error {
	if !(m >= 0) || math.IsInf(m, 0) {
		return fault.Number(field, m, ">= 0 and finite").In(op)
	}
	return nil
}

// belowThreshold is the fault for a missing energy in GeV.
func belowThreshold(op string, deficit float64) error {
	return fault.New(fault.BelowThreshold, "deficit_gev", fault.Text(deficit), "0").In(op)
}
