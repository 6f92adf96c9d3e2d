// Package jsonform writes messages in the standard JSON form of protobuf with
// snake_case names, except that columns are arrays of numbers instead of base64
// text. Fields that hold their default are left out, as the standard form does.
package jsonform

import (
	"bytes"
	"encoding/json"
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"

	"google.golang.org/protobuf/proto"
	"google.golang.org/protobuf/reflect/protoreflect"

	"example.org/kinegate/proto/column"
)

// Marshal returns the JSON text of a message, indented by two spaces.
func Marshal(message proto.Message) ([]byte, error) {
	var compact bytes.Buffer
	if err := write(&compact, message.ProtoReflect()); err != nil {
		return nil, err
	}
	var indented bytes.Buffer
	if err := json.Indent(&indented, compact.Bytes(), "", "  "); err != nil {
		return nil, err
	}
	return indented.Bytes(), nil
}

func write(b *bytes.Buffer, m protoreflect.Message) error {
	b.WriteByte('{')
	separator := ""
	fields := m.Descriptor().Fields()
	for i := range fields.Len() {
		f := fields.Get(i)
		if !m.Has(f) {
			continue
		}
		b.WriteString(separator)
		separator = ","
		b.WriteString(strconv.Quote(string(f.Name())) + ":")
		if err := writeField(b, f, m.Get(f)); err != nil {
			return err
		}
	}
	b.WriteByte('}')
	return nil
}

func writeField(b *bytes.Buffer, f protoreflect.FieldDescriptor, v protoreflect.Value) error {
	if !f.IsList() {
		return writeValue(b, f, v)
	}
	b.WriteByte('[')
	for i := range v.List().Len() {
		if i > 0 {
			b.WriteByte(',')
		}
		if err := writeValue(b, f, v.List().Get(i)); err != nil {
			return err
		}
	}
	b.WriteByte(']')
	return nil
}

func writeValue(b *bytes.Buffer, f protoreflect.FieldDescriptor, v protoreflect.Value) error {
	switch f.Kind() {
	case protoreflect.MessageKind:
		return write(b, v.Message())
	case protoreflect.BytesKind:
		return writeColumn(b, f, v.Bytes())
	case protoreflect.EnumKind:
		if value := f.Enum().Values().ByNumber(v.Enum()); value != nil {
			b.WriteString(strconv.Quote(string(value.Name())))
			return nil
		}
		fmt.Fprint(b, v.Enum())
	case protoreflect.DoubleKind:
		b.WriteString(number(v.Float()))
	case protoreflect.Int64Kind:
		b.WriteString(`"` + strconv.FormatInt(v.Int(), 10) + `"`)
	case protoreflect.StringKind:
		text, err := json.Marshal(v.String())
		if err != nil {
			return err
		}
		b.Write(text)
	default:
		fmt.Fprint(b, v.Interface())
	}
	return nil
}

// number writes a double; what is not finite is text, as in the standard form.
func number(x float64) string {
	switch {
	case math.IsNaN(x):
		return `"NaN"`
	case math.IsInf(x, 1):
		return `"Infinity"`
	case math.IsInf(x, -1):
		return `"-Infinity"`
	}
	text, err := json.Marshal(x)
	if err != nil {
		return "null" // not reached: every finite double has a JSON form
	}
	return string(text)
}

// writeColumn writes a column as an array. What its entries are is said by the
// contract: numbers of a kind that its name tells, and float64 wherever the name
// ends in a unit or nothing else is said.
func writeColumn(b *bytes.Buffer, f protoreflect.FieldDescriptor, raw []byte) error {
	name := string(f.Name())
	switch {
	case name == "event_ids" || name == "particle_numbers":
		return array(b, raw, column.Int64s, func(x int64) string { return `"` + strconv.FormatInt(x, 10) + `"` })
	case strings.HasSuffix(name, "offsets") || name == "groups" || name == "assignment_counts":
		return array(b, raw, column.Int32s, func(x int32) string { return strconv.Itoa(int(x)) })
	case slices.Contains([]string{
		"hypothesis_indices", "beam_rows", "assignments", "best", "channels", "parents", "object_particles",
		"degrees_of_freedom", "iteration_counts",
	}, name):
		return array(b, raw, column.Int16s, func(x int16) string { return strconv.Itoa(int(x)) })
	case slices.Contains([]string{"object_classes", "masks", "statuses", "gate", "accepted", "decayed"}, name):
		asIs := func(raw []byte) ([]byte, error) { return raw, nil }
		return array(b, raw, asIs, func(x byte) string { return strconv.Itoa(int(x)) })
	}
	return array(b, raw, column.Float64s, number)
}

func array[T any](b *bytes.Buffer, raw []byte, decode func([]byte) ([]T, error), text func(T) string) error {
	xs, err := decode(raw)
	if err != nil {
		return err
	}
	b.WriteByte('[')
	for i, x := range xs {
		if i > 0 {
			b.WriteByte(',')
		}
		b.WriteString(text(x))
	}
	b.WriteByte(']')
	return nil
}
