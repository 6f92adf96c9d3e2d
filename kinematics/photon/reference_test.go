package photon_test

import (
	"math"
	"strings"
	"testing"

	"example.org/kinegate/kinematics/internal/reference"
	"example.org/kinegate/kinematics/photon"
)

func TestPrecisionBreitWheelerTotal(t *testing.T) {
	reference.Precision(t, "bw_total", func(in reference.Input) (reference.Output, string) {
		e := must(photon.PairEnergyFromRatio(in.Float("y")))
		return reference.Output{
			"sigma_over_pi_re2": e.Total(photon.Lepton).Unpolarised,
			"beta":              e.Velocity(),
		}, ""
	})
}

func TestPrecisionBreitWheelerDifferential(t *testing.T) {
	reference.Precision(t, "bw_differential", func(in reference.Input) (reference.Output, string) {
		e := must(photon.PairEnergyFromRatio(in.Float("y")))
		return reference.Output{
			"dsigma_dOmega_over_re2": e.Differential(photon.Lepton, in.Float("cos_theta")).Unpolarised,
		}, ""
	})
}

func TestPrecisionKleinNishinaTotal(t *testing.T) {
	reference.Precision(t, "kn_total", func(in reference.Input) (reference.Output, string) {
		return reference.Output{"sigma_over_sigmaT": photon.KleinNishinaTotal(in.Float("k"))}, ""
	})
}

func TestPrecisionKleinNishinaDifferential(t *testing.T) {
	reference.Precision(t, "kn_differential", func(in reference.Input) (reference.Output, string) {
		k, cosine := in.Float("k"), in.Float("cos_theta")
		return reference.Output{
			"kprime_over_k":          photon.ScatteredRatio(k, cosine),
			"dsigma_dOmega_over_re2": photon.KleinNishinaDifferential(k, cosine),
		}, ""
	})
}

func TestPrecisionAnnihilationTotal(t *testing.T) {
	reference.Precision(t, "annihilation_total", func(in reference.Input) (reference.Output, string) {
		e := must(photon.PairEnergyFromLorentzFactor(in.Float("gamma")))
		return reference.Output{"sigma_over_pi_re2": e.AnnihilationTotal()}, ""
	})
}

func TestPrecisionLaserEdge(t *testing.T) {
	reference.Precision(t, "laser_edge", func(in reference.Input) (reference.Output, string) {
		return reference.Output{
			"omega_max": photon.LaserEdge(in.Float("E_beam"), in.Float("m_beam"), in.Float("omega")),
		}, ""
	})
}

func TestPrecisionKleinNishinaMoments(t *testing.T) {
	reference.Precision(t, "kn_moments", func(in reference.Input) (reference.Output, string) {
		return reference.Output{
			"transfer_over_sigmaT": photon.KleinNishinaTransfer(in.Float("k")),
			"mean_scattered_share": photon.MeanScatteredShare(in.Float("k")),
		}, ""
	})
}

func TestPrecisionPairCreation(t *testing.T) {
	reference.Precision(t, "pair_creation", func(in reference.Input) (reference.Output, string) {
		spin := photon.Lepton
		if in.Text("kind") == "scalar" {
			spin = photon.Scalar
		}
		e := must(photon.PairEnergyFromExcess(in.Float("excess")))
		part, cos2 := e.TotalWithin(spin, in.Float("cos_max")), e.MeanCosineSquared(spin)
		return reference.Output{
			"zero": part.Zero, "two": part.Two, "unpolarised": part.Unpolarised,
			"cos2_zero": cos2.Zero, "cos2_two": cos2.Two, "cos2": cos2.Unpolarised,
		}, ""
	})
}

func TestPrecisionBackscatter(t *testing.T) {
	reference.Precision(t, "backscatter", func(in reference.Input) (reference.Output, string) {
		b := must(photon.NewBackscatter(in.Float("E_beam"), in.Float("m_beam"), in.Float("omega"), in.Float("angle")))
		energy := in.Float("energy")
		return reference.Output{
			"lowest": b.Lowest(), "highest": b.Highest(),
			"spectrum": must(b.DifferentialBarn(energy)) / photon.ClassicalRadiusSquared(in.Float("m_beam")),
			"fraction": must(b.Fraction(0, energy)),
		}, ""
	})
}

func TestPrecisionFieldBlackBody(t *testing.T) {
	reference.Precision(t, "field_black_body", func(in reference.Input) (reference.Output, string) {
		field := photon.BlackBody{TemperatureKelvin: in.Float("T")}
		return reference.Output{"per_metre": absorptionOverArea(field, in.Float("E"), in.Float("m"))}, ""
	})
}

func TestPrecisionFieldPowerLaw(t *testing.T) {
	reference.Precision(t, "field_power_law", func(in reference.Input) (reference.Output, string) {
		field := photon.PowerLaw{
			Index: in.Float("index"), MinGeV: in.Float("low"), MaxGeV: in.Float("high"), PerCubicMetre: 1,
		}
		return reference.Output{"per_metre": absorptionOverArea(field, in.Float("E"), in.Float("m"))}, ""
	})
}

// absorptionOverArea returns the absorption per metre over pi r^2 in square metre.
func absorptionOverArea(field photon.Field, energy, mass float64) float64 {
	area := math.Pi * photon.ClassicalRadiusSquared(mass) * photon.SquareMetrePerBarn
	return must(photon.Absorb(field, mass, []float64{energy}, 0))[0].PerMetre / area
}

