package server

import (
	"context"
	"slices"
	"sync"
	"time"

	"example.org/kinegate/service/api"
	"example.org/kinegate/service/telemetry"
)

// workQueue admits work by its cost. Room is counted in shares: a slot, which is as
// much as one processor does at a time, has api.SlotShares of them. Work that finds no
// room waits in a queue of half the room at most; a longer one would only make every
// caller late. What does not fit there is refused at once.
type workQueue struct {
	metrics *telemetry.Metrics

	mu      sync.Mutex
	used    int
	queued  int // sum of the costs of waiting
	waiting []*waiter
}

// waiter is work that waits, the longest first.
type waiter struct {
	ctx   context.Context //nolint:containedctx // of the call that waits
	cost  int
	slots int
	admit chan struct{} // closed on admission
}

// enter waits for room among the slots and takes it. Every nil is followed by one leave
// of the same cost.
func (q *workQueue) enter(ctx context.Context, cost, slots int) error {
	q.mu.Lock()
	switch now, err := q.placeLocked(cost, slots); {
	case err != nil:
		q.mu.Unlock()
		return err
	case now:
		q.takeLocked(cost)
		q.mu.Unlock()
		q.metrics.WorkAdmitted(0)
		return nil
	}
	w := &waiter{ctx, cost, slots, make(chan struct{})}
	q.waiting = append(q.waiting, w)
	q.queued += cost
	begun := time.Now()
	q.mu.Unlock()
	select {
	case <-w.admit:
		q.metrics.WorkAdmitted(time.Since(begun))
		return nil
	case <-ctx.Done():
		return q.giveUp(w)
	}
}

// full refuses if not even the cheapest work could enter, so that a call can be refused
// before its message is read.
func (q *workQueue) full(slots int) error {
	q.mu.Lock()
	defer q.mu.Unlock()
	_, err := q.placeLocked(1, slots)
	return err
}

// placeLocked says whether work may begin now, or wait; the error refuses it.
func (q *workQueue) placeLocked(cost, slots int) (now bool, err error) {
	room := slots * api.SlotShares
	if len(q.waiting) == 0 && q.used+cost <= room {
		return true, nil
	}
	most := max(room/2, api.SlotShares) // work of a whole slot can wait where there is only one
	if q.queued+cost > most {
		q.dropExpiredLocked()
	}
	if q.queued+cost > most {
		return false, api.OverLimit(api.ServerOverloaded, "the work that waits, in shares of a slot,",
			int64(q.queued+cost), int64(most), "try again later or elsewhere")
	}
	return false, nil
}

// giveUp takes a waiter whose call has ended out of the queue, or gives back the room
// that it was granted at the same moment.
func (q *workQueue) giveUp(w *waiter) error {
	q.mu.Lock()
	defer q.mu.Unlock()
	select {
	case <-w.admit:
		q.leaveLocked(w.cost)
	default:
		q.dropExpiredLocked()
		q.grantLocked() // what stood behind it may fit now
	}
	return context.Cause(w.ctx)
}

// dropExpiredLocked takes those whose calls have ended out of the queue.
func (q *workQueue) dropExpiredLocked() {
	q.waiting = slices.DeleteFunc(q.waiting, func(w *waiter) bool {
		if w.ctx.Err() == nil {
			return false
		}
		q.queued -= w.cost
		return true
	})
}

// leave gives room back and admits those who wait for it.
func (q *workQueue) leave(cost int) {
	q.mu.Lock()
	defer q.mu.Unlock()
	q.leaveLocked(cost)
}

func (q *workQueue) leaveLocked(cost int) {
	q.takeLocked(-cost)
	q.grantLocked()
}

// grantLocked admits from the head of the queue while there is room.
func (q *workQueue) grantLocked() {
	for len(q.waiting) > 0 {
		w := q.waiting[0]
		if q.used+w.cost > w.slots*api.SlotShares {
			return
		}
		q.waiting = q.waiting[1:]
		q.queued -= w.cost
		q.takeLocked(w.cost)
		close(w.admit)
	}
}

func (q *workQueue) takeLocked(cost int) {
	q.used += cost
	q.metrics.WorkInUse(float64(q.used) / api.SlotShares)
}
