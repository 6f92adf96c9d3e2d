package selection_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/selection"
)

// uncertainReaction has every observable of the contract over its products; the two
// mesons are recorded with all of them.
func uncertainHypothesis() selection.Hypothesis {
	h := selection.Hypothesis{
		Reaction:            "gamma p -> K+ Lambda pi0, Lambda -> p pi-, pi0 -> gamma gamma",
		Beam:                &selection.BeamSource{Tagged: &selection.TaggedBeam{}},
		ExtraObjects:        anything(),
		RecordUncertainties: true,
	}
	add := func(o selection.Observable, first []string, second []string, frame selection.Frame, initial selection.Initial) {
		h.Record = append(h.Record, selection.Window{
			Observable: o, Products: first, Second: second, Frame: frame, Initial: initial,
		})
	}
	lambda, pion, kaon, all := []string{"Lambda"}, []string{"pi0"}, []string{"K+"}, []string{"K+", "Lambda"}
	add(selection.InvariantMass, lambda, nil, 0, 0)
	add(selection.InvariantMass, all, nil, 0, 0)
	add(selection.InvariantMassSquared, pion, nil, 0, 0)
	add(selection.MissingMass, kaon, nil, 0, 0)
	add(selection.MissingMassSquared, all, nil, 0, 0)
	for _, frame := range []selection.Frame{selection.Laboratory, selection.CentreOfMass} {
		add(selection.Energy, lambda, nil, frame, 0)
		add(selection.Momentum, all, nil, frame, 0)
		add(selection.TransverseMomentum, pion, nil, frame, 0)
		add(selection.Angle, lambda, nil, frame, 0)
		add(selection.Angle, kaon, nil, frame, 0)
		add(selection.OpeningAngle, kaon, pion, frame, 0)
	}
	add(selection.Coplanarity, kaon, lambda, 0, 0)
	add(selection.MissingDirection, kaon, nil, 0, 0)
	add(selection.MomentumTransfer, kaon, nil, 0, selection.Beam)
	add(selection.MomentumTransfer, lambda, nil, 0, selection.Target)
	add(selection.MomentumTransferPrime, kaon, nil, 0, selection.Beam)
	add(selection.MomentumTransferPrime, lambda, nil, 0, selection.Target)
	add(selection.UnusedPhotonEnergy, nil, nil, 0, 0)
	add(selection.VertexZ, nil, nil, 0, 0)
	add(selection.FlightDistance, lambda, nil, 0, 0)
	add(selection.Pointing, lambda, nil, 0, 0)
	return h
}

// uncertainBlock is one event for it in a coordinate set, with full covariances.
func uncertainBlock(r *rand.Rand, kind event.Kind) *event.Block {
	b := &event.Block{EventIDs: []int64{1}, ObjectOffsets: []int32{0, 6}, Covariance: &event.Covariance{}}
	b.Class = []event.Class{event.Positive, event.Positive, event.Negative, event.Photon, event.Photon, event.Photon}
	b.Species = &event.Mask{Bits: []uint8{event.SpeciesKaon, event.SpeciesProton, event.SpeciesPion, 0, 0, 0}}
	b.Coordinates.Kind = kind
	between := func(low, high float64) float64 { return low + (high-low)*r.Float64() }
	for range b.Class {
		row := [4]float64{between(-0.5, 0.5), between(-0.5, 0.5), between(0.3, 1.2), between(1.3, 2)}
		switch kind {
		case event.TransverseMomentum:
			row = [4]float64{between(0.2, 0.8), between(-0.5, 2), between(-3, 3), 0.2}
		case event.MomentumAngles:
			row = [4]float64{between(0.2, 1.2), between(0.2, 1.5), between(-3, 3)}
		case event.MomentumSlopes:
			row = [4]float64{between(0.2, 1.2), between(-1, 1), between(-1, 1)}
		default:
		}
		for k := range kind.Columns() {
			b.Coordinates.Columns[k] = append(b.Coordinates.Columns[k], row[k])
		}
		b.Covariance.Packed = append(b.Covariance.Packed, positive(r)...)
	}
	b.Beam = &event.Beam{Offsets: []int32{0, 1}, EnergyGeV: []float64{4}, SigmaGeV: []float64{0.01}, TimeNS: []float64{0}}
	b.Vertex = &event.Vertex{Covariance: &event.Covariance{Packed: positive(r)}}
	b.Vertex.Append(0.001, -0.002, 0.01)
	b.Groups = &event.Groups{
		OfObject: []int32{0, 1, 1, 0, 0, 0}, Offsets: []int32{0, 1}, Covariance: &event.Covariance{Packed: positive(r)},
	}
	b.Groups.Position.Append(0.01, 0.02, 0.06)
	return b
}

