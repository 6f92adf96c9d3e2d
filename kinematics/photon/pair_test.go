package photon_test

import (
	"math"
	"testing"

	"gonum.org/v1/gonum/integrate/quad"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/num"
	"example.org/kinegate/kinematics/photon"
)

// excesses spans the threshold region and high energies.
func excesses() []float64 {
	return []float64{1e-200, 1e-30, 1e-12, 1e-6, 0.01, 0.0666, 0.0667, 0.5, 1, 10, 1e3, 1e6, 1e12, 1e19}
}

func TestPairTotalIsTheIntegralOfTheDifferential(t *testing.T) {
	for _, spin := range []photon.PairSpin{photon.Lepton, photon.Scalar} {
		for _, excess := range []float64{1e-12, 0.03, 0.2, 1, 10, 100} {
			e := must(photon.PairEnergyFromExcess(excess))
			for _, limit := range []float64{0.1, 0.7, 1} {
				// In units of r^2 against pi r^2, over azimuth and both signs of cos: a
				// factor 2 pi 2/pi. 200 points resolve a width of 1/100 to 1e-12.
				integral := func(pick func(photon.ByHelicity) float64) float64 {
					f := func(c float64) float64 { return pick(e.Differential(spin, c)) }
					return 4 * quad.Fixed(f, 0, limit, 200, quad.Legendre{}, 0)
				}
				got := e.TotalWithin(spin, limit)
				near(t, spin.String()+" zero", got.Zero, integral(func(h photon.ByHelicity) float64 { return h.Zero }), 1e-12)
				near(t, spin.String()+" two", got.Two, integral(func(h photon.ByHelicity) float64 { return h.Two }), 1e-12)
			}
		}
	}
}

func TestPairSeriesJoinsClosedForm(t *testing.T) {
	// beta^2 = 1/16 at v = 1/15: the two ways of summing meet there. Over one step of
	// a relative 1e-9 each function moves by its slope only.
	below, above := must(photon.PairEnergyFromExcess((1-1e-9)/15)), must(photon.PairEnergyFromExcess((1+1e-9)/15))
	far := must(photon.PairEnergyFromExcess((1 + 3e-9) / 15))
	for _, spin := range []photon.PairSpin{photon.Lepton, photon.Scalar} {
		at := func(e photon.PairEnergy) []float64 {
			total, part, cos2 := e.Total(spin), e.TotalWithin(spin, 0.6), e.MeanCosineSquared(spin)
			return []float64{total.Zero, total.Two, part.Zero, part.Two, cos2.Zero, cos2.Two}
		}
		b, a, f := at(below), at(above), at(far)
		for i := range a {
			if jump := (a[i] - b[i]) - (f[i] - a[i]); math.Abs(jump) > 4e-15*math.Abs(a[i]) {
				t.Errorf("%v quantity %d jumps by %.3g of %g", spin, i, jump, a[i])
			}
		}
	}
}

func TestPairCreationNearThreshold(t *testing.T) {
	// Leading orders in beta, by expansion of the amplitudes: zero 2 beta and beta for
	// leptons and scalars, two (8/3) beta^3 and (8/15) beta^5.
	for _, excess := range []float64{1e-12, 1e-20, 1e-40} {
		e := must(photon.PairEnergyFromExcess(excess))
		beta := math.Sqrt(excess)
		near(t, "beta", e.Velocity(), beta, 1e-12)
		near(t, "lepton zero", e.Total(photon.Lepton).Zero, 2*beta, 1e-11)
		near(t, "lepton two", e.Total(photon.Lepton).Two, 8./3*excess*beta, 1e-11)
		near(t, "scalar zero", e.Total(photon.Scalar).Zero, beta, 1e-11)
		near(t, "scalar two", e.Total(photon.Scalar).Two, 8./15*excess*excess*beta, 1e-11)
		for i, want := range []float64{1. / 3, 1. / 5, 1. / 3, 1. / 7} {
			spin := photon.PairSpin(1 + i/2)
			cos2 := e.MeanCosineSquared(spin)
			near(t, "cos^2 "+spin.String(), []float64{cos2.Zero, cos2.Two}[i%2], want, 1e-11)
		}
	}
}

func TestPairCreationAtHighEnergy(t *testing.T) {
	// sigma/(pi r^2) -> (ln(4 y) - 1)/y for leptons and 1/(2 y) for scalars, from the
	// closed forms for y -> infinity.
	for _, excess := range []float64{1e12, 1e15, 1e19} {
		e := must(photon.PairEnergyFromExcess(excess))
		near(t, "lepton", e.Total(photon.Lepton).Unpolarised, (math.Log(4*excess)-1)/excess, 1e-10)
		near(t, "scalar", e.Total(photon.Scalar).Unpolarised, 1/(2*excess), 1e-10)
	}
}

