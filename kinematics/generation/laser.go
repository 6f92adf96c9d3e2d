package generation

import (
	"math"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/num/random"
	"example.org/kinegate/kinematics/photon"
)

// LaserBackscatter is the spectrum of photons that light scatters off a charged
// beam, unpolarised, in the part of it between Low and High: see
// photon.Backscatter for the formulas.
type LaserBackscatter struct {
	// BeamGeV and MassGeV are the total energy and the mass of the beam particle.
	BeamGeV, MassGeV float64
	// LightGeV is the energy of the light.
	LightGeV float64
	// AngleRad is the angle between beam and light, pi head on.
	AngleRad float64
	// LowGeV and HighGeV cut the spectrum; 0 means its end.
	LowGeV, HighGeV float64
}

// Range returns the limits of the cut spectrum, zeros for one that is not
// possible.
func (l LaserBackscatter) Range() (low, high float64) {
	b, err := l.backscatter()
	if err != nil {
		return 0, 0
	}
	low, high = b.Lowest(), b.Highest()
	if l.LowGeV > 0 {
		low = l.LowGeV
	}
	if l.HighGeV > 0 {
		high = l.HighGeV
	}
	return low, high
}

func (l LaserBackscatter) backscatter() (photon.Backscatter, error) {
	return photon.NewBackscatter(l.BeamGeV, l.MassGeV, l.LightGeV, l.AngleRad)
}

func (l LaserBackscatter) faults(field string) fault.List {
	b, err := l.backscatter()
	if err != nil {
		return fault.List{&fault.Error{Kind: fault.Invalid, Field: field, Err: err}}
	}
	low, high := l.Range()
	if !(low >= b.Lowest() && high <= b.Highest() && low < high) {
		return fault.List{fault.New(fault.Outside, field+".min_gev", fault.Text(low)+" to "+fault.Text(high),
			"a range inside "+fault.Text(b.Lowest())+" to "+fault.Text(b.Highest()))}
	}
	return nil
}

func (l LaserBackscatter) sampler() sampler {
	low, high := l.Range()
	b, err := l.backscatter()
	d := &laser{source: b, low: low, high: high}
	if err != nil {
		return Fixed{EnergyGeV: low} // not reached: the spectrum has no faults
	}
	// The density is smooth and largest at an end or at one point inside: its
	// largest value on a grid, one per cent up, bounds it.
	for i := range laserGrid + 1 {
		if y := d.density(between(low, high, float64(i)/laserGrid)); y > d.top {
			d.top = y
		}
	}
	d.top *= 1.01
	return d
}

const laserGrid = 500

// laser draws by rejection from a flat distribution.
type laser struct {
	source    photon.Backscatter
	low, high float64
	top       float64
}

// density is the cross-section at an energy, 0 where the rounding of the limits
// leaves the spectrum.
func (d *laser) density(e float64) float64 {
	y, err := d.source.DifferentialBarn(e)
	if err != nil {
		return 0
	}
	return y
}

func (d *laser) draw(s *random.Stream) float64 {
	for range MaxAttempts {
		e := between(d.low, d.high, s.Uniform())
		if float64(s.Uniform()*d.top) < d.density(e) {
			return e
		}
	}
	return math.NaN() // a spectrum that is zero; the event gets weight 0
}
