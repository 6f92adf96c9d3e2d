// Package canonical writes a message in one form that never changes, so that its
// digest names the same request on every machine and in every version.
//
// The form is text. A message is its set fields in braces, sorted by name, as
// "name":value with commas between them and no white space. A list is its values
// in square brackets; text is quoted with \" and \\ escaped and control
// characters as \u00XX; a double is the shortest decimal that reads back as the
// same double, in the form of Go's strconv 'g', with 0 for -0; an integer is
// decimal; an enum is the name of its value; a truth value is true or false.
// Fields that hold their default without a presence of their own are left out,
// and so are empty lists. Neither the wire encoding nor the JSON mapping of
// protobuf plays a part, since both are free to change.
package canonical

import (
	"cmp"
	"encoding/base64"
	"errors"
	"math"
	"slices"
	"strconv"

	"google.golang.org/protobuf/proto"
	"google.golang.org/protobuf/reflect/protoreflect"
)

// ErrUnknownField reports a message with fields that this version does not know.
// Such a message has no canonical form here: leaving the fields out would give
// two different requests one digest.
var ErrUnknownField = errors.New("the message has fields that this version does not know")

// Append appends the canonical form of the message to dst.
func Append(dst []byte, message proto.Message) ([]byte, error) {
	return appendMessage(dst, message.ProtoReflect())
}

func appendMessage(dst []byte, m protoreflect.Message) ([]byte, error) {
	if len(m.GetUnknown()) > 0 {
		return nil, ErrUnknownField
	}
	var fields []protoreflect.FieldDescriptor
	m.Range(func(f protoreflect.FieldDescriptor, _ protoreflect.Value) bool {
		fields = append(fields, f)
		return true
	})
	slices.SortFunc(fields, func(a, b protoreflect.FieldDescriptor) int { return cmp.Compare(a.Name(), b.Name()) })
	dst = append(dst, '{')
	for i, f := range fields {
		if i > 0 {
			dst = append(dst, ',')
		}
		dst = appendText(dst, string(f.Name()))
		dst = append(dst, ':')
		var err error
		if dst, err = appendField(dst, f, m.Get(f)); err != nil {
			return nil, err
		}
	}
	return append(dst, '}'), nil
}

func appendField(dst []byte, f protoreflect.FieldDescriptor, v protoreflect.Value) ([]byte, error) {
	if !f.IsList() {
		return appendValue(dst, f, v)
	}
	list := v.List()
	dst = append(dst, '[')
	for i := range list.Len() {
		if i > 0 {
			dst = append(dst, ',')
		}
		var err error
		if dst, err = appendValue(dst, f, list.Get(i)); err != nil {
			return nil, err
		}
	}
	return append(dst, ']'), nil
}

func appendValue(dst []byte, f protoreflect.FieldDescriptor, v protoreflect.Value) ([]byte, error) {
	switch f.Kind() {
	case protoreflect.MessageKind, protoreflect.GroupKind:
		return appendMessage(dst, v.Message())
	case protoreflect.EnumKind:
		if value := f.Enum().Values().ByNumber(v.Enum()); value != nil {
			return appendText(dst, string(value.Name())), nil
		}
		return strconv.AppendInt(dst, int64(v.Enum()), 10), nil
	case protoreflect.StringKind:
		return appendText(dst, v.String()), nil
	case protoreflect.BytesKind:
		return appendText(dst, base64.StdEncoding.EncodeToString(v.Bytes())), nil
	case protoreflect.BoolKind:
		return strconv.AppendBool(dst, v.Bool()), nil
	case protoreflect.DoubleKind:
		return appendDouble(dst, v.Float()), nil
	case protoreflect.FloatKind:
		return strconv.AppendFloat(dst, v.Float(), 'g', -1, 32), nil
	case protoreflect.Uint32Kind, protoreflect.Uint64Kind, protoreflect.Fixed32Kind, protoreflect.Fixed64Kind:
		return strconv.AppendUint(dst, v.Uint(), 10), nil
	case protoreflect.Int32Kind, protoreflect.Sint32Kind, protoreflect.Sfixed32Kind,
		protoreflect.Int64Kind, protoreflect.Sint64Kind, protoreflect.Sfixed64Kind:
		return strconv.AppendInt(dst, v.Int(), 10), nil
	}
	return nil, ErrUnknownField
}

// appendDouble writes 0 for -0: no request means something else by it.
func appendDouble(dst []byte, x float64) []byte {
	if x == 0 {
		x = 0
	}
	if math.IsNaN(x) {
		return append(dst, `"NaN"`...)
	}
	return strconv.AppendFloat(dst, x, 'g', -1, 64)
}

func appendText(dst []byte, s string) []byte {
	const hex = "0123456789abcdef"
	dst = append(dst, '"')
	for i := range len(s) {
		switch c := s[i]; {
		case c == '"' || c == '\\':
			dst = append(dst, '\\', c)
		case c < ' ':
			dst = append(dst, '\\', 'u', '0', '0', hex[c>>4], hex[c&15])
		default:
			dst = append(dst, c)
		}
	}
	return append(dst, '"')
}
