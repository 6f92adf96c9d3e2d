package generation

import (
	"math"
	"strconv"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/num/random"
)

// Config says what to generate.
type Config struct {
	// Seed of the random streams.
	Seed uint64
	// Initial is the initial state.
	Initial Initial
	// Channels are the reactions: one, or a mixture of several.
	Channels []Channel
	// Weighted asks for weighted events, of one channel. Unweighted events all
	// carry weight 1, save the counted overflows above the channel's bound.
	Weighted bool
	// Target is where the interactions happen.
	Target Region
	// Accidentals are tagged beam candidates that did not interact.
	Accidentals Accidentals
	// Polarisation of the first beam's photons.
	Polarisation Polarisation
}

// Polarisation of beam photons, the same for every event.
type Polarisation struct {
	// Linear is the degree of linear polarisation, 0 to 1, and PlaneRad the azimuth
	// of its plane from the x axis, -pi to pi.
	Linear, PlaneRad float64
	// Circular is the signed degree of circular polarisation, -1 to 1, positive for
	// positive helicity; it shapes nothing here.
	Circular float64
}

func (p Polarisation) faults(list fault.List) fault.List {
	if !(p.Linear >= 0 && p.Linear <= 1) {
		list = append(list, fault.Number("polarisation.linear_degree", p.Linear, "0 to 1"))
	}
	if !(math.Abs(p.PlaneRad) <= math.Pi) {
		list = append(list, fault.Number("polarisation.plane_rad", p.PlaneRad, "-pi to pi"))
	}
	if !(math.Abs(p.Circular) <= 1) {
		list = append(list, fault.Number("polarisation.circular_degree", p.Circular, "-1 to 1"))
	}
	if p.Linear <= 1 && !(float64(p.Linear*p.Linear)+float64(p.Circular*p.Circular) <= 1+0x1p-50) {
		list = append(list, fault.Number("polarisation.circular_degree", p.Circular, "a degree that with the linear one makes at most 1 in quadrature"))
	}
	return list
}

// Channel is one reaction of the mixture.
type Channel struct {
	// Name labels the channel in faults and summaries.
	Name string
	// Fraction is the share of the events that are of this channel, relative to
	// the other channels' fractions; of a single channel it does not count. It
	// counts events of the stated final state: branching fractions do not enter.
	Fraction float64
	// Products of the reaction, 2 to MaxBodies.
	Products []Product
	// Energy says how the rate depends on sqrt(s).
	Energy EnergyShape
	// Angle shapes the direction of one product; nil means isotropic.
	Angle *Angle
	// Bound is the unweighting bound on the weight as a fraction of its analytic
	// ceiling; 0 means 1, which no phase-space weight exceeds. Lower is faster;
	// an event above it carries the weight fraction/bound and is counted.
	Bound float64
}

// EnergyKind is how the rate of a channel depends on sqrt(s), beside the flux.
type EnergyKind uint8

// The energy dependences.
const (
	// ConstantRate is the same rate at every energy at which the channel is open, with
	// broad particles down to their lowest masses: it does not change at the threshold
	// of the nominal masses.
	ConstantRate EnergyKind = iota
	// PhaseSpaceRate is the volume of phase space over the flux factor
	// 4 sqrt((p1.p2)^2 - m1^2 m2^2).
	PhaseSpaceRate
	// CurveRate is a curve over sqrt(s) in GeV; zero outside its points.
	CurveRate
	// LawRate is the total cross-section of the law of the channel's Angle. Not for
	// an initial state without beams.
	LawRate
	energyKinds
)

// EnergyShape is an EnergyKind with its curve.
type EnergyShape struct {
	Kind EnergyKind
	// Curve of CurveRate; nil otherwise.
	Curve *Curve
}

