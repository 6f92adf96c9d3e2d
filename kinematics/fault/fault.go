// Package fault holds the one error type of the kinematics core. An Error says
// what kind of fault it is, which field has it, the value found and the values
// allowed, and where in a text it stands. The list of kinds is closed, so that a
// caller can map every one of them.
package fault

import (
	"errors"
	"strconv"
	"strings"
)

// Error is a fault in what the caller asked for. Empty parts are unknown or do not
// apply. It is immutable once returned.
type Error struct {
	// Op names the operation that failed, as package.Function.
	Op string
	// Kind is the class of the fault.
	Kind Kind
	// Field is the path of the field at fault, such as beam.energy_gev, or the
	// name of the thing, such as particle or charge.
	Field string
	// Law is the law that a Forbidden fault breaks, where Field is a path; where it is empty
	// Field is the law.
	Law string
	// Value is the offending value as text.
	Value string
	// Allowed says which values are allowed, as an inequality or a list.
	Allowed string
	// Problem is a short clause that says what is wrong.
	Problem string
	// Nearest lists known names near to an unknown one, nearest first.
	Nearest []string
	// Line and Column are the position in a text, in lines and bytes from 1; 0
	// means that there is none.
	Line, Column int
	// Err is the cause, if another error is behind this one.
	Err error
}

// New returns an Error of the kind for a field and its value, with the values that
// would be allowed. Callers set the other parts on the result before they return it.
func New(kind Kind, field, value, allowed string) *Error {
	return &Error{Kind: kind, Field: field, Value: value, Allowed: allowed}
}

// Number returns an Invalid Error for a number outside its allowed range; allowed is
// an inequality such as "> 0".
func Number(field string, value float64, allowed string) *Error {
	return New(Invalid, field, Text(value), allowed)
}

// Text renders a number as the shortest decimal that reads back as the same double.
func Text(x float64) string { return strconv.FormatFloat(x, 'g', -1, 64) }

// In returns e with the operation's name set. It changes e and serves the return
// statement of the function that made e.
func (e *Error) In(op string) *Error {
	e.Op = op
	return e
}

// At returns e with the position set, in the manner of In.
func (e *Error) At(line, column int) *Error {
	e.Line, e.Column = line, column
	return e
}

// namesLaw reports whether Field is a law and no path.
func (e *Error) namesLaw() bool { return e.Kind == Forbidden && e.Law == "" }

// Path is the path of the field at fault; empty for a law that is broken at no field.
func (e *Error) Path() string {
	if e.namesLaw() {
		return ""
	}
	return e.Field
}

// Move returns a copy of e at another path. A Forbidden fault keeps its law.
func (e *Error) Move(field string) *Error {
	c := *e
	if e.namesLaw() {
		c.Law = e.Field
	}
	c.Field = field
	return &c
}

// Because returns e with the problem clause set, in the manner of In.
func (e *Error) Because(problem string) *Error {
	e.Problem = problem
	return e
}

// Error renders the parts that are set on one line.
func (e *Error) Error() string {
	parts := make([]string, 0, 6)
	if e.Op != "" {
		parts = append(parts, e.Op)
	}
	if e.Line > 0 && e.Column > 0 {
		parts = append(parts, "line "+strconv.Itoa(e.Line)+" column "+strconv.Itoa(e.Column))
	} else if e.Column > 0 {
		parts = append(parts, "column "+strconv.Itoa(e.Column))
	}
	if subject := e.subject(); subject != "" {
		parts = append(parts, subject)
	}
	parts = append(parts, e.complaint())
	if e.Err != nil {
		parts = append(parts, e.Err.Error())
	}
	return strings.Join(parts, ": ")
}

// subject is the field with its value. A broken law is a sentence of its own, which
// complaint makes.
func (e *Error) subject() string {
	switch {
	case e.namesLaw():
		return ""
	case e.Kind == Forbidden:
		return e.Field
	case e.Value == "":
		return e.Field
	case e.Field == "":
		return strconv.Quote(e.Value)
	}
	return e.Field + " " + strconv.Quote(e.Value)
}

// complaint is the problem with the allowed values and the nearest names.
func (e *Error) complaint() string {
	text := e.Problem
	if text == "" {
		text = e.Kind.Error()
	}
	if e.Kind == Forbidden {
		law := e.Law
		if law == "" {
			law = e.Field
		}
		if text += ": " + e.Value; law != "" {
			text = law + " is " + text
		}
	}
	if e.Allowed != "" {
		text += ", allowed: " + e.Allowed
	}
	if len(e.Nearest) > 0 {
		text += ", nearest: " + strings.Join(e.Nearest, ", ")
	}
	return text
}

// Unwrap returns the cause.
func (e *Error) Unwrap() error { return e.Err }

// Is reports whether target is the kind of e, so that errors.Is(err, fault.NotFound)
// works through any wrapping.
func (e *Error) Is(target error) bool {
	kind, ok := target.(Kind)
	return ok && kind == e.Kind
}

// KindOf returns the kind of the first Error found in err, and false if there is none.
func KindOf(err error) (Kind, bool) {
	if e, ok := errors.AsType[*Error](err); ok {
		return e.Kind, true
	}
	return 0, false
}
