package constraint

import "math"

// Fitter fits one event at a time for a Problem. It is not safe for use by several
// workers at once; each has its own. Its methods allocate nothing.
type Fitter struct {
	// Measurements has one entry per object of the Spec; the caller fills it, and the
	// Vertex, before each fit. Values of objects that are not measured do not matter.
	Measurements []Measurement
	Vertex       Vertex

	problem *Problem
	bodies  []body
	// x are the unknowns from the measured values in standard deviations, or from the
	// start in units for what is not measured; step is the way to the next, before
	// where the last step began.
	x, before, step []float64
	// gradient is that of the Lagrangian.
	gradient []float64
	// columns are the derivatives of each variable's four-momentum.
	columns []vector
	// residual are the constraints, sigma their standard deviations, and multiplier
	// their multipliers.
	residual, sigma, multiplier, next []float64
	// squared are their variances.
	squared []float64
	// initial are the residuals before the first step.
	initial []float64
	// sums are the two sides of the mass constraints.
	sums [][2]vector
	// pulls are the derivatives of the constraints times multipliers in each
	// object's four-momentum.
	pulls []vector
	// total is the sum of all energies, the scale of the rounding.
	total float64
	// vertex is where the vertex stands and spreadZ the length of one unit of its
	// variable.
	vertex  [3]float64
	spreadZ float64

	system system
	// penalty is the weight of the squared residuals in the merit.
	penalty float64
	// held says that sigma stays as it is.
	held bool
	// covariance is that of the variables, once it is propagated; without one its size
	// is zero.
	covariance matrix
	propagated bool
	result     Result
}

// NewFitter returns a fitter with the masses of the specification.
func (p *Problem) NewFitter() *Fitter {
	n, m := p.variables, p.constraints()
	f := &Fitter{
		Measurements: make([]Measurement, len(p.parts)),
		problem:      p,
		bodies:       make([]body, len(p.parts)),
		x:            make([]float64, n),
		before:       make([]float64, n),
		step:         make([]float64, n),
		gradient:     make([]float64, n),
		columns:      make([]vector, n),
		residual:     make([]float64, m),
		initial:      make([]float64, m),
		sigma:        make([]float64, m),
		squared:      make([]float64, m),
		multiplier:   make([]float64, m),
		next:         make([]float64, m),
		sums:         make([][2]vector, len(p.masses)),
		pulls:        make([]vector, len(p.parts)),
		system:       newSystem(p),
		covariance:   newMatrix(n),
	}
	for i := range f.bodies {
		f.bodies[i].part = &p.parts[i]
		f.Measurements[i].MassGeV = p.parts[i].mass
	}
	return f
}

// load takes the measurements.
func (f *Fitter) load() bool {
	clear(f.x)
	f.propagated = false
	for i := range f.bodies {
		if !f.bodies[i].load(&f.Measurements[i]) {
			return false
		}
	}
	v := f.Vertex.Position
	f.vertex = [3]float64{v.X, v.Y, v.Z}
	f.spreadZ = 1
	if f.problem.vertex == VertexMeasured {
		f.spreadZ = f.Vertex.SigmaZ
	}
	return finite(v.X) && finite(v.Y) && finite(v.Z) && f.spreadZ >= 0 && f.spreadZ <= maxMagnitude
}

// evaluate computes all momenta, their derivatives and the constraints at x.
func (f *Fitter) evaluate() {
	p := f.problem
	v := f.vertex
	if p.z != none {
		v[2] += float64(f.spreadZ * f.x[p.z])
	}
	for i := range f.bodies {
		b := &f.bodies[i]
		b.place(f.x)
		b.evaluate(&v, f.columns)
	}
	f.balance()
}

// balance computes the constraints from the momenta.
func (f *Fitter) balance() {
	p := f.problem
	var sum vector
	total := math.Abs(p.known[3])
	for i := range f.bodies {
		b := &f.bodies[i]
		sum.add(b.sign, &b.momentum)
		total += math.Abs(b.momentum[3])
	}
	f.total = total
	sum.add(-1, &p.known)
	for k, c := range p.balance {
		f.residual[k] = c.of(&sum)
	}
	for k := range p.masses {
		row, sums := &p.masses[k], &f.sums[k]
		*sums = [2]vector{}
		for _, i := range row.left.objects {
			sums[0].add(1, &f.bodies[i].momentum)
		}
		for _, i := range row.right.objects {
			sums[1].add(1, &f.bodies[i].momentum)
		}
		f.residual[len(p.balance)+k] = sums[0].square() - sums[1].square() - row.square
	}
}

