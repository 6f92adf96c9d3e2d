package telemetry

import (
	"io"
	"sync"
	"sync/atomic"
	"time"
)

// queuedLines bounds how many log lines wait for a slow reader, and flushLimit how
// long Close waits for it: a log pipe that nobody reads must neither block a call
// nor hold up the end of the process.
const (
	queuedLines = 4096
	flushLimit  = time.Second
)

// Writer passes log lines to another writer without ever blocking the caller. Lines
// that find the queue full are dropped and counted. Its methods are safe for
// concurrent use; Close must be called once.
type Writer struct {
	to      io.Writer
	dropped atomic.Uint64
	done    chan struct{}

	mu     sync.RWMutex // guards closed, and lines against being closed
	closed bool
	lines  chan []byte
}

// NewWriter starts passing lines to the given writer.
func NewWriter(to io.Writer) *Writer {
	w := &Writer{to: to, done: make(chan struct{}), lines: make(chan []byte, queuedLines)}
	go w.pass()
	return w
}

// Write queues a copy of one line. It never blocks and never fails.
func (w *Writer) Write(line []byte) (int, error) {
	w.mu.RLock()
	defer w.mu.RUnlock()
	if w.closed {
		w.dropped.Add(1)
		return len(line), nil
	}
	select {
	case w.lines <- append([]byte(nil), line...):
	default:
		w.dropped.Add(1)
	}
	return len(line), nil
}

// Drop counts lines that were held back before they came here.
func (w *Writer) Drop() { w.dropped.Add(1) }

// Dropped is the number of lines lost so far.
func (w *Writer) Dropped() uint64 { return w.dropped.Load() }

// Close takes no more lines and waits until those queued are written, at most a
// second.
func (w *Writer) Close() {
	w.mu.Lock()
	w.closed = true
	close(w.lines)
	w.mu.Unlock()
	timeout := time.NewTimer(flushLimit)
	defer timeout.Stop()
	select {
	case <-w.done:
	case <-timeout.C:
	}
}

// pass writes queued lines until the queue is closed and empty. A failed write
// loses its line and nothing else.
func (w *Writer) pass() {
	defer close(w.done)
	for line := range w.lines {
		if _, err := w.to.Write(line); err != nil {
			w.dropped.Add(1)
		}
	}
}
