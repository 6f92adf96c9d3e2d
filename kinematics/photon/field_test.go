package photon_test

import (
	"math"
	"testing"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/photon"
)

const electron = photon.ElectronMassGeV

func microwave() photon.BlackBody {
	return photon.BlackBody{TemperatureKelvin: photon.MicrowaveBackgroundKelvin}
}

func TestAbsorptionInTheOriginalOrderOfIntegration(t *testing.T) {
	// Over the field's energy outside and s inside, with mpmath 1.4.1 at 25 digits and
	// its tanh-sinh rule; kappa/(pi r_e^2) in 1/m^3 units (per metre over square metre).
	for _, c := range []struct {
		name   string
		field  photon.Field
		energy float64
		want   float64
	}{
		{"microwave background", microwave(), 1e6, 145205704.758360008},
		{"furnace", photon.BlackBody{TemperatureKelvin: 2000}, 1e3, 43830651895826884.7},
		{"falling", photon.PowerLaw{Index: 2.5, MinGeV: 1e-12, MaxGeV: 1e-8, PerCubicMetre: 1}, 1e4, 0.00216624011421177093},
		{"rising", photon.PowerLaw{Index: -0.5, MinGeV: 3e-12, MaxGeV: 2e-11, PerCubicMetre: 1}, 5e5, 0.254979456216291252},
	} {
		t.Run(c.name, func(t *testing.T) {
			near(t, "kappa", absorptionOverArea(c.field, c.energy, electron), c.want, 2e-13)
		})
	}
}

func TestRedshiftScalesTheTemperature(t *testing.T) {
	// At redshift z the field is a black body of T (1 + z).
	a := must(photon.Absorb(photon.BlackBody{TemperatureKelvin: 2.7255, Redshift: 3}, electron, []float64{1e5, 1e6}, 0))
	b := must(photon.Absorb(photon.BlackBody{TemperatureKelvin: 4 * 2.7255}, electron, []float64{1e5, 1e6}, 0))
	for i := range a {
		near(t, "per metre", a[i].PerMetre, b[i].PerMetre, 1e-15)
	}
	// About 411 photons per cubic centimetre today: handbooks, from memory 410.7(3).
	near(t, "density", must(microwave().DensityPerCubicMetre()), 410.7e6, 1e-3)
	near(t, "density", must(photon.BlackBody{TemperatureKelvin: 2.7255, Redshift: 1}.DensityPerCubicMetre()),
		8*must(microwave().DensityPerCubicMetre()), 1e-15)
}

func TestDepthOverDistance(t *testing.T) {
	energies := []float64{1e5, 1e6, 1e7, 1e9}
	path := 8.5 * photon.MetrePerKiloparsec
	for i, a := range must(photon.Absorb(microwave(), electron, energies, path)) {
		if a.PhotonEnergyGeV != energies[i] {
			t.Errorf("energy %g in place %d", a.PhotonEnergyGeV, i)
		}
		near(t, "depth", a.OpticalDepth, 8.5/a.MeanFreePathKiloparsec, 1e-15)
		near(t, "path", a.MeanFreePathMetre*a.PerMetre, 1, 4e-16)
	}
	for _, a := range must(photon.Absorb(microwave(), electron, energies, 0)) {
		if a.OpticalDepth != 0 || !(a.PerMetre > 0) {
			t.Errorf("over no distance: %+v", a)
		}
	}
}

func TestNothingAbsorbs(t *testing.T) {
	line := photon.PowerLaw{Index: 2, MinGeV: 1e-12, MaxGeV: 1e-9, PerCubicMetre: 1e6}
	empty := line
	empty.PerCubicMetre = 0
	threshold := electron * electron / line.MaxGeV // head on with the hardest photon
	for _, c := range []struct {
		name   string
		field  photon.Field
		energy float64
	}{
		{"0 K", photon.BlackBody{}, 1e6},
		{"0 K with redshift", photon.BlackBody{Redshift: 5}, 1e6},
		{"far below the peak", microwave(), 1},
		{"empty field", empty, 1e6},
		{"below threshold", line, threshold * 0.999},
	} {
		t.Run(c.name, func(t *testing.T) {
			a := must(photon.Absorb(c.field, electron, []float64{c.energy}, 1e30))[0]
			if a.PerMetre != 0 || a.OpticalDepth != 0 || !math.IsInf(a.MeanFreePathMetre, 1) || !math.IsInf(a.MeanFreePathKiloparsec, 1) {
				t.Errorf("got %+v", a)
			}
		})
	}
	if a := must(photon.Absorb(line, electron, []float64{threshold * 1.001}, 0))[0]; !(a.PerMetre > 0) {
		t.Error("nothing absorbs just above threshold")
	}
	if got := must(photon.Absorb(line, electron, nil, 0)); len(got) != 0 {
		t.Errorf("no energies gave %d answers", len(got))
	}
	peak := must(photon.BlackBody{}.SmallestMeanFreePath(electron))
	if !math.IsNaN(peak.PhotonEnergyGeV) || !math.IsInf(peak.MeanFreePathMetre, 1) {
		t.Errorf("smallest path at 0 K: %+v", peak)
	}
}

