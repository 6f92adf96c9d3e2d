package selection_test

import (
	"math"
	"slices"
	"testing"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/particle"
	"example.org/kinegate/kinematics/reaction"
	"example.org/kinegate/kinematics/selection"
)

// brute judges one hypothesis by trying every labelled assignment and computing every
// observable anew from textbook formulas, with no thought of speed.
type brute struct {
	table    *particle.Table
	h        *selection.Hypothesis
	reaction *reaction.Reaction
	block    *event.Block
	index    int
	// of is the object of each product, -1 for none; conjugate swaps the charges.
	of        []int
	conjugate bool
	beamRow   int
}

// found is an assignment that passes.
type found struct {
	rank float64
	of   []int
}

func (b *brute) leaves() []int { return b.reaction.Leaves() }

func (b *brute) measurement(i int) (selection.Measurement, bool) {
	p := b.reaction.Products[i].Particle
	m, fromEvent := selection.Direction, false
	if p.Name == "gamma" || p.ChargeThirds() != 0 {
		m = selection.Full
	}
	if n := p.Numbers; p.ChargeThirds() == 0 && (n.Electron != 0 || n.Muon != 0 || n.Tau != 0) {
		m = selection.Missing
	}
	for _, x := range b.h.Measurements {
		if k, err := b.reaction.Product(b.table, x.Product); err == nil && k == i {
			if x.Measurement != 0 {
				m = x.Measurement
			}
			fromEvent = x.MassFromEvent
		}
	}
	return m, fromEvent
}

// matches reports whether an object row can stand for a product.
func (b *brute) matches(i, row int) bool {
	p := b.reaction.Products[i].Particle
	charge := p.ChargeThirds()
	if b.conjugate {
		charge = -charge
	}
	class := event.Neutral
	switch {
	case p.Name == "gamma":
		class = event.Photon
	case charge > 0:
		class = event.Positive
	case charge < 0:
		class = event.Negative
	}
	if b.block.Class[row] != class {
		return false
	}
	bit := map[int64]uint8{11: 1, 13: 2, 211: 4, 321: 8, 2212: 16, 1000010020: 32}[max(p.Number, -p.Number)]
	if mask := b.block.SpeciesMask(row); mask != 0 && mask&bit == 0 {
		return false
	}
	m, fromEvent := b.measurement(i)
	mask := b.block.MeasuredMask(row)
	kind := b.block.Coordinates.Kind
	if fromEvent && (kind == event.MomentumAngles || kind == event.MomentumSlopes) {
		return false
	}
	if m == selection.Full || kind == event.EnergyMomentum || kind == event.MomentumMass {
		return mask == event.AllMeasured
	}
	return mask&6 == 6
}

// row is the object row of a product.
func (b *brute) row(i int) int {
	first, _ := b.block.Objects(b.index)
	return first + b.of[i]
}

// four is the four-momentum of the products that a list of references names.
func (b *brute) four(references []string) momentum.Four {
	var total momentum.Four
	for _, i := range b.expand(references) {
		x := &b.block.Coordinates
		_, fromEvent := b.measurement(i)
		if fromEvent {
			f, _ := x.AsGiven(b.row(i))
			total = total.Add(f)
			continue
		}
		total = total.Add(x.WithMass(b.row(i), b.reaction.Products[i].Particle.Mass))
	}
	return total
}

// expand lists the products in the end that references name.
func (b *brute) expand(references []string) []int {
	var list []int
	var down func(i int)
	down = func(i int) {
		if len(b.reaction.Products[i].Daughters) == 0 {
			list = append(list, i)
		}
		for _, k := range b.reaction.Products[i].Daughters {
			down(k)
		}
	}
	for _, r := range references {
		i, err := b.reaction.Product(b.table, r)
		if err != nil {
			panic(err)
		}
		down(i)
	}
	return list
}

func (b *brute) direction(references []string) momentum.Three {
	if list := b.expand(references); len(list) == 1 {
		return b.block.Coordinates.Direction(b.row(list[0]))
	}
	return b.four(references).P
}

