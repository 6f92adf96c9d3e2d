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

// cholesky factors the block of the given rows in place, L L' = block, with the
// inverse on the diagonal of L. It returns false if a pivot is not above the least.
func (m *matrix) cholesky(first, size int, least float64) bool {
	at := first * (m.n + 1)
	for i := range size {
		row := m.entries[at+i*m.n:][:i+1]
		done := row[:i]
		for j := range done {
			lower := m.entries[at+j*m.n:][:j+1]
			done[j] = (done[j] - dot(lower[:j], done)) * lower[j]
		}
		pivot := row[i] - dot(done, done)
		if !(pivot > least) {
			return false
		}
		row[i] = 1 / math.Sqrt(pivot)
	}
	return true
}
