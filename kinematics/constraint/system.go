package constraint

import "math"

// system is the linear system of one step,
//
//	( H  A' ) ( step       )   ( -W x )
//	( A  0  ) ( multiplier ) = ( -f   )
//
// H = W + second derivatives of lambda'f, W the weights of the variables. Its unknowns
// stand in the order of the Problem. The blocks of the clusters are eliminated first,
// by Cholesky factors, then the border is solved. Where a block is not positive
// definite the whole is solved with pivoting.
type system struct {
	matrix matrix
	blocks []block
	border border
	pivots indefinite
	right  []float64
	// scale makes the rows of the border comparable, where they are solved: for an
	// unmeasured variable the change that moves the constraints by one standard
	// deviation, for a constraint one over its standard deviation; 1 for measured
	// variables.
	scale    []float64
	triangle triangle
	// whole says that no cluster was eliminated, plain that those that were are unit
	// matrices.
	whole, plain bool
}

func newSystem(p *Problem) system {
	n := p.variables + p.constraints()
	s := system{
		matrix: newMatrix(n),
		border: newBorder(p.constraints(), p.variables-p.measured),
		pivots: newIndefinite(n),
		right:  make([]float64, n),
		scale:  make([]float64, n),
	}
	for i := range s.scale {
		s.scale[i] = 1
	}
	for i := range p.clusters {
		s.blocks = append(s.blocks, newBlock(&s.matrix, &p.clusters[i]))
	}
	return s
}

// assemble writes the system at the current point with a part, from 0 to 1, of the
// second derivatives, and scales it. The pulls are set unless part is 0.
func (f *Fitter) assemble(part float64) {
	f.write(part)
	f.rescale()
}

// write is assemble before the scaling.
func (f *Fitter) write(part float64) {
	p, s := f.problem, &f.system
	clear(s.matrix.entries)
	for v, w := range p.weight {
		s.matrix.entries[v*s.matrix.n+v] = w
	}
	if part > 0 {
		f.addCurvature(part)
		for k := range p.masses {
			l := 2 * part * f.multiplier[len(p.balance)+k]
			f.addMixing(&p.masses[k].left, l)
			f.addMixing(&p.masses[k].right, -l)
		}
	}
	f.writeConstraints()
}

// addCurvature adds the second derivatives of each object's momentum.
func (f *Fitter) addCurvature(part float64) {
	p, m := f.problem, &f.system.matrix
	for i := range f.bodies {
		b, t := &f.bodies[i], &f.system.triangle
		eta := vector{}
		eta.add(part, &f.pulls[i])
		if !b.curvature(&eta, t) {
			continue
		}
		if b.whole {
			v := b.vars[0]
			first, second, third := m.row(v), m.row(v+1), m.row(v+2)
			first[v] += float64(t[0][0])
			second[v] += float64(t[1][0])
			second[v+1] += float64(t[1][1])
			third[v] += float64(t[2][0])
			third[v+1] += float64(t[2][1])
			third[v+2] += float64(t[2][2])
		} else {
			for a := range b.count {
				for c := range a + 1 {
					m.add(b.vars[a], b.vars[c], t[a][c])
				}
			}
		}
		if b.repointed && p.z != none {
			for a := range b.count {
				m.add(p.z, b.vars[a], f.spreadZ*t[3][a])
			}
			m.add(p.z, p.z, f.spreadZ*f.spreadZ*t[3][3])
		}
	}
}

// addMixing adds what the square of a sum of momenta mixes: twice the multiplier times
// the products of the derivatives.
func (f *Fitter) addMixing(s *side, twice float64) {
	if twice == 0 {
		return
	}
	m := &f.system.matrix
	for i, v := range s.vars {
		low := f.columns[v].lowered(twice)
		row := m.row(v)
		for _, w := range s.vars[:i+1] {
			row[w] += float64(low.on(&f.columns[w]))
		}
	}
	if s.z {
		z := f.problem.z
		along := f.alongZ(s)
		low := along.lowered(twice)
		for _, v := range s.vars {
			m.add(z, v, low.on(&f.columns[v]))
		}
		m.add(z, z, low.on(&along))
	}
}

// alongZ is the derivative of a sum of momenta in the variable of the vertex.
func (f *Fitter) alongZ(s *side) vector {
	var sum vector
	for _, i := range s.objects {
		if f.bodies[i].repointed {
			sum.add(f.spreadZ, &f.bodies[i].alongZ)
		}
	}
	return sum
}

// writeConstraints writes the derivatives of the constraints and their variances into
// squared.
func (f *Fitter) writeConstraints() {
	p, m := f.problem, &f.system.matrix
	if len(p.balance) == maxParameters {
		f.writeWholeBalance()
	} else {
		for k, c := range p.balance {
			f.writeBalance(m.row(p.variables+k), c)
		}
	}
	if p.z != none {
		for k, c := range p.balance {
			row := m.row(p.variables + k)
			for i := range f.bodies {
				if b := &f.bodies[i]; b.repointed {
					row[p.z] += float64(b.sign * f.spreadZ * c.of(&b.alongZ))
				}
			}
		}
	}
	for k := range p.masses {
		row := m.row(p.variables + len(p.balance) + k)
		left, right := &p.masses[k].left, &p.masses[k].right
		f.writeSide(row, left, &f.sums[k][0], 2)
		f.writeSide(row, right, &f.sums[k][1], -2)
	}
	for k := range f.squared {
		row := m.row(p.variables + k)
		sum := dot(row[:p.measured], row)
		if p.z != none {
			sum += float64(p.weight[p.z] * row[p.z] * row[p.z])
		}
		f.squared[k] = sum
	}
}

