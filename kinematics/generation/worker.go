package generation

import (
	"math"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/num/random"
)

// lightSpeed in metres a second, exact by definition of the metre.
const lightSpeed = 299_792_458

// Worker makes events one after the other in memory of its own. Each goroutine
// needs its own.
type Worker struct {
	// Stop is asked now and then within an event, as events with a high bound or
	// a narrow density can take long; nil is never asked. An event during which
	// it returns true is left without particles and must not be used.
	Stop func() bool

	generator *Generator
	stats     Stats
	// events and points are the streams of events and of measured bounds, stream
	// is the one in use.
	events, points random.Stream
	stream         *random.Stream
	// left is the number of draws that the event may still take.
	left int
	// all holds the phase spaces of every channel: the reaction's, then those of
	// the decays in the order of the nodes.
	all [][]PhaseSpace
	// of the event being made
	plan    *plan
	spaces  []PhaseSpace
	state   state
	masses  []float64
	momenta []momentum.Four
	// excess is the product of the accepted weights over their bounds, of those
	// above them; an event where it is not 1 is an overflow.
	excess float64
	made   [MaxBodies]momentum.Four
}

// NewWorker returns a worker.
func (g *Generator) NewWorker() *Worker {
	w := &Worker{
		generator: g,
		events:    random.New(g.config.Seed, random.Generation, 0),
		points:    random.New(g.config.Seed, random.Bounds, 0),
	}
	w.stream = &w.events
	largest := 0
	for _, p := range g.plans {
		spaces := []PhaseSpace{p.root.lowest}
		for i := range p.nodes {
			if inner := p.nodes[i].group; inner != nil {
				spaces = append(spaces, inner.lowest)
			}
		}
		w.all = append(w.all, spaces)
		largest = max(largest, len(p.nodes))
	}
	w.spaces = w.all[0]
	w.masses = make([]float64, largest)
	w.momenta = make([]momentum.Four, largest)
	return w
}

// Fraction draws point i of a channel, which must be one of the generator's, and
// returns its weight as a fraction of the analytic ceiling. The points are not
// those of events.
func (w *Worker) Fraction(channel int, i int64) float64 {
	g := w.generator
	w.plan, w.spaces = g.plans[channel], w.all[channel]
	w.stream = &w.points
	w.stream.Start(i)
	w.left = MaxAttempts
	return w.fraction()
}

// Stats counts the worker's events so far.
func (w *Worker) Stats() Stats { return w.stats }

// stopEvery is how many draws lie between two looks at Stop: some 50 microseconds.
const stopEvery = 256

// again allows one more draw of the event: MaxAttempts in all its loops together, and
// none after Stop.
func (w *Worker) again() bool {
	if w.left == 0 {
		return false
	}
	w.left--
	if w.left%stopEvery == 0 && w.Stop != nil && w.Stop() {
		w.left = 0
	}
	return w.left > 0
}

// Event appends one event to truth. The order of its draws is frozen: channel, vertex,
// accidental candidates, production with its redraws, decays in text order,
// ages in text order.
func (w *Worker) Event(id int64, truth *event.Truth) {
	g := w.generator
	w.stream = &w.events
	w.stream.Start(id)
	w.left, w.excess = MaxAttempts, 1
	channel := 0
	if g.mixture != nil {
		channel, _ = choose(g.mixture, w.stream.Uniform())
	}
	w.plan, w.spaces = g.plans[channel], w.all[channel]
	for i := range w.plan.nodes {
		w.masses[i] = w.plan.nodes[i].mass
	}
	vertex := w.vertex()
	beamRow := len(truth.BeamEnergyGeV)
	truth.BeamEnergyGeV = append(truth.BeamEnergyGeV, 0)
	truth.BeamTimeNS = append(truth.BeamTimeNS, 0)
	w.accidentals(truth)
	weight := w.produce()

	initial := w.state.total
	if weight > 0 && !w.decay() {
		w.stats.Exhausted++
		weight = 0
	}
	weight = float64(weight * w.excess)
	if weight > 0 {
		initial = w.write(vertex, truth)
	}
	truth.EventIDs = append(truth.EventIDs, id)
	truth.Channel = append(truth.Channel, int16(channel))
	truth.Weight = append(truth.Weight, weight)
	truth.Vertex.Append(vertex[0], vertex[1], vertex[2])
	truth.BeamEnergyGeV[beamRow] = w.state.energy
	truth.BeamOffsets = append(truth.BeamOffsets, int32(len(truth.BeamEnergyGeV))) //nolint:gosec // a block is far smaller
	truth.Initial = append(truth.Initial, initial)
	truth.Offsets = append(truth.Offsets, int32(len(truth.Number))) //nolint:gosec // a block is far smaller
	if p := g.config.Polarisation; p != (Polarisation{}) {
		truth.Polarise(p.Linear, p.PlaneRad, p.Circular)
	}
	w.count(weight)
}

