package generation

import (
	"errors"
	"math"
	"slices"
	"strconv"

	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/num/random"
)

// MaxAttempts bounds the redraws of one event. An event that uses them up gets
// weight 0 and is counted as exhausted.
const MaxAttempts = 100_000

// Generator makes the events of one configuration. It is immutable and may be
// used by any number of goroutines at once.
type Generator struct {
	config  Config
	source  source
	plans   []*plan
	mixture []float64 // running sums of the fractions
	scan    *scan     // of PhaseSpaceRate
}

// New prepares a generator. It returns a fault.List with every fault of the
// configuration, or a BelowThreshold fault for a channel that is closed at
// every energy of the beam.
func New(config Config) (*Generator, error) { return NewUntil(config, func() bool { return false }) }

// ErrStopped ends a preparation that its stop ended.
var ErrStopped = errors.New("generation: stopped while preparing")

// NewUntil is New with a stop that is asked every few milliseconds, as preparing many
// channels with wide spectra and densities can take seconds; when it returns true the
// error is ErrStopped.
func NewUntil(config Config, stop func() bool) (*Generator, error) {
	switch err := config.validate(stop); {
	case stop():
		return nil, ErrStopped
	case err != nil:
		return nil, err
	}
	g := &Generator{config: config, source: config.Initial.source()}
	fractions := make([]float64, 0, len(config.Channels))
	var closed fault.List
	for i := range config.Channels {
		channel := &config.Channels[i]
		fractions = append(fractions, channel.Fraction)
		p, ok := newPlan(channel, stop)
		if !ok {
			return nil, ErrStopped
		}
		g.plans = append(g.plans, p)
		if f := g.open(p); f != nil {
			f.Field = "channels[" + strconv.Itoa(i) + "]"
			f.Value = channel.Name
			closed = append(closed, f)
			continue
		}
		if !g.prepare(p, stop) {
			return nil, ErrStopped
		}
	}
	g.scan = nil // it has served
	if len(closed) > 0 {
		return nil, closed
	}
	if len(fractions) > 1 {
		g.mixture = cumulate(fractions)
	}
	return g, nil
}

// sevenDigits is a number for a sentence.
func sevenDigits(x float64) string { return strconv.FormatFloat(x, 'g', 7, 64) }

// open sets the plan's threshold, or returns the fault of a closed channel.
func (g *Generator) open(p *plan) *fault.Error {
	_, high := g.source.limits()
	if !(high > p.root.floors) {
		return fault.New(fault.BelowThreshold, "", "", "").In("generation.New").Because(
			"the channel is closed: sqrt(s) reaches " + sevenDigits(high) + " GeV, the lightest final state needs " +
				sevenDigits(p.root.floors) + " GeV, " + sevenDigits(p.root.floors-high) + " GeV more" + limited(p.channel.Products))
	}
	p.threshold = p.root.floors
	return nil
}

// prepare computes what the plan needs of the energies, and returns false when it was
// stopped.
func (g *Generator) prepare(p *plan, stop func() bool) bool {
	low, high := g.source.limits()
	low = max(low, p.threshold)
	if !p.root.sharp {
		p.root.roof = newRoof(p.root, p.nodes, high, stop)
	}
	p.rate = p.channel.Energy.Curve
	if p.channel.Energy.Kind == LawRate {
		p.rate = lawCurve(p.channel.Angle.Law, leptonOf(p.channel, g.config.Initial), low, high, stop)
	}
	if p.rate != nil {
		p.rateTop = slices.Max(p.rate.Y)
	}
	if p.angle != nil {
		p.angle.analyse(g.config.Polarisation, p.channel.Angle.Asymmetry)
	}
	if p.channel.Energy.Kind == PhaseSpaceRate {
		if g.scan == nil {
			g.scan = newScan(g.source, stop)
		}
		if g.scan == nil {
			return false
		}
		p.joint = g.scan.jointCeiling(p, low, high)
	}
	if g.config.Weighted && p.channel.Energy.Kind != PhaseSpaceRate && low < high {
		p.norm = newVolume(p.root.parts(p.nodes), centrifugal{}, high, stop)
	}
	return !stop()
}

// scan is a sample of the energies that can occur, the same for every channel.
type scan struct {
	m, flux []float64
	// best is the flux factor of the highest energy of another, smaller sample.
	best float64
}

const scanned, scannedForEnd = 4000, 1000

// newScan draws the sample, and returns nil when it was stopped.
func newScan(from source, stop func() bool) *scan {
	made := &scan{}
	s := random.New(0, random.Bounds, 0)
	for i := range scanned {
		if i%16 == 0 && stop() { // some spectra take long
			return nil
		}
		st := from.draw(&s)
		made.m, made.flux = append(made.m, st.m), append(made.flux, st.flux())
	}
	s.Start(1)
	var best state
	for i := range scannedForEnd {
		if i%16 == 0 && stop() {
			return nil
		}
		if st := from.draw(&s); st.m > best.m {
			best = st
		}
	}
	made.best = best.flux()
	return made
}

