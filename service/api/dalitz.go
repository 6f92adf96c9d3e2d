package api

import (
	"context"
	"math"
	"strconv"

	"example.org/kinegate/kinematics/decay"
	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/momentum/breakup"
	"example.org/kinegate/kinematics/reaction"
	"example.org/kinegate/proto/column"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// Bounds of one tracing.
const (
	maxBoundaries     = 64
	maxBands          = 64
	maxBoundaryPoints = 100_000
	standardFineness  = 0.01
	dalitzBodies      = 3
)

// TraceDalitzBoundary gives the boundary of the region of three bodies.
func (s *decayService) TraceDalitzBoundary(
	ctx context.Context, request *kinegatev1.TraceDalitzBoundaryRequest,
) (*kinegatev1.TraceDalitzBoundaryResponse, error) {
	process := processForm{
		name: "process", text: request.GetProcess(), structured: request.GetStructuredProcess(), unset: request.GetForm() == nil,
	}
	r, err := process.read(s.table)
	if err != nil {
		return nil, err
	}
	if len(r.Top) != dalitzBodies || r.Inclusive || len(r.Initial) == 0 {
		return nil, fault.New(fault.Invalid, process.field(), r.String(), "a decay or reaction with three bodies on the right")
	}
	bands, resolution, err := s.dalitzForm(r, request)
	if err != nil {
		return nil, err
	}
	channels, err := dalitzChannels(r, request)
	if err != nil {
		return nil, err
	}
	m := &kinegatev1.TraceDalitzBoundaryResponse{
		Process: r.String(), MassesGev: topMasses(r, kinegatev1.LimitMasses_LIMIT_MASSES_NOMINAL), TableVersion: s.table.Version(),
	}
	for _, number := range r.Top {
		m.Products = append(m.Products, r.Products[number].Name)
	}
	points := 0
	work := s.turns.begin(ctx)
	defer work.end()
	for i := range channels {
		if work.stop() {
			return nil, ctx.Err()
		}
		boundary, err := boundaryMessage(&channels[i], [dalitzBodies]float64(m.GetMassesGev()), bands, resolution)
		if err != nil {
			return nil, err
		}
		points += len(boundary.GetFirstSecondGev2()) / 8 // bytes of a float64
		if points > maxBoundaryPoints {
			return nil, OverLimit(ReplyTooLarge, "the number of points of the boundaries", int64(points), maxBoundaryPoints,
				"ask for fewer energies or a coarser resolution")
		}
		m.Boundaries = append(m.Boundaries, boundary)
	}
	return m, nil
}

// bandForm is one band in the core's form.
type bandForm struct {
	couple      decay.Couple
	massSquared float64
	// swapped tells that the pair was named against the order of the bodies, so that the
	// ends of the chord are those of its other body.
	swapped bool
}

// dalitzForm reads the resolution and the bands.
func (s *decayService) dalitzForm(
	r *reaction.Reaction, request *kinegatev1.TraceDalitzBoundaryRequest,
) (bands []bandForm, resolution float64, err error) {
	f := &former{}
	if resolution = request.GetResolution(); resolution == 0 {
		resolution = standardFineness
	}
	if !(resolution >= 5e-4 && resolution <= 1) { //nolint:mnd // the core's own range
		f.faults = append(f.faults, fault.Number("resolution", resolution, "0, or >= 0.0005 and <= 1"))
	}
	if n := len(request.GetBands()); n > maxBands {
		f.need("bands", strconv.Itoa(n)+" bands", "at most "+strconv.Itoa(maxBands))
		return nil, 0, f.faults.Err()
	}
	for i, band := range request.GetBands() {
		at := index("bands", i)
		if x := band.GetMassSquaredGev2(); math.IsNaN(x) || math.IsInf(x, 0) {
			f.faults = append(f.faults, fault.Number(at+".mass_squared_gev2", x, "a finite number"))
		}
		places := f.places(at+".products", s.table, r, band.GetProducts())
		if len(places) != 2 {
			if len(band.GetProducts()) != 2 {
				f.need(at+".products", strconv.Itoa(len(band.GetProducts()))+" products", "two of the three")
			}
			continue
		}
		outside := dalitzBodies - places[0] - places[1]
		bands = append(bands, bandForm{decay.Couple(outside), band.GetMassSquaredGev2(), places[0] > places[1]}) //nolint:gosec // 0 to 2
	}
	return bands, resolution, f.faults.Err()
}

// dalitzChannels holds the process against every energy asked for.
func dalitzChannels(r *reaction.Reaction, request *kinegatev1.TraceDalitzBoundaryRequest) ([]reaction.Channel, error) {
	energies := request.GetSqrtSGev()
	f := &former{}
	form := f.stateOf(request.GetInitialState())
	switch n := len(energies); {
	case r.IsDecay() && (n > 0 || request.GetInitialState() != nil):
		f.need("sqrt_s_gev", "given", "none for a decay, whose energy is the parent's mass")
	case n > maxBoundaries:
		f.need("sqrt_s_gev", strconv.Itoa(n)+" energies", "at most "+strconv.Itoa(maxBoundaries))
	case n > 0 && request.GetInitialState() != nil:
		f.need("initial_state", "given", "none beside sqrt_s_gev")
	case !r.IsDecay() && n == 0 && request.GetInitialState() == nil:
		f.need("sqrt_s_gev", "empty", "the energies of a reaction, or initial_state")
	}
	if err := f.faults.Err(); err != nil {
		return nil, err
	}
	if len(energies) == 0 {
		channel, err := reaction.Describe(r, form.state)
		if err != nil {
			return nil, form.describeFailure(err)
		}
		return []reaction.Channel{channel}, nil
	}
	var channels []reaction.Channel
	for i, w := range energies {
		channel, err := reaction.Describe(r, reaction.InitialState{Kind: reaction.TotalMass, SqrtS: w})
		if err != nil {
			return nil, moved(err, index("sqrt_s_gev", i))
		}
		channels = append(channels, channel)
	}
	return channels, nil
}

// boundaryMessage traces the boundary of one channel with nominal masses.
func boundaryMessage(
	c *reaction.Channel, masses [dalitzBodies]float64, bands []bandForm, resolution float64,
) (*kinegatev1.DalitzBoundary, error) {
	excess := c.Nominal.Excess
	m := &kinegatev1.DalitzBoundary{SqrtSGev: excess + c.Nominal.Threshold.Mass, ExcessEnergyGev: excess}
	if c.Moving {
		m.SqrtSGev = c.Collision.CentreOfMass().SqrtS
	}
	switch {
	case excess < -c.Bound || !(excess+c.Nominal.Threshold.Mass > 0):
		m.State = kinegatev1.ChannelState_CHANNEL_STATE_CLOSED
		return m, nil
	case excess <= c.Bound:
		m.State = kinegatev1.ChannelState_CHANNEL_STATE_AT_THRESHOLD
		excess = math.Max(excess, 0) // the bound says that no sign is told apart
	default:
		m.State = kinegatev1.ChannelState_CHANNEL_STATE_OPEN
	}
	region, err := decay.NewDalitzAbove(excess, masses)
	if err != nil {
		return nil, err
	}
	for _, x := range []struct {
		couple decay.Couple
		into   **kinegatev1.SquareRange
	}{
		{decay.Couple01, &m.FirstSecond}, {decay.Couple12, &m.SecondThird}, {decay.Couple02, &m.FirstThird},
	} {
		limits, err := region.MassSquaredRange(x.couple)
		if err != nil {
			return nil, err
		}
		*x.into = squareRange(limits)
	}
	points, err := region.Boundary(resolution)
	if err != nil {
		return nil, err
	}
	m01, m12, m02 := make([]float64, len(points)), make([]float64, len(points)), make([]float64, len(points))
	for i, p := range points {
		m01[i], m12[i], m02[i] = p.M01, p.M12, p.M02
	}
	m.FirstSecondGev2, m.SecondThirdGev2, m.FirstThirdGev2 = column.Float64(m01), column.Float64(m12), column.Float64(m02)
	for _, band := range bands {
		m.Bands = append(m.Bands, bandMessage(&region, band))
	}
	return m, nil
}

func squareRange(r breakup.Range) *kinegatev1.SquareRange {
	return &kinegatev1.SquareRange{MinGev2: r.Min, MaxGev2: r.Max}
}

// bandMessage gives the chord of a band, without ends where the region has none.
func bandMessage(region *decay.Dalitz, band bandForm) *kinegatev1.DalitzBand {
	chord, err := region.At(band.couple, band.massSquared)
	if err != nil {
		return &kinegatev1.DalitzBand{}
	}
	from, to := chord.From, chord.To
	if band.swapped {
		from, to = to, from
	}
	return &kinegatev1.DalitzBand{Inside: true, Start: pointMessage(from), End: pointMessage(to)}
}

func pointMessage(p decay.Point) *kinegatev1.DalitzPoint {
	return &kinegatev1.DalitzPoint{FirstSecondGev2: p.M01, SecondThirdGev2: p.M12, FirstThirdGev2: p.M02}
}
