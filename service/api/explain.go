package api

import (
	"context"
	"strconv"

	"google.golang.org/protobuf/proto"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/selection"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// Bounds of the assignments that an explanation lists for a hypothesis.
const (
	defaultListed = 100
	mostListed    = 1000
)

// ExplainVerdict lays the verdict on one event open.
func (s *selectionService) ExplainVerdict(ctx context.Context, request *kinegatev1.ExplainVerdictRequest) (*kinegatev1.ExplainVerdictResponse, error) {
	limit := int(request.GetMaxAssignmentCount())
	if limit < 0 || limit > mostListed {
		return nil, fault.New(fault.Invalid, "max_assignment_count", strconv.Itoa(limit), "0 to "+strconv.Itoa(mostListed))
	}
	if limit == 0 {
		limit = defaultListed
	}
	bytes := blockBytes(request.GetBlock())
	block, err := convertBlock(request.GetBlock(), bytes, s.deps.Limits.blocks(), new(workspace))
	if err != nil {
		return nil, In("block", err)
	}
	at := int(request.GetEventIndex())
	if at < 0 || at >= block.Events() {
		return nil, fault.New(fault.Invalid, "event_index", strconv.Itoa(at), "0 to "+strconv.Itoa(block.Events()-1))
	}
	j, err := s.newJudging(request.GetSelection(), kinegatev1.EntryDetail_ENTRY_DETAIL_NONE, s.deps.Limits.blocks().of(bytes, block), false)
	if err != nil {
		return nil, err
	}
	if err := j.compiled.accepts(block); err != nil {
		return nil, In("block", err)
	}
	var e selection.Explanation
	work := s.turns.begin(ctx)
	if err := work.take(); err != nil {
		return nil, err
	}
	defer work.end()
	err = Contain(func() error {
		w := j.compiled.program.NewWorker(selection.NoEntries)
		w.Stop = work.stop
		e = w.Explain(block, at, limit)
		return nil
	})
	if err != nil {
		return nil, err
	}
	if err := ctx.Err(); err != nil {
		return nil, err
	}
	response := explanationMessage(&e, j.compiled)
	response.EventId = block.EventIDs[at]
	if size, most := int64(proto.Size(response)), int64(s.deps.Limits.MessageBytes); size > most {
		return nil, OverLimit(ReplyTooLarge, "the reply in bytes", size, most, "ask for fewer assignments")
	}
	return response, nil
}

// explanationMessage converts an explanation; statuses have the numbers of the contract.
func explanationMessage(e *selection.Explanation, c *compiledSelection) *kinegatev1.ExplainVerdictResponse {
	m := &kinegatev1.ExplainVerdictResponse{
		SelectionDigest: c.digest, Status: kinegatev1.EventStatus(e.Status), Gate: e.Gate,
	}
	for i := range e.Hypotheses {
		h, outline := &e.Hypotheses[i], c.outline.GetHypotheses()[i]
		x := &kinegatev1.HypothesisExplanation{
			Name: outline.GetName(), Reaction: outline.GetReaction(), Products: outline.GetProducts(),
			Accepted: h.Accepted, Kept: h.Kept, Obstacle: h.Obstacle, AssignmentCount: h.Tried,
			DegreesOfFreedom: outline.DegreesOfFreedom, BudgetUsed: h.Unfinished,
		}
		for k := range h.Assignments {
			x.Assignments = append(x.Assignments, assignmentMessage(&h.Assignments[k]))
		}
		m.Hypotheses = append(m.Hypotheses, x)
	}
	return m
}

func assignmentMessage(a *selection.AssignmentExplanation) *kinegatev1.AssignmentExplanation {
	m := &kinegatev1.AssignmentExplanation{
		BeamRow: int32(a.BeamRow), Weight: a.Weight, //nolint:gosec // at most MaxCandidates
		Complete: a.Complete, Passed: a.Passed, Best: a.Best, RankDistance: finite(a.RankDistance),
	}
	for _, object := range a.Objects {
		m.Objects = append(m.Objects, int32(object)) //nolint:gosec // at most MaxObjectsPerEvent
	}
	for k := range a.Windows {
		w := &a.Windows[k]
		m.Windows = append(m.Windows, &kinegatev1.WindowExplanation{
			Path: w.Path, Label: w.Label, Unit: w.Unit, Value: w.Value, Uncertainty: finite(w.Uncertainty),
			AboveMin: finite(w.AboveMin), BelowMax: finite(w.BelowMax), Inside: w.Inside,
		})
	}
	if a.Fit != nil {
		m.Fit = fitMessage(a.Fit)
	}
	return m
}

func fitMessage(f *selection.FitExplanation) *kinegatev1.FitExplanation {
	m := &kinegatev1.FitExplanation{
		Status: kinegatev1.FitStatus(f.Result.Status), ChiSquare: f.Result.ChiSquare,
		Probability: finite(f.Result.Probability), IterationCount: int64(f.Result.Iterations),
		VertexZM: finite(f.VertexZ), VertexZSigmaM: finite(f.VertexSigma),
	}
	for k := range f.Constraints {
		c := &f.Constraints[k]
		m.Constraints = append(m.Constraints, &kinegatev1.ConstraintExplanation{
			Name: c.Name, Unit: c.Unit, Before: c.Before, After: c.After,
		})
	}
	for k := range f.Particles {
		p := &f.Particles[k]
		x := &kinegatev1.FittedParticle{
			Name: p.Name, ObjectIndex: int32(p.Object), Fitted: fourMessage(p.Fitted), //nolint:gosec // at most MaxObjectsPerEvent
		}
		if p.Measured != nil {
			x.Measured = fourMessage(*p.Measured)
		}
		for a := range p.Parameters {
			q := &p.Parameters[a]
			x.Parameters = append(x.Parameters, &kinegatev1.FittedParameter{
				Name: q.Name, Unit: q.Unit, Measured: finite(q.Measured), Uncertainty: finite(q.Uncertainty),
				Fitted: q.Fitted, Pull: finite(q.Pull),
			})
		}
		m.Particles = append(m.Particles, x)
	}
	return m
}

func fourMessage(p momentum.Four) *kinegatev1.FourMomentum {
	return &kinegatev1.FourMomentum{EnergyGev: p.E, PxGev: p.P.X, PyGev: p.P.Y, PzGev: p.P.Z}
}
