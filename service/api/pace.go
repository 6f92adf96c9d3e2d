package api

import (
	"context"
	"runtime"
	"time"
)

// turns limits how many goroutines work at once for one listener. A turn is short,
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

// Times of bulk work.
const (
	// yieldPeriod is how long bulk work runs before it steps back for whatever else waits
	// for a processor. The runtime itself takes a processor away after 10 ms only.
	yieldPeriod = 200 * time.Microsecond
	// longestTurn is how long work keeps a turn while others may wait for it.
	longestTurn = 2 * time.Millisecond
)

// spell is a piece of work in one goroutine that takes turns.
type spell struct {
	ctx   context.Context //nolint:containedctx // the life of the work, which is one call
	turns *turns          // nil for work that nobody waits behind
	held  bool
	// begun is when the turn began, and before the first one the work; rested is when it
	// stepped back last.
	begun, rested time.Time
}

// begin starts work that takes its first turn when it has gone on for a while: most
// calls are over before and wait for nobody.
func (t *turns) begin(ctx context.Context) *spell {
	now := time.Now()
	return &spell{ctx: ctx, turns: t, begun: now, rested: now}
}

// take waits for a turn.
func (s *spell) take() error {
	if err := s.turns.take(s.ctx); err != nil {
		return err
	}
	s.hold()
	return nil
}

// hold notes a turn that was taken.
func (s *spell) hold() {
	s.held = true
	s.begun = time.Now()
	s.rested = s.begun
}

// end gives the turn back, if the work has one.
func (s *spell) end() {
	if s.held {
		s.held = false
		s.turns.giveBack()
	}
}

// stop is called by the work every few microseconds and reports whether it must end.
// In between it steps back, or leaves the turn to those who wait for one.
func (s *spell) stop() bool {
	if s.ctx.Err() != nil {
		return true
	}
	now := time.Now()
	if s.turns == nil || now.Sub(s.rested) < yieldPeriod {
		return false
	}
	if !s.held || now.Sub(s.begun) >= longestTurn {
		s.end()
		return s.take() != nil
	}
	if s.turns.yields {
		runtime.Gosched()
	}
	s.rested = time.Now()
	return false
}

// each calls do for every index below n.
func (s *spell) each(n int, do func(i int) error) error {
	for i := range n {
		if s.stop() {
			return s.ctx.Err()
		}
		if err := do(i); err != nil {
			return err
		}
	}
	return nil
}
