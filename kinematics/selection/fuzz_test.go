package selection_test

import (
	"math"
	"testing"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/selection"
)

// dice draws decisions from the bytes of a fuzzer, and zeros when they are used up.
type dice struct{ data []byte }

func (d *dice) byte() int {
	if len(d.data) == 0 {
		return 0
	}
	b := d.data[0]
	d.data = d.data[1:]
	return int(b)
}

func (d *dice) below(n int) int { return d.byte() % n }

// number draws an ordinary number most often, and an awkward one else.
func (d *dice) number() float64 {
	switch b := d.byte(); {
	case b < 200:
		return float64(b)/50 - 1
	default:
		return []float64{
			math.NaN(), math.Inf(1), math.Inf(-1), math.MaxFloat64, math.SmallestNonzeroFloat64, math.Copysign(0, -1),
			1e-300, 1e200, -1e200, math.Pi, -math.Pi, 1e75, 1e-75,
		}[b%13]
	}
}

func (d *dice) limit() *float64 {
	if d.below(3) == 0 {
		return nil
	}
	x := d.number()
	return &x
}

func (d *dice) references() []string {
	all := []string{
		"pi0[0]", "pi0[1]", "gamma[0]", "gamma[1]", "gamma[2]", "gamma[3]", "p", "pi+", "pi-", "K+", "Lambda", "mu+[0]", "mu-[0]",
		"products[0]", "products[1].daughters[0]", "x", "",
	}
	var list []string
	for range d.below(4) {
		list = append(list, all[d.below(len(all))])
	}
	return list
}

func (d *dice) window() selection.Window {
	return selection.Window{
		Observable: selection.Observable(d.below(22)), Products: d.references(), Second: d.references(),
		Frame: selection.Frame(d.below(3)), Initial: selection.Initial(d.below(3)), Min: d.limit(), Max: d.limit(),
	}
}

// usable is a window that compiles more often.
func (d *dice) usable() selection.Window {
	w := d.window()
	switch w.Observable {
	case selection.OpeningAngle, selection.Coplanarity:
	default:
		w.Second = nil
	}
	switch w.Observable {
	case selection.Energy, selection.Momentum, selection.TransverseMomentum, selection.Angle, selection.OpeningAngle:
	default:
		w.Frame = 0
	}
	switch w.Observable {
	case selection.TimeDifference, selection.UnusedPhotonEnergy, selection.VertexZ:
		w.Products, w.Initial = nil, 0
	case selection.MomentumTransfer, selection.MomentumTransferPrime:
		w.Initial = 1
	default:
		w.Initial = 0
	}
	return w
}

func (d *dice) condition(depth int) selection.Condition {
	switch n := d.below(4); {
	case n == 0 || depth > 4:
		w := d.usable()
		return selection.Condition{Window: &w}
	case n == 1:
		parts := make([]selection.Condition, 1+d.below(2))
		for i := range parts {
			parts[i] = d.condition(depth + 1)
		}
		return selection.Condition{NoneOf: parts}
	case n == 2:
		return selection.Condition{AllOf: []selection.Condition{d.condition(depth + 1), d.condition(depth + 1)}}
	default:
		return selection.Condition{AnyOf: []selection.Condition{d.condition(depth + 1), d.condition(depth + 1)}}
	}
}

func (d *dice) hypothesis() selection.Hypothesis {
	reactions := []string{
		"gamma p -> p pi0, pi0 -> gamma gamma", "gamma p -> p pi0 pi0, pi0 -> gamma gamma", "gamma p -> K+ Lambda, Lambda -> p pi-",
		"gamma gamma -> pi+ pi-", "-> mu+ mu- mu+ mu-", "-> gamma gamma gamma gamma", "gamma p -> n pi+", "omega -> pi0 gamma, pi0 -> gamma gamma",
		"gamma p -> p X", "e+ e- -> mu+ mu-", "-> nu_e", "gamma p ->", "",
	}
	h := selection.Hypothesis{
		Reaction: reactions[d.below(len(reactions))], AlsoConjugate: d.below(4) == 0,
		Prescale: int64(d.below(4)), Role: selection.Role(d.below(4)),
	}
	if d.below(2) == 0 {
		h.Beam = &selection.BeamSource{Tagged: &selection.TaggedBeam{}}
		if d.below(2) == 0 {
			h.Beam.Tagged.Prompt = &selection.TimeWindow{MinNS: d.limit(), MaxNS: d.limit(), Weight: d.limit()}
		}
	} else if d.below(2) == 0 {
		x, y := d.number(), d.number()
		h.Beam = &selection.BeamSource{Fixed: &selection.InitialState{TwoBeams: &selection.TwoBeams{
			Beam1: selection.BeamMotion{MomentumGeV: &x}, Beam2: selection.BeamMotion{TotalEnergyGeV: &y}, AngleRad: d.limit(),
		}}}
	}
	for range d.below(3) {
		h.Measurements = append(h.Measurements, selection.ProductMeasurement{
			Product:     []string{"p", "gamma[0]", "pi+", "n", "mu+[0]"}[d.below(5)],
			Measurement: selection.Measurement(d.below(4)), MassFromEvent: d.below(4) == 0,
		})
	}
	h.ExtraObjects = &selection.ExtraObjects{Rule: selection.ExtraRule(1 + d.below(3)), MaxCount: 2, MaxEnergyGeV: 0.5}
	if d.below(3) > 0 {
		c := d.condition(0)
		h.Condition = &c
	}
	if d.below(2) == 0 {
		h.Ranking = &selection.Ranking{ClosestMasses: []selection.MassReference{{Products: d.references(), MassGeV: d.limit()}}}
	}
	for range d.below(3) {
		w := d.usable()
		w.Min, w.Max = nil, nil
		h.Record = append(h.Record, w)
	}
	h.RecordUncertainties = d.below(2) == 0
	if d.below(2) == 0 {
		h.Fit = d.fit()
	}
	return h
}