// initial are the initial four-momenta.
func (b *brute) initial() (first, second momentum.Four) {
	if b.h.Beam.Fixed != nil {
		// Only head-on photon beams are used here.
		e1, e2 := *b.h.Beam.Fixed.TwoBeams.Beam1.TotalEnergyGeV, *b.h.Beam.Fixed.TwoBeams.Beam2.TotalEnergyGeV
		return momentum.Four{P: momentum.Three{Z: e1}, E: e1}, momentum.Four{P: momentum.Three{Z: -e2}, E: e2}
	}
	start, _ := b.block.Candidates(b.index)
	e := b.block.Beam.EnergyGeV[start+b.beamRow]
	return momentum.Four{P: momentum.Three{Z: e}, E: e}, momentum.Four{E: b.reaction.Initial[1].Mass}
}

func square(f momentum.Four) float64 { return f.E*f.E - f.P.X*f.P.X - f.P.Y*f.P.Y - f.P.Z*f.P.Z }

// toCentre boosts along the total momentum, which is along z here.
func (b *brute) toCentre(f momentum.Four) momentum.Four {
	first, second := b.initial()
	total := first.Add(second)
	m := math.Sqrt(square(total))
	gamma, gb := total.E/m, total.P.Z/m
	return momentum.Four{P: momentum.Three{X: f.P.X, Y: f.P.Y, Z: gamma*f.P.Z - gb*f.E}, E: gamma*f.E - gb*f.P.Z}
}

func root(s float64) float64 {
	if s < 0 {
		return math.NaN()
	}
	return math.Sqrt(s)
}

// value computes an observable.
func (b *brute) value(v *selection.Window) float64 {
	frame := func(f momentum.Four) momentum.Four {
		if v.Frame == selection.CentreOfMass {
			return b.toCentre(f)
		}
		return f
	}
	angle := func(p, q momentum.Three) float64 {
		return math.Acos(max(-1, min(1, p.Dot(q)/p.Norm()/q.Norm())))
	}
	switch v.Observable {
	case selection.InvariantMass:
		return root(square(b.four(v.Products)))
	case selection.InvariantMassSquared:
		return square(b.four(v.Products))
	case selection.MissingMass, selection.MissingMassSquared:
		first, second := b.initial()
		s := square(first.Add(second).Sub(b.four(v.Products)))
		if v.Observable == selection.MissingMass {
			return root(s)
		}
		return s
	case selection.Energy:
		return frame(b.four(v.Products)).E
	case selection.Momentum:
		return frame(b.four(v.Products)).P.Norm()
	case selection.TransverseMomentum:
		return frame(b.four(v.Products)).P.Transverse()
	case selection.Angle:
		if v.Frame == selection.CentreOfMass {
			return angle(b.toCentre(b.four(v.Products)).P, momentum.Three{Z: 1})
		}
		return angle(b.direction(v.Products), momentum.Three{Z: 1})
	case selection.OpeningAngle:
		if v.Frame == selection.CentreOfMass {
			return angle(b.toCentre(b.four(v.Products)).P, b.toCentre(b.four(v.Second)).P)
		}
		return angle(b.direction(v.Products), b.direction(v.Second))
	case selection.Coplanarity:
		p, q := b.direction(v.Products), b.direction(v.Second)
		d := math.Atan2(p.Y, p.X) - math.Atan2(q.Y, q.X) - math.Pi
		for d <= -math.Pi {
			d += 2 * math.Pi
		}
		return d
	case selection.MissingDirection:
		first, second := b.initial()
		missing := first.Add(second)
		self := b.expand(v.Products)
		for _, i := range b.leaves() {
			if i != self[0] {
				missing = missing.Sub(b.four([]string{b.reaction.Products[i].Path}))
			}
		}
		return angle(b.direction(v.Products), missing.P)
	case selection.MomentumTransfer, selection.MomentumTransferPrime:
		first, second := b.initial()
		if v.Initial == selection.Target {
			first = second
		}
		products := b.four(v.Products)
		t := square(first.Sub(products))
		if v.Observable == selection.MomentumTransfer {
			return t
		}
		a, p := b.toCentre(first), b.toCentre(products)
		forward := momentum.Four{P: a.P.Unit().Scale(p.P.Norm()), E: p.E}
		return square(a.Sub(forward)) - t
	case selection.TimeDifference:
		start, _ := b.block.Candidates(b.index)
		return b.block.Beam.TimeNS[start+b.beamRow]
	case selection.UnusedPhotonEnergy:
		sum := 0.0
		first, end := b.block.Objects(b.index)
		for row := first; row < end; row++ {
			if b.block.Class[row] != event.Photon || slices.Contains(b.of, row-first) {
				continue
			}
			if b.block.MeasuredMask(row) != event.AllMeasured {
				return math.NaN()
			}
			sum += b.block.Coordinates.Momentum(row).Norm()
		}
		return sum
	case selection.VertexZ:
		if b.block.Vertex != nil {
			return b.block.Vertex.Z[b.index]
		}
	}
	return math.NaN()
}

