package generation

import (
	"math"
	"testing"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/num/random"
	"example.org/kinegate/kinematics/photon"
)

const mElectron = 0.00051099895069

// cosineToBeam is the cosine between a product and the first beam in the centre
// of mass.
func cosineToBeam(t *testing.T, beam func(*event.Truth, int) momentum.Four, row int) func(truth *event.Truth, i, first int) float64 {
	t.Helper()
	return func(truth *event.Truth, i, first int) float64 {
		boost, err := momentum.NewBoost(truth.Initial[i].P, mass(truth.Initial[i]))
		if err != nil {
			t.Fatal(err)
		}
		return boost.ToRest(truth.Momentum[first+row]).P.Unit().Dot(boost.ToRest(beam(truth, i)).P.Unit())
	}
}

func TestPairCreationAngles(t *testing.T) {
	for _, e := range []float64{1.001 * mElectron, 2 * mElectron, 10 * mElectron} { // beyond, the peaks outgrow the grid
		c := Config{
			Seed:    41,
			Initial: CollidingBeams{First: Beam{Spectrum: Fixed{e}}, Second: Beam{Spectrum: Fixed{e}}, AngleRad: math.Pi},
			Channels: []Channel{{
				Products: []Product{{Number: 11, MassGeV: mElectron}, {Number: -11, MassGeV: mElectron}}, Angle: &Angle{Law: PairCreation},
			}},
		}
		pair, err := photon.PairEnergyFromPhotons(e, e, math.Pi, mElectron)
		if err != nil {
			t.Fatal(err)
		}
		beam := func(*event.Truth, int) momentum.Four { return momentum.Four{P: momentum.Three{Z: e}, E: e} }
		follows(t, sample(t, c, 20_000, cosineToBeam(t, beam, 0)), cumulated(-1, 1, func(x float64) float64 {
			return pair.Differential(photon.Lepton, x).Unpolarised
		}))
	}
}

func TestAnnihilationAngles(t *testing.T) {
	const e = 3 * mElectron
	beam := momentum.Four{P: momentum.Three{Z: math.Sqrt((e - mElectron) * (e + mElectron))}, E: e}
	c := Config{
		Seed:     42,
		Initial:  CollidingBeams{First: Beam{MassGeV: mElectron, Spectrum: Fixed{e}}, Second: Beam{MassGeV: mElectron, Spectrum: Fixed{e}}, AngleRad: math.Pi},
		Channels: []Channel{{Products: []Product{{Number: 22}, {Number: 22}}, Angle: &Angle{Law: Annihilation}}},
	}
	pair, err := photon.PairEnergyFromRatio(e * e / (mElectron * mElectron))
	if err != nil {
		t.Fatal(err)
	}
	follows(t, sample(t, c, 20_000, cosineToBeam(t, func(*event.Truth, int) momentum.Four { return beam }, 0)),
		cumulated(-1, 1, pair.AnnihilationDifferential))
}

// In the rest frame of the target, against Klein and Nishina.
func TestComptonAngles(t *testing.T) {
	for _, k := range []float64{0.01, 1, 50} {
		e := k * mElectron
		c := Config{
			Seed:    43,
			Initial: FixedTarget{Beam: Beam{Spectrum: Fixed{e}}, TargetMassGeV: mElectron},
			Channels: []Channel{{
				Products: []Product{{Number: 22}, {Number: 11, MassGeV: mElectron}}, Angle: &Angle{Law: ComptonScattering},
			}},
		}
		follows(t, sample(t, c, 20_000, func(truth *event.Truth, _, first int) float64 {
			p := truth.Momentum[first].P
			return p.Z / p.Norm()
		}), cumulated(-1, 1, func(x float64) float64 { return photon.KleinNishinaDifferential(k, x) }))
	}
}

