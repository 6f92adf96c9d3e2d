package reaction

import (
	"slices"
	"strings"
)

// Text returns the canonical text of the reaction: canonical names, X last, decays in
// the order of the products' numbers. Parse of the text gives the same reaction. It
// returns false, and a text for people that names products by reference, where two
// products of one name decay differently, which only the structured form can say.
func (r *Reaction) Text() (string, bool) {
	var b strings.Builder
	for i := range r.Initial {
		b.WriteString(r.Initial[i].Name)
		b.WriteByte(' ')
	}
	b.WriteString("->")
	for _, n := range r.Top {
		b.WriteByte(' ')
		b.WriteString(r.Products[n].Particle.Name)
	}
	if r.Inclusive {
		b.WriteString(" " + remainder)
	}
	first := map[int64]int{}
	alike := true
	for n := range r.Products {
		number := r.Products[n].Particle.Number
		if k, seen := first[number]; seen {
			alike = alike && r.sameDecay(k, n)
			continue
		}
		first[number] = n
	}
	for n := range r.Products {
		p := &r.Products[n]
		if len(p.Daughters) == 0 || (alike && first[p.Particle.Number] != n) {
			continue
		}
		name := p.Particle.Name
		if !alike {
			name = p.Name
		}
		b.WriteString(", " + r.decayText(name, p.Daughters))
	}
	return b.String(), alike
}

// String returns the text of the reaction for people.
func (r *Reaction) String() string {
	text, _ := r.Text()
	return text
}

// decayText renders one decay.
func (r *Reaction) decayText(parent string, daughters []int) string {
	words := make([]string, 0, len(daughters)+2)
	words = append(words, parent, "->")
	for _, d := range daughters {
		words = append(words, r.Products[d].Particle.Name)
	}
	return strings.Join(words, " ")
}

// sameDecay reports whether two products are said to decay alike.
func (r *Reaction) sameDecay(a, b int) bool {
	return slices.EqualFunc(r.Products[a].Daughters, r.Products[b].Daughters, func(x, y int) bool {
		return r.Products[x].Particle.Number == r.Products[y].Particle.Number && r.sameDecay(x, y)
	})
}
