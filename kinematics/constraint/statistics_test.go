package constraint_test

import (
	"fmt"
	"maps"
	"math"
	"slices"
	"testing"

	"example.org/kinegate/kinematics/constraint"
	"example.org/kinegate/kinematics/num/random"
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

// What is left of a bias with common resolutions, measured on events and their twins with all
// errors turned around, so that what is linear in the errors cancels. With covariances at the
// true values the non-linearity of the constraints is all there is, and halves with the
// resolutions. With those at the measured values, as a detector has them, an object that came
// out low looks more precise than it is, which is of the same order and mostly larger.
func TestNonLinearity(t *testing.T) {
	const events = 1500
	for _, y := range toys() {
		t.Run(y.name, func(t *testing.T) {
			for _, atMeasured := range []bool{false, true} {
				y.atMeasured = atMeasured
				y.spread = 1
				full, probability := y.biases(t, events)
				y.spread = 0.5
				half, _ := y.biases(t, events)
				worst := ""
				for _, name := range slices.Sorted(maps.Keys(full)) {
					b, h := full[name], half[name]
					if worst == "" || math.Abs(b.mean()) > math.Abs(full[worst].mean()) {
						worst = name
					}
					// A tenth of the bias is room for the next order.
					if d := math.Abs(h.mean() - b.mean()/2); d > 0.1*math.Abs(b.mean())+5*math.Hypot(h.uncertainty(), b.uncertainty()/2) {
						t.Errorf("at measured values: %t: pull %s is off by %.4f +- %.4f, at half the resolutions by %.4f +- %.4f",
							atMeasured, name, b.mean(), b.uncertainty(), h.mean(), h.uncertainty())
					}
				}
				b, h := full[worst], half[worst]
				t.Logf("covariances at measured values: %5t: largest mean of a pull %.4f +- %.4f, at half the resolutions %.4f +- %.4f; mean probability %.3f",
					atMeasured, b.mean(), b.uncertainty(), h.mean(), h.uncertainty(), probability)
				if math.Abs(b.mean()) > 0.15 || math.Abs(probability-0.5) > 0.03 {
					t.Errorf("at measured values: %t: beyond 0.15 standard deviations, or a mean probability of %.3f", atMeasured, probability)
				}
			}
		})
	}
}

// biases are the means of the pulls over pairs of an event and its twin, and of the
// probabilities.
func (y *toy) biases(t *testing.T, events int) (pulls map[string]*moments, probability float64) {
	t.Helper()
	f := fitter(t, &y.spec)
	pulls = map[string]*moments{}
	for i := range events {
		pair := map[string]float64{}
		for _, y.flip = range []bool{false, true} {
			s := random.New(6, random.Generation, int64(i))
			y.event(f, &s)
			r := f.Fit()
			if r.Status != constraint.Converged {
				t.Fatalf("event %d: %+v", i, r)
			}
			probability += r.Probability / float64(2*events)
			for o := range y.spec.Objects {
				for a := range 3 {
					if pull := f.Pull(o, a); !math.IsNaN(pull) {
						pair[fmt.Sprintf("%d.%d", o, a)] += pull / 2
					}
				}
			}
		}
		for name, mean := range pair {
			if pulls[name] == nil {
				pulls[name] = &moments{}
			}
			pulls[name].add(mean)
		}
	}
	y.flip = false
	return pulls, probability
}
