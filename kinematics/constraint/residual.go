package constraint

import "strconv"

// Residual is what is left of one constraint.
type Residual struct {
	// Before is at the measured values, with unmeasured parameters where the fit
	// starts; After at the fitted ones.
	Before, After float64
}

// Constraints returns the number of constraints of the problem.
func (p *Problem) Constraints() int { return p.constraints() }

// ConstraintName names constraint k: a component of the four-momentum, in the order px,
// py, pz, energy, or a mass by its index in the Spec.
func (p *Problem) ConstraintName(k int) string {
	if k >= len(p.balance) {
		return "mass[" + strconv.Itoa(k-len(p.balance)) + "]"
	}
	switch p.balance[k] {
	case balanceX:
		return "px"
	case balanceY:
		return "py"
	case balanceZ, balanceMinus:
		return "pz"
	case balanceEnergy, balancePlus:
		return "energy"
	}
	return ""
}

// Residual returns the residual of constraint k of the last fit: products less initial
// state in GeV for a component, and the difference of the squares in GeV^2 for a mass.
func (f *Fitter) Residual(k int) Residual {
	p := f.problem
	out := Residual{Before: f.initial[k], After: f.residual[k]}
	if k >= len(p.balance) {
		return out
	}
	// The difference of energy and z stands just before their sum.
	switch p.balance[k] {
	case balanceMinus:
		out.Before = (f.initial[k+1] - f.initial[k]) / 2
		out.After = (f.residual[k+1] - f.residual[k]) / 2
	case balancePlus:
		out.Before = (f.initial[k] + f.initial[k-1]) / 2
		out.After = (f.residual[k] + f.residual[k-1]) / 2
	case balanceX, balanceY, balanceZ, balanceEnergy:
	}
	return out
}
