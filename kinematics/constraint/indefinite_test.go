package constraint

import (
	"math"
	"testing"

	"example.org/kinegate/kinematics/internal/golden"

	"gonum.org/v1/gonum/mat"
)

// Solutions and signs of eigenvalues against gonum, for matrices of the shape that a
// fit has and for full ones, some with zeros on the diagonal.
func TestIndefinite(t *testing.T) {
	source := golden.NewSource(7)
	worst, pairs := 0.0, 0
	for trial := range 600 {
		n := 1 + trial%14
		m := newMatrix(n)
		dense := mat.NewSymDense(n, nil)
		for i := range n {
			for j := range i + 1 {
				v := source.Between(-1, 1)
				if trial%2 == 0 && i == j && i%2 == 0 {
					v = 0
				}
				m.add(i, j, v)
				dense.SetSym(i, j, v)
			}
		}
		b := make([]float64, n)
		for i := range b {
			b[i] = source.Between(-1, 1)
		}
		var eigen mat.EigenSym
		if !eigen.Factorize(dense, false) {
			t.Fatal("no eigenvalues")
		}
		positive, smallest := 0, math.Inf(1)
		for _, v := range eigen.Values(nil) {
			if v > 0 {
				positive++
			}
			smallest = math.Min(smallest, math.Abs(v))
		}
		var want mat.VecDense
		if smallest < 1e-6 {
			continue
		}
		if err := want.SolveVec(dense, mat.NewVecDense(n, append([]float64(nil), b...))); err != nil {
			t.Fatal(err)
		}
		d := newIndefinite(n)
		if !d.factor(&m) {
			t.Fatalf("trial %d: called singular, smallest eigenvalue %g", trial, smallest)
		}
		for k := 0; k < n; k++ {
			if d.pair[k] {
				pairs++
				k++
			}
		}
		if d.positive != positive {
			t.Errorf("trial %d: %d positive eigenvalues, want %d", trial, d.positive, positive)
		}
		d.solve(b)
		for i := range b {
			relative := math.Abs(b[i]-want.AtVec(i)) * smallest / (1 + mat.Norm(&want, 2))
			worst = math.Max(worst, relative)
		}
	}
	if worst > 1e-13 {
		t.Errorf("worst error %g times the condition", worst)
	}
	if pairs == 0 {
		t.Error("no pivot of two rows was needed")
	}
	t.Logf("worst error %.2g, %d pivots of two rows", worst, pairs)
}

func TestIndefiniteRefuses(t *testing.T) {
	for name, entries := range map[string][]float64{
		"zero":      {0, 0, 0, 0},
		"rank one":  {1, 0, 1, 1},
		"not known": {math.NaN(), 0, 0, 1},
	} {
		m := matrix{entries: entries, n: 2}
		d := newIndefinite(2)
		if d.factor(&m) {
			t.Errorf("%s: factored", name)
		}
	}
}

func TestCholesky(t *testing.T) {
	m := newMatrix(3)
	for i := range 3 {
		m.add(i, i, 2)
	}
	m.add(2, 1, 1)
	if !m.triangleOf(1, 2).factor(definite) {
		t.Fatal("not positive definite")
	}
	if got, want := m.entries[8], 1/math.Sqrt(1.5); math.Abs(got-want) > 1e-15 {
		t.Errorf("inverse of the last pivot %g, want %g", got, want)
	}
	m = newMatrix(2)
	m.add(0, 0, 1)
	m.add(1, 1, 1)
	m.add(1, 0, 1.1)
	if m.triangleOf(0, 2).factor(definite) {
		t.Error("an indefinite block was factored")
	}
}
