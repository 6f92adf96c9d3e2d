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
	// covariance is S, variables U, and below the rows of B; in the end L, M and Y'.
	covariance, variables lower
	below                 [][]float64
}

func newBorder(constraints, variables int) border {
	m := newMatrix(constraints + variables)
	b := border{covariance: m.triangleOf(0, constraints), variables: m.triangleOf(constraints, variables)}
	for u := range variables {
		b.below = append(b.below, m.row(constraints + u)[:constraints:constraints])
	}
	return b
}

// independent is the least pivot, of a matrix with entries of about one, with which the
// border is solved without pivoting.
const independent = 0x1p-40

// factor copies the rows of the border from a system, first its variables, then its
// constraints, applies the scales and factors it. It returns false if a block is not
// positive definite.
func (b *border) factor(s *system, first int) bool {
	from := &s.matrix
	scale := s.scale[first:]
	inner, outer := scale[:len(b.variables)], scale[len(b.variables):]
	for i, di := range outer {
		row := from.entries[(first+len(inner)+i)*from.n+first:][:len(inner)+i+1]
		for u, v := range row[:len(inner)] {
			b.below[u][i] = v * di * inner[u]
		}
		row = row[len(inner):]
		to := b.covariance[i][:len(row)]
		for j, v := range row {
			to[j] = -v * di * outer[j]
		}
	}
	for u, du := range inner {
		row := from.entries[(first+u)*from.n+first:][:u+1]
		to := b.variables[u][:len(row)]
		for w, v := range row {
			to[w] = v * du * inner[w]
		}
	}
	if !b.covariance.factor(independent) {
		return false
	}
	b.covariance.forwardAll(b.below)
	for u, row := range b.variables {
		for w := range row {
			row[w] += dot(b.below[u], b.below[w])
		}
	}
	return b.variables.factor(independent)
}

// solve overwrites b, the right sides of the variables and then of the constraints.
func (b *border) solve(right []float64) {
	x, y := right[:len(b.variables)], right[len(b.variables):]
	one := [1][]float64{y}
	b.covariance.forwardAll(one[:])
	for u := range x {
		x[u] += dot(y, b.below[u])
	}
	b.variables.forward(x)
	b.variables.backward(x)
	for i := range y {
		y[i] = -y[i]
	}
	for u, v := range x {
		subtract(y, -v, b.below[u])
	}
	b.covariance.backward(y)
}