// holds evaluates a condition tree.
func (b *brute) holds(c *selection.Condition) bool {
	switch {
	case c.Window != nil:
		x := b.value(c.Window)
		return !math.IsNaN(x) && (c.Window.Min == nil || x >= *c.Window.Min) && (c.Window.Max == nil || x < *c.Window.Max)
	case c.NoneOf != nil:
		return !slices.ContainsFunc(c.NoneOf, func(x selection.Condition) bool { return b.holds(&x) })
	case c.AllOf != nil:
		return !slices.ContainsFunc(c.AllOf, func(x selection.Condition) bool { return !b.holds(&x) })
	}
	return slices.ContainsFunc(c.AnyOf, func(x selection.Condition) bool { return b.holds(&x) })
}

// allowed applies the rule on extra objects.
func (b *brute) allowed() bool {
	first, end := b.block.Objects(b.index)
	extra := 0
	for row := first; row < end; row++ {
		if slices.Contains(b.of, row-first) {
			continue
		}
		extra++
		x := b.h.ExtraObjects
		switch {
		case x == nil || x.Rule == selection.NoExtraObjects:
			return false
		case x.Rule == selection.SoftPhotons:
			if b.block.Class[row] != event.Photon || b.block.MeasuredMask(row) != event.AllMeasured ||
				!(b.block.Coordinates.Momentum(row).Norm() < x.MaxEnergyGeV) || extra > int(x.MaxCount) {
				return false
			}
		}
	}
	return true
}

// rank is the sum of squared distances.
func (b *brute) rank() float64 {
	sum := 0.0
	if b.h.Ranking == nil {
		return 0
	}
	for _, r := range b.h.Ranking.ClosestMasses {
		i, _ := b.reaction.Product(b.table, r.Products[0])
		reference, scale := b.reaction.Products[i].Particle.Mass, 1.0
		if r.MassGeV != nil {
			reference = *r.MassGeV
		}
		if r.ScaleGeV != nil {
			scale = *r.ScaleGeV
		}
		d := (root(square(b.four(r.Products))) - reference) / scale
		sum += d * d
	}
	if math.IsNaN(sum) {
		return math.Inf(1)
	}
	return sum
}

// assignments lists every labelled assignment that is possible for one beam candidate,
// and of those the ones that pass.
func (b *brute) assignments() (possible, passing []found) {
	first, end := b.block.Objects(b.index)
	for _, conjugate := range []bool{false, b.h.AlsoConjugate} {
		b.conjugate = conjugate
		b.of = make([]int, len(b.reaction.Products))
		for i := range b.of {
			b.of[i] = -1
		}
		var seen []int
		for _, i := range b.leaves() {
			if m, _ := b.measurement(i); m != selection.Missing {
				seen = append(seen, i)
			}
		}
		var place func(k int)
		place = func(k int) {
			if k == len(seen) {
				if b.allowed() {
					x := found{b.rank(), slices.Clone(b.of)}
					possible = append(possible, x)
					if b.h.Condition == nil || b.holds(b.h.Condition) {
						passing = append(passing, x)
					}
				}
				return
			}
			for row := first; row < end; row++ {
				if !slices.Contains(b.of, row-first) && b.matches(seen[k], row) {
					b.of[seen[k]] = row - first
					place(k + 1)
					b.of[seen[k]] = -1
				}
			}
		}
		place(0)
	}
	return possible, passing
}

