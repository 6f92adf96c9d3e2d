package constraint

import (
	"math"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/num"
)

// body is one object during a fit: its measured values, where the fit stands, and
// the momentum with its derivatives there.
type body struct {
	*part

	kind event.Kind
	mass float64
	// start are the parameters at x = 0: the measured ones, or where the fit starts.
	start [maxParameters]float64
	// spread is the lower triangle L with which theta = start + L x: the Cholesky
	// factor of the covariance, and 1 on the diagonal for an unmeasured parameter.
	spread [3][3]float64
	// diagonal says that spread has nothing below the diagonal.
	diagonal bool
	// origin is where the direction of a re-pointed object starts, distance how far
	// it was found.
	origin   [3]float64
	distance float64

	theta [maxParameters]float64
	// q is the momentum along the object's own direction, size its length; slope[a] is
	// the derivative of q and of the energy in parameter a, sizes[a] that of the size.
	q     [3]float64
	size  float64
	slope [3]vector
	sizes [3]float64
	trig  [4]float64 // sin theta, cos theta, sin phi, cos phi; sinh, cosh eta; or 1/N, n_x, n_y
	point pointing
	// momentum is the four-momentum, alongZ its derivative in the vertex.
	momentum vector
	alongZ   vector
}

// correlated is how near to one a correlation may be, as 1 - rho^2, before it
// counts as one: a thousand times the rounding of the entries of a covariance.
const correlated = 0x1p-40

// load takes a measurement. It returns false if a measured value or an entry of the
// covariance is not finite or the covariance is not positive semidefinite.
func (b *body) load(m *Measurement) bool {
	b.kind, b.mass = m.Kind, m.MassGeV
	b.start = [maxParameters]float64{}
	b.spread = [3][3]float64{}
	b.diagonal = true
	if !(b.mass >= 0 && b.mass <= maxMagnitude) || b.form == Coordinates && !b.kind.Valid() {
		return false
	}
	if b.form != Coordinates {
		b.kind = event.MomentumMass
	}
	for a := range min(b.count, 3) {
		if b.mask>>a&1 == 0 {
			b.spread[a][a] = 1
			continue
		}
		b.start[a] = m.Values[a]
		if !finite(b.start[a]) || !b.factor(a, &m.Covariance) {
			return false
		}
	}
	if b.form != Along && b.mask&1 == 1 && b.sized() && !(b.start[0] > 0) || b.form == Along && b.start[0] < 0 {
		return false
	}
	if b.repointed {
		o, c := m.Origin, m.Cluster
		b.origin = [3]float64{o.X, o.Y, o.Z}
		b.distance = c.Sub(o).Norm()
		if !finite(o.X) || !finite(o.Y) || !finite(o.Z) || !(b.distance > 0 && b.distance <= maxMagnitude) {
			return false
		}
	}
	return true
}

// sized tells whether the first parameter is a size, which stays above zero.
func (b *body) sized() bool {
	switch {
	case b.form == Along:
		return true
	case b.form != Coordinates:
		return false
	}
	switch b.kind {
	case event.TransverseMomentum, event.MomentumAngles, event.MomentumSlopes:
		return true
	case event.EnergyMomentum, event.MomentumMass:
	}
	return false
}

// factor computes row a of the Cholesky factor of the covariance of the measured
// parameters. A pivot that vanishes within the rounding is a direction without
// spread.
func (b *body) factor(a int, packed *[event.CovarianceSize]float64) bool {
	variance := packed[packedIndex(a, a)]
	if !(variance >= 0 && variance <= maxMagnitude) {
		return false
	}
	left := variance
	for c := range a {
		if b.mask>>c&1 == 0 {
			continue
		}
		v := packed[packedIndex(c, a)]
		if !finite(v) {
			return false
		}
		for d := range c {
			v -= float64(b.spread[a][d] * b.spread[c][d])
		}
		if pivot := b.spread[c][c]; pivot > 0 {
			v /= pivot
		} else if v*v <= correlated*variance*packed[packedIndex(c, c)] {
			v = 0
		} else {
			return false
		}
		b.spread[a][c] = v
		b.diagonal = b.diagonal && v == 0
		left -= float64(v * v)
	}
	switch {
	case left > correlated*variance:
		b.spread[a][a] = math.Sqrt(left)
	case left < -correlated*variance:
		return false
	}
	return true
}

// packedIndex is the place of entry (a, b) with a <= b in the packed upper triangle.
func packedIndex(a, b int) int { return a*(5-a)/2 + b }

// place sets the parameters to where the unknowns x stand.
func (b *body) place(x []float64) {
	switch b.count {
	case 1:
		b.theta[0] = b.start[0] + float64(b.spread[0][0]*x[b.vars[0]])
	case maxParameters:
		for a, v := range b.vars {
			b.theta[a] = b.start[a] + x[v]
		}
	default:
		l := &b.spread
		var x0, x1, x2 float64
		if b.whole {
			y := (*[3]float64)(x[b.vars[0]:])
			x0, x1, x2 = y[0], y[1], y[2]
		} else {
			x0, x1, x2 = x[b.vars[0]], x[b.vars[1]], x[b.vars[2]]
		}
		b.theta[0] = b.start[0] + float64(l[0][0]*x0)
		b.theta[1] = b.start[1] + float64(l[1][0]*x0) + float64(l[1][1]*x1)
		b.theta[2] = b.start[2] + float64(l[2][0]*x0) + float64(l[2][1]*x1) + float64(l[2][2]*x2)
	}
}

