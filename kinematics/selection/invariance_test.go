package selection_test

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/selection"
)

// sound is everything with the second products that its windows need.
func sound(r *rand.Rand) selection.Selection {
	s := everything(r)
	s.Hypotheses[3].Condition.AllOf[1].Window.Second = []string{"pi-"}
	s.Hypotheses[7].Condition.AllOf[1].Window.Second = []string{"gamma"}
	s.Groups = []selection.Group{{Name: "photons", Hypotheses: []string{"h00", "h01"}}}
	return s
}

// sameBits reports whether two verdict blocks hold the same bits, NaN included.
func sameBits(t *testing.T, a, b *event.VerdictBlock) {
	t.Helper()
	floats := func(x, y []float64) bool {
		return slices.EqualFunc(x, y, func(p, q float64) bool { return math.Float64bits(p) == math.Float64bits(q) })
	}
	equal := slices.Equal(a.Status, b.Status) && slices.Equal(a.Gate, b.Gate) &&
		slices.EqualFunc(a.Accepted, b.Accepted, slices.Equal[event.Bits]) &&
		slices.EqualFunc(a.Best, b.Best, slices.Equal[[]int16])
	if !equal {
		t.Error("statuses or bits differ")
	}
	if (a.Entries == nil) != (b.Entries == nil) {
		t.Fatal("one has no entries")
	}
	if a.Entries == nil {
		return
	}
	x, y := a.Entries, b.Entries
	if !slices.Equal(x.Offsets, y.Offsets) || !slices.Equal(x.Hypothesis, y.Hypothesis) ||
		!slices.Equal(x.BeamRow, y.BeamRow) || !slices.Equal(x.Status, y.Status) || !slices.Equal(x.Tried, y.Tried) ||
		!slices.Equal(x.Assignment, y.Assignment) || !slices.Equal(x.AssignmentOffsets, y.AssignmentOffsets) ||
		!slices.Equal(x.ObservableOffsets, y.ObservableOffsets) || !floats(x.Weight, y.Weight) || !floats(x.Observables, y.Observables) {
		t.Error("entries differ")
	}
}

// TestSplits checks that every split of a block, in one worker or several, gives the
// same bits, and so do entries of another detail where they overlap.
func TestSplits(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 1)) //nolint:gosec // a test needs a seed, no secret
	const n = 150
	for _, detail := range []selection.Detail{selection.NoEntries, selection.AcceptedEntries, selection.AllEntries} {
		p := compileAll(t, sound(r))
		block := randomBlock(r, event.MomentumMass, n, 9)
		whole := judge(t, p, block, detail)
		one, other := p.NewWorker(detail), p.NewWorker(detail)
		var out, part event.VerdictBlock
		for _, cuts := range [][]int{{0, n}, {0, 1, n}, {0, 7, 8, 77, n}, {0, 64, 128, n}} {
			one.Reset(&out)
			for k := 1; k < len(cuts); k++ {
				one.Judge(block, cuts[k-1], cuts[k], &out)
			}
			sameBits(t, whole, &out)
			one.Reset(&out)
			for k := 1; k < len(cuts); k++ {
				other.Reset(&part)
				other.Judge(block, cuts[k-1], cuts[k], &part)
				one.Append(&out, &part)
			}
			sameBits(t, whole, &out)
		}
	}
}

// TestDetailChangesNoVerdict checks that what entries are asked for changes no bit and
// no status, also where the budget ends.
func TestDetailChangesNoVerdict(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 2)) //nolint:gosec // a test needs a seed, no secret
	used := 0
	for range 10 {
		s := sound(r)
		s.AssignmentBudget = 15
		p := compileAll(t, s)
		block := randomBlock(r, event.MomentumMass, 100, 9)
		none := judge(t, p, block, selection.NoEntries)
		for _, detail := range []selection.Detail{selection.AcceptedEntries, selection.AllEntries} {
			out := judge(t, p, block, detail)
			out.Entries = nil
			sameBits(t, none, out)
		}
		for _, status := range none.Status {
			if status == event.BudgetUsed {
				used++
			}
		}
	}
	if used < 20 {
		t.Errorf("the budget ended in %d events only", used)
	}
}

// TestObjectOrder checks that the order of the objects of an event changes no bit.
func TestObjectOrder(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 3)) //nolint:gosec // a test needs a seed, no secret
	accepted := 0
	for kind := event.EnergyMomentum; kind.Valid(); kind++ {
		p := compileAll(t, sound(r))
		block := randomBlock(r, kind, 400, 8)
		before := judge(t, p, block, selection.NoEntries)
		for i := range block.Events() {
			first, end := block.Objects(i)
			r.Shuffle(end-first, func(a, b int) {
				a, b = first+a, first+b
				block.Class[a], block.Class[b] = block.Class[b], block.Class[a]
				for _, bits := range [][]uint8{block.Species.Bits, block.Measured.Bits} {
					bits[a], bits[b] = bits[b], bits[a]
				}
				for k := range kind.Columns() {
					c := block.Coordinates.Columns[k]
					c[a], c[b] = c[b], c[a]
				}
			})
		}
		sameBits(t, before, judge(t, p, block, selection.NoEntries))
		for _, bits := range before.Accepted {
			accepted += count(bits, block.Events())
		}
	}
	if accepted < 200 {
		t.Errorf("only %d hypotheses accept", accepted)
	}
}

// TestNoAllocation checks that a worker in steady state allocates nothing.
func TestNoAllocation(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4)) //nolint:gosec // a test needs a seed, no secret
	p := compileAll(t, sound(r))
	block := randomBlock(r, event.MomentumAngles, 200, 9)
	w := p.NewWorker(selection.AllEntries)
	var out event.VerdictBlock
	run := func() {
		w.Reset(&out)
		w.Judge(block, 0, block.Events(), &out)
	}
	run()
	if n := testing.AllocsPerRun(5, run); n != 0 {
		t.Errorf("%v allocations for a block", n)
	}
}
