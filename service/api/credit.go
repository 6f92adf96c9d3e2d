package api

import (
	"strconv"
	"sync"
	"time"
)

// creditPool holds the byte credits of all judge streams. gRPC's own windows do not
// bound memory: its connection window is refilled even while streams go unread.
type creditPool struct {
	mu       sync.Mutex
	left     int64
	observer StreamObserver
}

func newCreditPool(size int64, observer StreamObserver) *creditPool {
	return &creditPool{left: size, observer: observer}
}

// retryOverload is how long a caller refused for lack of room should wait.
const retryOverload = time.Second

// take reserves bytes, or refuses: a stream that cannot have its whole credit would
// stall at its first large block.
func (p *creditPool) take(bytes int64) error {
	p.mu.Lock()
	defer p.mu.Unlock()
	if p.left < bytes {
		refusal := Refuse(ServerOverloaded, "the judge streams of this server hold all credit there is",
			"wanted_byte_count", strconv.FormatInt(bytes, 10), "left_byte_count", strconv.FormatInt(p.left, 10))
		refusal.RetryAfter = retryOverload
		return refusal
	}
	p.left -= bytes
	p.observer.CreditHeld(bytes)
	return nil
}

// hold is what one stream has taken from the pool.
type hold struct {
	pool *creditPool

	mu    sync.Mutex
	bytes int64
	over  bool
}

// grow takes what is missing to a number of bytes; what is held already is kept.
func (h *hold) grow(bytes int64) error {
	h.mu.Lock()
	defer h.mu.Unlock()
	if h.over || bytes <= h.bytes {
		return nil
	}
	if err := h.pool.take(bytes - h.bytes); err != nil {
		return err
	}
	h.bytes = bytes
	return nil
}

// giveBack returns everything for good.
func (h *hold) giveBack() {
	h.mu.Lock()
	defer h.mu.Unlock()
	h.pool.mu.Lock()
	defer h.pool.mu.Unlock()
	h.pool.left += h.bytes
	h.pool.observer.CreditHeld(-h.bytes)
	h.bytes, h.over = 0, true
}

// ledger is the credit of one stream: what of it blocks use that are not answered.
// The reader uses it and the writer gives it back.
type ledger struct {
	mu                      sync.Mutex
	blocks, bytes           int64
	blockCredit, byteCredit int64
	received, answered      int64 // sequences
	oldestReceipt           []time.Time
}

// use books a block on receipt.
func (l *ledger) use(sequence, bytes int64, receipt time.Time) error {
	l.mu.Lock()
	defer l.mu.Unlock()
	if sequence != l.received+1 {
		return Refuse(StreamProtocolBroken, "event blocks must come in sequence",
			"sequence", strconv.FormatInt(sequence, 10), "expected_sequence", strconv.FormatInt(l.received+1, 10))
	}
	if l.blocks+1 > l.blockCredit {
		return OverLimit(StreamProtocolBroken, "the number of unanswered blocks", l.blocks+1, l.blockCredit,
			"wait for verdicts before sending more")
	}
	if l.bytes+bytes > l.byteCredit {
		return OverLimit(StreamProtocolBroken, "the bytes of unanswered blocks", l.bytes+bytes, l.byteCredit,
			"wait for verdicts before sending more")
	}
	l.blocks++
	l.bytes += bytes
	l.received = sequence
	l.oldestReceipt = append(l.oldestReceipt, receipt)
	return nil
}

// answer gives the credit of the oldest block back.
func (l *ledger) answer(sequence, bytes int64) {
	l.mu.Lock()
	defer l.mu.Unlock()
	l.blocks--
	l.bytes -= bytes
	l.answered = sequence
	l.oldestReceipt = l.oldestReceipt[:copy(l.oldestReceipt, l.oldestReceipt[1:])]
}

// pulse returns what a heartbeat says.
func (l *ledger) pulse(now time.Time) (received, answered int64, oldest time.Duration) {
	l.mu.Lock()
	defer l.mu.Unlock()
	if len(l.oldestReceipt) > 0 {
		oldest = now.Sub(l.oldestReceipt[0])
	}
	return l.received, l.answered, oldest
}
