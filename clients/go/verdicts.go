package kinegate

import (
	"fmt"

	"example.org/kinegate/proto/column"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// Verdicts is a verdict block with its columns read.
type Verdicts struct {
	// Block is the message.
	Block *kinegatev1.VerdictBlock
	// Statuses has one entry per event.
	Statuses []kinegatev1.EventStatus
	// Best is, per declared group, the best hypothesis of each event, -1 for none.
	Best [][]int16

	entryOffsets, assignmentOffsets, observableOffsets []int32
	hypotheses, beamRows, assignments                  []int16
	weights, observables, uncertainties                []float64
	assignmentCounts                                   []int32
	chiSquares, probabilities                          []float64
	degreesOfFreedom, iterationCounts                  []int16
}

// Entry is one entry of a verdict block.
type Entry struct {
	// Hypothesis is its index in the selection.
	Hypothesis int
	// BeamRow is the beam candidate within the event, -1 for none.
	BeamRow int
	// Weight is 1 or that of the candidate's time window.
	Weight float64
	// Status says how the entry came about.
	Status kinegatev1.EntryStatus
	// AssignmentCount is the number of assignments tried.
	AssignmentCount int
	// Assignment is the object of each product, -1 for none.
	Assignment []int16
	// Observables are the recorded values; NaN is not computed.
	Observables []float64
	// Uncertainties are their standard deviations, NaN for none; nil where no hypothesis
	// of the selection asks for them.
	Uncertainties []float64
	// Fit is the fit; nil where no hypothesis of the selection has one.
	Fit *Fit
}

// Fit is the constrained fit of an entry.
type Fit struct {
	// Status says how it ended; unspecified without a fit.
	Status kinegatev1.FitStatus
	// ChiSquare is the minimum only where the fit converged; NaN without a fit.
	ChiSquare float64
	// DegreesOfFreedom are the constraints less the unmeasured parameters.
	DegreesOfFreedom int
	// Probability is that of a larger chi-square; NaN unless the fit converged with a
	// degree of freedom.
	Probability float64
	// IterationCount is the number of steps.
	IterationCount int
}

// ReadVerdicts reads the columns of a verdict block that was not rejected.
func ReadVerdicts(block *kinegatev1.VerdictBlock) (*Verdicts, error) {
	if r := block.GetRejected(); r != nil {
		return nil, fmt.Errorf("block %d was rejected: %s: %s", block.GetSequence(), r.GetReason(), r.GetMessage())
	}
	v := &Verdicts{Block: block}
	for _, s := range block.GetStatuses() {
		v.Statuses = append(v.Statuses, kinegatev1.EventStatus(s))
	}
	r := reader{}
	for _, g := range block.GetGroups() {
		v.Best = append(v.Best, read(&r, column.Int16s, g.GetBest()))
	}
	if e := block.GetEntries(); e != nil {
		v.entryOffsets = read(&r, column.Int32s, e.GetOffsets())
		v.hypotheses = read(&r, column.Int16s, e.GetHypothesisIndices())
		v.beamRows = read(&r, column.Int16s, e.GetBeamRows())
		v.weights = read(&r, column.Float64s, e.GetWeights())
		v.assignmentCounts = read(&r, column.Int32s, e.GetAssignmentCounts())
		v.assignmentOffsets = read(&r, column.Int32s, e.GetAssignmentOffsets())
		v.assignments = read(&r, column.Int16s, e.GetAssignments())
		v.observableOffsets = read(&r, column.Int32s, e.GetObservableOffsets())
		v.observables = read(&r, column.Float64s, e.GetObservables())
		v.uncertainties = read(&r, column.Float64s, e.GetObservableUncertainties())
		if f := e.GetFits(); f != nil {
			v.chiSquares = read(&r, column.Float64s, f.GetChiSquares())
			v.degreesOfFreedom = read(&r, column.Int16s, f.GetDegreesOfFreedom())
			v.probabilities = read(&r, column.Float64s, f.GetProbabilities())
			v.iterationCounts = read(&r, column.Int16s, f.GetIterationCounts())
		}
	}
	if r.err != nil {
		return nil, fmt.Errorf("verdict block %d: %w", block.GetSequence(), r.err)
	}
	return v, nil
}

// reader keeps the first error of several columns.
type reader struct{ err error }

func read[T any](r *reader, decode func([]byte) ([]T, error), raw []byte) []T {
	xs, err := decode(raw)
	if r.err == nil {
		r.err = err
	}
	return xs
}

// Gate reports the gate decision on event i.
func (v *Verdicts) Gate(i int) bool { return column.Bit(v.Block.GetGate(), i) }

// Accepted reports whether hypothesis h accepts event i.
func (v *Verdicts) Accepted(h, i int) bool {
	return column.Bit(v.Block.GetHypotheses()[h].GetAccepted(), i)
}

// Entries returns the entries of event i; none where none were asked for.
func (v *Verdicts) Entries(i int) []Entry {
	if len(v.entryOffsets) == 0 {
		return nil
	}
	var entries []Entry
	all := v.Block.GetEntries()
	statuses, fits := all.GetStatuses(), all.GetFits().GetStatuses()
	for k := v.entryOffsets[i]; k < v.entryOffsets[i+1]; k++ {
		from, to := v.observableOffsets[k], v.observableOffsets[k+1]
		entry := Entry{
			Hypothesis:      int(v.hypotheses[k]),
			BeamRow:         int(v.beamRows[k]),
			Weight:          v.weights[k],
			Status:          kinegatev1.EntryStatus(statuses[k]),
			AssignmentCount: int(v.assignmentCounts[k]),
			Assignment:      v.assignments[v.assignmentOffsets[k]:v.assignmentOffsets[k+1]],
			Observables:     v.observables[from:to],
		}
		if all.ObservableUncertainties != nil {
			entry.Uncertainties = v.uncertainties[from:to]
		}
		if all.GetFits() != nil {
			entry.Fit = &Fit{
				Status: kinegatev1.FitStatus(fits[k]), ChiSquare: v.chiSquares[k],
				DegreesOfFreedom: int(v.degreesOfFreedom[k]), Probability: v.probabilities[k],
				IterationCount: int(v.iterationCounts[k]),
			}
		}
		entries = append(entries, entry)
	}
	return entries
}
