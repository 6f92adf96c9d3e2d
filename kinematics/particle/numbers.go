package particle

// Numbers are the additive quantum numbers of a state or of a sum of states.
// Strangeness and bottomness follow the usual sign: -1 for an s or b quark; charm and
// topness are +1 for a c or t quark. Numbers are comparable.
type Numbers struct {
	// ChargeThirds is three times the charge.
	ChargeThirds int
	// BaryonThirds is three times the baryon number, 1 for a quark.
	BaryonThirds int
	// Electron, Muon and Tau are the lepton family numbers.
	Electron, Muon, Tau int
	// Strangeness, Charm, Bottomness and Topness are the flavours.
	Strangeness, Charm, Bottomness, Topness int
}

// Add returns n + m.
func (n Numbers) Add(m Numbers) Numbers {
	return Numbers{
		n.ChargeThirds + m.ChargeThirds, n.BaryonThirds + m.BaryonThirds,
		n.Electron + m.Electron, n.Muon + m.Muon, n.Tau + m.Tau,
		n.Strangeness + m.Strangeness, n.Charm + m.Charm,
		n.Bottomness + m.Bottomness, n.Topness + m.Topness,
	}
}

// Neg returns -n, the numbers of the antiparticle.
func (n Numbers) Neg() Numbers {
	return Numbers{
		-n.ChargeThirds, -n.BaryonThirds, -n.Electron, -n.Muon, -n.Tau,
		-n.Strangeness, -n.Charm, -n.Bottomness, -n.Topness,
	}
}

// Sub returns n - m.
func (n Numbers) Sub(m Numbers) Numbers { return n.Add(m.Neg()) }

// quark returns the numbers of the quark with the published digit 1 to 6 (d, u, s, c,
// b, t).
func quark(digit int) Numbers {
	n := Numbers{ChargeThirds: -1, BaryonThirds: 1}
	if digit%2 == 0 {
		n.ChargeThirds = 2
	}
	switch digit {
	case 3:
		n.Strangeness = -1
	case 4:
		n.Charm = 1
	case 5:
		n.Bottomness = -1
	case 6:
		n.Topness = 1
	}
	return n
}
