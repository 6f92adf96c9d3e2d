package selection

import (
	"math"

	"example.org/kinegate/kinematics/constraint"
	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/momentum"
)

// Accepts reports whether a block has the columns that the fits of the program need. The
// error is a fault.List of the columns that it lacks.
func (p *Program) Accepts(block *event.Block) error {
	var list fault.List
	lacks := func(field, allowed string) {
		for _, e := range list {
			if e.Field == field {
				return
			}
		}
		list = append(list, fault.New(fault.Invalid, field, "absent", allowed).In("selection.Accepts"))
	}
	for i := range p.hypotheses {
		f := p.hypotheses[i].fit
		if f == nil {
			continue
		}
		because := "given, since hypothesis " + p.outlines[i].Name + " has a fit"
		if block.Covariance == nil {
			lacks("covariance", because)
		}
		if !f.repointed {
			continue
		}
		if block.Clusters == nil {
			lacks("cluster_position", because+" that moves the vertex")
		}
		if f.vertex == MeasuredVertex && (block.Vertex == nil || block.Vertex.Covariance == nil) {
			lacks("vertex.covariance_m2", because+" that moves the vertex within its covariance")
		}
	}
	return list.Err()
}

// makeFit fits the assignment with a candidate and sets the result.
func (w *Worker) makeFit(c *candidate) {
	plan, fitter := w.hypothesis.fit, w.fitters[w.number]
	if w.block.Covariance == nil {
		w.fit = constraint.Result{
			Status: constraint.Singular, DegreesOfFreedom: plan.problem.DegreesOfFreedom(),
			ChiSquare: math.NaN(), Probability: math.NaN(),
		}
		return
	}
	if plan.repointed {
		w.loadVertex(plan, &fitter.Vertex)
	}
	for i := range plan.objects {
		o, m := &plan.objects[i], &fitter.Measurements[i]
		switch {
		case o.initial != 0:
			w.loadInitial(o, c, m)
		case o.slot >= 0:
			w.loadObject(o, m)
			if plan.repointed {
				w.loadCluster(o, m)
			}
		}
	}
	w.fit = fitter.Fit()
}

// fitOfEntry is the result as an entry carries it.
func (w *Worker) fitOfEntry() event.Fit {
	if w.hypothesis.fit == nil {
		return event.Fit{Status: event.NoFit, ChiSquare: math.NaN(), Probability: math.NaN()}
	}
	r := &w.fit
	return event.Fit{
		Status: event.FitStatus(r.Status), ChiSquare: r.ChiSquare, Probability: r.Probability,
		DegreesOfFreedom: int16(r.DegreesOfFreedom), Iterations: int16(r.Iterations), //nolint:gosec // at most some hundred
	}
}

// loadVertex sets the vertex of a fit.
func (w *Worker) loadVertex(plan *fitPlan, v *constraint.Vertex) {
	v.Position = w.vertex()
	if plan.vertex == MeasuredVertex && w.block.Vertex != nil && w.block.Vertex.Covariance != nil {
		v.SigmaZ = math.Sqrt(w.block.Vertex.Covariance.Row(w.index)[event.CovarianceSize-1])
	}
}

// loadInitial sets an initial particle, whose energy with its standard deviation makes a
// momentum with
//
//	sigma(p) = E/p sigma(E)
func (w *Worker) loadInitial(o *fitObject, c *candidate, m *constraint.Measurement) {
	state := c.state.side(o.initial)
	p, sigma := state.P.Norm(), o.sigma
	if o.tagged {
		first, _ := w.block.Candidates(w.index)
		sigma = w.block.Beam.SigmaGeV[first+c.row]
	}
	if o.mass > 0 {
		sigma *= state.E / p
	}
	*m = constraint.Beam(p, sigma, o.mass)
}

// loadObject sets a product by the object that stands for it.
func (w *Worker) loadObject(o *fitObject, m *constraint.Measurement) {
	object := int(w.assigned[o.slot])
	row := w.objects.first + object
	x := &w.block.Coordinates
	m.MassGeV = o.mass
	k := w.hypothesis.slots[o.slot].kind
	if w.program.kinds[k].fromEvent {
		m.MassGeV = math.Sqrt(w.motions[k].square[object])
	}
	switch cartesian := x.Kind == event.EnergyMomentum || x.Kind == event.MomentumMass; {
	case o.merged:
		w.loadMerged(o, object, row, m)
		return
	case o.direction && cartesian:
		w.loadDirection(object, row, m)
		return
	}
	m.Kind = x.Kind
	for a := range m.Values {
		m.Values[a] = x.Columns[a][row]
	}
	copy(m.Covariance[:], w.block.Covariance.Row(row))
}

