package api

import "example.org/kinegate/kinematics/event"

// Limits are the sizes that hold for unary calls and streams alike. All of them
// apply at once.
type Limits struct {
	// MessageBytes is the largest message of the transport, both ways.
	MessageBytes int
	// BlockBytes is the largest encoded event block.
	BlockBytes int
	// BlockEvents and BlockObjects are the most events and object rows of a block.
	BlockEvents, BlockObjects int
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
		EventObjects: event.MaxObjectsPerEvent,
		DecodedBytes: 16 * mebi,
		CreditBlocks: 8,
		CreditBytes:  4 * mebi,
		PoolBytes:    64 * mebi,
	}
}
