// Package strictyaml reads a YAML text into a protobuf message by the message's
// JSON form in snake_case, and reports every fault at once with line and column.
//
// It is strict: one document, no anchors, aliases, tags or merge keys, no unknown
// or doubled fields, no nulls, one member of a oneof, booleans only as true and
// false, and unquoted text that YAML 1.1 would read as a boolean only in quotes.
package strictyaml

import (
	"errors"
	"io"
	"regexp"
	"strconv"
	"strings"

	"go.yaml.in/yaml/v3"
	"google.golang.org/protobuf/proto"
	"google.golang.org/protobuf/reflect/protoreflect"
)

// Fault is one thing wrong with the text.
type Fault struct {
	// Line and Column are the place, from 1; 0 where the reader could not tell.
	Line, Column int
	// Field is the path of the field, such as "hypotheses[1].condition".
	Field string
	// Message says what is wrong, with the value and what is allowed.
	Message string
}

// maxDepth bounds nesting, so that no text can exhaust the stack.
const maxDepth = 64

// Positions maps the paths of the fields that a text sets to their places, for
// faults found later in what the fields say.
type Positions map[string]Position

// Position is a place in a text, from 1.
type Position struct{ Line, Column int }

// Find returns the place of the field, or of the nearest field around it.
func (p Positions) Find(field string) Position {
	for field != "" {
		if at, ok := p[field]; ok {
			return at
		}
		field = field[:max(strings.LastIndexAny(field, ".["), 0)]
	}
	return p[""]
}

// Unmarshal reads text into message, which should be empty. Without faults the
// message holds the whole text; with faults, what could be read, with an empty entry in
// a list for one that could not. A text that is not YAML has no positions: nothing of it
// could be read.
func Unmarshal(text []byte, message proto.Message) (Positions, []Fault) {
	r := &reader{positions: Positions{}}
	decoder := yaml.NewDecoder(strings.NewReader(string(text)))
	var document, second yaml.Node
	if err := decoder.Decode(&document); err != nil {
		if errors.Is(err, io.EOF) {
			return nil, []Fault{{Line: 1, Column: 1, Message: "the text is empty"}}
		}
		return nil, syntaxFaults(string(text), err)
	}
	if err := decoder.Decode(&second); !errors.Is(err, io.EOF) {
		if err != nil {
			return nil, syntaxFaults(string(text), err)
		}
		r.fault(&second, "", "a second document starts here; one is allowed")
	}
	r.message(document.Content[0], "", message.ProtoReflect(), 0)
	return r.positions, r.faults
}

var syntaxPosition = regexp.MustCompile(`^yaml: (?:line (\d+): )?(.*)$`)

// reader collects places and faults on its way through the tree.
type reader struct {
	positions Positions
	faults    []Fault
}

func (r *reader) fault(n *yaml.Node, field, message string) {
	r.faults = append(r.faults, Fault{Line: n.Line, Column: n.Column, Field: field, Message: message})
}

// plain refuses what the strict form has no room for, and reports whether the
// node may be read on.
func (r *reader) plain(n *yaml.Node, field string, depth int) bool {
	switch {
	case depth > maxDepth:
		r.fault(n, field, "nested more than "+strconv.Itoa(maxDepth)+" levels deep")
	case n.Kind == yaml.AliasNode:
		r.fault(n, field, "aliases are not allowed; write the value out")
	case n.Anchor != "":
		r.fault(n, field, "anchors are not allowed")
	case n.Style&yaml.TaggedStyle != 0:
		r.fault(n, field, "tags are not allowed, found "+n.Tag)
	case n.Kind == yaml.ScalarNode && n.Tag == "!!null":
		r.fault(n, field, "the value is empty; leave the field out instead")
	default:
		return true
	}
	return false
}

// message reads a mapping into m.
func (r *reader) message(n *yaml.Node, field string, m protoreflect.Message, depth int) {
	r.positions[field] = Position{Line: n.Line, Column: n.Column}
	if !r.plain(n, field, depth) {
		return
	}
	if n.Kind != yaml.MappingNode {
		r.fault(n, field, "a set of fields is needed here, found "+describe(n)+shapeHint(n, m.Descriptor()))
		return
	}
	seen := make(map[string]bool, len(n.Content)/2)
	for i := 0; i+1 < len(n.Content); i += 2 {
		key, value := n.Content[i], n.Content[i+1]
		path := join(field, key.Value)
		descriptor := m.Descriptor().Fields().ByName(protoreflect.Name(key.Value))
		switch {
		case key.Kind != yaml.ScalarNode || key.Anchor != "" || key.Tag == "!!merge":
			r.fault(key, field, "a field name is needed here, found "+describe(key))
			continue
		case descriptor == nil:
			r.fault(key, path, unknownField(key.Value, m.Descriptor()))
			continue
		case seen[key.Value]:
			r.fault(key, path, "the field is set twice")
			continue
		}
		seen[key.Value] = true
		if group := descriptor.ContainingOneof(); group != nil {
			if other := m.WhichOneof(group); other != nil {
				r.fault(key, path, "only one of "+string(other.Name())+" and "+key.Value+" may be set")
				continue
			}
		}
		r.field(value, path, m, descriptor, depth+1)
		r.positions[path] = Position{Line: key.Line, Column: key.Column}
	}
}

// field reads the value of one field, a list or a single value.
func (r *reader) field(n *yaml.Node, path string, m protoreflect.Message, f protoreflect.FieldDescriptor, depth int) {
	if !f.IsList() {
		if v, ok := r.value(n, path, f, m.NewField(f), depth); ok {
			m.Set(f, v)
		}
		return
	}
	if !r.plain(n, path, depth) {
		return
	}
	if n.Kind != yaml.SequenceNode {
		r.fault(n, path, "a list is needed here, found "+describe(n)+listHint(n))
		return
	}
	list := m.Mutable(f).List()
	for i, item := range n.Content {
		at := path + "[" + strconv.Itoa(i) + "]"
		r.positions[at] = Position{Line: item.Line, Column: item.Column}
		v, _ := r.value(item, at, f, list.NewElement(), depth+1)
		list.Append(v) // empty if it could not be read, so that those after it keep their places
	}
}
