package strictyaml

import (
	"slices"
	"strconv"
	"strings"
	"unicode"
	"unicode/utf8"

	"go.yaml.in/yaml/v3"
	"google.golang.org/protobuf/reflect/protoreflect"
)

// syntaxHints says what usually lies behind a complaint of the reader, by a part of it.
var syntaxHints = [][2]string{ //nolint:gochecknoglobals // a list that nothing writes
	{"mapping values are not allowed", `a second ":" on this line: a "-" may be missing above, or text with ": " may need quotes`},
	{"did not find expected ',' or", "a bracket or brace that opens here is not closed, or a comma is missing in it"},
	{"did not find expected key", "the indentation of some line in this part fits no line above it"},
	{"did not find expected '-'", `an entry of this list does not start with "-", or is not indented as the others`},
	{"did not find expected node content", "a bracket or brace is not closed, or a comma stands too many"},
	{"found unexpected end of stream", "a quote that opens here is not closed"},
	{"could not find expected ':'", `a field name on this line lacks its ": "`},
	{"cannot start any token", "text that starts with a sign needs quotes"},
}

// syntaxFaults explains a text that is not YAML. Blanks that are none to YAML are looked for
// first, because the reader finds them out only later, if at all.
func syntaxFaults(text string, err error) []Fault {
	if faults := strangeBlanks(text); len(faults) > 0 {
		return faults
	}
	parts := syntaxPosition.FindStringSubmatch(strings.ReplaceAll(err.Error(), "\n", " "))
	if parts == nil {
		return []Fault{{Line: 1, Column: 1, Message: "not YAML: " + err.Error()}}
	}
	line, convErr := strconv.Atoi(parts[1])
	if convErr != nil {
		line = 1
	} else if strings.HasPrefix(parts[2], "did not find") {
		line++ // the parser, unlike the scanner, counts lines from 0
	}
	line = min(line, max(strings.Count(strings.TrimRight(text, "\n"), "\n"), 0)+1)
	message := "not YAML: " + parts[2]
	for _, hint := range syntaxHints {
		if strings.Contains(parts[2], hint[0]) {
			message = "not YAML: " + hint[1]
			break
		}
	}
	return []Fault{{Line: line, Column: 1, Message: message}}
}

const plainBlanks = "lines are indented with plain blanks, found "

// strangeBlanks finds tabs and blanks beyond ASCII in front of the text of a line.
func strangeBlanks(text string) []Fault {
	var faults []Fault
	number := 0
	for line := range strings.Lines(text) {
		number++
		for at, r := range strings.TrimRight(line, "\r\n") {
			if !unicode.IsSpace(r) {
				break
			}
			if r != ' ' {
				faults = append(faults, Fault{Line: number, Column: at + 1, Message: plainBlanks + strconv.QuoteRuneToASCII(r)})
				break
			}
		}
	}
	return faults
}

// textHint says what is wrong with unquoted text that starts with a typographic quote.
func textHint(value string) string {
	if r, _ := utf8.DecodeRuneInString(value); strings.ContainsRune("“”„‟‘’‚«»", r) {
		return "quotes are written \", found " + strconv.Quote(string(r))
	}
	return ""
}

// numberHint says what is wrong with what was meant as a number.
func numberHint(value string) string {
	digits := func(s string) bool { return strings.ContainsAny(s, "0123456789") }
	number, rest, blank := strings.Cut(value, " ")
	switch {
	case strings.ContainsAny(value, "−–‐") && digits(value):
		return "; the minus sign is written -"
	case blank && digits(number) && !digits(rest):
		return "; the unit is that of the field's name and is not written"
	case strings.HasSuffix(value, "%"):
		return "; a share is written as a number, such as 0.01"
	case digits(value) && (strings.HasPrefix(value, ".") || strings.HasSuffix(value, ".")):
		return "; digits stand on both sides of the point"
	}
	return ""
}

