package photon

import (
	"math"

	"example.org/kinegate/kinematics/fault"
)

// DifferentialBarn returns the spectrum d sigma/d w' of the scattered photons at the
// energy energyGeV in barn per GeV, unpolarised. With h the share of the way from the
// lowest to the highest energy and y = k.k'/k.p, k, k' and p the momenta of the light,
// the scattered photon and the beam particle,
//
//	d sigma/d h = (2 pi r^2/(1 + x)) <1/(1 - y) + 1 - y - 4 r (1 - r)>,  r = y/(x (1 - y))
//	y = (x/(1 + x)) sin(Theta/2)^2,  Theta the angle of scattering in the centre of mass
//
// and <> the average over azimuth about the total momentum, done in closed form, so
// that the spectrum is exact at every collision angle. Head on y = h x/(1 + x) and
// there is nothing to average; for E much larger than w, w' = y E.
//
// Domain: Lowest() <= energyGeV <= Highest(); else fault.Outside. Accuracy: 4e-15
// times the condition number at the ends. Left out: higher orders, several laser
// photons at once (linear quantum electrodynamics), the spread of beam and light in
// energy and angle.
//
// Source: I. F. Ginzburg, G. L. Kotkin, V. G. Serbo and V. I. Telnov, Nucl. Instrum.
// Meth. 205 (1983) 47, equation (8), from memory; the azimuthal average is worked out
// here.
func (b Backscatter) DifferentialBarn(energyGeV float64) (float64, error) {
	share, rest, err := b.position("photon.Backscatter.DifferentialBarn", energyGeV)
	if err != nil {
		return 0, err
	}
	return b.perShare() * b.bracket(share, rest) / b.width().Float(), nil
}

// perShare returns 2 pi r^2/(1 + x) in barn.
func (b Backscatter) perShare() float64 {
	return 2 * math.Pi * ClassicalRadiusSquared(b.mass) / (1 + b.x)
}

// bracket returns the azimuthal average of DifferentialBarn at h = share, 1 - h = rest.
// With w = 1 - y = a + c cos(phi) and S^2 = a^2 - c^2,
//
//	<w> = a,  <1/w> = 1/S,  <1/w^2> = a/S^3
//
// and both differences that cancel for small x are rebuilt as sums of positive terms
// (d = 1 - S, b = 1 - a):
//
//	<r>   = (1/S - 1)/x = (d/x)/S,                            d (1 + S) = b (1 + a) + c^2
//	<r^2> = (a/S^3 - 2/S + 1)/x^2 = ((c/x)^2/(a + S) + (d/x)^2 S)/S^3
//
// S^2 itself factors into (1 + x m)(1 + x M)/(1 + x)^2 with m, M the squares of
// sqrt((1-h) H) -+ sqrt(h (1-H)), H = turned.
func (b Backscatter) bracket(share, rest float64) float64 {
	one, other := math.Sqrt(rest*b.turned), math.Sqrt(share*b.kept)
	below, above := one-other, one+other
	s := math.Sqrt((1+float64(b.x*(below*below)))*(1+float64(b.x*(above*above)))) / (1 + b.x)
	a := (1 + float64(b.x*(float64(rest*b.turned)+float64(share*b.kept)))) / (1 + b.x)
	shift := (float64(rest*b.kept) + float64(share*b.turned)) / (1 + b.x)        // (1 - a)/x
	spread := 2 * math.Sqrt(share*b.turned) * math.Sqrt(rest*b.kept) / (1 + b.x) // c/x
	d := (float64(shift*(1+a)) + float64(b.x*spread*spread)) / (1 + s)           // (1 - S)/x
	r := d / s
	square := (spread*spread/(a+s) + float64(d*d*s)) / (s * s * s)
	return 1/s + a - float64(4*(r-square))
}

