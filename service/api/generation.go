package api

import (
	"context"
	"errors"
	"strconv"

	"google.golang.org/grpc"

	"example.org/kinegate/kinematics"
	"example.org/kinegate/kinematics/detector"
	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/generation"
	"example.org/kinegate/kinematics/particle"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/api/canonical"
)

// generationService makes simulated events.
type generationService struct {
	kinegatev1.UnsafeGenerationServiceServer

	deps  Deps
	turns *turns
}

// GenerateEvents streams a slice of a sample.
func (s *generationService) GenerateEvents(
	request *kinegatev1.GenerateEventsRequest, stream grpc.ServerStreamingServer[kinegatev1.GenerateEventsResponse],
) error {
	if err := checkSlice(request); err != nil {
		return err
	}
	c, err := s.compile(stream.Context(), request.GetGeneration())
	if err != nil {
		return In("generation", err)
	}
	if request.GetWithoutTruth() && c.detector == nil {
		return fault.New(fault.Invalid, "without_truth", "true", "false without a detector: nothing would be left")
	}
	digest, err := canonical.Digest(request, s.deps.Table.Digest())
	if err != nil {
		return fault.New(fault.Unsupported, "", "", "").Because(err.Error())
	}
	return newGenerationStream(s, c, request, stream).run(s.header(c, request, digest))
}

// checkSlice refuses events that no sample has.
func checkSlice(request *kinegatev1.GenerateEventsRequest) error {
	var faults fault.List
	first, count := request.GetFirstEvent(), request.GetEventCount()
	if first < 0 {
		faults = append(faults, fault.New(fault.Invalid, "first_event", strconv.FormatInt(first, 10), ">= 0"))
	}
	if count < 0 || first >= 0 && first+count < 0 {
		faults = append(faults, fault.New(fault.Invalid, "event_count", strconv.FormatInt(count, 10),
			">= 0, and first_event + event_count within 63 bits"))
	}
	if n := request.GetBlockEventCount(); n < 0 || n > event.MaxEvents {
		faults = append(faults, fault.New(fault.Invalid, "block_event_count", strconv.FormatInt(n, 10),
			"0 to "+strconv.Itoa(event.MaxEvents)))
	}
	return faults.Err()
}

func (s *generationService) header(
	c *compiledGeneration, request *kinegatev1.GenerateEventsRequest, digest string,
) *kinegatev1.GenerationHeader {
	return &kinegatev1.GenerationHeader{
		RequestDigest: digest, GenerationDigest: c.digest, Generator: "kinegate", Version: s.deps.Version,
		NumericsVersion: kinematics.NumericsVersion, TableVersion: s.deps.Table.Version(), Seed: request.GetGeneration().GetSeed(),
		FirstEvent: request.GetFirstEvent(), EventCount: request.GetEventCount(), Channels: c.outline,
	}
}

// Draws of MeasureBound.
const (
	defaultDraws, maxDraws = 100_000, 10_000_000
	drawsPerLook           = 16
)

// MeasureBound measures the weights of a channel.
func (s *generationService) MeasureBound(
	ctx context.Context, request *kinegatev1.MeasureBoundRequest,
) (*kinegatev1.MeasureBoundResponse, error) {
	draws := request.GetDrawCount()
	if draws < 0 || draws > maxDraws {
		return nil, fault.New(fault.Invalid, "draw_count", strconv.FormatInt(draws, 10), "0 to "+strconv.Itoa(maxDraws))
	}
	if draws == 0 {
		draws = defaultDraws
	}
	c, err := s.compile(ctx, request.GetGeneration())
	if err != nil {
		return nil, In("generation", err)
	}
	channel := int(request.GetChannelIndex())
	if channel < 0 || channel >= c.generator.Channels() {
		return nil, fault.New(fault.Invalid, "channel_index", strconv.Itoa(channel), "0 to "+strconv.Itoa(c.generator.Channels()-1))
	}
	response := &kinegatev1.MeasureBoundResponse{DrawCount: draws}
	w := c.generator.NewWorker()
	work := s.turns.begin(ctx)
	defer work.end()
	w.Stop = work.stop
	sum := 0.0
	for i := range draws {
		if i%drawsPerLook == 0 && work.stop() {
			break
		}
		x := w.Fraction(channel, i)
		response.Largest = max(response.GetLargest(), x)
		sum += x
	}
	response.Mean = sum / float64(draws)
	return response, ctx.Err()
}

// CheckGeneration reports every fault of a generation.
func (s *generationService) CheckGeneration(
	ctx context.Context, request *kinegatev1.CheckGenerationRequest,
) (*kinegatev1.CheckGenerationResponse, error) {
	response := &kinegatev1.CheckGenerationResponse{}
	var c *compiledGeneration
	compile := func() (err error) {
		c, err = s.compile(ctx, response.GetGeneration())
		return err
	}
	var err error
	switch form := request.GetForm().(type) {
	case *kinegatev1.CheckGenerationRequest_Yaml:
		response.Generation = &kinegatev1.Generation{}
		response.Faults, err = faultsOrError(readFile(form.Yaml, response.GetGeneration(), compile))
	case *kinegatev1.CheckGenerationRequest_Generation:
		response.Generation = form.Generation
		response.Faults, err = faultsOrError(compile())
	default:
		err = fault.New(fault.Invalid, "form", "empty", "generation or yaml")
	}
	if err != nil {
		return nil, err
	}
	if len(response.GetFaults()) == 0 {
		response.GenerationDigest, response.Channels = c.digest, c.outline
	}
	return response, nil
}