// parts says that the component is one entry of a vector plus a factor times another.
func (c component) parts() (one, other int, factor float64) {
	switch c {
	case balanceX:
	case balanceY:
		one = 1
	case balanceZ:
		one = 2
	case balanceEnergy:
		one = 3
	case balanceMinus:
		return 3, 2, -1
	case balancePlus:
		return 3, 2, 1
	}
	return one, one, 0
}

// of returns the component of a vector.
func (c component) of(v *vector) float64 {
	one, other, factor := c.parts()
	return v[one] + float64(factor*v[other])
}

// square returns the mass squared.
func (c *vector) square() float64 {
	return float64((c[3]-c[2])*(c[3]+c[2])) - float64(c[0]*c[0]) - float64(c[1]*c[1])
}

// pull sets the covector of each object: the derivative of lambda'f in its
// four-momentum.
func (f *Fitter) pull(multiplier []float64) {
	p := f.problem
	var balance vector
	for k, c := range p.balance {
		l := multiplier[k]
		switch c {
		case balanceX:
			balance[0] += l
		case balanceY:
			balance[1] += l
		case balanceZ:
			balance[2] += l
		case balanceEnergy:
			balance[3] += l
		case balanceMinus:
			balance[2] -= l
			balance[3] += l
		case balancePlus:
			balance[2] += l
			balance[3] += l
		}
	}
	for i := range f.pulls {
		f.pulls[i] = vector{}
		f.pulls[i].add(p.parts[i].sign, &balance)
	}
	for k := range p.masses {
		l := multiplier[len(p.balance)+k]
		left, right := f.sums[k][0].lowered(2*l), f.sums[k][1].lowered(-2*l)
		for _, i := range p.masses[k].left.objects {
			f.pulls[i].add(1, &left)
		}
		for _, i := range p.masses[k].right.objects {
			f.pulls[i].add(1, &right)
		}
	}
}

// stationarity computes the gradient of the Lagrangian and returns its largest component
// in units of standard deviations. An unmeasured parameter counts in units of the change
// that moves the constraints by one standard deviation. The pulls are set.
func (f *Fitter) stationarity() float64 {
	p := f.problem
	for i := range f.bodies {
		b, eta := &f.bodies[i], &f.pulls[i]
		if b.whole {
			v := b.vars[0]
			g, x, c := (*[3]float64)(f.gradient[v:]), (*[3]float64)(f.x[v:]), (*[3]vector)(f.columns[v:])
			w := p.weight[v]
			g[0] = float64(w*x[0]) + eta.on(&c[0])
			g[1] = float64(w*x[1]) + eta.on(&c[1])
			g[2] = float64(w*x[2]) + eta.on(&c[2])
			continue
		}
		for _, v := range b.vars[:b.count] {
			f.gradient[v] = float64(p.weight[v]*f.x[v]) + eta.on(&f.columns[v])
		}
	}
	if p.z != none {
		g := float64(p.weight[p.z] * f.x[p.z])
		for i := range f.bodies {
			if f.bodies[i].repointed {
				g += float64(f.spreadZ * f.pulls[i].on(&f.bodies[i].alongZ))
			}
		}
		f.gradient[p.z] = g
	}
	largest := 0.0
	for _, g := range f.gradient[:p.measured] {
		largest = worse(largest, g)
	}
	for v := p.measured; v < p.variables; v++ {
		largest = worse(largest, f.gradient[v]*f.system.scale[v])
	}
	return largest
}

// worse returns the larger magnitude, and NaN if there is one.
func worse(largest, v float64) float64 {
	if v = math.Abs(v); v > largest || v != v {
		return v
	}
	return largest
}

// violation returns the largest constraint in units of standard deviations, after
// what rounding may leave is taken off, and how much of it there is.
func (f *Fitter) violation() float64 {
	largest := 0.0
	for k, r := range f.residual {
		if r = math.Abs(r) - f.rounding(k); r <= 0 {
			continue
		}
		largest = worse(largest, r/f.sigma[k])
	}
	return largest
}

// rounding bounds what is left of constraint k by the rounding of its terms: an energy
// is good to about 4 x 2^-53, a square of a sum to twice that and its own roundings.
func (f *Fitter) rounding(k int) float64 {
	if k < len(f.problem.balance) {
		return 0x1p-50 * f.total
	}
	return 0x1p-49 * f.total * f.total
}
