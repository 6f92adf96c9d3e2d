package decay

import (
	"math"
	"strconv"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/momentum/breakup"
	"example.org/kinegate/kinematics/num"
)

// Dalitz is the region of the pair masses of a system that goes to three bodies: a
// decay, or a reaction at a fixed sqrt(s).
type Dalitz struct {
	// total is the mass of the system as an exact sum.
	total []float64
	mass  [3]float64
	// w is the mass of the system.
	w num.DD
}

// NewDalitz returns the region for a system of mass total in GeV that goes to three
// bodies of the given masses. total and the masses are 0 or within 1e-30..1e30, total >
// 0, else an Invalid fault; bodies heavier than total are a BelowThreshold fault.
func NewDalitz(total float64, masses [3]float64) (Dalitz, error) {
	return newDalitz("decay.NewDalitz", []float64{total}, masses)
}

// NewDalitzAbove returns the same as NewDalitz for an energy excess >= 0 above the sum
// of the masses, which may be too small beside them for the total to carry.
func NewDalitzAbove(excess float64, masses [3]float64) (Dalitz, error) {
	const op = "decay.NewDalitzAbove"
	if err := breakup.CheckSize(op, "excess_energy_gev", excess); err != nil {
		return Dalitz{}, err
	}
	return newDalitz(op, append([]float64{excess}, masses[:]...), masses)
}

func newDalitz(op string, total []float64, masses [3]float64) (Dalitz, error) {
	if err := checkDaughters(op, masses[:]); err != nil {
		return Dalitz{}, err
	}
	if err := breakup.CheckSize(op, "total_mass_gev", total[0]); err != nil {
		return Dalitz{}, err
	}
	d := Dalitz{total: total, mass: masses, w: breakup.Sum(total...)}
	if d.w.Sign() <= 0 {
		return Dalitz{}, fault.Number("total_mass_gev", d.w.Float(), "> 0").In(op)
	}
	if err := closed(op, d.less(masses[:]...)); err != nil {
		return Dalitz{}, err
	}
	return d, nil
}

// less returns the total mass less the given masses, exactly.
func (d *Dalitz) less(masses ...float64) num.DD {
	terms := make([]float64, 0, 8)
	terms = append(terms, d.total...)
	for _, m := range masses {
		terms = append(terms, -m)
	}
	return breakup.Sum(terms...)
}

// Couple names a pair of the three bodies by the number, 0 to 2, of the one left out.
type Couple uint8

// The three couples: bodies 0 and 1, 0 and 2, 1 and 2.
const (
	Couple01 Couple = 2
	Couple02 Couple = 1
	Couple12 Couple = 0
)

// order returns the masses a, b of the couple and c of the other, a < b by number.
func (d *Dalitz) order(c Couple) (a, b, other float64) {
	switch c {
	case Couple12:
		return d.mass[1], d.mass[2], d.mass[0]
	case Couple02:
		return d.mass[0], d.mass[2], d.mass[1]
	case Couple01:
	}
	return d.mass[0], d.mass[1], d.mass[2]
}

func checkCouple(op string, c Couple) error {
	if c > Couple01 {
		return fault.New(fault.Invalid, "couple", strconv.Itoa(int(c)), "0, 1 or 2").In(op)
	}
	return nil
}

// MassSquaredRange returns the range of the mass squared of a couple, in GeV^2, within
// 2e-16 relative:
//
//	(a + b)^2 .. (M - c)^2
func (d *Dalitz) MassSquaredRange(c Couple) (breakup.Range, error) {
	if err := checkCouple("decay.MassSquaredRange", c); err != nil {
		return breakup.Range{}, err
	}
	a, b, other := d.order(c)
	return breakup.Range{
		Min: num.Sum2(a, b).Square().Float(),
		Max: d.less(other).Square().Float(),
	}, nil
}

// Point is a point of the region: the mass squared of each couple in GeV^2. The three
// add up to M^2 + m0^2 + m1^2 + m2^2.
type Point struct{ M01, M02, M12 float64 }

// Chord is the stretch of the region at a fixed mass squared of one couple.
type Chord struct {
	// From and To are its ends: the mass squared of the couple's first body with the
	// third one is least at From.
	From, To Point
}

