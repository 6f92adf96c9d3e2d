package detector

import (
	"math"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/momentum"
)

// Monte Carlo particle numbers, Review of Particle Physics.
const (
	numberElectron = 11
	numberMuon     = 13
	numberPhoton   = 22
	numberKaonLong = 130
	numberPion     = 211
	numberKaon     = 321
	numberNeutron  = 2112
	numberProton   = 2212
	numberSigmaM   = 3112
	numberSigmaP   = 3222
	numberXi       = 3312
	numberOmega    = 3334
	numberDeuteron = 1000010020
)

// charged returns the class and the species bit of a charged particle, and
// false for any other. Hyperons leave tracks without a species of their own;
// nuclei above the deuteron stop in the target.
func charged(number int64) (class event.Class, species uint8, ok bool) {
	size, sign := number, 1
	if number < 0 {
		size, sign = -number, -1
	}
	switch size {
	case numberElectron:
		species, sign = event.SpeciesElectron, -sign
	case numberMuon:
		species, sign = event.SpeciesMuon, -sign
	case numberPion:
		species = event.SpeciesPion
	case numberKaon:
		species = event.SpeciesKaon
	case numberProton:
		species = event.SpeciesProton
	case numberDeuteron:
		species = event.SpeciesDeuteron
	case numberSigmaP:
	case numberSigmaM, numberXi, numberOmega:
		sign = -sign
	default:
		return 0, 0, false
	}
	if sign > 0 {
		return event.Positive, species, true
	}
	return event.Negative, species, true
}

// variance is p^2 (a^2 + b^2 p^2).
func (d *Tracker) variance(p float64) float64 {
	square := p * p
	return square * (float64(d.Constant*d.Constant) + float64(d.PerGeV*d.PerGeV*square))
}

// track measures a charged particle.
func (w *worker) track(p momentum.Three, class event.Class, species uint8, label int16) {
	d := w.config.Tracker
	size, theta := p.Norm(), p.Theta()
	if !d.Theta.holds(theta) || !(size >= d.MinMomentumGeV) || !w.stream.Chance(d.Efficiency) {
		return
	}
	measured := size + float64(math.Sqrt(d.variance(size))*w.stream.Normal())
	o := object{class: class, mask: event.AllMeasured, label: label, size: measured, varSize: d.variance(measured)}
	o.point(&w.stream, theta, p.Phi(), d.AngleSigmaRad, d.AngleSigmaRad)
	if d.Identify {
		o.species = w.confuse(species)
	}
	if measured > 0 { // no track curves the wrong way
		w.objects = append(w.objects, o)
	}
}

// confuse returns the species that a track is taken for, from one number where
// the species can be taken for another.
func (w *worker) confuse(species uint8) uint8 {
	drawn, u := false, 0.0
	for _, c := range w.config.Tracker.Confusions {
		if c.Species != species {
			continue
		}
		if !drawn {
			drawn, u = true, w.stream.Uniform()
		}
		if u < c.Probability {
			return c.TakenFor
		}
		u -= c.Probability
	}
	return species
}

// direct measures the direction of a particle and nothing else.
func (w *worker) direct(p momentum.Three, d *Neutrals, o object) {
	theta := p.Theta()
	if !d.Theta.holds(theta) || !(p.Norm() >= d.MinMomentumGeV) || !w.stream.Chance(d.Efficiency) {
		return
	}
	o.mask = event.DirectionMeasured
	o.point(&w.stream, theta, p.Phi(), d.AngleSigmaRad, d.AngleSigmaRad)
	w.objects = append(w.objects, o)
}
