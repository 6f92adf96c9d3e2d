package num

import "math"

// Erf returns the error function 2/sqrt(pi) times the integral of e^(-t^2) from 0 to x,
// within 1 ulp (0.71 measured).
//
// Special cases: +-Inf gives +-1, +-0 gives +-0, NaN gives NaN.
//
// Source: FreeBSD s_erf.c by way of the Go standard library, see NOTICE.
func Erf(x float64) float64 {
	size := math.Abs(x)
	var value float64
	switch {
	case math.IsNaN(x):
		return x
	case size < 0x1p-28:
		const twoOverRootPiLess1 = 1.28379167095512586316e-01
		return x + float64(x*twoOverRootPiLess1)
	case size < 0.84375:
		return x + float64(x*erfSmall(x*x))
	case size < 1.25:
		value = erfOne + erfMiddle(size-1)
	case size < 6:
		value = 1 - erfcTail(size)
	default:
		value = 1
	}
	return math.Copysign(value, x)
}

// Erfc returns 1 - Erf(x), within 2 ulp (1.26 measured) for x <= 26.5, also where it is small; beyond, the
// result is subnormal or 0.
//
// Special cases: +Inf gives 0, -Inf gives 2, NaN gives NaN.
func Erfc(x float64) float64 {
	size := math.Abs(x)
	switch {
	case math.IsNaN(x):
		return x
	case size < 0x1p-56:
		return 1 - x
	case size < 0.25:
		return 1 - (x + float64(x*erfSmall(x*x)))
	case size < 0.84375 && x > 0:
		return 0.5 - ((x - 0.5) + float64(x*erfSmall(x*x)))
	case size < 0.84375:
		return 1 - (x + float64(x*erfSmall(x*x)))
	case size < 1.25 && x > 0:
		return (1 - erfOne) - erfMiddle(size-1)
	case size < 1.25:
		return 1 + (erfOne + erfMiddle(size-1))
	case size >= 28 && x > 0:
		return 0
	case x > 0:
		return erfcTail(size)
	case size >= 6:
		return 2
	}
	return 2 - erfcTail(size)
}

// erfOne is erf(1) rounded to 24 bits.
const erfOne = 8.45062911510467529297e-01

// erfSmall returns erf(x)/x - 1 as a function of x^2, |x| <= 0.84375.
func erfSmall(z float64) float64 {
	p := [...]float64{
		-2.37630166566501626084e-05, -5.77027029648944159157e-03, -2.84817495755985104766e-02,
		-3.25042107247001499370e-01, 1.28379167095512558561e-01,
	}
	q := [...]float64{
		-3.96022827877536812320e-06, 1.32494738004321644526e-04, 5.08130628187576562776e-03,
		6.50222499887672944485e-02, 3.97917223959155352819e-01, 1,
	}
	return polynomial(z, p[:]) / polynomial(z, q[:])
}

// erfMiddle returns erf(1+s) - erfOne for -0.16 <= s <= 0.25.
func erfMiddle(s float64) float64 {
	p := [...]float64{
		-2.16637559486879084300e-03, 3.54783043256182359371e-02, -1.10894694282396677476e-01,
		3.18346619901161753674e-01, -3.72207876035701323847e-01, 4.14856118683748331666e-01,
		-2.36211856075265944077e-03,
	}
	q := [...]float64{
		1.19844998467991074170e-02, 1.36370839120290507362e-02, 1.26171219808761642112e-01,
		7.18286544141962662868e-02, 5.40397917702171048937e-01, 1.06420880400844228286e-01, 1,
	}
	return polynomial(s, p[:]) / polynomial(s, q[:])
}

// erfcTail returns erfc(x) for 1.25 <= x < 28 as e^(-x^2 - 0.5625 + R/S)/x. With z the upper
// bits of x, z^2 + 0.5625 is exact, and x^2 - z^2 is small.
func erfcTail(x float64) float64 {
	s := 1 / (x * x)
	z := math.Float64frombits(math.Float64bits(x) &^ (1<<32 - 1))
	less, more := z-x, z+x
	exponent := math.FMA(less, more, erfcRatio(x, s))
	return Exp(-float64(z*z)-0.5625) * Exp(exponent) / x
}

// erfcRatio returns R/S of erfcTail in s = 1/x^2, in two ranges.
func erfcRatio(x, s float64) float64 {
	if x < 1/0.35 {
		r := [...]float64{
			-9.81432934416914548592e+00, -8.12874355063065934246e+01, -1.84605092906711035994e+02,
			-1.62396669462573470355e+02, -6.23753324503260060396e+01, -1.05586262253232909814e+01,
			-6.93858572707181764372e-01, -9.86494403484714822705e-03,
		}
		t := [...]float64{
			-6.04244152148580987438e-02, 6.57024977031928170135e+00, 1.08635005541779435134e+02,
			4.29008140027567833386e+02, 6.45387271733267880336e+02, 4.34565877475229228821e+02,
			1.37657754143519042600e+02, 1.96512716674392571292e+01, 1,
		}
		return polynomial(s, r[:]) / polynomial(s, t[:])
	}
	r := [...]float64{
		-4.83519191608651397019e+02, -1.02509513161107724954e+03, -6.37566443368389627722e+02,
		-1.60636384855821916062e+02, -1.77579549177547519889e+01, -7.99283237680523006574e-01,
		-9.86494292470009928597e-03,
	}
	t := [...]float64{
		-2.24409524465858183362e+01, 4.74528541206955367215e+02, 2.55305040643316442583e+03,
		3.19985821950859553908e+03, 1.53672958608443695994e+03, 3.25792512996573918826e+02,
		3.03380607434824582924e+01, 1,
	}
	return polynomial(s, r[:]) / polynomial(s, t[:])
}

// polynomial returns the polynomial in x with the given coefficients, highest power
// first.
func polynomial(x float64, coefficients []float64) float64 {
	sum := coefficients[0]
	for _, c := range coefficients[1:] {
		sum = math.FMA(sum, x, c)
	}
	return sum
}
