package constraint

// matrix is the lower triangle of a symmetric matrix, row by row, with the stride of
// the whole square.
type matrix struct {
	entries []float64
	n       int
}

func newMatrix(n int) matrix { return matrix{entries: make([]float64, n*n), n: n} }

// row returns row i up to the diagonal.
func (m *matrix) row(i int) []float64 { return m.entries[i*m.n : i*m.n+i+1] }

// add adds to the entry of rows a and b. The caller's product is rounded first.
func (m *matrix) add(a, b int, v float64) {
	if a < b {
		a, b = b, a
	}
	m.entries[a*m.n+b] += float64(v)
}
