package constraint

import "math"

// The inner loops over the variables of a cluster, whose factor L stands in place of
// its block, with the inverses on the diagonal, and whose rows of the border stand below.
// Most often a cluster is one object or a pair, so three and six variables are
// written out; a beam is one.

// gram subtracts from each entry of the border the product of the two rows there.
func (m *matrix) gram(c *cluster) {
	e, n, first, rows := m.entries, m.n, c.first, c.rows
	for i, r := range rows {
		out := e[r*n:][:r+1]
		switch c.size {
		case 1:
			a := e[r*n+first]
			for _, q := range rows[:i+1] {
				out[q] -= float64(a * e[q*n+first])
			}
		case 3:
			a := (*[3]float64)(e[r*n+first:])
			for _, q := range rows[:i+1] {
				b := (*[3]float64)(e[q*n+first:])
				out[q] -= float64(a[0]*b[0]) + float64(a[1]*b[1]) + float64(a[2]*b[2])
			}
		case 6:
			a := (*[6]float64)(e[r*n+first:])
			for _, q := range rows[:i+1] {
				b := (*[6]float64)(e[q*n+first:])
				out[q] -= float64(a[0]*b[0]) + float64(a[1]*b[1]) + float64(a[2]*b[2]) +
					float64(a[3]*b[3]) + float64(a[4]*b[4]) + float64(a[5]*b[5])
			}
		default:
			a := e[r*n+first:][:c.size]
			for _, q := range rows[:i+1] {
				out[q] -= dot(a, e[q*n+first:])
			}
		}
	}
}

// collect subtracts from the border of b the product of its rows with x.
func (m *matrix) collect(c *cluster, x, b []float64) {
	e, n, first, rows := m.entries, m.n, c.first, c.rows
	switch len(x) {
	case 3:
		x := (*[3]float64)(x)
		for _, r := range rows {
			a := (*[3]float64)(e[r*n+first:])
			b[r] -= float64(a[0]*x[0]) + float64(a[1]*x[1]) + float64(a[2]*x[2])
		}
	case 6:
		x := (*[6]float64)(x)
		for _, r := range rows {
			a := (*[6]float64)(e[r*n+first:])
			b[r] -= float64(a[0]*x[0]) + float64(a[1]*x[1]) + float64(a[2]*x[2]) +
				float64(a[3]*x[3]) + float64(a[4]*x[4]) + float64(a[5]*x[5])
		}
	default:
		for _, r := range rows {
			b[r] -= dot(x, e[r*n+first:])
		}
	}
}

// distribute subtracts from x the rows of the border times what b has there.
func (m *matrix) distribute(c *cluster, x, b []float64) {
	e, n, first, rows := m.entries, m.n, c.first, c.rows
	if len(x) != 6 {
		for _, r := range rows {
			subtract(x, b[r], e[r*n+first:])
		}
		return
	}
	y := (*[6]float64)(x)
	y0, y1, y2, y3, y4, y5 := y[0], y[1], y[2], y[3], y[4], y[5]
	for _, r := range rows {
		a, w := (*[6]float64)(e[r*n+first:]), b[r]
		y0 -= float64(w * a[0])
		y1 -= float64(w * a[1])
		y2 -= float64(w * a[2])
		y3 -= float64(w * a[3])
		y4 -= float64(w * a[4])
		y5 -= float64(w * a[5])
	}
	*y = [6]float64{y0, y1, y2, y3, y4, y5}
}

// dot returns the scalar product of a and b, which is at least as long.
func dot(a, b []float64) float64 {
	b = b[:len(a)]
	sum := 0.0
	for k, v := range a {
		sum += float64(v * b[k])
	}
	return sum
}

// subtract subtracts w times b from a, which is at most as long.
func subtract(a []float64, w float64, b []float64) {
	b = b[:len(a)]
	for k, v := range b {
		a[k] -= float64(w * v)
	}
}

// cholesky factors the block of the given rows in place, L L' = block. It returns false if
// a pivot is not above the least.
func (m *matrix) cholesky(first, size int, least float64) bool {
	at := first * (m.n + 1)
	if size == 6 {
		return m.choleskySix(at, least)
	}
	for i := range size {
		row := m.entries[at+i*m.n:][:i+1]
		m.forward(at, row[:i])
		pivot := row[i] - dot(row[:i], row)
		if !(pivot > least) {
			return false
		}
		row[i] = 1 / math.Sqrt(pivot)
	}
	return true
}

