package breakup

import (
	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/num"
)

// Given says which quantity of a body's motion a number is.
type Given uint8

// The three ways to give the motion of a body, all in GeV.
const (
	ByMomentum Given = iota
	ByKinetic
	ByTotal
)

// Body is a body by its mass and one quantity of its motion, in GeV. The zero values
// of Given and Value stand for a body at rest.
type Body struct {
	Mass  float64
	Given Given
	Value float64
}

// Smallest and Largest bound the magnitudes of masses, energies and momenta in GeV.
// Products of four of them, with the low words of double-doubles, stay inside the
// doubles.
const (
	Smallest = 1e-30
	Largest  = 1e30
)

// CheckSize refuses a number that is neither 0 nor within Smallest..Largest.
func CheckSize(op, field string, x float64) error {
	if x == 0 || (x >= Smallest && x <= Largest) {
		return nil
	}
	return fault.Number(field, x, "0 or within 1e-30..1e30").In(op)
}

// Check refuses a body whose mass or motion is out of range; field is its path.
func (b Body) Check(op, field string) error {
	if err := CheckSize(op, field+".mass_gev", b.Mass); err != nil {
		return err
	}
	switch b.Given {
	case ByMomentum:
		return CheckSize(op, field+".momentum_gev", b.Value)
	case ByKinetic:
		return CheckSize(op, field+".kinetic_energy_gev", b.Value)
	case ByTotal:
		if !(b.Value >= b.Mass) {
			return fault.Number(field+".total_energy_gev", b.Value, ">= mass "+fault.Text(b.Mass)).In(op)
		}
		return CheckSize(op, field+".total_energy_gev", b.Value)
	}
	return fault.Number(field+".given", float64(b.Given), "momentum, kinetic or total energy").In(op)
}

// Motion returns momentum, kinetic and total energy of the body.
//
//	T = p^2/(E+m);  p = sqrt(T(T+2m));  T = E - m exactly
func (b Body) Motion() (p, t, e num.DD) {
	m := num.FromFloat(b.Mass)
	switch b.Given {
	case ByKinetic:
		t = num.FromFloat(b.Value)
		return t.Mul(t.AddFloat(2 * b.Mass)).Sqrt(), t, m.AddFloat(b.Value)
	case ByTotal:
		t = num.Sum2(b.Value, -b.Mass)
		return t.Mul(num.Sum2(b.Value, b.Mass)).Sqrt(), t, num.FromFloat(b.Value)
	case ByMomentum:
	}
	p = num.FromFloat(b.Value)
	e = p.Square().Add(m.Square()).Sqrt()
	if !e.IsZero() {
		t = p.Square().Div(e.Add(m))
	}
	return p, t, e
}
