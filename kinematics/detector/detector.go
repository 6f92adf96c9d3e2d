package detector

import (
	"math"
	"slices"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/num/random"
)

// Detector measures simulated events. It is immutable and may be used by any
// number of goroutines at once.
type Detector struct {
	config Config
}

// New returns a detector, or a fault.List with every fault of its description.
func New(config Config) (*Detector, error) {
	if err := config.Validate(); err != nil {
		return nil, err
	}
	return &Detector{config: config}, nil
}

// Labels tells which particle made each object: its row within the truth of the
// event, the most energetic one of a merged cluster, or NoParticle for noise.
type Labels struct {
	Particle []int16
}

// Measure replaces the content of block by the measurement of the events of
// truth, in the momentum and angles set, and that of labels, unless it is nil.
// Their memory is kept between calls, and apart from it each call allocates a
// fixed amount. The block is valid for at most event.MaxEvents events.
func (d *Detector) Measure(truth *event.Truth, block *event.Block, labels *Labels) {
	w := worker{config: &d.config, stream: random.New(d.config.Seed, random.Detection, 0)}
	d.reset(block)
	if p := truth.Polarisation; p != nil { // known without measuring
		block.Polarisation = &event.Polarisation{
			Linear: slices.Clone(p.Linear), PlaneRad: slices.Clone(p.PlaneRad), Circular: slices.Clone(p.Circular),
		}
	}
	if labels != nil {
		labels.Particle = labels.Particle[:0]
	}
	for i, id := range truth.EventIDs {
		w.stream.Start(id)
		w.measure(truth, i)
		block.EventIDs = append(block.EventIDs, id)
		for k := range w.objects {
			w.objects[k].write(block)
			if labels != nil {
				labels.Particle = append(labels.Particle, w.objects[k].label)
			}
		}
		block.ObjectOffsets = append(block.ObjectOffsets, int32(len(block.Class))) //nolint:gosec // a block is far smaller
		if block.Beam != nil {
			w.tag(truth, i, block.Beam)
		}
		if block.Vertex != nil {
			w.vertex(truth, i, block.Vertex)
		}
		if block.Groups != nil {
			w.displaced(truth, i, block.Groups)
		}
	}
}

// worker measures one event after the other in memory of its own.
type worker struct {
	config   *Config
	stream   random.Stream
	clusters []cluster
	objects  []object
}

// measure fills the objects of one event. The order of its draws is frozen:
// charged and neutral particles in the order of the truth, then clusters,
// noise, beam candidates, vertex and displaced vertices.
func (w *worker) measure(truth *event.Truth, i int) {
	w.clusters, w.objects = w.clusters[:0], w.objects[:0]
	first, end := truth.Particles(i)
	lone := w.config.Recoil != nil && lonely(truth, first, end)
	for row := first; row < end; row++ {
		if !truth.Decayed[row] {
			w.particle(truth, row, int16(row-first), lone) //nolint:gosec // an event is small
		}
	}
	if w.config.Calorimeter != nil {
		w.calorimeter()
	}
	for i := 1; i < len(w.objects); i++ { // few: sorted by insertion
		for k := i; k > 0 && w.objects[k].before(&w.objects[k-1]); k-- {
			w.objects[k], w.objects[k-1] = w.objects[k-1], w.objects[k]
		}
	}
}

// lonely reports whether at most one of the particles is charged.
func lonely(truth *event.Truth, first, end int) bool {
	count := 0
	for row := first; row < end; row++ {
		if truth.Decayed[row] {
			continue
		}
		if _, _, ok := charged(truth.Number[row]); ok {
			count++
		}
	}
	return count <= 1
}

// particle sends a particle to the part of the detector that sees it.
func (w *worker) particle(truth *event.Truth, row int, label int16, lone bool) {
	number, p := truth.Number[row], truth.Momentum[row]
	class, species, isCharged := charged(number)
	switch {
	case number == numberPhoton:
		if w.config.Calorimeter != nil {
			w.gather(p, momentum.Three{X: truth.Origin.X[row], Y: truth.Origin.Y[row], Z: truth.Origin.Z[row]}, label)
		}
	case lone && number == numberProton:
		r := Neutrals(*w.config.Recoil)
		w.direct(p.P, &r, object{class: class, species: species, label: label})
	case isCharged:
		if w.config.Tracker != nil {
			w.track(p.P, class, species, label)
		}
	case number == numberNeutron || number == -numberNeutron || number == numberKaonLong:
		if w.config.Neutrals != nil {
			w.direct(p.P, w.config.Neutrals, object{class: event.Neutral, label: label})
		}
	}
}

