package reaction

import (
	"strconv"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/particle"
)

// Law is an additive conservation law.
type Law uint8

// The additive laws. Charge, baryon number and the lepton families hold always;
// the flavours hold in production only, since a decay may be weak.
const (
	Charge Law = iota
	BaryonNumber
	ElectronNumber
	MuonNumber
	TauNumber
	Strangeness
	Charm
	Bottomness
	Topness
	lawCount
)

// Laws is a set of laws.
type Laws uint16

// With returns the set with a law added.
func (l Laws) With(law Law) Laws { return l | 1<<law }

// Without returns the set with a law taken out.
func (l Laws) Without(law Law) Laws { return l &^ (1 << law) }

// Has reports whether the set has the law.
func (l Laws) Has(law Law) bool { return l&(1<<law) != 0 }

const (
	// AllLaws holds in production.
	AllLaws Laws = 1<<lawCount - 1
	// AlwaysLaws holds in decays too: charge, baryon number and lepton families.
	AlwaysLaws Laws = 1<<Strangeness - 1
)

// String returns the law in words.
func (l Law) String() string {
	names := [...]string{
		"charge", "baryon number", "electron number", "muon number", "tau number",
		"strangeness", "charm", "bottomness", "topness",
	}
	if int(l) < len(names) {
		return names[l]
	}
	return "Law(" + strconv.Itoa(int(l)) + ")"
}

// project sets the numbers to 0 whose law is not in the set.
func (l Laws) project(n particle.Numbers) particle.Numbers {
	for law, field := range [...]*int{
		&n.ChargeThirds, &n.BaryonThirds, &n.Electron, &n.Muon, &n.Tau,
		&n.Strangeness, &n.Charm, &n.Bottomness, &n.Topness,
	} {
		if l&(1<<law) == 0 {
			*field = 0
		}
	}
	return n
}

// Value returns the number that the law conserves, in thirds for charge and baryon
// number.
func (l Law) Value(n particle.Numbers) int {
	switch l {
	case Charge:
		return n.ChargeThirds
	case BaryonNumber:
		return n.BaryonThirds
	case ElectronNumber:
		return n.Electron
	case MuonNumber:
		return n.Muon
	case TauNumber:
		return n.Tau
	case Strangeness:
		return n.Strangeness
	case Charm:
		return n.Charm
	case Bottomness:
		return n.Bottomness
	case Topness:
		return n.Topness
	case lawCount:
	}
	return 0
}

// text renders a value of the law's number with its sign, a third as a fraction.
func (l Law) text(value int) string {
	const thirds = 3
	suffix := ""
	if l <= BaryonNumber {
		if value%thirds == 0 {
			value /= thirds
		} else {
			suffix = "/3"
		}
	}
	if value > 0 {
		return "+" + strconv.Itoa(value) + suffix
	}
	return strconv.Itoa(value) + suffix
}

// sum is the additive numbers of several particles. Each K0_S or K0_L may count as
// strangeness +1 or -1; numbers hold 0 for it.
type sum struct {
	numbers particle.Numbers
	either  int
}

// add adds a particle.
func (s *sum) add(p *particle.Particle) {
	s.numbers = s.numbers.Add(p.Numbers)
	if p.EitherStrangeness {
		s.either++
	}
}

// differ lists the laws of the set in which two sums differ.
func differ(laws Laws, left, right sum) []Law {
	var broken []Law
	either := left.either + right.either
	for law := range lawCount {
		gap := law.Value(left.numbers) - law.Value(right.numbers)
		if law == Strangeness {
			// k neutral kaons make up any gap of -k, -k+2, ..., k.
			if abs(gap) <= either && (gap-either)%2 == 0 {
				continue
			}
		} else if gap == 0 {
			continue
		}
		if laws.Has(law) {
			broken = append(broken, law)
		}
	}
	return broken
}

func abs(n int) int { return max(n, -n) }

// lawFaults makes a fault for each broken law, with both sides' sums.
func lawFaults(op, process string, broken []Law, left, right sum, at position) fault.List {
	list := make(fault.List, 0, len(broken))
	for _, law := range broken {
		l, r := law.text(law.Value(left.numbers)), law.text(law.Value(right.numbers))
		if law == Strangeness {
			l, r = eitherText(l, left.either), eitherText(r, right.either)
		}
		e := fault.New(fault.Forbidden, law.String(), "left "+l+", right "+r, "equal sums").
			In(op).Because("not conserved in " + process)
		if at.path != "" {
			e = e.Move(at.path)
		}
		list = append(list, e.At(0, at.column))
	}
	return list
}

// eitherText adds what neutral kaons of either strangeness may contribute.
func eitherText(text string, either int) string {
	if either == 0 {
		return text
	}
	return text + " and +1 or -1 from each of " + strconv.Itoa(either) + " K0_S or K0_L"
}
