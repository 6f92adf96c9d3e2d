package main

import (
	"errors"
	"fmt"
	"path/filepath"
	"strings"

	"google.golang.org/protobuf/reflect/protoreflect"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// kind is a kind of file with a page of its own.
type kind struct {
	// name is that of the page; examples is the folder of testdata with its examples.
	name, examples string
	root           protoreflect.MessageDescriptor
	// rules are what else a reader should know, as a sentence; check is the command that names
	// the faults of such a file.
	rules, check string
}

// kinds are the kinds of files that people write.
func kinds() []kind {
	return []kind{
		{
			"selection", "selections", (&kinegatev1.Selection{}).ProtoReflect().Descriptor(),
			"Limits are half-open, [min, max).", "kinegate check FILE",
		},
		{
			"generation", "generation", (&kinegatev1.Generation{}).ProtoReflect().Descriptor(),
			"All numbers of the examples are invented.", "kinegate generate --request FILE --events 0",
		},
		{
			"detector", "detectors", (&kinegatev1.Detector{}).ProtoReflect().Descriptor(),
			"All numbers of the examples are invented.", "kinegate generate REACTION... --detector FILE --events 0",
		},
	}
}

// head is the text in front of the fields.
func (k kind) head() string {
	return fmt.Sprintf(`# Fields of a %[1]s file

Made from the comments of the contract by `+"`go run ./proto/filepages %[1]s`"+`; do not edit.

A %[1]s file is YAML: the fields of [%[2]s](#%[1]s) by these names. A field that is left out is
absent. Numbers are plain decimals in the unit that their name ends in. %[3]s Unknown
and doubled fields, anchors and tags are faults, and
`+"`%[4]s`"+`
names every fault with its line and column. Examples, each with what it shows at its head:

`, k.name, k.root.Name(), k.rules, k.check)
}

// page writes the page from the protos and the examples below the top folder.
func (k kind) page(top string) (string, error) {
	p := writer{kind: k}
	var err error
	if p.comments, err = comments(filepath.Join(top, "proto", "kinegate", "v1")); err != nil {
		return "", err
	}
	list, err := examples(top, k.examples)
	if err != nil {
		return "", err
	}
	p.text.WriteString(k.head() + list)
	seen := map[protoreflect.FullName]bool{}
	queue := []protoreflect.Descriptor{k.root}
	for len(queue) > 0 {
		d := queue[0]
		queue = queue[1:]
		if seen[d.FullName()] {
			continue
		}
		seen[d.FullName()] = true
		fmt.Fprintf(&p.text, "\n## %s\n\n%s\n", d.Name(), p.comment(string(d.Name())))
		switch d := d.(type) {
		case protoreflect.MessageDescriptor:
			queue = append(queue, p.message(d)...)
		case protoreflect.EnumDescriptor:
			p.enum(d)
		}
	}
	return p.text.String(), errors.Join(p.problems...)
}

// writer collects the page and what is wrong with it.
type writer struct {
	kind     kind
	comments map[string]string
	text     strings.Builder
	problems []error
}

// comment returns the comment of a name, ready for a cell of a table.
func (p *writer) comment(name string) string {
	c := p.comments[name]
	if c == "" {
		p.problems = append(p.problems, fmt.Errorf("%s has no comment", name))
	}
	return strings.NewReplacer("|", `\|`, "<", "&lt;", "*", `\*`).Replace(c)
}

// message writes the fields of a message and returns what they refer to.
func (p *writer) message(d protoreflect.MessageDescriptor) []protoreflect.Descriptor {
	fields := d.Fields()
	if fields.Len() == 0 {
		p.text.WriteString("\nIt has no fields: write `{}`.\n")
		return nil
	}
	p.text.WriteString("\n| field | value | meaning |\n| --- | --- | --- |\n")
	var refers []protoreflect.Descriptor
	for i := range fields.Len() {
		f := fields.Get(i)
		value, other := p.valueOf(f)
		if other != nil {
			refers = append(refers, other)
		}
		meaning := p.comment(string(d.Name()) + "." + string(f.Name()))
		if group := f.ContainingOneof(); group != nil && !group.IsSynthetic() {
			meaning = "One of " + string(group.Name()) + ": " + meaning
		}
		fmt.Fprintf(&p.text, "| `%s` | %s | %s |\n", f.Name(), value, meaning)
	}
	for i := range d.Oneofs().Len() {
		if group := d.Oneofs().Get(i); !group.IsSynthetic() {
			fmt.Fprintf(&p.text, "\nOf %s: %s\n", group.Name(), p.comment(string(d.Name())+"."+string(group.Name())))
		}
	}
	return refers
}

// valueOf says in words what a field takes, and returns the message or enum it refers to, unless
// that has a page of its own.
func (p *writer) valueOf(f protoreflect.FieldDescriptor) (text string, refers protoreflect.Descriptor) {
	switch f.Kind() {
	case protoreflect.MessageKind:
		refers = f.Message()
	case protoreflect.EnumKind:
		refers = f.Enum()
	case protoreflect.StringKind:
		text = "text"
	case protoreflect.DoubleKind:
		text = "number"
	case protoreflect.BoolKind:
		text = "true or false"
	case protoreflect.Int32Kind, protoreflect.Int64Kind:
		text = "whole number"
	default:
		text = f.Kind().String()
	}
	if refers != nil {
		file := ""
		for _, other := range kinds() {
			if other.name != p.kind.name && refers.FullName() == other.root.FullName() {
				file = other.name + ".md"
			}
		}
		text = fmt.Sprintf("[%s](%s#%s)", refers.Name(), file, strings.ToLower(string(refers.Name())))
		if file != "" {
			refers = nil
		}
	}
	if f.IsList() {
		text = "list of " + text
	}
	return text, refers
}

// enum writes the values of an enum but the one that stands for absence.
func (p *writer) enum(d protoreflect.EnumDescriptor) {
	p.text.WriteString("\n| value | meaning |\n| --- | --- |\n")
	for i := range d.Values().Len() {
		v := d.Values().Get(i)
		meaning := p.comment(string(d.Name()) + "." + string(v.Name()))
		if v.Number() == 0 {
			fmt.Fprintf(&p.text, "| left out | %s |\n", meaning)
			continue
		}
		fmt.Fprintf(&p.text, "| `%s` | %s |\n", v.Name(), meaning)
	}
}