// writeWholeBalance writes the derivatives of all four components.
func (f *Fitter) writeWholeBalance() {
	p, m := f.problem, &f.system.matrix
	sign := p.sign
	columns := f.columns[:len(sign)]
	x, y := m.row(p.variables)[:len(sign)], m.row(p.variables + 1)[:len(sign)]
	minus, plus := m.row(p.variables + 2)[:len(sign)], m.row(p.variables + 3)[:len(sign)]
	for v, s := range sign {
		c := &columns[v]
		z, energy := c[2], c[3]
		x[v] = s * c[0]
		y[v] = s * c[1]
		minus[v] = s * (energy - z)
		plus[v] = s * (energy + z)
	}
}

// writeBalance writes the derivatives of a component in all variables but the vertex.
func (f *Fitter) writeBalance(row []float64, c component) {
	sign := f.problem.sign
	columns := f.columns[:len(sign)]
	row = row[:len(sign)]
	one, other, factor := c.parts()
	if factor == 0 {
		for v, s := range sign {
			row[v] = s * columns[v][one&3]
		}
		return
	}
	for v, s := range sign {
		column := &columns[v]
		row[v] = s * (column[one&3] + float64(factor*column[other&3]))
	}
}

func (f *Fitter) writeSide(row []float64, s *side, sum *vector, twice float64) {
	low := sum.lowered(twice)
	for _, v := range s.vars {
		row[v] += low.on(&f.columns[v])
	}
	if s.z {
		along := f.alongZ(s)
		row[f.problem.z] += low.on(&along)
	}
}

// exact is the least standard deviation of a constraint, as a part of the sum of all
// energies or of its square: constraints of what is known exactly keep a scale.
const exact = 0x1p-40

// rescale finds the standard deviations of the constraints and the scales of the border.
// A constraint on unmeasured parameters alone has the standard deviation that the other
// constraints leave it.
func (f *Fitter) rescale() {
	p, s := f.problem, &f.system
	bare := false
	for k, sum := range f.squared {
		least := exact * f.total
		if k >= len(p.balance) {
			least *= f.total
		}
		least = float64(least * least)
		if !f.held {
			f.sigma[k] = math.Sqrt(sum + least)
		}
		s.scale[p.variables+k] = 1 / f.sigma[k]
		bare = bare || sum <= least
	}
	if bare && p.unmeasured > 0 && !f.held {
		f.rescaleBare()
	}
	f.rescaleUnmeasured()
}

// rescaleUnmeasured finds the scales of the unmeasured variables from those of the
// constraints.
func (f *Fitter) rescaleUnmeasured() {
	p, s := f.problem, &f.system
	m, inverse := &s.matrix, s.scale[p.variables:]
	for v := p.measured; v < p.variables; v++ {
		s.scale[v] = 1
		if p.weight[v] > 0 {
			continue
		}
		sum, at := 0.0, p.variables*m.n+v
		for _, scale := range inverse {
			a := m.entries[at] * scale
			sum += float64(a * a)
			at += m.n
		}
		if sum > 0 {
			s.scale[v] = 1 / math.Sqrt(sum)
		}
	}
}

// rescaleBare finds the standard deviations of constraints on unmeasured variables alone,
// from the scales that the other constraints give these.
func (f *Fitter) rescaleBare() {
	p, s := f.problem, &f.system
	m, inverse := &s.matrix, s.scale[p.variables:]
	for k, sum := range f.squared {
		if sum <= 0.5*f.sigma[k]*f.sigma[k] {
			inverse[k] = 0
		}
	}
	f.rescaleUnmeasured()
	for k, scale := range inverse {
		if scale > 0 {
			continue
		}
		sum := f.sigma[k] * f.sigma[k]
		for v := p.measured; v < p.variables; v++ {
			a := m.entries[(p.variables+k)*m.n+v] * s.scale[v]
			sum += float64(a * a)
		}
		f.sigma[k] = math.Sqrt(sum)
		inverse[k] = 1 / f.sigma[k]
	}
}

// definite is how much of a diagonal entry of at least one must be left as a pivot
// for a cluster to be eliminated.
const definite = 0x1p-10

// factor factors the system without pivoting. It returns false where that is not stable;
// a plain system has no second derivatives.
func (f *Fitter) factor(plain bool) bool {
	p, s := f.problem, &f.system
	s.whole, s.plain = false, plain
	for i := range s.blocks {
		if !s.blocks[i].eliminate(plain) {
			return false
		}
	}
	return s.border.factor(s, p.measured)
}

// factorWhole factors the system with pivoting. It returns false if it is singular or if
// H does not bend upwards along the constraints.
func (f *Fitter) factorWhole() bool {
	s := &f.system
	s.whole = true
	for r := range s.matrix.n {
		scale, row := s.scale[r], s.matrix.row(r)
		for i, other := range s.scale[:len(row)] {
			row[i] *= scale * other
		}
	}
	return s.pivots.factor(&s.matrix) && s.pivots.positive == f.problem.variables
}

// solve overwrites right with the solution.
func (f *Fitter) solve() {
	p, s := f.problem, &f.system
	b := s.right
	if s.whole {
		s.scaleRight(0)
		s.pivots.solve(b)
		s.scaleRight(0)
		return
	}
	for i := range s.blocks {
		s.blocks[i].collect(s.plain, b)
	}
	s.scaleRight(p.measured)
	s.border.solve(b[p.measured:])
	s.scaleRight(p.measured)
	for i := range s.blocks {
		s.blocks[i].distribute(s.plain, b)
	}
}

// scaleRight applies the scales to the right side from a row on.
func (s *system) scaleRight(from int) {
	right := s.right[from:]
	for i, scale := range s.scale[from:][:len(right)] {
		right[i] *= scale
	}
}