func (w *worker) vertex(truth *event.Truth, i int, v *event.Vertex) {
	d := w.config.Vertex
	v.Append(
		truth.Vertex.X[i]+float64(d.SigmaXM*w.stream.Normal()),
		truth.Vertex.Y[i]+float64(d.SigmaYM*w.stream.Normal()),
		truth.Vertex.Z[i]+float64(d.SigmaZM*w.stream.Normal()),
	)
	v.Covariance.Packed = append(v.Covariance.Packed,
		d.SigmaXM*d.SigmaXM, 0, 0, d.SigmaYM*d.SigmaYM, 0, d.SigmaZM*d.SigmaZM)
}

// reset empties the block, keeps its memory and gives it the columns that the
// detector measures.
func (d *Detector) reset(b *event.Block) {
	old := *b
	*b = event.Block{
		EventIDs: old.EventIDs[:0], RunNumber: old.RunNumber,
		ObjectOffsets: append(old.ObjectOffsets[:0], 0),
		Coordinates:   event.Coordinates{Kind: event.MomentumAngles},
		Class:         old.Class[:0],
		Measured:      kept(old.Measured), Species: kept(old.Species), Covariance: kept(old.Covariance),
	}
	for k := range event.MomentumAngles.Columns() {
		b.Coordinates.Columns[k] = old.Coordinates.Columns[k][:0]
	}
	b.Measured.Bits, b.Species.Bits = b.Measured.Bits[:0], b.Species.Bits[:0]
	b.Covariance.Packed = b.Covariance.Packed[:0]
	if c := d.config.Calorimeter; c != nil && c.RadiusM > 0 {
		b.Clusters = kept(old.Clusters)
		*b.Clusters = event.Positions{X: b.Clusters.X[:0], Y: b.Clusters.Y[:0], Z: b.Clusters.Z[:0]}
	}
	if d.config.Tagger != nil {
		b.Beam = kept(old.Beam)
		*b.Beam = event.Beam{
			Offsets: append(b.Beam.Offsets[:0], 0), EnergyGeV: b.Beam.EnergyGeV[:0],
			SigmaGeV: b.Beam.SigmaGeV[:0], TimeNS: b.Beam.TimeNS[:0],
		}
	}
	if d.config.Vertex != nil {
		b.Vertex = kept(old.Vertex)
		v := kept(b.Vertex.Covariance)
		v.Packed = v.Packed[:0]
		*b.Vertex = event.Vertex{
			Positions:  event.Positions{X: b.Vertex.X[:0], Y: b.Vertex.Y[:0], Z: b.Vertex.Z[:0]},
			Covariance: v,
		}
	}
	if d.config.Displaced != nil {
		b.Groups = kept(old.Groups)
		g := b.Groups
		v := kept(g.Covariance)
		v.Packed = v.Packed[:0]
		*g = event.Groups{
			OfObject: g.OfObject[:0], Offsets: append(g.Offsets[:0], 0),
			Position:   event.Positions{X: g.Position.X[:0], Y: g.Position.Y[:0], Z: g.Position.Z[:0]},
			Covariance: v,
		}
	}
}

// kept is p, or a new value where there is none.
func kept[T any](p *T) *T {
	if p == nil {
		return new(T)
	}
	return p
}

// write appends an object to the block.
func (o *object) write(b *event.Block) {
	b.Class = append(b.Class, o.class)
	b.Measured.Bits = append(b.Measured.Bits, o.mask)
	b.Species.Bits = append(b.Species.Bits, o.species)
	for k, v := range [...]float64{o.size, o.theta, o.phi} {
		b.Coordinates.Columns[k] = append(b.Coordinates.Columns[k], v)
	}
	b.Covariance.Packed = append(b.Covariance.Packed, o.varSize, 0, 0, o.varTheta, 0, o.varPhi)
	if b.Clusters == nil {
		return
	}
	if o.class == event.Photon {
		b.Clusters.Append(o.hit.X, o.hit.Y, o.hit.Z)
	} else {
		b.Clusters.Append(math.NaN(), math.NaN(), math.NaN())
	}
}
