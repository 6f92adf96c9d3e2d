package api

import (
	"example.org/kinegate/kinematics/detector"
	"example.org/kinegate/kinematics/event"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// detectorForm converts a detector to the core's form. The paths of the core's faults
// are those of the message.
func (f *former) detectorForm(path string, m *kinegatev1.Detector) detector.Config {
	f.name(join(path, "name"), m.GetName())
	var c detector.Config
	if d := m.GetCalorimeter(); d != nil {
		c.Calorimeter = calorimeterForm(d)
	}
	if d := m.GetTracker(); d != nil {
		c.Tracker = f.trackerForm(join(path, "tracker"), d)
	}
	if d := m.GetRecoil(); d != nil {
		c.Recoil = &detector.Recoil{
			Theta: polarForm(d.GetTheta()), MinMomentumGeV: d.GetMinMomentumGev(),
			AngleSigmaRad: d.GetAngleSigmaRad(), Efficiency: orOne(d.Efficiency),
		}
	}
	if d := m.GetNeutrals(); d != nil {
		c.Neutrals = &detector.Neutrals{
			Theta: polarForm(d.GetTheta()), MinMomentumGeV: d.GetMinMomentumGev(),
			AngleSigmaRad: d.GetAngleSigmaRad(), Efficiency: orOne(d.Efficiency),
		}
	}
	if d := m.GetTagger(); d != nil {
		c.Tagger = &detector.Tagger{EdgesGeV: d.GetEdgesGev(), SigmaGeV: d.GetSigmaGev(), TimeSigmaNS: d.GetTimeSigmaNs()}
	}
	if d := m.GetVertex(); d != nil {
		c.Vertex = &detector.Vertex{SigmaXM: d.GetSigmaXM(), SigmaYM: d.GetSigmaYM(), SigmaZM: d.GetSigmaZM()}
	}
	if d := m.GetDisplaced(); d != nil {
		c.Displaced = &detector.Displaced{
			MinDistanceM: d.GetMinDistanceM(), SigmaXM: d.GetSigmaXM(), SigmaYM: d.GetSigmaYM(), SigmaZM: d.GetSigmaZM(),
			Efficiency: orOne(d.Efficiency),
		}
	}
	return c
}

func calorimeterForm(d *kinegatev1.Calorimeter) *detector.Calorimeter {
	c := &detector.Calorimeter{
		Theta: polarForm(d.GetTheta()), RadiusM: d.GetRadiusM(), FromCentre: d.GetFromCentre(), SpreadZM: d.GetSpreadZM(),
		Stochastic: d.GetStochastic(), Constant: d.GetConstant(), NoiseGeV: d.GetNoiseGev(),
		ThetaSigmaRad: d.GetThetaSigmaRad(), PhiSigmaRad: d.GetPhiSigmaRad(), ThresholdGeV: d.GetThresholdGev(),
		Efficiency: orOne(d.Efficiency), MergeAngleRad: d.GetMergeAngleRad(),
	}
	if s := d.GetSplitOff(); s != nil {
		c.SplitOff = &detector.SplitOff{
			Probability: s.GetProbability(), MinShare: s.GetMinShare(), MaxShare: s.GetMaxShare(),
			MinAngleRad: s.GetMinAngleRad(), MaxAngleRad: s.GetMaxAngleRad(),
		}
	}
	if n := d.GetNoise(); n != nil {
		c.Noise = &detector.Noise{Probability: n.GetProbability(), MeanGeV: n.GetMeanGev()}
	}
	return c
}

func (f *former) trackerForm(path string, d *kinegatev1.Tracker) *detector.Tracker {
	t := &detector.Tracker{
		Theta: polarForm(d.GetTheta()), MinMomentumGeV: d.GetMinMomentumGev(), Constant: d.GetConstant(), PerGeV: d.GetPerGev(),
		AngleSigmaRad: d.GetAngleSigmaRad(), Efficiency: orOne(d.Efficiency), Identify: d.GetIdentify(),
	}
	for i, x := range d.GetConfusions() {
		here := index(path+".confusions", i)
		t.Confusions = append(t.Confusions, detector.Confusion{
			Species: f.species(here+".species", x.GetSpecies()), TakenFor: f.species(here+".taken_for", x.GetTakenFor()),
			Probability: x.GetProbability(),
		})
	}
	return t
}

// species is the bit of a species in the mask.
func (f *former) species(path string, s kinegatev1.Species) uint8 {
	bits := [...]uint8{
		kinegatev1.Species_SPECIES_ELECTRON: event.SpeciesElectron, kinegatev1.Species_SPECIES_MUON: event.SpeciesMuon,
		kinegatev1.Species_SPECIES_PION: event.SpeciesPion, kinegatev1.Species_SPECIES_KAON: event.SpeciesKaon,
		kinegatev1.Species_SPECIES_PROTON: event.SpeciesProton, kinegatev1.Species_SPECIES_DEUTERON: event.SpeciesDeuteron,
	}
	if s > 0 && int(s) < len(bits) {
		return bits[s]
	}
	f.need(path, s.String(), "a species of the contract")
	return event.SpeciesElectron // valid, so that the core does not report it again
}

func polarForm(r *kinegatev1.PolarRange) detector.Polar {
	return detector.Polar{MinRad: r.GetMinRad(), MaxRad: r.GetMaxRad()}
}

// orOne is a probability that is 1 where it is absent.
func orOne(x *float64) float64 {
	if x == nil {
		return 1
	}
	return *x
}
