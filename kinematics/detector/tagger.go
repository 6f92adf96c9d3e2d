package detector

import (
	"math"
	"sort"

	"example.org/kinegate/kinematics/event"
)

// tag measures the beam candidates of an event and writes them in the order of
// their measured times, so that the order tells nothing of the truth.
func (w *worker) tag(truth *event.Truth, i int, beam *event.Beam) {
	d := w.config.Tagger
	start := len(beam.EnergyGeV)
	for row := truth.BeamOffsets[i]; row < truth.BeamOffsets[i+1]; row++ {
		e, sigma, ok := d.measure(truth.BeamEnergyGeV[row], w.stream.Normal())
		time := truth.BeamTimeNS[row] + float64(d.TimeSigmaNS*w.stream.Normal())
		if !ok {
			continue
		}
		k := len(beam.EnergyGeV)
		beam.EnergyGeV = append(beam.EnergyGeV, e)
		beam.SigmaGeV = append(beam.SigmaGeV, sigma)
		beam.TimeNS = append(beam.TimeNS, time)
		for ; k > start && beam.TimeNS[k-1] > time; k-- {
			beam.EnergyGeV[k], beam.SigmaGeV[k], beam.TimeNS[k] = beam.EnergyGeV[k-1], beam.SigmaGeV[k-1], beam.TimeNS[k-1]
		}
		beam.EnergyGeV[k], beam.SigmaGeV[k], beam.TimeNS[k] = e, sigma, time
	}
	beam.Offsets = append(beam.Offsets, int32(len(beam.EnergyGeV))) //nolint:gosec // a block is far smaller
}

// measure is the energy that the tagger gives a candidate, and false where it
// has no channel for it.
func (d *Tagger) measure(e, deviate float64) (measured, sigma float64, ok bool) {
	if d.EdgesGeV == nil {
		measured = e + float64(d.SigmaGeV*deviate)
		return measured, d.SigmaGeV, measured > 0
	}
	last := len(d.EdgesGeV) - 1
	// The channel [low, high) that holds e; the last one holds its end too.
	k := sort.Search(len(d.EdgesGeV), func(k int) bool { return d.EdgesGeV[k] > e }) - 1
	if k == last && e == d.EdgesGeV[last] {
		k--
	}
	if k < 0 || k >= last {
		return 0, 0, false
	}
	low, high := d.EdgesGeV[k], d.EdgesGeV[k+1]
	return (low + high) / 2, (high - low) / math.Sqrt(12), true
}
