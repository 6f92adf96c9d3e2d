// Package history checks what a caller saw on judge streams against what must have
// happened: each event is answered exactly once, in order, with the bits of a run that
// was never interrupted. It knows events and not blocks, so that runs with other block
// sizes compare.
package history

import (
	"encoding/binary"
	"fmt"
	"slices"
	"sync"

	"example.org/kinegate/proto/column"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// Checker follows one sequence of blocks, over however many streams it goes. It is
// safe for concurrent use.
type Checker struct {
	mu        sync.Mutex
	first     int64
	next      int64             // sequence of the next answer
	sent      map[int64][]int64 // events of each sequence
	place     map[int64]int64   // sequence of each event
	budget    bool              // without one, no event may be late
	reference map[int64]string
	faults    []string
	counts    Counts
}

// Counts sums up what was seen, in events.
type Counts struct {
	// Sent, Answered and Expired are events sent, answered, and answered without a
	// judgement because they were late.
	Sent, Answered, Expired int
}

// maxFaults bounds the faults kept: the first ones tell.
const maxFaults = 20

// New returns a checker of a stream with an opening.
func New(open *kinegatev1.JudgeOpen) *Checker {
	c := &Checker{sent: map[int64][]int64{}, place: map[int64]int64{}, reference: map[int64]string{}}
	c.opens(open)
	return c
}

// Another returns a checker of another stream that knows what was learned, which must be
// over: the two share it.
func (c *Checker) Another(open *kinegatev1.JudgeOpen) *Checker {
	other := New(open)
	other.reference = c.reference
	return other
}

func (c *Checker) opens(open *kinegatev1.JudgeOpen) {
	c.first, c.budget = open.GetFirstSequence(), open.LatencyBudgetS != nil
	c.next = c.first
}

// Learn takes a block and its verdict from a run that was not interrupted. Event ids
// name the events and must differ.
func (c *Checker) Learn(block *kinegatev1.EventBlock, verdict *kinegatev1.VerdictBlock) error {
	ids, err := column.Int64s(block.GetEventIds())
	if err != nil {
		return err
	}
	records, err := Records(verdict, len(ids))
	if err != nil {
		return err
	}
	c.mu.Lock()
	defer c.mu.Unlock()
	for i, id := range ids {
		if _, known := c.reference[id]; known {
			return fmt.Errorf("event %d was learned before", id)
		}
		if records[i] == expired {
			return fmt.Errorf("event %d was late, which teaches nothing", id)
		}
		c.reference[id] = records[i]
	}
	return nil
}

// Again starts over with the first sequence, for one more run of what was learned; the
// counts go on.
func (c *Checker) Again() {
	c.mu.Lock()
	defer c.mu.Unlock()
	c.next = c.first
	clear(c.sent)
	clear(c.place)
}

// Sent notes a block that was sent, or sent again: one sequence must always stand for
// the same events, and an event for one sequence.
func (c *Checker) Sent(block *kinegatev1.EventBlock) {
	ids, err := column.Int64s(block.GetEventIds())
	c.mu.Lock()
	defer c.mu.Unlock()
	sequence := block.GetSequence()
	if err != nil {
		c.faultLocked("block %d: %v", sequence, err)
	}
	if before, again := c.sent[sequence]; again {
		if !slices.Equal(before, ids) {
			c.faultLocked("sequence %d was sent with other events than before", sequence)
		}
		return
	}
	c.counts.Sent += len(ids)
	c.sent[sequence] = ids
	for _, id := range ids {
		if other, known := c.place[id]; known {
			c.faultLocked("event %d was sent in sequence %d and in %d", id, other, sequence)
		}
		c.place[id] = sequence
	}
}

// Answered notes a verdict that the caller got.
func (c *Checker) Answered(verdict *kinegatev1.VerdictBlock) {
	c.mu.Lock()
	defer c.mu.Unlock()
	sequence := verdict.GetSequence()
	if sequence != c.next {
		c.faultLocked("sequence %d was answered where %d was due", sequence, c.next)
	}
	c.next = sequence + 1
	ids, known := c.sent[sequence]
	if !known {
		c.faultLocked("sequence %d was answered and never sent", sequence)
		return
	}
	records, err := Records(verdict, len(ids))
	if err != nil {
		c.faultLocked("sequence %d: %v", sequence, err)
		return
	}
	for i, id := range ids {
		c.counts.Answered++
		if records[i] == expired {
			c.counts.Expired++
			if !c.budget {
				c.faultLocked("event %d was late where there is no budget", id)
			}
			continue
		}
		if want, learned := c.reference[id]; learned && want != records[i] {
			c.faultLocked("event %d has other bits than in the uninterrupted run: %x, not %x", id, records[i], want)
		}
	}
}

func (c *Checker) faultLocked(format string, args ...any) {
	if len(c.faults) < maxFaults {
		c.faults = append(c.faults, fmt.Sprintf(format, args...))
	}
}

// Faults are what was wrong so far; at the end of a run in which everything must have
// been answered, complete asks for that too.
func (c *Checker) Faults(complete bool) []string {
	c.mu.Lock()
	defer c.mu.Unlock()
	if complete && c.counts.Answered != c.counts.Sent {
		c.faultLocked("%d of %d events were answered", c.counts.Answered, c.counts.Sent)
	}
	return c.faults
}

// Counts sums up what was seen.
func (c *Checker) Counts() Counts {
	c.mu.Lock()
	defer c.mu.Unlock()
	return c.counts
}

// expired is the record of an event that was late: the only one that may differ when
// the event is judged again.
const expired = "expired"

// Records returns, for each event of a verdict block, everything that the block says
// about it, in a form in which equal strings are equal bits.
func Records(v *kinegatev1.VerdictBlock, events int) ([]string, error) {
	records := make([]string, events)
	if r := v.GetRejected(); r != nil {
		for i := range records {
			records[i] = "rejected " + r.GetReason()
		}
		return records, nil
	}
	if int(v.GetEventCount()) != events || len(v.GetStatuses()) != events {
		return nil, fmt.Errorf("verdicts on %d events, %d statuses: %d events were sent", v.GetEventCount(), len(v.GetStatuses()), events)
	}
	entries, err := readEntries(v.GetEntries(), events)
	if err != nil {
		return nil, err
	}
	for i := range records {
		if kinegatev1.EventStatus(v.GetStatuses()[i]) == kinegatev1.EventStatus_EVENT_STATUS_EXPIRED {
			records[i] = expired
			continue
		}
		b := []byte{v.GetStatuses()[i], bit(v.GetGate(), i)}
		for _, h := range v.GetHypotheses() {
			b = append(b, bit(h.GetAccepted(), i))
		}
		for _, g := range v.GetGroups() {
			b = append(b, slot(g.GetBest(), i, sizeInt16)...)
		}
		records[i] = string(entries.append(b, i))
	}
	return records, nil
}

func bit(bits []byte, i int) byte {
	if column.Bit(bits, i) {
		return 1
	}
	return 0
}

// Sizes of columns in bytes an entry.
const (
	sizeInt16   = 2
	sizeInt32   = 4
	sizeFloat64 = 8
)

// slot is entry i of a column as bytes; nothing beyond its end, which then differs.
func slot(raw []byte, i, size int) []byte {
	if i < 0 || (i+1)*size > len(raw) {
		return nil
	}
	return raw[i*size : (i+1)*size]
}

// entries are the entry columns of a block.
type entries struct {
	*kinegatev1.EntryColumns

	offsets, assignments, observables []int32
}

func readEntries(m *kinegatev1.EntryColumns, events int) (*entries, error) {
	if m == nil {
		return nil, nil //nolint:nilnil // none were asked for
	}
	e := &entries{EntryColumns: m}
	for _, c := range []struct {
		to  *[]int32
		raw []byte
	}{{&e.offsets, m.GetOffsets()}, {&e.assignments, m.GetAssignmentOffsets()}, {&e.observables, m.GetObservableOffsets()}} {
		var err error
		if *c.to, err = column.Int32s(c.raw); err != nil {
			return nil, err
		}
	}
	rows := len(m.GetStatuses())
	if len(e.offsets) != events+1 || int(e.offsets[events]) != rows || len(e.assignments) != rows+1 || len(e.observables) != rows+1 {
		return nil, fmt.Errorf("entry columns do not fit together: %d offsets for %d events", len(e.offsets), events)
	}
	return e, nil
}

// append adds the entries of event i.
func (e *entries) append(b []byte, i int) []byte {
	if e == nil {
		return b
	}
	for k := int(e.offsets[i]); k < int(e.offsets[i+1]); k++ {
		b = append(b, "entry"...)
		b = append(b, slot(e.GetHypothesisIndices(), k, sizeInt16)...)
		b = append(b, slot(e.GetBeamRows(), k, sizeInt16)...)
		b = append(b, slot(e.GetWeights(), k, sizeFloat64)...)
		b = append(b, slot(e.GetStatuses(), k, 1)...)
		b = append(b, slot(e.GetAssignmentCounts(), k, sizeInt32)...)
		b = part(b, e.GetAssignments(), e.assignments[k], e.assignments[k+1], sizeInt16)
		b = part(b, e.GetObservables(), e.observables[k], e.observables[k+1], sizeFloat64)
		if e.ObservableUncertainties != nil {
			b = part(append(b, "uncertainties"...), e.GetObservableUncertainties(), e.observables[k], e.observables[k+1], sizeFloat64)
		}
		b = fit(b, e.GetFits(), k)
	}
	return b
}

// fit adds the fit of entry k, if there are any.
func fit(b []byte, fits *kinegatev1.FitColumns, k int) []byte {
	if fits == nil {
		return b
	}
	b = append(b, "fit"...)
	b = append(b, slot(fits.GetStatuses(), k, 1)...)
	b = append(b, slot(fits.GetChiSquares(), k, sizeFloat64)...)
	b = append(b, slot(fits.GetDegreesOfFreedom(), k, sizeInt16)...)
	b = append(b, slot(fits.GetProbabilities(), k, sizeFloat64)...)
	return append(b, slot(fits.GetIterationCounts(), k, sizeInt16)...)
}

// part adds a range of a column behind its length.
func part(b, raw []byte, from, to int32, size int) []byte {
	b = binary.LittleEndian.AppendUint32(b, uint32(to-from)) //nolint:gosec // the bits are two's complement
	for i := from; i < to; i++ {
		b = append(b, slot(raw, int(i), size)...)
	}
	return b
}
