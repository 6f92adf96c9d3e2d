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
	// ChiSquare, NDF and Probability of the fit; NaN, 0 and NaN without one.
	ChiSquare   []float64
	NDF         []int16
	Probability []float64
	// Observables that the hypothesis records, in its order; NaN is not computed.
	Observables       []float64
	ObservableOffsets []int32
	// Assignment is, for each product, the object's index within its event, or
	// -1 for a product that no object stands for.
	Assignment        []int16
	AssignmentOffsets []int32
}

// Entry is one row of Entries. Its slices alias the columns.
type Entry struct {
	Hypothesis  int16
	BeamRow     int16
	Weight      float64
	Status      EntryStatus
	Tried       int32
	ChiSquare   float64
	NDF         int16
	Probability float64
	Observables []float64
	Assignment  []int16
}

// Len is the number of entries.
func (e *Entries) Len() int { return len(e.Hypothesis) }

// Row returns entry k.
func (e *Entries) Row(k int) Entry {
	o, oEnd := e.ObservableOffsets[k], e.ObservableOffsets[k+1]
	a, aEnd := e.AssignmentOffsets[k], e.AssignmentOffsets[k+1]
	return Entry{
		Hypothesis: e.Hypothesis[k], BeamRow: e.BeamRow[k], Weight: e.Weight[k],
		Status: e.Status[k], Tried: e.Tried[k],
		ChiSquare: e.ChiSquare[k], NDF: e.NDF[k], Probability: e.Probability[k],
		Observables: e.Observables[o:oEnd:oEnd], Assignment: e.Assignment[a:aEnd:aEnd],
	}
}

// Reset empties the columns and keeps their memory.
func (e *Entries) Reset() {
	*e = Entries{
		Offsets:           append(e.Offsets[:0], 0),
		Hypothesis:        e.Hypothesis[:0],
		BeamRow:           e.BeamRow[:0],
		Weight:            e.Weight[:0],
		Status:            e.Status[:0],
		Tried:             e.Tried[:0],
		ChiSquare:         e.ChiSquare[:0],
		NDF:               e.NDF[:0],
		Probability:       e.Probability[:0],
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
	e.ChiSquare = append(e.ChiSquare, row.ChiSquare)
	e.NDF = append(e.NDF, row.NDF)
	e.Probability = append(e.Probability, row.Probability)
	e.Observables = append(e.Observables, row.Observables...)
	e.ObservableOffsets = append(e.ObservableOffsets, int32(len(e.Observables))) //nolint:gosec // bounded by the reply's size
	e.Assignment = append(e.Assignment, row.Assignment...)
	e.AssignmentOffsets = append(e.AssignmentOffsets, int32(len(e.Assignment))) //nolint:gosec // bounded by the reply's size
}

// DropEvent takes the entries of the event being written out again.
func (e *Entries) DropEvent() {
	n := int(e.Offsets[len(e.Offsets)-1])
	*e = Entries{
		Offsets:           e.Offsets,
		Hypothesis:        e.Hypothesis[:n],
		BeamRow:           e.BeamRow[:n],
		Weight:            e.Weight[:n],
		Status:            e.Status[:n],
		Tried:             e.Tried[:n],
		ChiSquare:         e.ChiSquare[:n],
		NDF:               e.NDF[:n],
		Probability:       e.Probability[:n],
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