func TestPowerLawNearThreshold(t *testing.T) {
	// Just above threshold sigma -> pi r^2 sqrt(v) and, with v2 the excess for the
	// hardest photon, F falls linearly: kappa/(pi r^2) = (2 m^4/E^2)(n(max)/max) times the
	// integral of sqrt(v)(v2 - v) dv = (4/15) v2^(5/2).
	field := photon.PowerLaw{Index: 2, MinGeV: 1e-12, MaxGeV: 1e-9, PerCubicMetre: 1e6}
	for _, excess := range []float64{1e-6, 1e-9} {
		energy := electron * electron / field.MaxGeV * (1 + excess)
		v2 := energy*field.MaxGeV/(electron*electron) - 1 // as rounded
		kappa := must(photon.Absorb(field, electron, []float64{energy}, 0))[0].PerMetre
		density := must(field.DensityPerGeV(field.MaxGeV))
		area := math.Pi * photon.ClassicalRadiusSquared(electron) * photon.SquareMetrePerBarn
		want := area * 2 * math.Pow(electron, 4) / (energy * energy) * density / field.MaxGeV * 4 / 15 * math.Pow(v2, 2.5)
		near(t, "kappa", kappa, want, 1e-5+1e-15/excess)
	}
}

func TestPowerLawDensity(t *testing.T) {
	// The density integrates to the number of photons; index 1 is the limit of its
	// neighbours.
	for _, index := range []float64{-2, 0, 1, 1 + 1e-9, 2.5} {
		field := photon.PowerLaw{Index: index, MinGeV: 2, MaxGeV: 50, PerCubicMetre: 7}
		sum, steps := 0.0, 20000
		for i := range steps { // midpoints in the logarithm
			e := 2 * math.Pow(25, (float64(i)+0.5)/float64(steps))
			sum += must(field.DensityPerGeV(e)) * e * math.Log(25) / float64(steps)
		}
		near(t, "number", sum, 7, 1e-7)
		if got := must(field.DensityPerGeV(1)); got != 0 {
			t.Errorf("density %g outside the limits", got)
		}
	}
}

func TestSmallestMeanFreePathIsAMinimum(t *testing.T) {
	for _, field := range []photon.BlackBody{microwave(), {TemperatureKelvin: 5800}, {TemperatureKelvin: 2.7255, Redshift: 9}} {
		peak := must(field.SmallestMeanFreePath(electron))
		for _, factor := range []float64{1e-3, 0.1, 0.5, 0.999, 1.001, 2, 10, 1e3} {
			path := must(photon.Absorb(field, electron, []float64{factor * peak.PhotonEnergyGeV}, 0))[0].MeanFreePathMetre
			if path < peak.MeanFreePathMetre {
				t.Errorf("%v: path %g at %g of the energy of the smallest, %g", field, path, factor, peak.MeanFreePathMetre)
			}
		}
	}
}

func TestFieldFaults(t *testing.T) {
	good := photon.PowerLaw{Index: 2, MinGeV: 1, MaxGeV: 2, PerCubicMetre: 1}
	for _, c := range []struct {
		field  string
		change func(*photon.PowerLaw)
	}{
		{"index", func(p *photon.PowerLaw) { p.Index = 30 }},
		{"min_gev", func(p *photon.PowerLaw) { p.MinGeV = 0 }},
		{"max_gev", func(p *photon.PowerLaw) { p.MaxGeV = math.Inf(1) }},
		{"max_gev", func(p *photon.PowerLaw) { p.MaxGeV = 1 }},
		{"per_cubic_metre", func(p *photon.PowerLaw) { p.PerCubicMetre = -1 }},
	} {
		bad := good
		c.change(&bad)
		_, err := photon.Absorb(bad, electron, []float64{1}, 0)
		refused(t, err, fault.Invalid, c.field)
		_, err = bad.DensityPerGeV(1)
		refused(t, err, fault.Invalid, c.field)
	}
	for _, c := range []struct {
		field string
		body  photon.BlackBody
	}{
		{"temperature_k", photon.BlackBody{TemperatureKelvin: -1}},
		{"redshift", photon.BlackBody{TemperatureKelvin: 1, Redshift: -1}},
		{"temperature_k times 1 + redshift", photon.BlackBody{TemperatureKelvin: 1e15, Redshift: 1}},
	} {
		_, err := c.body.SmallestMeanFreePath(electron)
		refused(t, err, fault.Invalid, c.field)
		_, err = c.body.DensityPerCubicMetre()
		refused(t, err, fault.Invalid, c.field)
	}
	_, err := photon.Absorb(nil, electron, nil, 0)
	refused(t, err, fault.Invalid, "field")
	_, err = photon.Absorb(good, 0, nil, 0)
	refused(t, err, fault.Invalid, "mass_gev")
	_, err = photon.Absorb(good, electron, nil, math.Inf(1))
	refused(t, err, fault.Invalid, "distance_m")
	_, err = photon.Absorb(good, electron, []float64{1, 0}, 1)
	refused(t, err, fault.Invalid, "photon_energies_gev")
}

func BenchmarkAbsorb(b *testing.B) {
	energies := make([]float64, 100)
	for i := range energies {
		energies[i] = 1e4 * math.Pow(1.2, float64(i))
	}
	for b.Loop() {
		must(photon.Absorb(microwave(), electron, energies, 1))
	}
}
