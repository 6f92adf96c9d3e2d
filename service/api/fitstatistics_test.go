package api

import (
	"math"
	"testing"

	"example.org/kinegate/proto/column"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// Detectors with resolutions a tenth of common ones, so that constraints are nearly linear
// over the errors.
const (
	finePhotons = `
detector:
  name: fine
  tagger: {sigma_gev: 0.001, time_sigma_ns: 1}
  calorimeter:
    theta: {min_rad: 0.02, max_rad: 3.12}
    stochastic: 0.0025
    constant: 0.001
    theta_sigma_rad: 0.001
    phi_sigma_rad: 0.001
    threshold_gev: 0.001
`
	fineTracks = finePhotons + `
  tracker: {theta: {min_rad: 0.02, max_rad: 3.12}, min_momentum_gev: 0.05, constant: 0.001, per_gev: 0.0005, angle_sigma_rad: 0.0005}
  vertex: {sigma_x_m: 0.0005, sigma_y_m: 0.0005, sigma_z_m: 0.0005}
  displaced: {min_distance_m: 0.005, sigma_x_m: 0.0005, sigma_y_m: 0.0005, sigma_z_m: 0.0005, efficiency: 1}
`
	flatPhotons = `
initial_state: {beam_on_target: {beam: {even: {min_gev: 1.4, max_gev: 2}}}}
`
	twoPions = `
    beam: {tagged: {}}
    fit: {masses: [{products: ["pi0[0]"]}, {products: ["pi0[1]"]}]}
`
)

// TestFitProbabilitiesOfMessages: events of a generation's text are judged by a selection's
// text, and the probabilities of the fits are flat by their mean and their mean square, within
// five standard errors of those of a uniform number, whose variances are 1/12 and 4/45. Package selection
// looks at their whole distribution and at the pulls, of the same reactions.
func TestFitProbabilitiesOfMessages(t *testing.T) {
	t.Parallel()
	for _, c := range []struct {
		reaction, from, detector, hypothesis string
		degrees                              int16
		// least is the share of the events that have an entry at least: others lost a
		// particle, or a decay was too near.
		least float64
	}{
		{"gamma p -> p pi0, pi0 -> gamma gamma", flatPhotons, finePhotons, `
    measurements: [{product: p, measurement: MEASUREMENT_MISSING}]
    beam: {tagged: {}}
    fit: {masses: [{products: [pi0]}]}
`, 2, 0.98},
		{"gamma p -> p pi0 pi0, pi0 -> gamma gamma", flatPhotons, finePhotons, `
    measurements: [{product: p, measurement: MEASUREMENT_MISSING}]` + twoPions, 3, 0.98},
		{"gamma p -> p pi0 pi0, pi0 -> gamma gamma", flatPhotons, fineTracks, `
    measurements: [{product: p, measurement: MEASUREMENT_FULL}]` + twoPions, 6, 0.98},
		{"gamma gamma -> e+ e-", `
initial_state: {two_beams: {beam1: {even: {min_gev: 0.5, max_gev: 1.5}}, beam2: {even: {min_gev: 0.5, max_gev: 1.5}}}}
`, fineTracks, `
    beam: {fixed: {two_beams: {beam1: {total_energy_gev: 1}, beam2: {total_energy_gev: 1}}}}
    fit: {beam_energy: {unmeasured: {}}, target_energy: {unmeasured: {}}}
`, 2, 0.98},
		{"eta -> pi0 pi0 pi0, pi0 -> gamma gamma", "", finePhotons, `
    fit:
      masses:
        - {products: ["pi0[0]"]}
        - {products: ["pi0[1]"]}
        - {products: ["pi0[2]"]}
        - {products: ["pi0[0]", "pi0[1]", "pi0[2]"], mass_gev: 0.547862}
    condition: {window: {invariant_mass: {products: ["pi0[0]"], min_gev: 0.12, max_gev: 0.15}}}
`, 4, 0.98},
		{"gamma p -> K+ Lambda, Lambda -> p pi-", flatPhotons, fineTracks, `
    measurements: [{product: K+, measurement: MEASUREMENT_FULL}, {product: p, measurement: MEASUREMENT_FULL}]
    beam: {tagged: {}}
    fit: {masses: [{products: [Lambda]}]}
    condition: {window: {flight_distance: {product: Lambda, min_m: 0.005}}}
`, 5, 0.85},
	} {
		t.Run(c.reaction, func(t *testing.T) {
			t.Parallel()
			const events = 2000
			s := newServices(t)
			checked, err := s.generation.CheckGeneration(t.Context(), &kinegatev1.CheckGenerationRequest{
				Form: &kinegatev1.CheckGenerationRequest_Yaml{Yaml: "channels: [{reaction: \"" + c.reaction + "\"}]" + c.from + c.detector},
			})
			if err != nil || len(checked.GetFaults()) > 0 {
				t.Fatalf("%v, %v", err, checked.GetFaults())
			}
			selection := checkText(t, "name: fitted\nhypotheses:\n  - name: fitted\n    reaction: \""+c.reaction+"\""+c.hypothesis)
			if f := selection.GetFaults(); len(f) > 0 {
				t.Fatal(f)
			}
			out := mustGenerate(t, s, &kinegatev1.GenerateEventsRequest{Generation: checked.GetGeneration(), EventCount: events})
			var probabilities []float64
			for _, b := range out.blocks() {
				reply, err := s.bulk.JudgeBlock(t.Context(), &kinegatev1.JudgeBlockRequest{
					Selection: &kinegatev1.SelectionSource{Source: &kinegatev1.SelectionSource_Given{Given: selection.GetSelection()}},
					Entries:   kinegatev1.EntryDetail_ENTRY_DETAIL_ALL, Block: b.GetEvents(),
				})
				if err != nil {
					t.Fatal(err)
				}
				fits := reply.GetVerdict().GetEntries().GetFits()
				found, err := column.Float64s(fits.GetProbabilities())
				if err != nil {
					t.Fatal(err)
				}
				degrees, err := column.Int16s(fits.GetDegreesOfFreedom())
				if err != nil {
					t.Fatal(err)
				}
				for k, d := range degrees {
					if d != c.degrees {
						t.Fatalf("%d degrees of freedom, want %d", d, c.degrees)
					}
					if !math.IsNaN(found[k]) { // no assignment came to a fit
						probabilities = append(probabilities, found[k])
					}
				}
			}
			n := float64(len(probabilities))
			if n < c.least*events {
				t.Errorf("%g of %d events have a fit", n, events)
			}
			var mean, square float64
			for _, p := range probabilities {
				mean += p / n
				square += p * p / n
			}
			off, offSquare := (mean-1.0/2)*math.Sqrt(12*n), (square-1.0/3)*math.Sqrt(45*n/4)
			if math.Abs(off) > 5 || math.Abs(offSquare) > 5 {
				t.Errorf("mean %.3f, mean square %.3f: off by %.1f and %.1f standard errors", mean, square, off, offSquare)
			}
			t.Logf("%g events: off by %.1f and %.1f standard errors", n, off, offSquare)
		})
	}
}
