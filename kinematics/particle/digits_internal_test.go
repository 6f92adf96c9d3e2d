package particle

import "testing"

// TestContentAgainstTable derives the quantum numbers of every row from the digits of
// its number and holds them against the table's own columns, read apart from New.
func TestContentAgainstTable(t *testing.T) {
	rows, faults := parse([]byte(standard))
	if len(rows) != 135 || len(faults) > 0 {
		t.Fatalf("%d rows, faults %v", len(rows), faults)
	}
	for i := range rows {
		r := &rows[i]
		number, _ := r.number(&faults)
		t.Run(r.cells[colAliases].text, func(t *testing.T) {
			c, ok := decode(number)
			if !ok {
				t.Fatalf("number %d is not covered", number)
			}
			charge, _ := r.integer(colCharge, -999, 999, &faults)
			if !c.free && int(charge) != c.numbers.ChargeThirds {
				t.Errorf("charge %d thirds, the table has %d", c.numbers.ChargeThirds, charge)
			}
			if spin := r.twiceSpin(&faults); c.twiceSpin >= 0 && spin != c.twiceSpin {
				t.Errorf("2J = %d, the table has %d", c.twiceSpin, spin)
			}
			anti, _ := r.integer(colAntiNumber, -lastNucleus, lastNucleus, &faults)
			if !c.free && (anti == number) != c.selfConjugate {
				t.Errorf("self-conjugate %v, the table has antiparticle %d", c.selfConjugate, anti)
			}
			// Gell-Mann and Nishijima: Q = I3 + (B + S + C + Bottom + Top) / 2, times 6.
			n := c.numbers
			if (c.hadron || c.quark) && !c.eitherStrangeness && 2*n.ChargeThirds !=
				3*c.upMinusDown+n.BaryonThirds+3*(n.Strangeness+n.Charm+n.Bottomness+n.Topness) {
				t.Errorf("%+v with 2 I3 = %d breaks the Gell-Mann-Nishijima relation", n, c.upMinusDown)
			}
		})
	}
	if len(faults) > 0 {
		t.Error(faults)
	}
}

// TestDecode has one row for each rule of the numbering scheme, with quark contents as
// the Review's quark-model review has them.
func TestDecode(t *testing.T) {
	cases := []struct {
		name   string
		number int64
		want   Numbers
		twiceJ int
	}{
		{"up", 2, Numbers{ChargeThirds: 2, BaryonThirds: 1}, 1},
		{"bottom", 5, Numbers{ChargeThirds: -1, BaryonThirds: 1, Bottomness: -1}, 1},
		{"top", 6, Numbers{ChargeThirds: 2, BaryonThirds: 1, Topness: 1}, 1},
		{"e-", 11, Numbers{ChargeThirds: -3, Electron: 1}, 1},
		{"nu_mu", 14, Numbers{Muon: 1}, 1},
		{"tau-", 15, Numbers{ChargeThirds: -3, Tau: 1}, 1},
		{"K+ = u sbar", 321, Numbers{ChargeThirds: 3, Strangeness: 1}, 0},
		{"K0 = d sbar", 311, Numbers{Strangeness: 1}, 0},
		{"D_s+ = c sbar", 431, Numbers{ChargeThirds: 3, Charm: 1, Strangeness: 1}, 0},
		{"B_s0 = s bbar", 531, Numbers{Strangeness: -1, Bottomness: 1}, 0},
		{"B_c+ = c bbar", 541, Numbers{ChargeThirds: 3, Charm: 1, Bottomness: 1}, 0},
		{"J/psi", 443, Numbers{}, 2},
		{"Omega- = sss", 3334, Numbers{ChargeThirds: -3, BaryonThirds: 3, Strangeness: -3}, 3},
		{"Xi_cc++ = ccu", 4422, Numbers{ChargeThirds: 6, BaryonThirds: 3, Charm: 2}, 1},
		{"Omega_b- = ssb", 5332, Numbers{ChargeThirds: -3, BaryonThirds: 3, Strangeness: -2, Bottomness: -1}, 1},
		{"deuteron", 1000010020, Numbers{ChargeThirds: 3, BaryonThirds: 6}, -1},
		{"hypertriton", 1010010030, Numbers{ChargeThirds: 3, BaryonThirds: 9, Strangeness: -1}, -1},
		{"private", 9900022, Numbers{}, -1},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			got, ok := decode(c.number)
			if !ok || got.numbers != c.want || got.twiceSpin != c.twiceJ {
				t.Errorf("decode(%d) = %+v, %v", c.number, got, ok)
			}
		})
	}
	for name, number := range map[string]int64{
		"zero": 0, "negative": -11, "fourth generation": 7, "reggeon": 110, "diquark": 2203,
		"meson in the wrong order": 231, "meson of half spin": 212, "baryon of whole spin": 2213,
		"supersymmetric": 1000022 * 10, "nucleus of one": 1000010010, "more protons than A": 1000040030,
		"pentaquark": 9221132, "beyond the nuclei": 1200000000,
	} {
		t.Run(name, func(t *testing.T) {
			if got, ok := decode(number); ok {
				t.Errorf("decode(%d) = %+v", number, got)
			}
		})
	}
}
