package text

import (
	"fmt"
	"io"
	"math"
	"strings"
)

// Histogram counts values in bins of equal width over [Low, High).
type Histogram struct {
	Low, High float64
	Counts    []float64
	// Under and Over count values beyond the range, NaN values that are no number.
	Under, Over, NaN float64
}

// NewHistogram returns an empty histogram.
func NewHistogram(bins int, low, high float64) *Histogram {
	return &Histogram{Low: low, High: high, Counts: make([]float64, bins)}
}

// Add counts a value with a weight.
func (h *Histogram) Add(x, weight float64) {
	switch bin := math.Floor((x - h.Low) / (h.High - h.Low) * float64(len(h.Counts))); {
	case math.IsNaN(bin):
		h.NaN += weight
	case bin < 0:
		h.Under += weight
	case bin >= float64(len(h.Counts)):
		h.Over += weight
	default:
		h.Counts[int(bin)] += weight
	}
}

// barWidth is the width of the longest bar.
const barWidth = 48

// Write prints one line a bin: its lower edge, a bar and its count. Edge writes the
// edge with its unit.
func (h *Histogram) Write(w io.Writer, title string, edge func(float64) string) error {
	if _, err := fmt.Fprintf(w, "  %s\n", title); err != nil {
		return err
	}
	most, width := 0.0, 0
	edges := make([]string, len(h.Counts))
	for i, n := range h.Counts {
		most = max(most, n)
		edges[i] = edge(h.Low + (h.High-h.Low)*float64(i)/float64(len(h.Counts)))
		width = max(width, len(edges[i]))
	}
	for i, n := range h.Counts {
		length := 0
		if most > 0 && n > 0 {
			length = int(math.Round(n / most * barWidth))
		}
		bar := strings.Repeat("#", length)
		if length == 0 && n > 0 {
			bar = "."
		}
		if _, err := fmt.Fprintf(w, "  %*s |%-*s %.0f\n", width, edges[i], barWidth, bar, n); err != nil {
			return err
		}
	}
	if h.Under != 0 || h.Over != 0 || h.NaN != 0 {
		_, err := fmt.Fprintf(w, "  below %.0f, above %.0f, not computed %.0f\n", h.Under, h.Over, h.NaN)
		return err
	}
	return nil
}
