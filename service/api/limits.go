package api

import (
	"strconv"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/selection"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// Limits are the sizes that hold for unary calls and streams alike. All of them
// apply at once.
type Limits struct {
	// MessageBytes is the largest message of the transport, both ways.
	MessageBytes int
	// BlockBytes is the largest encoded event block.
	BlockBytes int
	// BlockEvents and BlockObjects are the most events and object rows of a block.
	BlockEvents, BlockObjects int
	// BlockCandidates is the most beam candidates of a block.
	BlockCandidates int
	// EventObjects is the most objects of an event; one above it gets a status.
	EventObjects int
	// DecodedBytes bounds the memory that one message may need once decoded.
	DecodedBytes int
	// CreditBlocks and CreditBytes are what a judge stream may have unanswered.
	CreditBlocks, CreditBytes int
	// PoolBytes is the sum of the byte credits of all judge streams.
	PoolBytes int
}

// DefaultLimits returns the limits that hold where nothing else is configured.
func DefaultLimits() Limits {
	const mebi = 1 << 20
	return Limits{
		MessageBytes: 4 * mebi,
		BlockBytes:   2 * mebi,
		BlockEvents:  event.MaxEvents,
		BlockObjects: event.MaxObjects,
		// A candidate is a row like an object.
		BlockCandidates: event.MaxObjects,
		EventObjects:    event.MaxObjectsPerEvent,
		DecodedBytes:    16 * mebi,
		CreditBlocks:    8,
		CreditBytes:     4 * mebi,
		PoolBytes:       64 * mebi,
	}
}

// blockLimits are the limits of one caller: the server's own, or below.
type blockLimits struct {
	bytes, events, objects, candidates int64
	// eventObjects bounds the objects and the beam candidates of an event.
	eventObjects int64
	// messageBytes bounds the messages, both ways.
	messageBytes int64
}

// blocks returns the limits of a caller who promised nothing.
func (l Limits) blocks() blockLimits {
	return blockLimits{
		bytes: int64(l.BlockBytes), events: int64(l.BlockEvents),
		objects: int64(l.BlockObjects), candidates: int64(l.BlockCandidates),
		eventObjects: int64(l.EventObjects), messageBytes: int64(l.MessageBytes),
	}
}

// narrow returns the limits that a caller promises to keep.
func (b blockLimits) narrow(promise *kinegatev1.Limits) (blockLimits, error) {
	var faults fault.List
	for _, x := range []struct {
		name    string
		promise int64
		limit   *int64
	}{
		{"block_byte_count", promise.GetBlockByteCount(), &b.bytes},
		{"block_event_count", promise.GetBlockEventCount(), &b.events},
		{"block_object_count", promise.GetBlockObjectCount(), &b.objects},
		{"event_object_count", promise.GetEventObjectCount(), &b.eventObjects},
		{"message_byte_count", promise.GetMessageByteCount(), &b.messageBytes},
		{"block_candidate_count", promise.GetBlockCandidateCount(), &b.candidates},
	} {
		switch {
		case x.promise < 0:
			faults = append(faults, fault.New(fault.Invalid, "limits."+x.name, strconv.FormatInt(x.promise, 10), ">= 0"))
		case x.promise > 0:
			*x.limit = min(*x.limit, x.promise)
		}
	}
	// A block travels in a message.
	b.bytes = min(b.bytes, b.messageBytes)
	return b, faults.Err()
}

// of returns the limits that just hold a block.
func (b blockLimits) of(bytes int64, block *event.Block) blockLimits {
	b.bytes, b.events, b.objects, b.candidates = bytes, int64(block.Events()), int64(block.Rows()), 0
	if block.Beam != nil {
		b.candidates = int64(len(block.Beam.EnergyGeV))
	}
	return b
}

// check refuses a block beyond the limits, naming both numbers.
func (b blockLimits) check(bytes int64, block *event.Block) error {
	size := b.of(bytes, block)
	for _, x := range []struct {
		what          string
		actual, limit int64
	}{
		{"the size of the block in bytes", size.bytes, b.bytes},
		{"the number of events of the block", size.events, b.events},
		{"the number of objects of the block", size.objects, b.objects},
		{"the number of beam candidates of the block", size.candidates, b.candidates},
	} {
		if x.actual > x.limit {
			return b.over(x.what, x.actual, x.limit)
		}
	}
	return b.checkEvents(block)
}

// checkEvents refuses a block with an event beyond what its caller promised. One beyond the
// server's own limit has a status for that.
func (b blockLimits) checkEvents(block *event.Block) error {
	if b.eventObjects >= event.MaxObjectsPerEvent {
		return nil
	}
	for i := range block.Events() {
		first, end := block.Objects(i)
		if n := int64(end - first); n > b.eventObjects {
			return b.over("the number of objects of event "+strconv.Itoa(i), n, b.eventObjects)
		}
		first, end = block.Candidates(i)
		if n := int64(end - first); n > b.eventObjects {
			return b.over("the number of beam candidates of event "+strconv.Itoa(i), n, b.eventObjects)
		}
	}
	return nil
}

// over is the refusal of a block that is beyond a limit.
func (blockLimits) over(what string, actual, limit int64) error {
	return OverLimit(BlockInvalid, what, actual, limit, "send smaller blocks")
}

// form is the limits in the core's form.
func (b blockLimits) form() selection.Limits {
	return selection.Limits{BlockBytes: b.bytes, Events: b.events, Objects: b.objects, Candidates: b.candidates}
}

// message tells callers the limits.
func (b blockLimits) message() *kinegatev1.Limits {
	return &kinegatev1.Limits{
		BlockByteCount:      b.bytes,
		BlockEventCount:     b.events,
		BlockObjectCount:    b.objects,
		BlockCandidateCount: b.candidates,
		EventObjectCount:    b.eventObjects,
		MessageByteCount:    b.messageBytes,
	}
}
