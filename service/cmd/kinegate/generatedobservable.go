package main

import (
	"math"
	"slices"
	"strconv"
	"strings"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/cmd/kinegate/internal/plot"
	"example.org/kinegate/service/cmd/kinegate/internal/quantity"
	"example.org/kinegate/service/cmd/kinegate/internal/text"
)

// observableKind is what can be drawn of some products together.
type observableKind struct {
	word, label string
	dimension   quantity.Dimension
	// of returns the value for the sum of the products.
	of func(energy, along, across float64) float64
}

func observableKinds() []observableKind {
	return []observableKind{
		{"mass", "true mass of ", quantity.Energy, func(energy, along, across float64) float64 {
			p := math.Hypot(along, across)
			return math.Sqrt(max(0, (energy-p)*(energy+p)))
		}},
		{"energy", "true laboratory energy of ", quantity.Energy, func(energy, _, _ float64) float64 { return energy }},
		{"angle", "true laboratory angle of ", quantity.Angle, func(_, along, across float64) float64 { return math.Atan2(across, along) }},
	}
}

// observableSample is an observable of true events, to be drawn.
type observableSample struct {
	kind   observableKind
	wanted string // the products as the user wrote them
	// open tells that the user leaves the choice to the events.
	open bool

	label    string
	channels []*kinegatev1.GenerationOutline
	// rows are the rows of the products in each channel; nil where a channel lacks one.
	rows    [][]int
	values  []float64
	weights []float64
}

// newObservableSample reads what --observable says; nothing leaves the choice open.
func newObservableSample(wanted string) (*observableSample, error) {
	if wanted == "" {
		return &observableSample{open: true}, nil
	}
	word, products, _ := strings.Cut(strings.TrimSpace(wanted), " ")
	for _, kind := range observableKinds() {
		if kind.word == word && strings.TrimSpace(products) != "" {
			return &observableSample{kind: kind, wanted: products}, nil
		}
	}
	return nil, badInput(`--observable %q: write mass, energy or angle and products, such as "mass omega" or "angle K+"`, wanted)
}

// choose finds the products in every channel.
func (s *observableSample) choose(channels []*kinegatev1.GenerationOutline) error {
	s.channels = channels
	if s.open {
		return nil // the first events decide
	}
	var names []string
	for name := range strings.SplitSeq(s.wanted, ",") {
		names = append(names, strings.TrimSpace(name))
	}
	s.label = s.kind.label + strings.Join(names, " ")
	found := false
	for _, c := range channels {
		var rows []int
		for _, name := range names {
			if row := slices.Index(c.GetProducts(), name); row >= 0 {
				rows = append(rows, row)
			}
		}
		if len(rows) < len(names) {
			rows = nil
		}
		found = found || rows != nil
		s.rows = append(s.rows, rows)
	}
	if !found {
		return badInput("--observable %q: the products are %s", s.kind.word+" "+s.wanted, strings.Join(channels[0].GetProducts(), ", "))
	}
	return nil
}

// decide takes the mass of the first product of the first reaction that has not the same mass
// in all of these events, or else the energy of the first product: a sharp mass is one line.
func (s *observableSample) decide(events []simulated) error {
	kinds, products := observableKinds(), s.channels[0].GetProducts()
	s.open, s.kind, s.wanted = false, kinds[1], products[0]
	for row := range products {
		low, high := math.Inf(1), math.Inf(-1)
		for i := range events {
			if e := &events[i]; e.channel == 0 && e.weight != 0 {
				low, high = min(low, e.particles[row].mass), max(high, e.particles[row].mass)
			}
		}
		if low < high {
			s.kind, s.wanted = kinds[0], products[row]
			break
		}
	}
	return s.choose(s.channels)
}

// add notes the values of events.
func (s *observableSample) add(events []simulated) error {
	if s.open && len(events) > 0 {
		if err := s.decide(events); err != nil {
			return err
		}
	}
	for i := range events {
		e := &events[i]
		rows := s.rows[e.channel]
		if rows == nil || e.weight == 0 {
			continue
		}
		var energy, x, y, z float64
		for _, row := range rows {
			p := &e.particles[row]
			energy, x, y, z = energy+p.energy, x+p.px, y+p.py, z+p.pz
		}
		s.values = append(s.values, s.kind.of(energy, z, math.Hypot(x, y)))
		s.weights = append(s.weights, e.weight)
	}
	return nil
}

const observableBins = 60

// histogram counts the values between the smallest and the largest. Values that are equal
// but for the last digits get one bin in the middle, and not their rounding over all.
func (s *observableSample) histogram(bins int) *text.Histogram {
	low, high := 0.0, 1.0
	if len(s.values) > 0 {
		low, high = slices.Min(s.values), slices.Max(s.values)
	}
	if s.isSharp() {
		margin := 1e-3 * max(high, 1e-9)
		half := margin / float64(bins) // of a bin, so that no edge is at the value
		low, high = low-margin-half, low+margin-half
	}
	h := text.NewHistogram(bins, low, math.Nextafter(high, math.Inf(1)))
	for i, x := range s.values {
		h.Add(x, s.weights[i])
	}
	return h
}

// isSharp tells that there are values and that they are equal to within a millionth.
func (s *observableSample) isSharp() bool {
	if len(s.values) == 0 {
		return false
	}
	low, high := slices.Min(s.values), slices.Max(s.values)
	return high-low <= 1e-6*max(high, 1e-9)
}

// write draws the values as text.
func (s *observableSample) write(e *environment) error {
	if e.json {
		return nil
	}
	e.print("")
	const bins = 24
	return s.histogram(bins).Write(e.out, s.label, func(x float64) string {
		return quantity.Format(x, s.kind.dimension, 4)
	})
}

// picture draws the values as steps.
func (s *observableSample) picture() *plot.Picture {
	h := s.histogram(observableBins)
	unit, factor := "deg", 180/math.Pi
	if s.kind.dimension != quantity.Angle {
		unit, factor = scaleFor(h.High, s.kind.dimension)
	}
	var x, y []float64
	for i, count := range h.Counts {
		for _, edge := range []int{i, i + 1} {
			x = append(x, factor*(h.Low+(h.High-h.Low)*float64(edge)/observableBins))
			y = append(y, count)
		}
	}
	title, _, _ := strings.Cut(s.channels[0].GetReaction(), ",")
	if n := len(s.channels); n > 1 {
		title += " and " + strconv.Itoa(n-1) + " more"
	}
	note := strconv.Itoa(len(s.values)) + " events"
	if s.isSharp() && len(s.values) > 1 {
		note += ", all at " + quantity.Format(s.values[0], s.kind.dimension, 6)
	}
	return &plot.Picture{Title: title, Panels: []plot.Panel{{
		X:      plot.Axis{Label: s.label + " (" + unit + ")", Min: factor * h.Low, Max: factor * h.High},
		Y:      plot.Axis{Label: "events per " + quantity.Format((h.High-h.Low)/observableBins, s.kind.dimension, 3)},
		Curves: []plot.Curve{{X: x, Y: y, Heavy: true}},
		Note:   note,
	}}}
}
