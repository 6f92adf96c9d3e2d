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

// EntryStatus says how the judging of one entry ended.
type EntryStatus uint8

// The states of an entry.
const (
	// Judged marks an entry that was judged in full.
	Judged EntryStatus = iota
	// FitNotConverged marks a fit that stopped short of its stated bound.
	FitNotConverged
	// BudgetUsedUp marks assignments left untried when the budget ended.
	BudgetUsedUp
	// NotFitted marks a fit that could not be tried: no covariance, or less
	// measured than the constraints need.
	NotFitted
)

// VerdictBlock holds the verdicts on one Block, event for event.
type VerdictBlock struct {
	// Status of each event; only Good events are judged.
	Status []Status
	// Gate is the gate's decision per event, after prescale, veto and shadow.
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
// Offsets[i+1].
type Entries struct {
	Offsets []int32
	// Hypothesis is the number of the hypothesis.
	Hypothesis []int16
	// BeamRow is the row of the beam candidate in the block, or -1 for none.
	BeamRow []int32
	// Weight of the beam candidate, by prompt or side-band window.
	Weight []float64
	Status []EntryStatus
	// ChiSquare, NDF and Probability of the fit; NaN, 0 and NaN without one.
	ChiSquare   []float64
	NDF         []int16
	Probability []float64
	// Observables holds ObservableStride[h] numbers for an entry of hypothesis
	// h, entry after entry; NaN is not computed.
	Observables      []float64
	ObservableStride []int32
	// Assignment holds AssignmentStride[h] numbers for an entry of hypothesis h:
	// for each product the object's index within its event, or -1.
	Assignment       []int16
	AssignmentStride []int32
}

// Entry is one row of Entries. Its slices alias the columns.
type Entry struct {
	Hypothesis  int16
	BeamRow     int32
	Weight      float64
	Status      EntryStatus
	ChiSquare   float64
	NDF         int16
	Probability float64
	Observables []float64
	Assignment  []int16
}

// Append adds a row. The lengths of its slices are the strides of its
// hypothesis.
func (e *Entries) Append(row Entry) {
	e.Hypothesis = append(e.Hypothesis, row.Hypothesis)
	e.BeamRow = append(e.BeamRow, row.BeamRow)
	e.Weight = append(e.Weight, row.Weight)
	e.Status = append(e.Status, row.Status)
	e.ChiSquare = append(e.ChiSquare, row.ChiSquare)
	e.NDF = append(e.NDF, row.NDF)
	e.Probability = append(e.Probability, row.Probability)
	e.Observables = append(e.Observables, row.Observables...)
	e.Assignment = append(e.Assignment, row.Assignment...)
}

// Reset empties the rows and keeps their memory and the strides.
func (e *Entries) Reset() {
	e.Offsets = e.Offsets[:0]
	e.Hypothesis = e.Hypothesis[:0]
	e.BeamRow = e.BeamRow[:0]
	e.Weight = e.Weight[:0]
	e.Status = e.Status[:0]
	e.ChiSquare = e.ChiSquare[:0]
	e.NDF = e.NDF[:0]
	e.Probability = e.Probability[:0]
	e.Observables = e.Observables[:0]
	e.Assignment = e.Assignment[:0]
}

// All calls yield with the index and the content of every entry in order,
// until yield returns false.
func (e *Entries) All(yield func(int, Entry) bool) {
	observable, assigned := 0, 0
	for i, h := range e.Hypothesis {
		o := observable + int(e.ObservableStride[h])
		a := assigned + int(e.AssignmentStride[h])
		row := Entry{
			Hypothesis: h, BeamRow: e.BeamRow[i], Weight: e.Weight[i], Status: e.Status[i],
			ChiSquare: e.ChiSquare[i], NDF: e.NDF[i], Probability: e.Probability[i],
			Observables: e.Observables[observable:o:o],
			Assignment:  e.Assignment[assigned:a:a],
		}
		if !yield(i, row) {
			return
		}
		observable, assigned = o, a
	}
}
