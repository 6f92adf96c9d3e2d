package decay

import (
	"math"
	"testing"

	"example.org/kinegate/kinematics/momentum/breakup"
)

// TestBoundary checks every point of the curve against the equation of the boundary in
// its symmetric form, the resolution, and that the curve goes once around.
func TestBoundary(t *testing.T) {
	for _, c := range []struct {
		name  string
		total float64
		mass  [3]float64
	}{
		{"D+ -> K- pi+ pi+", 1.86966, [3]float64{0.493677, 0.13957039, 0.13957039}},
		{"tau -> e nu nu", 1.77693, [3]float64{0.00051099895069, 0, 0}},
		{"eta -> pi+ pi- gamma", 0.547862, [3]float64{0.13957039, 0.13957039, 0}},
		{"three photons", 0.7, [3]float64{}},
		{"just open", 3.0000001, [3]float64{1, 1, 1}},
	} {
		for _, resolution := range []float64{0.2, 0.01} {
			t.Run(c.name, func(t *testing.T) {
				d := must[Dalitz](t)(NewDalitz(c.total, c.mass))
				points := must[[]Point](t)(d.Boundary(resolution))
				shape := d.curve()
				for i, p := range points {
					if got := shape.distance(p, points[(i+1)%len(points)]); got > resolution {
						t.Errorf("step of %v at point %d above %v", got, i, resolution)
					}
				}
				if most := int(12 / resolution); len(points) > most {
					t.Errorf("%d points, more than %d", len(points), most)
				}
				sum := c.total * c.total
				for _, m := range c.mass {
					sum += m * m
				}
				area := 0.0
				for i, p := range points {
					if !near(p.M01+p.M02+p.M12, sum, 1e-14) {
						t.Errorf("%+v: sum %v, want %v", p, p.M01+p.M02+p.M12, sum)
					}
					if r := onBoundary(c.total, c.mass, p); r > 1e-12 {
						t.Errorf("%+v is off the boundary by %v", p, r)
					}
					next := points[(i+1)%len(points)]
					area += (p.M01*next.M12 - next.M01*p.M12) / 2
				}
				if area >= 0 {
					t.Errorf("area %v: the curve must go round once, the upper side first", area)
				}
			})
		}
	}
}

// onBoundary returns the determinant that vanishes on the boundary, in units of its
// largest term: with a, b, c = p0.p1, p0.p2, p1.p2
//
//	m0^2 m1^2 m2^2 + 2abc - m0^2 c^2 - m1^2 b^2 - m2^2 a^2 = 0
//
// (the Gram determinant of the three momenta, which lie along one line at rest; E.
// Byckling and K. Kajantie, Particle Kinematics (1973), chapter V, from memory).
func onBoundary(total float64, m [3]float64, p Point) float64 {
	s0, s1, s2 := m[0]*m[0], m[1]*m[1], m[2]*m[2]
	a, b, c := (p.M01-s0-s1)/2, (p.M02-s0-s2)/2, (p.M12-s1-s2)/2
	gram := s0*s1*s2 + 2*a*b*c - s0*c*c - s1*b*b - s2*a*a
	return math.Abs(gram) / math.Pow(total, 6)
}

// TestChordsOfAllCouples holds the chords of the three couples together: each end of one
// lies on the boundary.
func TestChordsOfAllCouples(t *testing.T) {
	mass := [3]float64{0.3, 0.1, 0.7}
	d := must[Dalitz](t)(NewDalitz(2, mass))
	for _, couple := range []Couple{Couple01, Couple02, Couple12} {
		r := must[breakup.Range](t)(d.MassSquaredRange(couple))
		for _, share := range []float64{0, 0.1, 0.5, 0.99, 1} {
			s := r.Min + share*(r.Max-r.Min)
			chord, err := d.At(couple, s)
			if err != nil { // The ends as doubles may lie outside by their rounding.
				if share != 0 && share != 1 {
					t.Error(err)
				}
				continue
			}
			for _, p := range []Point{chord.From, chord.To} {
				if r := onBoundary(2, mass, p); r > 1e-14 || [3]float64{p.M12, p.M02, p.M01}[couple] != s {
					t.Errorf("couple %d at %v: %+v is off the boundary by %v", couple, s, p, r)
				}
			}
			first := func(p Point) float64 { return [3]float64{p.M01, p.M01, p.M02}[couple] }
			if first(chord.From) > first(chord.To) {
				t.Errorf("couple %d: ends out of order: %+v", couple, chord)
			}
		}
	}
}

func TestDalitzAbove(t *testing.T) {
	mass := [3]float64{1000, 0.938, 0.135}
	d := must[Dalitz](t)(NewDalitzAbove(1e-12, mass))
	r := must[breakup.Range](t)(d.MassSquaredRange(Couple12))
	if want := (0.938 + 0.135) * (0.938 + 0.135); !near(r.Min, want, 1e-15) || !near(r.Max-r.Min, 2e-12*(0.938+0.135), 1e-3) {
		t.Errorf("range %+v", r)
	}
	at := must[Dalitz](t)(NewDalitzAbove(0, mass))
	points := must[[]Point](t)(at.Boundary(0.1))
	for _, p := range points {
		if p != points[0] {
			t.Errorf("at threshold the region is a point: %+v and %+v", p, points[0])
		}
	}
}

var pointSink []Point

func BenchmarkBoundary(b *testing.B) {
	d, err := NewDalitz(1.86966, [3]float64{0.493677, 0.13957039, 0.13957039})
	if err != nil {
		b.Fatal(err)
	}
	b.ReportAllocs()
	for b.Loop() {
		if pointSink, err = d.Boundary(0.01); err != nil {
			b.Fatal(err)
		}
	}
}
