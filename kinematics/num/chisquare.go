package num

import "math"

// ChiSquareTail returns the probability that a chi-square variable with ndf degrees of
// freedom exceeds chi2:
//
//	Q(ndf/2, chi2/2)
//
// For up to 100 degrees of freedom and chi2 <= 1400 it is a finite sum of positive terms, with
// x = chi2/2:
//
//	ndf even: e^-x sum over 0 <= j < ndf/2 of x^j/j!
//	ndf odd:  erfc(sqrt x) + e^-x sum over 0 < j <= (ndf-1)/2 of x^(j-1/2)/Gamma(j+1/2)
//
// and GammaQ beyond. Accuracy: within 1e-13 relative. Domain: ndf >= 1, chi2 >= 0, else NaN;
// a chi2 below 0 by rounding is the caller's to judge.
//
// Source: M. Abramowitz and I. A. Stegun, Handbook of Mathematical Functions (1964), 26.4.4
// and 26.4.5.
func ChiSquareTail(chi2 float64, ndf int) float64 {
	if ndf < 1 || !(chi2 >= 0) {
		return math.NaN()
	}
	x := chi2 / 2
	if ndf > 100 || x > 700 {
		return GammaQ(float64(ndf)/2, x)
	}
	if ndf%2 == 0 {
		term, sum := 1.0, 1.0
		for j := 1; j < ndf/2; j++ {
			term = float64(term * (x / float64(j)))
			sum += term
		}
		return Exp(-x) * sum
	}
	root := math.Sqrt(x)
	const inverseRootPi = 0.56418958354775628694807945156077
	term, sum := root*(2*inverseRootPi), 0.0
	for j := 1; j <= (ndf-1)/2; j++ {
		sum += term
		term = float64(term * (x / (float64(j) + 0.5)))
	}
	return Erfc(root) + float64(Exp(-x)*sum)
}

// ChiSquareQuantile returns the chi2 whose ChiSquareTail is tail.
//
// Accuracy: 1e-13 relative, or the change that one ulp of tail makes where that is more.
// Domain: 0 <= tail <= 1 and 1 <= ndf <= 2e6, else NaN. Special cases: tail 1 gives 0, tail 0
// gives +Inf.
//
// Newton's method on the logarithm of the smaller of Q and P = 1 - Q: log Q as a function of
// chi2 is concave for ndf >= 2 and convex for ndf = 1, log P as a function of log chi2 is
// concave, so after at most one step the iterates approach the root from one side and stop
// when they no longer move.
func ChiSquareQuantile(tail float64, ndf int) float64 {
	switch {
	case !(tail >= 0 && tail <= 1) || ndf < 1 || ndf > 2_000_000:
		return math.NaN()
	case tail == 0:
		return math.Inf(1)
	case tail == 1:
		return 0
	}
	a := float64(ndf) / 2
	if tail > 0.5 {
		return 2 * lowerQuantile(1-tail, a)
	}
	return upperQuantile(tail, ndf)
}

// newtonSteps bounds the iterations of a quantile. Convergence is quadratic; 20 steps are
// enough for tails down to 1e-300.
const newtonSteps = 100

// upperQuantile solves Q = tail for chi2, tail <= 1/2, from the mean on.
func upperQuantile(tail float64, ndf int) float64 {
	a := float64(ndf) / 2
	x := a
	if ndf == 1 {
		// The median; log Q is convex, so that steps from the left stay on the left.
		x = 0.2274
	}
	target, left := Log(tail), 0.0
	for range newtonSteps {
		q := ChiSquareTail(2*x, ndf)
		if q < 0x1p-1000 && q < tail {
			// A first step too far, where the tail has no digits left.
			x = (left + x) / 2
			continue
		}
		// d log Q/dx = -density/Q with density = x^a e^-x/Gamma(a)/x.
		next := x + (Log(q)-target)*q/(gammaPower(a, x)/x)
		if math.Abs(next-x) <= 0x1p-51*x {
			return 2 * next
		}
		if q > tail {
			left = x
		}
		x = next
	}
	return 2 * x
}

// lowerQuantile solves P(a, x) = p for x, p < 1/2, in log x.
func lowerQuantile(p, a float64) float64 {
	// P is at most x^a/Gamma(a+1), which gives a start to the left of the root, or the root
	// itself where x is small.
	u := (Log(p) + FromFloat(a+1).LogGamma().Float()) / a
	target := Log(p)
	for range newtonSteps {
		x := Exp(u)
		below := GammaP(a, x)
		step := (Log(below) - target) * below / gammaPower(a, x)
		u -= step
		if math.Abs(step) <= 0x1p-52*math.Max(1, math.Abs(u)) {
			break
		}
	}
	return Exp(u)
}