// positive is a packed positive definite matrix with entries of about 1e-4.
func positive(r *rand.Rand) []float64 {
	var l [3][3]float64
	for a := range l {
		for c := range a + 1 {
			l[a][c] = 0.01 * r.NormFloat64()
		}
	}
	var packed []float64
	for a := range 3 {
		for c := a; c < 3; c++ {
			packed = append(packed, l[a][0]*l[c][0]+l[a][1]*l[c][1]+l[a][2]*l[c][2])
		}
	}
	return packed
}

// observables judges the block and returns what the one entry records.
func observables(t *testing.T, p *selection.Program, b *event.Block) (values, spreads []float64) {
	t.Helper()
	all := rows(judge(t, p, b, selection.AllEntries))
	if len(all) != 1 {
		t.Fatalf("%d entries", len(all))
	}
	return all[0].Observables, all[0].Uncertainties
}

// The uncertainties are those of derivatives taken by finite differences of the
// observables themselves, in every coordinate set and with full covariances of objects,
// beam, vertex and vertex group. A central difference of step h errs by h^2 and 1e-16/h.
func TestUncertainties(t *testing.T) {
	p := compile(t, uncertainHypothesis())
	worst := 0.0
	for kind := event.EnergyMomentum; kind.Valid(); kind++ {
		t.Run(kind.String(), func(t *testing.T) {
			r := rand.New(rand.NewPCG(41, uint64(kind))) //nolint:gosec // a test needs a seed, no secret
			b := uncertainBlock(r, kind)
			values, spreads := observables(t, p, b)
			const h = 1e-6
			slope := func(x *float64) []float64 {
				old := *x
				*x = old + h
				above, _ := observables(t, p, b)
				*x = old - h
				below, _ := observables(t, p, b)
				*x = old
				d := make([]float64, len(above))
				for k := range d {
					d[k] = (above[k] - below[k]) / (2 * h)
				}
				return d
			}
			want := make([]float64, len(values))
			block := func(gradient [3][]float64, packed []float64) {
				v := [3][3]float64{{packed[0], packed[1], packed[2]}, {packed[1], packed[3], packed[4]}, {packed[2], packed[4], packed[5]}}
				for k := range want {
					for a := range 3 {
						for c := range 3 {
							want[k] += gradient[a][k] * v[a][c] * gradient[c][k]
						}
					}
				}
			}
			for row := range b.Class {
				var gradient [3][]float64
				for a := range 3 {
					gradient[a] = slope(&b.Coordinates.Columns[a][row])
				}
				block(gradient, b.Covariance.Row(row))
			}
			block([3][]float64{
				slope(&b.Vertex.X[0]), slope(&b.Vertex.Y[0]), slope(&b.Vertex.Z[0]),
			}, b.Vertex.Covariance.Row(0))
			g := &b.Groups.Position
			block([3][]float64{slope(&g.X[0]), slope(&g.Y[0]), slope(&g.Z[0])}, b.Groups.Covariance.Row(0))
			for k, d := range slope(&b.Beam.EnergyGeV[0]) {
				want[k] += d * d * b.Beam.SigmaGeV[0] * b.Beam.SigmaGeV[0]
			}
			for k, label := range p.Outlines()[0].Observables {
				if math.IsNaN(values[k]) {
					if !math.IsNaN(spreads[k]) {
						t.Errorf("%s: NaN with the uncertainty %g", label, spreads[k])
					}
					continue
				}
				off := math.Abs(spreads[k]/math.Sqrt(want[k]) - 1)
				worst = max(worst, off)
				if !(off < 1e-6) {
					t.Errorf("%s (%d): %g, finite differences give %g", label, k, spreads[k], math.Sqrt(want[k]))
				}
			}
		})
	}
	t.Logf("worst relative difference %.1g", worst)
}
