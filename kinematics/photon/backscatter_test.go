package photon_test

import (
	"math"
	"testing"

	"gonum.org/v1/gonum/integrate/quad"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/photon"
)

// hall is an invented beam: 2.4 GeV electrons and light of 3.5 eV, head on.
func hall() photon.Backscatter {
	return must(photon.NewBackscatter(2.4, photon.ElectronMassGeV, 3.5e-9, math.Pi))
}

// setups spans soft and hard beams, angles, and light that outruns the beam.
func setups() map[string]photon.Backscatter {
	const m = photon.ElectronMassGeV
	return map[string]photon.Backscatter{
		"head on":            hall(),
		"ultraviolet, 1 TeV": must(photon.NewBackscatter(1000, m, 5e-9, math.Pi)),
		"sideways":           must(photon.NewBackscatter(2.4, m, 3.5e-9, math.Pi/2)),
		"oblique, slow":      must(photon.NewBackscatter(3*m, m, m/10, 2)),
		"hard photon":        must(photon.NewBackscatter(2*m, m, 7*m, 1.1)),
		"against slow beam":  must(photon.NewBackscatter(1.01*m, m, 2*m, math.Pi)),
		"at rest":            must(photon.NewBackscatter(m, m, 0.6*m, 1)),
		"infrared":           must(photon.NewBackscatter(0.01, m, 1e-14, math.Pi)),
	}
}

func TestBackscatterSpectrumIntegratesToTheTotal(t *testing.T) {
	for name, b := range setups() {
		t.Run(name, func(t *testing.T) {
			low, high := b.Lowest(), b.Highest()
			f := func(h float64) float64 {
				return must(b.DifferentialBarn(math.Min(high, low+h*(high-low))))
			}
			sum := (quad.Fixed(f, 0, 0.9, 200, quad.Legendre{}, 0) + quad.Fixed(f, 0.9, 1, 200, quad.Legendre{}, 0)) * (high - low)
			near(t, "total", sum, b.TotalBarn(), 1e-11)
			moment := func(h float64) float64 { return (low + h*(high-low)) * f(h) }
			mean := (quad.Fixed(moment, 0, 0.9, 200, quad.Legendre{}, 0) + quad.Fixed(moment, 0.9, 1, 200, quad.Legendre{}, 0)) * (high - low)
			near(t, "mean", mean/b.TotalBarn(), b.MeanEnergy(), 1e-11)
			near(t, "whole", must(b.Fraction(0, 2*high)), 1, 1e-14) // quadrature against the closed total
			near(t, "whole angle", must(b.FractionWithin(math.Pi)), 1, 1e-14)
			half := low + 0.3*(high-low)
			near(t, "halves", must(b.Fraction(low, half))+must(b.Fraction(half, high)), 1, 1e-13)
			part := quad.Fixed(f, 0.3, 0.9, 200, quad.Legendre{}, 0) * (high - low) / b.TotalBarn()
			near(t, "window", must(b.Fraction(half, low+0.9*(high-low))), part, 1e-11)
		})
	}
}

func TestBackscatterQuadratureAgainstTheClosedTotal(t *testing.T) {
	const m = photon.ElectronMassGeV
	compared := 0
	for _, energy := range []float64{m, 1.001 * m, 1.5 * m, 10 * m, 1e4 * m, 1e9 * m} {
		for _, light := range []float64{1e-12 * m, 1e-3 * m, m, 30 * m, 1e4 * m, 1e8 * m} {
			for _, angle := range []float64{0, 1e-3, 0.5, 1.5, 3, 3.1415, math.Pi} {
				b := must(photon.NewBackscatter(energy, m, light, angle))
				if b.Invariant() > 1e10 {
					continue
				}
				compared++
				near(t, "whole", must(b.Fraction(0, math.MaxFloat64)), 1, 1e-14)
			}
		}
	}
	if compared < 200 {
		t.Errorf("only %d set-ups compared", compared)
	}
}

