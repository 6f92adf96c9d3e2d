package selection_test

import (
	"math"
	"math/rand/v2"
	"strconv"
	"strings"
	"testing"

	"example.org/kinegate/kinematics/constraint"
	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/generation"
	"example.org/kinegate/kinematics/internal/golden"
	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/selection"
)

// pionMass is that of the particle table.
const pionMass = 0.1349768

// photonPions makes events of 2n photons from n neutral pions, dealt and smeared by a
// relative energy and an angle, with their covariances; pairs says which pion each
// photon comes from.
func photonPions(seed uint64, events, n int, relative, angle float64) (block *event.Block, pairs [][]int) {
	r := rand.New(rand.NewPCG(seed, 77)) //nolint:gosec // a test needs a seed, no secret
	b := &event.Block{ObjectOffsets: []int32{0}, Covariance: &event.Covariance{}}
	b.Coordinates.Kind = event.MomentumAngles
	for i := range events {
		var photons []momentum.Three
		var from []int
		for k := range n {
			p := momentum.Three{X: r.NormFloat64(), Y: r.NormFloat64(), Z: r.NormFloat64()}.Scale(0.4)
			boost, err := momentum.NewBoost(p, pionMass)
			if err != nil {
				return nil, nil
			}
			u := momentum.Three{X: r.NormFloat64(), Y: r.NormFloat64(), Z: r.NormFloat64()}.Unit().Scale(pionMass / 2)
			for _, d := range []momentum.Three{u, u.Neg()} {
				photons = append(photons, boost.FromRest(momentum.Four{P: d, E: pionMass / 2}).P)
				from = append(from, k)
			}
		}
		r.Shuffle(len(photons), func(i, j int) {
			photons[i], photons[j] = photons[j], photons[i]
			from[i], from[j] = from[j], from[i]
		})
		for _, q := range photons {
			sigmas := [3]float64{relative * q.Norm(), angle, angle / math.Sin(q.Theta())}
			for k, x := range []float64{q.Norm(), q.Theta(), q.Phi()} {
				b.Coordinates.Columns[k] = append(b.Coordinates.Columns[k], x+sigmas[k]*r.NormFloat64())
			}
			b.Class = append(b.Class, event.Photon)
			b.Covariance.Packed = append(b.Covariance.Packed, sigmas[0]*sigmas[0], 0, 0, sigmas[1]*sigmas[1], 0, sigmas[2]*sigmas[2])
		}
		b.EventIDs = append(b.EventIDs, int64(i))
		b.ObjectOffsets = append(b.ObjectOffsets, int32(len(b.Class)))
		pairs = append(pairs, from)
	}
	return b, pairs
}

// pionsOnly is a decay to n neutral pions, fitted to their masses.
func pionsOnly(n int) selection.Hypothesis {
	return selection.Hypothesis{
		Reaction: "->" + strings.Repeat(" pi0", n) + ", pi0 -> gamma gamma",
		Fit:      &selection.Fit{Masses: pions(n)},
	}
}

// paired reports whether an assignment of photons to pions, three products each, is that
// of the pairs.
func paired(assignment []int16, from []int) bool {
	for k := 0; k+2 < len(assignment); k += 3 {
		if from[assignment[k+1]] != from[assignment[k+2]] {
			return false
		}
	}
	return true
}

