package api

import (
	"context"
	"strconv"
	"time"

	"google.golang.org/grpc"

	"example.org/kinegate/kinematics/detector"
	"example.org/kinegate/kinematics/event"
	"example.org/kinegate/kinematics/generation"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// generationBlockBytes bounds an encoded block of simulated events.
const generationBlockBytes = 256 << 10

// progressPeriod is the time without a block after which a stream gives word of its
// progress.
const progressPeriod = time.Second

// generatedPerTurn is how many events are made in one turn: ordinary ones take some ten
// microseconds.
const generatedPerTurn = 32

// generationStream is one slice on its way.
type generationStream struct {
	service  *generationService
	stream   grpc.ServerStreamingServer[kinegatev1.GenerateEventsResponse]
	worker   *generation.Worker
	detector *detector.Detector

	next, end int64
	// taken is the first event that the caller may not have.
	taken     int64
	perBlock  int
	truthless bool
	displaced bool
	lastSent  time.Time
	work      *spell
	seen      int64

	// made is the block being made, sending the one on its way, whose memory is its own
	// until sent says so; sent is nil when nothing is on its way.
	made, sending *generatedBlock
	sent          chan error
	// largest is the size of the largest event so far.
	largest int
}

// generatedBlock is the memory of one block.
type generatedBlock struct {
	truth  event.Truth
	block  event.Block
	labels detector.Labels
	writer columnWriter
}

func newGenerationStream(
	s *generationService, c *compiledGeneration, request *kinegatev1.GenerateEventsRequest,
	stream grpc.ServerStreamingServer[kinegatev1.GenerateEventsResponse],
) *generationStream {
	g := &generationStream{
		service: s, stream: stream, worker: c.generator.NewWorker(), detector: c.detector,
		next: request.GetFirstEvent(), end: request.GetFirstEvent() + request.GetEventCount(),
		perBlock: int(request.GetBlockEventCount()), truthless: request.GetWithoutTruth(), displaced: c.displaced,
		made: &generatedBlock{}, sending: &generatedBlock{}, taken: request.GetFirstEvent(),
	}
	if g.perBlock == 0 {
		g.perBlock = event.MaxEvents
	}
	g.work = s.turns.begin(stream.Context())
	// One event with a bound far too high takes a tenth of a second and more.
	g.worker.Stop = g.work.stop
	return g
}

// run sends the header, the blocks and the summary. One block is made while the one
// before is on its way, and no more: the next waits until the caller had room for that.
func (g *generationStream) run(header *kinegatev1.GenerationHeader) error {
	err := g.frames(header)
	if settled := g.settle(); err == nil {
		err = settled
	}
	return err
}

func (g *generationStream) frames(header *kinegatev1.GenerationHeader) error {
	if err := g.send(&kinegatev1.GenerateEventsResponse{Frame: &kinegatev1.GenerateEventsResponse_Header{Header: header}}); err != nil {
		return err
	}
	first := g.next
	for g.next < g.end {
		if err := g.fill(first); err != nil {
			return err
		}
		if err := g.sendBlock(); err != nil {
			return err
		}
	}
	return g.send(&kinegatev1.GenerateEventsResponse{Frame: &kinegatev1.GenerateEventsResponse_Summary{Summary: g.summary()}})
}

// send sets a message on its way, after the one before.
func (g *generationStream) send(m *kinegatev1.GenerateEventsResponse) error {
	if err := g.settle(); err != nil {
		return err
	}
	sent := make(chan error, 1)
	g.sent, g.lastSent = sent, time.Now()
	go func() { sent <- Contain(func() error { return g.stream.Send(m) }) }()
	return nil
}

// settle waits until the caller had room for the message on its way. A caller that takes
// nothing for too long loses the stream, with its connection: see judgeStream.abandon.
func (g *generationStream) settle() error {
	if g.sent == nil {
		return nil
	}
	sent := g.sent
	g.sent = nil
	limit := g.service.deps.StallLimit
	stalled := time.NewTimer(limit)
	defer stalled.Stop()
	select {
	case err := <-sent:
		return err
	case <-stalled.C:
	}
	if connection := g.service.deps.Connection(g.stream.Context()); connection.Close != nil {
		connection.Close()
		<-sent //nolint:errcheck // only its end matters
	}
	next := strconv.FormatInt(g.taken, 10)
	return Refuse(StreamStalled, "the caller took no event for "+limit.String()+"; the slice goes on from event "+next, "next_event", next)
}

// fill makes the events of the next block. Where blocks end depends on the events alone,
// never on time.
func (g *generationStream) fill(first int64) error {
	g.made.truth.Reset()
	size := 0
	for full := false; !full && g.next < g.end; {
		if err := g.leave(); err != nil {
			return err
		}
		var err error
		if size, full, err = g.turn(g.stream.Context(), size); err != nil {
			return err
		}
		if !full && time.Since(g.lastSent) > progressPeriod {
			progress := &kinegatev1.GenerationProgress{EventCount: g.next - first}
			if err := g.send(&kinegatev1.GenerateEventsResponse{
				Frame: &kinegatev1.GenerateEventsResponse_Progress{Progress: progress},
			}); err != nil {
				return err
			}
		}
	}
	return nil
}

// leave ends the stream when the server is about to: the rest of the slice is to be had
// from another one.
func (g *generationStream) leave() error {
	select {
	case <-g.service.deps.Drain.Started:
		next := strconv.FormatInt(g.next-int64(g.made.truth.Events()), 10)
		return Refuse(ServerDraining, "this server is about to leave; ask another one for the events from "+next+" on", "next_event", next)
	default:
		return nil
	}
}

// turn makes a few events after waiting for its turn, and returns the size of the block.
func (g *generationStream) turn(ctx context.Context, size int) (grown int, full bool, err error) {
	if err := g.work.take(); err != nil {
		return size, false, err
	}
	defer g.work.end()
	for range generatedPerTurn {
		g.worker.Event(g.next, &g.made.truth)
		if err := ctx.Err(); err != nil {
			return size, false, err
		}
		g.next++
		more := g.lastSize()
		g.largest = max(g.largest, more)
		size += more
		// The next event may be the largest yet.
		full = size+2*g.largest > generationBlockBytes || g.made.truth.Events() == g.perBlock
		if full || g.next == g.end {
			return size, full, nil
		}
	}
	return size, false, nil
}

// lastSize bounds the encoded size of the last event of the block in bytes: columns by
// their widths, and every particle that reaches the detector makes an object or two, by
// which merged, split and noise clusters are allowed for.
func (g *generationStream) lastSize() int {
	const (
		eventTruth, particleTruth, candidateTruth          = 110, 83, 16
		eventMeasured, objectMeasured, candidateMeasured   = 124, 101, 24
		groupOfObject                                      = 40 // of a displaced vertex for every two objects
		frame                                              = 1024
		noiseClusters, objectsPerParticle, columnAllowance = 2, 2, 8
	)
	t := &g.made.truth
	i := t.Events() - 1
	first, end := t.Particles(i)
	candidates := int(t.BeamOffsets[i+1] - t.BeamOffsets[i])
	size := 0
	if i == 0 {
		size = frame
	}
	if !g.truthless {
		size += eventTruth + particleTruth*(end-first) + candidateTruth*candidates
	}
	if g.detector == nil {
		return size
	}
	objects := noiseClusters
	for row := first; row < end; row++ {
		if !t.Decayed[row] {
			objects += objectsPerParticle
		}
	}
	if g.displaced {
		size += groupOfObject * objects
	}
	return size + eventMeasured + objectMeasured*objects + candidateMeasured*candidates + columnAllowance
}

// sendBlock measures the events, and sends them.
func (g *generationStream) sendBlock() error {
	g.made.writer.reset()
	n := int64(g.made.truth.Events())
	m := &kinegatev1.GeneratedBlock{FirstEvent: g.next - n, EventCount: n}
	if err := g.work.take(); err != nil {
		return err
	}
	if g.detector != nil {
		g.detector.Measure(&g.made.truth, &g.made.block, &g.made.labels)
		m.Events = g.made.writer.block(&g.made.block)
		for i := range g.made.block.Events() {
			if first, end := g.made.block.Objects(i); end > first {
				g.seen++
			}
		}
	}
	if !g.truthless {
		m.Truth = g.made.writer.truth(&g.made.truth)
		if g.detector != nil {
			m.Truth.ObjectParticles = g.made.writer.int16s(g.made.labels.Particle)
		}
	}
	g.work.end()
	if err := g.send(&kinegatev1.GenerateEventsResponse{Frame: &kinegatev1.GenerateEventsResponse_Block{Block: m}}); err != nil {
		return err
	}
	g.made, g.sending = g.sending, g.made
	g.taken = m.GetFirstEvent()
	return nil
}

// summary says what became of the draws.
func (g *generationStream) summary() *kinegatev1.GenerationSummary {
	s := g.worker.Stats()
	m := &kinegatev1.GenerationSummary{
		EventCount: s.Events, EmptyCount: s.Empty, AttemptCount: s.Attempts, Efficiency: s.Efficiency(),
		EffectiveEventCount: s.Effective(), OverflowCount: s.Overflows, LargestWeight: s.Largest,
		ExhaustedCount: s.Exhausted, WeightSum: s.SumWeights, SeenEventCount: g.seen,
	}
	if s.Events > 0 && s.Empty == s.Events {
		m.Remarks = append(m.Remarks, "every event is of weight 0")
	}
	if s.Exhausted > 0 {
		m.Remarks = append(m.Remarks, strconv.FormatInt(s.Exhausted, 10)+" events were given up after "+
			strconv.Itoa(generation.MaxAttempts)+" draws, and the others are biased: a bound is too high, or a density too narrow; "+
			"kinegate bound measures a bound that fits")
	}
	if s.Overflows > 0 {
		m.Remarks = append(m.Remarks, strconv.FormatInt(s.Overflows, 10)+" events were above the bound, up to "+
			strconv.FormatFloat(s.Largest, 'g', 4, 64)+" times; they carry that weight. A bound larger by this factor has none")
	}
	if g.detector != nil && g.seen == 0 && s.Events > 0 {
		m.Remarks = append(m.Remarks, "the detector saw no object of any event: look at its acceptance, thresholds and efficiencies")
	}
	return m
}