func TestBackscatterSpectrumIsTheFlightCrossSection(t *testing.T) {
	// At any angle: the cross-section per steradian of the laboratory at a polar angle
	// to the total momentum, averaged over azimuth, times d cos/d energy.
	const m = photon.ElectronMassGeV
	const e, w, alpha = 3 * m, m / 10, 2.0
	b := must(photon.NewBackscatter(e, m, w, alpha))
	f := photon.Flight{EnergyGeV: e, MassGeV: m, PhotonEnergyGeV: w, AngleBetweenBeamsRad: alpha}
	p := math.Sqrt(e*e - m*m)
	tilt := math.Atan2(w*math.Sin(alpha), p+w*math.Cos(alpha)) // beam to total momentum
	total := math.Hypot(w*math.Sin(alpha), p+w*math.Cos(alpha))
	for _, theta := range []float64{0.1, 0.9, 2.5} {
		energy := must(b.EnergyAt(theta))
		average := quad.Fixed(func(phi float64) float64 {
			// The direction in the frame whose z axis is the beam and x axis the light's side.
			x, y, z := math.Sin(theta)*math.Cos(phi), math.Sin(theta)*math.Sin(phi), math.Cos(theta)
			bx, bz := x*math.Cos(tilt)+z*math.Sin(tilt), z*math.Cos(tilt)-x*math.Sin(tilt)
			point := must(f.Scatter(photon.Direction{ThetaRad: math.Acos(bz), PhiRad: math.Atan2(y, bx)}))
			near(t, "energy", point.PhotonEnergyGeV, energy, 1e-14)
			return point.DifferentialBarn
		}, 0, 2*math.Pi, 100, quad.Legendre{}, 0)
		// w' = p.k/(E - P cos): d cos/d w' = p.k/(P w'^2).
		pk := w * (e - p*math.Cos(alpha))
		near(t, "spectrum", must(b.DifferentialBarn(energy)), average*pk/(total*energy*energy), 1e-12)
	}
}

func TestBackscatterEnergyAndAngle(t *testing.T) {
	for name, b := range setups() {
		t.Run(name, func(t *testing.T) {
			near(t, "forward", must(b.EnergyAt(0)), b.Highest(), 4e-16)
			near(t, "backward", must(b.EnergyAt(math.Pi)), b.Lowest(), 4e-16)
			if must(b.AngleAt(b.Lowest())) < 3.14 || must(b.AngleAt(b.Highest())) > 1e-6 {
				t.Error("the ends of the spectrum are not backward and forward")
			}
			// The angle of a given energy is as uncertain as the last place of the energy
			// against its distance from the end.
			for _, share := range []float64{0.1, 0.5, 0.9} {
				energy := b.Lowest() + share*(b.Highest()-b.Lowest())
				near(t, "round trip", must(b.EnergyAt(must(b.AngleAt(energy)))), energy, 1e-14)
				above := must(b.Fraction(energy, b.Highest()))
				near(t, "collimated", must(b.FractionWithin(must(b.AngleAt(energy)))), above, 1e-13)
			}
		})
	}
}

func TestCollimationOfSoftBeam(t *testing.T) {
	// In the limit x -> 0 the cross-section is Thomson's, (3/8)(1 + c^2) dc in the rest
	// frame, and a cone of angle 1/gamma holds the forward half of it.
	gamma := 1e4
	b := must(photon.NewBackscatter(gamma*photon.ElectronMassGeV, photon.ElectronMassGeV, 1e-16, math.Pi))
	near(t, "half", must(b.FractionWithin(1/gamma)), 0.5, 1e-6)
	// Small cones grow like the solid angle: (3/8) 2 (2 gamma^2 theta^2) of it.
	near(t, "small", must(b.FractionWithin(1e-9)), 1.5*gamma*gamma*1e-18, 1e-6)
}

func TestPolarisedBackscatter(t *testing.T) {
	b := must(photon.NewBackscatter(250, photon.ElectronMassGeV, 1.17e-9, math.Pi))
	x := b.Invariant()
	at := func(h float64, p photon.LaserPolarisation) photon.PolarisedPoint {
		return must(b.Polarised(math.Min(b.Highest(), b.Lowest()+h*(b.Highest()-b.Lowest())), p))
	}
	for _, h := range []float64{0, 0.2, 0.7, 1} {
		plain := at(h, photon.LaserPolarisation{})
		energy := math.Min(b.Highest(), b.Lowest()+h*(b.Highest()-b.Lowest()))
		near(t, "unpolarised", plain.DifferentialBarn, must(b.DifferentialBarn(energy)), 4e-15)
		if plain.Circular != 0 || plain.Linear != 0 {
			t.Error("unpolarised beams made polarised photons")
		}
	}
	// The photon that passed unscattered keeps its helicity; the edge of a soft beam
	// turns it over and keeps the linear polarisation.
	near(t, "passed", at(0, photon.LaserPolarisation{Circular: 1}).Circular, 1, 1e-12)
	soft := must(photon.NewBackscatter(1, photon.ElectronMassGeV, 1e-14, math.Pi))
	near(t, "turned", must(soft.Polarised(soft.Highest(), photon.LaserPolarisation{Circular: 1})).Circular, -1, 1e-12)
	near(t, "kept", must(soft.Polarised(soft.Highest(), photon.LaserPolarisation{Linear: 0.8})).Linear, 0.8, 1e-8)
	// With beam and light fully polarised no point is more than fully polarised.
	for h := 0.0; h <= 1; h += 0.05 {
		for _, l := range []float64{-1, 1} {
			if c := at(h, photon.LaserPolarisation{Circular: 1, BeamHelicity: l}).Circular; math.Abs(c) > 1+1e-14 {
				t.Errorf("circular %g at h = %g", c, h)
			}
		}
	}
	// The polarised total of Ginzburg et al. 1983, from memory: sigma_1/sigma_0 =
	// (2/x)((1 + 2/x) ln(1 + x) - 5/2 + 1/(1 + x) - 1/(2 (1 + x)^2)), sigma_0 = pi r^2.
	polarised := func(h float64) float64 {
		p := photon.LaserPolarisation{Circular: 1, BeamHelicity: 1}
		return at(h, p).DifferentialBarn - at(h, photon.LaserPolarisation{}).DifferentialBarn
	}
	sum := (quad.Fixed(polarised, 0, 0.9, 100, quad.Legendre{}, 0) + quad.Fixed(polarised, 0.9, 1, 100, quad.Legendre{}, 0)) *
		(b.Highest() - b.Lowest()) / (math.Pi * photon.ClassicalRadiusSquared(photon.ElectronMassGeV))
	want := 2 / x * ((1+2/x)*math.Log1p(x) - 2.5 + 1/(1+x) - 1/(2*(1+x)*(1+x)))
	near(t, "polarised total", sum, want, 1e-11)
	// And the unpolarised one: (2/x)((1 - 4/x - 8/x^2) ln(1+x) + 1/2 + 8/x - 1/(2 (1+x)^2)).
	want = 2 / x * ((1-4/x-8/(x*x))*math.Log1p(x) + 0.5 + 8/x - 1/(2*(1+x)*(1+x)))
	near(t, "total", b.TotalBarn()/(math.Pi*photon.ClassicalRadiusSquared(photon.ElectronMassGeV)), want, 1e-14)
}

