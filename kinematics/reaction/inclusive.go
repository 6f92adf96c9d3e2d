package reaction

import (
	"slices"

	"example.org/kinegate/kinematics/particle"
)

// Remainder is what the conservation laws leave for X in an inclusive reaction.
type Remainder struct {
	// Numbers are the additive quantum numbers of X. Strangeness is the first of
	// Strangenesses; in a decay all flavours are open and left at 0.
	Numbers particle.Numbers
	// Strangenesses lists the possible values, more than one where K0_S or K0_L take
	// part.
	Strangenesses []int
	// FlavourOpen marks a decay, which may be weak: the flavours are not fixed.
	FlavourOpen bool
	// Lightest is the lightest X that the laws allow, by particles of the table.
	// It is empty if none was found within the stated bound (see lightest).
	Lightest []particle.Particle
}

// Mass returns the sum of the masses of the lightest X in GeV, false if there is none.
func (m *Remainder) Mass() (float64, bool) {
	var sum float64
	for i := range m.Lightest {
		sum += m.Lightest[i].Mass
	}
	return sum, len(m.Lightest) > 0
}

// remainder finds what is left for X.
func (r *Reaction) remainder(t *particle.Table) *Remainder {
	left, right := r.sums()
	m := &Remainder{Numbers: left.numbers.Sub(right.numbers), FlavourOpen: r.IsDecay()}
	if m.FlavourOpen {
		m.Numbers = withoutFlavour(m.Numbers)
	}
	base, either := m.Numbers.Strangeness, left.either+right.either
	if m.FlavourOpen {
		either = 0
	}
	for shift := -either; shift <= either; shift += 2 {
		m.Strangenesses = append(m.Strangenesses, base+shift)
	}
	m.Numbers.Strangeness = m.Strangenesses[0]
	best := 0.0
	for _, s := range m.Strangenesses {
		target := m.Numbers
		target.Strangeness = s
		found := lightest(t, target, m.FlavourOpen)
		trial := Remainder{Lightest: found}
		if mass, ok := trial.Mass(); ok && (len(m.Lightest) == 0 || mass < best) {
			m.Lightest, best = found, mass
		}
	}
	return m
}

// withoutFlavour sets the flavours to 0.
func withoutFlavour(n particle.Numbers) particle.Numbers {
	n.Strangeness, n.Charm, n.Bottomness, n.Topness = 0, 0, 0, 0
	return n
}

const (
	// searchSteps bounds the sets of particles that the search for the lightest X
	// takes up.
	searchSteps = 20_000
	// searchBodies bounds the particles of X.
	searchBodies = 24
)

// bodySet is one set of particles in the search for the lightest X.
type bodySet struct {
	mass    float64
	numbers particle.Numbers
	bodies  int
	order   int // order of making, which settles ties
	last    int // candidate added last
	without int // index of the set without it
}

// frontier is a binary heap of sets, the lightest on top (J. W. J. Williams, Commun. ACM
// 7 (1964) 347).
type frontier []bodySet

// before orders by mass, then by number of particles, then by order of making.
func (a *bodySet) before(b *bodySet) bool {
	if a.mass != b.mass {
		return a.mass < b.mass
	}
	if a.bodies != b.bodies {
		return a.bodies < b.bodies
	}
	return a.order < b.order
}

// push adds a set.
func (f *frontier) push(n *bodySet) {
	h := append(*f, *n)
	for i := len(h) - 1; i > 0 && h[i].before(&h[(i-1)/2]); i = (i - 1) / 2 {
		h[i], h[(i-1)/2] = h[(i-1)/2], h[i]
	}
	*f = h
}

// pop takes the lightest set.
func (f *frontier) pop() bodySet {
	h := *f
	top := h[0]
	h[0] = h[len(h)-1]
	h = h[:len(h)-1]
	for i := 0; ; {
		least := i
		for child := 2*i + 1; child <= 2*i+2 && child < len(h); child++ {
			if h[child].before(&h[least]) {
				least = child
			}
		}
		if least == i {
			break
		}
		h[i], h[least] = h[least], h[i]
		i = least
	}
	*f = h
	return top
}

