package selection

import (
	"math"

	"example.org/kinegate/kinematics/momentum"
)

// source is a set of measured parameters that an observable may depend on.
type source uint8

const (
	fromObject source = iota + 1
	fromBeam
	fromVertex
	fromGroup
)

// parameter is the one in which a derivative is taken: parameter number axis of an
// object, or of the vertex or a vertex group.
type parameter struct {
	source source
	object uint8
	axis   int
}

// uncertainty returns the standard deviation of an observable of the assignment by
// linear propagation:
//
//	sigma^2 = sum over objects, the beam candidate, the vertex and its groups of g' V g
//
// g the gradient at the measured values, V the covariance. What has no covariance, as a
// fixed initial state, is exact, but an observable that depends on objects has no
// uncertainty in a block without their covariances. NaN where there is none: also for
// the time of a candidate, for the fit probability, and where the gradient is not
// finite, such as that of an angle of 0.
func (w *Worker) uncertainty(v *window) float64 {
	variance := 0.0
	switch v.observable {
	case TimeDifference, FitProbability:
		return math.NaN()
	case UnusedPhotonEnergy:
		for rest := w.objects.photons &^ w.used; rest != 0; rest &= rest - 1 {
			variance += w.objectVariance(v, uint8(rest.lowest())) //nolint:gosec // below maxObjects
		}
	case VertexZ, FlightDistance, Pointing:
		variance = w.placeVariance(v)
	default:
	}
	if v.observable != FlightDistance {
		for _, k := range v.slots {
			variance += w.objectVariance(v, w.assigned[k])
		}
		for _, k := range v.second {
			variance += w.objectVariance(v, w.assigned[k])
		}
	}
	if w.hypothesis.beam.tagged && v.usesCandidate() {
		first, _ := w.block.Candidates(w.index)
		g := w.derivative(v, parameter{source: fromBeam}) * w.block.Beam.SigmaGeV[first+w.beamRow]
		variance += float64(g * g)
	}
	if !(variance >= 0) || !finite(variance) || math.IsNaN(w.value(v)) {
		return math.NaN()
	}
	return math.Sqrt(variance)
}

// usesCandidate reports whether an observable depends on the initial state.
func (v *window) usesCandidate() bool {
	f, _ := v.observable.form()
	return f.incoming || v.frame == CentreOfMass
}

// objectVariance is what one object adds.
func (w *Worker) objectVariance(v *window, object uint8) float64 {
	if w.block.Covariance == nil {
		return math.NaN()
	}
	row := w.objects.first + int(object)
	packed := w.block.Covariance.Row(row)
	mask := w.block.MeasuredMask(row)
	var g [3]float64
	for a := range g {
		if mask>>a&1 == 1 {
			g[a] = w.derivative(v, parameter{fromObject, object, a})
		}
	}
	return quadratic(&g, packed)
}

// placeVariance is what the vertex and the vertex group add.
func (w *Worker) placeVariance(v *window) float64 {
	sum := 0.0
	if vertex := w.block.Vertex; vertex != nil {
		if vertex.Covariance == nil {
			return math.NaN()
		}
		var g [3]float64
		for a := range g {
			g[a] = w.derivative(v, parameter{source: fromVertex, axis: a})
		}
		sum += quadratic(&g, vertex.Covariance.Row(w.index))
	}
	if v.observable == VertexZ {
		return sum
	}
	row, same := w.group(v)
	if !same || row < 0 || w.block.Groups.Covariance == nil {
		return math.NaN()
	}
	var g [3]float64
	for a := range g {
		g[a] = w.derivative(v, parameter{source: fromGroup, axis: a})
	}
	return sum + quadratic(&g, w.block.Groups.Covariance.Row(row))
}

// quadratic returns g' V g.
func quadratic(g *[3]float64, packed []float64) float64 {
	sum := 0.0
	for a := range g {
		for b := range g {
			if g[a] != 0 && g[b] != 0 {
				sum += float64(g[a] * packed[packedIndex(min(a, b), max(a, b))] * g[b])
			}
		}
	}
	return sum
}

// derivative returns that of an observable in a parameter.
func (w *Worker) derivative(v *window, p parameter) float64 {
	switch v.observable {
	case InvariantMass, MissingMass:
		return w.dualSquare(v, p).d / (2 * w.value(v))
	case InvariantMassSquared, MissingMassSquared:
		return w.dualSquare(v, p).d
	case Energy:
		return w.dualSum(v, v.slots, p).e.d
	case Momentum:
		return w.dualSum(v, v.slots, p).p.norm().d
	case TransverseMomentum:
		q := w.dualSum(v, v.slots, p).p
		return q.x.mul(q.x).add(q.y.mul(q.y)).sqrt().d
	case Angle:
		return between(w.dualDirection(v, v.slots, p), fixedThree(momentum.Three{Z: 1}))
	case OpeningAngle:
		return between(w.dualDirection(v, v.slots, p), w.dualDirection(v, v.second, p))
	case Coplanarity:
		a, b := w.dualDirection(v, v.slots, p), w.dualDirection(v, v.second, p)
		cosine := a.x.mul(b.x).add(a.y.mul(b.y))
		return turn(a.x.mul(b.y).sub(a.y.mul(b.x)), dual{-cosine.v, -cosine.d})
	case MissingDirection:
		first, second := w.dualIncoming(p)
		missing := first.p.add(second.p).sub(w.dualAdd(v.second, p).p)
		return between(w.dualDirection(v, v.slots, p), missing)
	case MomentumTransfer:
		return w.dualSide(v, p).sub(w.dualAdd(v.slots, p)).square().d
	case MomentumTransferPrime:
		q, m := w.dualCentre(p)
		a, b := w.dualSide(v, p).toRest(q, m).p, w.dualAdd(v.slots, p).toRest(q, m).p
		return 2 * a.norm().mul(b.norm()).sub(a.dot(b)).d
	case UnusedPhotonEnergy:
		q, _ := w.dualMomentum(p.object, p)
		return q.norm().d
	case VertexZ:
		if p.source == fromVertex && p.axis == 2 {
			return 1
		}
		return 0
	case FlightDistance:
		return w.dualFlight(v, p).norm().d
	case Pointing:
		return between(w.dualAdd(v.slots, p).p, w.dualFlight(v, p))
	case TimeDifference, FitProbability, observableCount:
	}
	return math.NaN()
}

