package hall

import (
	"fmt"
	"math"

	kinegate "example.org/kinegate/clients/go"
	"example.org/kinegate/kinematics/detector"
	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/generation"
	"example.org/kinegate/kinematics/num/random"
	"example.org/kinegate/kinematics/particle"
	"example.org/kinegate/kinematics/reaction"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// Event is one measured event with what it truly was.
type Event struct {
	ID      int64
	Objects []kinegate.Object
	Beam    []kinegate.BeamCandidate
	// Channel is the index of the true channel in Mix.
	Channel int
}

// batchSize is how many events are drawn at once, before the pre-trigger.
const batchSize = 2000

// Events makes events of the mixture that pass the pre-trigger, in a random order.
// The same seed gives the same events.
func Events(table *particle.Table, seed uint64, count int) ([]Event, error) {
	events := make([]Event, 0, count)
	mix := Mix()
	for c, channel := range mix {
		wanted := int(math.Round(channel.Percent / 100 * float64(count)))
		if c == len(mix)-1 {
			wanted = count - len(events)
		}
		made, err := channelEvents(table, seed, c, channel, wanted)
		if err != nil {
			return nil, fmt.Errorf("channel %s: %w", channel.Name, err)
		}
		events = append(events, made...)
	}
	// The order is drawn from a stream of its own, by exchanging each event with one
	// at or below it.
	order := random.New(seed, random.Generation, -1)
	for i := len(events) - 1; i > 0; i-- {
		k := order.Below(i + 1)
		events[i], events[k] = events[k], events[i]
	}
	for i := range events {
		events[i].ID = int64(i) + 1
	}
	return events, nil
}

// channelEvents makes events of one channel.
func channelEvents(table *particle.Table, seed uint64, index int, channel Channel, wanted int) ([]Event, error) {
	// Each channel has streams of its own.
	seed += uint64(index) << 32 //nolint:gosec // the index is small
	if channel.Reaction == "" {
		return noiseEvents(seed, index, wanted), nil
	}
	generator, err := newGenerator(table, seed, channel)
	if err != nil {
		return nil, err
	}
	hall, err := detector.New(Detector(seed))
	if err != nil {
		return nil, err
	}
	var truth event.Truth
	var block event.Block
	events := make([]Event, 0, wanted)
	const mostBatches = 1000
	for batch := range int64(mostBatches) {
		if _, err := generator.Fill(batch*batchSize, batchSize, &truth); err != nil {
			return nil, err
		}
		hall.Measure(&truth, &block, nil)
		for i := range block.Events() {
			if len(events) == wanted {
				return events, nil
			}
			if truth.Weight[i] > 0 && triggers(&block, i) {
				events = append(events, measured(&block, i, index))
			}
		}
	}
	return nil, fmt.Errorf("%d events do not give %d that pass the pre-trigger", mostBatches*batchSize, wanted)
}

func newGenerator(table *particle.Table, seed uint64, channel Channel) (*generation.Generator, error) {
	r, err := reaction.Parse(table, channel.Reaction)
	if err != nil {
		return nil, err
	}
	products, _, err := generation.ProductsOf(r, 0)
	if err != nil {
		return nil, err
	}
	proton, err := table.Named("p")
	if err != nil {
		return nil, err
	}
	return generation.New(generation.Config{
		Seed:    seed,
		Initial: Initial(proton.Mass),
		Channels: []generation.Channel{{
			Name: channel.Name, Fraction: 1, Products: products,
			Energy: generation.EnergyShape{Kind: generation.PhaseSpaceRate},
		}},
		Target:      Target(),
		Accidentals: Accidentals(),
	})
}

// triggers is the pre-trigger: two clusters or two tracks.
func triggers(block *event.Block, i int) bool {
	clusters, tracks := 0, 0
	first, end := block.Objects(i)
	for row := first; row < end; row++ {
		switch block.Class[row] {
		case event.Photon:
			clusters++
		case event.Positive, event.Negative:
			if block.MeasuredMask(row) == event.AllMeasured {
				tracks++
			}
		case event.Neutral:
		}
	}
	return clusters >= 2 || tracks >= 2
}

// measured copies event i of a block in momentum and angles.
func measured(block *event.Block, i, channel int) Event {
	e := Event{Channel: channel, Beam: []kinegate.BeamCandidate{}}
	first, end := block.Objects(i)
	x := &block.Coordinates.Columns
	for row := first; row < end; row++ {
		e.Objects = append(e.Objects, kinegate.Object{
			Values:   [4]float64{x[0][row], x[1][row], x[2][row]},
			Class:    kinegatev1.ObjectClass(block.Class[row]),
			Species:  block.SpeciesMask(row),
			Measured: block.MeasuredMask(row),
		})
	}
	for row, last := block.Candidates(i); row < last; row++ {
		e.Beam = append(e.Beam, kinegate.BeamCandidate{
			Energy: block.Beam.EnergyGeV[row], Sigma: block.Beam.SigmaGeV[row], Time: block.Beam.TimeNS[row],
		})
	}
	return e
}

// noiseEvents makes events of two to four clusters that have nothing to do with one
// another, with one beam candidate at a random time.
func noiseEvents(seed uint64, channel, count int) []Event {
	const meanGeV, thresholdGeV = 0.15, 0.03
	calorimeter := Detector(seed).Calorimeter.Theta
	events := make([]Event, 0, count)
	for i := range count {
		s := random.New(seed, random.Generation, int64(i))
		e := Event{Channel: channel}
		for range 2 + s.Below(3) {
			low, high := math.Cos(calorimeter.MaxRad), math.Cos(calorimeter.MinRad)
			energy := thresholdGeV + meanGeV*s.Exponential()
			theta := math.Acos(low + (high-low)*s.Uniform())
			phi := math.Pi * (2*s.Uniform() - 1)
			e.Objects = append(e.Objects, kinegate.Object{
				Values: [4]float64{energy, theta, phi}, Class: kinegatev1.ObjectClass_OBJECT_CLASS_PHOTON,
			})
		}
		e.Beam = []kinegate.BeamCandidate{{
			Energy: LowGeV + (HighGeV-LowGeV)*s.Uniform(), Sigma: (HighGeV - LowGeV) / TaggerCount / math.Sqrt(12),
			Time: TaggerWidthNs * (s.Uniform() - 0.5),
		}}
		events = append(events, e)
	}
	return events
}
