package selection

import (
	"math"

	"example.org/kinegate/kinematics/momentum"
)

// dual is a number with its derivative in one parameter.
type dual struct{ v, d float64 }

func (a dual) add(b dual) dual { return dual{a.v + b.v, a.d + b.d} }

func (a dual) sub(b dual) dual { return dual{a.v - b.v, a.d - b.d} }

func (a dual) mul(b dual) dual {
	return dual{float64(a.v * b.v), float64(a.v*b.d) + float64(a.d*b.v)}
}

func (a dual) div(b dual) dual {
	q := a.v / b.v
	return dual{q, (a.d - float64(q*b.d)) / b.v}
}

func (a dual) sqrt() dual {
	r := math.Sqrt(a.v)
	return dual{r, a.d / (2 * r)}
}

// dualThree is a vector of duals, dualFour a four-momentum.
type (
	dualThree struct{ x, y, z dual }
	dualFour  struct {
		p dualThree
		e dual
	}
)

// fixedThree is a vector that does not depend on the parameter.
func fixedThree(a momentum.Three) dualThree {
	return dualThree{dual{v: a.X}, dual{v: a.Y}, dual{v: a.Z}}
}

// fixedFour is a four-momentum that does not depend on the parameter.
func fixedFour(a momentum.Four) dualFour { return dualFour{fixedThree(a.P), dual{v: a.E}} }

func (a dualThree) add(b dualThree) dualThree {
	return dualThree{a.x.add(b.x), a.y.add(b.y), a.z.add(b.z)}
}

func (a dualThree) sub(b dualThree) dualThree {
	return dualThree{a.x.sub(b.x), a.y.sub(b.y), a.z.sub(b.z)}
}

func (a dualThree) scale(k dual) dualThree {
	return dualThree{a.x.mul(k), a.y.mul(k), a.z.mul(k)}
}

func (a dualThree) dot(b dualThree) dual {
	return a.x.mul(b.x).add(a.y.mul(b.y)).add(a.z.mul(b.z))
}

func (a dualThree) norm() dual { return a.dot(a).sqrt() }

func (a dualThree) cross(b dualThree) dualThree {
	return dualThree{
		a.y.mul(b.z).sub(a.z.mul(b.y)),
		a.z.mul(b.x).sub(a.x.mul(b.z)),
		a.x.mul(b.y).sub(a.y.mul(b.x)),
	}
}

// turn is the derivative of atan2(s, c).
func turn(s, c dual) float64 {
	square := float64(s.v*s.v) + float64(c.v*c.v)
	return (float64(c.v*s.d) - float64(s.v*c.d)) / square
}

func (a dualFour) add(b dualFour) dualFour { return dualFour{a.p.add(b.p), a.e.add(b.e)} }

func (a dualFour) sub(b dualFour) dualFour { return dualFour{a.p.sub(b.p), a.e.sub(b.e)} }

// square is the signed mass squared.
func (a dualFour) square() dual {
	return a.e.mul(a.e).sub(a.p.dot(a.p))
}

// toRest boosts a into the rest frame of q, of mass m:
//
//	e' = (E e - P.p)/m,  p' = p + P (P.p/(E + m) - e)/m
func (a dualFour) toRest(q dualFour, m dual) dualFour {
	along := q.p.dot(a.p)
	k := along.div(q.e.add(m)).sub(a.e).div(m)
	return dualFour{a.p.add(q.p.scale(k)), q.e.mul(a.e).sub(along).div(m)}
}
