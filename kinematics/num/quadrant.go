package num

import (
	"math"
	"math/bits"
)

// reduceQuadrant returns q, r, t with x = q pi/2 + r + t, |r| <= 0.79, q modulo 4 and t
// the rounding error of r. Infinities and NaN give a NaN r.
//
// Up to 2^25 three words of pi/2 do (Cody and Waite's scheme with a fused
// multiply-add): x - k p0 is a multiple of 2^-53 below 1 and so exact; k p1 is split
// exactly; what is neglected is below 2^-134, and r is above 2^-60, as the nearest
// multiples of pi/2 show.
func reduceQuadrant(x float64) (q int, r, t float64) {
	const (
		p0 = 0x1.921fb54442d18p+0
		p1 = 0x1.1a62633145c07p-54
		p2 = -0x1.f1976b7ed8fbcp-110
	)
	size := math.Abs(x)
	switch {
	case size <= math.Pi/4:
		return 0, x, 0
	case size < 0x1p25:
		k := math.Floor(float64(x*(2/math.Pi)) + 0.5)
		p, e := TwoProd(k, p1)
		r, t = TwoSum(math.FMA(-k, p0, x), -p)
		r, t = FastTwoSum(r, (t-e)-float64(k*p2))
		return int(k) & 3, r, t
	case size <= math.MaxFloat64:
		q, rest := reduceHuge(size)
		if x < 0 {
			return -q & 3, -rest.Hi, -rest.Lo
		}
		return q, rest.Hi, rest.Lo
	}
	return 0, math.NaN(), 0
}

// reduceHuge is reduceQuadrant for 2^25 <= x, as a double-double: the scheme of M. H.
// Payne and R. N. Hanek, Radian reduction for trigonometric functions, ACM SIGNUM
// Newsletter 18 (1983) 19. x = m 2^e; of 4/pi only the 256 bits matter that decide
// x * 4/pi modulo 8 and 253 bits of its fraction. What is cut off below them is less
// than m 2^-253 < 2^-200, and the fraction is at least 2^-64.
func reduceHuge(x float64) (q int, rest DD) {
	m := math.Float64bits(x)&(1<<52-1) | 1<<52
	e := uint(math.Float64bits(x)>>52) - 1075 + 61
	// The window of 4/pi whose product with m has its third-highest bit at 1.
	digit, shift := e/64, e%64
	var window [4]uint64
	for i := range window {
		window[i] = fourOverPi[digit+uint(i)]<<shift | fourOverPi[digit+uint(i)+1]>>(64-shift)
	}
	// product = m * window modulo 2^256, most significant word first.
	var product [4]uint64
	var carry uint64
	for i := 3; i >= 0; i-- {
		hi, lo := bits.Mul64(window[i], m)
		var over uint64
		product[i], over = bits.Add64(lo, carry, 0)
		carry = hi + over
	}
	// product is x*4/pi in units of 2^-253 modulo 8, so x*2/pi modulo 4 in units of 2^-254.
	q = int(product[0] >> 62)
	for i := range 3 {
		product[i] = product[i]<<2 | product[i+1]>>62
	}
	negative := product[0]>>63 != 0
	if negative {
		// The fraction is above a half: the next multiple is nearer.
		q++
		for i := range product {
			product[i] = ^product[i]
		}
	}
	var fraction DD
	for i := range 3 {
		scale := -64 * (i + 1)
		fraction = fraction.AddFloat(math.Ldexp(float64(product[i]>>32), scale+32)).
			AddFloat(math.Ldexp(float64(product[i]&(1<<32-1)), scale))
	}
	if negative {
		fraction = fraction.Neg()
	}
	return q & 3, fraction.Mul(HalfPi())
}

// fourOverPi is the binary digits of 4/pi, the sum of fourOverPi[i] 2^(-64 i), computed
// with mpmath 1.4.1 at 1664 bits; 23 words serve the largest exponent of a double.
//
//nolint:gochecknoglobals // read-only table; Go has no constant arrays
var fourOverPi = [...]uint64{
	0x0000000000000001,
	0x45f306dc9c882a53,
	0xf84eafa3ea69bb81,
	0xb6c52b3278872083,
	0xfca2c757bd778ac3,
	0x6e48dc74849ba5c0,
	0x0c925dd413a32439,
	0xfc3bd63962534e7d,
	0xd1046bea5d768909,
	0xd338e04d68befc82,
	0x7323ac7306a673e9,
	0x3908bf177bf25076,
	0x3ff12fffbc0b301f,
	0xde5e2316b414da3e,
	0xda6cfd9e4f96136e,
	0x9e8c7ecd3cbfd45a,
	0xea4f758fd7cbe2f6,
	0x7a0e73ef14a525d4,
	0xd7f6bf623f1aba10,
	0xac06608df8f6d757,
	0xe19f784135e86c3b,
	0x53c722c2bdcc3610,
	0xcb330abe2940d081,
}
