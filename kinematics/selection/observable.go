package selection

import (
	"math"

	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/num"
)

// value returns an observable of the assignment, NaN where it cannot be computed.
func (w *Worker) value(v *window) float64 {
	switch v.observable {
	case InvariantMass, MissingMass:
		if m2 := w.square(v); m2 >= 0 {
			return math.Sqrt(m2)
		}
		return math.NaN()
	case InvariantMassSquared, MissingMassSquared:
		return w.square(v)
	case Energy:
		return w.sum(v).E
	case Momentum:
		return w.sum(v).P.Norm()
	case TransverseMomentum:
		return w.sum(v).P.Transverse()
	case Angle:
		return angle(w.direction(v, v.slots), momentum.Three{Z: 1})
	case OpeningAngle:
		return angle(w.direction(v, v.slots), w.direction(v, v.second))
	case Coplanarity:
		return coplanarity(w.direction(v, v.slots), w.direction(v, v.second))
	case MissingDirection:
		missing := w.incoming.first.P.Add(w.incoming.second.P).Sub(w.add(v.second).P)
		return angle(w.direction(v, v.slots), missing)
	case MomentumTransfer:
		return w.transfer(v)
	case MomentumTransferPrime:
		return w.transferPrime(v)
	case TimeDifference:
		first, _ := w.block.Candidates(w.index)
		return w.block.Beam.TimeNS[first+w.beamRow]
	case UnusedPhotonEnergy:
		return w.unusedPhotonEnergy()
	case VertexZ:
		if w.block.Vertex != nil {
			return w.block.Vertex.Z[w.index]
		}
	case FlightDistance:
		return w.flight(v).Norm()
	case Pointing:
		return angle(w.add(v.slots).P, w.flight(v))
	case FitProbability:
		return w.fit.Probability
	case observableCount:
	}
	return math.NaN()
}

// square returns the signed square of an invariant or missing mass.
//
//	invariant:  m^2 = sum of si + 2 sum over pairs of (Ei Ej - pi.pj),  s = E^2 - p^2
//
// It is a sum of positive terms for table masses and within 2e-15 relative of what the
// stored directions say. A missing mass is that of the difference of the given
// four-momenta by momentum.MassSquared; the energies' own rounding moves its square
// by at most 2^-51 of the squared energy of the initial state.
func (w *Worker) square(v *window) float64 {
	if v.observable == MissingMass || v.observable == MissingMassSquared {
		return momentum.MassSquared(w.difference(v.slots, w.incoming.first, w.incoming.second)...)
	}
	squares, pairs := v.squares, 0.0
	for _, k := range v.eventSquares {
		squares += w.motions[w.hypothesis.slots[k].kind].square[w.assigned[k]]
	}
	for i := range v.pairs {
		p := &v.pairs[i]
		pairs += w.tables[p.table].product[at(w.assigned[p.first], w.assigned[p.second])]
	}
	return squares + float64(2*pairs)
}

// four returns the four-momentum of a slot that is measured in full.
func (w *Worker) four(slot uint8) momentum.Four {
	object := w.assigned[slot]
	m := &w.motions[w.hypothesis.slots[slot].kind]
	p := w.objects.momentum[object]
	if m.merged {
		p = p.Scale(m.scale[object])
	}
	return momentum.Four{P: p, E: m.energy[object]}
}

// add returns the sum of the four-momenta of slots.
func (w *Worker) add(slots []uint8) momentum.Four {
	total := w.four(slots[0])
	for _, k := range slots[1:] {
		total = total.Add(w.four(k))
	}
	return total
}

// difference lists the initial four-momenta and the negative ones of slots.
func (w *Worker) difference(slots []uint8, initial ...momentum.Four) []momentum.Four {
	n := copy(w.fours[:], initial)
	for _, k := range slots {
		w.fours[n] = w.four(k).Neg()
		n++
	}
	return w.fours[:n]
}

// sum returns the sum of the four-momenta of the window's slots in its frame.
func (w *Worker) sum(v *window) momentum.Four {
	return w.inFrame(v.frame, w.add(v.slots))
}

// inFrame returns a four-momentum of the laboratory in a frame, NaN where the initial
// state has no rest frame.
func (w *Worker) inFrame(f Frame, p momentum.Four) momentum.Four {
	if f != CentreOfMass {
		return p
	}
	if !w.incoming.moving {
		return momentum.Four{P: nowhere(), E: math.NaN()}
	}
	return w.incoming.boost.ToRest(p)
}

// nowhere is the direction that is not known.
func nowhere() momentum.Three {
	return momentum.Three{X: math.NaN(), Y: math.NaN(), Z: math.NaN()}
}

