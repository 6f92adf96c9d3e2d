package constraint

import "math"

// indefinite is the factorisation P L D L' P' of a matrix, D with blocks of one or two
// rows.
type indefinite struct {
	m *matrix
	// swap is the row that row k was exchanged with; pair marks the first row of a
	// block of two.
	swap []int
	pair []bool
	// left and right hold the columns of a pivot.
	left, right []float64
	// positive is the number of positive eigenvalues of D; the others are negative.
	positive int
}

// growth is (1 + sqrt 17)/8, which balances the growth of one step with two rows
// against that of two steps with one.
const growth = 0.6403882032022076

// negligible is the pivot, of a matrix with entries of about one, that counts as zero:
// what rounding leaves of a difference of equal numbers after some tens of steps.
const negligible = 0x1p-47

func newIndefinite(n int) indefinite {
	return indefinite{
		swap: make([]int, n), pair: make([]bool, n), left: make([]float64, n), right: make([]float64, n),
	}
}

// factor factors m in place, with diagonal pivoting. It returns false if the matrix is
// singular within the rounding or has a NaN.
//
// Source: J. R. Bunch and L. Kaufman, "Some stable methods for calculating inertia and
// solving symmetric linear systems", Mathematics of Computation 31 (1977) 163,
// algorithm A; section from memory.
func (d *indefinite) factor(m *matrix) bool {
	d.m, d.positive = m, 0
	a, n := m.entries, m.n
	for k := 0; k < n; {
		largest, colmax := k, 0.0
		for i := k + 1; i < n; i++ {
			if v := math.Abs(a[i*n+k]); v > colmax {
				largest, colmax = i, v
			}
		}
		diagonal := math.Abs(a[k*n+k])
		if !(math.Max(diagonal, colmax) > negligible) {
			return false
		}
		with, width := k, 1
		if diagonal < growth*colmax {
			rowmax := 0.0
			for j := k; j < largest; j++ {
				rowmax = math.Max(rowmax, math.Abs(a[largest*n+j]))
			}
			for i := largest + 1; i < n; i++ {
				rowmax = math.Max(rowmax, math.Abs(a[i*n+largest]))
			}
			switch {
			case diagonal*rowmax >= growth*colmax*colmax:
			case math.Abs(a[largest*n+largest]) >= growth*rowmax:
				with = largest
			default:
				with, width = largest, 2
			}
		}
		last := k + width - 1
		d.exchange(k, last, with)
		d.pair[last] = false
		d.swap[last], d.pair[k] = with, width == 2
		switch {
		case width == 2:
			d.eliminateTwo(k)
		case !d.eliminate(k):
			return false
		}
		k += width
	}
	return true
}

// exchange swaps rows and columns p and q > p of what is left from row k on.
func (d *indefinite) exchange(k, p, q int) {
	if p == q {
		return
	}
	a, n := d.m.entries, d.m.n
	for j := k; j < p; j++ {
		a[p*n+j], a[q*n+j] = a[q*n+j], a[p*n+j]
	}
	for i := p + 1; i < q; i++ {
		a[i*n+p], a[q*n+i] = a[q*n+i], a[i*n+p]
	}
	for i := q + 1; i < n; i++ {
		a[i*n+p], a[i*n+q] = a[i*n+q], a[i*n+p]
	}
	a[p*n+p], a[q*n+q] = a[q*n+q], a[p*n+p]
}

// eliminate takes a pivot of one row and returns false if it is none. The diagonal
// keeps its inverse.
func (d *indefinite) eliminate(k int) bool {
	a, n := d.m.entries, d.m.n
	pivot := a[k*n+k]
	if !(math.Abs(pivot) > negligible) {
		return false
	}
	if pivot > 0 {
		d.positive++
	}
	inverse := 1 / pivot
	a[k*n+k] = inverse
	left := d.left[:n-k-1]
	for i := range left {
		left[i] = a[(k+1+i)*n+k]
	}
	for i, c := range left {
		if c == 0 {
			continue
		}
		w := c * inverse
		at := (k + 1 + i) * n
		a[at+k] = w
		row := a[at+k+1 : at+k+2+i]
		for j := range row {
			row[j] -= float64(w * left[j])
		}
	}
	return true
}

// eliminateTwo takes a pivot of two rows, which keep its inverse. The choice of the
// pivot bounds its determinant: |det| >= (1 - growth^2) times the square of the entry
// off the diagonal, and it is negative.
func (d *indefinite) eliminateTwo(k int) {
	a, n := d.m.entries, d.m.n
	first, off, second := a[k*n+k], a[(k+1)*n+k], a[(k+1)*n+k+1]
	det := float64(first*second) - float64(off*off)
	first, off, second = second/det, -off/det, first/det
	a[k*n+k], a[(k+1)*n+k], a[(k+1)*n+k+1] = first, off, second
	d.positive++
	left, right := d.left[:n-k-2], d.right[:n-k-2]
	for i := range left {
		left[i], right[i] = a[(k+2+i)*n+k], a[(k+2+i)*n+k+1]
	}
	for i := range left {
		v := float64(first*left[i]) + float64(off*right[i])
		w := float64(off*left[i]) + float64(second*right[i])
		at := (k + 2 + i) * n
		a[at+k], a[at+k+1] = v, w
		row := a[at+k+2 : at+k+3+i]
		for j := range row {
			row[j] -= float64(v*left[j]) + float64(w*right[j])
		}
	}
}

// solve overwrites b with the solution.
func (d *indefinite) solve(b []float64) {
	a, n := d.m.entries, d.m.n
	for k := 0; k < n; k++ {
		last := k
		if d.pair[k] {
			last++
		}
		with := d.swap[last]
		b[last], b[with] = b[with], b[last]
		for i := last + 1; i < n; i++ {
			for j := k; j <= last; j++ {
				b[i] -= float64(a[i*n+j] * b[j])
			}
		}
		v := b[k]
		b[k] = float64(a[k*n+k] * v)
		if last > k {
			w := b[last]
			b[k] += float64(a[last*n+k] * w)
			b[last] = float64(a[last*n+k]*v) + float64(a[last*n+last]*w)
			k++
		}
	}
	for last := n - 1; last >= 0; last-- {
		k := last
		if last > 0 && d.pair[last-1] {
			k--
		}
		for j := k; j <= last; j++ {
			for i := last + 1; i < n; i++ {
				b[j] -= float64(a[i*n+j] * b[i])
			}
		}
		with := d.swap[last]
		b[last], b[with] = b[with], b[last]
		last = k
	}
}
