package main

import (
	"fmt"
	"math"

	"example.org/kinegate/service/cmd/kinegate/internal/eventfile"
)

// weightSum is a sum of weights.
type weightSum struct{ sum, squares float64 }

func (w *weightSum) add(weight float64) {
	w.sum += weight
	w.squares += weight * weight
}

// cells are the sum and its error, the root of the sum of the squares.
func (w *weightSum) cells() (sum, spread string) {
	const many = 1e6 // of which no part of one is of interest
	sum = fmt.Sprintf("%.6g", w.sum)
	if math.Abs(w.sum) >= many {
		sum = fmt.Sprintf("%.0f", w.sum)
	}
	return sum, fmt.Sprintf("%.3g", math.Sqrt(w.squares))
}

// text is both.
func (w *weightSum) text() string {
	sum, spread := w.cells()
	return sum + " +- " + spread
}

// eventWeight is the weight of event i as its file states it, 1 where there is no file.
func eventWeight(events []eventfile.Event, i int) float64 {
	if i < len(events) {
		return events[i].Weight
	}
	return 1
}
