package server

import (
	"context"
	"errors"
	"fmt"
	"net"
	"net/http"
	"runtime"
	"sync"
	"sync/atomic"
	"time"

	"github.com/prometheus/client_golang/prometheus"
	"github.com/prometheus/client_golang/prometheus/collectors"
	"github.com/rs/zerolog"
	"google.golang.org/grpc"
	"google.golang.org/grpc/credentials"
	healthpb "google.golang.org/grpc/health/grpc_health_v1"
	"google.golang.org/grpc/keepalive"
	"google.golang.org/grpc/reflection"
	reflectionpb "google.golang.org/grpc/reflection/grpc_reflection_v1"
	reflectionalphapb "google.golang.org/grpc/reflection/grpc_reflection_v1alpha"

	"example.org/kinegate/service/api"
	"example.org/kinegate/service/telemetry"
)

// Server is one server with its listeners.
type Server struct {
	options Options
	deps    Deps

	metrics      *telemetry.Metrics
	services     *api.Services
	health       *health
	certificates *certificates // nil for plaintext
	folder       *folder       // nil for none
	current      atomic.Pointer[inUse]
	streams      openStreams
	pressure     pressure
	holding      *holding
	fronts       map[Listener]*front
	webs         map[Listener]*http.Server
	places       places

	leaving chan struct{} // closed when the notice is over
	stopped chan struct{} // closed when Shutdown is done

	reloading sync.Mutex // held while settings are read again; guards lastFault
	lastFault string     // of the settings, so that it is logged once

	mu        sync.Mutex // guards the rest
	listeners map[Listener]net.Listener
	shutting  bool
}

// New checks the options, reads the files they name and returns a server that does not
// listen yet. Faults of options and files are a fault.List or *fault.Error with names
// of settings as fields.
func New(options Options, deps Deps) (*Server, error) {
	options.adoptMemoryLimit()
	if err := options.Validate(); err != nil {
		return nil, err
	}
	if deps.Registry == nil {
		deps.Registry = prometheus.NewRegistry()
	}
	if deps.Listen == nil {
		deps.Listen = listenOS
	}
	metrics, err := telemetry.NewMetrics(deps.Registry, deps.Version)
	if err != nil {
		return nil, err
	}
	for _, c := range []prometheus.Collector{
		collectors.NewGoCollector(), collectors.NewProcessCollector(collectors.ProcessCollectorOpts{}),
	} {
		// A registry that has them already has the same.
		_ = deps.Registry.Register(c)
	}
	s := &Server{
		options: options, deps: deps, metrics: metrics,
		fronts: map[Listener]*front{}, webs: map[Listener]*http.Server{},
		listeners: map[Listener]net.Listener{},
		leaving:   make(chan struct{}), stopped: make(chan struct{}),
	}
	s.places = places{
		most: int64(options.Connections), metrics: metrics,
		warn: func() *zerolog.Event { return s.current.Load().callLog.Refused() },
	}
	if !options.BehindProxy {
		s.places.suspects = &suspects{known: map[string]*fading{}}
	}
	use, err := s.prepare(options)
	if err != nil {
		return nil, err
	}
	s.current.Store(use)
	s.pressure.limit = int64(options.MemoryLimit)
	s.holding = newHolding(&s.options)
	metrics.SettingsReloaded(true, time.Now())
	metrics.WorkSlots(options.slots())
	s.health = newHealth(s.leaving)
	if options.CertificateFile != "" {
		if s.certificates, err = loadCertificates(&s.options, metrics, s.log); err != nil {
			return nil, err
		}
	}
	if s.services, s.folder, err = newServices(&s.options, &deps, metrics, s.log, s.leaving); err != nil {
		return nil, err
	}
	s.build()
	return s, nil
}

