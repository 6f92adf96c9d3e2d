package reference

import (
	"encoding/json"
	"strconv"
	"strings"
	"testing"
)

// Input is the named inputs of one case. Reading an input that the case lacks, or
// as another type than it has, fails the test.
type Input struct {
	// ID names the case.
	ID string
	// Tags are the case's tags, empty for a check.
	Tags   []string
	tb     testing.TB
	fields map[string]json.RawMessage
}

// Has reports whether the case has the named input.
func (in Input) Has(name string) bool {
	_, ok := in.fields[name]
	return ok
}

// Float returns a number, printed as a JSON number or as a decimal string.
func (in Input) Float(name string) float64 {
	in.tb.Helper()
	return in.number(name, in.field(name))
}

// Int returns a whole number.
func (in Input) Int(name string) int {
	in.tb.Helper()
	value := in.Float(name)
	if value != float64(int(value)) {
		in.tb.Fatalf("%s: input %q is no whole number: %v", in.ID, name, value)
	}
	return int(value)
}

// Floats returns a list of numbers, printed either way.
func (in Input) Floats(name string) []float64 {
	in.tb.Helper()
	var list []json.RawMessage
	in.decode(name, in.field(name), &list)
	return in.numbers(name, list)
}

// Rows returns a list of lists of numbers, such as four-vectors.
func (in Input) Rows(name string) [][]float64 {
	in.tb.Helper()
	var list [][]json.RawMessage
	in.decode(name, in.field(name), &list)
	rows := make([][]float64, len(list))
	for i, row := range list {
		rows[i] = in.numbers(name, row)
	}
	return rows
}

// Text returns a string as it stands.
func (in Input) Text(name string) string {
	in.tb.Helper()
	var text string
	in.decode(name, in.field(name), &text)
	return text
}

// Texts returns a list of strings as they stand.
func (in Input) Texts(name string) []string {
	in.tb.Helper()
	var texts []string
	in.decode(name, in.field(name), &texts)
	return texts
}

func (in Input) field(name string) json.RawMessage {
	in.tb.Helper()
	raw, ok := in.fields[name]
	if !ok {
		in.tb.Fatalf("%s: no input %q", in.ID, name)
	}
	return raw
}

func (in Input) decode(name string, raw json.RawMessage, into any) {
	in.tb.Helper()
	if err := json.Unmarshal(raw, into); err != nil {
		in.tb.Fatalf("%s: input %q: %v", in.ID, name, err)
	}
}

func (in Input) numbers(name string, list []json.RawMessage) []float64 {
	in.tb.Helper()
	values := make([]float64, len(list))
	for i, raw := range list {
		values[i] = in.number(name, raw)
	}
	return values
}

func (in Input) number(name string, raw json.RawMessage) float64 {
	in.tb.Helper()
	value, err := strconv.ParseFloat(strings.Trim(string(raw), `"`), 64)
	if err != nil {
		in.tb.Fatalf("%s: input %q: %v", in.ID, name, err)
	}
	return value
}