// Twelve photons make 12!/(2^6 6!) = 10395 sets of six pions, and the fit of the right one
// is the best; a work budget below that number ends with its own status.
func TestTwelvePhotonsFitted(t *testing.T) {
	const events, resolution = 2, 0.002
	h := pionsOnly(6)
	block, pairs := photonPions(3, events, 6, resolution, resolution)
	one := *block
	one.EventIDs, one.ObjectOffsets = block.EventIDs[:1], block.ObjectOffsets[:2]
	one.Class, one.Covariance = block.Class[:12], &event.Covariance{Packed: block.Covariance.Packed[:12*6]}
	for k := range 3 {
		one.Coordinates.Columns[k] = block.Coordinates.Columns[k][:12]
	}
	for i, e := range rows(judge(t, compile(t, h), &one, selection.AllEntries)) {
		if e.Status != event.Accepted || e.Tried != 10395 || e.Fit.DegreesOfFreedom != 6 {
			t.Errorf("event %d: status %d, %d tried, %d degrees of freedom", i, e.Status, e.Tried, e.Fit.DegreesOfFreedom)
		}
		if !paired(e.Assignment, pairs[i]) {
			t.Errorf("event %d: photons %v come from %v", i, e.Assignment, pairs[i])
		}
	}
	short := judge(t, compileAll(t, selection.Selection{Hypotheses: []selection.Hypothesis{h}, AssignmentBudget: 1000}), block, selection.AllEntries)
	for i, status := range short.Status {
		if status != event.BudgetUsed {
			t.Errorf("event %d: status %v with a budget of 1000", i, status)
		}
	}
	// Windows of five standard deviations leave the answer and most of the work.
	cheap := h
	cheap.Condition = &selection.Condition{}
	for k := range 6 {
		cheap.Condition.AllOf = append(cheap.Condition.AllOf,
			only(within(selection.InvariantMass, 0.13, 0.14, "pi0["+strconv.Itoa(k)+"]")))
	}
	for i, e := range rows(judge(t, compile(t, cheap), block, selection.AllEntries)) {
		if e.Status != event.Accepted || !paired(e.Assignment, pairs[i]) || e.Tried > 2000 {
			t.Errorf("event %d with windows: status %d, %d tried, %v from %v", i, e.Status, e.Tried, e.Assignment, pairs[i])
		}
	}
}

// Merged photons of a fast pion: gamma p -> p pi0 with pions above 3.5 GeV, whose photons
// the invented calorimeter does not tell apart below 0.1 rad. The cluster stands for the
// pion with the pion's mass, and the missing mass is that of the proton.
func TestMergedPhotons(t *testing.T) {
	config := fineHall(1)
	config.Calorimeter.MergeAngleRad = 0.1
	h := selection.Hypothesis{
		Reaction: "gamma p -> p pi0",
		Measurements: append(missing("p"), selection.ProductMeasurement{
			Product: "pi0", Merged: &selection.MergedPhotons{MinEnergyGeV: 3.5},
		}),
		Beam: &selection.BeamSource{Tagged: &selection.TaggedBeam{}},
		Fit:  &selection.Fit{},
		Record: []selection.Window{
			{Observable: selection.MissingMass, Products: []string{"pi0"}},
			{Observable: selection.InvariantMass, Products: []string{"pi0"}},
			{Observable: selection.Energy, Products: []string{"pi0"}},
		},
		RecordUncertainties: true,
	}
	const events = 4000
	s := simulate(t, "gamma p -> p pi0, pi0 -> gamma gamma", config, generation.Flat{LowGeV: 4, HighGeV: 4.5}, events)
	out := judge(t, compile(t, h), &s.block, selection.AllEntries)
	var probabilities []float64
	pulls := &moments{}
	for i := range events {
		first, end := s.block.Objects(i)
		single := end-first == 1
		energy := 0.0
		if single {
			energy = s.block.Coordinates.Columns[0][first]
		}
		entries := out.Entries.Offsets[i+1] - out.Entries.Offsets[i]
		if want := single && energy >= 3.5; want != (entries == 1) {
			t.Fatalf("event %d: %d objects, %.3f GeV, %d entries", i, end-first, energy, entries)
		}
		if entries == 0 {
			continue
		}
		e := out.Entries.Row(int(out.Entries.Offsets[i]))
		if e.Status != event.Accepted || e.Fit.DegreesOfFreedom != 1 {
			t.Fatalf("event %d: status %d, fit %+v", i, e.Status, e.Fit)
		}
		if math.Abs(e.Observables[1]-pionMass) > 1e-12 || e.Observables[2] != energy {
			t.Fatalf("event %d: a pion of mass %g and energy %g", i, e.Observables[1], e.Observables[2])
		}
		// One photon may have flown out of the acceptance; the other is then no pion.
		row, _ := s.truth.Particles(i)
		if one, other := s.truth.Momentum[row+2], s.truth.Momentum[row+3]; one.P.Angle(other.P) > 0.1 {
			if e.Fit.Probability > 1e-6 {
				t.Errorf("event %d: a single photon has the probability %g", i, e.Fit.Probability)
			}
			continue
		}
		probabilities = append(probabilities, e.Fit.Probability)
		pulls.add((e.Observables[0] - 0.93827208943) / e.Uncertainties[0])
	}
	if len(probabilities) < 500 {
		t.Fatalf("%d merged pions", len(probabilities))
	}
	flat(t, probabilities)
	mean, width := pulls.mean()*math.Sqrt(pulls.n), (pulls.width()-1)*math.Sqrt(2*pulls.n)
	if math.Abs(mean) > 5 || math.Abs(width) > 5 {
		t.Errorf("missing masses over their uncertainties: mean %.3f, width %.3f", pulls.mean(), pulls.width())
	}
	t.Logf("%d merged pions; missing mass less the proton's over its uncertainty: mean %.3f, width %.3f", len(probabilities), pulls.mean(), pulls.width())
}

