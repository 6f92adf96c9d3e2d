package constraint

import "example.org/kinegate/kinematics/event"

// triangle is the lower triangle of a symmetric matrix over an object's three
// parameters and the vertex, in this order.
type triangle [4][4]float64

// curvature computes the second derivatives of eta.P, for a covector eta, in the
// object's variables and, for a re-pointed object, in the vertex. It returns false
// where they all vanish.
//
// For E^2 = s^2 + m^2, with s the size of the momentum:
//
//	d2E/da db = m^2/E^3 ds/da ds/db + s/E d2s/da db
func (b *body) curvature(eta *vector, out *triangle) bool {
	switch b.form {
	case MissingMass:
		return false
	case Along:
		if b.mass == 0 {
			return false
		}
		e, s := b.momentum[3], b.spread[0][0]
		ratio := b.mass / e
		out[0][0] = eta[3] * ratio * ratio / e * s * s
		return true
	case Coordinates, Missing, formEnd:
	}
	speed, bend := 1.0, 0.0
	if b.mass > 0 {
		e := b.momentum[3]
		speed = b.size / e
		ratio := b.mass / e
		bend = eta[3] * ratio * ratio / e
	}
	along := *eta
	if b.repointed {
		along = b.point.pull(eta)
	}
	b.bend(&along, eta[3]*speed, out)
	if bend != 0 {
		for a := range 3 {
			for c := range a + 1 {
				out[a][c] += float64(bend * b.sizes[a] * b.sizes[c])
			}
		}
	}
	if b.repointed {
		b.point.curvature(b, out)
	}
	b.spreadOut(out)
	return true
}

// bend writes the second derivatives of along.q + onSize s in the parameters.
func (b *body) bend(along *vector, onSize float64, out *triangle) {
	switch b.kind {
	case event.EnergyMomentum, event.MomentumMass:
		if b.size > 0 {
			onSize /= b.size
		}
		for a := range 3 {
			for c := range a + 1 {
				out[a][c] = -onSize * b.sizes[a] * b.sizes[c]
			}
			out[a][a] += onSize
		}
	case event.MomentumAngles:
		p, st, ct, sp, cp := b.size, b.trig[0], b.trig[1], b.trig[2], b.trig[3]
		r := float64(along[0]*cp) + float64(along[1]*sp)
		w := float64(along[1]*cp) - float64(along[0]*sp)
		out[0][0] = 0
		out[1][0] = float64(ct*r) - float64(st*along[2])
		out[2][0] = st * w
		out[1][1] = -p * (float64(st*r) + float64(ct*along[2]))
		out[2][1] = p * ct * w
		out[2][2] = -p * st * r
	case event.TransverseMomentum:
		pt, sh, ch, sp, cp := b.theta[0], b.trig[0], b.trig[1], b.trig[2], b.trig[3]
		out[0][0] = 0
		out[1][0] = float64(along[2]*ch) + float64(onSize*sh)
		out[2][0] = float64(along[1]*cp) - float64(along[0]*sp)
		out[1][1] = pt * (float64(along[2]*sh) + float64(onSize*ch))
		out[2][1] = 0
		out[2][2] = -pt * (float64(along[0]*cp) + float64(along[1]*sp))
	case event.MomentumSlopes:
		p, k, n := b.size, b.trig[0], [2]float64{b.trig[1], b.trig[2]}
		on := float64(along[0]*n[0]) + float64(along[1]*n[1]) + float64(along[2]*k)
		out[0][0] = 0
		for a := range 2 {
			out[1+a][0] = k * (along[a] - float64(on*n[a]))
			for c := range a + 1 {
				t := float64(along[c]*n[a]) + float64(along[a]*n[c]) - float64(3*on*n[a]*n[c])
				if a == c {
					t += on
				}
				out[1+a][1+c] = -p * k * k * t
			}
		}
	}
}

// spreadOut turns second derivatives in the parameters into those in the variables:
// L' T L, and L' on the mixed ones with the vertex.
func (b *body) spreadOut(t *triangle) {
	l := &b.spread
	if b.diagonal {
		for a := range 3 {
			for c := range a + 1 {
				t[a][c] *= l[a][a] * l[c][c]
			}
			t[3][a] *= l[a][a]
		}
		return
	}
	l00, l10, l11, l20, l21, l22 := l[0][0], l[1][0], l[1][1], l[2][0], l[2][1], l[2][2]
	t00, t10, t11, t20, t21, t22 := t[0][0], t[1][0], t[1][1], t[2][0], t[2][1], t[2][2]
	// T L, column by column, then L' from the left.
	u00 := float64(t00*l00) + float64(t10*l10) + float64(t20*l20)
	u10 := float64(t10*l00) + float64(t11*l10) + float64(t21*l20)
	u20 := float64(t20*l00) + float64(t21*l10) + float64(t22*l20)
	u11 := float64(t11*l11) + float64(t21*l21)
	u21 := float64(t21*l11) + float64(t22*l21)
	t[0][0] = float64(l00*u00) + float64(l10*u10) + float64(l20*u20)
	t[1][0] = float64(l11*u10) + float64(l21*u20)
	t[2][0] = l22 * u20
	t[1][1] = float64(l11*u11) + float64(l21*u21)
	t[2][1] = l22 * u21
	t[2][2] = l22 * t22 * l22
	t[3][0] = float64(l00*t[3][0]) + float64(l10*t[3][1]) + float64(l20*t[3][2])
	t[3][1] = float64(l11*t[3][1]) + float64(l21*t[3][2])
	t[3][2] = l22 * t[3][2]
}
