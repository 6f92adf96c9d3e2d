package constraint

import "math"

// lower is a lower triangle, row by row up to the diagonal: a positive definite block, or its
// Cholesky factor with the inverses on the diagonal. The rows are those of a matrix. Most
// often a cluster is a pair of objects and four-momentum and two masses are constrained, so
// six rows are written out; the order of the sums is the same for every number.
type lower [][]float64

// triangleOf returns the rows of a block of m.
func (m *matrix) triangleOf(first, size int) lower {
	l := make(lower, size)
	for i := range l {
		at := (first+i)*m.n + first
		l[i] = m.entries[at : at+i+1 : at+i+1]
	}
	return l
}

// factor overwrites a block by its factor, L L' = block. It returns false if a pivot is
// not above the least.
func (l lower) factor(least float64) bool {
	if len(l) == 6 {
		return l.factorSix(least)
	}
	for i, row := range l {
		l[:i].forward(row[:i])
		pivot := row[i] - dot(row[:i], row)
		if !(pivot > least) {
			return false
		}
		row[i] = 1 / math.Sqrt(pivot)
	}
	return true
}

func (l lower) factorSix(least float64) bool {
	r0, r1, r2, r3, r4, r5 := l.six()
	p0 := r0[0]
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
	r0[0] = i0
	*r1 = [2]float64{l10, i1}
	*r2 = [3]float64{l20, l21, i2}
	*r3 = [4]float64{l30, l31, l32, i3}
	*r4 = [5]float64{l40, l41, l42, l43, i4}
	*r5 = [6]float64{l50, l51, l52, l53, l54, 1 / math.Sqrt(p5)}
	return true
}

// six returns six rows.
func (l lower) six() (*[1]float64, *[2]float64, *[3]float64, *[4]float64, *[5]float64, *[6]float64) {
	r := (*[6][]float64)(l)
	return (*[1]float64)(r[0]), (*[2]float64)(r[1]), (*[3]float64)(r[2]), (*[4]float64)(r[3]), (*[5]float64)(r[4]), (*[6]float64)(r[5])
}

// forward overwrites b with L^-1 b.
func (l lower) forward(b []float64) {
	for j, row := range l {
		b[j] = (b[j] - dot(row[:j], b)) * row[j]
	}
}

// forwardAll overwrites every row b with L^-1 b.
func (l lower) forwardAll(rows [][]float64) {
	if len(l) != 6 {
		for _, b := range rows {
			l.forward(b)
		}
		return
	}
	l0, l1, l2, l3, l4, l5 := l.six()
	for _, row := range rows {
		b := (*[6]float64)(row)
		b0 := b[0] * l0[0]
		b1 := (b[1] - float64(l1[0]*b0)) * l1[1]
		b2 := (b[2] - (float64(l2[0]*b0) + float64(l2[1]*b1))) * l2[2]
		b3 := (b[3] - (float64(l3[0]*b0) + float64(l3[1]*b1) + float64(l3[2]*b2))) * l3[3]
		b4 := (b[4] - (float64(l4[0]*b0) + float64(l4[1]*b1) + float64(l4[2]*b2) + float64(l4[3]*b3))) * l4[4]
		b5 := (b[5] - (float64(l5[0]*b0) + float64(l5[1]*b1) + float64(l5[2]*b2) + float64(l5[3]*b3) + float64(l5[4]*b4))) * l5[5]
		*b = [6]float64{b0, b1, b2, b3, b4, b5}
	}
}

// backward overwrites b with L'^-1 b.
func (l lower) backward(b []float64) {
	if len(l) == 6 {
		l.backwardSix((*[6]float64)(b))
		return
	}
	for j := len(l) - 1; j >= 0; j-- {
		row := l[j]
		b[j] *= row[j]
		subtract(b[:j], b[j], row)
	}
}

func (l lower) backwardSix(b *[6]float64) {
	l0, l1, l2, l3, l4, l5 := l.six()
	b5 := b[5] * l5[5]
	b4 := (b[4] - float64(l5[4]*b5)) * l4[4]
	b3 := (b[3] - float64(l5[3]*b5) - float64(l4[3]*b4)) * l3[3]
	b2 := (b[2] - float64(l5[2]*b5) - float64(l4[2]*b4) - float64(l3[2]*b3)) * l2[2]
	b1 := (b[1] - float64(l5[1]*b5) - float64(l4[1]*b4) - float64(l3[1]*b3) - float64(l2[1]*b2)) * l1[1]
	b0 := (b[0] - float64(l5[0]*b5) - float64(l4[0]*b4) - float64(l3[0]*b3) - float64(l2[0]*b2) - float64(l1[0]*b1)) * l0[0]
	*b = [6]float64{b0, b1, b2, b3, b4, b5}
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
