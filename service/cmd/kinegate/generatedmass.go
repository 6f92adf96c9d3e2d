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

// massSample is the true invariant masses of some products, to be drawn.
type massSample struct {
	wanted string // as the user wrote them; empty chooses some

	label string
	// rows are the rows of the products in each channel; nil where a channel lacks one.
	rows    [][]int
	values  []float64
	weights []float64
}

// choose finds the products in every channel. Without a word from the user it takes all
// products of the first reaction but its first one.
func (s *massSample) choose(header *kinegatev1.GenerationHeader) error {
	channels := header.GetChannels()
	if s.wanted == "" {
		s.wanted = restOf(channels[0])
	}
	var names []string
	for name := range strings.SplitSeq(s.wanted, ",") {
		names = append(names, strings.TrimSpace(name))
	}
	s.label = strings.Join(names, " ")
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
		return badInput("--mass %q: the products are %s", s.wanted, strings.Join(channels[0].GetProducts(), ", "))
	}
	return nil
}

// restOf is the products of a reaction itself but the first.
func restOf(c *kinegatev1.GenerationOutline) string {
	head, _, _ := strings.Cut(c.GetReaction(), ",")
	_, right, _ := strings.Cut(head, "->")
	names := strings.Fields(right)
	if len(names) < 2 {
		return c.GetProducts()[0]
	}
	// A name that occurs several times has its count in the outline.
	var list []string
	used := map[string]bool{}
	for _, name := range names[1:] {
		for _, product := range c.GetProducts() {
			if base, _, _ := strings.Cut(product, "["); (base == name || product == name) && !used[product] {
				used[product] = true
				list = append(list, product)
				break
			}
		}
	}
	return strings.Join(list, ", ")
}

// add notes the masses of events.
func (s *massSample) add(events []simulated) {
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
		p := math.Hypot(math.Hypot(x, y), z)
		s.values = append(s.values, math.Sqrt(max(0, (energy-p)*(energy+p))))
		s.weights = append(s.weights, e.weight)
	}
}

const massBins = 60

// histogram counts the masses between the smallest and the largest.
func (s *massSample) histogram(bins int) *text.Histogram {
	low, high := 0.0, 1.0
	if len(s.values) > 0 {
		low, high = slices.Min(s.values), slices.Max(s.values)
	}
	if margin := 1e-3 * max(high, 1e-9); high-low < margin {
		low, high = low-margin, high+margin // a sharp mass
	}
	h := text.NewHistogram(bins, low, math.Nextafter(high, math.Inf(1)))
	for i, m := range s.values {
		h.Add(m, s.weights[i])
	}
	return h
}

// write draws the masses as text.
func (s *massSample) write(e *environment) error {
	if e.json {
		return nil
	}
	e.print("")
	const bins = 24
	return s.histogram(bins).Write(e.out, "true mass of "+s.label, func(x float64) string {
		return quantity.Format(x, quantity.Energy, 4)
	})
}

// picture draws the masses as steps.
func (s *massSample) picture(header *kinegatev1.GenerationHeader) *plot.Picture {
	h := s.histogram(massBins)
	unit, factor := scaleFor(h.High, quantity.Energy)
	var x, y []float64
	for i, count := range h.Counts {
		for _, edge := range []int{i, i + 1} {
			x = append(x, factor*(h.Low+(h.High-h.Low)*float64(edge)/massBins))
			y = append(y, count)
		}
	}
	title, _, _ := strings.Cut(header.GetChannels()[0].GetReaction(), ",")
	if n := len(header.GetChannels()); n > 1 {
		title += " and " + strconv.Itoa(n-1) + " more"
	}
	return &plot.Picture{Title: title, Panels: []plot.Panel{{
		X:      plot.Axis{Label: "true mass of " + s.label + " (" + unit + ")", Min: factor * h.Low, Max: factor * h.High},
		Y:      plot.Axis{Label: "events per " + quantity.Format((h.High-h.Low)/massBins, quantity.Energy, 3)},
		Curves: []plot.Curve{{X: x, Y: y, Heavy: true}},
		Note:   strconv.Itoa(len(s.values)) + " events",
	}}}
}
