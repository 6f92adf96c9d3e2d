package reaction

import (
	"cmp"
	"math"
	"slices"

	"example.org/kinegate/kinematics/momentum/breakup"
	"example.org/kinegate/kinematics/num"
	"example.org/kinegate/kinematics/particle"
)

// finder enumerates the sets of particles that balance the left side.
type finder struct {
	channels *Channels
	masses   []float64
	numbers  []particle.Numbers // what the laws conserve, of each particle
	target   particle.Numbers
	laws     Laws
	pairs    map[particle.Numbers][]pair
	// either tells that a particle of either strangeness takes part: strangeness is then
	// not looked up but checked.
	either bool
	bound  float64 // sqrt(s), a little rounded up
	next   entry   // the lightest closed channel so far
	found  []entry
	steps  int
}

// pair is two particles of the list, the lighter first.
type pair struct {
	mass     float64
	from, to int16
}

// newFinder prepares the pairs by what they conserve.
func newFinder(c *Channels) *finder {
	s := c.search
	f := &finder{channels: c, laws: AllLaws &^ s.Ignored, pairs: map[particle.Numbers][]pair{}}
	f.either = s.First.EitherStrangeness || s.Second.EitherStrangeness
	for i := range c.list {
		f.either = f.either || c.list[i].EitherStrangeness
	}
	lookup := f.laws
	if f.either {
		lookup = lookup.Without(Strangeness)
	}
	f.target = lookup.project(s.First.Numbers.Add(s.Second.Numbers))
	for i := range c.list {
		f.masses = append(f.masses, c.list[i].Mass)
		f.numbers = append(f.numbers, lookup.project(c.list[i].Numbers))
	}
	var sums []particle.Numbers
	for i := range c.list {
		for j := i; j < len(c.list); j++ {
			sum := f.numbers[i].Add(f.numbers[j])
			if len(f.pairs[sum]) == 0 {
				sums = append(sums, sum)
			}
			f.pairs[sum] = append(f.pairs[sum], pair{f.masses[i] + f.masses[j], int16(i), int16(j)})
		}
	}
	for _, sum := range sums {
		slices.SortFunc(f.pairs[sum], comparePairs)
	}
	f.bound = c.initial.CentreOfMass().SqrtS * (1 + 0x1p-40)
	return f
}

func comparePairs(a, b pair) int {
	return cmp.Or(cmp.Compare(a.mass, b.mass), cmp.Compare(a.from, b.from), cmp.Compare(a.to, b.to))
}

// limit is the mass above which nothing is of interest: that of the lightest closed
// channel, and without one none.
func (f *finder) limit() float64 {
	if f.next.count == 0 {
		return math.Inf(1)
	}
	return max(f.next.mass*(1+0x1p-40), f.bound)
}

// find fills found with the open channels of a number of bodies and keeps the lightest
// closed one. It returns false, and leaves next as it was, if the work is too much.
func (f *finder) find(bodies int) bool {
	f.found = nil
	before := f.next
	ok := true
	if bodies == 1 {
		for i := range f.numbers {
			if f.numbers[i] == f.target {
				one := entry{mass: f.masses[i], count: 1}
				one.members[0] = int16(i)
				ok = ok && f.take(one)
			}
		}
	} else {
		ok = f.extend(entry{}, bodies, 0, f.target)
	}
	if !ok {
		f.next = before
	}
	return ok
}

// step counts one set looked at; it is false when the work is too much or is stopped.
func (f *finder) step() bool {
	const between = 1 << 13 // some tens of microseconds
	f.steps++
	stop := f.channels.search.Stop
	return f.steps <= maxSteps && (stop == nil || f.steps%between != 0 || !stop())
}

// extend adds particles from index first on until two are missing, and those by pairs.
func (f *finder) extend(e entry, bodies, first int, missing particle.Numbers) bool {
	left := bodies - int(e.count)
	if left == 2 {
		return f.complete(e, first, missing)
	}
	for i := first; i < len(f.masses); i++ {
		if e.mass+float64(float64(left)*f.masses[i]) > f.limit() {
			return true
		}
		if !f.step() {
			return false
		}
		longer := e
		longer.members[e.count] = int16(i) //nolint:gosec // at most MaxListed
		longer.count++
		longer.mass += f.masses[i]
		if !f.extend(longer, bodies, i, missing.Sub(f.numbers[i])) {
			return false
		}
	}
	return true
}

// complete adds the pairs that make up what is missing.
func (f *finder) complete(e entry, first int, missing particle.Numbers) bool {
	for _, p := range f.pairs[missing] {
		if e.mass+p.mass > f.limit() {
			return true
		}
		if !f.step() {
			return false
		}
		if int(p.from) < first {
			continue
		}
		whole := e
		whole.members[e.count], whole.members[e.count+1] = p.from, p.to
		whole.count += 2
		whole.mass += p.mass
		if !f.take(whole) {
			return false
		}
	}
	return true
}

// take sorts a set that balances into the open channels or the lightest closed one.
func (f *finder) take(e entry) bool {
	if !f.allowed(&e) {
		return true
	}
	masses := make([]float64, e.count)
	for i, m := range e.members[:e.count] {
		masses[i] = f.masses[m]
	}
	e.mass = breakup.Sum(masses...).Float()
	excess, _ := f.channels.initial.Excess(masses...)
	if num.SideOf(excess, f.bound*boundaryUnits) == num.Below {
		if f.next.count == 0 || compareEntries(e, f.next) < 0 {
			f.next = e
		}
		return true
	}
	f.found = append(f.found, e)
	return len(f.found) <= maxChannels
}

// allowed applies the rules that are no sums. Strangeness, where particles of either
// strangeness take part, and those of spinAndC where they are asked for.
func (f *finder) allowed(e *entry) bool {
	s := f.channels.search
	members := e.members[:e.count]
	if f.either && f.laws.Has(Strangeness) {
		var left, right sum
		left.add(&s.First)
		left.add(&s.Second)
		for _, m := range members {
			right.add(&f.channels.list[m])
		}
		if len(differ(f.laws, left, right)) > 0 {
			return false
		}
	}
	return !s.SpinAndC || spinAndC(&s.First, &s.Second, len(members), func(i int) *particle.Particle { return &f.channels.list[members[i]] })
}
