package num

import "testing"

// Sinks keep results alive, so that the work is not optimised away.
var (
	sinkFloat float64
	sinkDD    DD
)

func BenchmarkElementary(b *testing.B) {
	for _, c := range []struct {
		name string
		f    func(float64) float64
		x    float64
	}{
		{"Exp", Exp, 1.7}, {"Expm1", Expm1, 0.3}, {"Log", Log, 1.7}, {"Log1p", Log1p, 0.3},
		{"Sin", Sin, 1.7}, {"Cos", Cos, 1.7}, {"Tan", Tan, 1.7}, {"Asin", Asin, 0.3}, {"Acos", Acos, 0.3},
		{"Atan", Atan, 1.7}, {"Sinh", Sinh, 1.7}, {"Asinh", Asinh, 1.7}, {"Atanh", Atanh, 0.3},
		{"Cbrt", Cbrt, 1.7}, {"Erfc", Erfc, 1.7},
	} {
		b.Run(c.name, func(b *testing.B) {
			b.ReportAllocs()
			x := c.x
			for b.Loop() {
				sinkFloat = c.f(x)
				x += 1e-9
			}
		})
	}
}

func BenchmarkElementaryOfTwo(b *testing.B) {
	for _, c := range []struct {
		name string
		f    func(x, y float64) float64
	}{{"Atan2", Atan2}, {"Hypot", Hypot}, {"Pow", Pow}} {
		b.Run(c.name, func(b *testing.B) {
			b.ReportAllocs()
			x := 1.7
			for b.Loop() {
				sinkFloat = c.f(x, 0.3)
				x += 1e-9
			}
		})
	}
}

func BenchmarkDoubleDouble(b *testing.B) {
	for _, c := range []struct {
		name string
		f    func(x, y DD) DD
	}{
		{"Add", DD.Add}, {"Mul", DD.Mul}, {"Div", DD.Div}, {"Atan2", DD.Atan2},
		{"Sqrt", func(x, _ DD) DD { return x.Sqrt() }},
		{"Exp", func(x, _ DD) DD { return x.Exp() }},
		{"Log", func(x, _ DD) DD { return x.Log() }},
		{"Sin", func(x, _ DD) DD { return x.Sin() }},
	} {
		b.Run(c.name, func(b *testing.B) {
			b.ReportAllocs()
			x, y := Quo2(1.7, 3), Quo2(5, 7)
			for b.Loop() {
				sinkDD = c.f(x, y)
				x = x.AddFloat(1e-9)
			}
		})
	}
}

func BenchmarkChiSquareTail(b *testing.B) {
	b.ReportAllocs()
	x := 3.0
	for b.Loop() {
		sinkFloat = ChiSquareTail(x, 6)
		x += 1e-9
	}
}
