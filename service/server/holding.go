package server

import (
	"sync/atomic"

	"example.org/kinegate/service/api"
)

// holdingParts is the part of the memory limit that large requests of shared listeners may
// fill as they come over the line. In memory each is there three times for a while: its
// frames, all of them in one piece, and decoded.
const holdingParts = 16

// holding bounds the bytes of large requests that calls hold together, from before they
// are read until the call ends. Calls that would pass the bound are refused by the
// announced length: however many come at once, those that are read are read to their end.
type holding struct {
	most int64 // 0 for no bound
	free int64 // a request of this size is not counted: flow control lets it in anyway
	held atomic.Int64
}

// newHolding is the bound within a memory limit; two of the largest messages always fit.
func newHolding(o *Options) *holding {
	h := &holding{free: int64(o.GeneralStreamWindow)}
	if o.MemoryLimit > 0 {
		h.most = max(int64(o.MemoryLimit)/holdingParts, 2*int64(o.MessageLimit))
	}
	return h
}

// enter takes room for a request and returns how much it took, or refuses.
func (h *holding) enter(length int64) (taken int64, err error) {
	if h.most == 0 || length <= h.free {
		return 0, nil
	}
	if held := h.held.Add(length); held > h.most {
		h.held.Add(-length)
		return 0, api.OverLimit(api.ServerOverloaded, "the large requests held in bytes,", held, h.most,
			"try again later or elsewhere, or with less at a time")
	}
	return length, nil
}

// leave gives room back.
func (h *holding) leave(taken int64) { h.held.Add(-taken) }
