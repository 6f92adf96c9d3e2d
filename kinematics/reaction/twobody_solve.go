package reaction

import (
	"math"
	"strconv"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/momentum/breakup"
	"example.org/kinegate/kinematics/num"
)

// Variable is a quantity of one product that fixes where both products go.
type Variable uint8

// The variables that a Query can list. Angles are from z in radians, energies and
// momenta in GeV, squared momentum transfers in GeV^2.
const (
	// LabAngle is the angle in the laboratory.
	LabAngle Variable = iota
	// CMAngle is the angle in the centre-of-mass frame.
	CMAngle
	// CMCosine is its cosine.
	CMCosine
	// LabTotal is the total energy in the laboratory.
	LabTotal
	// LabKinetic is the kinetic energy in the laboratory.
	LabKinetic
	// LabMomentum is the momentum in the laboratory.
	LabMomentum
	// Transfer is t(beam, product).
	Transfer
	// TransferPrime is t_forward - t(beam, product), at least 0.
	TransferPrime
)

// Query asks where both products go when one has given values of a variable.
type Query struct {
	Variable Variable
	// Product is 0 for the first product and 1 for the second.
	Product int
	// Values are answered each for itself, in order.
	Values []float64
}

// Solution is what one value of a query leads to.
type Solution struct {
	Value float64
	// Branches are the ways in which the products can go, at most two, the one with
	// the largest laboratory momentum of the product in question first. None means
	// that the value is outside the physical region: see TwoBodyLimits for its ends.
	Branches []Branch
}

// Solve answers every value of the query. A value that has the same double as an end
// of its range counts as the end; one beyond has no branches.
//
// Accuracy: all fields within max(4e-15, 4 x 2^-52 x condition number), and near
// threshold, near the largest angle and for a product nearly at rest commonly within
// 1e-15 whatever the condition number, since everything between the doubles that come
// in and go out is double-double.
//
// A value that is no number, an angle outside 0..pi, a cosine outside -1..1 or an
// unknown variable or product is an Invalid fault, a laboratory variable for crossing
// beams an Unsupported one. Where an energy is the same in all directions, because the
// centre of mass is at rest or the products are at threshold, it fixes nothing: an
// Unsupported fault.
func (r *TwoBody) Solve(q Query) ([]Solution, error) {
	const op = "reaction.TwoBody.Solve"
	if err := r.checkQuery(op, q); err != nil {
		return nil, err
	}
	solutions := make([]Solution, len(q.Values))
	for i, value := range q.Values {
		if err := q.checkValue(op, i, value); err != nil {
			return nil, err
		}
		directions := r.directions(q, value)
		solutions[i] = Solution{Value: value, Branches: make([]Branch, len(directions))}
		for k, d := range directions {
			if q.Product == 1 {
				d = d.Opposite()
			}
			solutions[i].Branches[k] = r.branch(d)
		}
	}
	return solutions, nil
}

func (r *TwoBody) checkQuery(op string, q Query) error {
	if q.Product != 0 && q.Product != 1 {
		return fault.New(fault.Invalid, "query.product", strconv.Itoa(q.Product), "0 or 1").In(op)
	}
	leg := &r.legs[q.Product]
	spread := r.collision.sys.P.Mul(leg.Momentum())
	switch q.Variable {
	case CMAngle, CMCosine, Transfer, TransferPrime:
		return nil
	case LabAngle:
		return r.requireLaboratory(op)
	case LabTotal, LabKinetic, LabMomentum:
		if spread.IsZero() && r.collision.collinear {
			return fault.New(fault.Unsupported, "query.variable", "", "angles and t").In(op).
				Because("the laboratory energy is the same in all directions")
		}
		return r.requireLaboratory(op)
	}
	return fault.New(fault.Invalid, "query.variable", strconv.Itoa(int(q.Variable)), "a named variable").In(op)
}

func (q *Query) checkValue(op string, i int, x float64) error {
	field := "query.values[" + strconv.Itoa(i) + "]"
	switch {
	case math.IsNaN(x) || math.IsInf(x, 0):
		return fault.Number(field, x, "a finite number").In(op)
	case (q.Variable == LabAngle || q.Variable == CMAngle) && !(x >= 0 && x <= math.Pi):
		return fault.Number(field, x, ">= 0 and <= pi").In(op)
	case q.Variable == CMCosine && !(x >= -1 && x <= 1):
		return fault.Number(field, x, ">= -1 and <= 1").In(op)
	}
	return nil
}

// directions returns where the product in question goes in the centre-of-mass frame,
// from the direction of the first initial body.
func (r *TwoBody) directions(q Query, x float64) []breakup.Direction {
	const beyond = 1e65 // energies are at most 1e30 GeV, and their squares stay below this
	if math.Abs(x) > beyond {
		return nil
	}
	switch q.Variable {
	case CMAngle:
		return []breakup.Direction{r.fromZ(breakup.AtAngle(x))}
	case CMCosine:
		return []breakup.Direction{r.fromZ(breakup.AtCosine(x))}
	case Transfer, TransferPrime:
		return r.atTransfer(q.Variable, &r.ends[q.Product], x)
	case LabAngle, LabTotal, LabKinetic, LabMomentum:
	}
	found := r.atLab(q.Variable, &r.legs[q.Product], x)
	for i, d := range found {
		found[i] = r.fromZ(r.collision.fromAxis(d))
	}
	return found
}

// fromZ turns a direction from z into one from the first initial body, and back.
func (r *TwoBody) fromZ(d breakup.Direction) breakup.Direction {
	if r.collision.reversed {
		return d.Opposite()
	}
	return d
}

// atLab returns the directions from the total momentum.
func (r *TwoBody) atLab(v Variable, leg *breakup.Leg, x float64) []breakup.Direction {
	mass := leg.Mass()
	var t num.DD
	switch v {
	case LabAngle:
		return leg.AtLabAngle(x, r.collision.tilt != 0)
	case LabTotal:
		t = mass.Neg().AddFloat(x)
	case LabKinetic:
		t = num.FromFloat(x)
	case LabMomentum:
		square := num.Prod2(x, x)
		if energy := square.Add(mass.Square()).Sqrt().Add(mass); x > 0 && !energy.IsZero() {
			t = square.Div(energy)
		}
	case CMAngle, CMCosine, Transfer, TransferPrime:
	}
	if x < 0 {
		return nil
	}
	if d, ok := leg.AtLabKinetic(t); ok {
		return []breakup.Direction{d}
	}
	return nil
}

// atTransfer returns the direction that leads to a squared four-momentum transfer:
//
//	cos^2(theta*/2) = (t - t_backward)/(4pp'),  sin^2(theta*/2) = (t_forward - t)/(4pp')
func (r *TwoBody) atTransfer(v Variable, ends *transferEnds, x float64) []breakup.Direction {
	scale := r.initial.Mul(r.final).Scale(2)
	t := num.FromFloat(x)
	aft := ends.forward.Sub(t)
	fore := t.Sub(ends.backward)
	forward, backward := ends.forward.Float(), ends.backward.Float()
	if v == TransferPrime {
		aft, fore = t, scale.Sub(t)
		forward, backward = 0, scale.Float()
	}
	switch {
	case x == forward:
		return []breakup.Direction{breakup.Along()}
	case x == backward:
		return []breakup.Direction{breakup.Against()}
	case scale.IsZero():
		return nil
	}
	if d, ok := breakup.Between(fore.Div(scale), aft.Div(scale)); ok {
		return []breakup.Direction{d}
	}
	return nil
}