// Angle shapes the direction of one product in the centre of mass, relative to
// the first beam's direction there. At most one of CosTheta, SlopePerGeV2 and Law
// is given.
type Angle struct {
	// Product is the product's place in the channel, from 0.
	Product int
	// CosTheta is a density of cos theta on [-1, 1].
	CosTheta *Curve
	// Phi is a density of the azimuth on [-pi, pi], from the x axis.
	Phi *Curve
	// SlopePerGeV2 is b >= 0 in the density exp(b t') with
	// t' = t - t_forward = -2 p p' (1 - cos theta), t between the first beam and
	// the product.
	SlopePerGeV2 float64
	// Law is a distribution of quantum electrodynamics, for two products.
	Law AngularLaw
	// Asymmetry is S, -1 to 1, in the density of the azimuth
	//
	//	1 - P S cos(2 (phi - phi_plane))
	//
	// for the degree P of linear polarisation and its plane; 0 where Phi is given.
	Asymmetry float64
}

// Region is where interactions happen: uniform along z, Gaussian across.
type Region struct {
	// CentreXM, CentreYM, CentreZM is its middle in metres.
	CentreXM, CentreYM, CentreZM float64
	// LengthM is its length along z.
	LengthM float64
	// SigmaXM and SigmaYM are the standard deviations across.
	SigmaXM, SigmaYM float64
}

// Accidentals are beam particles that were tagged at the wrong time: a Poisson
// number with mean RateHz x WindowNS, uniform in time over the window, whose
// middle is the event, with the beam's own spectrum.
type Accidentals struct {
	RateHz   float64
	WindowNS float64
}

// mean is the expected number per event.
func (a Accidentals) mean() float64 { return a.RateHz * a.WindowNS * 1e-9 }

// Validate returns every fault of the configuration as a fault.List, or nil.
func (c *Config) Validate() error { return c.validate(func() bool { return false }) }

// validate gives up, with whatever it found, when stop returns true.
func (c *Config) validate(stop func() bool) error {
	var list fault.List
	if c.Initial == nil {
		list = append(list, fault.New(fault.Invalid, "initial", "", "an initial state"))
	} else {
		list = append(list, c.Initial.faults()...)
	}
	if len(c.Channels) == 0 || len(c.Channels) > math.MaxInt16 {
		list = append(list, fault.New(fault.Invalid, "channels.length", strconv.Itoa(len(c.Channels)), "1 to "+strconv.Itoa(math.MaxInt16)))
	}
	if c.Weighted && len(c.Channels) > 1 {
		list = append(list, fault.New(fault.Invalid, "weighted", "true", "false for a mixture, whose fractions count unweighted events"))
	}
	sum := 0.0
	for i := range c.Channels {
		if stop() {
			break
		}
		list = c.Channels[i].faults(list, "channels["+strconv.Itoa(i)+"]")
		sum += c.Channels[i].Fraction
	}
	if len(c.Channels) > 1 && !(sum > 0) {
		list = append(list, fault.Number("channels.fraction", sum, "a sum > 0"))
	}
	list = c.Polarisation.faults(list)
	r := c.Target
	for _, v := range []struct {
		name  string
		value float64
		sign  bool
	}{
		{"target.centre_x_m", r.CentreXM, true}, {"target.centre_y_m", r.CentreYM, true}, {"target.centre_z_m", r.CentreZM, true},
		{"target.length_m", r.LengthM, false}, {"target.sigma_x_m", r.SigmaXM, false}, {"target.sigma_y_m", r.SigmaYM, false},
		{"accidentals.rate_hz", c.Accidentals.RateHz, false}, {"accidentals.window_ns", c.Accidentals.WindowNS, false},
	} {
		if !(math.Abs(v.value) <= math.MaxFloat64) || !v.sign && v.value < 0 {
			list = append(list, fault.Number(v.name, v.value, "finite, >= 0 unless a coordinate"))
		}
	}
	if m := c.Accidentals.mean(); !(m <= maxAccidentals) {
		list = append(list, fault.Number("accidentals.rate_hz", c.Accidentals.RateHz, "at most "+strconv.Itoa(maxAccidentals)+" candidates in the window"))
	}
	for _, f := range list {
		f.Op = "generation.New"
	}
	return list.Err()
}

