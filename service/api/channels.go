package api

import (
	"context"
	"fmt"
	"strconv"
	"sync"

	"google.golang.org/protobuf/proto"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/particle"
	"example.org/kinegate/kinematics/reaction"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// Sizes of a page of channels.
const (
	defaultChannels = 100
	largestChannels = 1000
)

// ListOpenChannels returns one page of the open channels.
func (s *reactionService) ListOpenChannels(
	ctx context.Context, request *kinegatev1.ListOpenChannelsRequest,
) (*kinegatev1.ListOpenChannelsResponse, error) {
	size, err := pageSize(request.GetPageSize(), defaultChannels, largestChannels)
	if err != nil {
		return nil, err
	}
	search, form, err := s.search(request)
	if err != nil {
		return nil, err
	}
	binding, err := s.searchBinding(request)
	if err != nil {
		return nil, err
	}
	work := s.turns.begin(ctx)
	defer work.end()
	channels := s.last.get(binding)
	if channels == nil {
		search.Stop = work.stop
		if channels, err = reaction.ListOpen(s.table, search); err != nil {
			return nil, form.describeFailure(err)
		}
		if err := ctx.Err(); err != nil {
			return nil, err
		}
	}
	from, err := binding.position(request.GetPageToken(), channels.Len())
	if err != nil {
		return nil, err
	}
	initial := channels.Collision()
	m := &kinegatev1.ListOpenChannelsResponse{
		ChannelCount: int64(channels.Len()), CompleteBodyCount: int64(channels.Bodies), Complete: channels.Complete,
		CentreOfMass: collisionMessage(&initial), Frame: form.state.Frame(), TableVersion: s.table.Version(),
	}
	for _, p := range channels.Particles() {
		m.Products = append(m.Products, p.Name)
	}
	if channels.Next != nil {
		m.NextToOpen = openChannelMessage(channels.Next)
	}
	to := min(from+size, channels.Len())
	for i := from; i < to; i++ {
		if work.stop() {
			return nil, ctx.Err()
		}
		channel := channels.At(i)
		m.Channels = append(m.Channels, openChannelMessage(&channel))
	}
	if to < channels.Len() {
		m.NextPageToken = binding.token(to)
		s.last.put(binding, channels)
	}
	return m, nil
}

// search converts the request.
func (s *reactionService) search(request *kinegatev1.ListOpenChannelsRequest) (reaction.Search, stateForm, error) {
	f := &former{}
	form := f.stateOf(request.GetInitialState())
	if request.GetInitialState() == nil {
		f.need("initial_state", "", "beam_on_target, two_beams, two_four_momenta or sqrt_s_gev")
	}
	search := reaction.Search{
		State: form.state, SpinAndC: request.GetWithSpinCBose(),
		MaxBodies: f.bodies("max_body_count", request.GetMaxBodyCount()),
	}
	if search.MinBodies = f.bodies("min_body_count", request.GetMinBodyCount()); request.GetMinBodyCount() == 0 {
		search.MinBodies = min(search.MinBodies, search.MaxBodies)
	}
	if search.MinBodies > search.MaxBodies {
		f.need("min_body_count", strconv.Itoa(search.MinBodies), "at most max_body_count, "+strconv.Itoa(search.MaxBodies))
	}
	if n := len(request.GetInitialParticles()); n != 2 {
		f.need("initial_particles", strconv.Itoa(n)+" names", "two names")
	}
	if n := len(request.GetProducts()); n > reaction.MaxListed {
		f.need("products", strconv.Itoa(n)+" names", "at most "+strconv.Itoa(reaction.MaxListed))
	}
	for i, law := range request.GetIgnoredLaws() {
		value := enumForm[uint8](f, index("ignored_laws", i), law)
		if value == 0 {
			f.need(index("ignored_laws", i), law.String(), "a law")
			continue
		}
		// The contract's laws are those of the core in its order, from 1.
		search.Ignored = search.Ignored.With(reaction.Law(value - 1))
	}
	if err := f.faults.Err(); err != nil {
		return search, form, err
	}
	initial, err := s.named("initial_particles", request.GetInitialParticles())
	if err != nil {
		return search, form, err
	}
	search.First, search.Second = initial[0], initial[1]
	search.Particles, err = s.named("products", request.GetProducts())
	return search, form, err
}

// bodies reads a number of bodies; 0 stands for 2.
func (f *former) bodies(field string, n int64) int {
	const standard = 2
	switch {
	case n == 0:
		return standard
	case n < 0 || n > reaction.MaxBodies:
		f.need(field, strconv.Itoa(int(n)), "0 to "+strconv.Itoa(reaction.MaxBodies))
		return standard
	}
	return int(n)
}

// named looks particles up; all unknown names are reported.
func (s *reactionService) named(field string, names []string) ([]particle.Particle, error) {
	var list []particle.Particle
	var faults fault.List
	for i, name := range names {
		p, err := s.table.Named(name)
		if err != nil {
			faults = append(faults, &fault.Error{
				Kind: fault.NotFound, Field: index(field, i), Value: name, Nearest: s.table.Nearest(name),
			})
			continue
		}
		list = append(list, p)
	}
	return list, faults.Err()
}

// searchBinding ties page tokens to everything but the page.
func (s *reactionService) searchBinding(request *kinegatev1.ListOpenChannelsRequest) (pageArguments, error) {
	rest := proto.CloneOf(request)
	rest.PageSize, rest.PageToken = 0, ""
	wire, err := proto.MarshalOptions{Deterministic: true}.Marshal(rest)
	if err != nil {
		return pageArguments{}, fmt.Errorf("request of a page: %w", err)
	}
	return pageBinding("ListOpenChannels", s.table.Digest(), string(wire)), nil
}

func openChannelMessage(c *reaction.OpenChannel) *kinegatev1.OpenChannel {
	m := &kinegatev1.OpenChannel{
		State: stateMessage(c.State), ExcessEnergyGev: c.Excess, Threshold: thresholdMessage(&c.Threshold),
	}
	for _, p := range c.Particles {
		m.Products = append(m.Products, p.Name)
	}
	return m
}

// lastSearch keeps the channels of the last search with more than one page, so that a
// walk through the pages searches once. They are at most 800,000 entries of 24 bytes.
type lastSearch struct {
	mu      sync.Mutex
	binding pageArguments
	found   *reaction.Channels
}

// get returns the channels of a search, or nil.
func (l *lastSearch) get(binding pageArguments) *reaction.Channels {
	l.mu.Lock()
	defer l.mu.Unlock()
	if l.found == nil || l.binding != binding {
		return nil
	}
	return l.found
}

// put keeps the channels of a search.
func (l *lastSearch) put(binding pageArguments, found *reaction.Channels) {
	l.mu.Lock()
	defer l.mu.Unlock()
	l.binding, l.found = binding, found
}
