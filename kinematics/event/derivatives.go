package event

import (
	"math"

	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/num"
)

// Derivatives returns an object's momentum and its derivatives in the three parameters:
//
//	Cartesian:   the unit vectors
//	angles:      n,  p (cos theta cos phi, cos theta sin phi, -sin theta),
//	             p (-sin theta sin phi, sin theta cos phi, 0)
//	slopes:      n,  p k (e_x - n_x n),  p k (e_y - n_y n),  k = 1/sqrt(1 + x'^2 + y'^2)
//	transverse:  (cos phi, sin phi, sinh eta),  (0, 0, pt cosh eta),
//	             pt (-sin phi, cos phi, 0)
//
// with p = (the first parameter) n. Where the first parameter is not measured it counts
// as 1 GeV, so that the other two say how the direction changes. Each component is good
// to some units in the last place of its largest term.
func (x *Coordinates) Derivatives(row int) (p momentum.Three, columns [3]momentum.Three) {
	switch x.Kind {
	case EnergyMomentum, MomentumMass:
		return x.cartesian(row), [3]momentum.Three{{X: 1}, {Y: 1}, {Z: 1}}
	case TransverseMomentum:
		pt := orOne(x.Columns[0][row])
		eta := x.Columns[1][row]
		sin, cos := num.Sincos(x.Columns[2][row])
		columns = [3]momentum.Three{
			{X: cos, Y: sin, Z: num.Sinh(eta)}, {Z: pt * num.Cosh(eta)}, {X: -pt * sin, Y: pt * cos},
		}
		return columns[0].Scale(pt), columns
	case MomentumAngles:
		size := orOne(x.Columns[0][row])
		sinT, cosT := num.Sincos(x.Columns[1][row])
		sinP, cosP := num.Sincos(x.Columns[2][row])
		columns = [3]momentum.Three{
			{X: sinT * cosP, Y: sinT * sinP, Z: cosT},
			momentum.Three{X: cosT * cosP, Y: cosT * sinP, Z: -sinT}.Scale(size),
			momentum.Three{X: -sinT * sinP, Y: sinT * cosP}.Scale(size),
		}
		return columns[0].Scale(size), columns
	case MomentumSlopes:
		size := orOne(x.Columns[0][row])
		n := x.Direction(row)
		columns = [3]momentum.Three{
			n,
			momentum.Three{X: 1}.Sub(n.Scale(n.X)).Scale(size * n.Z),
			momentum.Three{Y: 1}.Sub(n.Scale(n.Y)).Scale(size * n.Z),
		}
		return n.Scale(size), columns
	case kindCount:
	}
	nan := momentum.Three{X: math.NaN(), Y: math.NaN(), Z: math.NaN()}
	return nan, [3]momentum.Three{nan, nan, nan}
}

// orOne returns a finite number above zero and 1 in place of others.
func orOne(p float64) float64 {
	if p > 0 && p-p == 0 {
		return p
	}
	return 1
}
