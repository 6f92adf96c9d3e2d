package reaction

import (
	"math"
	"slices"
	"strconv"
	"testing"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/internal/reference"
	"example.org/kinegate/kinematics/momentum/breakup"
)

func TestChecksPhaseSpace(t *testing.T) {
	reference.Checks(t, "phase-space", func(c reference.Check) (any, bool) {
		masses := c.Floats("masses")
		terms := []float64{c.Float("M")}
		for _, m := range masses {
			terms = append(terms, -m)
		}
		volume, err := PhaseSpaceVolume(breakup.Sum(terms...).Float(), masses...)
		if err != nil {
			t.Fatalf("%s: %v", c.ID, err)
		}
		return volume, true
	})
}

// TestPhaseSpaceNearlyMassless compares the integrals with the massless closed form at
// the same total mass, from which masses of 1e-12 differ by less than 1e-20.
func TestPhaseSpaceNearlyMassless(t *testing.T) {
	const mass = 1e-12
	for n := 3; n <= MaxRangeBodies; n++ {
		masses := make([]float64, n)
		for i := range masses {
			masses[i] = mass
		}
		got, err := PhaseSpaceVolume(1-float64(n)*mass, masses...)
		if err != nil {
			t.Fatal(err)
		}
		if relative := math.Abs(got/masslessVolume(1, n) - 1); relative > 2e-13 {
			t.Errorf("%d bodies: got %v, want %v: relative error %.2g", n, got, masslessVolume(1, n), relative)
		}
	}
}

// TestPhaseSpaceNonRelativistic compares with the volume far below the masses,
//
//	(2 pi^3)^((n-1)/2) sqrt(prod m)/(sum m)^(3/2) excess^((3n-5)/2)/(2 Gamma(3(n-1)/2))
//
// (G. I. Kopylov's form, from memory; for n = 2 it is pi sqrt(2 mu excess)/M), from
// which the volume differs by the order of excess over mass.
func TestPhaseSpaceNonRelativistic(t *testing.T) {
	const excess = 1e-9
	for n := 2; n <= MaxRangeBodies; n++ {
		masses := make([]float64, n)
		sum, product := 0.0, 1.0
		for i := range masses {
			masses[i] = 0.5 + 0.3*float64(i)
			sum += masses[i]
			product *= masses[i]
		}
		half := float64(n-1) / 2
		want := math.Pow(2*math.Pi*math.Pi*math.Pi, half) * math.Sqrt(product) / math.Pow(sum, 1.5) *
			math.Pow(excess, 3*half-1) / (2 * math.Gamma(3*half))
		got, err := PhaseSpaceVolume(excess, masses...)
		if err != nil {
			t.Fatal(err)
		}
		if relative := math.Abs(got/want - 1); relative > 20*excess {
			t.Errorf("%d bodies: got %v, want %v: relative error %.2g", n, got, want, relative)
		}
	}
}

// TestPhaseSpaceOrder holds the volume against other orders of the bodies, which take
// other integrals, over masses from 0 to a thousand times the excess.
func TestPhaseSpaceOrder(t *testing.T) {
	masses := []float64{0, 0.003, 0.1, 1, 30, 0.1, 0, 1000}
	for n := 3; n <= MaxRangeBodies; n++ {
		forward := slices.Clone(masses[:n])
		backward := slices.Clone(forward)
		slices.Reverse(backward)
		a, errA := PhaseSpaceVolume(1, forward...)
		b, errB := PhaseSpaceVolume(1, backward...)
		if errA != nil || errB != nil {
			t.Fatal(errA, errB)
		}
		if relative := math.Abs(b/a - 1); relative > 2e-13 {
			t.Errorf("%d bodies: %v and reversed %v: relative difference %.2g", n, a, b, relative)
		}
	}
}

func TestPhaseSpaceRefusals(t *testing.T) {
	for _, c := range []struct {
		name   string
		excess float64
		masses []float64
		field  string
	}{
		{"one body", 1, []float64{1}, "masses_gev"},
		{"nine bodies", 1, make([]float64, 9), "masses_gev"},
		{"negative mass", 1, []float64{1, -1}, "masses_gev[1]"},
		{"negative excess", -1, []float64{1, 1}, "excess_energy_gev"},
		{"massless at rest", 0, []float64{0, 0}, "excess_energy_gev"},
		{"no number", math.NaN(), []float64{1, 1}, "excess_energy_gev"},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, err := PhaseSpaceVolume(c.excess, c.masses...)
			wantFault(t, err, fault.Invalid, c.field)
		})
	}
	if v, err := PhaseSpaceVolume(0, 1, 1, 1); v != 0 || err != nil {
		t.Errorf("at threshold: %v, %v, want 0", v, err)
	}
}

var volumeSink float64

func BenchmarkPhaseSpaceVolume(b *testing.B) {
	for _, n := range []int{2, 3, 4, 8} {
		b.Run(strconv.Itoa(n), func(b *testing.B) {
			masses := []float64{0.5, 0.14, 0.14, 0.13, 0.94, 0.1, 0, 0.5}[:n]
			b.ReportAllocs()
			for b.Loop() {
				volumeSink, _ = PhaseSpaceVolume(1.2, masses...)
			}
		})
	}
}
