package constraint

import "math"

// system is the linear system of one step,
//
//	( H  A' ) ( step       )   ( -W x )
//	( A  0  ) ( multiplier ) = ( -f   )
//
// H = W + second derivatives of lambda'f, W the weights of the variables. Its unknowns
// stand in the order of the Problem. The blocks of the clusters are eliminated first,
// by Cholesky factors; what they leave of the border and the multipliers is solved
// with pivoting. Where a block is not positive definite all is solved with pivoting.
type system struct {
	matrix matrix
	pivots indefinite
	right  []float64
	// scale makes the unmeasured variables and the constraints comparable: the change
	// that moves the constraints by one standard deviation, and one over the
	// standard deviation; 1 for measured variables.
	scale    []float64
	triangle triangle
	// whole says that no cluster was eliminated.
	whole bool
}

func newSystem(n int) system {
	return system{
		matrix: newMatrix(n),
		pivots: newIndefinite(n),
		right:  make([]float64, n),
		scale:  make([]float64, n),
	}
}

// unit is the natural unit of a variable.
func (s *system) unit(v int) float64 { return s.scale[v] }

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
		for a := range b.count {
			for c := range a + 1 {
				m.add(b.vars[a], b.vars[c], t[a][c])
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
		for _, w := range s.vars[:i+1] {
			m.add(v, w, low.on(&f.columns[w]))
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

// writeConstraints writes the derivatives of the constraints.
func (f *Fitter) writeConstraints() {
	p, m := f.problem, &f.system.matrix
	for k, c := range p.balance {
		row := m.row(p.variables + k)
		for i := range p.parts {
			r := &p.parts[i]
			for _, v := range r.vars[:r.count] {
				row[v] = r.sign * c.of(&f.columns[v])
			}
			if r.repointed && p.z != none {
				row[p.z] += float64(r.sign * f.spreadZ * c.of(&f.bodies[i].alongZ))
			}
		}
	}
	for k := range p.masses {
		row := m.row(p.variables + len(p.balance) + k)
		f.writeSide(row, &p.masses[k].left, &f.sums[k][0], 2)
		f.writeSide(row, &p.masses[k].right, &f.sums[k][1], -2)
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

// rescale finds the standard deviations of the constraints and scales the border.
func (f *Fitter) rescale() {
	p, s := f.problem, &f.system
	m := &s.matrix
	for k := range f.residual {
		row := m.row(p.variables + k)
		least := exact * f.total
		if k >= len(p.balance) {
			least *= f.total
		}
		sum := float64(least * least)
		for _, a := range row[:p.measured] {
			sum += float64(a * a)
		}
		if p.z != none && p.weight[p.z] > 0 {
			sum += float64(row[p.z] * row[p.z])
		}
		if !f.held {
			f.sigma[k] = math.Sqrt(sum)
		}
		s.scale[p.variables+k] = 1 / f.sigma[k]
	}
	for v := range p.variables {
		s.scale[v] = 1
		if p.weight[v] > 0 {
			continue
		}
		sum := 0.0
		for k := range f.residual {
			a := m.entries[(p.variables+k)*m.n+v] * s.scale[p.variables+k]
			sum += float64(a * a)
		}
		if sum > 0 {
			s.scale[v] = 1 / math.Sqrt(sum)
		}
	}
	for r := p.measured; r < m.n; r++ {
		scale := s.scale[r]
		row := m.row(r)
		for v := range row {
			row[v] *= scale * s.scale[v]
		}
	}
}

// factor factors the system. It returns false if it is singular or if H does not bend
// upwards along the constraints.
func (f *Fitter) factor(plain bool) bool {
	p, s := f.problem, &f.system
	s.whole = false
	for i := range p.clusters {
		if c := &p.clusters[i]; !s.eliminate(c, plain) {
			return false
		}
	}
	return s.pivots.factor(&s.matrix, p.measured) && s.pivots.positive == p.variables-p.measured
}

// factorWhole does the same with pivoting from the start.
func (f *Fitter) factorWhole() bool {
	s := &f.system
	s.whole = true
	return s.pivots.factor(&s.matrix, 0) && s.pivots.positive == f.problem.variables
}

// eliminate takes a cluster out of the rows that it mixes with. A plain one is the unit
// matrix.
func (s *system) eliminate(c *cluster, plain bool) bool {
	m := &s.matrix
	if !plain {
		if !m.cholesky(c.first, c.size) {
			return false
		}
		for _, r := range c.rows {
			row := m.entries[r*m.n+c.first:][:c.size]
			for j := range row {
				lower := m.entries[(c.first+j)*m.n+c.first:][:j+1]
				v := row[j]
				for k, w := range lower[:j] {
					v -= float64(w * row[k])
				}
				row[j] = v * lower[j]
			}
		}
	}
	for i, r := range c.rows {
		left := m.entries[r*m.n+c.first:][:c.size]
		for _, q := range c.rows[:i+1] {
			right := m.entries[q*m.n+c.first:][:c.size]
			sum := 0.0
			for k, w := range left {
				sum += float64(w * right[k])
			}
			m.entries[r*m.n+q] -= sum
		}
	}
	return true
}

// solve overwrites right with the solution; plain as in factor.
func (f *Fitter) solve(plain bool) {
	p, s := f.problem, &f.system
	m, b := &s.matrix, s.right
	for i, scale := range s.scale {
		b[i] *= scale
	}
	if s.whole {
		s.pivots.solve(b)
	} else {
		for i := range p.clusters {
			c := &p.clusters[i]
			part := b[c.first:][:c.size]
			if !plain {
				for j := range part {
					lower := m.entries[(c.first+j)*m.n+c.first:][:j+1]
					v := part[j]
					for k, w := range lower[:j] {
						v -= float64(w * part[k])
					}
					part[j] = v * lower[j]
				}
			}
			for _, r := range c.rows {
				for k, w := range m.entries[r*m.n+c.first:][:c.size] {
					b[r] -= float64(w * part[k])
				}
			}
		}
		s.pivots.solve(b[p.measured:])
		for i := range p.clusters {
			s.back(&p.clusters[i], plain)
		}
	}
	for i, scale := range s.scale {
		b[i] *= scale
	}
}

// back finds the unknowns of a cluster from those of the border.
func (s *system) back(c *cluster, plain bool) {
	m := &s.matrix
	part := s.right[c.first:][:c.size]
	for _, r := range c.rows {
		w := s.right[r]
		for k, v := range m.entries[r*m.n+c.first:][:c.size] {
			part[k] -= float64(v * w)
		}
	}
	if plain {
		return
	}
	for j := c.size - 1; j >= 0; j-- {
		lower := m.entries[(c.first+j)*m.n+c.first:][:j+1]
		v := part[j] * lower[j]
		part[j] = v
		for k := range j {
			part[k] -= float64(lower[k] * v)
		}
	}
}
