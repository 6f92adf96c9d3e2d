package server

import (
	"sync"

	"example.org/kinegate/service/api"
)

// quota bounds the open calls of each caller, so that one cannot take the places of
// all others.
type quota struct {
	mu   sync.Mutex
	open map[string]int64 // callers with open calls
}

// enter takes a place of the caller's own, or refuses.
func (q *quota) enter(caller string, most int64) error {
	q.mu.Lock()
	defer q.mu.Unlock()
	if q.open == nil {
		q.open = map[string]int64{}
	}
	if open := q.open[caller]; open >= most {
		return api.OverLimit(api.QuotaExceeded, "the number of open calls of this caller,", open+1, most,
			"wait for answers before you ask more").With("caller", caller)
	}
	q.open[caller]++
	return nil
}

// leave gives a place back.
func (q *quota) leave(caller string) {
	q.mu.Lock()
	defer q.mu.Unlock()
	if q.open[caller]--; q.open[caller] == 0 {
		delete(q.open, caller)
	}
}
