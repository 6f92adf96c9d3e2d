package eventfile

import (
	"encoding/csv"
	"fmt"
	"io"
	"maps"
	"slices"
	"strconv"
	"strings"

	kinegate "example.org/kinegate/clients/go"
)

// Write writes events in the form that NewReader reads, with a comment of one line
// in front. All events must be in the coordinate set, and have the same other
// columns.
func Write(w io.Writer, comment string, coordinates kinegate.Coordinates, events []Event) error {
	var all shape
	for i := range events {
		if i == 0 {
			all.names(&events[i])
		}
		all.widen(&events[i])
	}
	out, err := newLines(w, comment, coordinates, all)
	if err != nil {
		return err
	}
	for i := range events {
		if err := out.add(&events[i]); err != nil {
			return err
		}
	}
	return out.finish()
}

// shape is what the columns of a file depend on.
type shape struct {
	objects, beams int
	other          []string
}

// names takes the other columns from an event.
func (s *shape) names(e *Event) { s.other = slices.Sorted(maps.Keys(e.Other)) }

// widen makes room for an event.
func (s *shape) widen(e *Event) {
	s.objects, s.beams = max(s.objects, len(e.Objects)), max(s.beams, len(e.Beam))
}

// lines writes events one by one.
type lines struct {
	shape

	csv     *csv.Writer
	columns int
}

// newLines writes what stands in front of the events.
func newLines(w io.Writer, comment string, coordinates kinegate.Coordinates, s shape) (*lines, error) {
	if _, err := fmt.Fprintf(w, "# %s Units: GeV, rad, ns.\n", comment); err != nil {
		return nil, err
	}
	var columns []string
	for _, set := range sets {
		if set.coordinates == coordinates {
			columns = set.needed
		}
	}
	if columns == nil {
		return nil, fmt.Errorf("coordinate set %d has no form in CSV", coordinates)
	}
	l := &lines{shape: s, csv: csv.NewWriter(w), columns: len(columns)}
	return l, l.csv.Write(heading(columns, s.objects, s.beams, s.other))
}

func (l *lines) add(e *Event) error {
	row := []string{strconv.FormatInt(e.Run, 10), strconv.FormatInt(e.ID, 10)}
	for _, name := range l.other {
		row = append(row, e.Other[name])
	}
	for i := range l.objects {
		row = append(row, objectCells(e.Objects, i, l.columns)...)
	}
	for i := range l.beams {
		row = append(row, beamCells(e.Beam, i)...)
	}
	return l.csv.Write(row)
}

func (l *lines) finish() error {
	l.csv.Flush()
	return l.csv.Error()
}

func heading(columns []string, objects, beams int, other []string) []string {
	names := append([]string{"run", "event"}, other...)
	for i := range objects {
		for _, name := range append([]string{"class"}, append(slices.Clone(columns), "direction", "species")...) {
			names = append(names, name+strconv.Itoa(i+1))
		}
	}
	for i := range beams {
		for _, name := range []string{"beam_energy", "beam_sigma", "beam_time"} {
			names = append(names, name+strconv.Itoa(i+1))
		}
	}
	return names
}

// objectCells are the cells of object i, empty where the event has none.
func objectCells(objects []kinegate.Object, i, columns int) []string {
	cells := make([]string, columns+3)
	if i >= len(objects) {
		return cells
	}
	o := objects[i]
	cells[0] = strings.ToLower(strings.TrimPrefix(o.Class.String(), "OBJECT_CLASS_"))
	for k := range columns {
		cells[1+k] = number(o.Values[k])
	}
	if o.Measured == directionMeasured {
		cells[columns+1] = "1"
	}
	var names []string
	for bit, name := range species {
		if o.Species>>bit&1 == 1 {
			names = append(names, name)
		}
	}
	cells[columns+2] = strings.Join(names, "|")
	return cells
}

func beamCells(beam []kinegate.BeamCandidate, i int) []string {
	if i >= len(beam) {
		return make([]string, 3)
	}
	return []string{number(beam[i].Energy), number(beam[i].Sigma), number(beam[i].Time)}
}

// number is the shortest decimal that reads back as the same double.
func number(x float64) string { return strconv.FormatFloat(x, 'g', -1, 64) }
