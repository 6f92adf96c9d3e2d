package config

import (
	"iter"
	"maps"
	"path/filepath"
	"regexp"
	"slices"
	"strings"

	"go.yaml.in/yaml/v3"

	"example.org/kinegate/kinematics/fault"
)

// variable is a value from the environment.
type variable struct {
	value, place string
}

// linked are variables that orchestrators put into every container beside a service
// called kinegate or kinegate-something: they are nobody's settings.
var linked = regexp.MustCompile(`(^|_)(SERVICE_HOST|SERVICE_PORT(_[A-Z0-9_]+)?|PORT(_[0-9]+_(TCP|UDP)(_(PROTO|PORT|ADDR))?)?)$`)

// variables returns the settings of the environment by name.
func (l *loader) variables(environ []string) map[string]variable {
	found := map[string]variable{}
	for _, line := range environ {
		name, value, _ := strings.Cut(line, "=")
		key, ours := strings.CutPrefix(name, Prefix)
		if !ours || linked.MatchString(key) {
			continue
		}
		found[strings.ToLower(key)] = variable{value, name}
	}
	return found
}

// maxFileBytes bounds the configuration file.
const maxFileBytes = 1 << 20

// file reads settings from a YAML file: one mapping of names to plain values; lists may
// be sequences. Everything else that YAML can say is refused.
func (l *loader) file(path string, read func(string) ([]byte, error)) {
	bad := func(e *fault.Error) { l.fault(FileKey, "", e) }
	data, err := read(path)
	if err != nil {
		e := fault.New(fault.Invalid, FileKey, path, "a file that can be read")
		e.Err = err
		bad(e)
		return
	}
	if len(data) > maxFileBytes {
		bad(fault.New(fault.Exhausted, FileKey, path, "a file of at most 1 MiB"))
		return
	}
	var document yaml.Node
	decoder := yaml.NewDecoder(strings.NewReader(string(data)))
	if err := decoder.Decode(&document); err != nil {
		if len(strings.TrimSpace(string(data))) > 0 && err.Error() != "EOF" {
			bad(fault.New(fault.Invalid, FileKey, path, "YAML").Because(err.Error()))
		}
		return
	}
	var second yaml.Node
	if decoder.Decode(&second) == nil {
		bad(fault.New(fault.Invalid, FileKey, path, "one YAML document"))
	}
	l.mapping(filepath.Base(path), document.Content[0])
}

// mapping reads the names and values of the file.
func (l *loader) mapping(file string, root *yaml.Node) {
	if root.Kind == yaml.ScalarNode && root.Tag == "!!null" {
		return
	}
	if root.Kind != yaml.MappingNode {
		l.fault(FileKey, "", fault.New(fault.Invalid, FileKey, file, "a mapping of settings to values").At(root.Line, root.Column))
		return
	}
	seen := map[string]bool{}
	for i := 0; i+1 < len(root.Content); i += 2 {
		key, value := root.Content[i], root.Content[i+1]
		place := file
		text, ok := plain(value)
		switch {
		case key.Kind != yaml.ScalarNode || key.Anchor != "":
			l.fault(FileKey, place, fault.New(fault.Invalid, FileKey, "", "names of settings").At(key.Line, key.Column))
		case seen[key.Value]:
			l.fault(key.Value, place, fault.New(fault.Invalid, "", text, "once").Because("it is given twice").At(key.Line, key.Column))
		case !ok:
			l.fault(key.Value, place, fault.New(fault.Invalid, "", "", "a plain value, or a sequence of them for a list").
				At(value.Line, value.Column))
		default:
			before := len(l.faults)
			l.set(key.Value, text, File, place)
			for _, e := range l.faults[before:] {
				e.Line, e.Column = key.Line, key.Column
			}
		}
		seen[key.Value] = true
	}
}

// plain returns the text of a scalar, or of a sequence of scalars with commas.
func plain(n *yaml.Node) (text string, ok bool) {
	if n.Anchor != "" || n.Style&yaml.TaggedStyle != 0 {
		return "", false
	}
	switch n.Kind {
	case yaml.ScalarNode:
		return n.Value, n.Tag != "!!null"
	case yaml.SequenceNode:
		var items []string
		for _, item := range n.Content {
			if item.Kind != yaml.ScalarNode || item.Anchor != "" || strings.Contains(item.Value, ",") {
				return "", false
			}
			items = append(items, item.Value)
		}
		return strings.Join(items, ","), true
	case yaml.DocumentNode, yaml.MappingNode, yaml.AliasNode:
	}
	return "", false
}

// sorted walks a map in the order of its keys.
func sorted[V any](m map[string]V) iter.Seq2[string, V] {
	return func(yield func(string, V) bool) {
		for _, k := range slices.Sorted(maps.Keys(m)) {
			if !yield(k, m[k]) {
				return
			}
		}
	}
}
