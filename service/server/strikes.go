package server

import (
	"sync"
	"time"
)

// A connection may give up so many calls at once, and so many a second for long. Callers
// who lose patience or have seen enough of a stream stay far below; who opens calls only
// to reset them, which costs him less than us, does not.
const (
	mostStrikes      = 200
	strikesPerSecond = 20
)

// strikes counts the calls that a connection gave up. They are forgotten with time, and
// one for each call that it did not give up.
type strikes struct {
	mu    sync.Mutex
	count float64
	last  time.Time
	told  bool // that they were too many
}

// note notes the end of a call, given up or not, and reports once that it was one too
// many.
func (s *strikes) note(givenUp bool, now time.Time) (tooMany bool) {
	s.mu.Lock()
	defer s.mu.Unlock()
	if s.count > 0 {
		s.count = max(0, s.count-strikesPerSecond*now.Sub(s.last).Seconds())
	}
	s.last = now
	if givenUp {
		s.count++
	} else {
		s.count = max(0, s.count-1)
	}
	first := s.count > mostStrikes && !s.told
	s.told = s.told || first
	return first
}