// direction returns a vector along the momentum of slots in the frame of the window.
// In the laboratory a single slot needs no more than its direction.
func (w *Worker) direction(v *window, slots []uint8) momentum.Three {
	if v.frame != CentreOfMass && len(slots) == 1 {
		return w.objects.direction[w.assigned[slots[0]]]
	}
	return w.inFrame(v.frame, w.add(slots)).P
}

// angle returns the angle between two vectors, NaN where one of them is zero.
func angle(a, b momentum.Three) float64 {
	if a == (momentum.Three{}) || b == (momentum.Three{}) {
		return math.NaN()
	}
	return a.Angle(b)
}

// coplanarity returns phi(a) - phi(b) - pi folded into (-pi, pi], the azimuth of a
// counted from that of -b:
//
//	atan2(ax by - ay bx, -(ax bx + ay by))
//
// It has no subtraction of azimuths and is accurate where the two are back to back.
// NaN where one of them lies on the z axis.
func coplanarity(a, b momentum.Three) float64 {
	if (a.X == 0 && a.Y == 0) || (b.X == 0 && b.Y == 0) {
		return math.NaN()
	}
	// Adding 0 makes -0 of a vanishing sine +0, so that the answer is pi and not -pi.
	sine := num.DiffOfProducts(a.X, b.Y, a.Y, b.X) + 0
	return num.Atan2(sine, -(float64(a.X*b.X) + float64(a.Y*b.Y)))
}

// side returns the four-momentum of an initial particle.
func (s *incoming) side(i Initial) momentum.Four {
	if i == Target {
		return s.second
	}
	return s.first
}

// transfer returns t, the signed square of an initial four-momentum less those of the
// slots.
func (w *Worker) transfer(v *window) float64 {
	return momentum.MassSquared(w.difference(v.slots, w.incoming.side(v.initial))...)
}

// transferPrime returns t_forward - t for the measured four-momenta. In the
// centre-of-mass frame, with a the momentum of the initial particle and b that of
// the slots,
//
//	t_forward - t = 2(|a||b| - a.b),  and = 2|a x b|^2/(|a||b| + a.b) where a.b > 0
//
// t_forward is the t of the same |b| along a.
func (w *Worker) transferPrime(v *window) float64 {
	if !w.incoming.moving {
		return math.NaN()
	}
	a := w.incoming.boost.ToRest(w.incoming.side(v.initial)).P
	b := w.incoming.boost.ToRest(w.add(v.slots)).P
	lengths, dot := float64(a.Norm()*b.Norm()), a.Dot(b)
	if dot > 0 {
		return 2 * a.Cross(b).Square() / (lengths + dot)
	}
	return 2 * (lengths - dot)
}

// flight returns the way from the event vertex to the vertex group of the objects of the
// slots: 0 for the event vertex itself, NaN where they belong to different groups.
func (w *Worker) flight(v *window) momentum.Three {
	group, same := w.group(v)
	switch {
	case !same:
		return nowhere()
	case group < 0:
		return momentum.Three{}
	}
	p := &w.block.Groups.Position
	return momentum.Three{X: p.X[group], Y: p.Y[group], Z: p.Z[group]}.Sub(w.vertex())
}

// group returns the row of the vertex group of the objects of the slots, -1 for the event
// vertex, and whether it is the same for all of them.
func (w *Worker) group(v *window) (row int, same bool) {
	g := w.block.Groups
	if g == nil {
		return -1, true
	}
	number := g.OfObject[w.objects.first+int(w.assigned[v.slots[0]])]
	for _, k := range v.slots[1:] {
		if g.OfObject[w.objects.first+int(w.assigned[k])] != number {
			return 0, false
		}
	}
	if number == 0 {
		return -1, true
	}
	return int(g.Offsets[w.index]) + int(number) - 1, true
}

// vertex returns the event vertex, the origin where there is none.
func (w *Worker) vertex() momentum.Three {
	v := w.block.Vertex
	if v == nil {
		return momentum.Three{}
	}
	return momentum.Three{X: v.X[w.index], Y: v.Y[w.index], Z: v.Z[w.index]}
}

// unusedPhotonEnergy returns the summed energy of the photons that no slot uses, in
// the order of the objects; NaN where one of them has none.
func (w *Worker) unusedPhotonEnergy() float64 {
	sum := 0.0
	for rest := w.objects.photons &^ w.used; rest != 0; rest &= rest - 1 {
		sum += w.objects.length[rest.lowest()]
	}
	return sum
}
