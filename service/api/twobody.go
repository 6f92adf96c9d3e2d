package api

import (
	"context"
	"errors"
	"math"
	"strconv"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/reaction"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// Bounds of one two-body request: its reply stays below half of a message.
const (
	maxValues = 4000
	// chunk is the number of values between two looks at the context.
	chunk = 64
)

// SolveTwoBody says where both products of a two-body reaction go.
func (s *reactionService) SolveTwoBody(
	ctx context.Context, request *kinegatev1.SolveTwoBodyRequest,
) (*kinegatev1.SolveTwoBodyResponse, error) {
	process := processForm{
		name: "reaction", text: request.GetReaction(), structured: request.GetStructuredReaction(), unset: request.GetForm() == nil,
	}
	r, err := process.read(s.table)
	if err != nil {
		return nil, err
	}
	if len(r.Initial) != 2 || len(r.Top) != 2 || r.Inclusive {
		return nil, fault.New(fault.Invalid, process.field(), r.String(), "two initial particles and two products")
	}
	query, field, err := s.twoBodyQuery(r, request)
	if err != nil {
		return nil, err
	}
	channel, err := s.channel(r, request.GetInitialState())
	if err != nil {
		return nil, err
	}
	m := &kinegatev1.SolveTwoBodyResponse{
		Reaction: r.String(), State: stateMessage(channel.State), ExcessEnergyGev: channel.Nominal.Excess,
		Frame: channel.Frame, TableVersion: s.table.Version(),
	}
	if channel.Nominal.HasDeficitEnergy {
		m.BeamEnergyDeficitGev = &channel.Nominal.DeficitEnergy
	}
	if !channel.Moving {
		return m, nil
	}
	m.CentreOfMass = collisionMessage(&channel.Collision)
	if channel.Nominal.Excess < 0 {
		return m, nil
	}
	work := s.turns.begin(ctx)
	defer work.end()
	return m, solveTwoBody(work, m, r, &channel, query, field)
}

// channel holds a reaction against an initial state, which must be given.
func (s *reactionService) channel(r *reaction.Reaction, in *kinegatev1.InitialState) (reaction.Channel, error) {
	f := &former{}
	form := f.stateOf(in)
	if in == nil {
		f.need("initial_state", "", "beam_on_target, two_beams, two_four_momenta or sqrt_s_gev")
	}
	if err := f.faults.Err(); err != nil {
		return reaction.Channel{}, err
	}
	channel, err := reaction.Describe(r, form.state)
	if err != nil {
		return reaction.Channel{}, form.describeFailure(err)
	}
	return channel, nil
}

// twoBodyQuery reads the product and the one list of values, and returns its field.
func (s *reactionService) twoBodyQuery(
	r *reaction.Reaction, request *kinegatev1.SolveTwoBodyRequest,
) (query reaction.Query, field string, err error) {
	if reference := request.GetProduct(); reference != "" {
		if query.Product, err = placeOf(s.table, r, reference); err != nil {
			return query, "", moved(err, "product")
		}
	}
	for _, list := range []struct {
		field    string
		variable reaction.Variable
		values   []float64
	}{
		{"laboratory_angles_rad", reaction.LabAngle, request.GetLaboratoryAnglesRad()},
		{"centre_of_mass_angles_rad", reaction.CMAngle, request.GetCentreOfMassAnglesRad()},
		{"centre_of_mass_cosines", reaction.CMCosine, request.GetCentreOfMassCosines()},
		{"laboratory_total_energies_gev", reaction.LabTotal, request.GetLaboratoryTotalEnergiesGev()},
		{"laboratory_kinetic_energies_gev", reaction.LabKinetic, request.GetLaboratoryKineticEnergiesGev()},
		{"laboratory_momenta_gev", reaction.LabMomentum, request.GetLaboratoryMomentaGev()},
		{"t_values_gev2", reaction.Transfer, request.GetTValuesGev2()},
		{"t_prime_values_gev2", reaction.TransferPrime, request.GetTPrimeValuesGev2()},
	} {
		switch n := len(list.values); {
		case n == 0:
			continue
		case field != "":
			return query, "", fault.New(fault.Invalid, list.field, strconv.Itoa(n)+" values", "none beside "+field)
		case n > maxValues:
			return query, "", fault.New(fault.Invalid, list.field, strconv.Itoa(n)+" values", "at most "+strconv.Itoa(maxValues))
		}
		query.Variable, query.Values, field = list.variable, list.values, list.field
	}
	return query, field, nil
}

// solveTwoBody adds the limits and the solutions of an open channel.
func solveTwoBody(
	work *spell, m *kinegatev1.SolveTwoBodyResponse, r *reaction.Reaction, c *reaction.Channel,
	query reaction.Query, field string,
) error {
	two, err := c.Collision.TwoBody(r.Products[r.Top[0]].Particle.Mass, r.Products[r.Top[1]].Particle.Mass)
	if err != nil {
		return err
	}
	limits := two.Limits()
	m.CentreOfMass.FinalMomentumGev = &limits.FinalMomentum
	for i, number := range r.Top {
		m.Products = append(m.Products, &kinegatev1.TwoBodyProduct{
			Limits: productLimits(r.Products[number].Name, number, r.Products[number].Particle.Mass, &limits.Products[i]),

			MaxLaboratoryAngleRad: limits.MaxAngle[i], DoubleValued: limits.TwoBranch[i],
			TForwardGev2: limits.Transfer[i].Forward, TBackwardGev2: limits.Transfer[i].Backward,
		})
	}
	for values, from := query.Values, 0; from < len(values); from += chunk {
		if work.stop() {
			return work.ctx.Err()
		}
		query.Values = values[from:min(from+chunk, len(values))]
		solutions, err := two.Solve(query)
		if err != nil {
			return atValue(err, field, from)
		}
		for _, solution := range solutions {
			m.Solutions = append(m.Solutions, solutionMessage(solution, limits.Laboratory))
		}
	}
	return nil
}

// atValue puts the field of the values in the place of the core's name of a value in a
// chunk, or of the variable.
func atValue(err error, field string, from int) error {
	if e, ok := errors.AsType[*fault.Error](err); ok {
		if n, ok := elementOf(e.Field, "query.values"); ok {
			field = index(field, from+n)
		}
	}
	return moved(err, field)
}

// elementOf reads the index of an element of a list from its path.
func elementOf(path, list string) (int, bool) {
	if len(path) < len(list)+2 || path[:len(list)] != list {
		return 0, false
	}
	n, err := strconv.Atoi(path[len(list)+1 : len(path)-1])
	return n, err == nil
}

func solutionMessage(s reaction.Solution, laboratory bool) *kinegatev1.TwoBodySolution {
	m := &kinegatev1.TwoBodySolution{}
	for _, b := range s.Branches {
		branch := &kinegatev1.TwoBodyBranch{TGev2: b.T, TPrimeGev2: b.TPrime, UGev2: b.U, UPrimeGev2: b.UPrime}
		for i := range b.Products {
			branch.Products = append(branch.Products, outgoingMessage(&b.Products[i], laboratory))
		}
		m.Branches = append(m.Branches, branch)
	}
	return m
}

func outgoingMessage(o *reaction.Outgoing, laboratory bool) *kinegatev1.TwoBodyOutgoing {
	m := &kinegatev1.TwoBodyOutgoing{
		CentreOfMassAngleRad: o.CMAngle, CentreOfMassCosine: o.CMCosine,
		CentreOfMassTotalEnergyGev: o.CMEnergy, CentreOfMassKineticEnergyGev: o.CMKinetic, CentreOfMassMomentumGev: o.CMMomentum,
	}
	if !laboratory {
		return m
	}
	m.LaboratoryAngleRad, m.LaboratoryTotalEnergyGev = &o.LabAngle, &o.LabEnergy
	m.LaboratoryKineticEnergyGev, m.LaboratoryMomentumGev = &o.LabKinetic, &o.LabMomentum
	m.CentreOfMassPerLaboratory, m.LaboratoryPerCentreOfMass = finite(o.CMPerLab), finite(o.LabPerCM)
	return m
}

// finite is a pointer to a number, nil for one that is not finite.
func finite(x float64) *float64 {
	if math.IsNaN(x) || math.IsInf(x, 0) {
		return nil
	}
	return &x
}
