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
	// Counts are the sums of the weights in the bins, Squares those of their squares.
	Counts, Squares []float64
	// Weighted says that a weight was not 1, so that errors are worth their room.
	Weighted bool
	// Under and Over count values beyond the range, NaN values that are no number.
	Under, Over, NaN float64
}

// NewHistogram returns an empty histogram.
func NewHistogram(bins int, low, high float64) *Histogram {
	return &Histogram{Low: low, High: high, Counts: make([]float64, bins), Squares: make([]float64, bins)}
}

// Add counts a value with a weight.
func (h *Histogram) Add(x, weight float64) {
	h.Weighted = h.Weighted || weight != 1
	switch bin := math.Floor((x - h.Low) / (h.High - h.Low) * float64(len(h.Counts))); {
	case math.IsNaN(bin):
		h.NaN += weight
	case bin < 0:
		h.Under += weight
	case bin >= float64(len(h.Counts)):
		h.Over += weight
	default:
		h.Counts[int(bin)] += weight
		h.Squares[int(bin)] += weight * weight
	}
}

// barWidth is the width of the longest bar.
const barWidth = 48

// Write prints one line a bin: its lower edge, a bar and its count, with the root of the
// sum of the squares of the weights where these are not all 1. Edge writes the edge with
// its unit.
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
		if _, err := fmt.Fprintf(w, "  %*s |%-*s %s\n", width, edges[i], barWidth, bar, h.figure(n, h.Squares[i])); err != nil {
			return err
		}
	}
	if h.Under != 0 || h.Over != 0 || h.NaN != 0 {
		_, err := fmt.Fprintf(w, "  below %s, above %s, not computed %s\n", h.count(h.Under), h.count(h.Over), h.count(h.NaN))
		return err
	}
	return nil
}

// count is a sum of weights.
func (h *Histogram) count(n float64) string {
	const many = 1000 // of which no part of one is of interest
	if h.Weighted && math.Abs(n) < many {
		return fmt.Sprintf("%.4g", n)
	}
	return fmt.Sprintf("%.0f", n)
}

// figure is the sum of a bin with its error.
func (h *Histogram) figure(n, squares float64) string {
	if !h.Weighted || squares == 0 {
		return h.count(n)
	}
	return h.count(n) + fmt.Sprintf(" +- %.2g", math.Sqrt(squares))
}