func (w *Worker) count(weight float64) {
	w.stats.Events++
	if weight == 0 {
		w.stats.Empty++
	} else if w.excess > 1 {
		w.stats.Overflows++
		w.stats.Largest = max(w.stats.Largest, w.excess)
	}
	w.stats.SumWeights += weight
	w.stats.SumSquares += float64(weight * weight)
}

func (w *Worker) vertex() [3]float64 {
	r := &w.generator.config.Target
	v := [3]float64{r.CentreXM, r.CentreYM, r.CentreZM}
	if r.SigmaXM > 0 {
		v[0] += float64(r.SigmaXM * w.stream.Normal())
	}
	if r.SigmaYM > 0 {
		v[1] += float64(r.SigmaYM * w.stream.Normal())
	}
	if r.LengthM > 0 {
		v[2] += float64(r.LengthM * (w.stream.Uniform() - 0.5))
	}
	return v
}

func (w *Worker) accidentals(truth *event.Truth) {
	a := &w.generator.config.Accidentals
	expected := a.mean()
	if expected == 0 {
		return
	}
	for range w.stream.Poisson(expected) {
		truth.BeamEnergyGeV = append(truth.BeamEnergyGeV, w.generator.source.energy(w.stream))
		truth.BeamTimeNS = append(truth.BeamTimeNS, a.WindowNS*(w.stream.Uniform()-0.5))
	}
}

// produce draws the initial state and the masses of the reaction's products,
// and returns the event's weight.
func (w *Worker) produce() float64 {
	if w.generator.config.Weighted {
		w.stats.Attempts++
		return w.weighted()
	}
	if w.plan.channel.Energy.Kind == PhaseSpaceRate {
		return w.unweighted(w.fraction)
	}
	// The rate at each energy is given, so the energy is drawn first and only the
	// products are redrawn; the event density is flux times rate at every energy.
	if !w.energy() {
		w.stats.Exhausted++
		return 0
	}
	if g := w.plan.root; g.sharp && len(g.rows) == 2 {
		w.stats.Attempts++
		w.drawProducts() // two sharp bodies: always the same weight
		return 1
	}
	ceiling := w.plan.root.ceiling(w.state.m)
	return w.unweighted(func() float64 { return w.drawProducts() / ceiling })
}

// unweighted redraws until an event is accepted, and returns its weight up to the
// excess.
func (w *Worker) unweighted(fraction func() float64) float64 {
	bound := w.plan.bound
	for w.again() {
		w.stats.Attempts++
		f := fraction()
		if u := w.stream.Uniform(); float64(u*bound) >= f {
			continue
		}
		w.excess *= max(1, f/bound)
		return 1
	}
	w.stats.Exhausted++
	return 0
}

// energy draws the initial state of a given rate: redrawn below the threshold
// and by the curve.
func (w *Worker) energy() bool {
	for w.again() {
		w.state = w.generator.source.draw(w.stream)
		if !(w.state.m > w.plan.threshold) {
			continue
		}
		if c := w.plan.rate; c != nil && float64(w.stream.Uniform()*w.plan.rateTop) >= c.At(w.state.m) {
			continue
		}
		return true
	}
	return false
}

// fraction draws an event of the channel, the initial state included, and
// returns its weight as a fraction of its ceiling.
func (w *Worker) fraction() float64 {
	if w.plan.channel.Energy.Kind != PhaseSpaceRate {
		if !w.energy() {
			return 0
		}
		return w.drawProducts() / w.plan.root.ceiling(w.state.m)
	}
	w.state = w.generator.source.draw(w.stream)
	if !(w.state.m > w.plan.threshold) {
		return 0
	}
	return w.drawProducts() / (w.state.flux() * w.plan.joint)
}

