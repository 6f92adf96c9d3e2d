package constraint

import "math"

// pointing is the flight of a re-pointed object. From its origin o it was found at
// o + R n, n its own direction; from the vertex v it flew along
//
//	d = o - v + R n,  u = d/|d|
//
// so that its momentum is s u with s = |q| the size of the momentum q = s n. With
// g = (eta - (eta.u) u)/|d| the gradient and G the second derivatives of eta.u in d,
//
//	G = -(eta u' + u eta' + (eta.u)(1 - 3 u u'))/|d|^2,
//
// and likewise N those of g.n in q, the derivatives of f = s eta.u are, with w = n - (n.)n the
// part across n,
//
//	df/dq     = (eta.u) n + R g_w
//	d2f/dq2   = (eta.u)(1 - n n')/s + (R/s)(n g_w' + g_w n') + (R^2/s) G_w + R s N
//	d2f/dq dz = -(g.z) n - R (G z)_w
//	d2f/dz2   = s z'G z
type pointing struct {
	n, u        [3]float64
	far         float64 // |d|
	reach       float64 // R
	gradient    [3]float64
	curved      [3][3]float64 // G
	onDirection float64       // eta.u
	turned      [3]vector     // the derivatives of the turned momentum
}

// aim computes the direction from the vertex.
func (p *pointing) aim(b *body, v *[3]float64) {
	p.reach = b.distance
	var d [3]float64
	for i := range d {
		p.n[i] = 0
		if b.size != 0 {
			p.n[i] = b.q[i] / b.size
		}
		d[i] = b.origin[i] - v[i] + float64(p.reach*p.n[i])
	}
	p.far = math.Sqrt(dot3(&d, &d))
	for i := range d {
		p.u[i] = d[i] / p.far
	}
}

func (p *pointing) momentum(size, energy float64) vector {
	return vector{size * p.u[0], size * p.u[1], size * p.u[2], energy}
}

// turn returns the derivatives of the four-momentum for those of q and of the energy:
// (n.dq) u + (R/|d|) of the part of dq across both n and u.
func (p *pointing) turn(slope *[3]vector) *[3]vector {
	k := p.reach / p.far
	for a := range slope {
		dq := &slope[a]
		along := dq.on3(&p.n)
		across := [3]float64{
			dq[0] - float64(along*p.n[0]), dq[1] - float64(along*p.n[1]), dq[2] - float64(along*p.n[2]),
		}
		rest := along - float64(k*dot3(&across, &p.u))
		p.turned[a] = vector{
			float64(k*across[0]) + float64(rest*p.u[0]),
			float64(k*across[1]) + float64(rest*p.u[1]),
			float64(k*across[2]) + float64(rest*p.u[2]),
			dq[3],
		}
	}
	return &p.turned
}

// alongZ returns the derivative of the four-momentum in the vertex z.
func (p *pointing) alongZ(size float64) vector {
	k := size / p.far
	return vector{k * p.u[2] * p.u[0], k * p.u[2] * p.u[1], -k * (1 - float64(p.u[2]*p.u[2])), 0}
}

// pull returns df/dq for f = s eta.u and keeps what the second derivatives need.
func (p *pointing) pull(eta *vector) vector {
	e := [3]float64{eta[0], eta[1], eta[2]}
	p.onDirection = dot3(&e, &p.u)
	for i := range e {
		p.gradient[i] = (e[i] - float64(p.onDirection*p.u[i])) / p.far
		for j := range i + 1 {
			p.curved[i][j] = secondOfDirection(&e, &p.u, p.onDirection, i, j) / (p.far * p.far)
			p.curved[j][i] = p.curved[i][j]
		}
	}
	across := dot3(&p.gradient, &p.n)
	var out vector
	for i := range e {
		out[i] = float64(p.onDirection*p.n[i]) + float64(p.reach*(p.gradient[i]-float64(across*p.n[i])))
	}
	return out
}

// secondOfDirection is entry (i, j) of the second derivatives of e.u in a vector d of
// direction u, times |d|^2.
func secondOfDirection(e, u *[3]float64, on float64, i, j int) float64 {
	t := -(float64(e[i]*u[j]) + float64(u[i]*e[j]) - float64(3*on*u[i]*u[j]))
	if i == j {
		t -= on
	}
	return t
}

// curvature adds the second derivatives that the change of direction brings.
func (p *pointing) curvature(b *body, out *triangle) {
	s, r := b.size, p.reach
	onN := dot3(&p.gradient, &p.n)
	var gw, gzw [3]float64
	var gn [3]float64 // G n
	for i := range gn {
		gn[i] = dot3(&p.curved[i], &p.n)
		gw[i] = p.gradient[i] - float64(onN*p.n[i])
	}
	ngn := dot3(&gn, &p.n)
	for i := range gzw {
		gzw[i] = p.curved[i][2] - float64(gn[2]*p.n[i])
	}
	var f [3][3]float64
	for i := range f {
		for j := range i + 1 {
			whole := p.curved[i][j] - float64(gn[i]*p.n[j]) - float64(p.n[i]*gn[j]) + float64(ngn*p.n[i]*p.n[j])
			t := float64(r * (float64(p.n[i]*gw[j]) + float64(gw[i]*p.n[j])))
			t += float64(r * r * whole)
			t += float64(r * secondOfDirection(&p.gradient, &p.n, onN, i, j))
			t -= float64(p.onDirection * p.n[i] * p.n[j])
			if i == j {
				t += p.onDirection
			}
			f[i][j] = t / s
			f[j][i] = f[i][j]
		}
	}
	for a := range 3 {
		var fq [3]float64
		for i := range fq {
			fq[i] = b.slope[a].on3(&f[i])
		}
		for c := range a + 1 {
			out[a][c] += b.slope[c].on3(&fq)
		}
		onZ := float64(p.gradient[2]*b.slope[a].on3(&p.n)) + float64(r*b.slope[a].on3(&gzw))
		out[3][a] = -onZ
	}
	out[3][3] = s * p.curved[2][2]
}
