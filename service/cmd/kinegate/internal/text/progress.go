package text

import (
	"fmt"
	"io"
	"strings"
	"time"
)

// Progress draws a bar on one line of a terminal. A nil Progress draws nothing, for
// output that is no terminal.
type Progress struct {
	w     io.Writer
	label string
	total int64
	last  time.Time
}

// NewProgress returns a bar for a terminal, nil otherwise.
func NewProgress(w io.Writer, terminal bool, label string, total int64) *Progress {
	if !terminal {
		return nil
	}
	return &Progress{w: w, label: label, total: total}
}

const (
	progressWidth    = 30
	progressInterval = 100 * time.Millisecond
)

// Set redraws the bar, at most ten times a second.
func (p *Progress) Set(done int64) {
	if p == nil || time.Since(p.last) < progressInterval {
		return
	}
	p.last = time.Now()
	share := 0.0
	if p.total > 0 {
		share = min(float64(done)/float64(p.total), 1)
	}
	filled := int(share * progressWidth)
	// A bar that cannot be drawn is no reason to stop the work.
	_, _ = fmt.Fprintf(p.w, "\r%s [%s%s] %3.0f %%", p.label,
		strings.Repeat("=", filled), strings.Repeat(" ", progressWidth-filled), 100*share)
}

// Done clears the line.
func (p *Progress) Done() {
	if p == nil {
		return
	}
	_, _ = fmt.Fprintf(p.w, "\r%s\r", strings.Repeat(" ", len(p.label)+progressWidth+16))
}
