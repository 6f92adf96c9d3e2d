package particle

// Numbers of states that the rules treat apart.
const (
	numberK0      = 311
	numberK0Short = 310
	numberK0Long  = 130
	firstNucleus  = 1_000_000_000
	lastNucleus   = 1_099_999_999
)

// content is what a particle number says about the state.
type content struct {
	numbers           Numbers
	upMinusDown       int // net u quarks less net d quarks: twice the third isospin component
	twiceSpin         int // -1 where the number does not say
	nucleus           Nucleus
	hadron            bool
	quark             bool
	selfConjugate     bool
	eitherStrangeness bool
	free              bool // the number leaves the charge open
}

// decode reads a positive particle number by the digit rules of the Review of Particle
// Physics, section "Monte Carlo particle numbering scheme". With the digits
// n nr nL nq1 nq2 nq3 nJ it knows
//
//	quarks 1-6; leptons 11-16; bosons 21-40 and dark matter 51-60 (no flavour, any
//	charge);
//	mesons, nq1 = 0: heavier quark nq2; up type is the quark, down type the antiquark;
//	baryons, nq1 nq2 nq3: three quarks;
//	nJ = 2J + 1, except K0_L 130 and K0_S 310;
//	nuclei 10LZZZAAAI with L Lambdas, Z protons and mass number A;
//	numbers with n = nr = 9 for private use (no flavour, any charge).
//
// It returns false for a number that these rules do not cover, such as a diquark, a
// pentaquark or a supersymmetric partner.
func decode(number int64) (content, bool) {
	switch {
	case number <= 0:
		return content{}, false
	case number <= 6:
		return content{
			numbers: quark(int(number)), upMinusDown: upMinusDown(int(number)),
			twiceSpin: 1, quark: true,
		}, true
	case number >= 11 && number <= 16:
		return lepton(int(number)), true
	case number >= 21 && number <= 40, number >= 51 && number <= 60,
		number >= 9_900_001 && number <= 9_999_999:
		return content{twiceSpin: -1, selfConjugate: true, free: true}, true
	case number == numberK0Short, number == numberK0Long:
		return content{hadron: true, selfConjugate: true, eitherStrangeness: true}, true
	case number >= 100 && number <= 9_899_999:
		return hadron(number)
	case number >= firstNucleus && number <= lastNucleus:
		return nucleus(number)
	}
	return content{}, false
}

// lepton returns the content of lepton 11 to 16; odd numbers are charged.
func lepton(number int) content {
	c := content{twiceSpin: 1}
	if number%2 == 1 {
		c.numbers.ChargeThirds = -3
	}
	switch {
	case number <= 12:
		c.numbers.Electron = 1
	case number <= 14:
		c.numbers.Muon = 1
	default:
		c.numbers.Tau = 1
	}
	return c
}

// hadron reads the quark digits of a meson or baryon.
func hadron(number int64) (content, bool) {
	nj := int(number % 10)
	q3 := int(number / 10 % 10)
	q2 := int(number / 100 % 10)
	q1 := int(number / 1000 % 10)
	if nj == 0 || q3 < 1 || q2 < 1 || max(q1, q2, q3) > 6 {
		return content{}, false
	}
	const pentaquark, digit = 9, 10
	if n, nr, nl := number/1_000_000, number/100_000%digit, number/10_000%digit; n == pentaquark && nr*nl != 0 && q1 != 0 {
		return content{}, false // 9, four quarks and an antiquark
	}
	c := content{twiceSpin: nj - 1, hadron: true}
	if q1 != 0 {
		c.numbers = quark(q1).Add(quark(q2)).Add(quark(q3))
		c.upMinusDown = upMinusDown(q1) + upMinusDown(q2) + upMinusDown(q3)
		return c, nj%2 == 0 // three quarks have half-integer spin
	}
	if q2 < q3 || nj%2 == 0 {
		return content{}, false
	}
	c.numbers = quark(q2).Sub(quark(q3))
	c.upMinusDown = upMinusDown(q2) - upMinusDown(q3)
	if q2%2 == 1 { // the heavier quark is down type: it is the antiquark
		c.numbers, c.upMinusDown = c.numbers.Neg(), -c.upMinusDown
	}
	c.selfConjugate = q2 == q3
	return c, true
}

// nucleus reads 10LZZZAAAI.
func nucleus(number int64) (content, bool) {
	n := Nucleus{
		A: int(number / 10 % 1000), Z: int(number / 10_000 % 1000),
		Lambdas: int(number / 10_000_000 % 10),
	}
	if n.A < 2 || n.Z+n.Lambdas > n.A {
		return content{}, false
	}
	neutrons := n.A - n.Z - n.Lambdas
	return content{
		numbers:     Numbers{ChargeThirds: 3 * n.Z, BaryonThirds: 3 * n.A, Strangeness: -n.Lambdas},
		upMinusDown: n.Z - neutrons, twiceSpin: -1, nucleus: n, hadron: true,
	}, true
}

// nucleusNumber returns the particle number of the ground state of a nucleus.
func nucleusNumber(z, a int) int64 { return firstNucleus + int64(z)*10_000 + int64(a)*10 }

// isNucleus reports whether a number is that of a nucleus with Z protons and mass
// number A, whatever its level and its Lambdas.
func isNucleus(number int64, z, a int) bool {
	c, ok := decode(number)
	return ok && c.nucleus.Z == z && c.nucleus.A == a
}

// upMinusDown returns +1 for u, -1 for d and 0 for the other quarks.
func upMinusDown(digit int) int {
	switch digit {
	case 1:
		return -1
	case 2:
		return 1
	}
	return 0
}
