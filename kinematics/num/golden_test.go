package num_test

import (
	"testing"

	"example.org/kinegate/kinematics/internal/golden"
	"example.org/kinegate/kinematics/num"
)

// goldenCount is the number of seeded arguments of each function.
const goldenCount = 4000

// TestGoldenElementary holds the elementary functions to the same bits on every processor, with
// arguments over the decades where each has a finite value.
func TestGoldenElementary(t *testing.T) {
	t.Parallel()

	signed := func(low, high int) func(*golden.Source) float64 {
		return func(s *golden.Source) float64 { return s.Sign() * s.Magnitude(low, high) }
	}
	positive := func(low, high int) func(*golden.Source) float64 {
		return func(s *golden.Source) float64 { return s.Magnitude(low, high) }
	}
	aboveOne := func(s *golden.Source) float64 { return 1 + s.Magnitude(-50, 100) }

	functions := []struct {
		name     string
		function func(float64) float64
		argument func(*golden.Source) float64
	}{
		{"exp", num.Exp, signed(-60, 9)},
		{"expm1", num.Expm1, signed(-60, 9)},
		{"log", num.Log, positive(-1022, 1023)},
		{"log1p", num.Log1p, signed(-60, -1)},
		{"sin", num.Sin, signed(-60, 40)},
		{"cos", num.Cos, signed(-60, 40)},
		{"tan", num.Tan, signed(-60, 40)},
		{"sin_huge", num.Sin, signed(40, 1023)},
		{"asin", num.Asin, signed(-60, -1)},
		{"acos", num.Acos, signed(-60, -1)},
		{"atan", num.Atan, signed(-60, 60)},
		{"sinh", num.Sinh, signed(-60, 9)},
		{"cosh", num.Cosh, signed(-60, 9)},
		{"tanh", num.Tanh, signed(-60, 9)},
		{"asinh", num.Asinh, signed(-60, 60)},
		{"acosh", num.Acosh, aboveOne},
		{"atanh", num.Atanh, signed(-60, -1)},
		{"cbrt", num.Cbrt, signed(-1022, 1023)},
	}

	golden.Check(t, "elementary", func(d *golden.Digest) {
		for i, one := range functions {
			d.Section(one.name)

			arguments := golden.NewSource(uint64(i))
			for range goldenCount {
				d.Float(one.function(one.argument(arguments)))
			}
		}

		d.Section("two_arguments")

		arguments := golden.NewSource(uint64(len(functions)))
		for range goldenCount {
			x := arguments.Magnitude(-60, 60)
			y := arguments.Sign() * arguments.Magnitude(-60, 60)
			d.Float(num.Atan2(y, x), num.Atan2(y, -x), num.Hypot(x, y), num.Pow(x, arguments.Between(-8, 8)))

			sin, cos := num.Sincos(y)
			d.Float(sin, cos)
		}
	})
}

// TestGoldenDoubleDouble does the same for the arithmetic of doubled precision.
func TestGoldenDoubleDouble(t *testing.T) {
	t.Parallel()

	golden.Check(t, "double_double", func(d *golden.Digest) {
		arguments := golden.NewSource(1)

		d.Section("arithmetic")

		for range goldenCount {
			a := num.Prod2(arguments.Magnitude(-40, 40), arguments.Sign()*arguments.Magnitude(-40, 40))
			b := num.Sum2(arguments.Magnitude(-40, 40), arguments.Magnitude(-90, 40))

			for _, result := range []num.DD{a.Add(b), a.Sub(b), a.Mul(b), a.Div(b), b.Sqrt()} {
				d.Float(result.Hi, result.Lo)
			}
		}
	})
}
