package constraint

// block is a cluster within a matrix: its triangle, and below it the rows Y' of the border
// over its variables.
type block struct {
	lower
	*cluster

	// below are the parts of the border's rows over the cluster's variables, out the
	// whole rows.
	below, out [][]float64
}

func newBlock(m *matrix, c *cluster) block {
	b := block{lower: m.triangleOf(c.first, c.size), cluster: c}
	for _, r := range c.rows {
		row := m.row(r)
		b.below = append(b.below, row[c.first:c.first+c.size:c.first+c.size])
		b.out = append(b.out, row)
	}
	return b
}

// eliminate takes the cluster out of the rows of the border. A plain one is the unit matrix.
func (b *block) eliminate(plain bool) bool {
	if !plain {
		if !b.factor(definite) {
			return false
		}
		b.forwardAll(b.below)
	}
	b.gram()
	return true
}

// gram subtracts from each entry of the border the product of the two rows there.
func (b *block) gram() {
	rows := b.rows
	switch b.size {
	case 1:
		for i, row := range b.below {
			out, a := b.out[i], row[0]
			if a == 0 {
				continue
			}
			for k, other := range b.below[:i+1] {
				out[rows[k]] -= float64(a * other[0])
			}
		}
	case 3:
		for i, row := range b.below {
			out, a := b.out[i], (*[3]float64)(row)
			for k, other := range b.below[:i+1] {
				y := (*[3]float64)(other)
				out[rows[k]] -= float64(a[0]*y[0]) + float64(a[1]*y[1]) + float64(a[2]*y[2])
			}
		}
	case 6:
		for i, row := range b.below {
			out, a := b.out[i], (*[6]float64)(row)
			for k, other := range b.below[:i+1] {
				y := (*[6]float64)(other)
				out[rows[k]] -= float64(a[0]*y[0]) + float64(a[1]*y[1]) + float64(a[2]*y[2]) +
					float64(a[3]*y[3]) + float64(a[4]*y[4]) + float64(a[5]*y[5])
			}
		}
	default:
		for i, row := range b.below {
			out := b.out[i]
			for k, other := range b.below[:i+1] {
				out[rows[k]] -= dot(row, other)
			}
		}
	}
}

// collect applies the factor to the cluster's part of right and takes it out of the border's.
func (b *block) collect(plain bool, right []float64) {
	x := right[b.first:][:b.size]
	if !plain {
		one := [1][]float64{x}
		b.forwardAll(one[:])
	}
	switch b.size {
	case 1:
		for i, r := range b.rows {
			right[r] -= float64(x[0] * b.below[i][0])
		}
	case 3:
		z := (*[3]float64)(x)
		for i, r := range b.rows {
			y := (*[3]float64)(b.below[i])
			right[r] -= float64(z[0]*y[0]) + float64(z[1]*y[1]) + float64(z[2]*y[2])
		}
	case 6:
		z := (*[6]float64)(x)
		for i, r := range b.rows {
			y := (*[6]float64)(b.below[i])
			right[r] -= float64(z[0]*y[0]) + float64(z[1]*y[1]) + float64(z[2]*y[2]) +
				float64(z[3]*y[3]) + float64(z[4]*y[4]) + float64(z[5]*y[5])
		}
	default:
		for i, r := range b.rows {
			right[r] -= dot(x, b.below[i])
		}
	}
}

// distribute finds the cluster's part of the solution from that of the border.
func (b *block) distribute(plain bool, right []float64) {
	x := right[b.first:][:b.size]
	if b.size == 6 {
		z := (*[6]float64)(x)
		z0, z1, z2, z3, z4, z5 := z[0], z[1], z[2], z[3], z[4], z[5]
		for i, r := range b.rows {
			y, w := (*[6]float64)(b.below[i]), right[r]
			z0 -= float64(w * y[0])
			z1 -= float64(w * y[1])
			z2 -= float64(w * y[2])
			z3 -= float64(w * y[3])
			z4 -= float64(w * y[4])
			z5 -= float64(w * y[5])
		}
		*z = [6]float64{z0, z1, z2, z3, z4, z5}
	} else {
		for i, r := range b.rows {
			subtract(x, right[r], b.below[i])
		}
	}
	if !plain {
		b.backward(x)
	}
}