func (d *dice) fit() *selection.Fit {
	f := &selection.Fit{
		Conservation: selection.Conservation(d.below(4)), Vertex: selection.VertexTreatment(d.below(4)),
	}
	for range d.below(3) {
		f.Masses = append(f.Masses, selection.FitMass{Products: d.references(), MassGeV: d.limit()})
	}
	if d.below(4) == 0 {
		f.EqualMasses = append(f.EqualMasses, selection.FitEqualMasses{First: d.references(), Second: d.references()})
	}
	if d.below(4) == 0 {
		f.BeamEnergy = &selection.InitialEnergy{Knowledge: selection.EnergyKnowledge(d.below(4)), SigmaGeV: d.limit()}
	}
	if d.below(8) == 0 {
		f.TargetEnergy = &selection.InitialEnergy{Knowledge: selection.EnergyKnowledge(d.below(4)), SigmaGeV: d.limit()}
	}
	return f
}

// spread is a column of covariances: sound ones most often, and whatever comes else.
func (d *dice) spread(rows int) *event.Covariance {
	c := &event.Covariance{Packed: []float64{}}
	awkward := d.below(3) == 0
	for range rows {
		for k := range event.CovarianceSize {
			x := []float64{1e-4, 0, 0, 1e-4, 0, 1e-4}[k]
			if awkward && d.below(4) == 0 {
				x = d.number()
			}
			c.Packed = append(c.Packed, x)
		}
	}
	return c
}

// place appends arbitrary points.
func (d *dice) place(p *event.Positions, n int) {
	for range n {
		p.Append(d.number(), d.number(), d.number())
	}
}

func (d *dice) block() *event.Block {
	b := &event.Block{ObjectOffsets: []int32{0}, Measured: &event.Mask{}, Species: &event.Mask{}, Vertex: &event.Vertex{}}
	b.Coordinates.Kind = event.Kind(d.below(5))
	b.Beam = &event.Beam{Offsets: []int32{0}}
	for range d.below(6) {
		b.EventIDs = append(b.EventIDs, int64(d.byte()))
		for range d.below(10) {
			b.Class = append(b.Class, event.Class(1+d.below(4)))
			b.Species.Bits = append(b.Species.Bits, uint8(d.below(64)))
			b.Measured.Bits = append(b.Measured.Bits, []uint8{7, 7, 7, 6, 0, 3}[d.below(6)])
			for k := range b.Coordinates.Kind.Columns() {
				b.Coordinates.Columns[k] = append(b.Coordinates.Columns[k], d.number())
			}
		}
		b.ObjectOffsets = append(b.ObjectOffsets, int32(len(b.Class)))
		for range d.below(3) {
			b.Beam.EnergyGeV = append(b.Beam.EnergyGeV, d.number())
			b.Beam.SigmaGeV = append(b.Beam.SigmaGeV, 0)
			b.Beam.TimeNS = append(b.Beam.TimeNS, d.number())
		}
		b.Beam.Offsets = append(b.Beam.Offsets, int32(len(b.Beam.TimeNS)))
		b.Vertex.Append(0, 0, d.number())
	}
	if d.below(4) > 0 {
		b.Covariance = d.spread(len(b.Class))
		b.Vertex.Covariance = d.spread(len(b.EventIDs))
	}
	if d.below(3) == 0 {
		b.Clusters = &event.Positions{X: []float64{}, Y: []float64{}, Z: []float64{}}
		d.place(b.Clusters, len(b.Class))
	}
	if d.below(3) == 0 {
		g := &event.Groups{Offsets: []int32{0}, OfObject: []int32{}}
		for i := range b.EventIDs {
			g.Offsets = append(g.Offsets, int32(i+1))
		}
		for range b.Class {
			g.OfObject = append(g.OfObject, int32(d.below(2)))
		}
		d.place(&g.Position, len(b.EventIDs))
		g.Covariance = d.spread(len(b.EventIDs))
		b.Groups = g
	}
	return b
}

