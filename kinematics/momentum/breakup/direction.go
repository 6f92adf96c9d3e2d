package breakup

import (
	"math"

	"example.org/kinegate/kinematics/num"
)

// Direction is a polar angle theta* held as the squares of the cosine and sine of its
// half, each with its own digits: the first is (1+cos)/2, which loses all digits
// backward if formed from the cosine, the second (1-cos)/2, which loses them forward.
type Direction struct {
	// Fore is cos^2(theta*/2) and Aft is sin^2(theta*/2).
	Fore, Aft num.DD
}

// Along returns the direction 0.
func Along() Direction { return Direction{Fore: num.FromFloat(1)} }

// Against returns the direction pi.
func Against() Direction { return Direction{Aft: num.FromFloat(1)} }

// AtAngle returns the direction at an angle within 0..pi. The double next to pi
// stands for pi, as it does for atan2.
func AtAngle(theta float64) Direction {
	if theta == math.Pi {
		return Against()
	}
	sin, cos := num.FromFloat(theta / 2).Sincos()
	return Direction{Fore: cos.Square(), Aft: sin.Square()}
}

// AtCosine returns the direction at a cosine within -1..1, exactly.
func AtCosine(cosine float64) Direction {
	return Direction{Fore: num.Sum2(1, cosine).Scale(-1), Aft: num.Sum2(1, -cosine).Scale(-1)}
}

// Between returns the direction with cos^2(theta*/2) and sin^2(theta*/2) of two values
// that each carry their own digits and add up to 1 but for their errors: the smaller one
// counts and the other is 1 less it, so that no error makes a direction longer than 1.
// It is false where the smaller one is below 0. Two values above 1/2, which come of
// errors as large as they, are divided by their sum.
func Between(fore, aft num.DD) (Direction, bool) {
	const half = 0.5
	switch {
	case fore.Hi > half && aft.Hi > half:
		sum := fore.Add(aft)
		return Direction{Fore: fore.Div(sum), Aft: aft.Div(sum)}, true
	case fore.Cmp(aft) < 0:
		return Direction{Fore: fore, Aft: fore.Neg().AddFloat(1)}, fore.Sign() >= 0
	}
	return Direction{Fore: aft.Neg().AddFloat(1), Aft: aft}, aft.Sign() >= 0
}

// Opposite returns the direction turned by pi.
func (d Direction) Opposite() Direction { return Direction{Fore: d.Aft, Aft: d.Fore} }

// Cosine returns cos(theta*).
func (d Direction) Cosine() num.DD { return d.Fore.Sub(d.Aft) }

// Sine returns sin(theta*).
func (d Direction) Sine() num.DD { return d.Fore.Mul(d.Aft).Sqrt().Scale(1) }

// Angle returns theta* in radians, within 4e-16 relative.
func (d Direction) Angle() float64 {
	return 2 * num.Atan2(d.Aft.Sqrt().Float(), d.Fore.Sqrt().Float())
}

// Forward reports whether the direction is nearer to 0 than to pi.
func (d Direction) Forward() bool { return d.Fore.Cmp(d.Aft) >= 0 }

// AtCosineDD returns the direction at a cosine within -1..1.
func AtCosineDD(cosine num.DD) Direction {
	return Direction{Fore: cosine.AddFloat(1).Scale(-1), Aft: cosine.Neg().AddFloat(1).Scale(-1)}
}
