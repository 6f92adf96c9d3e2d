package main

import (
	"fmt"
	"os"
	"path/filepath"
	"regexp"
	"strings"
)

// declaration is a line that declares something: a message, an enum or a oneof that opens,
// a field or an enum value.
var declaration = regexp.MustCompile(`^(?:(?:message|enum|oneof) (\w+) \{|(?:(?:repeated|optional) )?(?:[\w.]+ )?(\w+) = \d+)`)

// comments reads the comments of all protos in a folder, by the name of what they stand
// above: "Selection", "Selection.name", "Window.observable", "Role.ROLE_GATE". The members of
// a oneof are fields of its message. The generated Go has the structure, but no comments.
func comments(folder string) (map[string]string, error) {
	files, err := filepath.Glob(filepath.Join(folder, "*.proto"))
	if err != nil {
		return nil, err
	}
	if len(files) == 0 {
		return nil, fmt.Errorf("%s holds no protos", folder)
	}
	found := map[string]string{}
	for _, name := range files {
		text, err := os.ReadFile(name) //nolint:gosec // a file of the contract
		if err != nil {
			return nil, err
		}
		read(string(text), found)
	}
	return found, nil
}

// read adds the comments of one proto.
func read(text string, found map[string]string) {
	var above []string // the lines of the comment that is being read
	owner, depth := "", 0
	for line := range strings.Lines(text) {
		line = strings.TrimSpace(line)
		if comment, ok := strings.CutPrefix(line, "//"); ok {
			above = append(above, strings.TrimSpace(comment))
			continue
		}
		if m := declaration.FindStringSubmatch(line); m != nil {
			name := m[1] + m[2]
			if depth > 0 {
				name = owner + "." + name
			} else {
				owner = name
			}
			found[name] = strings.Join(above, " ")
		}
		above = nil
		depth += strings.Count(line, "{") - strings.Count(line, "}")
	}
}
