package reaction_test

import (
	"testing"

	"example.org/kinegate/kinematics/reaction"
)

// BenchmarkDescribe reads a text and answers for it, as a request does.
func BenchmarkDescribe(b *testing.B) {
	tab := table(b)
	for _, text := range []string{
		"gamma p -> K+ Lambda, Lambda -> p pi-", "gamma p -> p rho0, rho0 -> pi+ pi-", "gamma p -> K+ X", "gamma O16 -> p X",
	} {
		b.Run(text, func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				describe(b, tab, text, onTarget(1.3))
			}
		})
	}
}

// BenchmarkUnknownName is the time to a fault with nearest names.
func BenchmarkUnknownName(b *testing.B) {
	tab := table(b)
	b.ReportAllocs()
	for b.Loop() {
		if _, err := reaction.Parse(tab, "gamma p -> K+ Lamda"); err == nil {
			b.Fatal("Lamda is known")
		}
	}
}
