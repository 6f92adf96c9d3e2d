package server

import (
	"slices"
	"strconv"
	"strings"
	"time"

	"example.org/kinegate/kinematics/fault"
)

// Value is the value of a setting within options.
type Value interface {
	// Set reads the value from text. A text that cannot be read changes nothing.
	Set(text string) *fault.Error
	// String writes the value so that Set reads it back.
	String() string
	// Type is the kind of value, in one word.
	Type() string
	// Allowed says which values are allowed, as an inequality or a list.
	Allowed() string
	// Check says whether the value is allowed.
	Check() *fault.Error
}

// Bytes is a size in bytes. Its text takes and prefers KiB, MiB and GiB.
type Bytes int64

// byteUnits are the suffixes of sizes, largest first.
func byteUnits() []struct {
	suffix string
	bytes  Bytes
} {
	return []struct {
		suffix string
		bytes  Bytes
	}{{"GiB", gibi}, {"MiB", mebi}, {"KiB", kibi}}
}

// String writes the size in the largest unit that divides it.
func (b Bytes) String() string {
	for _, u := range byteUnits() {
		if b >= u.bytes && b%u.bytes == 0 {
			return strconv.FormatInt(int64(b/u.bytes), 10) + u.suffix
		}
	}
	return strconv.FormatInt(int64(b), 10)
}

// parseBytes reads a size; ok is false for text that is none.
func parseBytes(text string) (b Bytes, ok bool) {
	unit := Bytes(1)
	for _, u := range byteUnits() {
		if rest, found := strings.CutSuffix(text, u.suffix); found {
			text, unit = strings.TrimSpace(rest), u.bytes
			break
		}
	}
	n, err := strconv.ParseInt(text, 10, 64)
	if err != nil || n < 0 || n > int64(1<<62)/int64(unit) {
		return 0, false
	}
	return Bytes(n) * unit, true
}

// ordered is a setting with a range: a size, a number or a time.
type ordered[T int | Bytes | time.Duration] struct {
	at       *T
	min, max T
	kind     string
	parse    func(string) (T, bool)
	format   func(T) string
}

func size(at *Bytes, least, most Bytes) Value {
	return ordered[Bytes]{at, least, most, "size", parseBytes, Bytes.String}
}

// count is a number of at least one.
func count(at *int, most int) Value {
	return ordered[int]{at, 1, most, "number", func(s string) (int, bool) {
		n, err := strconv.Atoi(s)
		return n, err == nil
	}, strconv.Itoa}
}

// countFromZero is a number that may be none.
func countFromZero(at *int, most int) Value {
	v, _ := count(at, most).(ordered[int])
	v.min = 0
	return v
}

func span(at *time.Duration, least, most time.Duration) Value {
	return ordered[time.Duration]{at, least, most, "time", func(s string) (time.Duration, bool) {
		d, err := time.ParseDuration(s)
		return d, err == nil
	}, time.Duration.String}
}

func (v ordered[T]) Type() string    { return v.kind }
func (v ordered[T]) String() string  { return v.format(*v.at) }
func (v ordered[T]) Allowed() string { return v.format(v.min) + " to " + v.format(v.max) }

func (v ordered[T]) Set(text string) *fault.Error {
	x, ok := v.parse(strings.TrimSpace(text))
	if !ok {
		return fault.New(fault.Invalid, "", text, "a "+v.kind+", "+v.Allowed())
	}
	*v.at = x
	return nil
}

func (v ordered[T]) Check() *fault.Error {
	if *v.at < v.min || *v.at > v.max {
		return fault.New(fault.Invalid, "", v.String(), v.Allowed())
	}
	return nil
}

// text is a setting of any text.
func text(at *string) Value { return textValue{at} }

type textValue struct{ at *string }

func (v textValue) Set(text string) *fault.Error { *v.at = text; return nil }
func (v textValue) String() string               { return *v.at }
func (v textValue) Type() string                 { return "text" }
func (v textValue) Allowed() string              { return "any" }
func (v textValue) Check() *fault.Error          { return nil }

// choice is a setting of one word out of several.
func choice(at *string, words ...string) Value { return choiceValue{at, words} }

type choiceValue struct {
	at    *string
	words []string
}

func (v choiceValue) Set(text string) *fault.Error { *v.at = text; return v.Check() }
func (v choiceValue) String() string               { return *v.at }
func (v choiceValue) Type() string                 { return "word" }
func (v choiceValue) Allowed() string              { return strings.Join(v.words, ", ") }

func (v choiceValue) Check() *fault.Error {
	if slices.Contains(v.words, *v.at) {
		return nil
	}
	return fault.New(fault.Invalid, "", *v.at, v.Allowed())
}

// truth is a setting that is true or false.
func truth(at *bool) Value { return truthValue{at} }

type truthValue struct{ at *bool }

func (v truthValue) Set(text string) *fault.Error {
	switch text {
	case "true":
		*v.at = true
	case "false":
		*v.at = false
	default:
		return fault.New(fault.Invalid, "", text, v.Allowed())
	}
	return nil
}
func (v truthValue) String() string      { return strconv.FormatBool(*v.at) }
func (v truthValue) Type() string        { return "bool" }
func (v truthValue) Allowed() string     { return "true, false" }
func (v truthValue) Check() *fault.Error { return nil }

// list is a setting of several texts with commas between them.
func list(at *[]string) Value { return listValue{at} }

type listValue struct{ at *[]string }

func (v listValue) Set(text string) *fault.Error {
	*v.at = nil
	for item := range strings.SplitSeq(text, ",") {
		if item = strings.TrimSpace(item); item != "" {
			*v.at = append(*v.at, item)
		}
	}
	return nil
}
func (v listValue) String() string      { return strings.Join(*v.at, ",") }
func (v listValue) Type() string        { return "list" }
func (v listValue) Allowed() string     { return "any" }
func (v listValue) Check() *fault.Error { return nil }