// weighted draws an event and returns its weight: phase space times line shapes
// times branching fractions, over the flux factor for PhaseSpaceRate, and for a
// given rate over a spread of energies divided by the mean weight at this
// energy, so that the mean weight is the rate.
func (w *Worker) weighted() float64 {
	w.state = w.generator.source.draw(w.stream)
	p := w.plan
	if !(w.state.m > p.threshold) {
		return 0
	}
	weight := w.drawProducts() * p.branching
	switch p.channel.Energy.Kind {
	case PhaseSpaceRate:
		return weight / w.state.flux()
	case CurveRate, LawRate:
		weight *= p.rate.At(w.state.m)
	case ConstantRate, energyKinds:
	}
	if p.norm != nil {
		weight /= p.norm.at(w.state.m)
	}
	return weight
}

// drawProducts draws the masses of the reaction's products and returns the
// weight.
func (w *Worker) drawProducts() float64 {
	p := w.plan
	weight := p.root.draw(w.stream, p.nodes, w.state.m, w.masses, &w.spaces[0])
	if p.angle != nil && weight > 0 {
		if n := len(p.root.rows); n > 2 {
			weight *= p.angle.acceptance(w.state.momentum, w.spaces[0].split[n-1])
		}
	}
	return weight
}

// decay gives the products their directions and lets them decay. It returns
// false where a decay used its attempts up.
func (w *Worker) decay() bool {
	p := w.plan
	ps := &w.spaces[0]
	var first *momentum.Three
	var direction momentum.Three
	if p.angle != nil {
		direction = p.angle.direction(w.stream, &w.state, ps.split[ps.n-1])
		first = &direction
	}
	ps.drawPlaces(w.stream, w.state.total, w.state.m, w.made[:], first)
	w.store(p.root)
	next := 1
	for i := range p.nodes {
		if inner := p.nodes[i].group; inner != nil {
			if !w.decayOf(i, inner, &w.spaces[next]) {
				return false
			}
			next++
		}
	}
	return true
}

// store moves the points of a group to their rows.
func (w *Worker) store(g *group) {
	for k, row := range g.rows {
		w.momenta[row] = w.made[k]
	}
}

// decayOf lets one particle decay: the daughters follow phase space times line
// shapes times the density at the mass that the particle has, by redrawing.
func (w *Worker) decayOf(row int, g *group, ps *PhaseSpace) bool {
	m := w.masses[row]
	if g.density != nil {
		return w.shapedDecay(row, g, ps)
	}
	if !w.redraw(g, ps, m) {
		return false
	}
	var first *momentum.Three
	var direction momentum.Three
	if g.cosTheta != nil {
		cos := g.cosTheta.at(w.stream.Uniform())
		phi := azimuth(w.stream.Uniform())
		direction = around(w.helicityAxis(row), cos, math.Sqrt((1-cos)*(1+cos)), phi)
		first = &direction
	}
	ps.drawPlaces(w.stream, w.momenta[row], m, w.made[:], first)
	w.store(g)
	return true
}

// shapedDecay is a decay with a density: made at rest, accepted by the density
// and then carried along.
func (w *Worker) shapedDecay(row int, g *group, ps *PhaseSpace) bool {
	m := w.masses[row]
	for w.again() {
		if !w.redraw(g, ps, m) {
			return false
		}
		ps.drawPlaces(w.stream, momentum.Four{E: m}, m, w.made[:], nil)
		w.store(g)
		var daughters [MaxBodies]momentum.Four
		for k, r := range g.text {
			daughters[k] = w.momenta[r]
		}
		f := g.density.fraction(m, daughters[:len(g.text)])
		if w.stream.Uniform() >= f {
			continue
		}
		w.excess *= max(1, f)
		for _, r := range g.text {
			w.momenta[r] = carry(w.momenta[r], w.masses[r], w.momenta[row], m)
		}
		return true
	}
	return false
}

