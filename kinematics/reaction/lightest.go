package reaction

import "example.org/kinegate/kinematics/momentum/breakup"

// LightestMass returns the least mass in GeV that the product with the given number can
// have: its own if it is sharp or no decay is stated, otherwise the sum of its daughters'
// least masses. Domain: 0 <= number < len(Products).
func (r *Reaction) LightestMass(number int) float64 {
	return breakup.Sum(massesOf(r.lightest(nil, number))...).Float()
}
