package selection_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/internal/golden"
	"example.org/kinegate/kinematics/selection"
)

// plainBlock makes seeded events from uniform numbers alone, so that the same block
// comes out on every processor: no function of package math and no fused product.
func plainBlock(r *rand.Rand, kind event.Kind, events int) *event.Block {
	between := func(low, high float64) float64 { return low + float64((high-low)*r.Float64()) }
	b := &event.Block{
		ObjectOffsets: []int32{0}, Species: &event.Mask{}, Beam: &event.Beam{Offsets: []int32{0}}, Vertex: &event.Vertex{},
	}
	b.Coordinates.Kind = kind
	for i := range events {
		b.EventIDs = append(b.EventIDs, int64(i))
		for range 2 + r.IntN(7) {
			b.Class = append(b.Class, []event.Class{1, 1, 1, 2, 3, 4}[r.IntN(6)])
			b.Species.Bits = append(b.Species.Bits, []uint8{0, 0, 0, 8 | 16}[r.IntN(4)])
			row := [4]float64{between(-1, 1), between(-1, 1), between(-0.5, 1.5), between(1, 2)}
			switch kind {
			case event.TransverseMomentum:
				row = [4]float64{between(0, 1), between(-2, 2), between(-3, 3), between(0, 1)}
			case event.MomentumAngles:
				row = [4]float64{between(0, 1.5), between(0, 3), between(-3, 3)}
			case event.MomentumSlopes:
				row = [4]float64{between(0, 1.5), between(-2, 2), between(-2, 2)}
			default:
			}
			for k := range kind.Columns() {
				b.Coordinates.Columns[k] = append(b.Coordinates.Columns[k], row[k])
			}
		}
		b.ObjectOffsets = append(b.ObjectOffsets, int32(len(b.Class)))
		for range r.IntN(4) {
			b.Beam.EnergyGeV = append(b.Beam.EnergyGeV, between(1, 3))
			b.Beam.SigmaGeV = append(b.Beam.SigmaGeV, 0.002)
			b.Beam.TimeNS = append(b.Beam.TimeNS, between(-10, 10))
		}
		b.Beam.Offsets = append(b.Beam.Offsets, int32(len(b.Beam.TimeNS)))
		b.Vertex.Append(0, 0, between(-0.05, 0.05))
	}
	return b
}

// TestGoldenVerdicts holds verdicts, assignments and observables to their bits.
func TestGoldenVerdicts(t *testing.T) {
	golden.Check(t, "verdicts", func(d *golden.Digest) {
		for kind := event.EnergyMomentum; kind.Valid(); kind++ {
			d.Section(kind.String())
			r := rand.New(rand.NewPCG(17, uint64(kind))) //nolint:gosec // a test needs a seed, no secret
			block := plainBlock(r, kind, 400)
			out := judge(t, compileAll(t, wideOpen()), block, selection.AllEntries)
			for i, status := range out.Status {
				d.Int(int64(status), int64(out.Best[0][i]), int64(out.Entries.Offsets[i]))
			}
			for _, bits := range append(out.Accepted, out.Gate) {
				for _, b := range bits {
					d.Int(int64(b))
				}
			}
			for _, e := range rows(out) {
				d.Int(int64(e.Hypothesis), int64(e.BeamRow), int64(e.Status), int64(e.Tried))
				d.Float(e.Weight)
				for _, object := range e.Assignment {
					d.Int(int64(object))
				}
				for _, x := range e.Observables {
					if math.IsNaN(x) {
						d.Text("NaN")
						continue
					}
					d.Float(x)
				}
			}
		}
	})
}

// wideOpen is the selection of everything with one fixed draw of its limits.
func wideOpen() selection.Selection {
	s := sound(rand.New(rand.NewPCG(17, 99))) //nolint:gosec // a test needs a seed, no secret
	s.Hypotheses[1].Prescale = 3
	s.Hypotheses[2].Role = selection.Shadow
	s.Hypotheses[7].Role = selection.Veto
	return s
}
