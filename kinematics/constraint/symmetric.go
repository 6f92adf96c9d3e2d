package constraint

import "math"

// matrix is the lower triangle of a symmetric matrix, row by row, with the stride of
// the whole square.
type matrix struct {
	entries []float64
	n       int
}

func newMatrix(n int) matrix { return matrix{entries: make([]float64, n*n), n: n} }

// row returns row i up to the diagonal.
func (m *matrix) row(i int) []float64 { return m.entries[i*m.n : i*m.n+i+1] }

// add adds to the entry of rows a and b.
func (m *matrix) add(a, b int, v float64) {
	if a < b {
		a, b = b, a
	}
	m.entries[a*m.n+b] += v
}

// definite is how much of a diagonal entry of at least one must be left as a pivot
// for a block to count as positive definite. Below it the block is solved with
// pivoting.
const definite = 0x1p-10

// cholesky factors the block of the given rows in place, L L' = block, with the
// inverse on the diagonal of L. It returns false if the block is not positive definite.
func (m *matrix) cholesky(first, size int) bool {
	for i := first; i < first+size; i++ {
		row := m.entries[i*m.n+first : i*m.n+i+1]
		for j := range row {
			other := m.entries[(first+j)*m.n+first : (first+j)*m.n+first+j+1]
			v := row[j]
			for k, w := range other[:j] {
				v -= float64(row[k] * w)
			}
			if j < len(row)-1 {
				row[j] = v * other[j]
				continue
			}
			if !(v > definite) {
				return false
			}
			row[j] = 1 / math.Sqrt(v)
		}
	}
	return true
}
