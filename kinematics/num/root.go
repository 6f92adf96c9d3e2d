package num

import "math"

// Hypot returns sqrt(x^2 + y^2) without undue overflow or underflow, within 1 ulp.
//
// Special cases: an infinite argument gives +Inf, else a NaN argument NaN.
//
// Source: C. F. Borges, An improved algorithm for hypot(a,b), ACM Trans. Math. Softw.
// 47 (2021) 9, the corrected form with a fused multiply-add: the error of h^2
// against x^2 + y^2 is formed exactly enough to correct h by one Newton step.
func Hypot(x, y float64) float64 {
	x, y = math.Abs(x), math.Abs(y)
	switch {
	case math.IsInf(x, 1) || math.IsInf(y, 1):
		return math.Inf(1)
	case math.IsNaN(x) || math.IsNaN(y):
		return math.NaN()
	case x < y:
		x, y = y, x
	}
	if y <= x*0x1p-54 {
		return x + y
	}
	scale := 1.0
	switch {
	case x > 0x1p500:
		scale = 0x1p600
	case y < 0x1p-450:
		scale = 0x1p-600
	}
	if scale != 1 {
		x, y = x/scale, y/scale
	}
	h := math.Sqrt(float64(x*x) + float64(y*y))
	hh, xx := float64(h*h), float64(x*x)
	low := hh - xx
	low = math.FMA(-y, y, low)
	low += math.FMA(h, h, -hh)
	low -= math.FMA(x, x, -xx)
	return (h - low/(2*h)) * scale
}

// Cbrt returns the cube root of x, within 1 ulp.
//
// Special cases: +-0 gives +-0, +-Inf gives +-Inf, NaN gives NaN.
//
// A first approximation from the exponent and a quadratic in the mantissa, two
// Halley steps r (r^3 + 2x)/(2r^3 + x), and a last Newton step whose residual x - r^3
// is formed with exact products.
func Cbrt(x float64) float64 {
	if x == 0 || math.IsNaN(x) || math.IsInf(x, 0) {
		return x
	}
	m, exponent := math.Frexp(math.Abs(x))
	for exponent%3 != 0 {
		m /= 2
		exponent++
	}
	// 1/8 <= m < 1; the quadratic is within 2 %.
	r := math.FMA(m, math.FMA(m, -0.352, 0.963), 0.387)
	for range 2 {
		cube := float64(r * r * r)
		r *= (cube + float64(2*m)) / (float64(2*cube) + m)
	}
	square, low := TwoProd(r, r)
	residual := math.FMA(-square, r, m)
	residual -= float64(low * r)
	r += residual / (3 * square)
	return math.Copysign(math.Ldexp(r, exponent/3), x)
}
