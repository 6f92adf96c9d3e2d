package photon

import (
	"example.org/kinegate/kinematics/num"
)

// slowVelocitySquared is the beta^2 below which the angular integrals are summed as
// power series. Above it the closed forms lose at most a factor
//
//	8/beta^6 = 2^15
//
// by cancellation (the three terms of sin4cos2 are of order 1/beta^6), and
// double-double carries 2^-98 or better, so at least 83 bits remain. Below it the
// series of slowTerms terms leaves out, relative to its first term, less than
// 16 beta^30 (1 + 1/8) < 2^-55.
const (
	slowVelocitySquared = 1.0 / 16
	slowTerms           = 15
)

// angularIntegrals are the integrals
//
//	J(a, b) = 1/2 integral over |c| <= z of (1 - c^2)^a c^(2 b) / (1 - beta^2 c^2)^2 dc
//
// over the cosine c of the angle in the centre of mass, to which the helicity
// cross-sections of pairs reduce. They are positive for z > 0. The names count the
// powers of sine and cosine.
type angularIntegrals struct {
	one, sin2, sin4             num.DD // b = 0
	cos2, sin2cos2, sin4cos2    num.DD // b = 1; z = 1 only, else zero
	velocitySquared, complement num.DD // beta^2 and 1 - beta^2 = 1/y
}

// integrals returns the angular integrals over |cos| <= cosMax at an energy above the
// threshold.
func (e PairEnergy) integrals(cosMax float64) angularIntegrals {
	beta2 := e.excess.Div(e.ratio)
	x := num.FromFloat(1).Div(e.ratio)
	if beta2.Hi < slowVelocitySquared {
		j := slowIntegrals(beta2.Float(), cosMax)
		j.velocitySquared, j.complement = beta2, x
		return j
	}
	beta := beta2.Sqrt()
	// D(z) = 1 - beta^2 z^2 = x + beta^2 (1 - z^2), and with b = beta z
	// atanh(b) = ln(1 + 2 b (1 + b)/D)/2: sums of positive terms.
	edge := num.Sum2(1, -cosMax).Mul(num.Sum2(1, cosMax)).Mul(beta2).Add(x)
	b := beta.MulFloat(cosMax)
	atanh := b.Mul(b.AddFloat(1)).Scale(1).Div(edge).Log1p().Scale(-1)

	// e0, e1, e2 are 1/2 integral of D^-n, em that of D.
	z := num.FromFloat(cosMax)
	e0 := z
	e1 := atanh.Div(beta)
	e2 := z.Div(edge).Add(e1).Scale(-1)
	em := z.Sub(beta2.Mul(z.Mul(z).Mul(z)).DivFloat(3))

	// c^2 = (1 - D)/beta^2 and 1 - c^2 = (D - x)/beta^2 turn each integral into these.
	xe1, xe2 := x.Mul(e1), x.Mul(e2)
	sin4 := e0.Sub(xe1.Scale(1)).Add(x.Mul(xe2))        // (D - x)^2 / D^2
	sin4D := em.Sub(x.Mul(e0).Scale(1)).Add(x.Mul(xe1)) // (D - x)^2 / D
	beta4 := beta2.Square()
	j := angularIntegrals{
		one:             e2,
		sin2:            e1.Sub(xe2).Div(beta2),
		sin4:            sin4.Div(beta4),
		velocitySquared: beta2,
		complement:      x,
	}
	if cosMax == 1 {
		j.cos2 = e2.Sub(e1).Div(beta2)
		j.sin2cos2 = e1.Sub(e0).Sub(xe2.Sub(xe1)).Div(beta4)
		j.sin4cos2 = sin4.Sub(sin4D).Div(beta4.Mul(beta2))
	}
	return j
}

// slowIntegrals sums the series in beta^2,
//
//	J(a, b) = sum over n of (n + 1) beta^(2 n) C_a(n + b),
//	C_a(k) = 1/2 integral over |c| <= z of (1 - c^2)^a c^(2 k) dc,
//
// whose terms are positive, so that rounding stays at a few units of the last place.
func slowIntegrals(beta2, z float64) angularIntegrals {
	var sums [6]float64
	for n := slowTerms - 1; n >= 0; n-- {
		weight := float64(n + 1)
		here, next := powerMoments(n, z), powerMoments(n+1, z)
		for a := range here {
			sums[a] = float64(sums[a]*beta2) + float64(weight*here[a])
			sums[3+a] = float64(sums[3+a]*beta2) + float64(weight*next[a])
		}
	}
	j := angularIntegrals{
		one:  num.FromFloat(sums[0]),
		sin2: num.FromFloat(sums[1]),
		sin4: num.FromFloat(sums[2]),
	}
	if z == 1 {
		j.cos2 = num.FromFloat(sums[3])
		j.sin2cos2 = num.FromFloat(sums[4])
		j.sin4cos2 = num.FromFloat(sums[5])
	}
	return j
}

// powerMoments returns C_a(k) for a = 0, 1, 2: z^(2k+1) times
//
//	1/(2k+1),  1/(2k+1) - z^2/(2k+3),  1/(2k+1) - 2 z^2/(2k+3) + z^4/(2k+5),
//
// with 1 - z^2 = q factored out, so that each is a sum of positive terms:
//
//	1/(2k+1) - z^2/(2k+3) = 2/((2k+1)(2k+3)) + q/(2k+3)
//	third = 8/((2k+1)(2k+3)(2k+5)) + 4 q/((2k+3)(2k+5)) + q^2/(2k+5)
func powerMoments(k int, z float64) [3]float64 {
	p1, p3, p5 := float64(2*k+1), float64(2*k+3), float64(2*k+5)
	q := (1 - z) * (1 + z)
	power := z
	for range k {
		power *= z * z
	}
	return [3]float64{
		power / p1,
		power * (2/(p1*p3) + q/p3),
		power * (8/(p1*p3*p5) + float64(4*q)/(p3*p5) + float64(q*q)/p5),
	}
}