func TestPairEnergyConstructorsAgree(t *testing.T) {
	for _, v := range excesses() {
		a := must(photon.PairEnergyFromExcess(v))
		b := must(photon.PairEnergyFromKinetic(2*v*0.25, 0.25))
		near(t, "kinetic", b.Total(photon.Lepton).Unpolarised, a.Total(photon.Lepton).Unpolarised, 2e-15)
		near(t, "excess", b.Excess(), v, 0)
	}
	// Two photons of 1 and 0.3 GeV at 60 degrees against muons: s = 4 w1 w2 sin^2(30 deg).
	m := 0.1056583755
	e := must(photon.PairEnergyFromPhotons(1, 0.3, math.Pi/3, m))
	near(t, "photons", e.Ratio(), 0.3*0.25/(m*m), 1e-15)
	e = must(photon.PairEnergyFromPhotons(1+0x1p-40, 1, math.Pi, 1))
	near(t, "excess of photons", e.Excess(), 0x1p-40, 0)
	near(t, "gamma", must(photon.PairEnergyFromLorentzFactor(1+0x1p-50)).Excess(), 0x1p-51, 0)
	near(t, "ratio", must(photon.PairEnergyFromRatio(1+0x1p-52)).Excess(), 0x1p-52, 0)
}

func TestPairBelowAndAtThreshold(t *testing.T) {
	for _, c := range []struct {
		name   string
		energy photon.PairEnergy
		side   num.Side
	}{
		{"below", must(photon.PairEnergyFromRatio(0.9)), num.Below},
		{"one unit below", must(photon.PairEnergyFromRatio(1 - 0x1p-53)), num.Below},
		{"collinear", must(photon.PairEnergyFromPhotons(5, 3, 0, 1)), num.Below},
		{"at", must(photon.PairEnergyFromRatio(1)), num.At},
		{"at head on", must(photon.PairEnergyFromPhotons(4, 0.25, math.Pi, 1)), num.At},
	} {
		t.Run(c.name, func(t *testing.T) {
			e := c.energy
			if e.Side() != c.side {
				t.Errorf("side %v, want %v", e.Side(), c.side)
			}
			zero := photon.ByHelicity{}
			if e.Velocity() != 0 || e.Total(photon.Lepton) != zero || e.Differential(photon.Scalar, 0.5) != zero {
				t.Error("a closed pair has a cross-section or a velocity")
			}
			if !math.IsNaN(e.MeanCosineSquared(photon.Lepton).Zero) {
				t.Error("a closed pair has a mean angle")
			}
			values := []float64{e.AnnihilationTotal(), e.AnnihilationWithin(0.5), e.AnnihilationDifferential(0.5)}
			for i, got := range values {
				if c.side == num.At && !math.IsInf(got, 1) || c.side == num.Below && !math.IsNaN(got) {
					t.Errorf("annihilation %d: got %v", i, got)
				}
			}
		})
	}
}

func TestPairFaults(t *testing.T) {
	nan, inf := math.NaN(), math.Inf(1)
	_, err := photon.PairEnergyFromRatio(-1)
	refused(t, err, fault.Invalid, "ratio")
	_, err = photon.PairEnergyFromRatio(nan)
	refused(t, err, fault.Invalid, "ratio")
	_, err = photon.PairEnergyFromExcess(-1.5)
	refused(t, err, fault.Invalid, "excess")
	_, err = photon.PairEnergyFromPhotons(0, 1, 1, 1)
	refused(t, err, fault.Invalid, "first_photon_energy_gev")
	_, err = photon.PairEnergyFromPhotons(1, inf, 1, 1)
	refused(t, err, fault.Invalid, "second_photon_energy_gev")
	_, err = photon.PairEnergyFromPhotons(1, 1, 4, 1)
	refused(t, err, fault.Invalid, "angle_between_beams_rad")
	_, err = photon.PairEnergyFromPhotons(1, 1, 1, 0)
	refused(t, err, fault.Invalid, "mass_gev")
	_, err = photon.PairEnergyFromPhotons(1e100, 1e100, 1, 1)
	refused(t, err, fault.Invalid, "ratio")
	_, err = photon.PairEnergyFromLorentzFactor(0.5)
	refused(t, err, fault.Invalid, "gamma")
	_, err = photon.PairEnergyFromKinetic(-1, 1)
	refused(t, err, fault.Invalid, "kinetic_energy_gev")
	_, err = photon.FieldPairThreshold(1, -1)
	refused(t, err, fault.Invalid, "target_mass_gev")
	_, err = photon.AnnihilationMassless(1, 1)
	refused(t, err, fault.Invalid, "cos_max")
	e := must(photon.PairEnergyFromRatio(2))
	for i, got := range []float64{
		e.Differential(photon.Lepton, 1.5).Zero, e.Total(0).Zero, e.TotalWithin(photon.Lepton, -1).Two,
		e.Differential(9, 0).Two, e.MeanCosineSquared(0).Zero, e.AnnihilationWithin(2), e.AnnihilationDifferential(nan),
		photon.ClassicalRadiusSquared(0),
	} {
		if !math.IsNaN(got) {
			t.Errorf("value %d outside the domain is %v", i, got)
		}
	}
}

