package constraint

import (
	"math"

	"example.org/kinegate/kinematics/event"
)

// The search for a start of the unmeasured parameters: the number of steps, the
// weight that keeps a parameter where it is if no constraint moves it, in units of what
// the constraints do, and the weight that holds the vertex.
const (
	startSteps  = 10
	startWeight = 1e-4
	startHold   = 1e12
)

// begin gives the unmeasured parameters their start: sizes of momenta the mean energy
// of what is measured, missing momenta an equal share of what is missing, and then
// all of them what meets the constraints best with the measured ones held. The vertex
// starts where it is given.
func (f *Fitter) begin() {
	if f.problem.unmeasured == 0 {
		f.evaluate()
		return
	}
	typical := f.typical()
	missing, others := 0, false
	for i := range f.bodies {
		b := &f.bodies[i]
		switch b.form {
		case Missing, MissingMass:
			missing++
		case Coordinates, Along, formEnd:
			others = b.beginOf(typical) || others
		}
	}
	f.evaluate()
	if missing > 0 {
		f.share()
		f.balance()
	}
	if others || missing > 1 {
		f.settle()
	}
}

// typical is the mean size of the measured momenta, or 1 GeV without any.
func (f *Fitter) typical() float64 {
	sum, n := 0.0, 0
	for i := range f.bodies {
		b := &f.bodies[i]
		if b.mask&1 == 1 && b.sized() {
			sum += b.start[0]
			n++
		}
	}
	if n == 0 || !(sum > 0) {
		return 1
	}
	return sum / float64(n)
}

// beginOf sets where the unmeasured parameters of an object start and tells whether
// there are any.
func (b *body) beginOf(typical float64) bool {
	if b.mask&1 == 0 && b.sized() {
		b.start[0] = typical
	}
	if b.mask>>1&1 == 0 && b.form == Coordinates && b.kind == event.MomentumAngles {
		b.start[1] = math.Pi / 2
	}
	return b.mask&(1<<b.count-1) != 1<<b.count-1
}

// share gives each missing object an equal part of the momentum that is missing.
func (f *Fitter) share() {
	p := f.problem
	lack := p.known
	sign := 0.0
	for i := range f.bodies {
		b := &f.bodies[i]
		if b.form == Missing || b.form == MissingMass {
			sign += b.sign
			continue
		}
		lack.add(-b.sign, &b.momentum)
	}
	if sign == 0 {
		return
	}
	for i := range f.bodies {
		b := &f.bodies[i]
		if b.form != Missing && b.form != MissingMass {
			continue
		}
		for a := range b.count {
			b.start[a] = lack[a] / sign
		}
		b.place(f.x)
		b.evaluate(&f.vertex, f.columns)
	}
}

// settle moves the unmeasured variables towards the constraints.
func (f *Fitter) settle() {
	p, s := f.problem, &f.system
	m := &s.matrix
	for range startSteps {
		f.assemble(0)
		for v := p.measured; v < p.variables; v++ {
			m.entries[v*m.n+v] = startWeight / (s.scale[v] * s.scale[v])
			if v == p.z {
				m.entries[v*m.n+v] = startHold / (s.scale[v] * s.scale[v])
			}
			s.right[v] = 0
		}
		for k, r := range f.residual {
			i := p.variables + k
			m.entries[i*m.n+i] = -f.sigma[k] * f.sigma[k]
			s.right[i] = -r
		}
		if !s.border.factor(s, p.measured) {
			return
		}
		s.scaleRight(p.measured)
		s.border.solve(s.right[p.measured:])
		largest := 0.0
		for v := range f.step {
			f.step[v] = 0
			if v >= p.measured {
				f.step[v] = s.right[v] * s.scale[v]
				largest = worse(largest, s.right[v])
			}
		}
		if !(largest <= maxMagnitude) {
			return
		}
		length := f.reach()
		for v, d := range f.step {
			f.x[v] += float64(length * d)
		}
		f.evaluate()
		if largest < 1e-3 {
			return
		}
	}
}
