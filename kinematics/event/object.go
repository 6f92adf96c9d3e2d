package event

import (
	"math"

	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/num"
)

// Direction returns the unit vector of an object's momentum. The second and
// third parameter must be measured, in the Cartesian sets all three. It is the
// zero vector for a momentum of zero in the Cartesian sets.
//
//	angles:      (sin theta cos phi, sin theta sin phi, cos theta)
//	slopes:      (x', y', 1) / sqrt(1 + x'^2 + y'^2), so z > 0
//	transverse:  (cos phi, sin phi, sinh eta) / cosh eta
//
// Accuracy: a few units in the last place of each component, except that cos
// theta and sin theta are conditioned by theta itself.
func (x *Coordinates) Direction(row int) momentum.Three {
	switch x.Kind {
	case EnergyMomentum, MomentumMass:
		return x.cartesian(row).Unit()
	case TransverseMomentum:
		sin, cos := num.Sincos(x.Columns[2][row])
		eta := x.Columns[1][row]
		k := 1 / num.Cosh(eta)
		return momentum.Three{X: cos * k, Y: sin * k, Z: num.Tanh(eta)}
	case MomentumAngles:
		sinT, cosT := num.Sincos(x.Columns[1][row])
		sinP, cosP := num.Sincos(x.Columns[2][row])
		return momentum.Three{X: sinT * cosP, Y: sinT * sinP, Z: cosT}
	case MomentumSlopes:
		a, b := x.Columns[1][row], x.Columns[2][row]
		k := 1 / math.Sqrt(1+float64(a*a)+float64(b*b))
		return momentum.Three{X: a * k, Y: b * k, Z: k}
	case kindCount:
	}
	return momentum.Three{X: math.NaN(), Y: math.NaN(), Z: math.NaN()}
}

// Momentum returns an object's momentum in GeV; all three parameters must be
// measured. For a photon in the sets that start with the size of the momentum,
// that size is its energy.
func (x *Coordinates) Momentum(row int) momentum.Three {
	switch x.Kind {
	case EnergyMomentum, MomentumMass:
		return x.cartesian(row)
	case TransverseMomentum:
		pt := x.Columns[0][row]
		sin, cos := num.Sincos(x.Columns[2][row])
		return momentum.Three{X: pt * cos, Y: pt * sin, Z: pt * num.Sinh(x.Columns[1][row])}
	case MomentumAngles, MomentumSlopes:
		return x.Direction(row).Scale(x.Columns[0][row])
	case kindCount:
	}
	return momentum.Three{X: math.NaN(), Y: math.NaN(), Z: math.NaN()}
}

// WithMass returns an object's four-momentum under the hypothesis that it has
// the mass m >= 0: the measured momentum, and the energy that goes with m. The
// hypothesis wins over an energy or mass column. For a photon m is 0.
func (x *Coordinates) WithMass(row int, m float64) momentum.Four {
	return momentum.WithMass(x.Momentum(row), m)
}

// AsGiven returns an object's four-momentum with the energy or the mass that the
// event states, and false for the sets that state neither.
func (x *Coordinates) AsGiven(row int) (momentum.Four, bool) {
	switch x.Kind {
	case EnergyMomentum:
		return momentum.Four{P: x.cartesian(row), E: x.Columns[3][row]}, true
	case MomentumMass, TransverseMomentum:
		return x.WithMass(row, x.Columns[3][row]), true
	case MomentumAngles, MomentumSlopes, kindCount:
	}
	return momentum.Four{}, false
}

func (x *Coordinates) cartesian(row int) momentum.Three {
	return momentum.Three{X: x.Columns[0][row], Y: x.Columns[1][row], Z: x.Columns[2][row]}
}