// Fraction returns the share of the scattered photons whose energy lies between lowGeV
// and highGeV. Ends beyond the spectrum count as its ends. The bracket of
// DifferentialBarn is integrated by Gauss-Legendre panels that grow from the point of
// largest scattering, so that narrow windows and the smallest x keep their digits,
// which the differences of the logarithms in the closed form lose.
//
// Domain: lowGeV <= highGeV. Accuracy: 1e-14 times the condition number at the ends,
// at every collision angle up to x = 1e10; measured against the closed total, 3e-11 at
// x = 1e16.
func (b Backscatter) Fraction(lowGeV, highGeV float64) (float64, error) {
	const op = "photon.Backscatter.Fraction"
	if !(lowGeV <= highGeV) {
		return 0, fault.Number("low_gev", lowGeV, "<= high_gev").In(op)
	}
	bottom, top := b.lowest.Float(), b.highest.Float()
	if highGeV <= bottom || lowGeV >= top {
		return 0, nil
	}
	// An end of the spectrum itself is exact, its rounded energy is not.
	from, fromRest, to, toRest := 0.0, 1.0, 1.0, 0.0
	var err error
	if lowGeV > bottom {
		if from, fromRest, err = b.position(op, lowGeV); err != nil {
			return 0, err
		}
	}
	if highGeV < top {
		if to, toRest, err = b.position(op, highGeV); err != nil {
			return 0, err
		}
	}
	return b.integral(from, fromRest, to, toRest) / b.whole(), nil
}

// FractionWithin returns the share of the scattered photons at angles to the total
// momentum of at most thetaRad: those from EnergyAt(thetaRad) upwards, as a collimator
// passes them. Domain: 0 <= thetaRad <= pi. Accuracy: as Fraction; small angles lose
// nothing, since
//
//	1 - h = tan(theta/2)^2/(tan(theta/2)^2 + w_min/w_max)
func (b Backscatter) FractionWithin(thetaRad float64) (float64, error) {
	if err := within("photon.Backscatter.FractionWithin", "theta_rad", thetaRad, 0, math.Pi,
		"0 <= theta <= pi"); err != nil {
		return 0, err
	}
	sine := haversine(thetaRad)
	cosine := (1 - math.Sqrt(sine)) * (1 + math.Sqrt(sine))
	ratio := b.lowest.Div(b.highest).Float()
	norm := sine + float64(cosine*ratio)
	return b.integral(cosine*ratio/norm, sine/norm, 1, 0) / b.whole(), nil
}

// whole returns the integral of the bracket over the whole spectrum from the closed
// form of the total cross-section:
//
//	sigma/(2 pi r^2/(1 + x)) = (4/3)(1 + x) sigma/sigma_T
func (b Backscatter) whole() float64 {
	return 4 * (1 + b.x) * KleinNishinaTotal(b.x/2) / 3
}

// integral integrates the bracket from h = from to h = to; the rests are 1 - h.
//
// The integrand is analytic except where 1 - y vanishes for some azimuth, at a
// distance of about 1/x from the point h = turned of largest scattering. The range is
// cut there and at the points whose distances from it are 2^-n, down to 1/(8 (1 + x)).
// A panel is then never longer than its distance from the nearest singularity.
func (b Backscatter) integral(from, fromRest, to, toRest float64) float64 {
	// Measured from the nearer end, distances from h = turned are exact head on.
	distance := func(share, rest float64) float64 {
		if b.turned > 0.5 {
			return b.kept - rest
		}
		return share - b.turned
	}
	low, high := distance(from, fromRest), distance(to, toRest)
	smallest := 1 / (8 * (1 + b.x))
	bracketAt := func(t float64) float64 {
		// Rounding may put a node outside [0, 1] by a unit of the last place.
		return b.bracket(math.Max(0, b.turned+t), math.Max(0, b.kept-t))
	}
	sum := 0.0
	// From the far ends towards the cut, the smaller panels last.
	for outer := 1.0; outer > smallest; outer /= 2 {
		sum += panel(math.Max(low, -outer), math.Min(high, -outer/2), bracketAt)
		sum += panel(math.Max(low, outer/2), math.Min(high, outer), bracketAt)
	}
	// The loop ends at the first power of two that is not above smallest.
	inner := 1.0
	for inner > smallest {
		inner /= 2
	}
	sum += panel(math.Max(low, -inner), math.Min(high, 0), bracketAt)
	return sum + panel(math.Max(low, 0), math.Min(high, inner), bracketAt)
}
