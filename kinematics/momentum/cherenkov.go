package momentum

import (
	"math"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/num"
)

// Cherenkov is the light that a charged particle makes in a medium.
type Cherenkov struct {
	// Radiates tells whether the particle is faster than light in the medium.
	Radiates bool
	// Angle is that of the light from the flight in radians, 0 without light.
	Angle float64
	// Reachable tells whether some speed below that of light radiates: the index is above
	// 1. The thresholds are 0 otherwise.
	Reachable bool
	// ThresholdBeta is the least speed that radiates, and the others are momentum, total
	// and kinetic energy there in GeV; 0 for a massless particle, which always has it.
	ThresholdBeta, ThresholdMomentum, ThresholdTotal, ThresholdKinetic float64
}

// maxIndex bounds the refractive index; that of any medium is far below.
const maxIndex = 1e6

// Cherenkov returns what a charged particle radiates in a medium of the given refractive
// index:
//
//	r = sqrt((n-1)(n+1)),  tan(angle) = sqrt((p r - m)(p r + m))/E  for p r > m
//	beta = 1/n,  p = m/r,  E = m n/r,  T = m/(r (n+r))              at threshold
//
// The first line is cos(angle) = 1/(n beta) without the arc cosine, which loses half of
// the digits for gases, and without 1 - 1/(n beta)^2, which loses them near threshold.
//
// Domain: 0 < index <= 1e6, else an Invalid fault. An index of at most 1, as in a plasma
// or for X-rays, radiates at no speed. Accuracy: max(4e-15, 4 x 2^-52 x condition number).
// Source: I. Frank and I. Tamm, C. R. Acad. Sci. URSS 14 (1937) 109; Review of Particle
// Physics (2024), Passage of particles through matter, Cherenkov radiation (from memory).
func (m *Motion) Cherenkov(index float64) (Cherenkov, error) {
	const op = "momentum.Cherenkov"
	if !(index > 0 && index <= maxIndex) {
		return Cherenkov{}, fault.Number("refractive_index", index, "> 0 and <= "+fault.Text(maxIndex)).In(op)
	}
	if index <= 1 {
		return Cherenkov{}, nil
	}
	r := math.Sqrt((index - 1) * (index + 1))
	c := Cherenkov{
		Reachable: true, ThresholdBeta: 1 / index, ThresholdMomentum: m.Mass / r,
		ThresholdTotal: m.Mass * (index / r), ThresholdKinetic: m.Mass / (r * (index + r)),
	}
	reach := float64(m.Momentum * r)
	if c.Radiates = reach > m.Mass; c.Radiates {
		c.Angle = num.Atan2(math.Sqrt(reach-m.Mass)*math.Sqrt(reach+m.Mass), m.Total)
	}
	return c, nil
}
