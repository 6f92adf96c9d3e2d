package detector

import (
	"math"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/momentum"
)

// fewestTracks make a displaced vertex: one track alone points anywhere.
const fewestTracks = 2

// displaced finds the displaced vertices of an event among its measured tracks
// and writes them with the group of each object. Vertices come in the order in
// which their first tracks were measured.
func (w *worker) displaced(truth *event.Truth, i int, g *event.Groups) {
	d := w.config.Displaced
	start := len(g.OfObject)
	g.OfObject = append(g.OfObject, make([]int32, len(w.objects))...)
	groups := g.OfObject[start:]
	particles, _ := truth.Particles(i)
	interaction := pointOf(&truth.Vertex, i)
	count := int32(0)
	for k := range w.objects {
		if groups[k] != 0 || !w.objects[k].track() {
			continue
		}
		origin := pointOf(&truth.Origin, particles+int(w.objects[k].label))
		distance := origin.Sub(interaction).Norm()
		if !(distance > 0 && distance >= d.MinDistanceM) {
			continue
		}
		tracks := 0
		for n := k; n < len(w.objects); n++ {
			if o := &w.objects[n]; o.track() && pointOf(&truth.Origin, particles+int(o.label)) == origin {
				groups[n] = -1 // of this vertex, whether it is found or not
				tracks++
			}
		}
		found := int32(0)
		if tracks >= fewestTracks && w.stream.Chance(d.Efficiency) {
			count++
			found = count
			g.Position.Append(
				origin.X+float64(d.SigmaXM*w.stream.Normal()),
				origin.Y+float64(d.SigmaYM*w.stream.Normal()),
				origin.Z+float64(d.SigmaZM*w.stream.Normal()),
			)
			g.Covariance.Packed = append(g.Covariance.Packed,
				d.SigmaXM*d.SigmaXM, 0, 0, d.SigmaYM*d.SigmaYM, 0, d.SigmaZM*d.SigmaZM)
		}
		for n := k; n < len(w.objects); n++ {
			if groups[n] == -1 {
				groups[n] = found
			}
		}
	}
	g.Offsets = append(g.Offsets, int32(len(g.Position.X))) //nolint:gosec // a block is far smaller
}

// track reports whether the object is a charged one with its momentum measured.
func (o *object) track() bool {
	return (o.class == event.Positive || o.class == event.Negative) && o.mask == event.AllMeasured
}

func pointOf(p *event.Positions, row int) momentum.Three {
	return momentum.Three{X: p.X[row], Y: p.Y[row], Z: p.Z[row]}
}

func (d *Displaced) check(l *checker) {
	if !(d.MinDistanceM >= 0 && d.MinDistanceM <= math.MaxFloat64) {
		l.number("displaced.min_distance_m", d.MinDistanceM, ">= 0 and finite")
	}
	for _, s := range []struct {
		field string
		value float64
	}{{"displaced.sigma_x_m", d.SigmaXM}, {"displaced.sigma_y_m", d.SigmaYM}, {"displaced.sigma_z_m", d.SigmaZM}} {
		l.spread(s.field, s.value)
	}
	l.probability("displaced.efficiency", d.Efficiency)
}
