package selection_test

import (
	"errors"
	"sync"
	"testing"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/particle"
	"example.org/kinegate/kinematics/selection"
)

// table reads the built-in particle table once.
var table = sync.OnceValues(func() (*particle.Table, error) { return particle.New() })

// standard is the built-in particle table.
func standard(t testing.TB) *particle.Table {
	t.Helper()
	table, err := table()
	if err != nil {
		t.Fatal(err)
	}
	return table
}

// compile compiles a selection of the hypotheses, named h0, h1 and so on where they
// have no name.
func compile(t testing.TB, hypotheses ...selection.Hypothesis) *selection.Program {
	t.Helper()
	return compileAll(t, selection.Selection{Hypotheses: hypotheses})
}

func compileAll(t testing.TB, s selection.Selection) *selection.Program {
	t.Helper()
	program, err := selection.Compile(named(s), standard(t))
	if err != nil {
		t.Fatal(err)
	}
	return program
}

// named fills in missing names.
func named(s selection.Selection) *selection.Selection {
	if s.Name == "" {
		s.Name = "test"
	}
	s.Hypotheses = append([]selection.Hypothesis(nil), s.Hypotheses...)
	for i := range s.Hypotheses {
		if s.Hypotheses[i].Name == "" {
			s.Hypotheses[i].Name = "h" + string(rune('0'+i/10)) + string(rune('0'+i%10))
		}
	}
	return &s
}

// faultsOf compiles a faulty selection and returns its faults.
func faultsOf(t testing.TB, s selection.Selection) fault.List {
	t.Helper()
	_, err := selection.Compile(named(s), standard(t))
	var list fault.List
	if !errors.As(err, &list) {
		t.Fatalf("the answer is %v, want a list of faults", err)
	}
	return list
}

// judge judges a whole block.
func judge(t testing.TB, p *selection.Program, block *event.Block, detail selection.Detail) *event.VerdictBlock {
	t.Helper()
	if err := block.Validate(); err != nil {
		t.Fatal(err)
	}
	w := p.NewWorker(detail)
	var out event.VerdictBlock
	w.Reset(&out)
	w.Judge(block, 0, block.Events(), &out)
	return &out
}

// rows returns the entries of a verdict block.
func rows(out *event.VerdictBlock) []event.Entry {
	all := make([]event.Entry, 0, out.Entries.Len())
	for k := range out.Entries.Len() {
		all = append(all, out.Entries.Row(k))
	}
	return all
}

// object is one object of a test event in energy and momentum.
type object struct {
	class   event.Class
	species uint8
	four    momentum.Four
	mask    uint8
}

// beam is one beam candidate of a test event.
type beam struct{ energy, time float64 }

// makeBlock makes a block of events in energy and momentum.
func makeBlock(events [][]object, beams [][]beam) *event.Block {
	b := &event.Block{ObjectOffsets: []int32{0}, Measured: &event.Mask{}, Species: &event.Mask{}}
	b.Coordinates.Kind = event.EnergyMomentum
	for k := range b.Coordinates.Columns {
		b.Coordinates.Columns[k] = []float64{}
	}
	if beams != nil {
		b.Beam = &event.Beam{Offsets: []int32{0}}
	}
	for i, objects := range events {
		b.EventIDs = append(b.EventIDs, int64(100+i))
		for _, o := range objects {
			b.Class = append(b.Class, o.class)
			b.Species.Bits = append(b.Species.Bits, o.species)
			mask := o.mask
			if mask == 0 {
				mask = event.AllMeasured
			}
			b.Measured.Bits = append(b.Measured.Bits, mask)
			for k, x := range []float64{o.four.P.X, o.four.P.Y, o.four.P.Z, o.four.E} {
				b.Coordinates.Columns[k] = append(b.Coordinates.Columns[k], x)
			}
		}
		b.ObjectOffsets = append(b.ObjectOffsets, int32(len(b.Class)))
		if beams == nil {
			continue
		}
		for _, c := range beams[i] {
			b.Beam.EnergyGeV = append(b.Beam.EnergyGeV, c.energy)
			b.Beam.SigmaGeV = append(b.Beam.SigmaGeV, 0.001)
			b.Beam.TimeNS = append(b.Beam.TimeNS, c.time)
		}
		b.Beam.Offsets = append(b.Beam.Offsets, int32(len(b.Beam.TimeNS)))
	}
	return b
}

// photon is a photon object.
func photon(x, y, z float64) object {
	p := momentum.Three{X: x, Y: y, Z: z}
	return object{class: event.Photon, four: momentum.Four{P: p, E: p.Norm()}}
}

// track is a charged object of a mass.
func track(class event.Class, mass, x, y, z float64) object {
	return object{class: class, four: momentum.WithMass(momentum.Three{X: x, Y: y, Z: z}, mass)}
}

// within is a window with limits.
func within(o selection.Observable, low, high float64, products ...string) *selection.Window {
	return &selection.Window{Observable: o, Products: products, Min: &low, Max: &high}
}

// only is a condition of one window.
func only(w *selection.Window) selection.Condition { return selection.Condition{Window: w} }

// allOf is a conjunction of windows.
func allOf(windows ...*selection.Window) *selection.Condition {
	c := &selection.Condition{}
	for _, w := range windows {
		c.AllOf = append(c.AllOf, only(w))
	}
	return c
}

// closest is a ranking by the table masses of products.
func closest(products ...string) *selection.Ranking {
	r := &selection.Ranking{}
	for _, p := range products {
		r.ClosestMasses = append(r.ClosestMasses, selection.MassReference{Products: []string{p}})
	}
	return r
}

// anything allows extra objects.
func anything() *selection.ExtraObjects {
	return &selection.ExtraObjects{Rule: selection.AnyExtraObjects}
}