// wordHint names the value that a word stands for, where it is part of one value alone.
func wordHint(word string, names []string) string {
	var meant []string
	for _, name := range names {
		if word != "" && strings.Contains(name+"_", "_"+strings.ToUpper(word)+"_") {
			meant = append(meant, name)
		}
	}
	if len(meant) == 1 {
		return "; write " + meant[0]
	}
	return ""
}

// shapeHint says how to write what a message or list is made of, where n stands instead.
func shapeHint(n *yaml.Node, d protoreflect.MessageDescriptor) string {
	if n.Kind == yaml.ScalarNode {
		if f := d.Fields().ByName(protoreflect.Name(n.Value)); f != nil && f.Message() != nil {
			return "; write {" + n.Value + ": {}}"
		}
	}
	const most = 8
	names := fieldNames(d)
	if len(names) == 0 {
		return "; write {}"
	}
	if len(names) > most {
		return ""
	}
	return "; its fields are " + strings.Join(names, ", ")
}

// listHint says how to write a list, where n stands instead.
func listHint(n *yaml.Node) string {
	if n.Kind == yaml.ScalarNode {
		return "; a list of one is written [" + n.Value + "]"
	}
	return `; each entry starts with "-"`
}

// unknownField names the nearest fields, or else those there are.
func unknownField(name string, d protoreflect.MessageDescriptor) string {
	text := "unknown field " + strconv.Quote(name)
	if r, _ := utf8.DecodeRuneInString(name); unicode.IsSpace(r) {
		return text + "; " + plainBlanks + strconv.QuoteRuneToASCII(r)
	}
	if _, err := strconv.Atoi(name); err == nil {
		text += "; the decimal sign is a point"
	}
	for i := range d.Fields().Len() {
		f := d.Fields().Get(i)
		if f.Message() != nil && !f.IsList() && f.Message().Fields().ByName(protoreflect.Name(name)) != nil {
			return text + "; it stands inside " + string(f.Name())
		}
	}
	names := fieldNames(d)
	if near := nearest(name, names); len(near) > 0 {
		return text + ", nearest: " + strings.Join(near, ", ")
	}
	return text + ", allowed: " + strings.Join(names, ", ")
}

func fieldNames(d protoreflect.MessageDescriptor) []string {
	names := make([]string, d.Fields().Len())
	for i := range names {
		names[i] = string(d.Fields().Get(i).Name())
	}
	slices.Sort(names)
	return names
}

// nearest returns the names that a slip of the pen or another unit would turn into name.
func nearest(name string, names []string) []string {
	best, near := len(name)/3+1, []string(nil)
	for _, candidate := range names {
		distance := edits(folded(name), folded(candidate))
		if sameButUnit(name, candidate) {
			distance = min(distance, 1)
		}
		switch {
		case distance < best:
			best, near = distance, []string{candidate}
		case distance == best && len(near) > 0:
			near = append(near, candidate)
		}
	}
	return near
}

// sameButUnit tells whether two names differ in what follows their last underscore, or in
// having that at all.
func sameButUnit(a, b string) bool {
	if strings.HasPrefix(a, b+"_") || strings.HasPrefix(b, a+"_") {
		return true
	}
	stem := strings.LastIndexByte(a, '_')
	return stem > 0 && strings.HasPrefix(b, a[:stem+1])
}

// folded is a name without what differs between styles of writing it.
func folded(name string) string { return strings.ToLower(strings.ReplaceAll(name, "_", "")) }

// edits is the least number of bytes to insert, delete or change that turns a into b.
func edits(a, b string) int {
	const longest = 64 // no field has a longer name
	if len(a) > longest {
		return len(a)
	}
	row := make([]int, len(b)+1)
	for j := range row {
		row[j] = j
	}
	for i := range len(a) {
		diagonal := row[0]
		row[0] = i + 1
		for j := range len(b) {
			change := diagonal
			if a[i] != b[j] {
				change++
			}
			diagonal = row[j+1]
			row[j+1] = min(change, row[j]+1, row[j+1]+1)
		}
	}
	return row[len(b)]
}
