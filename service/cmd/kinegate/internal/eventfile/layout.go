package eventfile

import (
	"fmt"
	"maps"
	"regexp"
	"slices"
	"strconv"
	"strings"

	kinegate "example.org/kinegate/clients/go"
)

// layout says which column holds what.
type layout struct {
	header      []string
	coordinates kinegate.Coordinates
	objects     []objectColumns
	beams       [][3]int
	named       map[string]int // run, event and weight
	other       map[string]int
}

// objectColumns are the columns of one object; -1 for one that does not exist.
type objectColumns struct {
	values    []int
	class     int
	kind      classKind
	species   int
	direction int
}

// classKind is how the class of an object is given.
type classKind int

const (
	byClass classKind = iota
	byCharge
	byNumber
)

// sets are the coordinate sets in the order of preference, with their columns; the
// last is optional.
var sets = []struct { //nolint:gochecknoglobals // a table that nothing writes
	coordinates kinegate.Coordinates
	needed      []string
	optional    string
}{
	{kinegate.MomentumMass, []string{"px", "py", "pz"}, "m"},
	{kinegate.MomentumAngles, []string{"p", "theta", "phi"}, ""},
	{kinegate.TransverseMomentum, []string{"pt", "eta", "phi"}, "m"},
}

var numberedName = regexp.MustCompile(`^([a-z_]+)([1-9][0-9]?)$`)

// weightName is the column of the weights of simulated events.
const weightName = "weight"

// newLayout reads the line of names.
func newLayout(header []string) (layout, error) {
	l := layout{header: slices.Clone(header), named: map[string]int{}, other: map[string]int{}}
	groups := map[int]map[string]int{}
	for i, cell := range header {
		name := strings.ToLower(strings.TrimSpace(strings.TrimPrefix(cell, "\ufeff")))
		if name == "run" || name == "event" || name == weightName {
			if _, twice := l.named[name]; twice {
				return l, fmt.Errorf("column %s appears twice", cell)
			}
			l.named[name] = i
			continue
		}
		l.other[strings.TrimSpace(cell)] = i
		if parts := numberedName.FindStringSubmatch(name); parts != nil {
			number, err := strconv.Atoi(parts[2])
			if err != nil {
				return l, err
			}
			if groups[number] == nil {
				groups[number] = map[string]int{}
			}
			if _, twice := groups[number][parts[1]]; twice {
				return l, fmt.Errorf("column %s appears twice", cell)
			}
			groups[number][parts[1]] = i
		}
	}
	for _, set := range sets {
		for _, number := range slices.Sorted(maps.Keys(groups)) {
			if c, ok := columnsOf(groups[number], set.needed, set.optional); ok {
				l.objects = append(l.objects, c)
			}
		}
		if len(l.objects) > 0 {
			l.coordinates = set.coordinates
			break
		}
	}
	if len(l.objects) == 0 {
		return l, fmt.Errorf("no object columns found in %q; each object needs px, py, pz or p, theta, phi or pt, eta, phi "+
			"with its number behind, and class, q or pid", strings.Join(header, ","))
	}
	for _, number := range slices.Sorted(maps.Keys(groups)) {
		g := groups[number]
		energy, hasEnergy := g["beam_energy"]
		sigma, hasSigma := g["beam_sigma"]
		time, hasTime := g["beam_time"]
		if hasEnergy && hasSigma && hasTime {
			l.beams = append(l.beams, [3]int{energy, sigma, time})
		}
	}
	return l, nil
}

// columnsOf finds the columns of one object in its numbered group.
func columnsOf(group map[string]int, needed []string, optional string) (objectColumns, bool) {
	c := objectColumns{class: -1, species: -1, direction: -1}
	for _, name := range needed {
		i, ok := group[name]
		if !ok {
			return c, false
		}
		c.values = append(c.values, i)
	}
	if optional != "" {
		i, ok := group[optional]
		if !ok {
			i = -1
		}
		c.values = append(c.values, i)
	}
	// The particle number says most, the charge least.
	for _, by := range []struct {
		name string
		kind classKind
	}{{"pid", byNumber}, {"class", byClass}, {"q", byCharge}} {
		if i, ok := group[by.name]; ok {
			c.class, c.kind = i, by.kind
			break
		}
	}
	for name, column := range map[string]*int{"direction": &c.direction, "species": &c.species} {
		if i, ok := group[name]; ok {
			*column = i
		}
	}
	return c, c.class >= 0
}