// build makes the gRPC and HTTP servers.
func (s *Server) build() {
	o := &s.options
	d := &desk{
		limits: o.limits(), streamIdle: o.StreamIdle, metrics: s.metrics, current: &s.current, streams: &s.streams, pressure: &s.pressure, holding: s.holding,
		leaving: s.leaving, nonce: newNonce(),
	}
	gate := rules{most: func(o *Options) int { return o.GateStreams }, private: true}
	general := rules{most: func(o *Options) int { return o.GeneralStreams }, private: true, shared: true}
	s.fronts[Gate] = s.rpcFront(d, gate, o.GateStreamWindow, o.GateConnectionWindow, s.services.RegisterGate)
	s.fronts[General] = s.rpcFront(d, general, o.GeneralStreamWindow, o.GeneralConnectionWindow, s.services.Register)
	s.health.know(s.fronts[General].server.GetServiceInfo())
	if o.HealthAddress != "" {
		f := newFront(d, rules{most: general.most}, s.serverOptions(o.GeneralStreamWindow, o.GeneralConnectionWindow))
		healthpb.RegisterHealthServer(f, s.health)
		s.fronts[Health] = f
	}
	if o.MetricsAddress != "" {
		s.webs[Metrics] = metricsWeb(s.deps.Registry, s.health, s.deps.Log)
	}
	if o.DebugAddress != "" {
		s.webs[Debug] = debugWeb(s.deps.Log)
	}
}

// rpcFront makes the front of a listener for rpcs.
func (s *Server) rpcFront(d *desk, r rules, stream, connection Bytes, register func(grpc.ServiceRegistrar)) *front {
	options := s.serverOptions(stream, connection)
	if s.certificates != nil {
		options = append(options, grpc.Creds(credentials.NewTLS(s.certificates.config())))
	}
	f := newFront(d, r, options)
	register(f)
	healthpb.RegisterHealthServer(f, s.health)
	if s.options.Reflection {
		described := reflection.ServerOptions{Services: f.server}
		reflectionpb.RegisterServerReflectionServer(f, reflection.NewServerV1(described))
		reflectionalphapb.RegisterServerReflectionServer(f, reflection.NewServer(described))
	}
	return f
}

// newFront makes a front with its gRPC server.
func newFront(d *desk, r rules, options []grpc.ServerOption) *front {
	f := &front{desk: d, rules: r, work: &workQueue{metrics: d.metrics}}
	f.server = grpc.NewServer(append(options,
		grpc.UnknownServiceHandler(f.unknown), grpc.InTapHandle(f.tapped), grpc.ForceServerCodecV2(codec{}),
		// gRPC lets calls in that name a compression it knows, so that we can refuse them.
		grpc.RPCDecompressor(grpc.NewGZIPDecompressor()))...) //nolint:staticcheck // the other way registers it for the whole process
	return f
}

// serverOptions are the limits that every gRPC server has.
func (s *Server) serverOptions(stream, connection Bytes) []grpc.ServerOption {
	o := &s.options
	return []grpc.ServerOption{
		grpc.MaxSendMsgSize(2 * int(o.MessageLimit)), // calls hold replies to the limit themselves
		// Headers over the limit are answered with an ErrorInfo; the transport drops what is
		// four times as large, and clients that know its limit do not send it.
		grpc.MaxHeaderListSize(4 * uint32(o.HeaderLimit)),      //nolint:gosec // at most 1 MiB
		grpc.MaxConcurrentStreams(uint32(o.ConnectionStreams)), //nolint:gosec // at most 65,536
		grpc.StaticStreamWindowSize(int32(stream)),             //nolint:gosec // at most 1 GiB
		grpc.StaticConnWindowSize(int32(connection)),           //nolint:gosec // at most 1 GiB
		grpc.ConnectionTimeout(o.HandshakeTimeout),
		grpc.WaitForHandlers(true),
		// A goroutine made for a call grows its stack anew, a tenth of a short call's time;
		// these stay and keep theirs. Calls beyond them get goroutines of their own.
		grpc.NumStreamWorkers(uint32(2 * runtime.GOMAXPROCS(0))), //nolint:gosec // a small number
		grpc.KeepaliveEnforcementPolicy(keepalive.EnforcementPolicy{
			MinTime: o.ClientPingMinimum, PermitWithoutStream: true,
		}),
		grpc.KeepaliveParams(keepalive.ServerParameters{
			MaxConnectionIdle: o.ConnectionIdle, MaxConnectionAge: o.ConnectionAge,
			MaxConnectionAgeGrace: o.ConnectionAgeGrace, Time: o.PingInterval, Timeout: o.PingTimeout,
		}),
	}
}