// lightest finds the set of particles of the table with the smallest sum of masses and
// the given numbers, by E. W. Dijkstra's search in the order of mass (Numer. Math. 1
// (1959) 269). Only particles whose baryon number, lepton numbers and flavours have the
// sign of the target's are tried: any others would only add mass that has to be cancelled
// again. In a decay a lepton and an antilepton of one family are tried too, which carry
// charge away for less mass than a pion. It gives up after 20,000 sets or 24 particles.
func lightest(t *particle.Table, target particle.Numbers, flavourOpen bool) []particle.Particle {
	candidates := lightestOfClass(t, target, flavourOpen)
	if target == (particle.Numbers{}) {
		// Something must come out: the lightest state without any number.
		for i := range candidates {
			if numbersFor(&candidates[i], flavourOpen) == target {
				return candidates[i : i+1]
			}
		}
	}
	open := frontier{{last: -1, without: -1}}
	var done []bodySet
	seen := map[particle.Numbers]bool{}
	for order := 1; len(open) > 0 && len(done) < searchSteps; {
		n := open.pop()
		if seen[n.numbers] {
			continue
		}
		seen[n.numbers] = true
		if n.numbers == target {
			return trace(candidates, done, n)
		}
		done = append(done, n)
		if n.bodies == searchBodies {
			continue
		}
		for i := range candidates {
			sum := n.numbers.Add(numbersFor(&candidates[i], flavourOpen))
			if seen[sum] || !inside(sum, target, flavourOpen) {
				continue
			}
			open.push(&bodySet{
				mass: n.mass + candidates[i].Mass, numbers: sum, bodies: n.bodies + 1,
				order: order, last: i, without: len(done) - 1,
			})
			order++
		}
	}
	return nil
}

// trace lists the particles of a set, in the order of the table.
func trace(candidates []particle.Particle, done []bodySet, n bodySet) []particle.Particle {
	var picked []int
	for n.last >= 0 {
		picked = append(picked, n.last)
		n = done[n.without]
	}
	slices.Sort(picked)
	list := make([]particle.Particle, len(picked))
	for i, k := range picked {
		list[i] = candidates[k]
	}
	return list
}

// numbersFor returns the numbers that count in the search.
func numbersFor(p *particle.Particle, flavourOpen bool) particle.Numbers {
	if flavourOpen {
		return withoutFlavour(p.Numbers)
	}
	return p.Numbers
}

// lightestOfClass returns the lightest particle of each set of numbers that may help to
// reach the target, in the order of the table.
func lightestOfClass(t *particle.Table, target particle.Numbers, flavourOpen bool) []particle.Particle {
	var list []particle.Particle
	index := map[particle.Numbers]int{}
	for _, p := range t.List() {
		numbers := numbersFor(&p, flavourOpen)
		switch {
		case p.IsQuark(), p.EitherStrangeness && !flavourOpen, !inside(numbers, target, flavourOpen):
			continue
		}
		i, known := index[numbers]
		switch {
		case !known:
			index[numbers] = len(list)
			list = append(list, p)
		case p.Mass < list[i].Mass:
			list[i] = p
		}
	}
	return list
}

// inside reports whether every number but the charge lies between 0 and the target's,
// with room for a lepton and an antilepton of each family in a decay.
func inside(n, target particle.Numbers, flavourOpen bool) bool {
	for law := BaryonNumber; law < lawCount; law++ {
		room := 0
		if flavourOpen && law >= ElectronNumber && law <= TauNumber {
			room = 1
		}
		v, goal := law.Value(n), law.Value(target)
		if v < min(goal, 0)-room || v > max(goal, 0)+room {
			return false
		}
	}
	return true
}