// between is the derivative of the angle between two vectors.
func between(a, b dualThree) float64 { return turn(a.cross(b).norm(), a.dot(b)) }

// dualSquare is the signed square of an invariant or missing mass.
func (w *Worker) dualSquare(v *window, p parameter) dual {
	if v.observable == MissingMass || v.observable == MissingMassSquared {
		first, second := w.dualIncoming(p)
		return first.add(second).sub(w.dualAdd(v.slots, p)).square()
	}
	return w.dualAdd(v.slots, p).square()
}

// dualIncoming is the initial state.
func (w *Worker) dualIncoming(p parameter) (first, second dualFour) {
	first, second = fixedFour(w.incoming.first), fixedFour(w.incoming.second)
	if p.source == fromBeam {
		first.e.d = 1
		first.p.z.d = first.e.v / first.p.z.v
	}
	return first, second
}

// dualSide is the initial particle of a window.
func (w *Worker) dualSide(v *window, p parameter) dualFour {
	first, second := w.dualIncoming(p)
	if v.initial == Target {
		return second
	}
	return first
}

// dualCentre is the sum of the initial state and its mass.
func (w *Worker) dualCentre(p parameter) (q dualFour, m dual) {
	first, second := w.dualIncoming(p)
	q = first.add(second)
	return q, q.square().sqrt()
}

// dualMomentum is the momentum of an object and the derivative of its energy over the
// speed, that of the size of the momentum.
func (w *Worker) dualMomentum(object uint8, p parameter) (q dualThree, size float64) {
	base, columns := w.block.Coordinates.Derivatives(w.objects.first + int(object))
	q = fixedThree(base)
	if p.source == fromObject && p.object == object {
		d := columns[p.axis]
		q.x.d, q.y.d, q.z.d = d.X, d.Y, d.Z
		size = w.objects.direction[object].Dot(d)
	}
	return q, size
}

// dualFour is the four-momentum of a slot.
func (w *Worker) dualFour(slot uint8, p parameter) dualFour {
	object := w.assigned[slot]
	m := &w.motions[w.hypothesis.slots[slot].kind]
	q, size := w.dualMomentum(object, p)
	energy, length := m.energy[object], w.objects.length[object]
	if m.merged {
		// The size is that of the energy, and the momentum follows from it.
		e := dual{length, size}
		mass := dual{v: math.Sqrt(m.square[object])}
		scale := e.sub(mass).mul(e.add(mass)).sqrt().div(e)
		return dualFour{q.scale(scale), e}
	}
	speed := 1.0
	if m.square[object] != 0 {
		speed = length / energy
	}
	return dualFour{q, dual{energy, speed * size}}
}

// dualAdd is the sum of the four-momenta of slots.
func (w *Worker) dualAdd(slots []uint8, p parameter) dualFour {
	total := w.dualFour(slots[0], p)
	for _, k := range slots[1:] {
		total = total.add(w.dualFour(k, p))
	}
	return total
}

// dualSum is the sum of the four-momenta of slots in the frame of the window.
func (w *Worker) dualSum(v *window, slots []uint8, p parameter) dualFour {
	total := w.dualAdd(slots, p)
	if v.frame != CentreOfMass {
		return total
	}
	q, m := w.dualCentre(p)
	return total.toRest(q, m)
}

// dualDirection is a vector along the momentum of slots in the frame of the window.
func (w *Worker) dualDirection(v *window, slots []uint8, p parameter) dualThree {
	if v.frame != CentreOfMass && len(slots) == 1 {
		q, _ := w.dualMomentum(w.assigned[slots[0]], p)
		return q
	}
	return w.dualSum(v, slots, p).p
}

// dualFlight is the way from the event vertex to the vertex group of the slots.
func (w *Worker) dualFlight(v *window, p parameter) dualThree {
	d := fixedThree(w.flight(v))
	sign := 0.0
	switch p.source {
	case fromVertex:
		sign = -1
	case fromGroup:
		sign = 1
	case fromObject, fromBeam:
		return d
	}
	[...]*dual{&d.x, &d.y, &d.z}[p.axis].d = sign
	return d
}
