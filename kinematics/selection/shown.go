package selection

import (
	"strings"

	"example.org/kinegate/kinematics/event"
)

// shownWindow is a window as an explanation shows it.
type shownWindow struct {
	window window
	// path is that of the window in the hypothesis, label its name or what it looks at.
	path, label string
	// low and high are the limits in the unit of the observable, nil for none.
	low, high *float64
	// last is the last slot that the window needs, -1 for none; candidate says that it
	// needs a tagged beam candidate.
	last      int
	candidate bool
}

// show keeps a sound window for explanations.
func (d *drafter) show(at string, v *Window, w *window) {
	if w.observable == 0 {
		return
	}
	last, candidate := d.needs(&check{operation: opWindow, window: *w})
	s := shownWindow{
		window: *w, path: strings.TrimPrefix(at, d.at+"."), label: label(v), last: last, candidate: candidate,
	}
	if v.Min != nil {
		low := *v.Min
		s.low = &low
	}
	if v.Max != nil {
		high := *v.Max
		s.high = &high
	}
	if w.observable == FitProbability {
		s.last, s.candidate = len(d.out.slots)-1, d.out.beam.tagged
	}
	d.out.shown = append(d.out.shown, s)
}

// unit is the unit of an observable, as an explanation shows it.
func (o Observable) unit() string {
	f, _ := o.form()
	switch f.unit {
	case "gev":
		return "GeV"
	case "gev2":
		return "GeV^2"
	}
	return f.unit
}

// parameterName returns the name and the unit of a parameter of a coordinate set.
func parameterName(k event.Kind, parameter int) (name, unit string) {
	name = k.ColumnName(parameter)
	if base, ok := strings.CutSuffix(name, "_gev"); ok {
		return base, "GeV"
	}
	if base, ok := strings.CutSuffix(name, "_rad"); ok {
		return base, "rad"
	}
	return name, ""
}
