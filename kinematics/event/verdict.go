package event

// Bits is a bitset over events, least significant bit of byte 0 first.
type Bits []byte

// NewBits returns n bits, all clear.
func NewBits(n int) Bits { return make(Bits, (n+7)/8) }

// Get reports bit i.
func (b Bits) Get(i int) bool { return b[i>>3]>>(i&7)&1 == 1 }

// Set sets bit i.
func (b Bits) Set(i int) { b[i>>3] |= 1 << (i & 7) }

// Clear clears bit i.
func (b Bits) Clear(i int) { b[i>>3] &^= 1 << (i & 7) }

// EntryStatus says how an entry came about. The numbers are those of the contract.
type EntryStatus uint8

// The states of an entry.
const (
	// Accepted marks an assignment that passes every condition.
	Accepted EntryStatus = iota + 1
	// Rejected marks the best possible assignment where none passes.
	Rejected
	// FitFailed marks the same where its fit did not converge.
	FitFailed
	// Unfinished marks a hypothesis of which the work budget left assignments untried and
	// none that was tried passes: with the best of those that were fitted, or with none.
	Unfinished
)

// FitStatus says how the fit of an entry ended. The numbers are those of the contract
// and, above NoFit, those of constraint.Status.
type FitStatus uint8

// NoFit marks an entry without a fit.
const NoFit FitStatus = 0

// VerdictBlock holds the verdicts on one Block, event for event.
type VerdictBlock struct {
	// Status of each event; only Good events are judged, and those of BudgetUsed in part.
	Status []Status
	// Gate is the gate's decision per event, after prescale, veto and shadow; clear for
	// events that were not judged.
	Gate Bits
	// Accepted is, per hypothesis, one bit per event before prescale, veto and
	// shadow.
	Accepted []Bits
	// Best is, per declared group of comparable hypotheses, the number of the
	// best hypothesis of each event, or -1 for none.
	Best [][]int16
	// Digest names the selection that judged.
	Digest [32]byte
	// Entries lay the verdicts open; absent when none were asked for.
	Entries *Entries
}

// Entries are the judged combinations of hypothesis, beam candidate and
// assignment. Event i owns the entries from Offsets[i] up to, not including,
// Offsets[i+1]; entry k owns the observables and the assignment elements that
// ObservableOffsets and AssignmentOffsets bound in the same way.
type Entries struct {
	Offsets []int32
	// Hypothesis is the number of the hypothesis.
	Hypothesis []int16
	// BeamRow is the beam candidate within its event, or -1 for none.
	BeamRow []int16
	// Weight of the beam candidate, by prompt or side-band window.
	Weight []float64
	Status []EntryStatus
	// Tried is the number of assignments tried.
	Tried []int32
	// Fits are the fits of the entries; absent where no hypothesis has one.
	Fits *Fits
	// Observables that the hypothesis records, in its order; NaN is not computed.
	Observables       []float64
	ObservableOffsets []int32
	// Uncertainties are their standard deviations, NaN for none; absent where no
	// hypothesis asks for them.
	Uncertainties *Uncertainties
	// Assignment is, for each product, the object's index within its event, or
	// -1 for a product that no object stands for.
	Assignment        []int16
	AssignmentOffsets []int32
}

// Fits are the fits of entries, one each.
type Fits struct {
	Status []FitStatus
	// ChiSquare, DegreesOfFreedom and Probability; NaN, 0 and NaN without a fit.
	ChiSquare        []float64
	DegreesOfFreedom []int16
	Probability      []float64
	// Iterations is the number of steps.
	Iterations []int16
}

// Uncertainties are the standard deviations of observables.
type Uncertainties struct {
	Values []float64
}

// Fit is the fit of one entry.
type Fit struct {
	Status           FitStatus
	ChiSquare        float64
	DegreesOfFreedom int16
	Probability      float64
	Iterations       int16
}

// Entry is one row of Entries. Its slices alias the columns.
type Entry struct {
	Hypothesis int16
	BeamRow    int16
	Weight     float64
	Status     EntryStatus
	Tried      int32
	// Fit is used where the entries have fits.
	Fit         Fit
	Observables []float64
	// Uncertainties is as long as Observables where the entries have them.
	Uncertainties []float64
	Assignment    []int16
}

// Len is the number of entries.
func (e *Entries) Len() int { return len(e.Hypothesis) }

