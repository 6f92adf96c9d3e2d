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
