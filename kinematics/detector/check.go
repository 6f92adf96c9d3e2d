package detector

import (
	"math"
	"math/bits"
	"strconv"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/fault"
)

// Validate returns every fault of the configuration as a fault.List, or nil.
func (c *Config) Validate() error {
	var l checker
	if d := c.Calorimeter; d != nil {
		d.check(&l)
	}
	if d := c.Tracker; d != nil {
		d.check(&l)
	}
	if d := c.Recoil; d != nil {
		l.polar("recoil.theta", d.Theta)
		l.size("recoil.min_momentum_gev", d.MinMomentumGeV)
		l.spread("recoil.angle_sigma_rad", d.AngleSigmaRad)
		l.probability("recoil.efficiency", d.Efficiency)
	}
	if d := c.Neutrals; d != nil {
		l.polar("neutrals.theta", d.Theta)
		l.size("neutrals.min_momentum_gev", d.MinMomentumGeV)
		l.spread("neutrals.angle_sigma_rad", d.AngleSigmaRad)
		l.probability("neutrals.efficiency", d.Efficiency)
	}
	if d := c.Tagger; d != nil {
		d.check(&l)
	}
	if d := c.Vertex; d != nil {
		l.size("vertex.sigma_x_m", d.SigmaXM)
		l.size("vertex.sigma_y_m", d.SigmaYM)
		l.size("vertex.sigma_z_m", d.SigmaZM)
	}
	if d := c.Displaced; d != nil {
		d.check(&l)
	}
	return l.list.Err()
}

func (d *Calorimeter) check(l *checker) {
	l.polar("calorimeter.theta", d.Theta)
	l.size("calorimeter.radius_m", d.RadiusM)
	l.size("calorimeter.spread_z_m", d.SpreadZM)
	if d.FromCentre && d.RadiusM == 0 {
		l.number("calorimeter.radius_m", d.RadiusM, "> 0 with from_centre")
	}
	l.size("calorimeter.stochastic", d.Stochastic)
	l.size("calorimeter.constant", d.Constant)
	l.size("calorimeter.noise_gev", d.NoiseGeV)
	if d.Stochastic == 0 && d.Constant == 0 && d.NoiseGeV == 0 {
		l.number("calorimeter.stochastic", 0, "> 0 where constant and noise_gev are 0: a fit needs a resolution")
	}
	l.spread("calorimeter.theta_sigma_rad", d.ThetaSigmaRad)
	l.spread("calorimeter.phi_sigma_rad", d.PhiSigmaRad)
	if !(d.ThresholdGeV > 0 && d.ThresholdGeV <= math.MaxFloat64) {
		l.number("calorimeter.threshold_gev", d.ThresholdGeV, "> 0 and finite")
	}
	l.probability("calorimeter.efficiency", d.Efficiency)
	l.angle("calorimeter.merge_angle_rad", d.MergeAngleRad)
	if s := d.SplitOff; s != nil {
		l.probability("calorimeter.split_off.probability", s.Probability)
		l.probability("calorimeter.split_off.min_share", s.MinShare)
		l.probability("calorimeter.split_off.max_share", s.MaxShare)
		l.angle("calorimeter.split_off.min_angle_rad", s.MinAngleRad)
		l.angle("calorimeter.split_off.max_angle_rad", s.MaxAngleRad)
		if s.MaxShare < s.MinShare {
			l.number("calorimeter.split_off.max_share", s.MaxShare, ">= min_share")
		}
		if s.MaxAngleRad < s.MinAngleRad {
			l.number("calorimeter.split_off.max_angle_rad", s.MaxAngleRad, ">= min_angle_rad")
		}
	}
	if n := d.Noise; n != nil {
		l.probability("calorimeter.noise.probability", n.Probability)
		l.size("calorimeter.noise.mean_gev", n.MeanGeV)
	}
}

func (d *Tracker) check(l *checker) {
	l.polar("tracker.theta", d.Theta)
	l.size("tracker.min_momentum_gev", d.MinMomentumGeV)
	l.size("tracker.constant", d.Constant)
	l.size("tracker.per_gev", d.PerGeV)
	if d.Constant == 0 && d.PerGeV == 0 {
		l.number("tracker.constant", 0, "> 0 where per_gev is 0: a fit needs a resolution")
	}
	l.spread("tracker.angle_sigma_rad", d.AngleSigmaRad)
	l.probability("tracker.efficiency", d.Efficiency)
	if len(d.Confusions) > 0 && !d.Identify {
		l.fault("tracker.confusions", strconv.Itoa(len(d.Confusions)), "none without identify")
	}
	sums := map[uint8]float64{}
	for i, c := range d.Confusions {
		at := "tracker.confusions[" + strconv.Itoa(i) + "]"
		l.species(at+".species", c.Species)
		l.species(at+".taken_for", c.TakenFor)
		l.probability(at+".probability", c.Probability)
		sums[c.Species] += c.Probability
		if sums[c.Species] > 1 {
			l.number(at+".probability", c.Probability, "at most 1 over all confusions of one species")
		}
	}
}

func (d *Tagger) check(l *checker) {
	l.size("tagger.sigma_gev", d.SigmaGeV)
	l.size("tagger.time_sigma_ns", d.TimeSigmaNS)
	if d.EdgesGeV == nil {
		return
	}
	if len(d.EdgesGeV) < 2 {
		l.fault("tagger.edges_gev.length", strconv.Itoa(len(d.EdgesGeV)), ">= 2")
	}
	low := 0.0
	for i, edge := range d.EdgesGeV {
		if !(edge > low && edge <= math.MaxFloat64) {
			l.number("tagger.edges_gev["+strconv.Itoa(i)+"]", edge, "> "+fault.Text(low)+" and finite")
		}
		low = edge
	}
	if d.SigmaGeV != 0 {
		l.number("tagger.sigma_gev", d.SigmaGeV, "0 with edges_gev")
	}
}

// checker gathers faults.
type checker struct {
	list fault.List
}

func (l *checker) fault(field, value, allowed string) {
	l.list = append(l.list, fault.New(fault.Invalid, field, value, allowed).In("detector.New"))
}

func (l *checker) number(field string, value float64, allowed string) {
	l.fault(field, fault.Text(value), allowed)
}

func (l *checker) size(field string, v float64) {
	if !(v >= 0 && v <= math.MaxFloat64) {
		l.number(field, v, ">= 0 and finite")
	}
}

func (l *checker) spread(field string, v float64) {
	if !(v > 0 && v <= 1) {
		l.number(field, v, "> 0 and <= 1")
	}
}

func (l *checker) angle(field string, v float64) {
	if !(v >= 0 && v <= math.Pi) {
		l.number(field, v, "0 to pi")
	}
}

func (l *checker) probability(field string, v float64) {
	if !(v >= 0 && v <= 1) {
		l.number(field, v, "0 to 1")
	}
}

// polar keeps the poles out: the azimuth has no resolution there.
func (l *checker) polar(field string, p Polar) {
	if !(p.MinRad > 0 && p.MinRad < math.Pi) {
		l.number(field+".min_rad", p.MinRad, "> 0 and < pi")
	}
	if !(p.MaxRad > p.MinRad && p.MaxRad < math.Pi) {
		l.number(field+".max_rad", p.MaxRad, "> min_rad and < pi")
	}
}

func (l *checker) species(field string, mask uint8) {
	if bits.OnesCount8(mask) != 1 || mask&^event.SpeciesAll != 0 {
		l.fault(field, strconv.Itoa(int(mask)), "one bit of the species mask: 1, 2, 4, 8, 16 or 32")
	}
}
