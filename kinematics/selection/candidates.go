package selection

import (
	"math"

	"example.org/kinegate/kinematics/momentum"
)

// findCandidates lists the beam candidates of the event that lie in a window of the
// hypothesis; a hypothesis without tagged beam has the one known initial state, or
// none. It returns false where a candidate is needed and there is none.
func (w *Worker) findCandidates() bool {
	b := &w.hypothesis.beam
	w.candidates = w.candidates[:0]
	if !b.tagged {
		w.candidates = append(w.candidates, candidate{row: -1, weight: 1, state: b.fixed})
		return true
	}
	first, end := w.block.Candidates(w.index)
	for row := first; row < end; row++ {
		weight, ok := b.weight(w.block.Beam.TimeNS[row])
		if !ok {
			continue
		}
		state := b.state(w.block.Beam.EnergyGeV[row], w.hypothesis.centre)
		w.candidates = append(w.candidates, candidate{row: row - first, weight: weight, state: state})
	}
	return len(w.candidates) > 0
}

// openCandidates marks the candidates whose own conditions hold and reports whether
// there is one. It leaves the worker at the last candidate, which for a hypothesis
// without tagged beam is the only one.
func (w *Worker) openCandidates() bool {
	h := w.hypothesis
	w.enter(&w.candidates[0])
	possible, some := w.all(h.event), false
	for i := range w.candidates {
		c := &w.candidates[i]
		w.enter(c)
		c.open = possible && w.all(h.candidate)
		some = some || c.open
	}
	return some
}

// enter sets the initial state to that of a candidate.
func (w *Worker) enter(c *candidate) {
	w.incoming, w.beamRow = &c.state, c.row
}

// weight returns the weight of a candidate of the given time, and false for one
// outside every window.
func (b *beam) weight(time float64) (float64, bool) {
	if len(b.windows) == 0 {
		return 1, true
	}
	for i := range b.windows {
		if t := &b.windows[i]; time >= t.low && time < t.high {
			return t.weight, true
		}
	}
	return 0, false
}

// state returns the initial state of a beam particle of the given total energy along
// +z and a target at rest:
//
//	p = sqrt((E-m)(E+m))
//
// An energy below the mass gives NaN throughout.
func (b *beam) state(energy float64, centre bool) incoming {
	p := math.Sqrt((energy - b.mass) * (energy + b.mass))
	s := incoming{
		first:  momentum.Four{P: momentum.Three{Z: p}, E: energy},
		second: momentum.Four{E: b.target},
	}
	if !(energy >= b.mass) {
		s.first = momentum.Four{P: momentum.Three{X: math.NaN(), Y: math.NaN(), Z: math.NaN()}, E: math.NaN()}
	} else if centre {
		s.setBoost(momentum.CollideTarget(b.mass, energy-b.mass, b.target).SqrtS)
	}
	return s
}

// setBoost sets the boost to the rest frame of an initial state of mass m, where
// there is one.
func (s *incoming) setBoost(m float64) {
	if !(m > 0) {
		return
	}
	boost, err := momentum.NewBoost(s.first.P.Add(s.second.P), m)
	s.boost, s.moving = boost, err == nil
}
