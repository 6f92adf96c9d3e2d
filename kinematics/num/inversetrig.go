package num

import "math"

// Atan returns the arc tangent of x in radians, within 1 ulp (0.84 measured).
//
// Special cases: +-0 gives +-0, +-Inf gives +-pi/2, NaN gives NaN.
//
// Source: FreeBSD s_atan.c, see NOTICE: the argument is reduced about 1/2, 1, 3/2
// or infinity, then atan z = z - z (polynomial in z^2).
func Atan(x float64) float64 {
	size := math.Abs(x)
	var hi, lo, z float64
	switch {
	case math.IsNaN(x) || size < 0x1p-27:
		return x
	case size < 7.0/16:
		return x - float64(x*atanRemainder(x*x))
	case size < 11.0/16:
		hi, lo = 4.63647609000806093515e-01, 2.26987774529616870924e-17
		z = (float64(2*size) - 1) / (2 + size)
	case size < 19.0/16:
		hi, lo = 7.85398163397448278999e-01, 3.06161699786838301793e-17
		z = (size - 1) / (size + 1)
	case size < 39.0/16:
		hi, lo = 9.82793723247329054082e-01, 1.39033110312309984516e-17
		z = (size - 1.5) / (1 + float64(1.5*size))
	default:
		hi, lo = 1.57079632679489655800e+00, 6.12323399573676603587e-17
		z = -1 / size
	}
	return math.Copysign(hi-((float64(z*atanRemainder(z*z))-lo)-z), x)
}

// atanRemainder returns 1 - atan(z)/z as a function of w = z^2, |z| <= 7/16.
func atanRemainder(w float64) float64 {
	const (
		a0, a1, a2 = 3.33333333333329318027e-01, -1.99999999998764832476e-01, 1.42857142725034663711e-01
		a3, a4, a5 = -1.11111104054623557880e-01, 9.09088713343650656196e-02, -7.69187620504482999495e-02
		a6, a7, a8 = 6.66107313738753120669e-02, -5.83357013379057348645e-02, 4.97687799461593236017e-02
		a9, a10    = -3.65315727442169155270e-02, 1.62858201153657823623e-02
	)
	high := math.FMA(w, math.FMA(w, math.FMA(w, math.FMA(w, math.FMA(w, a10, a9), a8), a7), a6), a5)
	return w * math.FMA(w, math.FMA(w, math.FMA(w, math.FMA(w, math.FMA(w, high, a4), a3), a2), a1), a0)
}

// Atan2 returns the angle in radians of the point (x, y) from the x axis, within
// -pi..pi and within 1.4 ulp (1.23 measured).
//
// Special cases, as in the C standard: Atan2(+-0, x) is +-0 for x >= +0 and +-pi for
// x <= -0; Atan2(y, 0) is +-pi/2 for y other than 0; infinite arguments give multiples
// of pi/4; NaN gives NaN.
//
// The quotient is carried with its own rounding error e: atan(q+e) = atan q + e/(1+q^2).
func Atan2(y, x float64) float64 {
	switch {
	case math.IsNaN(y) || math.IsNaN(x):
		return math.NaN()
	case y == 0:
		if math.Signbit(x) {
			return math.Copysign(math.Pi, y)
		}
		return y
	case x == 0 || (math.IsInf(y, 0) && !math.IsInf(x, 0)):
		return math.Copysign(math.Pi/2, y)
	case math.IsInf(x, 0):
		angle := 0.0
		if math.IsInf(y, 0) {
			angle = math.Pi / 4
		}
		if x < 0 {
			angle = math.Pi - angle
		}
		return math.Copysign(angle, y)
	}
	return math.Copysign(atan2Positive(math.Abs(y), x), y)
}

// piLo is pi less the double math.Pi.
const piLo = 1.2246467991473531772e-16

// atan2Positive is Atan2 for finite y > 0 and x other than 0.
func atan2Positive(y, x float64) float64 {
	q := y / math.Abs(x)
	switch {
	case q > 0x1p60:
		return math.Pi / 2
	case x < 0 && q < 0x1p-60:
		return math.Pi
	}
	angle, low := Atan(q), 0.0
	if q > 0x1p-900 && y > 0x1p-900 {
		low = math.FMA(-q, math.Abs(x), y) / math.Abs(x)
		low /= 1 + float64(q*q)
	}
	if x < 0 {
		return (math.Pi - angle) + (piLo - low)
	}
	return angle + low
}

// Asin returns the arc sine of x in radians, within 1.2 ulp (1.00 measured).
//
// Special cases: +-0 gives +-0, |x| > 1 and NaN give NaN.
//
// Source: FreeBSD e_asin.c, see NOTICE: asin x = x + x R(x^2) up to 1/2, and
// pi/2 - 2 asin(sqrt((1-x)/2)) beyond.
func Asin(x float64) float64 {
	size := math.Abs(x)
	switch {
	case !(size <= 1):
		return math.NaN()
	case size < 0x1p-27:
		return x
	case size < 0.5:
		return x + float64(x*asinRemainder(x*x))
	}
	z := (1 - size) / 2
	s := math.Sqrt(z)
	// c is the rounding error of s; pi/2 and its second word are halved at pi/4.
	c := 0.0
	if s > 0 {
		c = math.FMA(-s, s, z) / (2 * s)
	}
	tail := float64(2*c) - piLo/2
	p := math.FMA(2*s, asinRemainder(z), tail)
	return math.Copysign(math.Pi/4-(p-(math.Pi/4-float64(2*s))), x)
}

// Acos returns the arc cosine of x in radians, within 1 ulp (0.88 measured), also near 1.
//
// Special cases: |x| > 1 and NaN give NaN.
//
// Source: FreeBSD e_acos.c, see NOTICE.
func Acos(x float64) float64 {
	switch {
	case !(math.Abs(x) <= 1):
		return math.NaN()
	case math.Abs(x) < 0.5:
		return math.Pi/2 - (x - (piLo/2 - float64(x*asinRemainder(x*x))))
	case x < 0:
		z := (1 + x) / 2
		s := math.Sqrt(z)
		w := math.FMA(s, asinRemainder(z), -piLo/2)
		return math.Pi - float64(2*(s+w))
	case x == 1:
		return 0
	}
	z := (1 - x) / 2
	s := math.Sqrt(z)
	c := math.FMA(-s, s, z) / (2 * s)
	c = math.FMA(s, asinRemainder(z), c)
	return 2 * (s + c)
}

// asinRemainder returns asin(x)/x - 1 as a function of t = x^2 <= 1/4.
func asinRemainder(t float64) float64 {
	const (
		p0, p1, p2 = 1.66666666666666657415e-01, -3.25565818622400915405e-01, 2.01212532134862925881e-01
		p3, p4, p5 = -4.00555345006794114027e-02, 7.91534994289814532176e-04, 3.47933107596021167570e-05
		q1, q2     = -2.40339491173441421878e+00, 2.02094576023350569471e+00
		q3, q4     = -6.88283971605453293030e-01, 7.70381505559019352791e-02
	)
	p := t * math.FMA(t, math.FMA(t, math.FMA(t, math.FMA(t, math.FMA(t, p5, p4), p3), p2), p1), p0)
	q := math.FMA(t, math.FMA(t, math.FMA(t, math.FMA(t, q4, q3), q2), q1), 1)
	return p / q
}
