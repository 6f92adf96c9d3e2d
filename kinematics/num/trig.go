package num

import "math"

// Sin returns the sine of x in radians, within 1 ulp (0.76 measured) for every finite x.
//
// Special cases: +-0 gives +-0, +-Inf and NaN give NaN.
//
// Source of the polynomials: FreeBSD k_sin.c and k_cos.c, see NOTICE.
func Sin(x float64) float64 {
	quadrant, r, t := reduceQuadrant(x)
	if quadrant&1 == 0 {
		return flip(sinKernel(r, t), quadrant&2 != 0)
	}
	return flip(cosKernel(r, t), quadrant&2 != 0)
}

// Cos returns the cosine of x in radians, within 1 ulp (0.75 measured) for every finite x.
//
// Special cases: +-Inf and NaN give NaN.
func Cos(x float64) float64 {
	quadrant, r, t := reduceQuadrant(x)
	if quadrant&1 == 0 {
		return flip(cosKernel(r, t), quadrant&2 != 0)
	}
	return flip(sinKernel(r, t), quadrant&2 == 0)
}

// Sincos returns Sin(x) and Cos(x), the same bits, with one reduction.
func Sincos(x float64) (sin, cos float64) {
	quadrant, r, t := reduceQuadrant(x)
	sin, cos = sinKernel(r, t), cosKernel(r, t)
	if quadrant&1 != 0 {
		sin, cos = cos, -sin
	}
	return flip(sin, quadrant&2 != 0), flip(cos, quadrant&2 != 0)
}

// Tan returns the tangent of x in radians, within 1 ulp (0.80 measured) for every finite x.
//
// Special cases: +-0 gives +-0, +-Inf and NaN give NaN.
//
// Source of the polynomial: FreeBSD k_tan.c, see NOTICE.
func Tan(x float64) float64 {
	if math.Abs(x) < 0x1p-28 {
		return x
	}
	quadrant, r, t := reduceQuadrant(x)
	return tanKernel(r, t, quadrant&1 != 0)
}

// flip returns -x or x.
func flip(x float64, negative bool) float64 {
	if negative {
		return -x
	}
	return x
}

// sinKernel returns sin(x+y) for |x| <= 0.79 and |y| of half an ulp of x at most.
func sinKernel(x, y float64) float64 {
	const (
		s1 = -1.66666666666666324348e-01
		s2 = 8.33333333332248946124e-03
		s3 = -1.98412698298579493134e-04
		s4 = 2.75573137070700676789e-06
		s5 = -2.50507602534068634195e-08
		s6 = 1.58969099521155010221e-10
	)
	z := x * x
	r := math.FMA(z, math.FMA(z, math.FMA(z, math.FMA(z, s6, s5), s4), s3), s2)
	v := z * x
	return x - ((float64(z*(float64(0.5*y)-float64(v*r))) - y) - float64(v*s1))
}

// cosKernel returns cos(x+y) for |x| <= 0.79 and |y| of half an ulp of x at most.
func cosKernel(x, y float64) float64 {
	const (
		c1 = 4.16666666666666019037e-02
		c2 = -1.38888888888741095749e-03
		c3 = 2.48015872894767294178e-05
		c4 = -2.75573143513906633035e-07
		c5 = 2.08757232129817482790e-09
		c6 = -1.13596475577881948265e-11
	)
	z := x * x
	r := z * math.FMA(z, math.FMA(z, math.FMA(z, math.FMA(z, math.FMA(z, c6, c5), c4), c3), c2), c1)
	half := float64(0.5 * z)
	w := 1 - half
	return w + (((1 - w) - half) + (float64(z*r) - float64(x*y)))
}

// tanKernel returns tan(x+y), or -1/tan(x+y) if inverse, for |x| <= 0.79 and |y| of
// half an ulp of x at most.
func tanKernel(x, y float64, inverse bool) float64 {
	const (
		t0, t1, t2   = 3.33333333333334091986e-01, 1.33333333333201242699e-01, 5.39682539762260521377e-02
		t3, t4, t5   = 2.18694882948595424599e-02, 8.86323982359930005737e-03, 3.59207910759131235356e-03
		t6, t7, t8   = 1.45620945432529025516e-03, 5.88041240820264096874e-04, 2.46463134818469906812e-04
		t9, t10, t11 = 7.81794442939557092300e-05, 7.14072491382608190305e-05, -1.85586374855275456654e-05
		t12          = 2.59073051863633712884e-05
		// Above this the polynomial is taken about pi/4 instead.
		large                = 0.6744
		quarterHi, quarterLo = 7.85398163397448278999e-01, 3.06161699786838301793e-17
	)
	negative, folded := x < 0, math.Abs(x) >= large
	if folded {
		if negative {
			x, y = -x, -y
		}
		x, y = (quarterHi-x)+(quarterLo-y), 0
	}
	z := x * x
	w := z * z
	odd := math.FMA(w, math.FMA(w, math.FMA(w, math.FMA(w, math.FMA(w, t11, t9), t7), t5), t3), t1)
	even := float64(z * math.FMA(w, math.FMA(w, math.FMA(w, math.FMA(w, math.FMA(w, t12, t10), t8), t6), t4), t2))
	s := z * x
	r := y + float64(z*(float64(s*(odd+even))+y))
	r += float64(t0 * s)
	w = x + r
	switch {
	case folded:
		// tan(pi/4 - a) = (1 - tan a)/(1 + tan a), or minus its inverse.
		v := 1.0
		if inverse {
			v = -1
		}
		return flip(v-float64(2*(x-(float64(w*w)/(w+v)-r))), negative)
	case !inverse:
		return w
	}
	// -1/(x+r) with the rounding errors of w = x+r and of 1/w carried along.
	low := r - (w - x)
	a := -1 / w
	slope := math.FMA(a, w, 1)
	slope += float64(a * low)
	return math.FMA(a, slope, a)
}
