package selection_test

import (
	"math/rand/v2"
	"strconv"
	"testing"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/selection"
)

// Gates keeps the last result of a benchmark, so that its work is not left out.
var Gates event.Bits

// threePions makes events of six photons from three neutral pions, dealt.
func threePions(events int) *event.Block {
	r := rand.New(rand.NewPCG(5, 6)) //nolint:gosec // a test needs a seed, no secret
	list := make([][]object, 0, events)
	for range events {
		var objects []object
		for range 3 {
			p := momentum.Three{X: r.NormFloat64(), Y: r.NormFloat64(), Z: r.NormFloat64()}.Scale(0.3)
			boost, err := momentum.NewBoost(p, 0.1349768)
			if err != nil {
				return nil
			}
			u := momentum.Three{X: r.NormFloat64(), Y: r.NormFloat64(), Z: r.NormFloat64()}.Unit().Scale(0.1349768 / 2)
			for _, d := range []momentum.Three{u, u.Neg()} {
				q := boost.FromRest(momentum.Four{P: d, E: 0.1349768 / 2}).P
				objects = append(objects, photon(q.X, q.Y, q.Z))
			}
		}
		r.Shuffle(len(objects), func(i, j int) { objects[i], objects[j] = objects[j], objects[i] })
		list = append(list, objects)
	}
	b := makeBlock(list, nil)
	angles := event.Coordinates{Kind: event.MomentumAngles}
	for row := range b.Class {
		p := b.Coordinates.Momentum(row)
		for k, x := range []float64{p.Norm(), p.Theta(), p.Phi()} {
			angles.Columns[k] = append(angles.Columns[k], x)
		}
	}
	b.Coordinates = angles
	return b
}

// pairWindows is three pions with a window on the mass of each.
func pairWindows() selection.Hypothesis {
	h := selection.Hypothesis{Reaction: "eta -> pi0 pi0 pi0, pi0 -> gamma gamma", Condition: &selection.Condition{}}
	for i := range 3 {
		h.Condition.AllOf = append(h.Condition.AllOf, only(within(selection.InvariantMass, 0.11, 0.16, "pi0["+strconv.Itoa(i)+"]")))
	}
	return h
}

// BenchmarkSixPhotons judges six photons into three pions with pair windows.
func BenchmarkSixPhotons(b *testing.B) {
	ranked := pairWindows()
	ranked.Ranking = closest("pi0[0]", "pi0[1]", "pi0[2]")
	open := ranked
	open.Condition = nil
	tagged := ranked
	tagged.Reaction = "gamma p -> p eta, eta -> pi0 pi0 pi0, pi0 -> gamma gamma"
	tagged.Beam = &selection.BeamSource{Tagged: &selection.TaggedBeam{}}
	tagged.Measurements = []selection.ProductMeasurement{{Product: "p", Measurement: selection.Missing}}
	tagged.Condition = &selection.Condition{AllOf: append(append([]selection.Condition{}, ranked.Condition.AllOf...),
		only(within(selection.MissingMassSquared, -2, 2, "eta")))}
	block := threePions(1000)
	beams := *block
	beams.Beam = &event.Beam{Offsets: []int32{0}}
	for i := range block.Events() {
		for range 2 {
			beams.Beam.EnergyGeV = append(beams.Beam.EnergyGeV, 2)
			beams.Beam.SigmaGeV = append(beams.Beam.SigmaGeV, 0.002)
			beams.Beam.TimeNS = append(beams.Beam.TimeNS, 0)
		}
		beams.Beam.Offsets = append(beams.Beam.Offsets, int32(2*i+2))
	}
	for _, c := range []struct {
		name       string
		block      *event.Block
		detail     selection.Detail
		hypotheses []selection.Hypothesis
	}{
		{"first", block, selection.NoEntries, []selection.Hypothesis{pairWindows()}},
		{"ranked", block, selection.AcceptedEntries, []selection.Hypothesis{ranked}},
		{"ranked without windows", block, selection.AcceptedEntries, []selection.Hypothesis{open}},
		{"two candidates", &beams, selection.AcceptedEntries, []selection.Hypothesis{tagged}},
	} {
		b.Run(c.name, func(b *testing.B) {
			w := compile(b, c.hypotheses...).NewWorker(c.detail)
			var out event.VerdictBlock
			b.ReportAllocs()
			for b.Loop() {
				w.Reset(&out)
				w.Judge(c.block, 0, c.block.Events(), &out)
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/float64(c.block.Events()), "ns/event")
			b.ReportMetric(float64(count(out.Accepted[0], c.block.Events())), "accepted")
			Gates = out.Gate
		})
	}
}

// BenchmarkTwelvePhotons tries every pairing of twelve photons.
func BenchmarkTwelvePhotons(b *testing.B) {
	h := selection.Hypothesis{Reaction: "-> pi0 pi0 pi0 pi0 pi0 pi0, pi0 -> gamma gamma"}
	h.Ranking = closest("pi0[0]", "pi0[1]", "pi0[2]", "pi0[3]", "pi0[4]", "pi0[5]")
	block := makeBlock([][]object{photons(12)}, nil)
	w := compile(b, h).NewWorker(selection.AcceptedEntries)
	var out event.VerdictBlock
	b.ReportAllocs()
	for b.Loop() {
		w.Reset(&out)
		w.Judge(block, 0, 1, &out)
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/float64(pairings(6)), "ns/assignment")
	Gates = out.Gate
}
