package reaction

import (
	"strings"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/particle"
)

// token is a name of a reaction's text and its column, counted in bytes from 1.
type token struct {
	text   string
	column int
}

// statement is one part of a reaction's text between commas: names, an arrow, names.
type statement struct {
	left, right []token
	arrow       int // column of the arrow, 0 if there is none
	start, end  int // columns of the first byte and of the byte after the last
}

// statements splits the text at commas, arrows and blanks. No name holds a comma or
// ">", so that an arrow ends at ">" and begins one byte before: "pi-->" is "pi-" and
// an arrow.
func statements(text string) ([]statement, fault.List) {
	var list fault.List
	var all []statement
	offset := 0
	for part := range strings.SplitSeq(text, ",") {
		s := statement{start: offset + 1, end: offset + len(part) + 1}
		left, right, found := strings.Cut(part, "->")
		if !found {
			s.left = tokens(part, offset)
		} else {
			s.left = tokens(left, offset)
			s.arrow = offset + len(left) + 1
			s.right = tokens(right, s.arrow+1)
			if at := strings.Index(right, "->"); at >= 0 {
				list = append(list, fault.New(fault.Invalid, "arrow", "", "one arrow in each part; a decay follows a comma").
					In(opParse).At(0, s.arrow+at+2).Because("second arrow"))
			}
		}
		all = append(all, s)
		offset += len(part) + 1
	}
	return all, list
}

// tokens splits at blanks; offset is the number of bytes before the text.
func tokens(text string, offset int) []token {
	var list []token
	start := -1
	for i := 0; i <= len(text); i++ {
		blank := i == len(text) || strings.IndexByte(" \t\r\n", text[i]) >= 0
		switch {
		case blank && start >= 0:
			list = append(list, token{text[start:i], offset + start + 1})
			start = -1
		case !blank && start < 0:
			start = i
		}
	}
	return list
}

// unknownName explains a name that the table does not have.
func unknownName(t *particle.Table, name string) *fault.Error {
	e := fault.New(fault.Invalid, "particle", name, "")
	switch {
	case name == "+":
		return e.Because("particles stand side by side, with blanks and no plus sign between them")
	case isArrow(name):
		return e.Because("the arrow is written ->")
	case name == remainder:
		return e.Because("X stands once, among the products of the first part")
	case strings.ContainsAny(name, "[]"):
		return e.Because("square brackets belong to product references, not to a reaction's text")
	case name[0] >= '0' && name[0] <= '9':
		e.Nearest = t.Nearest(strings.TrimLeft(name, "0123456789"))
		return e.Because("no particle; one that occurs several times is written several times")
	}
	if spelled := asciiName(name); spelled != name {
		e.Nearest = t.Nearest(spelled)
		return e.Because("names are written in ASCII")
	}
	e.Nearest = t.Nearest(name)
	return e.Because("unknown particle")
}

// isArrow reports whether a name is an arrow in another form than ->.
func isArrow(name string) bool {
	return strings.ContainsAny(name, "→⟶⇒") || name == "=>" || name == "-" || name == ">"
}

// asciiName writes Greek letters and raised or long signs in the way that names have.
func asciiName(name string) string {
	return strings.NewReplacer(
		"γ", "gamma", "η", "eta", "μ", "mu", "µ", "mu", "ν", "nu", "π", "pi", "ρ", "rho", "τ", "tau", "φ", "phi", "ϕ", "phi",
		"ψ", "psi", "ω", "omega", "Δ", "Delta", "Λ", "Lambda", "Ξ", "Xi", "Σ", "Sigma", "Υ", "Upsilon", "Ω", "Omega",
		"⁺", "+", "⁻", "-", "−", "-", "–", "-", "⁰", "0", "′", "'",
	).Replace(name)
}
