package hall

import (
	"context"
	"errors"
	"fmt"
	"io"
	"math"

	kinegate "example.org/kinegate/clients/go"
	"example.org/kinegate/kinematics/num/random"
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

// Events asks a server for events of the mixture, keeps those that pass the pre-trigger and
// puts them in a random order. The same seed gives the same events.
func Events(ctx context.Context, client kinegatev1.GenerationServiceClient, seed uint64, count int) ([]Event, error) {
	events := make([]Event, 0, count)
	mix := Mix()
	for c, channel := range mix {
		wanted := int(math.Round(channel.Percent / 100 * float64(count)))
		if c == len(mix)-1 {
			wanted = count - len(events)
		}
		// Each channel has streams of its own.
		own := seed + uint64(c)<<32
		if channel.Reaction == "" {
			events = append(events, noiseEvents(own, c, wanted)...)
			continue
		}
		made, err := channelEvents(ctx, client, generation(int64(own), channel), c, wanted) //nolint:gosec // any 64 bits are a seed
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

// channelEvents takes events of one channel from the server until enough of them have
// passed the pre-trigger, and gives the rest up.
func channelEvents(
	ctx context.Context, client kinegatev1.GenerationServiceClient, sample *kinegatev1.Generation, channel, wanted int,
) ([]Event, error) {
	ctx, cancel := context.WithCancel(ctx)
	defer cancel()
	const most = 2_000_000
	stream, err := client.GenerateEvents(ctx, &kinegatev1.GenerateEventsRequest{
		Generation: sample, EventCount: most, WithoutTruth: true,
	})
	if err != nil {
		return nil, err
	}
	events := make([]Event, 0, wanted)
	for len(events) < wanted {
		frame, err := stream.Recv()
		if errors.Is(err, io.EOF) {
			return nil, fmt.Errorf("%d events do not give %d that pass the pre-trigger", most, wanted)
		}
		if err != nil {
			return nil, err
		}
		if frame.GetBlock() == nil {
			continue
		}
		_, measured, err := kinegate.ReadEvents(frame.GetBlock().GetEvents())
		if err != nil {
			return nil, err
		}
		for _, e := range measured {
			if len(events) < wanted && triggers(e.Objects) {
				events = append(events, Event{Channel: channel, Objects: e.Objects, Beam: e.Beam})
			}
		}
	}
	return events, nil
}

// triggers is the pre-trigger: two clusters or two tracks.
func triggers(objects []kinegate.Object) bool {
	const tracked = 7 // momentum and direction, where a recoil detector sees a direction only
	clusters, tracks := 0, 0
	for _, o := range objects {
		switch o.Class {
		case kinegatev1.ObjectClass_OBJECT_CLASS_PHOTON:
			clusters++
		case kinegatev1.ObjectClass_OBJECT_CLASS_POSITIVE, kinegatev1.ObjectClass_OBJECT_CLASS_NEGATIVE:
			if o.Measured == tracked {
				tracks++
			}
		case kinegatev1.ObjectClass_OBJECT_CLASS_NEUTRAL, kinegatev1.ObjectClass_OBJECT_CLASS_UNSPECIFIED:
		}
	}
	return clusters >= 2 || tracks >= 2
}

// noiseEvents makes events of two to four clusters that have nothing to do with one
// another, with one beam candidate at a random time.
func noiseEvents(seed uint64, channel, count int) []Event {
	const meanGeV, thresholdGeV = 0.15, 0.03
	calorimeter := Detector().GetCalorimeter().GetTheta()
	events := make([]Event, 0, count)
	for i := range count {
		s := random.New(seed, random.Generation, int64(i))
		e := Event{Channel: channel}
		for range 2 + s.Below(3) {
			low, high := math.Cos(calorimeter.GetMaxRad()), math.Cos(calorimeter.GetMinRad())
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
