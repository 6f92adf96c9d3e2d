package api

import (
	"strconv"
	"strings"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/generation"
	"example.org/kinegate/kinematics/particle"
	"example.org/kinegate/kinematics/reaction"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// Limits of one generation.
const (
	maxChannels = 64
	// maxPoints bounds the points of each table.
	maxPoints = 100_000
	maxName   = 64
)

// generationForm converts a generation to the core's form and collects faults. The core
// names its own fields in the faults it finds; moves tell which of the message they are.
type generationForm struct {
	former

	table   *particle.Table
	config  generation.Config
	outline []*kinegatev1.GenerationOutline
	// first is the reaction of the first channel that could be read, which says what the
	// initial particles are.
	first *reaction.Reaction
	moves []move
}

// move says that a path of the core is a path of the message.
type move struct{ from, to string }

func (g *generationForm) move(from, to string) { g.moves = append(g.moves, move{from, to}) }

// moved returns the faults of the core under the paths of the message: of all moves that
// fit a path the longest decides.
func (g *generationForm) moved(faults fault.List) fault.List {
	var list fault.List
	for _, e := range faults {
		c := *e
		best := move{}
		for _, m := range g.moves {
			rest, fits := strings.CutPrefix(e.Field, m.from)
			if fits && len(m.from) > len(best.from) && (rest == "" || rest[0] == '.' || rest[0] == '[') {
				best = m
				c.Field = m.to + rest
			}
		}
		list = append(list, &c)
	}
	return list
}

// newGenerationForm converts a generation without its detector.
func newGenerationForm(m *kinegatev1.Generation, table *particle.Table) *generationForm {
	g := &generationForm{table: table, config: generation.Config{
		Seed:     uint64(m.GetSeed()), //nolint:gosec // any 64 bits are a seed
		Weighted: m.GetWeighted(),
		Target: generation.Region{
			CentreXM: m.GetTarget().GetCentreXM(), CentreYM: m.GetTarget().GetCentreYM(), CentreZM: m.GetTarget().GetCentreZM(),
			LengthM: m.GetTarget().GetLengthM(), SigmaXM: m.GetTarget().GetSigmaXM(), SigmaYM: m.GetTarget().GetSigmaYM(),
		},
		Accidentals: generation.Accidentals{RateHz: m.GetAccidentals().GetRateHz(), WindowNS: m.GetAccidentals().GetWindowNs()},
	}}
	g.name("name", m.GetName())
	if n := len(m.GetChannels()); n == 0 || n > maxChannels {
		g.need("channels", strconv.Itoa(n)+" channels", "1 to "+strconv.Itoa(maxChannels))
	} else {
		for i, c := range m.GetChannels() {
			g.channel(i, c)
		}
	}
	if g.first != nil {
		g.initialState("initial_state", m.GetInitialState())
		g.polarisation("polarisation", m.GetPolarisation())
	}
	return g
}

// name checks a name that may be empty.
func (f *former) name(field, name string) {
	plain := len(name) <= maxName
	for _, b := range []byte(name) {
		plain = plain && (b == '-' || b == '_' || '0' <= b && b <= '9' || 'a' <= b && b <= 'z' || 'A' <= b && b <= 'Z')
	}
	if !plain {
		f.need(field, strconv.Quote(name), `letters, digits, "-" and "_", at most `+strconv.Itoa(maxName))
	}
}

// found keeps the faults of the core under a path.
func (f *former) found(err error, path func(field string) string) {
	for _, e := range faultsOf(err) {
		f.faults = append(f.faults, e.Move(path(e.Path())))
	}
}

// at is a path that takes the place of the core's own.
func at(path string) func(string) string { return func(string) string { return path } }

// within is a path in front of the core's own.
func within(path string) func(string) string {
	return func(field string) string { return join(path, field) }
}

// channel converts channel i.
func (g *generationForm) channel(i int, m *kinegatev1.GenerationChannel) {
	path := index("channels", i)
	if len(m.GetName()) > maxName {
		g.need(path+".name", strconv.Itoa(len(m.GetName()))+" bytes", "at most "+strconv.Itoa(maxName))
	}
	r := g.reaction(path, m)
	if r == nil {
		return
	}
	c := generation.Channel{Name: m.GetName(), Fraction: 1, Bound: m.GetBound(), Energy: g.energyShape(path+".energy", m.GetEnergy())}
	if c.Name == "" {
		c.Name = r.String()
	}
	if m.Fraction != nil {
		c.Fraction = m.GetFraction()
	}
	if m.Bound != nil && m.GetBound() == 0 {
		g.need(path+".bound", "0", "> 0; left out it is 1")
	}
	g.move(path+".products", path+"."+reactionField(m))
	c.Angle = g.angle(path+".angle", r, m.GetAngle())
	overrides := g.overrides(path, r, m)
	products, remarks, err := generation.ProductsOf(r, m.GetSharpBelowGev(), overrides...)
	if err != nil {
		g.found(err, at(path+"."+reactionField(m)))
		return
	}
	c.Products = products
	g.config.Channels = append(g.config.Channels, c)
	g.outline = append(g.outline, &kinegatev1.GenerationOutline{
		Name: c.Name, Reaction: r.String(), Products: references(r), Remarks: append(remarks, lawRemarks(r, m.GetAngle())...),
	})
}

// reactionField is the field that says what the reaction of a channel is.
func reactionField(m *kinegatev1.GenerationChannel) string {
	if m.GetStructuredReaction() != nil {
		return "structured_reaction"
	}
	return "reaction"
}

// reaction reads the reaction of a channel; nil where that is not possible.
func (g *generationForm) reaction(path string, m *kinegatev1.GenerationChannel) *reaction.Reaction {
	field := path + "." + reactionField(m)
	if (m.GetReaction() == "") == (m.GetStructuredReaction() == nil) {
		g.need(path+".reaction", m.GetReaction(), "exactly one of reaction and structured_reaction")
		return nil
	}
	var r *reaction.Reaction
	var err error
	if m.GetStructuredReaction() != nil {
		if r, err = reaction.New(g.table, reactionSpec(m.GetStructuredReaction())); err != nil {
			g.found(err, within(field))
			return nil
		}
	} else if r, err = reaction.Parse(g.table, m.GetReaction()); err != nil {
		g.found(err, at(field))
		return nil
	}
	switch {
	case len(r.Initial) == 0:
		g.need(field, r.String(), "one particle on the left that decays, or two that react")
		return nil
	case g.first == nil:
		g.first = r
	case !sameInitial(g.first, r):
		g.need(field, r.String(), "the same initial particles as in the other channels")
		return nil
	}
	return r
}

func sameInitial(a, b *reaction.Reaction) bool {
	if len(a.Initial) != len(b.Initial) {
		return false
	}
	for i := range a.Initial {
		if a.Initial[i].Number != b.Initial[i].Number {
			return false
		}
	}
	return true
}

// references are the products in depth-first order: a name, with its count where there
// are several.
func references(r *reaction.Reaction) []string {
	count := map[int64]int{}
	for i := range r.Products {
		count[r.Products[i].Particle.Number]++
	}
	seen := map[int64]int{}
	var list []string
	for i := range r.Products {
		p := &r.Products[i].Particle
		name := p.Name
		if count[p.Number] > 1 {
			name = index(name, seen[p.Number])
		}
		seen[p.Number]++
		list = append(list, name)
	}
	return list
}

// energyShape converts the energy dependence of a channel.
func (g *generationForm) energyShape(path string, m *kinegatev1.EnergyDependence) generation.EnergyShape {
	if m == nil {
		return generation.EnergyShape{}
	}
	switch kind := m.GetKind().(type) {
	case *kinegatev1.EnergyDependence_Constant:
		return generation.EnergyShape{}
	case *kinegatev1.EnergyDependence_PhaseSpace:
		return generation.EnergyShape{Kind: generation.PhaseSpaceRate}
	case *kinegatev1.EnergyDependence_Law:
		g.move(path+".kind", path+".law")
		return generation.EnergyShape{Kind: generation.LawRate}
	case *kinegatev1.EnergyDependence_Table:
		g.move(path+".curve.x", path+".table.sqrt_s_gev")
		g.move(path+".curve.y", path+".table.rates")
		return generation.EnergyShape{
			Kind: generation.CurveRate, Curve: g.curve(path+".table", kind.Table.GetSqrtSGev(), kind.Table.GetRates()),
		}
	}
	g.need(path, "empty", "constant, phase_space, table or law")
	return generation.EnergyShape{}
}

// curve converts a table.
func (g *generationForm) curve(path string, x, y []float64) *generation.Curve {
	if len(x) > maxPoints {
		g.need(path, strconv.Itoa(len(x))+" points", "at most "+strconv.Itoa(maxPoints))
		x, y = x[:2], y[:min(2, len(y))]
	}
	return &generation.Curve{X: x, Y: y}
}

// cosine converts a density of a cosine that the core has at a path of its own.
func (g *generationForm) cosine(from, path string, m *kinegatev1.CosineTable) *generation.Curve {
	if m == nil {
		return nil
	}
	g.move(from+".x", path+".cosines")
	g.move(from+".y", path+".densities")
	return g.curve(path, m.GetCosines(), m.GetDensities())
}

// angle converts the direction of a product.
func (g *generationForm) angle(path string, r *reaction.Reaction, m *kinegatev1.ProductionAngle) *generation.Angle {
	if m == nil {
		return nil
	}
	number, err := r.Product(g.table, m.GetProduct())
	if err != nil {
		g.found(err, at(path+".product"))
		return nil
	}
	a := &generation.Angle{Product: -1}
	for k, top := range r.Top {
		if top == number {
			a.Product = k
		}
	}
	if a.Product < 0 {
		g.need(path+".product", m.GetProduct(), "a product of the reaction itself, not of a decay")
		return nil
	}
	switch polar := m.GetPolar().(type) {
	case *kinegatev1.ProductionAngle_Cosine:
		a.CosTheta = g.cosine(path+".cos_theta", path+".cosine", polar.Cosine)
	case *kinegatev1.ProductionAngle_SlopePerGev2:
		a.SlopePerGeV2 = polar.SlopePerGev2
	case *kinegatev1.ProductionAngle_Law:
		a.Law = g.law(path+".law", r, &r.Products[number].Particle, polar.Law)
	}
	a.Asymmetry = m.GetBeamAsymmetry()
	g.move(path+".asymmetry", path+".beam_asymmetry")
	if azimuth := m.GetAzimuth(); azimuth != nil {
		g.move(path+".phi.x", path+".azimuth.angles_rad")
		g.move(path+".phi.y", path+".azimuth.densities")
		a.Phi = g.curve(path+".azimuth", azimuth.GetAnglesRad(), azimuth.GetDensities())
	}
	return a
}
