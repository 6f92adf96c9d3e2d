package server

import (
	"context"
	"slices"
	"sync"

	"google.golang.org/grpc"
	healthpb "google.golang.org/grpc/health/grpc_health_v1"

	"example.org/kinegate/service/api"
)

// Names under which health answers beside those of the services.
const (
	// Liveness is SERVING as long as the process can answer at all: whoever restarts
	// on it must not do so because of load or draining.
	Liveness = "liveness"
	// Readiness is SERVING while the server takes new work. It looks at this server
	// only. The empty name and the names of services say the same.
	Readiness = "readiness"
)

// health answers grpc.health.v1. Unlike gRPC's own it ends its watches when the server
// leaves: one open watch would otherwise hold up a graceful stop for ever.
type health struct {
	healthpb.UnimplementedHealthServer

	leaving <-chan struct{}

	mu      sync.Mutex
	names   []string
	ready   bool
	changed chan struct{} // closed and replaced when ready changes
}

// newHealth returns a health that is not ready; leaving ends its watches.
func newHealth(leaving <-chan struct{}) *health {
	return &health{
		leaving: leaving,
		names:   []string{"", Liveness, Readiness},
		changed: make(chan struct{}),
	}
}

// know adds the names of services.
func (h *health) know(services map[string]grpc.ServiceInfo) {
	h.mu.Lock()
	defer h.mu.Unlock()
	for name := range services {
		if !slices.Contains(h.names, name) {
			h.names = append(h.names, name)
		}
	}
	slices.Sort(h.names)
}

// setReady changes readiness and wakes the watches.
func (h *health) setReady(ready bool) {
	h.mu.Lock()
	defer h.mu.Unlock()
	if h.ready == ready {
		return
	}
	h.ready = ready
	close(h.changed)
	h.changed = make(chan struct{})
}

// isReady is the readiness now.
func (h *health) isReady() bool {
	h.mu.Lock()
	defer h.mu.Unlock()
	return h.ready
}

// status is the status of a name now, with a channel that is closed when it may have
// changed; known is false for a name that is none of ours.
func (h *health) status(name string) (s healthpb.HealthCheckResponse_ServingStatus, changed <-chan struct{}, known bool) {
	h.mu.Lock()
	defer h.mu.Unlock()
	switch {
	case !slices.Contains(h.names, name):
		return healthpb.HealthCheckResponse_SERVICE_UNKNOWN, h.changed, false
	case h.ready || name == Liveness:
		return healthpb.HealthCheckResponse_SERVING, h.changed, true
	}
	return healthpb.HealthCheckResponse_NOT_SERVING, h.changed, true
}

// Check answers with the status of one name.
func (h *health) Check(_ context.Context, request *healthpb.HealthCheckRequest) (*healthpb.HealthCheckResponse, error) {
	s, _, known := h.status(request.GetService())
	if !known {
		return nil, api.Refuse(api.ServiceNotFound, "health knows no such service", "service", request.GetService())
	}
	return &healthpb.HealthCheckResponse{Status: s}, nil
}

// List answers with the status of every name.
func (h *health) List(context.Context, *healthpb.HealthListRequest) (*healthpb.HealthListResponse, error) {
	h.mu.Lock()
	names := slices.Clone(h.names)
	h.mu.Unlock()
	all := map[string]*healthpb.HealthCheckResponse{}
	for _, name := range names {
		s, _, _ := h.status(name)
		all[name] = &healthpb.HealthCheckResponse{Status: s}
	}
	return &healthpb.HealthListResponse{Statuses: all}, nil
}

// Watch sends the status of a name and every change of it until the caller or the
// server leaves.
func (h *health) Watch(request *healthpb.HealthCheckRequest, stream grpc.ServerStreamingServer[healthpb.HealthCheckResponse]) error {
	last := healthpb.HealthCheckResponse_UNKNOWN
	for {
		s, changed, _ := h.status(request.GetService())
		if s != last {
			if err := stream.Send(&healthpb.HealthCheckResponse{Status: s}); err != nil {
				return err
			}
			last = s
		}
		select {
		case <-changed:
		case <-h.leaving:
			return api.Refuse(api.ServerDraining, "this server is about to leave")
		case <-stream.Context().Done():
			return stream.Context().Err()
		}
	}
}