// redraw draws the masses of a decay's daughters until they are accepted. No weight
// passes the ceiling of a group by more than rounding, so none is an overflow.
func (w *Worker) redraw(g *group, ps *PhaseSpace, m float64) bool {
	if g.sharp && len(g.rows) == 2 {
		return ps.drawMasses(w.stream, m) > 0
	}
	ceiling := g.ceiling(m)
	for w.again() {
		weight := g.draw(w.stream, w.plan.nodes, m, w.masses, ps)
		if w.stream.Uniform()*ceiling < weight {
			return true
		}
	}
	return false
}

// carry boosts a momentum on the shell of a mass from the rest frame of a body
// to the frame in which the body moves.
func carry(p momentum.Four, mass float64, body momentum.Four, m float64) momentum.Four {
	f := (body.P.Dot(p.P)/(body.E+m) + p.E) / m
	x := p.P.X + float64(body.P.X*f)
	y := p.P.Y + float64(body.P.Y*f)
	z := p.P.Z + float64(body.P.Z*f)
	return momentum.Four{P: momentum.Three{X: x, Y: y, Z: z}, E: shell(x, y, z, float64(mass*mass))}
}

// helicityAxis is the direction of a particle in its parent's rest frame, seen
// from its own rest frame: minus the direction in which the parent flies off
// there.
func (w *Worker) helicityAxis(row int) momentum.Three {
	parent := w.state.total
	if k := w.plan.nodes[row].parent; k >= 0 {
		parent = w.momenta[k]
	}
	boost, err := momentum.NewBoost(w.momenta[row].P, w.masses[row])
	if err != nil {
		return zAxis()
	}
	axis := boost.ToRest(parent).P.Neg().Unit()
	if axis == (momentum.Three{}) {
		return zAxis() // at rest in its parent's frame: every direction is alike
	}
	return axis
}

// write appends the particles of the event, and returns the four-momentum of
// the initial state, with the spectator.
func (w *Worker) write(vertex [3]float64, truth *event.Truth) momentum.Four {
	p := w.plan
	base := len(truth.Number)
	for i := range p.nodes {
		n := &p.nodes[i]
		origin := vertex
		if n.parent >= 0 {
			origin = w.decayPoint(truth, base+int(n.parent), w.masses[n.parent])
		}
		age := 0.0
		if n.life > 0 {
			age = n.life * w.stream.Exponential()
		}
		truth.Number = append(truth.Number, n.number)
		truth.Momentum = append(truth.Momentum, w.momenta[i])
		truth.Mass = append(truth.Mass, w.masses[i])
		truth.Parent = append(truth.Parent, n.parent)
		truth.Decayed = append(truth.Decayed, n.group != nil)
		truth.Origin.Append(origin[0], origin[1], origin[2])
		truth.ProperTimeS = append(truth.ProperTimeS, age)
	}
	number := w.generator.source.spectator()
	if w.state.spectator == (momentum.Four{}) {
		return w.state.total
	}
	spectator := w.state.spectator
	truth.Number = append(truth.Number, number)
	truth.Momentum = append(truth.Momentum, spectator)
	truth.Mass = append(truth.Mass, w.spectatorMass())
	truth.Parent = append(truth.Parent, event.NoParent)
	truth.Decayed = append(truth.Decayed, false)
	truth.Origin.Append(vertex[0], vertex[1], vertex[2])
	truth.ProperTimeS = append(truth.ProperTimeS, 0)
	return w.state.total.Add(spectator)
}

func (w *Worker) spectatorMass() float64 {
	if f, ok := w.generator.config.Initial.(FixedTarget); ok && f.Motion != nil {
		return f.Motion.SpectatorMassGeV
	}
	return 0
}

// decayPoint is where the particle of a row decays: its origin moved by
// p/m times c times its age.
func (w *Worker) decayPoint(truth *event.Truth, row int, mass float64) [3]float64 {
	p := truth.Momentum[row].P
	length := 0.0
	if age := truth.ProperTimeS[row]; age > 0 {
		length = lightSpeed * age / mass
	}
	return [3]float64{
		truth.Origin.X[row] + float64(p.X*length),
		truth.Origin.Y[row] + float64(p.Y*length),
		truth.Origin.Z[row] + float64(p.Z*length),
	}
}