// CheckDetector reports every fault of a detector.
func (s *generationService) CheckDetector(
	_ context.Context, request *kinegatev1.CheckDetectorRequest,
) (*kinegatev1.CheckDetectorResponse, error) {
	response := &kinegatev1.CheckDetectorResponse{}
	compile := func() error {
		if _, err := canonical.Append(nil, response.GetDetector()); err != nil {
			return fault.New(fault.Unsupported, "", "", "").Because(err.Error())
		}
		_, faults := newDetector(0, "", response.GetDetector())
		return faults.Err()
	}
	var err error
	switch form := request.GetForm().(type) {
	case *kinegatev1.CheckDetectorRequest_Yaml:
		response.Detector = &kinegatev1.Detector{}
		response.Faults, err = faultsOrError(readFile(form.Yaml, response.GetDetector(), compile))
	case *kinegatev1.CheckDetectorRequest_Detector:
		response.Detector = form.Detector
		response.Faults, err = faultsOrError(compile())
	default:
		err = fault.New(fault.Invalid, "form", "empty", "detector or yaml")
	}
	if err != nil {
		return nil, err
	}
	return response, nil
}

// faultsOrError converts the faults of the core that an error holds, and returns any
// other error.
func faultsOrError(err error) ([]*kinegatev1.FieldFault, error) {
	if faults := faultsOf(err); len(faults) > 0 {
		return fieldFaults(faults), nil
	}
	return nil, err
}

// compiledGeneration is a generation ready to make events. It is immutable.
type compiledGeneration struct {
	generator *generation.Generator
	detector  *detector.Detector // nil for the truth alone
	displaced bool               // the detector finds displaced vertices
	digest    string
	outline   []*kinegatev1.GenerationOutline
}

// compile checks a generation as a whole. The error is a fault.List where the generation
// is at fault.
func (s *generationService) compile(ctx context.Context, m *kinegatev1.Generation) (*compiledGeneration, error) {
	digest, err := canonical.Digest(m, s.deps.Table.Digest())
	if err != nil {
		return nil, fault.New(fault.Unsupported, "", "", "").Because(err.Error())
	}
	work := s.turns.begin(ctx)
	if err := work.take(); err != nil {
		return nil, err
	}
	defer work.end()
	c, faults := compileGeneration(m, s.deps.Table, work.stop)
	if err := ctx.Err(); err != nil {
		return nil, err
	}
	if err := faults.Err(); err != nil {
		return nil, err
	}
	c.digest = digest
	return c, nil
}

// compileGeneration gives up, with whatever it found, when stop returns true.
func compileGeneration(m *kinegatev1.Generation, table *particle.Table, stop func() bool) (*compiledGeneration, fault.List) {
	form := newGenerationForm(m, table)
	c := &compiledGeneration{outline: form.outline, displaced: m.GetDetector().GetDisplaced() != nil}
	faults := form.faults
	if m.GetDetector() != nil {
		var found fault.List
		c.detector, found = newDetector(form.config.Seed, "detector", m.GetDetector())
		faults = append(faults, found...)
	}
	if len(form.config.Channels) < len(m.GetChannels()) || form.config.Initial == nil {
		return nil, faults // what is left is not what was asked for
	}
	var err error
	if len(faults) > 0 {
		err = form.config.Validate() // no need to prepare anything
	} else {
		c.generator, err = generation.NewUntil(form.config, stop)
		if errors.Is(err, generation.ErrStopped) {
			return nil, nil // the caller knows
		}
	}
	faults = append(faults, beyond(faults, form.moved(faultsOf(err)))...)
	if len(faults) > 0 {
		return nil, faults
	}
	for i, o := range c.outline {
		o.BranchingFraction = c.generator.Branching(i)
		if nominal, below := c.generator.ThroughWidth(i); below {
			o.Remarks = append(o.Remarks, "below sqrt(s) = "+strconv.FormatFloat(nominal, 'g', 7, 64)+
				" GeV, the threshold of the nominal masses, it is open through widths alone, and made at the same rate; "+
				"phase_space of its energy, in a generation file, lowers the rate there")
		}
	}
	return c, nil
}

// newDetector makes a detector; faults have paths below path, which may be empty.
func newDetector(seed uint64, path string, m *kinegatev1.Detector) (*detector.Detector, fault.List) {
	f := &former{}
	config := f.detectorForm(path, m)
	config.Seed = seed
	d, err := detector.New(config)
	f.found(err, within(path))
	return d, f.faults
}
