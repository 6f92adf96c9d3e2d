package constraint

// The inner loops over the variables of a cluster. A cluster is most often one object or a
// pair of them, so sizes of three and six are written out; the order of the sums is the
// same for every size.

// dot returns the scalar product of a and b, which is at least as long.
func dot(a, b []float64) float64 {
	switch len(a) {
	case 3:
		x, y := (*[3]float64)(a), (*[3]float64)(b)
		return float64(x[0]*y[0]) + float64(x[1]*y[1]) + float64(x[2]*y[2])
	case 6:
		x, y := (*[6]float64)(a), (*[6]float64)(b)
		return float64(x[0]*y[0]) + float64(x[1]*y[1]) + float64(x[2]*y[2]) +
			float64(x[3]*y[3]) + float64(x[4]*y[4]) + float64(x[5]*y[5])
	}
	b = b[:len(a)]
	sum := 0.0
	for k, v := range a {
		sum += float64(v * b[k])
	}
	return sum
}

// subtract subtracts w times b from a, which is at most as long.
func subtract(a []float64, w float64, b []float64) {
	switch len(a) {
	case 3:
		x, y := (*[3]float64)(a), (*[3]float64)(b)
		x[0] -= float64(w * y[0])
		x[1] -= float64(w * y[1])
		x[2] -= float64(w * y[2])
		return
	case 6:
		x, y := (*[6]float64)(a), (*[6]float64)(b)
		x[0] -= float64(w * y[0])
		x[1] -= float64(w * y[1])
		x[2] -= float64(w * y[2])
		x[3] -= float64(w * y[3])
		x[4] -= float64(w * y[4])
		x[5] -= float64(w * y[5])
		return
	}
	b = b[:len(a)]
	for k, v := range b {
		a[k] -= float64(w * v)
	}
}

// forward overwrites b with L^-1 b for a factor L of the size of b, of which rows start
// at entry at, with the inverse on the diagonal.
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
	b0 := b[0] * e[0]
	l1 := e[n:][:2]
	b1 := (b[1] - float64(l1[0]*b0)) * l1[1]
	l2 := e[2*n:][:3]
	b2 := (b[2] - (float64(l2[0]*b0) + float64(l2[1]*b1))) * l2[2]
	l3 := e[3*n:][:4]
	b3 := (b[3] - (float64(l3[0]*b0) + float64(l3[1]*b1) + float64(l3[2]*b2))) * l3[3]
	l4 := e[4*n:][:5]
	b4 := (b[4] - (float64(l4[0]*b0) + float64(l4[1]*b1) + float64(l4[2]*b2) + float64(l4[3]*b3))) * l4[4]
	l5 := e[5*n:][:6]
	b5 := (b[5] - (float64(l5[0]*b0) + float64(l5[1]*b1) + float64(l5[2]*b2) + float64(l5[3]*b3) + float64(l5[4]*b4))) * l5[5]
	*b = [6]float64{b0, b1, b2, b3, b4, b5}
}

// backward overwrites b with L'^-1 b.
func (m *matrix) backward(at int, b []float64) {
	for j := len(b) - 1; j >= 0; j-- {
		lower := m.entries[at+j*m.n:][:j+1]
		b[j] *= lower[j]
		subtract(b[:j], b[j], lower)
	}
}
