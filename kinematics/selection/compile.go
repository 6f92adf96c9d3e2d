package selection

import (
	"slices"
	"strconv"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/particle"
)

const opCompile = "selection.Compile"

// Compile checks a selection and makes its program. It reports every fault at once,
// as a fault.List in the order of the fields; each names the path of its field, such
// as hypotheses[1].condition.all_of[0].window.invariant_mass.products[0], the value
// and what is allowed. The program keeps no reference to the selection.
func Compile(s *Selection, table *particle.Table) (*Program, error) {
	c := &compiler{table: table, program: &Program{budget: s.AssignmentBudget}, orders: map[int]order{}}
	c.name("name", s.Name)
	if n := len(s.Hypotheses); n < 1 || n > MaxHypotheses {
		c.fault("hypotheses", strconv.Itoa(n), "1 to "+strconv.Itoa(MaxHypotheses)+" hypotheses")
	}
	if s.AssignmentBudget < 0 || s.AssignmentBudget > MaxBudget {
		c.fault("assignment_budget_count", strconv.FormatInt(s.AssignmentBudget, 10),
			"0 to "+strconv.FormatInt(MaxBudget, 10))
	}
	if s.AssignmentBudget == 0 {
		c.program.budget = DefaultBudget
	}
	names := map[string]int{}
	for i := range s.Hypotheses {
		at := indexed("hypotheses", i)
		h := &s.Hypotheses[i]
		c.unique(at+".name", h.Name, i, names)
		if i < MaxHypotheses {
			c.hypothesis(at, i, h)
		}
	}
	groups := map[string]int{}
	for i := range s.Groups {
		at := indexed("groups", i)
		c.unique(at+".name", s.Groups[i].Name, i, groups)
		c.group(at, s, &s.Groups[i], names)
	}
	if err := c.faults.Err(); err != nil {
		return nil, err
	}
	c.program.setOrder()
	return c.program, nil
}

// setOrder puts the vetoes in front of the other hypotheses.
func (p *Program) setOrder() {
	for _, vetoes := range []bool{true, false} {
		for h := range p.hypotheses {
			if (p.hypotheses[h].role == Veto) == vetoes {
				p.order = append(p.order, h)
			}
		}
	}
}

// compiler makes a program and collects faults.
type compiler struct {
	table   *particle.Table
	program *Program
	faults  fault.List
	// orders say how the assignments of each sound hypothesis are ranked.
	orders map[int]order
}

// order is how the assignments of a hypothesis are ranked.
type order uint8

const (
	byIndex order = iota
	byMasses
	byProbability
)

// fault adds a fault of a field and returns it for further parts.
func (c *compiler) fault(field, value, allowed string) *fault.Error {
	e := fault.New(fault.Invalid, field, value, allowed).In(opCompile)
	c.faults = append(c.faults, e)
	return e
}

// adopt adds the faults of a lower package under a field.
func (c *compiler) adopt(field string, err error) {
	list, ok := err.(fault.List) //nolint:errorlint // what reaction returns is not wrapped
	if !ok {
		one, single := err.(*fault.Error) //nolint:errorlint // as above
		if !single {
			one = &fault.Error{Kind: fault.Invalid, Err: err}
		}
		list = fault.List{one}
	}
	for _, e := range list {
		c.faults = append(c.faults, e.Move(field).In(opCompile))
	}
}

// name checks a name.
func (c *compiler) name(field, name string) {
	good := len(name) >= 1 && len(name) <= MaxNameLength
	for _, r := range name {
		letter := (r >= 'a' && r <= 'z') || (r >= 'A' && r <= 'Z')
		good = good && (letter || (r >= '0' && r <= '9') || r == '-' || r == '_')
	}
	if !good {
		c.fault(field, name, `1 to `+strconv.Itoa(MaxNameLength)+` letters, digits, "-" and "_"`)
	}
}

// unique checks a name that must not stand twice in a list.
func (c *compiler) unique(field, name string, i int, seen map[string]int) {
	c.name(field, name)
	if _, twice := seen[name]; twice {
		c.fault(field, name, "a name that no other has").Because("stands twice")
		return
	}
	seen[name] = i
}

// group checks and compiles a group.
func (c *compiler) group(at string, s *Selection, g *Group, names map[string]int) {
	if len(g.Hypotheses) < 2 {
		c.fault(at+".hypotheses", strconv.Itoa(len(g.Hypotheses)), "at least 2 names of hypotheses")
	}
	var members []int
	for k, name := range g.Hypotheses {
		field := indexed(at+".hypotheses", k)
		i, known := names[name]
		rank, sound := c.orders[i]
		switch {
		case !known:
			c.fault(field, name, "the name of a hypothesis").Because("no such hypothesis")
		case slices.Contains(members, i):
			c.fault(field, name, "each hypothesis once").Because("stands twice")
		case sound && rank == byIndex:
			c.fault(field, name, "a hypothesis with a ranking").Because("its assignments have no rank to compare")
		case sound && len(members) > 0 && c.orders[members[0]] != byIndex && rank != c.orders[members[0]]:
			c.fault(field, name, "hypotheses that are ranked in the same way").
				Because("is ranked otherwise than " + s.Hypotheses[members[0]].Name)
		default:
			members = append(members, i)
		}
	}
	slices.Sort(members)
	c.program.groups = append(c.program.groups, members)
}

// indexed is the path of element i of a list.
func indexed(field string, i int) string { return field + "[" + strconv.Itoa(i) + "]" }

// kind returns the number of a kind of mass, adding it if it is new.
func (c *compiler) kind(k kind) uint16 { return intern(&c.program.kinds, k) }

// intern returns the place of x in a list, adding it if it is new.
func intern[T comparable](list *[]T, x T) uint16 {
	i := slices.Index(*list, x)
	if i < 0 {
		i = len(*list)
		*list = append(*list, x)
	}
	return uint16(i) //nolint:gosec // at most MaxHypotheses times MaxProducts squared over all hypotheses, see tableLimit
}
