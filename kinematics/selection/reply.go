package selection

// Limits bound the blocks that a program will judge.
type Limits struct {
	// BlockBytes is the largest encoded event block.
	BlockBytes int64
	// Events and Objects are the most events and object rows of a block.
	Events, Objects int64
	// Candidates is the most tagged beam candidates of a block.
	Candidates int64
}

// Encoded sizes in bytes. A column is a tag, a length of at most five bytes and its
// values; so is a message within another.
const (
	wrapBytes = 6
	// headBytes covers the sequence, the digest in hexadecimal and the event count.
	headBytes = 11 + 66 + 11
	// smallestObjectBytes is a class and three numbers, smallestEventBytes an id and
	// an offset, candidateBytes three numbers.
	smallestObjectBytes = 1 + 3*8
	smallestEventBytes  = 8 + 4
	candidateBytes      = 3 * 8
	// entryBytes is an entry without its assignment and observables: hypothesis, beam
	// row, weight, status, tried and the ends of its assignment and observables.
	entryBytes = 2 + 2 + 8 + 1 + 4 + 4 + 4
	// fitBytes is the fit of an entry: status, chi-square, degrees of freedom,
	// probability and steps.
	fitBytes = 1 + 8 + 2 + 8 + 2
	// entryColumns is the number of columns of the entries with their uncertainties,
	// and fitColumns that of the fits with the message around them.
	entryColumns = 11
	fitColumns   = 6
)

// LargestReplyBytes returns a bound on the encoded size of the verdicts on one block
// within the limits. It adds the largest number of entries of each hypothesis, which
// no single block may reach for all of them:
//
//	without a tagged beam one for each event that has an object for every slot,
//	with one at most one for each candidate.
func (p *Program) LargestReplyBytes(l Limits, detail Detail) int64 {
	n := l.Events
	bitset := (n+7)/8 + wrapBytes
	size := headBytes + (n + wrapBytes) + bitset
	size += int64(len(p.hypotheses)) * (bitset + wrapBytes)
	size += int64(len(p.groups)) * (2*n + 2*wrapBytes)
	if detail != AcceptedEntries && detail != AllEntries {
		return size
	}
	size += wrapBytes*(1+entryColumns+fitColumns) + 4*(n+1) + 2*4
	for i := range p.hypotheses {
		h := &p.hypotheses[i]
		bytes := int64(entryBytes + 2*h.products + 8*len(h.record))
		if p.uncertain {
			bytes += int64(8 * len(h.record))
		}
		if p.fits {
			bytes += fitBytes
		}
		size += h.mostEntries(l) * bytes
	}
	return size
}

// mostEntries returns the most entries of the hypothesis in a block.
func (h *hypothesis) mostEntries(l Limits) int64 {
	slots := int64(len(h.slots))
	if h.beam.tagged {
		event := smallestEventBytes + 4 + slots*smallestObjectBytes
		return min(l.Candidates, max(0, l.BlockBytes-event)/candidateBytes, l.Events*MaxCandidates)
	}
	most := min(l.Events, l.BlockBytes/(smallestEventBytes+slots*smallestObjectBytes))
	if slots > 0 {
		most = min(most, l.Objects/slots)
	}
	return most
}
