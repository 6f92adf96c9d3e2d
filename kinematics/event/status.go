package event

import "math"

// Status says whether an event can be judged, and if not, why not.
type Status uint8

// The states of an event. Good is the only one in which the event is judged in
// full.
const (
	Good Status = iota + 1
	// NonFinite marks an event with a NaN or an infinity in a measured column.
	NonFinite
	// NegativeEnergy marks an energy or a momentum's size below zero, of an
	// object or of a beam candidate.
	NegativeEnergy
	// NegativeSpread marks a negative sigma or variance.
	NegativeSpread
	// OutOfRange marks theta outside [0, pi], a mass below zero or a degree of
	// polarisation above one.
	OutOfRange
	// TooManyObjects marks more than MaxObjectsPerEvent objects.
	TooManyObjects
	// Expired marks an event whose latency budget ran out before it was judged.
	// Checks of the block never give it.
	Expired
	// BudgetUsed marks an event judged in part: the work budget ended before every
	// assignment had been tried. Hypotheses that accept do accept, and the gate opens for
	// those that were not finished too, unless a veto accepts.
	BudgetUsed
	statusCount
)

// Valid reports whether the status is a known one.
func (s Status) Valid() bool { return s >= Good && s < statusCount }

// String is the status in words.
func (s Status) String() string {
	switch s {
	case Good:
		return "good"
	case NonFinite:
		return "non-finite value"
	case NegativeEnergy:
		return "negative energy"
	case NegativeSpread:
		return "negative spread"
	case OutOfRange:
		return "value out of range"
	case TooManyObjects:
		return "too many objects"
	case Expired:
		return "expired"
	case BudgetUsed:
		return "work budget used up"
	case statusCount:
	}
	return "unknown"
}

// Check returns the status of event i of a block whose structure is valid. The
// first problem found counts: number of objects, then objects in row order,
// then beam rows, then vertex, groups and polarisation. Unmeasured parameters
// and what the mask therefore ignores may hold anything.
func (b *Block) Check(i int) Status {
	first, end := b.Objects(i)
	if end-first > MaxObjectsPerEvent {
		return TooManyObjects
	}
	for row := first; row < end; row++ {
		if s := b.checkObject(row); s != Good {
			return s
		}
	}
	if s := b.checkBeam(i); s != Good {
		return s
	}
	if v := b.Vertex; v != nil {
		if s := checkPoint(&v.Positions, v.Covariance, i); s != Good {
			return s
		}
	}
	if g := b.Groups; g != nil {
		for k := int(g.Offsets[i]); k < int(g.Offsets[i+1]); k++ {
			if s := checkPoint(&g.Position, g.Covariance, k); s != Good {
				return s
			}
		}
	}
	return b.checkPolarisation(i)
}

func (b *Block) checkObject(row int) Status {
	x := &b.Coordinates
	mask := b.MeasuredMask(row)
	for k := range x.Kind.Columns() {
		// The energy or mass in the fourth column goes with the whole momentum.
		needed := mask == AllMeasured
		if k < maxColumns-1 {
			needed = mask>>k&1 == 1
		}
		if !needed {
			continue
		}
		if s := checkColumn(x.Kind, k, x.Columns[k][row]); s != Good {
			return s
		}
	}
	if b.Covariance != nil {
		return checkCovariance(b.Covariance.Row(row))
	}
	return Good
}

func checkColumn(kind Kind, k int, v float64) Status {
	if !finite(v) {
		return NonFinite
	}
	switch kind {
	case EnergyMomentum:
		if k == 3 && v < 0 {
			return NegativeEnergy
		}
	case MomentumMass:
		if k == 3 && v < 0 {
			return OutOfRange
		}
	case TransverseMomentum:
		if k == 0 && v < 0 {
			return NegativeEnergy
		}
		if k == 3 && v < 0 {
			return OutOfRange
		}
	case MomentumAngles:
		if k == 0 && v < 0 {
			return NegativeEnergy
		}
		if k == 1 && (v < 0 || v > math.Pi) {
			return OutOfRange
		}
	case MomentumSlopes:
		if k == 0 && v < 0 {
			return NegativeEnergy
		}
	case kindCount:
	}
	return Good
}

func (b *Block) checkBeam(i int) Status {
	first, end := b.Candidates(i)
	for row := first; row < end; row++ {
		e, sigma := b.Beam.EnergyGeV[row], b.Beam.SigmaGeV[row]
		if !finite(e) || !finite(sigma) || !finite(b.Beam.TimeNS[row]) {
			return NonFinite
		}
		if e < 0 {
			return NegativeEnergy
		}
		if sigma < 0 {
			return NegativeSpread
		}
	}
	return Good
}

func (b *Block) checkPolarisation(i int) Status {
	p := b.Polarisation
	if p == nil {
		return Good
	}
	linear, circular := p.Linear[i], p.Circular[i]
	if !finite(linear) || !finite(p.PlaneRad[i]) || !finite(circular) {
		return NonFinite
	}
	if linear < 0 || linear > 1 || math.Abs(circular) > 1 {
		return OutOfRange
	}
	return Good
}

func checkPoint(p *Positions, v *Covariance, i int) Status {
	if !finite(p.X[i]) || !finite(p.Y[i]) || !finite(p.Z[i]) {
		return NonFinite
	}
	if v != nil {
		return checkCovariance(v.Row(i))
	}
	return Good
}

func checkCovariance(packed []float64) Status {
	for _, v := range packed {
		if !finite(v) {
			return NonFinite
		}
	}
	if packed[0] < 0 || packed[3] < 0 || packed[5] < 0 {
		return NegativeSpread
	}
	return Good
}

// finite reports whether v is neither NaN nor infinite: v - v is 0 then, and
// NaN otherwise.
func finite(v float64) bool { return v-v == 0 }