func TestDetailedBalance(t *testing.T) {
	// Pair creation and annihilation have four spin states each, momenta squared in
	// the ratio beta^2, and the two photons are alike. Dirac's total and Breit and
	// Wheeler's are computed from different formulas.
	for _, excess := range excesses() {
		e := must(photon.PairEnergyFromExcess(excess))
		beta := e.Velocity()
		near(t, "total", e.AnnihilationTotal(), e.Total(photon.Lepton).Unpolarised/(2*beta*beta), 2e-15)
		near(t, "within", e.AnnihilationWithin(1), e.AnnihilationTotal(), 2e-15)
		near(t, "cut", e.AnnihilationWithin(0.8), e.TotalWithin(photon.Lepton, 0.8).Unpolarised/(2*beta*beta), 2e-15)
		near(t, "differential", e.AnnihilationDifferential(0.3),
			e.Differential(photon.Lepton, 0.3).Unpolarised/(beta*beta), 2e-15)
	}
}

func TestAnnihilationMassIsNegligibleAtColliders(t *testing.T) {
	// The two forms differ by order m^2/s: 2e-9 at 10.58 GeV.
	const sqrtS, cut = 10.58, 0.9
	m := photon.ElectronMassGeV
	e := must(photon.PairEnergyFromRatio(sqrtS * sqrtS / (4 * m * m)))
	exact := math.Pi * photon.ClassicalRadiusSquared(m) * e.AnnihilationWithin(cut)
	near(t, "mass kept", exact, must(photon.AnnihilationMassless(sqrtS, cut)), 2e-7)
	if exact == must(photon.AnnihilationMassless(sqrtS, cut)) {
		t.Error("the mass makes no difference at all")
	}
}

func TestSlowPositronsAnnihilateAtTheDiracRate(t *testing.T) {
	// v sigma -> pi r^2 for slow positrons: Dirac 1930, from memory. The velocity in
	// the laboratory is twice that in the centre of mass.
	e := must(photon.PairEnergyFromKinetic(1e-20*photon.ElectronMassGeV, photon.ElectronMassGeV))
	near(t, "rate", 2*e.Velocity()*e.AnnihilationTotal(), 1, 1e-15)
}

func TestPairThresholds(t *testing.T) {
	m := photon.ElectronMassGeV
	near(t, "electron", must(photon.FieldPairThreshold(m, m)), 4*m, 0)
	near(t, "heavy", must(photon.FieldPairThreshold(m, 1e30)), 2*m, 0)
}

func TestPairEnergyFromSqrtS(t *testing.T) {
	const m = 0.25
	for _, v := range excesses() {
		if v > 1e90 {
			continue
		}
		sqrtS := 2 * m * math.Sqrt(1+v)
		e := must(photon.PairEnergyFromSqrtS(sqrtS, m))
		// Of exactly this double: (sqrt(s) - 2m)(sqrt(s) + 2m) has no loss, as m is a power of 2.
		near(t, "excess", e.Excess(), (sqrtS-2*m)*(sqrtS+2*m)/(4*m*m), 3e-16)
	}
	if at := must(photon.PairEnergyFromSqrtS(2*0.1056583755, 0.1056583755)); at.Side() != num.At {
		t.Errorf("twice the mass is %v the threshold", at.Side())
	}
	for _, bad := range []float64{-1, math.NaN(), math.Inf(1), 1e99} {
		_, err := photon.PairEnergyFromSqrtS(bad, m)
		refused(t, err, fault.Invalid, "sqrt_s_gev")
	}
}