// At returns the chord of the region at a mass squared of a couple (a band of the
// region follows from the chords at its edges): with the couple a, b and the other c
//
//	m_ac^2 = a^2 + c^2 + (A C +- B D)/(2 s),     s = m_ab^2
//	A = s + a^2 - b^2,  B = sqrt((s - (a+b)^2)(s - (a-b)^2))
//	C = M^2 - s - c^2,  D = sqrt(((M-c)^2 - s)((M+c)^2 - s))
//
// where the lower end is a^2 + c^2 + 2 (a^2 C^2 + c^2 B^2)/(A C + B D), a sum of
// positive terms: the difference A C - B D would lose all digits for light bodies. A, C
// and the factors of B and D are sums of s - (a+b)^2 or (M-c)^2 - s and positive terms.
//
// All values are within 4e-15 relative and a zero is exact. A mass squared outside its
// range, held against the exact ends, is an Outside fault.
//
// Source: Review of Particle Physics (2024), Kinematics, three-body decays, limits of
// m23^2 at fixed m12^2; E. Byckling and K. Kajantie, Particle Kinematics (1973),
// section V.2 (from memory).
func (d *Dalitz) At(c Couple, massSquared float64) (Chord, error) {
	const op = "decay.Dalitz.At"
	if err := checkCouple(op, c); err != nil {
		return Chord{}, err
	}
	a, b, other := d.order(c)
	above, below := d.gaps(a, b, other, massSquared)
	if math.IsNaN(massSquared) || above.Sign() < 0 || below.Sign() < 0 {
		limits, _ := d.MassSquaredRange(c)
		return Chord{}, fault.New(fault.Outside, "mass_squared_gev2", fault.Text(massSquared),
			">= "+fault.Text(limits.Min)+" and <= "+fault.Text(limits.Max)).In(op)
	}
	return d.chord(c, num.FromFloat(massSquared), above, below), nil
}

// gaps returns s - (a+b)^2 and (M-c)^2 - s, exactly signed: the double-double where it
// leaves enough, else an exact expansion.
func (d *Dalitz) gaps(a, b, other, s float64) (above, below num.DD) {
	pair, rest := num.Sum2(a, b), d.less(other)
	above = pair.Square().Neg().AddFloat(s)
	below = rest.Square().AddFloat(-s)
	if undecided(above.Hi, s) {
		sum := num.Expansion{}.Add(a).Add(b)
		above = sum.Mul(sum).Neg().Add(s).DD()
	}
	if undecided(below.Hi, s) {
		sum := num.Expansion{}.Add(-other)
		for _, x := range d.total {
			sum = sum.Add(x)
		}
		below = sum.Mul(sum).Add(-s).DD()
	}
	return above, below
}

// undecided reports whether a difference of two numbers of the given size, each with
// relative error below 2^-98, may have less than 2^-52 of its digits.
func undecided(difference, size float64) bool {
	return math.Abs(difference) < 0x1p-44*math.Abs(size)
}

// chord returns the chord at s with the gaps of At.
func (d *Dalitz) chord(c Couple, s, above, below num.DD) Chord {
	a, b, other := d.order(c)
	rest := d.less(other)
	least1, most1 := d.ends(a, b, other, s, above, below, rest)
	least2, most2 := d.ends(b, a, other, s, above, below, rest)
	place := func(first, second num.DD) Point {
		x, y, z := s.Float(), first.Float(), second.Float()
		switch c {
		case Couple12:
			return Point{M12: x, M01: y, M02: z}
		case Couple02:
			return Point{M02: x, M01: y, M12: z}
		case Couple01:
		}
		return Point{M01: x, M02: y, M12: z}
	}
	return Chord{From: place(least1, most2), To: place(most1, least2)}
}

// ends returns the least and the largest mass squared of body a with the other; rest is
// M less the mass of the other.
func (d *Dalitz) ends(a, b, other float64, s, above, below, rest num.DD) (least, most num.DD) {
	base := num.Prod2(a, a).Add(num.Prod2(other, other))
	if s.IsZero() { // Two massless bodies go together, sharing the momentum freely.
		return base, d.w.Square()
	}
	// A = (s - (a+b)^2) + 2a(a+b) and C = ((M-c)^2 - s) + 2c(M-c).
	near := above.Add(num.Sum2(a, b).MulFloat(2 * a))
	far := below.Add(rest.MulFloat(2 * other))
	b2 := above.Mul(above.Add(num.Prod2(a, 4*b)))
	d2 := below.Mul(below.Add(d.w.MulFloat(4 * other)))
	product := near.Mul(far)
	sum := product.Add(b2.Mul(d2).Sqrt())
	most = base.Add(sum.Div(s).Scale(-1))
	if sum.IsZero() {
		return base, base
	}
	top := far.MulFloat(a).Square().Add(num.Prod2(other, other).Mul(b2))
	return base.Add(top.Div(sum).Scale(1)), most
}
