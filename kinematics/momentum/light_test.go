package momentum

import (
	"errors"
	"math"
	"math/big"
	"testing"

	"example.org/kinegate/kinematics/fault"
)

// within reports whether got is within a relative bound of want.
func within(got, want, relative float64) bool {
	return math.Abs(got-want) <= relative*math.Abs(want)
}

// TestFlight holds time and delay against exact arithmetic, from a thousandth of the speed
// of light to within 1e-20 of it.
func TestFlight(t *testing.T) {
	const bound = 4e-15
	s := newSampler()
	for range 3000 {
		p, m, distance := s.magnitude(-3, 10), s.magnitude(-4, 2), s.magnitude(-3, 6)
		motion, err := MotionFromMomentum(m, p)
		if err != nil {
			t.Fatal(err)
		}
		time, delay := motion.Flight(distance)
		light := div(bigOf(distance), bigOf(LightSpeed))
		e := bigEnergy(Three{Z: p}, m)
		wantTime := mul(light, div(e, bigOf(p)))
		wantDelay := mul(light, div(mul(bigOf(m), bigOf(m)), mul(bigOf(p), add(e, bigOf(p)))))
		for _, c := range []struct {
			name string
			got  float64
			want *big.Float
		}{{"time", time, wantTime}, {"delay", delay, wantDelay}} {
			if want, _ := c.want.Float64(); !within(c.got, want, bound) {
				t.Errorf("m %g, p %g, distance %g: %s %.17g, want %.17g", m, p, distance, c.name, c.got, want)
			}
		}
	}
}

func TestFlightSpecialCases(t *testing.T) {
	photon, err := MotionFromMomentum(0, 1)
	if err != nil {
		t.Fatal(err)
	}
	if time, delay := photon.Flight(LightSpeed); time != 1 || delay != 0 {
		t.Errorf("photon: %g, %g", time, delay)
	}
	rest, err := MotionFromMomentum(1, 0)
	if err != nil {
		t.Fatal(err)
	}
	if time, delay := rest.Flight(1); !math.IsInf(time, 1) || !math.IsInf(delay, 1) {
		t.Errorf("at rest: %g, %g", time, delay)
	}
	if time, delay := rest.Flight(0); time != 0 || delay != 0 {
		t.Errorf("no distance: %g, %g", time, delay)
	}
}

// TestCherenkovAngle holds the cosine of the angle against 1/(n beta), and the sine of a
// small one against its square root form, in wide arithmetic.
func TestCherenkovAngle(t *testing.T) {
	s := newSampler()
	one := bigOf(1)
	radiating := 0
	for range 4000 {
		m, index := s.magnitude(-4, 1), 1+s.magnitude(-6, 0.3)
		motion, err := MotionFromMomentum(m, m*s.magnitude(-1, 8))
		if err != nil {
			t.Fatal(err)
		}
		c, err := motion.Cherenkov(index)
		if err != nil {
			t.Fatal(err)
		}
		// tan^2 = (p^2 (n^2-1) - m^2)/E^2
		p, n := bigOf(motion.Momentum), bigOf(index)
		reach := mul(mul(p, p), sub(mul(n, n), one))
		over := sub(reach, mul(bigOf(m), bigOf(m)))
		if (over.Sign() > 0) != c.Radiates {
			if relative, _ := div(over, reach).Float64(); math.Abs(relative) > 8*0x1p-52 {
				t.Errorf("m %g, p %g, n %.17g: radiates %v", m, motion.Momentum, index, c.Radiates)
			}
			continue
		}
		if !c.Radiates {
			if c.Angle != 0 {
				t.Errorf("angle %g without light", c.Angle)
			}
			continue
		}
		radiating++
		e := bigEnergy(Three{Z: motion.Momentum}, m)
		tangent, _ := div(root(over), e).Float64()
		amplified, _ := div(reach, over).Float64()
		if got := math.Tan(c.Angle); !within(got, tangent, math.Max(8e-15, 4*0x1p-52*amplified)) {
			t.Errorf("m %g, p %g, n %.17g: tangent %.17g, want %.17g", m, motion.Momentum, index, got, tangent)
		}
	}
	if radiating < 1000 {
		t.Errorf("only %d of the motions radiate", radiating)
	}
}

// TestCherenkovThreshold checks that motions at the threshold have its speed, and the
// kinetic threshold of an electron in water (n = 1.33), 0.264 MeV: common in handbooks,
// from memory.
func TestCherenkovThreshold(t *testing.T) {
	const electron = 0.51099895e-3
	for _, index := range []float64{1.33, 1 + 0x1p-30, 1.00029, 2.4, 100} {
		motion, err := MotionFromMomentum(electron, 1)
		if err != nil {
			t.Fatal(err)
		}
		c, err := motion.Cherenkov(index)
		if err != nil {
			t.Fatal(err)
		}
		for name, at := range map[string]func() (Motion, error){
			"momentum": func() (Motion, error) { return MotionFromMomentum(electron, c.ThresholdMomentum) },
			"kinetic":  func() (Motion, error) { return MotionFromKinetic(electron, c.ThresholdKinetic) },
			"total":    func() (Motion, error) { return MotionFromTotal(electron, c.ThresholdTotal) },
		} {
			x, err := at()
			if err != nil {
				t.Fatal(err)
			}
			if !within(x.OneMinusBeta, (index-1)/index, 1e-8) || !within(x.Beta, c.ThresholdBeta, 1e-11) {
				t.Errorf("n %g by %s: 1 - beta %g, want %g", index, name, x.OneMinusBeta, (index-1)/index)
			}
		}
		if index == 1.33 && math.Abs(c.ThresholdKinetic-0.264e-3) > 0.5e-6 {
			t.Errorf("electron in water: %g GeV", c.ThresholdKinetic)
		}
	}
}

func TestCherenkovSpecialCases(t *testing.T) {
	photon, err := MotionFromMomentum(0, 1)
	if err != nil {
		t.Fatal(err)
	}
	c, err := photon.Cherenkov(2)
	if err != nil || !c.Radiates || !within(c.Angle, math.Acos(0.5), 4e-16) || c.ThresholdMomentum != 0 {
		t.Errorf("beta = 1 exactly: %+v, %v", c, err)
	}
	for _, index := range []float64{1, 0.9, 1e-300} {
		if c, err := photon.Cherenkov(index); err != nil || c != (Cherenkov{}) {
			t.Errorf("index %g: %+v, %v", index, c, err)
		}
	}
	for _, index := range []float64{0, -1, math.NaN(), math.Inf(1), 2e6} {
		_, err := photon.Cherenkov(index)
		if e, ok := errors.AsType[*fault.Error](err); !ok || e.Kind != fault.Invalid || e.Field != "refractive_index" {
			t.Errorf("index %g: %v", index, err)
		}
	}
}