func TestChecksKleinNishina(t *testing.T) {
	reference.Checks(t, "klein-nishina", func(c reference.Check) (any, bool) {
		if c.Unit == "r_e^2/sr" {
			return photon.KleinNishinaDifferential(c.Float("k"), c.Float("cos_theta")), true
		}
		sameThomson(t, c)
		compton := must(photon.NewCompton(c.Float("E_MeV")/1000, c.Float("m_e_MeV")/1000))
		return compton.TotalBarn(), true
	})
}

func TestChecksBreitWheeler(t *testing.T) {
	reference.Checks(t, "breit-wheeler", func(c reference.Check) (any, bool) {
		switch c.Unit {
		case "c":
			velocity, _ := photon.PairCreationPeak()
			return velocity, true
		case "1e-25 cm^2":
			sameThomson(t, c)
			_, peak := photon.PairCreationPeak()
			barn := math.Pi * photon.ClassicalRadiusSquared(photon.ElectronMassGeV) * peak
			return barn * 10, true // 1 barn = 1e-24 cm^2
		case "r_e^2/sr":
			e := must(photon.PairEnergyFromRatio(c.Float("y")))
			return e.Differential(photon.Lepton, c.Float("cos_theta")).Unpolarised, true
		}
		e := must(photon.PairEnergyFromRatio(c.Float("y")))
		return e.Total(photon.Lepton).Unpolarised, true
	})
}

func TestChecksAnnihilation(t *testing.T) {
	reference.Checks(t, "annihilation", func(c reference.Check) (any, bool) {
		if c.Unit == "pb" {
			sameThomson(t, c)
			return must(photon.AnnihilationMassless(c.Float("sqrt_s_GeV"), c.Float("cos_max"))) * 1e12, true
		}
		return must(photon.PairEnergyFromLorentzFactor(c.Float("gamma"))).AnnihilationTotal(), true
	})
}

func TestChecksCompton(t *testing.T) {
	reference.Checks(t, "compton", func(c reference.Check) (any, bool) {
		// keV in and out: the kinematics only knows ratios.
		compton := must(photon.NewCompton(c.Float("E_keV"), c.Float("m_e_keV")))
		switch {
		case strings.HasPrefix(c.Quantity, "Compton edge"):
			return compton.Edge(), true
		case strings.HasPrefix(c.Quantity, "backscatter peak"):
			return compton.Backscattered(), true
		}
		return must(compton.At(c.Float("angle_deg") / 180 * math.Pi)).PhotonEnergyGeV, true
	})
}

func TestChecksLaserBackscatter(t *testing.T) {
	reference.Checks(t, "laser-backscatter", func(c reference.Check) (any, bool) {
		mass := c.Float("m_e_MeV")
		if c.Unit == "1/(TeV eV)" {
			// x = 4 E w/m^2 at 1 TeV and 1 eV, where the terms beyond are 1e-13.
			b := must(photon.NewBackscatter(1000, mass/1000, 1e-9, math.Pi))
			return b.Invariant(), true
		}
		var laserEV float64
		if strings.Contains(c.Quantity, "ruby") {
			laserEV = c.Float("laser_photon_eV")
		} else {
			laserEV = c.Float("hc_eV_nm") / c.Float("wavelength_nm")
		}
		edge := photon.LaserEdge(c.Float("E_beam_MeV"), mass, laserEV/1e6)
		b := must(photon.NewBackscatter(c.Float("E_beam_MeV"), mass, laserEV/1e6, math.Pi))
		near(t, c.ID+" edge of the spectrum", b.Highest(), edge, 4e-15)
		if c.Unit == "GeV" {
			edge /= 1000
		}
		return edge, true
	})
}

func TestChecksMicrowaveBackground(t *testing.T) {
	reference.Checks(t, "cmb-mean-free-path", func(c reference.Check) (any, bool) {
		sameThomson(t, c)
		field := photon.BlackBody{TemperatureKelvin: c.Float("T_K")}
		mass := c.Float("m_e_MeV") / 1000
		if strings.HasPrefix(c.Quantity, "smallest") {
			near(t, "kiloparsec", photon.MetrePerKiloparsec, c.Float("kpc_m"), 1e-15)
			return must(field.SmallestMeanFreePath(mass)).MeanFreePathKiloparsec, true
		}
		absorptions := must(photon.Absorb(field, mass, []float64{c.Float("E_eV") / 1e9}, 0))
		return absorptions[0].MeanFreePathKiloparsec, true
	})
}

func TestChecksPairProductionField(t *testing.T) {
	reference.Checks(t, "pair-production-field", func(c reference.Check) (any, bool) {
		name := "m_e_MeV"
		if strings.Contains(c.Quantity, "mu+ mu-") {
			name = "m_pair_MeV"
		}
		return must(photon.FieldPairThreshold(c.Float(name)/1000, c.Float("m_target_MeV")/1000)) * 1000, true
	})
}

// sameThomson holds the constant of the package against the one a check was made with.
func sameThomson(t *testing.T, c reference.Check) {
	t.Helper()
	near(t, c.ID+" Thomson cross-section", photon.ThomsonBarn, c.Float("sigma_T_barn"), 0)
}
