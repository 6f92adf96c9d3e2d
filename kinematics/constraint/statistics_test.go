package constraint_test

import (
	"maps"
	"math"
	"slices"
	"testing"
)

// The true assignment of toy events, resolutions evaluated at the true values and a tenth
// of common ones, so that the constraints are linear over the errors: probabilities are
// flat, as a whole and in the tails, pulls have mean 0 and width 1, and so have the
// distances of the fitted from the true values. Bounds are five standard errors, with a
// fixed seed; the fourth moment of a normal deviate is 3.
func TestFlatProbability(t *testing.T) {
	const events = 6000
	for _, y := range toys() {
		t.Run(y.name, func(t *testing.T) {
			y.spread = 0.1
			probabilities, pulls, distances := y.fits(t, 5, events)
			flat(t, probabilities)
			worst := 0.0
			for _, which := range []map[string]*moments{pulls, distances} {
				if len(which) == 0 {
					t.Fatal("no pulls")
				}
				for _, name := range slices.Sorted(maps.Keys(which)) {
					m := which[name]
					if m.n < events {
						t.Errorf("%s: %g pulls", name, m.n)
					}
					mean, width := m.mean()*math.Sqrt(m.n), (m.width()-1)*math.Sqrt(2*m.n)
					if math.Abs(mean) > 5 || math.Abs(width) > 5 {
						t.Errorf("%s: mean %.3f, width %.3f: off by %.1f and %.1f standard errors", name, m.mean(), m.width(), mean, width)
					}
					worst = max(worst, math.Abs(mean), math.Abs(width))
				}
			}
			t.Logf("%d pulls and %d distances, worst %.1f standard errors", len(pulls), len(distances), worst)
		})
	}
}

// flat tests that probabilities are uniform: twenty bins, the largest distance from the
// uniform distribution function, and the counts below and above 1 %.
func flat(t *testing.T, p []float64) {
	t.Helper()
	p = slices.Sorted(slices.Values(p))
	n := float64(len(p))
	const bins = 20
	square := 0.0
	at := 0
	for k := range bins {
		count := 0
		for at < len(p) && p[at] <= float64(k+1)/bins {
			at++
			count++
		}
		d := float64(count) - n/bins
		square += d * d / (n / bins)
	}
	// The tail of chi-square with 19 degrees of freedom above 60 is 4e-6.
	if square > 60 {
		t.Errorf("chi-square of %d bins is %.1f", bins, square)
	}
	largest := 0.0
	for i, v := range p {
		largest = max(largest, math.Abs(v-float64(i)/n), math.Abs(v-float64(i+1)/n))
	}
	// The distribution of Kolmogorov's statistic has a tail of 7e-6 above 2.5.
	if largest*math.Sqrt(n) > 2.5 {
		t.Errorf("Kolmogorov's statistic is %.2f", largest*math.Sqrt(n))
	}
	low, _ := slices.BinarySearch(p, 0.01)
	high, _ := slices.BinarySearch(p, 0.99)
	sigma := math.Sqrt(n * 0.01 * 0.99)
	for name, count := range map[string]int{"below 0.01": low, "above 0.99": len(p) - high} {
		if d := (float64(count) - 0.01*n) / sigma; math.Abs(d) > 5 {
			t.Errorf("%d probabilities %s: off by %.1f standard errors", count, name, d)
		}
	}
	t.Logf("chi-square %.1f in %d bins, Kolmogorov %.2f, tails %d and %d of %g", square, bins, largest*math.Sqrt(n), low, len(p)-high, 0.01*n)
}

// What the non-linearity of the constraints leaves with common resolutions: the means of
// the pulls are proportional to the resolutions, so at half of them they halve. The
// numbers are logged; the bound is that nothing is off by more than a tenth of a standard
// deviation.
func TestNonLinearity(t *testing.T) {
	const events = 6000
	for _, y := range toys() {
		t.Run(y.name, func(t *testing.T) {
			for _, spread := range []float64{1, 0.5} {
				y.spread = spread
				probabilities, pulls, _ := y.fits(t, 6, events)
				bias, width, sum := 0.0, 0.0, 0.0
				for _, m := range pulls {
					bias, width = max(bias, math.Abs(m.mean())), max(width, math.Abs(m.width()-1))
				}
				for _, p := range probabilities {
					sum += p
				}
				mean := sum / events
				t.Logf("resolutions x %g: pull means up to %.3f, widths off by up to %.3f, mean probability %.3f +- %.3f",
					spread, bias, width, mean, 1/math.Sqrt(12*events))
				if bias > 0.1 || width > 0.1 || math.Abs(mean-0.5) > 0.03 {
					t.Errorf("resolutions x %g: beyond a tenth", spread)
				}
			}
		})
	}
}