// Listen opens every listener. On failure none stays open.
func (s *Server) Listen(ctx context.Context) error {
	s.mu.Lock()
	defer s.mu.Unlock()
	for _, l := range []struct {
		name  Listener
		where string
	}{
		{Gate, s.options.GateAddress}, {General, s.options.GeneralAddress}, {Health, s.options.HealthAddress},
		{Metrics, s.options.MetricsAddress}, {Debug, s.options.DebugAddress},
	} {
		if l.where == "" || s.listeners[l.name] != nil {
			continue
		}
		a, e := parseAddress(l.where)
		if e != nil {
			return e
		}
		listener, err := s.deps.Listen(ctx, a.network, a.where)
		if err != nil {
			for _, open := range s.listeners {
				_ = open.Close()
			}
			clear(s.listeners)
			return fmt.Errorf("listener %s at %s: %w", l.name, l.where, err)
		}
		if l.name == Gate || l.name == General {
			listener = bounded{listener, &s.places}
		}
		s.listeners[l.name] = listener
	}
	return nil
}

// Addr is where a listener listens; nil for one that does not.
func (s *Server) Addr(name Listener) net.Addr {
	s.mu.Lock()
	defer s.mu.Unlock()
	if l := s.listeners[name]; l != nil {
		return l.Addr()
	}
	return nil
}

// Serve opens the listeners that are not open, checks the services by a known answer,
// and answers calls until Shutdown is done. It returns nil then, and an error if the
// check or a listener fails or ctx ends before; it then stops at once.
func (s *Server) Serve(ctx context.Context) error {
	if err := s.Listen(ctx); err != nil {
		return err
	}
	ctx, cancel := context.WithCancel(ctx)
	defer cancel()
	if s.certificates != nil {
		go s.contained("watching certificate files", func() { s.certificates.watch(ctx) })
	}
	if s.folder != nil {
		go s.contained("watching selections", func() { s.folder.watch(ctx) })
	}
	go s.contained("watching settings", func() { s.watchSettings(ctx) })
	go s.contained("watching streams", func() { s.streams.watch(ctx) })
	go s.contained("watching memory", func() { s.pressure.watch(ctx) })
	failed := make(chan error, len(s.fronts)+len(s.webs))
	s.mu.Lock()
	for name, f := range s.fronts {
		l := s.listeners[name]
		go func() { failed <- serving(name, f.server.Serve(l)) }()
	}
	for name, w := range s.webs {
		l := s.listeners[name]
		go func() { failed <- serving(name, w.Serve(l)) }()
	}
	s.mu.Unlock()
	if err := api.Contain(api.SelfTest); err != nil {
		s.stop()
		return fmt.Errorf("a known answer does not come out: %w", err)
	}
	s.mu.Lock()
	if !s.shutting {
		s.health.setReady(true)
	}
	s.mu.Unlock()
	for {
		select {
		case <-s.stopped:
			return nil
		case <-ctx.Done():
			s.stop()
			return ctx.Err()
		case err := <-failed:
			if err != nil {
				s.stop()
				return err
			}
		}
	}
}

// contained runs the body of a goroutine of the server's own; a panic ends it and not
// the process.
func (s *Server) contained(what string, body func()) {
	err := api.Contain(func() error { body(); return nil })
	if p, ok := errors.AsType[*api.PanicError](err); ok {
		s.metrics.Panicked()
		s.log().Error().Err(err).Bytes("stack", p.Stack).Msg(what)
	}
}

// serving names the listener that failed; one that was closed on purpose has not.
func serving(name Listener, err error) error {
	if err == nil || errors.Is(err, http.ErrServerClosed) || errors.Is(err, grpc.ErrServerStopped) {
		return nil
	}
	return fmt.Errorf("listener %s: %w", name, err)
}