// Row returns entry k.
func (e *Entries) Row(k int) Entry {
	o, oEnd := e.ObservableOffsets[k], e.ObservableOffsets[k+1]
	a, aEnd := e.AssignmentOffsets[k], e.AssignmentOffsets[k+1]
	row := Entry{
		Hypothesis: e.Hypothesis[k], BeamRow: e.BeamRow[k], Weight: e.Weight[k],
		Status: e.Status[k], Tried: e.Tried[k],
		Observables: e.Observables[o:oEnd:oEnd], Assignment: e.Assignment[a:aEnd:aEnd],
	}
	if f := e.Fits; f != nil {
		row.Fit = Fit{f.Status[k], f.ChiSquare[k], f.DegreesOfFreedom[k], f.Probability[k], f.Iterations[k]}
	}
	if u := e.Uncertainties; u != nil {
		row.Uncertainties = u.Values[o:oEnd:oEnd]
	}
	return row
}

// Reset empties the columns and keeps their memory; it says which optional ones there
// will be.
func (e *Entries) Reset(fits, uncertainties bool) {
	if !fits {
		e.Fits = nil
	} else if e.Fits == nil {
		e.Fits = &Fits{}
	}
	if !uncertainties {
		e.Uncertainties = nil
	} else if e.Uncertainties == nil {
		e.Uncertainties = &Uncertainties{}
	}
	e.Fits.cut(0)
	e.Uncertainties.cut(0)
	*e = Entries{
		Fits:              e.Fits,
		Uncertainties:     e.Uncertainties,
		Offsets:           append(e.Offsets[:0], 0),
		Hypothesis:        e.Hypothesis[:0],
		BeamRow:           e.BeamRow[:0],
		Weight:            e.Weight[:0],
		Status:            e.Status[:0],
		Tried:             e.Tried[:0],
		Observables:       e.Observables[:0],
		ObservableOffsets: append(e.ObservableOffsets[:0], 0),
		Assignment:        e.Assignment[:0],
		AssignmentOffsets: append(e.AssignmentOffsets[:0], 0),
	}
}

// Append adds an entry to the event being written, after Reset.
func (e *Entries) Append(row Entry) {
	e.Hypothesis = append(e.Hypothesis, row.Hypothesis)
	e.BeamRow = append(e.BeamRow, row.BeamRow)
	e.Weight = append(e.Weight, row.Weight)
	e.Status = append(e.Status, row.Status)
	e.Tried = append(e.Tried, row.Tried)
	if f := e.Fits; f != nil {
		f.Status = append(f.Status, row.Fit.Status)
		f.ChiSquare = append(f.ChiSquare, row.Fit.ChiSquare)
		f.DegreesOfFreedom = append(f.DegreesOfFreedom, row.Fit.DegreesOfFreedom)
		f.Probability = append(f.Probability, row.Fit.Probability)
		f.Iterations = append(f.Iterations, row.Fit.Iterations)
	}
	if u := e.Uncertainties; u != nil {
		u.Values = append(u.Values, row.Uncertainties...)
	}
	e.Observables = append(e.Observables, row.Observables...)
	e.ObservableOffsets = append(e.ObservableOffsets, int32(len(e.Observables))) //nolint:gosec // bounded by the reply's size
	e.Assignment = append(e.Assignment, row.Assignment...)
	e.AssignmentOffsets = append(e.AssignmentOffsets, int32(len(e.Assignment))) //nolint:gosec // bounded by the reply's size
}

// DropEvent takes the entries of the event being written out again.
func (e *Entries) DropEvent() {
	n := int(e.Offsets[len(e.Offsets)-1])
	e.Fits.cut(n)
	e.Uncertainties.cut(int(e.ObservableOffsets[n]))
	*e = Entries{
		Fits:              e.Fits,
		Uncertainties:     e.Uncertainties,
		Offsets:           e.Offsets,
		Hypothesis:        e.Hypothesis[:n],
		BeamRow:           e.BeamRow[:n],
		Weight:            e.Weight[:n],
		Status:            e.Status[:n],
		Tried:             e.Tried[:n],
		Observables:       e.Observables[:e.ObservableOffsets[n]],
		ObservableOffsets: e.ObservableOffsets[:n+1],
		Assignment:        e.Assignment[:e.AssignmentOffsets[n]],
		AssignmentOffsets: e.AssignmentOffsets[:n+1],
	}
}

// EndEvent closes the event being written; the next Append starts another.
func (e *Entries) EndEvent() {
	e.Offsets = append(e.Offsets, int32(e.Len())) //nolint:gosec // bounded by the reply's size
}

// cut keeps the first n fits.
func (f *Fits) cut(n int) {
	if f == nil {
		return
	}
	*f = Fits{
		Status:           f.Status[:n],
		ChiSquare:        f.ChiSquare[:n],
		DegreesOfFreedom: f.DegreesOfFreedom[:n],
		Probability:      f.Probability[:n],
		Iterations:       f.Iterations[:n],
	}
}

// cut keeps the first n values.
func (u *Uncertainties) cut(n int) {
	if u != nil {
		u.Values = u.Values[:n]
	}
}
