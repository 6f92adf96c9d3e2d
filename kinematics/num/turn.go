package num

import "math"

// SincosTurn returns the sine and the cosine of an angle given in turns:
//
//	sin = sin(2 pi u), cos = cos(2 pi u)
//
// Domain: |u| < 2^44. The part of a turn is split off exactly, so both are within
// 2 ulp of the result for every u, their zeros exact. Outside the domain and for
// NaN both are NaN.
//
// A random direction needs no larger angles and no other reduction than this
// one, and it has no branches that such angles would mispredict.
func SincosTurn(u float64) (sin, cos float64) {
	if !(math.Abs(u) < 1<<44) {
		return math.NaN(), math.NaN()
	}
	// 128 u = k + f with |f| <= 1/2: multiplying by 128 and removing k are exact.
	// Adding 3 2^51 rounds to the whole number k, whose last bits are then those
	// of the sum.
	const shift = 3 << 51
	parts := float64(turnParts * u)
	shifted := parts + shift
	at := &turnTable[math.Float64bits(shifted)%turnParts]
	x := float64((parts - (shifted - shift)) * (2 * math.Pi / turnParts))
	// Taylor series of sin(x) and cos(x) - 1 for |x| <= pi/128 = 0.0246. The first
	// terms left out are x^9/9! < 4e-19 |x| and x^8/8! < 4e-18. Plain products and
	// sums, as a joined product costs a test of the processor wherever it may lack
	// the instruction.
	z := float64(x * x)
	s := x + float64(x*z*(-1.0/6+float64(z*(1.0/120+float64(z*(-1.0/5040))))))
	c := float64(z * (-1.0/2 + float64(z*(1.0/24+float64(z*(-1.0/720))))))
	// The angle of the table is turned by x.
	return at.sin + (float64(at.sin*c) + float64(at.cos*s)), at.cos + (float64(at.cos*c) - float64(at.sin*s))
}

// turnParts is the number of angles of turnTable in a turn.
const turnParts = 128

// turnTable is the sine and the cosine of k/128 of a turn.
var turnTable = newTurnTable() //nolint:gochecknoglobals // a constant table

func newTurnTable() (table [turnParts]struct{ sin, cos float64 }) {
	const quarter = turnParts / 4
	for k := range quarter {
		s, c := turnSines[k], turnSines[quarter-k]
		for range 4 { // the four quarters of the turn
			table[k].sin, table[k].cos = s, c
			s, c = c, -s
			k += quarter
		}
	}
	for k := range table { // no negative zeros
		table[k].sin += 0
		table[k].cos += 0
	}
	return table
}

// turnSines is sin(2 pi k/128) of the first quarter, rounded from 40 digits of
// mpmath.
var turnSines = [turnParts/4 + 1]float64{ //nolint:gochecknoglobals // a constant table
	0, 0.049067674327418015, 0.0980171403295606, 0.14673047445536175,
	0.19509032201612828, 0.2429801799032639, 0.2902846772544624, 0.33688985339222005,
	0.3826834323650898, 0.4275550934302821, 0.47139673682599764, 0.5141027441932218,
	0.5555702330196022, 0.5956993044924334, 0.6343932841636455, 0.6715589548470184,
	0.7071067811865476, 0.7409511253549591, 0.773010453362737, 0.8032075314806449,
	0.8314696123025452, 0.8577286100002721, 0.881921264348355, 0.9039892931234433,
	0.9238795325112867, 0.9415440651830208, 0.9569403357322088, 0.970031253194544,
	0.9807852804032304, 0.989176509964781, 0.9951847266721969, 0.9987954562051724,
	1,
}
