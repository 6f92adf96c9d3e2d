package strictyaml

import (
	"regexp"
	"slices"
	"strconv"
	"strings"

	"go.yaml.in/yaml/v3"
	"google.golang.org/protobuf/reflect/protoreflect"
)

// value reads one value of the field's kind. fresh is a new value of the field,
// filled and returned for messages, and returned empty for what cannot be read.
func (r *reader) value(n *yaml.Node, path string, f protoreflect.FieldDescriptor, fresh protoreflect.Value, depth int) (protoreflect.Value, bool) {
	if f.Kind() == protoreflect.MessageKind {
		before := len(r.faults)
		r.message(n, path, fresh.Message(), depth)
		return fresh, len(r.faults) == before || n.Kind == yaml.MappingNode
	}
	if !r.plain(n, path, depth) {
		return fresh, false
	}
	if n.Kind != yaml.ScalarNode {
		r.fault(n, path, "one value is needed here, found "+describe(n))
		return fresh, false
	}
	v, problem := scalar(n, f)
	if problem != "" {
		r.fault(n, path, problem)
		return fresh, false
	}
	return v, true
}

var (
	// The number forms of JSON; YAML's octal, hexadecimal, underscored and
	// sexagesimal ones are refused.
	integerForm = regexp.MustCompile(`^-?(0|[1-9][0-9]*)$`)
	numberForm  = regexp.MustCompile(`^[-+]?(0|[1-9][0-9]*)(\.[0-9]+)?([eE][-+]?[0-9]+)?$`)
	// Words that YAML 1.1 reads as booleans and YAML 1.2 as text.
	oldBooleans = []string{"y", "n", "yes", "no", "on", "off"} //nolint:gochecknoglobals // a list that nothing writes
)

// scalar converts one scalar, or says why it cannot.
func scalar(n *yaml.Node, f protoreflect.FieldDescriptor) (value protoreflect.Value, problem string) {
	quoted := n.Style&(yaml.DoubleQuotedStyle|yaml.SingleQuotedStyle|yaml.LiteralStyle|yaml.FoldedStyle) != 0
	switch f.Kind() {
	case protoreflect.StringKind:
		return textValue(n, quoted)
	case protoreflect.BoolKind:
		if !quoted && (n.Value == "true" || n.Value == "false") {
			return protoreflect.ValueOfBool(n.Value == "true"), ""
		}
		return value, "true or false is needed, found " + describe(n)
	case protoreflect.DoubleKind:
		if x, err := strconv.ParseFloat(n.Value, 64); err == nil && !quoted && numberForm.MatchString(n.Value) {
			return protoreflect.ValueOfFloat64(x), ""
		}
		return value, "a finite decimal number is needed, found " + describe(n) + numberHint(n.Value)
	case protoreflect.Int32Kind, protoreflect.Int64Kind:
		bits := 64
		if f.Kind() == protoreflect.Int32Kind {
			bits = 32
		}
		x, err := strconv.ParseInt(n.Value, 10, bits)
		if err != nil || !integerForm.MatchString(n.Value) {
			return value, "a whole number of " + strconv.Itoa(bits) + " bits is needed, found " + describe(n)
		}
		if bits == 32 {
			return protoreflect.ValueOfInt32(int32(x)), "" //nolint:gosec // parsed with 32 bits
		}
		return protoreflect.ValueOfInt64(x), ""
	case protoreflect.EnumKind:
		return enumValue(n, f.Enum().Values())
	default:
		return value, "fields of kind " + f.Kind().String() + " cannot be written in YAML"
	}
}

func textValue(n *yaml.Node, quoted bool) (value protoreflect.Value, problem string) {
	if !quoted && n.Tag != "!!str" {
		return value, "text is needed, found " + describe(n) + "; put it in quotes if text is meant"
	}
	if !quoted && slices.Contains(oldBooleans, strings.ToLower(n.Value)) {
		return value, "write " + strconv.Quote(n.Value) + " in quotes: older YAML reads it as true or false"
	}
	if !quoted {
		if problem := textHint(n.Value); problem != "" {
			return value, problem
		}
	}
	return protoreflect.ValueOfString(n.Value), ""
}

func enumValue(n *yaml.Node, values protoreflect.EnumValueDescriptors) (value protoreflect.Value, problem string) {
	if v := values.ByName(protoreflect.Name(n.Value)); v != nil && v.Number() != 0 {
		return protoreflect.ValueOfEnum(v.Number()), ""
	}
	names := make([]string, 0, values.Len())
	for i := range values.Len() {
		if v := values.Get(i); v.Number() != 0 {
			names = append(names, string(v.Name()))
		}
	}
	return value, "one of " + strings.Join(names, ", ") + " is needed, found " + describe(n) + wordHint(n.Value, names)
}

// describe names what stands at a node, cut to a readable length.
func describe(n *yaml.Node) string {
	switch n.Kind {
	case yaml.MappingNode:
		return "a set of fields"
	case yaml.SequenceNode:
		return "a list"
	case yaml.AliasNode:
		return "an alias"
	case yaml.ScalarNode, yaml.DocumentNode:
	}
	const most = 60
	if len(n.Value) > most {
		return strconv.Quote(n.Value[:most]) + "..."
	}
	return strconv.Quote(n.Value)
}

func join(field, name string) string {
	if field == "" {
		return name
	}
	return field + "." + name
}
