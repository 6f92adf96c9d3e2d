package particle

import (
	"cmp"
	"slices"
	"strings"
)

// maxNearest bounds how many names Nearest returns.
const maxNearest = 5

// Edit costs, in half edits: a letter of the other case and a charge sign at the end
// are small slips.
const (
	costEdit = 2
	costSlip = 1
)

// Nearest returns up to five names that are near to an unknown one, nearest first:
// by the smallest cost of insertions, deletions, substitutions and transpositions of
// neighbours, in which a change of case or a missing charge sign counts half and other
// case throughout no more than that. A name that holds the whole text as its first part, or whose title holds it as a word, is
// near. Greek letters and raised signs are read as the plain-text names have them.
func (t *Table) Nearest(name string) []string {
	query := plain(name[:min(len(name), 4*maxNameBytes)])
	if query == "" || len(query) > maxNameBytes {
		return nil
	}
	type candidate struct{ cost, index int }
	best := make([]candidate, 0, len(t.particles))
	// About one edit for every six letters, and never a wholly different name.
	limit := min(costEdit+len(query)/3, costEdit*len(query)-1)
	for i, p := range t.particles {
		cost := min(titleCost(query, p.Title), nameCost(query, p.Name))
		for _, alias := range p.aliases {
			cost = min(cost, nameCost(query, alias))
		}
		if cost <= limit {
			best = append(best, candidate{cost, i})
		}
	}
	slices.SortStableFunc(best, func(a, b candidate) int {
		return cmp.Or(cmp.Compare(a.cost, b.cost), cmp.Compare(t.particles[a.index].Mass, t.particles[b.index].Mass))
	})
	names := make([]string, 0, maxNearest)
	for _, c := range best[:min(maxNearest, len(best))] {
		names = append(names, t.particles[c.index].Name)
	}
	return names
}

// nameCost is the cost to turn the query into a known name.
func nameCost(query, known string) int {
	if rest, ok := strings.CutPrefix(known, query); ok {
		if strings.Trim(rest, "+-0") == "" {
			return costSlip
		}
		return costEdit
	}
	if strings.EqualFold(query, known) {
		return costSlip
	}
	cost := editCost(query, known)
	if stem := strings.TrimRight(known, "+-0"); stem != known && stem != "" {
		cost = min(cost, editCost(query, stem)+costSlip)
	}
	return cost
}

// titleCost is small if the query is a word of the title or the whole of it.
func titleCost(query, title string) int {
	const never = 1 << 20
	if strings.EqualFold(query, title) {
		return costSlip
	}
	if len(query) <= 2 {
		return never
	}
	for word := range strings.FieldsFuncSeq(title, func(r rune) bool { return r == ' ' || r == ',' }) {
		if strings.EqualFold(query, word) {
			return costEdit
		}
	}
	return never
}

// editCost is the weighted optimal string alignment distance: the least cost of
// insertions, deletions, substitutions and transpositions of neighbours, none of them
// inside another (R. Lowrance and R. A. Wagner, J. ACM 22 (1975) 177, restricted form).
// b is a name, of at most maxNameBytes.
func editCost(a, b string) int {
	var rows [3][maxNameBytes + 1]int
	before, last, row := &rows[0], &rows[1], &rows[2]
	for j := range len(b) + 1 {
		last[j] = j * costEdit
	}
	for i := 1; i <= len(a); i++ {
		row[0] = i * costEdit
		for j := 1; j <= len(b); j++ {
			row[j] = min(last[j]+costEdit, row[j-1]+costEdit, last[j-1]+substitution(a[i-1], b[j-1]))
			if i > 1 && j > 1 && a[i-1] == b[j-2] && a[i-2] == b[j-1] {
				row[j] = min(row[j], before[j-2]+costEdit)
			}
		}
		before, last, row = last, row, before
	}
	return last[len(b)]
}

// substitution is the cost to turn one byte into another.
func substitution(a, b byte) int {
	switch {
	case a == b:
		return 0
	case lower(a) == lower(b):
		return costSlip
	}
	return costEdit
}

// lower folds the case of an ASCII letter.
func lower(b byte) byte {
	if 'A' <= b && b <= 'Z' {
		return b + ('a' - 'A')
	}
	return b
}

// plain turns Greek letters and raised signs into the spelling of plain-text names.
func plain(name string) string {
	return strings.NewReplacer(
		"γ", "gamma", "π", "pi", "η", "eta", "ρ", "rho", "ω", "omega", "φ", "phi", "ϕ", "phi",
		"μ", "mu", "µ", "mu", "τ", "tau", "ν", "nu_", "ψ", "psi", "χ", "chi", "α", "alpha",
		"Δ", "Delta", "Λ", "Lambda", "Σ", "Sigma", "Ξ", "Xi", "Ω", "Omega", "Υ", "Upsilon",
		"⁺", "+", "⁻", "-", "⁰", "0", "−", "-",
	).Replace(name)
}
