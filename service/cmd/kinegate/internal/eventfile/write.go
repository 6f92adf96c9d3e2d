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
	if _, err := fmt.Fprintf(w, "# %s Units: GeV, rad, ns.\n", comment); err != nil {
		return err
	}
	var columns []string
	for _, set := range sets {
		if set.coordinates == coordinates {
			columns = set.needed
		}
	}
	if columns == nil {
		return fmt.Errorf("coordinate set %d has no form in CSV", coordinates)
	}
	objects, beams := 0, 0
	for _, e := range events {
		objects, beams = max(objects, len(e.Objects)), max(beams, len(e.Beam))
	}
	out := csv.NewWriter(w)
	var other []string
	if len(events) > 0 {
		other = slices.Sorted(maps.Keys(events[0].Other))
	}
	if err := out.Write(heading(columns, objects, beams, other)); err != nil {
		return err
	}
	for _, e := range events {
		row := []string{strconv.FormatInt(e.Run, 10), strconv.FormatInt(e.ID, 10)}
		for _, name := range other {
			row = append(row, e.Other[name])
		}
		for i := range objects {
			row = append(row, objectCells(e.Objects, i, len(columns))...)
		}
		for i := range beams {
			row = append(row, beamCells(e.Beam, i)...)
		}
		if err := out.Write(row); err != nil {
			return err
		}
	}
	out.Flush()
	return out.Error()
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
