package photon_test

import (
	"math"
	"testing"

	"gonum.org/v1/gonum/integrate/quad"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/photon"
)

func TestThomsonLimit(t *testing.T) {
	near(t, "total", photon.KleinNishinaTotal(0), 1, 0)
	near(t, "transfer", photon.KleinNishinaTransfer(1e-200), 1e-200, 0)
	near(t, "share", photon.MeanScatteredShare(0), 1, 0)
	c := must(photon.NewCompton(0, photon.ElectronMassGeV))
	near(t, "barn", c.TotalBarn(), photon.ThomsonBarn, 0)
	near(t, "radius", photon.ClassicalRadiusSquared(photon.ElectronMassGeV)*8*math.Pi/3, photon.ThomsonBarn, 4e-16)
	// CODATA 2022: r_e = 2.8179403205(13)e-15 m, so r_e^2 in barn.
	near(t, "CODATA", math.Sqrt(photon.ClassicalRadiusSquared(photon.ElectronMassGeV)*1e-28), 2.8179403205e-15, 5e-10)
	// (1 + cos^2)/2 at every angle.
	near(t, "differential", photon.KleinNishinaDifferential(0, 0.5), 0.625, 0)
}

func TestComptonTotalsAreIntegrals(t *testing.T) {
	for _, k := range []float64{1e-6, 0x1p-9 * 0.999, 0x1p-9, 0.3, 2.5, 20} {
		integral := func(power func(share float64) float64) float64 {
			// 0.75 turns r^2 du into units of the Thomson cross-section 8 pi r^2/3.
			f := func(c float64) float64 {
				return power(photon.ScatteredRatio(k, c)) * photon.KleinNishinaDifferential(k, c)
			}
			return 0.75 * quad.Fixed(f, -1, 1, 200, quad.Legendre{}, 0)
		}
		total := integral(func(float64) float64 { return 1 })
		near(t, "total", photon.KleinNishinaTotal(k), total, 1e-13)
		near(t, "share", photon.MeanScatteredShare(k), integral(func(p float64) float64 { return p })/total, 1e-13)
		// 1 - P loses digits for small k, by 1/k.
		near(t, "transfer", photon.KleinNishinaTransfer(k), integral(func(p float64) float64 { return 1 - p }), 1e-13+1e-15/k)
	}
}

func TestComptonExtremes(t *testing.T) {
	// sigma/sigma_T -> (3/8)(ln(2 k) + 1/2)/k.
	near(t, "hard", photon.KleinNishinaTotal(1e20), 3./8*(math.Log(2e20)+0.5)/1e20, 1e-15)
	near(t, "hardest", photon.KleinNishinaTotal(1e100), 3./8*(math.Log(2e100)+0.5)/1e100, 1e-15)
	for i, got := range []float64{
		photon.KleinNishinaTotal(-1), photon.KleinNishinaTransfer(math.NaN()), photon.MeanScatteredShare(1e101),
		photon.ScatteredRatio(1, 1.1), photon.KleinNishinaDifferential(-1, 0),
	} {
		if !math.IsNaN(got) {
			t.Errorf("value %d outside the domain is %v", i, got)
		}
	}
}

func TestComptonConservesEnergyAndMomentum(t *testing.T) {
	for _, k := range []float64{1e-9, 0.01, 1, 300} {
		c := must(photon.NewCompton(k, 1))
		for _, theta := range []float64{0, 1e-7, 0.3, 1.5, 3, math.Pi} {
			p := must(c.At(theta))
			near(t, "energy", p.PhotonEnergyGeV+p.RecoilKineticGeV, k, 4e-16)
			recoil := math.Sqrt(p.RecoilKineticGeV * (p.RecoilKineticGeV + 2))
			balance := p.PhotonEnergyGeV*math.Sin(theta) - recoil*math.Sin(p.RecoilAngleRad)
			if math.Abs(balance) > 1e-15*k {
				t.Errorf("k %g theta %g: transverse momentum %g", k, theta, balance)
			}
			near(t, "forward", p.PhotonEnergyGeV*math.Cos(theta)+recoil*math.Cos(p.RecoilAngleRad), k, 1e-15)
		}
		back := must(c.At(math.Pi))
		near(t, "backscattered", back.PhotonEnergyGeV, c.Backscattered(), 3e-16)
		near(t, "edge", back.RecoilKineticGeV, c.Edge(), 3e-16)
		near(t, "means", c.MeanScattered()+c.MeanRecoil(), k, 1e-15)
		near(t, "transfer", c.TransferBarn()*k, c.TotalBarn()*c.MeanRecoil(), 1e-15)
	}
}

