package breakup

import (
	"errors"
	"math"
	"math/rand/v2"
	"testing"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/num"
)

// TestLegsAgree makes the same leg in its three ways and compares all that follows.
func TestLegsAgree(t *testing.T) {
	random := rand.New(rand.NewPCG(4, 4)) //nolint:gosec // seeded on purpose
	for range 200 {
		beam, target, kinetic := random.Float64(), 0.1+random.Float64(), 5*random.Float64()
		p, ke, _ := Body{Mass: beam, Given: ByKinetic, Value: kinetic}.Motion()
		w := num.Sum2(beam, target).Square().Add(ke.MulFloat(2 * target)).Sqrt()
		sys := NewSystem(w, p)
		mass := num.FromFloat(0.8 * random.Float64() * w.Hi)
		rest := num.FromFloat(0.9 * random.Float64() * (w.Hi - mass.Hi))
		excess := w.Sub(mass).Sub(rest)
		q0 := num.Sum2(beam, target).Sub(mass).Sub(rest)
		legs := []Leg{
			NewLeg(sys, Over(excess, w, mass, rest), mass, rest),
			NewLegOnTarget(sys, Over(excess, w, mass, rest), mass, rest, beam, target, ke, q0),
		}
		legs = append(legs, NewLegAt(sys, mass, legs[0].Momentum()))
		cosine := 2*random.Float64() - 1
		want := legs[0].Lab(AtCosine(cosine))
		for i := range legs {
			got := legs[i].Lab(AtCosine(cosine))
			if !near(got.Kinetic.Float(), want.Kinetic.Float()) || !near(got.Angle(), want.Angle()) || legs[i].Carry() != legs[0].Carry() ||
				!near(legs[i].MaxAngle(), legs[0].MaxAngle()) {
				t.Errorf("leg %d: %+v, want %+v", i, got, want)
			}
		}
	}
}

func near(a, b float64) bool { return math.Abs(a-b) <= 1e-14*math.Abs(b) }

func TestDirections(t *testing.T) {
	for _, theta := range []float64{0, 1e-20, 1e-8, 1, math.Pi / 2, 3, math.Nextafter(math.Pi, 0), math.Pi} {
		if got := AtAngle(theta).Angle(); !near(got, theta) {
			t.Errorf("angle %v comes back as %v", theta, got)
		}
	}
	for _, cosine := range []float64{-1, -1 + 0x1p-53, -0.3, 0, 0x1p-60, 1 - 0x1p-53, 1} {
		d := AtCosine(cosine)
		if got := d.Cosine().Float(); got != cosine {
			t.Errorf("cosine %v comes back as %v", cosine, got)
		}
		if got := d.Sine().Square().Float(); !near(got, (1-cosine)*(1+cosine)) {
			t.Errorf("sine squared at cosine %v: %v", cosine, got)
		}
	}
	half := num.FromFloat(0.75)
	if d, ok := Between(half, half); !ok || d.Fore.Float() != 0.5 || d.Aft.Float() != 0.5 {
		t.Errorf("values without a common sum: %+v", d)
	}
	if _, ok := Between(num.FromFloat(-1), num.FromFloat(2)); ok {
		t.Error("a direction beyond pi")
	}
}

func TestTilted(t *testing.T) {
	for _, c := range []struct {
		max, tilt float64
		want      Range
	}{
		{0.3, 0, Range{0, 0.3}}, {0.3, math.Pi, Range{math.Pi - 0.3, math.Pi}}, {0.3, 1, Range{0.7, 1.3}},
		{0.3, 0.1, Range{0, 0.4}}, {math.Pi, 1, Range{0, math.Pi}},
	} {
		if got := Tilted(Range{Max: c.max}, c.tilt); !near(got.Min, c.want.Min) || !near(got.Max, c.want.Max) {
			t.Errorf("cone of %v at %v: got %v, want %v", c.max, c.tilt, got, c.want)
		}
	}
}

func TestBodyRefusals(t *testing.T) {
	for _, c := range []struct {
		body  Body
		field string
	}{
		{Body{Mass: -1}, "x.mass_gev"}, {Body{Mass: 1e-40}, "x.mass_gev"}, {Body{Value: math.NaN()}, "x.momentum_gev"},
		{Body{Given: ByKinetic, Value: -1}, "x.kinetic_energy_gev"}, {Body{Mass: 1, Given: ByTotal, Value: 0.5}, "x.total_energy_gev"},
		{Body{Given: ByTotal, Value: 1e40}, "x.total_energy_gev"}, {Body{Given: 9}, "x.given"},
	} {
		var f *fault.Error
		if err := c.body.Check("test", "x"); !errors.As(err, &f) || f.Kind != fault.Invalid || f.Field != c.field {
			t.Errorf("%+v: got %v, want a fault of %s", c.body, err, c.field)
		}
	}
}