func TestLaserBackscatter(t *testing.T) {
	l := LaserBackscatter{BeamGeV: 3, MassGeV: mElectron, LightGeV: 2.33e-9, AngleRad: math.Pi}
	if list := l.faults("x"); len(list) > 0 {
		t.Fatal(list)
	}
	b, err := l.backscatter()
	if err != nil {
		t.Fatal(err)
	}
	s := random.New(44, random.Generation, 0)
	draw := l.sampler()
	values := make([]float64, 30_000)
	for i := range values {
		values[i] = draw.draw(&s)
	}
	follows(t, values, func(e float64) float64 {
		f, err := b.Fraction(b.Lowest(), e)
		if err != nil {
			t.Fatal(err)
		}
		return f
	})
	l.HighGeV = 3
	if len(l.faults("x")) == 0 {
		t.Error("an end beyond the spectrum passes")
	}
	l.BeamGeV = 0
	if len(l.faults("x")) == 0 {
		t.Error("a beam without energy passes")
	}
}

// The energies of a wide photon beam follow the total cross-section, that of the
// handbook formulas in the package photon, and weighted events follow it too.
func TestLawRates(t *testing.T) {
	const light = 1e-3
	pair := Config{
		Seed: 45,
		Initial: CollidingBeams{
			First: Beam{Spectrum: Flat{LowGeV: 1e-4, HighGeV: 5e-3}}, Second: Beam{Spectrum: Fixed{light}}, AngleRad: math.Pi,
		},
		Channels: []Channel{{
			Products: []Product{{Number: 11, MassGeV: mElectron}, {Number: -11, MassGeV: mElectron}},
			Angle:    &Angle{Law: PairCreation}, Energy: EnergyShape{Kind: LawRate},
		}},
	}
	pairDensity := func(e float64) float64 {
		p, err := photon.PairEnergyFromPhotons(e, light, math.Pi, mElectron)
		if err != nil || !(p.Excess() > 0) {
			return 0
		}
		return p.Total(photon.Lepton).Unpolarised
	}
	compton := Config{
		Seed:    46,
		Initial: FixedTarget{Beam: Beam{Spectrum: Flat{LowGeV: 1e-5, HighGeV: 1e-2}}, TargetMassGeV: mElectron},
		Channels: []Channel{{
			Products: []Product{{Number: 22}, {Number: 11, MassGeV: mElectron}},
			Angle:    &Angle{Law: ComptonScattering}, Energy: EnergyShape{Kind: LawRate},
		}},
	}
	positron := Config{
		Seed:    47,
		Initial: FixedTarget{Beam: Beam{MassGeV: mElectron, Spectrum: Flat{LowGeV: 1e-3, HighGeV: 1e-2}}, TargetMassGeV: mElectron},
		Channels: []Channel{{
			Products: []Product{{Number: 22}, {Number: 22}}, Angle: &Angle{Law: Annihilation}, Energy: EnergyShape{Kind: LawRate},
		}},
	}
	for _, c := range []struct {
		name      string
		config    Config
		low, high float64
		density   func(e float64) float64
	}{
		{"pair creation", pair, 1e-4, 5e-3, pairDensity},
		{"Compton scattering", compton, 1e-5, 1e-2, func(e float64) float64 { return photon.KleinNishinaTotal(e / mElectron) }},
		{"annihilation", positron, 1e-3, 1e-2, func(e float64) float64 {
			p, err := photon.PairEnergyFromSqrtS(math.Sqrt(2*mElectron*(mElectron+e)), mElectron)
			if err != nil {
				t.Fatal(err)
			}
			return p.AnnihilationTotal()
		}},
	} {
		t.Run(c.name, func(t *testing.T) {
			cumulative := cumulated(c.low, c.high, c.density)
			follows(t, sample(t, c.config, 20_000, func(truth *event.Truth, i, _ int) float64 {
				return truth.BeamEnergyGeV[truth.BeamOffsets[i]]
			}), cumulative)
			c.config.Weighted = true
			truth, stats := fill(t, generator(t, c.config), 0, 40_000)
			half, sum, square := 0.0, 0.0, 0.0
			for i, w := range truth.Weight {
				sum += w
				square += w * w
				if cumulative(truth.BeamEnergyGeV[truth.BeamOffsets[i]]) < 0.5 {
					half += w
				}
			}
			if d := (half/sum - 0.5) / (0.5 * math.Sqrt(square) / sum); math.Abs(d) > 5 {
				t.Errorf("%v of the weight below the median, %.1f standard errors off; %+v", half/sum, d, stats)
			}
		})
	}
}