// jointCeiling bounds weight over flux for all energies: its largest value on a
// sample of the energies that can occur, two per cent up.
func (s *scan) jointCeiling(p *plan, low, high float64) float64 {
	top := 0.0
	for i, m := range s.m {
		if m > low {
			top = max(top, p.root.ceiling(m)/s.flux[i])
		}
	}
	// The ends, which a sample misses: the flux factor of a beam is smooth, so
	// that of the nearest sampled state serves for the weight at the end.
	return 1.02 * max(top, p.root.ceiling(high)/s.best)
}

// Channels is the number of channels.
func (g *Generator) Channels() int { return len(g.plans) }

// Branching is the product of the branching fractions of a channel's decays,
// which weighted events carry.
func (g *Generator) Branching(channel int) float64 { return g.plans[channel].branching }

// ThroughWidth tells whether a channel at a constant rate is made below the threshold
// of its nominal masses too, through the widths alone, and what sqrt(s) in GeV that is.
func (g *Generator) ThroughWidth(channel int) (nominal float64, below bool) {
	p := g.plans[channel]
	for i := range p.channel.Products {
		nominal += p.channel.Products[i].MassGeV
	}
	low, _ := g.source.limits()
	return nominal, p.channel.Energy.Kind == ConstantRate && max(low, p.threshold) < nominal
}

// Stats counts what Fill did. Stats of slices add up.
type Stats struct {
	// Events made, and how many of them of weight 0.
	Events, Empty int64
	// Attempts of the production, redraws included.
	Attempts int64
	// Overflows: events above the unweighting bound, or the bound of a decay's density,
	// and the largest weight over its bound among them.
	Overflows int64
	Largest   float64
	// Exhausted events used MaxAttempts up.
	Exhausted int64
	// SumWeights and SumSquares of the events' weights.
	SumWeights, SumSquares float64
}

// Effective is the number of unweighted events of the same statistical power,
// (sum w)^2 / sum w^2.
func (s *Stats) Effective() float64 {
	if s.SumSquares == 0 {
		return 0
	}
	return s.SumWeights * s.SumWeights / s.SumSquares
}

// Efficiency is the number of events that are not empty over the attempts.
func (s *Stats) Efficiency() float64 {
	if s.Attempts == 0 {
		return 0
	}
	return float64(s.Events-s.Empty) / float64(s.Attempts)
}

// Add adds the counts of another slice.
func (s *Stats) Add(other Stats) {
	s.Events += other.Events
	s.Empty += other.Empty
	s.Attempts += other.Attempts
	s.Overflows += other.Overflows
	s.Largest = max(s.Largest, other.Largest)
	s.Exhausted += other.Exhausted
	s.SumWeights += other.SumWeights
	s.SumSquares += other.SumSquares
}

// Fill replaces the content of truth by the events first to first + count - 1.
// Domain: count >= 0, first + count - 1 within int64. Apart from the memory of
// truth, which is kept between calls, it allocates a fixed amount per call.
func (g *Generator) Fill(first int64, count int, truth *event.Truth) (Stats, error) {
	truth.Reset()
	if count < 0 || count > 0 && first > math.MaxInt64-int64(count)+1 {
		return Stats{}, fault.New(fault.Invalid, "event_count", strconv.Itoa(count), ">= 0, the last event's number within 64 bits").In("generation.Fill")
	}
	w := g.NewWorker()
	for i := range count {
		w.Event(first+int64(i), truth)
	}
	return w.stats, nil
}

// MeasureBound draws n points of a channel and returns the largest and the mean
// weight as fractions of the analytic ceiling. The largest, with some room
// above, serves as the channel's Bound: the efficiency is then mean over bound.
func (g *Generator) MeasureBound(channel, n int) (largest, mean float64, err error) {
	if channel < 0 || channel >= len(g.plans) {
		return 0, 0, fault.New(fault.Invalid, "channel", strconv.Itoa(channel), "0 to "+strconv.Itoa(len(g.plans)-1)).In("generation.MeasureBound")
	}
	if n < 1 {
		return 0, 0, fault.New(fault.Invalid, "event_count", strconv.Itoa(n), ">= 1").In("generation.MeasureBound")
	}
	w := g.NewWorker()
	sum := 0.0
	for i := range n {
		f := w.Fraction(channel, int64(i))
		largest = max(largest, f)
		sum += f
	}
	return largest, sum / float64(n), nil
}
