package momentum

import (
	"math"

	"example.org/kinegate/kinematics/fault"
)

// Boost is the pure boost, without rotation, that joins the rest frame of a body to
// the frame in which the body has a given momentum.
type Boost struct {
	// gb is gamma times beta, the momentum over the mass.
	gb Three
	// gamma is the Lorentz factor.
	gamma float64
	// slip is 1/(gamma+1).
	slip float64
}

// NewBoost returns the boost of a body of mass m with momentum q in GeV.
//
//	gamma beta = q/m,  gamma = sqrt(1 + (q/m)^2)
//
// Domain: m > 0; |q|/m at most 1e75. A massless body has no rest frame: an Invalid
// fault.
func NewBoost(q Three, m float64) (Boost, error) {
	gb := Three{q.X / m, q.Y / m, q.Z / m}
	square := gb.Square()
	if !(m > 0) || math.IsInf(square, 0) || math.IsNaN(square) {
		return Boost{}, fault.Number("mass_gev", m, "> 0 and not below 1e-75 of the momentum").In("momentum.NewBoost")
	}
	gamma := math.Sqrt(1 + square)
	return Boost{gb: gb, gamma: gamma, slip: 1 / (gamma + 1)}, nil
}

// BoostOfBeta returns the boost of a body with velocity beta (c = 1).
//
//	gamma = 1/sqrt((1-|beta|)(1+|beta|))
//
// Domain: |beta| < 1, else an Outside fault.
func BoostOfBeta(beta Three) (Boost, error) {
	b := beta.Norm()
	if !(b < 1) {
		return Boost{}, fault.New(fault.Outside, "beta", fault.Text(b), "< 1").In("momentum.BoostOfBeta")
	}
	gamma := 1 / math.Sqrt((1-b)*(1+b))
	return Boost{gb: beta.Scale(gamma), gamma: gamma, slip: 1 / (gamma + 1)}, nil
}

// Gamma returns the Lorentz factor of the boost.
func (b *Boost) Gamma() float64 { return b.gamma }

// FromRest takes a four-momentum given in the body's rest frame to the frame in
// which the body moves:
//
//	E' = gamma E + gb.p
//	p' = p + gb (E + gb.p/(gamma+1)),  gb = gamma beta
//
// Accuracy: each component within max(4e-15, 4 x 2^-52 x its condition number). The
// form has no gamma - 1 and no division by beta^2, which would cancel for a slow
// body.
func (b *Boost) FromRest(p Four) Four { return b.apply(p, 1) }

// ToRest takes a four-momentum to the rest frame of the body; it undoes FromRest.
func (b *Boost) ToRest(p Four) Four { return b.apply(p, -1) }

func (b *Boost) apply(p Four, sign float64) Four {
	along := float64(sign * b.gb.Dot(p.P))
	k := sign * (p.E + float64(along*b.slip))
	return Four{
		Three{
			p.P.X + float64(b.gb.X*k),
			p.P.Y + float64(b.gb.Y*k),
			p.P.Z + float64(b.gb.Z*k),
		},
		float64(b.gamma*p.E) + along,
	}
}
