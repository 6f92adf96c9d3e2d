package api

import (
	"context"
	"runtime"
	"time"
)

// turns limits how many goroutines judge at once for one listener. A turn is short,
// so waiting callers take theirs in the order of the runtime's queue, and the bulk
// work of one listener cannot take those of the other.
type turns struct {
	free chan struct{}
	// yields says that the work steps back for others now and then.
	yields bool
}

func newTurns(n int, yields bool) *turns {
	t := &turns{free: make(chan struct{}, n), yields: yields}
	for range n {
		t.free <- struct{}{}
	}
	return t
}

// count is the number of turns.
func (t *turns) count() int { return cap(t.free) }

// take waits for a turn; the caller gives it back at once after its use.
func (t *turns) take(ctx context.Context) error {
	select {
	case <-t.free:
		return nil
	case <-ctx.Done():
		return ctx.Err()
	}
}

// try takes a turn if there is one.
func (t *turns) try() bool {
	select {
	case <-t.free:
		return true
	default:
		return false
	}
}

// giveBack returns a turn.
func (t *turns) giveBack() { t.free <- struct{}{} }

// yieldPeriod is how long bulk work runs before it steps back for whatever else
// waits for a processor. The runtime itself takes a processor away after 10 ms only.
const yieldPeriod = 200 * time.Microsecond

// pace makes bulk work step back.
type pace struct{ last time.Time }

// rest steps back if it was long enough since the last time.
func (p *pace) rest() {
	if now := time.Now(); now.Sub(p.last) >= yieldPeriod {
		runtime.Gosched()
		p.last = time.Now()
	}
}