// A fit that fails is no accept, whatever the condition says, and an event that says so
// has the status of its fit.
func TestFailedFits(t *testing.T) {
	block, _ := photonPions(4, 2, 2, 0.01, 0.01)
	block.Covariance.Packed[0] = math.NaN()
	block.Covariance.Packed[6*4] = -1
	h := pionsOnly(2)
	h.Condition = &selection.Condition{NoneOf: []selection.Condition{{Window: within(selection.FitProbability, 0.5, 0.6)}}}
	out := judge(t, compile(t, h), block, selection.AllEntries)
	for i := range block.Events() {
		if out.Status[i] != event.Good {
			continue // the event's own numbers were found at fault
		}
		e := out.Entries.Row(int(out.Entries.Offsets[i]))
		if out.Accepted[0].Get(i) || out.Gate.Get(i) || e.Status != event.FitFailed || e.Fit.Status != event.FitStatus(constraint.Singular) {
			t.Errorf("event %d: accepted %v, status %d, fit %d", i, out.Accepted[0].Get(i), e.Status, e.Fit.Status)
		}
	}
	// Photons of one direction have no mass: the constraint cannot be met.
	for row := range block.Class {
		block.Coordinates.Columns[1][row], block.Coordinates.Columns[2][row] = 1, 1
		copy(block.Covariance.Row(row), []float64{1e-6, 0, 0, 0, 0, 0})
	}
	out = judge(t, compile(t, h), block, selection.AllEntries)
	for i, e := range rows(out) {
		if out.Accepted[0].Get(i) || e.Status != event.FitFailed {
			t.Errorf("event %d of collinear photons: accepted %v, status %d, fit %d", i, out.Accepted[0].Get(i), e.Status, e.Fit.Status)
		}
	}
	block.Covariance = nil
	if err := compile(t, h).Accepts(block); err == nil || !strings.Contains(err.Error(), "covariance") {
		t.Errorf("a block without covariances: %v", err)
	}
	if out := judge(t, compile(t, h), block, selection.AcceptedEntries); out.Accepted[0].Get(0) {
		t.Error("an event without covariances is accepted")
	}
}