// maxAccidentals bounds the mean number of accidental candidates of an event,
// well inside random.MaxPoissonMean.
const maxAccidentals = min(100, random.MaxPoissonMean)

func (c *Channel) faults(list fault.List, field string) fault.List {
	if !(c.Fraction >= 0 && c.Fraction <= math.MaxFloat64) {
		list = append(list, fault.Number(field+".fraction", c.Fraction, ">= 0 and finite"))
	}
	if !(c.Bound >= 0 && c.Bound <= math.MaxFloat64) {
		list = append(list, fault.Number(field+".bound", c.Bound, ">= 0 and finite"))
	}
	list = productFaults(list, field+".products", c.Products, 0)
	if c.Energy.Kind >= energyKinds {
		list = append(list, fault.New(fault.Invalid, field+".energy.kind", strconv.Itoa(int(c.Energy.Kind)), "0 to "+strconv.Itoa(int(energyKinds)-1)))
	}
	if curve := c.Energy.Curve; curve != nil {
		list = curve.faults(list, field+".energy.curve", 0, math.MaxFloat64)
	}
	if given := c.Energy.Curve != nil; given != (c.Energy.Kind == CurveRate) {
		list = append(list, fault.New(fault.Invalid, field+".energy.curve", strconv.FormatBool(given), "given for CurveRate and only then"))
	}
	if a := c.Angle; a != nil {
		list = a.faults(list, field+".angle", len(c.Products))
	}
	if c.Energy.Kind == LawRate && (c.Angle == nil || c.Angle.Law == NoLaw) {
		list = append(list, fault.New(fault.Invalid, field+".energy.kind", "LawRate", "only with a law of the angle"))
	}
	return list
}

func (a *Angle) faults(list fault.List, field string, products int) fault.List {
	if a.Product < 0 || a.Product >= products {
		list = append(list, fault.New(fault.Invalid, field+".product", strconv.Itoa(a.Product), "0 to "+strconv.Itoa(products-1)))
	}
	if !(a.SlopePerGeV2 >= 0 && a.SlopePerGeV2 <= math.MaxFloat64) {
		list = append(list, fault.Number(field+".slope_per_gev2", a.SlopePerGeV2, ">= 0 and finite"))
	}
	if a.CosTheta != nil {
		list = a.CosTheta.faults(list, field+".cos_theta", -1, 1)
		if a.SlopePerGeV2 != 0 {
			list = append(list, fault.Number(field+".slope_per_gev2", a.SlopePerGeV2, "0 where cos_theta is given"))
		}
	}
	switch law := strconv.Itoa(int(a.Law)); {
	case a.Law >= angularLaws:
		list = append(list, fault.New(fault.Invalid, field+".law", law, "0 to "+strconv.Itoa(int(angularLaws)-1)))
	case a.Law != NoLaw && (a.CosTheta != nil || a.SlopePerGeV2 != 0):
		list = append(list, fault.New(fault.Invalid, field+".law", law, "0 where cos_theta or slope_per_gev2 is given"))
	case a.Law != NoLaw && products != 2:
		list = append(list, fault.New(fault.Invalid, field+".law", law, "0 for other than two products"))
	}
	switch {
	case !(math.Abs(a.Asymmetry) <= 1):
		list = append(list, fault.Number(field+".asymmetry", a.Asymmetry, "-1 to 1"))
	case a.Asymmetry != 0 && a.Phi != nil:
		list = append(list, fault.Number(field+".asymmetry", a.Asymmetry, "0 where phi is given"))
	}
	if a.Phi != nil {
		list = a.Phi.faults(list, field+".phi", -math.Pi, math.Pi)
	}
	return list
}
