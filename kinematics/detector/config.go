// Package detector turns simulated events into measured ones: acceptance,
// thresholds, efficiencies, resolutions, merged and split clusters, noise, wrong
// species and tagged beam candidates, with covariances that go with the smearing.
//
// Objects are written as momentum and angles. A deviation is drawn with the
// standard deviation at the true value; the covariance that the event carries is
// the same formula at the measured value, as in an experiment, which knows no
// other. So pulls are standard normal up to the change of the resolution within
// itself.
//
// Everything drawn for an event comes from the stream of that event alone.
// Units: GeV (c = 1), radian, metre; tagger times in nanoseconds.
package detector

// Config describes a detector. A part that is nil is not there.
type Config struct {
	// Seed of the random streams.
	Seed uint64
	// Calorimeter measures photons.
	Calorimeter *Calorimeter
	// Tracker measures charged particles.
	Tracker *Tracker
	// Recoil finds the direction of protons in events without another charged
	// particle; such protons are then not tracked.
	Recoil *Recoil
	// Neutrals finds the direction of neutrons and K_L.
	Neutrals *Neutrals
	// Tagger measures the beam candidates.
	Tagger *Tagger
	// Vertex measures the interaction point.
	Vertex *Vertex
	// Displaced finds the points where particles decayed in flight.
	Displaced *Displaced
}

// Polar is a range of the polar angle, 0 < Min < Max < pi.
type Polar struct {
	MinRad, MaxRad float64
}

// holds reports whether the range holds an angle.
func (p Polar) holds(theta float64) bool { return theta >= p.MinRad && theta < p.MaxRad }

// Calorimeter measures photons as clusters.
type Calorimeter struct {
	// Theta is the acceptance, of true directions.
	Theta Polar
	// RadiusM is the distance of its face from the centre; 0 means that clusters
	// carry no position. A photon born outside is not seen.
	RadiusM float64
	// FromCentre says that a cluster's direction is the one seen from the centre,
	// as it is where no vertex is known, and not from the photon's own origin.
	FromCentre bool
	// SpreadZM is the standard deviation of the vertex along z that the
	// covariance allows for with FromCentre: it adds (SpreadZM sin(theta)/RadiusM)^2
	// to the variance of theta.
	SpreadZM float64
	// Stochastic, Constant and NoiseGeV are a, b and c of the energy resolution
	// sigma^2 = a^2 E + b^2 E^2 + c^2, with a in sqrt(GeV).
	Stochastic, Constant, NoiseGeV float64
	// ThetaSigmaRad is the resolution in theta, PhiSigmaRad the one in phi times
	// sin(theta).
	ThetaSigmaRad, PhiSigmaRad float64
	// ThresholdGeV is the lowest measured energy of a cluster.
	ThresholdGeV float64
	// Efficiency of finding a cluster above threshold.
	Efficiency float64
	// MergeAngleRad is the angle below which two photons make one cluster, with
	// the sum of their energies and the mean direction, weighted by energy.
	MergeAngleRad float64
	// SplitOff is what breaks off a cluster; nil means nothing does.
	SplitOff *SplitOff
	// Noise is clusters without a photon; nil means none.
	Noise *Noise
}

// SplitOff is a cluster that breaks off another one and takes a share of its
// energy, uniform between the limits, to an angle from it, uniform likewise.
type SplitOff struct {
	Probability              float64
	MinShare, MaxShare       float64
	MinAngleRad, MaxAngleRad float64
}

// Noise is at most one cluster per event without a photon: isotropic inside the
// acceptance, its energy exponential above the threshold.
type Noise struct {
	Probability float64
	MeanGeV     float64
}

// Tracker measures charged particles.
type Tracker struct {
	// Theta is the acceptance, of true directions.
	Theta Polar
	// MinMomentumGeV is the lowest true momentum of a track.
	MinMomentumGeV float64
	// Constant and PerGeV are a and b of the momentum resolution
	// (sigma_p/p)^2 = a^2 + (b p)^2, with b in 1/GeV.
	Constant, PerGeV float64
	// AngleSigmaRad is the resolution in theta and in phi times sin(theta).
	AngleSigmaRad float64
	// Efficiency of finding a track.
	Efficiency float64
	// Identify says that tracks carry a species mask.
	Identify bool
	// Confusions are the ways in which the mask can be wrong.
	Confusions []Confusion
}

// Confusion is a species taken for another, with a probability. The species are
// single bits of the species mask.
type Confusion struct {
	Species, TakenFor uint8
	Probability       float64
}

// Recoil finds the direction, and nothing else, of protons in events that hold
// no other charged particle.
type Recoil struct {
	Theta Polar
	// MinMomentumGeV is the lowest true momentum.
	MinMomentumGeV float64
	AngleSigmaRad  float64
	Efficiency     float64
}

// Neutrals finds the direction of neutrons and K_L.
type Neutrals struct {
	Theta          Polar
	MinMomentumGeV float64
	AngleSigmaRad  float64
	Efficiency     float64
}

// Tagger measures the energy and the time of beam candidates.
type Tagger struct {
	// EdgesGeV are the channel edges: a candidate gets the middle of its channel
	// and its width over sqrt(12), the spread of a uniform distribution; outside
	// the edges it is not tagged. Nil means no channels.
	EdgesGeV []float64
	// SigmaGeV is the resolution without channels.
	SigmaGeV float64
	// TimeSigmaNS is the time resolution.
	TimeSigmaNS float64
}

// Vertex measures the interaction point.
type Vertex struct {
	SigmaXM, SigmaYM, SigmaZM float64
}

// Displaced finds the point of a decay in flight that at least two measured
// tracks come from. The tracks then carry its vertex group; all other objects
// belong to the event's vertex.
type Displaced struct {
	// MinDistanceM is the lowest true distance from the interaction point.
	MinDistanceM float64
	// SigmaXM, SigmaYM and SigmaZM are the resolutions.
	SigmaXM, SigmaYM, SigmaZM float64
	// Efficiency of finding such a point.
	Efficiency float64
}
