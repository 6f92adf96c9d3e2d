// Package eventfile reads measured events from CSV: one event a line, one numbered
// group of columns per object. The first line names the columns; case does not
// matter, and neither does their order.
//
//	run, event                  run and event number; event counts lines if absent
//	px1, py1, pz1, m1           object 1, GeV; or
//	p1, theta1, phi1            momentum (a photon's energy) in GeV, angles in rad; or
//	pt1, eta1, phi1, m1         transverse momentum, pseudorapidity, azimuth
//	class1                      photon, positive, negative or neutral; or
//	q1                          charge: its sign gives the class, 0 a photon; or
//	pid1                        Monte Carlo particle number: gives class and species
//	species1                    what the object may be: e, mu, pi, K, p, d joined by
//	                            "|"; anything if empty
//	direction1                  1 where only the direction was measured
//	beam_energy1, beam_sigma1, beam_time1
//	                            tagged beam candidate 1: GeV, GeV, ns
//	weight                      weight of a simulated event
//
// m1 may be left out: the hypothesis' mass wins unless a selection says
// mass_from_event. An event with fewer objects leaves the cells of the others
// empty. Other columns are kept as they are, so that results can be compared with
// them.
package eventfile

import (
	"bufio"
	"bytes"
	"encoding/csv"
	"errors"
	"fmt"
	"io"
	"math"
	"slices"
	"strconv"
	"strings"
	"unicode"

	kinegate "example.org/kinegate/clients/go"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// Event is one line of the file.
type Event struct {
	Run, ID int64
	// Weight is 1 where the file states none; Weighted says that it states one.
	Weight   float64
	Weighted bool
	Objects  []kinegate.Object
	// Beam is nil where the file has no beam columns.
	Beam []kinegate.BeamCandidate
	// Other holds the cells of the columns that say nothing about objects.
	Other map[string]string
}

// Reader reads events one by one.
type Reader struct {
	// Coordinates is the set that the columns give.
	Coordinates kinegate.Coordinates

	csv     *csv.Reader
	layout  layout
	counted int64
}

// NewReader reads the line of names.
func NewReader(r io.Reader) (*Reader, error) {
	start := bufio.NewReader(r)
	if head, _ := start.Peek(headBytes); bytes.ContainsFunc(head, binary) { // what fails to read, fails again below
		return nil, errors.New("is no text; files of events are read that end in .csv, or in " + Extension + " for blocks")
	}
	c := csv.NewReader(start)
	c.ReuseRecord = true
	c.TrimLeadingSpace = true
	c.Comment = '#'
	header, err := c.Read()
	if err != nil {
		if errors.Is(err, io.EOF) {
			return nil, errors.New("the file is empty; its first line must name the columns")
		}
		return nil, err
	}
	l, err := newLayout(header)
	if err != nil {
		return nil, err
	}
	return &Reader{Coordinates: l.coordinates, csv: c, layout: l}, nil
}

// headBytes is how much of a file shows whether it is text.
const headBytes = 512

// binary reports whether a rune does not occur in text.
func binary(r rune) bool { return unicode.IsControl(r) && !strings.ContainsRune("\t\r\n", r) }

// Next returns the next event, io.EOF after the last.
func (r *Reader) Next() (Event, error) {
	record, err := r.csv.Read()
	if err != nil {
		return Event{}, err
	}
	r.counted++
	e, err := r.layout.event(record, r.counted)
	if err != nil {
		line, _ := r.csv.FieldPos(0)
		return Event{}, fmt.Errorf("line %d: %w", line, err)
	}
	return e, nil
}

// event reads one line.
func (l *layout) event(record []string, number int64) (Event, error) {
	e := Event{ID: number, Other: map[string]string{}}
	var err error
	if e.Run, err = l.whole(record, "run", 0); err != nil {
		return e, err
	}
	if e.ID, err = l.whole(record, "event", number); err != nil {
		return e, err
	}
	if e.Weight, e.Weighted, err = l.weight(record); err != nil {
		return e, err
	}
	for _, columns := range l.objects {
		o, present, err := l.object(record, columns)
		if err != nil {
			return e, err
		}
		if present {
			e.Objects = append(e.Objects, o)
		}
	}
	if len(l.beams) > 0 {
		e.Beam = []kinegate.BeamCandidate{}
	}
	for _, columns := range l.beams {
		values, present, err := l.numbers(record, columns[:])
		if err != nil {
			return e, err
		}
		if present {
			e.Beam = append(e.Beam, kinegate.BeamCandidate{Energy: values[0], Sigma: values[1], Time: values[2]})
		}
	}
	for name, i := range l.other {
		e.Other[name] = record[i]
	}
	return e, nil
}

// object reads the columns of one object; it is absent where all its coordinates
// are empty.
func (l *layout) object(record []string, c objectColumns) (o kinegate.Object, present bool, err error) {
	values, present, err := l.numbers(record, c.values)
	if err != nil || !present {
		return o, false, err
	}
	copy(o.Values[:], values)
	if c.direction >= 0 && strings.TrimSpace(record[c.direction]) == "1" {
		o.Measured = directionMeasured
	}
	cell := strings.TrimSpace(record[c.class])
	switch c.kind {
	case byClass:
		o.Class, err = classNamed(cell)
	case byCharge:
		o.Class, err = classCharged(cell)
	case byNumber:
		o.Class, o.Species, err = classNumbered(cell)
	}
	if err != nil {
		return o, false, fmt.Errorf("column %s: %w", l.header[c.class], err)
	}
	if c.species >= 0 && strings.TrimSpace(record[c.species]) != "" {
		if o.Species, err = speciesNamed(strings.TrimSpace(record[c.species])); err != nil {
			return o, false, fmt.Errorf("column %s: %w", l.header[c.species], err)
		}
	}
	return o, true, nil
}

// directionMeasured is the measured mask of the second and third parameter.
const directionMeasured = 6

// numbers reads several columns that must be all filled or all empty. A column
// below 0 does not exist and reads as 0.
func (l *layout) numbers(record []string, columns []int) (values []float64, present bool, err error) {
	values = make([]float64, len(columns))
	filled, known := 0, 0
	for i, column := range columns {
		if column < 0 {
			continue
		}
		known++
		cell := strings.TrimSpace(record[column])
		if cell == "" {
			continue
		}
		filled++
		if values[i], err = strconv.ParseFloat(cell, 64); err != nil {
			return nil, false, fmt.Errorf("column %s: %q is not a number", l.header[column], cell)
		}
	}
	if filled != 0 && filled != known {
		return nil, false, fmt.Errorf("column %s and those beside it are filled in part", l.header[columns[0]])
	}
	return values, filled > 0, nil
}

// whole reads a whole number, or returns missing where the column does not exist.
func (l *layout) whole(record []string, name string, missing int64) (int64, error) {
	i, ok := l.named[name]
	if !ok {
		return missing, nil
	}
	n, err := strconv.ParseInt(strings.TrimSpace(record[i]), 10, 64)
	if err != nil {
		return 0, fmt.Errorf("column %s: %q is not a whole number", l.header[i], record[i])
	}
	return n, nil
}

// weight reads the weight of an event, 1 where the column does not exist.
func (l *layout) weight(record []string) (weight float64, stated bool, err error) {
	i, stated := l.named[weightName]
	if !stated {
		return 1, false, nil
	}
	weight, err = strconv.ParseFloat(strings.TrimSpace(record[i]), 64)
	if err != nil || math.IsNaN(weight) || math.IsInf(weight, 0) {
		return 0, true, fmt.Errorf("column %s: %q is not a finite number", l.header[i], record[i])
	}
	return weight, true, nil
}

// species are the bits of the species mask in their order.
var species = []string{"e", "mu", "pi", "K", "p", "d"} //nolint:gochecknoglobals // a list that nothing writes

func speciesNamed(cell string) (mask uint8, err error) {
	for name := range strings.SplitSeq(cell, "|") {
		bit := slices.Index(species, name)
		if bit < 0 {
			return 0, fmt.Errorf("%q is no species; use %s", name, strings.Join(species, ", "))
		}
		mask |= 1 << bit
	}
	return mask, nil
}

func classNamed(cell string) (kinegatev1.ObjectClass, error) {
	if c, ok := kinegatev1.ObjectClass_value["OBJECT_CLASS_"+strings.ToUpper(cell)]; ok && c != 0 {
		return kinegatev1.ObjectClass(c), nil
	}
	return 0, fmt.Errorf("%q is no class; use photon, positive, negative or neutral", cell)
}

func classCharged(cell string) (kinegatev1.ObjectClass, error) {
	charge, err := strconv.ParseFloat(cell, 64)
	switch {
	case err != nil:
		return 0, fmt.Errorf("%q is no charge", cell)
	case charge > 0:
		return kinegatev1.ObjectClass_OBJECT_CLASS_POSITIVE, nil
	case charge < 0:
		return kinegatev1.ObjectClass_OBJECT_CLASS_NEGATIVE, nil
	}
	return kinegatev1.ObjectClass_OBJECT_CLASS_PHOTON, nil
}

// classNumbered reads the particle numbers that a detector can tell apart. The
// number of a negative lepton is positive.
func classNumbered(cell string) (class kinegatev1.ObjectClass, species uint8, err error) {
	number, err := strconv.ParseInt(cell, 10, 64)
	if err != nil {
		return 0, 0, fmt.Errorf("%q is no particle number", cell)
	}
	const positive, negative = kinegatev1.ObjectClass_OBJECT_CLASS_POSITIVE, kinegatev1.ObjectClass_OBJECT_CLASS_NEGATIVE
	bits := map[int64]struct {
		species uint8
		class   kinegatev1.ObjectClass // of the positive number
	}{
		11: {1 << 0, negative}, 13: {1 << 1, negative}, 211: {1 << 2, positive}, 321: {1 << 3, positive},
		2212: {1 << 4, positive}, 1000010020: {1 << 5, positive},
	}
	switch b, ok := bits[max(number, -number)]; {
	case number == 22:
		return kinegatev1.ObjectClass_OBJECT_CLASS_PHOTON, 0, nil
	case ok && number > 0:
		return b.class, b.species, nil
	case ok && b.class == positive:
		return negative, b.species, nil
	case ok:
		return positive, b.species, nil
	}
	return kinegatev1.ObjectClass_OBJECT_CLASS_NEUTRAL, 0, nil
}