func (m *matrix) choleskySix(at int, least float64) bool {
	e, n := m.entries[at:], m.n
	r1, r2, r3, r4, r5 := (*[2]float64)(e[n:]), (*[3]float64)(e[2*n:]), (*[4]float64)(e[3*n:]), (*[5]float64)(e[4*n:]), (*[6]float64)(e[5*n:])

	p0 := e[0]
	i0 := 1 / math.Sqrt(p0)
	l10, l20, l30, l40, l50 := r1[0]*i0, r2[0]*i0, r3[0]*i0, r4[0]*i0, r5[0]*i0
	p1 := r1[1] - float64(l10*l10)
	i1 := 1 / math.Sqrt(p1)
	l21 := (r2[1] - float64(l20*l10)) * i1
	l31 := (r3[1] - float64(l30*l10)) * i1
	l41 := (r4[1] - float64(l40*l10)) * i1
	l51 := (r5[1] - float64(l50*l10)) * i1
	p2 := r2[2] - (float64(l20*l20) + float64(l21*l21))
	i2 := 1 / math.Sqrt(p2)
	l32 := (r3[2] - (float64(l30*l20) + float64(l31*l21))) * i2
	l42 := (r4[2] - (float64(l40*l20) + float64(l41*l21))) * i2
	l52 := (r5[2] - (float64(l50*l20) + float64(l51*l21))) * i2
	p3 := r3[3] - (float64(l30*l30) + float64(l31*l31) + float64(l32*l32))
	i3 := 1 / math.Sqrt(p3)
	l43 := (r4[3] - (float64(l40*l30) + float64(l41*l31) + float64(l42*l32))) * i3
	l53 := (r5[3] - (float64(l50*l30) + float64(l51*l31) + float64(l52*l32))) * i3
	p4 := r4[4] - (float64(l40*l40) + float64(l41*l41) + float64(l42*l42) + float64(l43*l43))
	i4 := 1 / math.Sqrt(p4)
	l54 := (r5[4] - (float64(l50*l40) + float64(l51*l41) + float64(l52*l42) + float64(l53*l43))) * i4
	p5 := r5[5] - (float64(l50*l50) + float64(l51*l51) + float64(l52*l52) + float64(l53*l53) + float64(l54*l54))
	if !(p0 > least && p1 > least && p2 > least && p3 > least && p4 > least && p5 > least) {
		return false
	}
	e[0] = i0
	*r1 = [2]float64{l10, i1}
	*r2 = [3]float64{l20, l21, i2}
	*r3 = [4]float64{l30, l31, l32, i3}
	*r4 = [5]float64{l40, l41, l42, l43, i4}
	*r5 = [6]float64{l50, l51, l52, l53, l54, 1 / math.Sqrt(p5)}
	return true
}

// forward overwrites b with L^-1 b for a factor L of the size of b, of which rows start
// at entry at.
func (m *matrix) forward(at int, b []float64) {
	if len(b) == 6 {
		m.forwardSix(at, (*[6]float64)(b))
		return
	}
	for j := range b {
		lower := m.entries[at:][:j+1]
		b[j] = (b[j] - dot(lower[:j], b)) * lower[j]
		at += m.n
	}
}

func (m *matrix) forwardSix(at int, b *[6]float64) {
	e, n := m.entries[at:], m.n
	l1, l2, l3, l4, l5 := (*[2]float64)(e[n:]), (*[3]float64)(e[2*n:]), (*[4]float64)(e[3*n:]), (*[5]float64)(e[4*n:]), (*[6]float64)(e[5*n:])
	b0 := b[0] * e[0]
	b1 := (b[1] - float64(l1[0]*b0)) * l1[1]
	b2 := (b[2] - (float64(l2[0]*b0) + float64(l2[1]*b1))) * l2[2]
	b3 := (b[3] - (float64(l3[0]*b0) + float64(l3[1]*b1) + float64(l3[2]*b2))) * l3[3]
	b4 := (b[4] - (float64(l4[0]*b0) + float64(l4[1]*b1) + float64(l4[2]*b2) + float64(l4[3]*b3))) * l4[4]
	b5 := (b[5] - (float64(l5[0]*b0) + float64(l5[1]*b1) + float64(l5[2]*b2) + float64(l5[3]*b3) + float64(l5[4]*b4))) * l5[5]
	*b = [6]float64{b0, b1, b2, b3, b4, b5}
}

// backward overwrites b with L'^-1 b.
func (m *matrix) backward(at int, b []float64) {
	if len(b) == 6 {
		m.backwardSix(at, (*[6]float64)(b))
		return
	}
	for j := len(b) - 1; j >= 0; j-- {
		lower := m.entries[at+j*m.n:][:j+1]
		b[j] *= lower[j]
		subtract(b[:j], b[j], lower)
	}
}

func (m *matrix) backwardSix(at int, b *[6]float64) {
	e, n := m.entries[at:], m.n
	l1, l2, l3, l4, l5 := (*[2]float64)(e[n:]), (*[3]float64)(e[2*n:]), (*[4]float64)(e[3*n:]), (*[5]float64)(e[4*n:]), (*[6]float64)(e[5*n:])
	b5 := b[5] * l5[5]
	b4 := (b[4] - float64(l5[4]*b5)) * l4[4]
	b3 := (b[3] - float64(l5[3]*b5) - float64(l4[3]*b4)) * l3[3]
	b2 := (b[2] - float64(l5[2]*b5) - float64(l4[2]*b4) - float64(l3[2]*b3)) * l2[2]
	b1 := (b[1] - float64(l5[1]*b5) - float64(l4[1]*b4) - float64(l3[1]*b3) - float64(l2[1]*b2)) * l1[1]
	b0 := (b[0] - float64(l5[0]*b5) - float64(l4[0]*b4) - float64(l3[0]*b3) - float64(l2[0]*b2) - float64(l1[0]*b1)) * e[0]
	*b = [6]float64{b0, b1, b2, b3, b4, b5}
}
