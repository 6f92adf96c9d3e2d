package server

import (
	"context"
	"runtime"
	"runtime/metrics"
	"sync/atomic"
	"time"

	"example.org/kinegate/service/api"
)

// Memory is looked at so often; and above so much of the limit, in hundredths, callers of
// shared listeners are refused. The runtime keeps the process below nine tenths, and would
// spend half the processors on that before it lets the heap pass.
const (
	pressurePeriod = 100 * time.Millisecond
	pressureShare  = 85
	hundredths     = 100
)

// pressure knows whether memory is short.
type pressure struct {
	limit int64 // 0 for none
	used  atomic.Int64
}

// most is the memory in use above which callers are refused.
func (p *pressure) most() int64 { return p.limit / hundredths * pressureShare }

// refusal refuses a call while memory is short.
func (p *pressure) refusal() error {
	if used := p.used.Load(); p.limit > 0 && used > p.most() {
		return api.OverLimit(api.ServerOverloaded, "the memory in use in bytes,", used, p.most(), "try again later or elsewhere")
	}
	return nil
}

// watch looks at the memory until the context ends. While it is short it collects: with
// callers refused, nothing else would soon show that it is not short any more.
func (p *pressure) watch(ctx context.Context) {
	if p.limit == 0 {
		return
	}
	ticker := time.NewTicker(pressurePeriod)
	defer ticker.Stop()
	for {
		p.used.Store(memoryInUse())
		if p.refusal() != nil {
			runtime.GC()
			p.used.Store(memoryInUse())
		}
		select {
		case <-ticker.C:
		case <-ctx.Done():
			return
		}
	}
}

// memoryInUse is what the process cannot do without: what the last collection found
// alive, and all that is not heap. What the heap has beside that a collection gives back.
func memoryInUse() int64 {
	samples := []metrics.Sample{
		{Name: "/gc/heap/live:bytes"}, {Name: "/memory/classes/total:bytes"}, {Name: "/memory/classes/heap/released:bytes"},
		{Name: "/memory/classes/heap/free:bytes"}, {Name: "/memory/classes/heap/unused:bytes"}, {Name: "/memory/classes/heap/objects:bytes"},
	}
	metrics.Read(samples)
	value := func(i int) int64 { return int64(samples[i].Value.Uint64()) } //nolint:gosec // memory of this machine
	return value(0) + value(1) - value(2) - value(3) - value(4) - value(5)
}