// passes reports whether an assignment of an explanation passes; the first is the best.
func passes(h *selection.HypothesisExplanation) bool {
	return len(h.Assignments) > 0 && h.Assignments[0].Passed
}

// FuzzJudge compiles arbitrary selections and judges arbitrary blocks. What passes the
// checks must be judged without a panic, within the budget, and the same in halves.
func FuzzJudge(f *testing.F) {
	f.Add([]byte{})
	for seed := range 40 {
		data := make([]byte, 400)
		state := uint64(seed)
		for i := range data {
			state = state*6364136223846793005 + 1442695040888963407
			data[i] = byte(state >> 56)
		}
		f.Add(data)
	}
	particles := standard(f)
	f.Fuzz(func(t *testing.T, data []byte) {
		d := &dice{data: data}
		s := selection.Selection{AssignmentBudget: int64(1 + d.below(200))}
		for range 1 + d.below(3) {
			s.Hypotheses = append(s.Hypotheses, d.hypothesis())
		}
		program, err := selection.Compile(named(s), particles)
		block := d.block()
		if invalid := block.Validate(); err != nil || invalid != nil {
			return
		}
		w := program.NewWorker(selection.AllEntries)
		var whole, halves event.VerdictBlock
		w.Reset(&whole)
		w.Judge(block, 0, block.Events(), &whole)
		w.Reset(&halves)
		half := block.Events() / 2
		w.Judge(block, 0, half, &halves)
		w.Judge(block, half, block.Events(), &halves)
		sameBits(t, &whole, &halves)
		for i := range block.Events() {
			e := w.Explain(block, i, 3)
			if e.Status != whole.Status[i] || e.Gate != whole.Gate.Get(i) {
				t.Errorf("event %d: status %v and gate %v, explained as %v and %v", i, whole.Status[i], whole.Gate.Get(i), e.Status, e.Gate)
			}
			for h := range e.Hypotheses {
				if passes(&e.Hypotheses[h]) != whole.Accepted[h].Get(i) {
					t.Errorf("event %d: hypothesis %d is explained as %+v", i, h, e.Hypotheses[h])
				}
			}
		}
		for k := range whole.Entries.Len() {
			e := whole.Entries.Row(k)
			if int64(e.Tried) > s.AssignmentBudget {
				t.Errorf("tried %d with a budget of %d", e.Tried, s.AssignmentBudget)
			}
			seen := map[int16]bool{}
			for _, object := range e.Assignment {
				if object >= 0 && seen[object] {
					t.Errorf("object %d stands for two products: %v", object, e.Assignment)
				}
				seen[object] = true
			}
		}
	})
}

// FuzzFits judges arbitrary blocks with selections that fit: no panic, no accept without
// a fit that converged, and uncertainties that are at least 0 or NaN.
func FuzzFits(f *testing.F) {
	for seed := range 40 {
		data := make([]byte, 600)
		state := uint64(seed + 1000)
		for i := range data {
			state = state*6364136223846793005 + 1442695040888963407
			data[i] = byte(state >> 56)
		}
		f.Add(data)
	}
	vertex, measured, group := taggedFit(1), taggedFit(1), pionsOnly(2)
	vertex.Fit.Vertex, measured.Fit.Vertex = selection.FreeVertexZ, selection.MeasuredVertex
	displaced := uncertainHypothesis()
	displaced.Fit = &selection.Fit{Masses: []selection.FitMass{{Products: []string{"Lambda"}}, {Products: []string{"pi0"}}}}
	merged := selection.Hypothesis{
		Reaction: "gamma p -> p pi0", Beam: vertex.Beam, Fit: &selection.Fit{},
		Measurements: []selection.ProductMeasurement{
			{Product: "p", Measurement: selection.Direction},
			{Product: "pi0", Merged: &selection.MergedPhotons{MinEnergyGeV: 0.2}},
		},
	}
	hypotheses := []selection.Hypothesis{vertex, measured, group, displaced, merged}
	for i := range hypotheses {
		hypotheses[i].ExtraObjects = anything()
		hypotheses[i].RecordUncertainties = true
	}
	program := compile(f, hypotheses...)
	f.Fuzz(func(t *testing.T, data []byte) {
		d := &dice{data: data}
		block := d.block()
		if block.Validate() != nil {
			return
		}
		var out event.VerdictBlock
		w := program.NewWorker(selection.AllEntries)
		w.Reset(&out)
		w.Judge(block, 0, block.Events(), &out)
		for _, e := range rows(&out) {
			if e.Status == event.Accepted && e.Fit.Status != 1 {
				t.Errorf("accepted with the fit %+v", e.Fit)
			}
			for _, x := range e.Uncertainties {
				if x < 0 || math.IsInf(x, 0) {
					t.Errorf("an uncertainty of %g", x)
				}
			}
		}
		for i := range block.Events() {
			w.Explain(block, i, 2)
		}
	})
}