// Verdicts with fits have the same bits on one worker and on several with ranges of any
// size, and the bits of the golden digest.
func TestGoldenFits(t *testing.T) {
	h := taggedFit(1)
	h.Condition = &selection.Condition{Window: within(selection.FitProbability, 0.01, 1)}
	h.Record = []selection.Window{{Observable: selection.InvariantMass, Products: []string{"pi0"}}}
	h.RecordUncertainties = true
	h.ExtraObjects = anything()
	// Uniform numbers alone, so that the block is the same on every processor.
	block := plainBlock(rand.New(rand.NewPCG(17, 40)), event.MomentumAngles, 300) //nolint:gosec // a test needs a seed, no secret
	block.Covariance = &event.Covariance{}
	for range block.Class {
		block.Covariance.Packed = append(block.Covariance.Packed, 0.03, 0.004, 0, 0.02, 0.002, 0.03)
	}
	digest := func(d *golden.Digest, out *event.VerdictBlock) {
		for _, e := range rows(out) {
			d.Int(int64(e.BeamRow), int64(e.Status), int64(e.Tried), int64(e.Fit.Status), int64(e.Fit.Iterations))
			for _, x := range []float64{e.Fit.ChiSquare, e.Fit.Probability, e.Observables[0], e.Uncertainties[0]} {
				if math.IsNaN(x) {
					d.Text("NaN")
					continue
				}
				d.Float(x)
			}
			for _, object := range e.Assignment {
				d.Int(int64(object))
			}
		}
	}
	p := compile(t, h)
	whole := judge(t, p, block, selection.AllEntries)
	for _, size := range []int{1, 7, 300} {
		w, other := p.NewWorker(selection.AllEntries), p.NewWorker(selection.AllEntries)
		var out event.VerdictBlock
		w.Reset(&out)
		for from := 0; from < block.Events(); from += size {
			var part event.VerdictBlock
			other.Reset(&part)
			other.Judge(block, from, min(from+size, block.Events()), &part)
			w.Append(&out, &part)
		}
		if one, several := fingerprint(whole), fingerprint(&out); one != several {
			t.Errorf("ranges of %d events: other bits", size)
		}
	}
	golden.Check(t, "fits", func(d *golden.Digest) {
		d.Section("pion")
		digest(d, whole)
	})
}

// fingerprint renders the bits of fits and observables.
func fingerprint(out *event.VerdictBlock) string {
	var b strings.Builder
	for _, e := range rows(out) {
		for _, x := range []float64{e.Fit.ChiSquare, e.Fit.Probability, e.Observables[0], e.Uncertainties[0]} {
			b.WriteString(strconv.FormatUint(math.Float64bits(x), 16))
		}
		b.WriteString(strconv.Itoa(int(e.Status)) + "/" + strconv.Itoa(int(e.Tried)) + ";")
	}
	return b.String()
}

// TestFitsAllocateNothing judges with fits in steady state.
func TestFitsAllocateNothing(t *testing.T) {
	block, _ := photonPions(5, 20, 3, 0.02, 0.01)
	h := pionsOnly(3)
	h.Record = []selection.Window{{Observable: selection.InvariantMass, Products: []string{"pi0[0]"}}}
	h.RecordUncertainties = true
	w := compile(t, h).NewWorker(selection.AllEntries)
	var out event.VerdictBlock
	judging := func() {
		w.Reset(&out)
		w.Judge(block, 0, block.Events(), &out)
	}
	judging()
	if n := testing.AllocsPerRun(5, judging); n != 0 {
		t.Errorf("%g allocations", n)
	}
}

// BenchmarkFits judges with fits: three photon pairs, 15 assignments, every one fitted,
// and with pair windows before.
func BenchmarkFits(b *testing.B) {
	block, _ := photonPions(6, 200, 3, 0.02, 0.01)
	cheap := pionsOnly(3)
	cheap.Condition = pairWindows().Condition
	for name, h := range map[string]selection.Hypothesis{"every assignment": pionsOnly(3), "after windows": cheap} {
		b.Run(name, func(b *testing.B) {
			w := compile(b, h).NewWorker(selection.AcceptedEntries)
			var out event.VerdictBlock
			b.ReportAllocs()
			for b.Loop() {
				w.Reset(&out)
				w.Judge(block, 0, block.Events(), &out)
			}
			b.ReportMetric(float64(b.Elapsed().Microseconds())/float64(b.N)/float64(block.Events()), "us/event")
			b.ReportMetric(float64(count(out.Accepted[0], block.Events())), "accepted")
		})
	}
}
