package main

import "testing"

// TestByFlag: a field that a flag fills is called by the flag, one of a file by its path.
func TestByFlag(t *testing.T) {
	for sentence, want := range map[string]string{
		`beam.total_energy_gev "-1": invalid`:                `--beam in GeV "-1": invalid`,
		`beam2.momentum_gev "-1": invalid`:                   `--beam2-momentum in GeV "-1": invalid`,
		`opening_angles_rad[1] "9": invalid`:                 `--opening-angle in rad[1] "9": invalid`,
		`channels[0].energy.table.sqrt_s_gev "1": invalid`:   `channels[0].energy.table.sqrt_s_gev "1": invalid`,
		`initial_state.beam.total_energy_gev "-1": invalid`:  `initial_state.beam.total_energy_gev "-1": invalid`,
		`angle_between_beams_radians "1": invalid`:           `angle_between_beams_radians "1": invalid`,
		`the value of sqrt_s_gev is no energy that opens it`: `the value of sqrt_s_gev is no energy that opens it`,
	} {
		if got := byFlag(sentence); got != want {
			t.Errorf("%s: %s", sentence, got)
		}
	}
}