func TestFlightAtRestIsCompton(t *testing.T) {
	c := must(photon.NewCompton(0.7, 0.5))
	for _, angle := range []float64{0, 1, math.Pi} {
		f := photon.Flight{EnergyGeV: 0.5, MassGeV: 0.5, PhotonEnergyGeV: 0.7, AngleBetweenBeamsRad: angle}
		got := must(f.Scatter(photon.Direction{ThetaRad: 2.1, PhiRad: 0.4}))
		cosine := math.Cos(angle)*math.Cos(2.1) + math.Sin(angle)*math.Sin(2.1)*math.Cos(0.4)
		want := must(c.At(math.Acos(cosine)))
		near(t, "energy", got.PhotonEnergyGeV, want.PhotonEnergyGeV, 2e-15)
		near(t, "cosine", got.RestCosTheta, cosine, 3e-15)
		near(t, "cross-section", got.DifferentialBarn, want.DifferentialBarn, 4e-15)
		near(t, "total", must(f.TotalBarn()), c.TotalBarn(), 2e-15)
	}
}

func TestFlightConservesMomentumAndIntegrates(t *testing.T) {
	f := photon.Flight{EnergyGeV: 2, MassGeV: 0.5, PhotonEnergyGeV: 0.3, AngleBetweenBeamsRad: 2.2}
	p := math.Sqrt(4 - 0.25)
	sum := quad.Fixed(func(theta float64) float64 {
		return quad.Fixed(func(phi float64) float64 {
			point := must(f.Scatter(photon.Direction{ThetaRad: theta, PhiRad: phi}))
			// The recoil is on its mass shell.
			w := point.PhotonEnergyGeV
			x := 0.3*math.Sin(2.2) - w*math.Sin(theta)*math.Cos(phi)
			y := -w * math.Sin(theta) * math.Sin(phi)
			z := p + 0.3*math.Cos(2.2) - w*math.Cos(theta)
			e := 2 + 0.3 - w
			if off := e*e - x*x - y*y - z*z - 0.25; math.Abs(off) > 1e-14 {
				t.Fatalf("recoil off its mass shell by %g", off)
			}
			return math.Sin(theta) * point.DifferentialBarn
		}, 0, 2*math.Pi, 60, quad.Legendre{}, 0)
	}, 0, math.Pi, 80, quad.Legendre{}, 0)
	near(t, "integral", sum, must(f.TotalBarn()), 1e-10)
}

func TestComptonFaults(t *testing.T) {
	_, err := photon.NewCompton(-1, 1)
	refused(t, err, fault.Invalid, "photon_energy_gev")
	_, err = photon.NewCompton(1, 0)
	refused(t, err, fault.Invalid, "mass_gev")
	_, err = photon.NewCompton(1e101, 1)
	refused(t, err, fault.Invalid, "photon_energy_gev")
	_, err = must(photon.NewCompton(1, 1)).At(4)
	refused(t, err, fault.Invalid, "theta_rad")
	_, err = photon.Flight{EnergyGeV: 0.5, MassGeV: 1, PhotonEnergyGeV: 1}.TotalBarn()
	refused(t, err, fault.Invalid, "energy_gev")
	f := photon.Flight{EnergyGeV: 2, MassGeV: 1, PhotonEnergyGeV: 1, AngleBetweenBeamsRad: math.Pi}
	_, err = f.Scatter(photon.Direction{ThetaRad: -1})
	refused(t, err, fault.Invalid, "theta_rad")
	_, err = f.Scatter(photon.Direction{PhiRad: math.Inf(1)})
	refused(t, err, fault.Invalid, "phi_rad")
}