// loadCluster sets where an object was found. The direction of an object without a
// cluster position cannot follow the vertex, and its fit ends as singular.
//
// The direction may be the one seen from the measured vertex, from where the object was
// born or from the centre of the detector. The cluster is what was measured whichever it
// is, so the direction counts from that point of its line through the cluster which is
// nearest to the measured vertex.
func (w *Worker) loadCluster(o *fitObject, m *constraint.Measurement) {
	if w.block.Clusters == nil {
		m.Origin = nowhere()
		return
	}
	object := int(w.assigned[o.slot])
	row, n := w.objects.first+object, w.objects.direction[object]
	p := w.block.Clusters
	m.Cluster = momentum.Three{X: p.X[row], Y: p.Y[row], Z: p.Z[row]}
	far := m.Cluster.Sub(w.vertex()).Dot(n)
	if !(far > 0) {
		m.Origin = nowhere()
		return
	}
	m.Origin = m.Cluster.Sub(n.Scale(far))
}

// loadMerged sets a product by a cluster of merged photons: the momentum p' of size
// sqrt((E-m)(E+m)) along that of the cluster, in components, with the covariance
//
//	J V J',  J = (f + (1/f - f) n n') dp/d(parameters),  f = p'/E
//
// since the size changes by dp' = E/p' dE.
func (w *Worker) loadMerged(o *fitObject, object, row int, m *constraint.Measurement) {
	_, columns := w.block.Coordinates.Derivatives(row)
	n := w.objects.direction[object]
	f := mergedScale(w.objects.length[object], o.mass)
	for a := range columns {
		along := (1/f - f) * n.Dot(columns[a])
		columns[a] = columns[a].Scale(f).Add(n.Scale(along))
	}
	p := w.objects.momentum[object].Scale(f)
	m.Kind = event.MomentumMass
	m.Values = [3]float64{p.X, p.Y, p.Z}
	spread(&columns, w.block.Covariance.Row(row), &m.Covariance)
}

// loadDirection sets a product of which the direction alone is used by an object with
// Cartesian components:
//
//	dtheta = e_theta.dp/|p|,  dphi = e_phi.dp/(|p| sin theta)
func (w *Worker) loadDirection(object, row int, m *constraint.Measurement) {
	n, p := w.objects.direction[object], w.objects.momentum[object].Norm()
	across := n.Transverse()
	cos, sin := n.X/across, n.Y/across
	theta := momentum.Three{X: n.Z * cos, Y: n.Z * sin, Z: -across}.Scale(1 / p)
	phi := momentum.Three{X: -sin, Y: cos}.Scale(1 / (p * across))
	columns := [3]momentum.Three{
		{Y: theta.X, Z: phi.X}, {Y: theta.Y, Z: phi.Y}, {Y: theta.Z, Z: phi.Z},
	}
	m.Kind = event.MomentumAngles
	m.Values = [3]float64{p, n.Theta(), n.Phi()}
	spread(&columns, w.block.Covariance.Row(row), &m.Covariance)
}

// spread sets out to J V J' for the columns of J and the packed V, with the zeros that a
// covariance has for what is not measured.
func spread(columns *[3]momentum.Three, packed []float64, out *[event.CovarianceSize]float64) {
	*out = [event.CovarianceSize]float64{}
	for a := range columns {
		for b := range columns {
			v := packed[packedIndex(min(a, b), max(a, b))]
			x, y := columns[a], columns[b]
			out[0] += float64(v * x.X * y.X)
			out[1] += float64(v * x.X * y.Y)
			out[2] += float64(v * x.X * y.Z)
			out[3] += float64(v * x.Y * y.Y)
			out[4] += float64(v * x.Y * y.Z)
			out[5] += float64(v * x.Z * y.Z)
		}
	}
}

// packedIndex is the place of entry (a, b) with a <= b in a packed upper triangle.
func packedIndex(a, b int) int { return a*(5-a)/2 + b }