// candidates lists the beam rows and weights to test.
func (b *brute) candidates() map[int]float64 {
	if b.h.Beam == nil || b.h.Beam.Fixed != nil {
		return map[int]float64{-1: 1}
	}
	out := map[int]float64{}
	first, end := b.block.Candidates(b.index)
	for row := first; row < end; row++ {
		t := b.h.Beam.Tagged
		if t.Prompt == nil {
			out[row-first] = 1
			continue
		}
		for _, w := range append([]selection.TimeWindow{*t.Prompt}, t.SideBands...) {
			if x := b.block.Beam.TimeNS[row]; (w.MinNS == nil || x >= *w.MinNS) && (w.MaxNS == nil || x < *w.MaxNS) {
				out[row-first] = 1
				if w.Weight != nil {
					out[row-first] = *w.Weight
				}
			}
		}
	}
	return out
}

// compareWithBrute judges a block both ways and compares bits, candidates, weights,
// assignments and observables. It counts the entries that it compared by hypothesis.
func compareWithBrute(t *testing.T, s selection.Selection, block *event.Block, compared []int) {
	t.Helper()
	table := standard(t)
	out := judge(t, compileAll(t, s), block, selection.AllEntries)
	for i := range block.Events() {
		got := rows(out)[out.Entries.Offsets[i]:out.Entries.Offsets[i+1]]
		if out.Status[i] != event.Good {
			t.Fatalf("event %d has the status %v", i, out.Status[i])
		}
		for h := range s.Hypotheses {
			b := &brute{table: table, h: &s.Hypotheses[h], block: block, index: i}
			var err error
			if b.reaction, err = reaction.Parse(table, b.h.Reaction); err != nil {
				t.Fatal(err)
			}
			accepted := false
			for row, weight := range b.candidates() {
				b.beamRow = row
				possible, passing := b.assignments()
				accepted = accepted || len(passing) > 0
				k := slices.IndexFunc(got, func(e event.Entry) bool { return int(e.Hypothesis) == h && int(e.BeamRow) == row })
				if (k >= 0) != (len(possible) > 0) || (k >= 0 && (got[k].Status == event.Accepted) != (len(passing) > 0)) {
					t.Errorf("event %d, %s, beam row %d: entry %v, %d assignments pass of %d", i, b.h.Reaction, row, k >= 0,
						len(passing), len(possible))
					continue
				}
				switch {
				case len(passing) > 0:
					compared[h]++
					compareEntry(t, b, got[k], weight, passing)
				case len(possible) > 0:
					compareEntry(t, b, got[k], weight, possible)
				}
			}
			if out.Accepted[h].Get(i) != accepted {
				t.Errorf("event %d, %s: accepted %v, want %v", i, b.h.Reaction, !accepted, accepted)
			}
		}
	}
}

// compareEntry compares an entry with the best of some assignments. Ranks are
// sums of masses near 1 GeV, equal to 1e-9 where exchanges of identical products make
// them equal; of those the lowest tuple of objects is the answer.
func compareEntry(t *testing.T, b *brute, e event.Entry, weight float64, list []found) {
	t.Helper()
	best := slices.MinFunc(list, func(x, y found) int {
		if math.Abs(x.rank-y.rank) > 1e-9 {
			if x.rank < y.rank {
				return -1
			}
			return 1
		}
		return slices.Compare(x.of, y.of)
	})
	assignment := make([]int, 0, len(e.Assignment))
	for _, object := range e.Assignment {
		assignment = append(assignment, int(object))
	}
	if !slices.Equal(assignment, best.of) && !b.h.AlsoConjugate {
		t.Errorf("event %d, %s: assignment %v, want %v of %d", b.index, b.h.Reaction, assignment, best.of, len(list))
	}
	if e.Weight != weight {
		t.Errorf("event %d, %s: weight %v, want %v", b.index, b.h.Reaction, e.Weight, weight)
	}
	b.of = assignment
	for k := range b.h.Record {
		want, got := b.value(&b.h.Record[k]), e.Observables[k]
		// The textbook forms lose half the digits where masses and angles vanish.
		if math.IsNaN(want) != math.IsNaN(got) || math.Abs(want-got) > 1e-6 {
			t.Errorf("event %d, %s, %v %v: %v, want %v", b.index, b.h.Reaction, b.h.Record[k].Observable, b.h.Record[k].Products, got, want)
		}
	}
}
