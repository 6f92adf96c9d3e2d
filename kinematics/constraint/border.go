package constraint

// border is the system that is left when the clusters are eliminated,
//
//	( -S  B' ) ( multiplier )   ( c )
//	(  B  U  ) ( variable   ) = ( b )
//
// of the constraints and the variables outside the clusters. S, the covariance of the
// constraints, and then U + B S^-1 B' are positive definite unless the constraints depend on
// unmeasured parameters alone, or on each other, or the Lagrangian does not bend upwards
// along them. A factor then exists without pivoting: L L' = S, M M' = U + Y' Y with
// Y = L^-1 B'.
type border struct {
	matrix matrix // S, then below it the rows of Y' and the factor M
	// constraints is the size of S.
	constraints int
}

// independent is the least pivot, of a matrix with entries of about one, with which the
// border is solved without pivoting.
const independent = 0x1p-40

// factor copies the rows of the border from a system, first its variables, then its
// constraints, applies the scales and factors it. It returns false if a block is not
// positive definite.
func (b *border) factor(s *system, first int) bool {
	m, from := &b.matrix, &s.matrix
	n, k := m.n, b.constraints
	variables := n - k
	scale := s.scale[first:]
	inner, outer := scale[:variables], scale[variables:]
	for i, di := range outer {
		row := from.entries[(first+variables+i)*from.n+first:][:variables+i+1]
		at := k*n + i
		for u, v := range row[:len(inner)] {
			m.entries[at] = v * di * inner[u]
			at += n
		}
		row = row[len(inner):]
		to := m.entries[i*n:][:len(row)]
		for j, v := range row {
			to[j] = -v * di * outer[j]
		}
	}
	for u, du := range inner {
		row := from.entries[(first+u)*from.n+first:][:u+1]
		to := m.entries[(k+u)*n+k:][:len(row)]
		for w, v := range row {
			to[w] = v * du * inner[w]
		}
	}
	if !m.cholesky(0, k, independent) {
		return false
	}
	for u := range variables {
		left := m.entries[(k+u)*n:][:k+u+1]
		m.forward(0, left[:k])
		for w := range u + 1 {
			left[k+w] += dot(left[:k], m.entries[(k+w)*n:])
		}
	}
	return m.cholesky(k, variables, independent)
}

// solve overwrites b, the right sides of the variables and then of the constraints.
func (b *border) solve(right []float64) {
	m := &b.matrix
	n, k := m.n, b.constraints
	x, y := right[:n-k], right[n-k:]
	m.forward(0, y)
	for u := range x {
		x[u] += dot(y, m.entries[(k+u)*n:])
	}
	at := k * (n + 1)
	m.forward(at, x)
	m.backward(at, x)
	for i := range y {
		y[i] = -y[i]
	}
	for u, v := range x {
		subtract(y, -v, m.entries[(k+u)*n:])
	}
	m.backward(0, y)
}