// evaluate computes the four-momentum and writes its derivatives in the object's
// variables into columns. The vertex v matters to a re-pointed object.
//
//	angles:      q = p (sin theta cos phi, sin theta sin phi, cos theta)
//	transverse:  q = pt (cos phi, sin phi, sinh eta)
//	slopes:      q = p (x', y', 1)/sqrt(1 + x'^2 + y'^2)
//	E^2 = q^2 + m^2
func (b *body) evaluate(v *[3]float64, columns []vector) {
	switch b.form {
	case MissingMass:
		b.momentum = b.theta
		for a := range b.count {
			columns[b.vars[a]] = vector{}
			columns[b.vars[a]][a] = 1
		}
		return
	case Along:
		b.lengthwise(columns)
		return
	case Coordinates, Missing, formEnd:
	}
	switch b.kind {
	case event.EnergyMomentum, event.MomentumMass:
		b.cartesian()
	case event.TransverseMomentum:
		b.transverse()
	case event.MomentumAngles:
		b.angles()
	case event.MomentumSlopes:
		b.slopes()
	}
	energy, speed := b.size, 1.0
	if b.mass > 0 {
		energy = math.Sqrt(float64(b.size*b.size) + float64(b.mass*b.mass))
		speed = b.size / energy
	}
	for a := range b.slope {
		b.slope[a][3] = speed * b.sizes[a]
	}
	slope := &b.slope
	if b.repointed {
		b.point.aim(b, v)
		b.momentum = b.point.momentum(b.size, energy)
		b.alongZ = b.point.alongZ(b.size)
		slope = b.point.turn(&b.slope)
	} else {
		b.momentum = vector{b.q[0], b.q[1], b.q[2], energy}
	}
	first, second, third := &columns[b.vars[0]], &columns[b.vars[1]], &columns[b.vars[2]]
	l := &b.spread
	first.set(l[0][0], &slope[0])
	second.set(l[1][1], &slope[1])
	third.set(l[2][2], &slope[2])
	if !b.diagonal {
		first.add(l[1][0], &slope[1])
		first.add(l[2][0], &slope[2])
		second.add(l[2][1], &slope[2])
	}
}

// lengthwise is evaluate for a size along a known direction.
func (b *body) lengthwise(columns []vector) {
	p, speed := b.theta[0], 1.0
	b.size = p
	energy := p
	if b.mass > 0 {
		energy = math.Sqrt(float64(p*p) + float64(b.mass*b.mass))
		speed = p / energy
	}
	s := b.spread[0][0]
	b.momentum = vector{p * b.along[0], p * b.along[1], p * b.along[2], energy}
	columns[b.vars[0]] = vector{s * b.along[0], s * b.along[1], s * b.along[2], s * speed}
}

func (b *body) cartesian() {
	b.q = [3]float64{b.theta[0], b.theta[1], b.theta[2]}
	b.size = math.Sqrt(dot3(&b.q, &b.q))
	b.slope = [3]vector{{1, 0, 0}, {0, 1, 0}, {0, 0, 1}}
	b.sizes = [3]float64{}
	if b.size > 0 {
		b.sizes = [3]float64{b.q[0] / b.size, b.q[1] / b.size, b.q[2] / b.size}
	}
}

func (b *body) angles() {
	p := b.theta[0]
	st, ct := num.Sincos(b.theta[1])
	sp, cp := num.Sincos(b.theta[2])
	b.trig = [4]float64{st, ct, sp, cp}
	n := [3]float64{st * cp, st * sp, ct}
	b.size, b.sizes = p, [3]float64{1, 0, 0}
	b.q = [3]float64{p * n[0], p * n[1], p * n[2]}
	pc, ps := p*ct, p*st
	b.slope = [3]vector{{n[0], n[1], n[2]}, {pc * cp, pc * sp, -ps}, {-ps * sp, ps * cp, 0}}
}

func (b *body) transverse() {
	pt := b.theta[0]
	sp, cp := num.Sincos(b.theta[2])
	sh, ch := num.Sinh(b.theta[1]), num.Cosh(b.theta[1])
	b.trig = [4]float64{sh, ch, sp, cp}
	b.q = [3]float64{pt * cp, pt * sp, pt * sh}
	b.size, b.sizes = pt*ch, [3]float64{ch, pt * sh, 0}
	b.slope = [3]vector{{cp, sp, sh}, {0, 0, pt * ch}, {-pt * sp, pt * cp, 0}}
}

func (b *body) slopes() {
	p, sx, sy := b.theta[0], b.theta[1], b.theta[2]
	k := 1 / math.Sqrt(1+float64(sx*sx)+float64(sy*sy))
	n := [3]float64{sx * k, sy * k, k}
	b.trig = [4]float64{k, n[0], n[1], 0}
	b.size, b.sizes = p, [3]float64{1, 0, 0}
	b.q = [3]float64{p * n[0], p * n[1], p * n[2]}
	b.slope[0] = vector{n[0], n[1], n[2]}
	for a, e := range [2]float64{n[0], n[1]} {
		w := float64(p * k)
		b.slope[1+a] = vector{-w * e * n[0], -w * e * n[1], -w * e * n[2]}
		b.slope[1+a][a] += w
	}
}
