package api

import (
	"context"
	"time"

	"google.golang.org/grpc"

	"example.org/kinegate/kinematics/particle"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// Caution is what every user of the program should have read.
const Caution = "kinegate is a planning and selection tool, never a safety system: no interlock, " +
	"shielding or dose decision may rest on it. Local radiation-safety rules and licensed " +
	"practice decide."

// Deps is what the services need from outside. The zero value of each optional part
// does nothing.
type Deps struct {
	// Version is the version of the program.
	Version string
	// Table is the particle table; the standard one if nil.
	Table *particle.Table
	// Library holds the selections that callers may name; an empty one if nil.
	Library *Library
	// Limits are the sizes to hold callers to.
	Limits Limits
	// Now tells the time, for latency budgets and heartbeats; time.Now if nil.
	Now func() time.Time
	// StreamIdle is the time without a frame after which a judge stream is ended; a
	// minute if 0.
	StreamIdle time.Duration
	// StallLimit is the time without progress in sending to a stream after which it is
	// ended; 5 s if 0.
	StallLimit time.Duration
	// Drain says when to leave. Optional.
	Drain Drain
	// Connection describes the connection under a call. Optional.
	Connection func(context.Context) Connection
	// Observer sees what happens on judge streams. Optional.
	Observer StreamObserver
}

// Drain tells the streams that the server will leave.
type Drain struct {
	// Started is closed when draining starts: streams then read no more, answer
	// what they have read, say so and end. Nil never starts.
	Started <-chan struct{}
	// Grace is the time from then until the connections are cut.
	Grace time.Duration
}

// Connection is what a stream may know of the connection under it, and do to it.
type Connection struct {
	// Close closes the connection, with all calls on it. Nil where a stream must not:
	// behind a proxy other callers share the connection.
	Close func()
	// Life is the time that a stream opened now may last; 0 is without end.
	Life time.Duration
}

// StreamObserver sees what happens on judge streams. Its methods may be called from
// any goroutine and do not block.
type StreamObserver interface {
	// StreamOpened counts an accepted opening.
	StreamOpened()
	// StreamClosed counts the end of an opened stream; the reason is "done",
	// "draining" or that of the failure.
	StreamClosed(reason string)
	// EventsJudged counts events by verdict: "accepted", "rejected", or the status
	// of events that were not judged.
	EventsJudged(verdict string, count int)
	// BlockAnswered measures the time from the receipt of a block to its answer.
	BlockAnswered(latency time.Duration)
	// CreditHeld changes the sum of byte credits handed out by delta.
	CreditHeld(delta int64)
	// VersionPassedOver tells, once for each stream and version, that a stream which
	// follows a selection keeps the one it has, and the reason against the newer one,
	// whose digest is given.
	VersionPassedOver(selection, digest string, reason Reason)
}

// Services are the rpc services of one server.
type Services struct {
	deps       Deps
	particle   *particleService
	gate, bulk *selectionService
	generation *generationService
}

// New returns the services.
func New(deps Deps) (*Services, error) {
	standard, err := particle.New()
	if err != nil {
		return nil, err
	}
	if deps.Table == nil {
		deps.Table = standard
	}
	if deps.Library == nil {
		deps.Library = NewLibrary(deps.Table)
	}
	if deps.Now == nil {
		deps.Now = time.Now
	}
	if deps.StreamIdle == 0 {
		deps.StreamIdle = time.Minute
	}
	if deps.StallLimit == 0 {
		deps.StallLimit = 5 * time.Second
	}
	if deps.Connection == nil {
		deps.Connection = func(context.Context) Connection { return Connection{} }
	}
	if deps.Observer == nil {
		deps.Observer = silent{}
	}
	s := &Services{deps: deps, particle: newParticleService(deps.Table, standard)}
	s.gate, s.bulk = newSelectionServices(deps)
	// Making events is bulk work on either listener, and so is whatever takes long.
	s.generation = &generationService{deps: deps, turns: s.bulk.turns}
	return s, nil
}

// Register adds every service to the server of general calls, whose bulk work steps
// back for the gate. The server's codec must know Borrowed and Encoded.
func (s *Services) Register(r grpc.ServiceRegistrar) { s.register(r, s.bulk) }

// RegisterGate adds every service to the server of judge streams.
func (s *Services) RegisterGate(r grpc.ServiceRegistrar) { s.register(r, s.gate) }

func (s *Services) register(r grpc.ServiceRegistrar, selections *selectionService) {
	kinegatev1.RegisterParticleServiceServer(r, s.particle)
	kinegatev1.RegisterReactionServiceServer(r, &reactionService{table: s.deps.Table, turns: s.bulk.turns})
	kinegatev1.RegisterDecayServiceServer(r, &decayService{table: s.deps.Table, turns: s.bulk.turns})
	kinegatev1.RegisterPhotonServiceServer(r, &photonService{table: s.deps.Table, turns: s.bulk.turns})
	kinegatev1.RegisterSelectionServiceServer(r, selections)
	kinegatev1.RegisterGenerationServiceServer(r, s.generation)
	kinegatev1.RegisterInfoServiceServer(r, &infoService{deps: s.deps})
}

// silent is the observer that does nothing.
type silent struct{}

func (silent) StreamOpened()                            {}
func (silent) StreamClosed(string)                      {}
func (silent) EventsJudged(string, int)                 {}
func (silent) BlockAnswered(time.Duration)              {}
func (silent) CreditHeld(int64)                         {}
func (silent) VersionPassedOver(string, string, Reason) {}