func TestPolarisedAgainstSlowBeam(t *testing.T) {
	// Light that outruns the beam: the largest energy is the photon that passed.
	m := photon.ElectronMassGeV
	b := must(photon.NewBackscatter(1.01*m, m, 2*m, math.Pi))
	near(t, "passed", b.Highest(), 2*m, 4e-16)
	near(t, "scattered back", b.Lowest(), photon.LaserEdge(1.01*m, m, 2*m), 1e-15)
	near(t, "helicity", must(b.Polarised(b.Highest(), photon.LaserPolarisation{Circular: 1})).Circular, 1, 1e-12)
}

func TestBackscatterFaults(t *testing.T) {
	m := photon.ElectronMassGeV
	_, err := photon.NewBackscatter(m/2, m, 1, math.Pi)
	refused(t, err, fault.Invalid, "energy_gev")
	_, err = photon.NewBackscatter(1, m, 0, math.Pi)
	refused(t, err, fault.Invalid, "photon_energy_gev")
	_, err = photon.NewBackscatter(1, m, 1, 3.2)
	refused(t, err, fault.Invalid, "angle_between_beams_rad")
	_, err = photon.NewBackscatter(5, 4, 3, math.Pi) // p = 3 exactly
	refused(t, err, fault.Invalid, "photon_energy_gev")
	_, err = photon.NewBackscatter(1e60, m, 1e10, math.Pi)
	refused(t, err, fault.Invalid, "beam_energy_gev")
	b := hall()
	_, err = b.DifferentialBarn(b.Highest() * 1.1)
	refused(t, err, fault.Outside, "photon_energy_gev")
	_, err = b.AngleAt(math.NaN())
	refused(t, err, fault.Outside, "photon_energy_gev")
	_, err = b.EnergyAt(-1)
	refused(t, err, fault.Invalid, "theta_rad")
	_, err = b.FractionWithin(4)
	refused(t, err, fault.Invalid, "theta_rad")
	_, err = b.Fraction(2, 1)
	refused(t, err, fault.Invalid, "low_gev")
	if got := must(b.Fraction(10, 20)) + must(b.Fraction(0, b.Lowest()/2)); got != 0 {
		t.Errorf("a window beyond the spectrum holds %g", got)
	}
	_, err = b.Polarised(b.Highest(), photon.LaserPolarisation{Circular: 0.8, Linear: 0.8})
	refused(t, err, fault.Invalid, "linear")
	_, err = b.Polarised(b.Highest(), photon.LaserPolarisation{BeamHelicity: 2})
	refused(t, err, fault.Invalid, "beam_helicity")
	side := must(photon.NewBackscatter(2.4, m, 3.5e-9, 1))
	_, err = side.Polarised(side.Highest(), photon.LaserPolarisation{})
	refused(t, err, fault.Unsupported, "angle_between_beams_rad")
	for i, got := range []float64{
		photon.LaserEdge(m/2, m, 1), photon.LaserEdge(1, 0, 1), photon.LaserEdge(1, m, math.Inf(1)),
	} {
		if !math.IsNaN(got) {
			t.Errorf("edge %d outside the domain is %v", i, got)
		}
	}
}
