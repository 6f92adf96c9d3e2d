package server

import (
	"context"
	"errors"
	"io"
	"net"
	"net/http"
	"strings"
	"testing"
	"time"

	channelzpb "google.golang.org/grpc/channelz/grpc_channelz_v1"
	"google.golang.org/grpc/codes"
	healthpb "google.golang.org/grpc/health/grpc_health_v1"
	reflectionpb "google.golang.org/grpc/reflection/grpc_reflection_v1"
	reflectionalphapb "google.golang.org/grpc/reflection/grpc_reflection_v1alpha"
	"google.golang.org/grpc/status"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/api"
)

func check(t *testing.T, client healthpb.HealthClient, name string) healthpb.HealthCheckResponse_ServingStatus {
	t.Helper()
	r, err := client.Check(t.Context(), &healthpb.HealthCheckRequest{Service: name})
	if err != nil {
		t.Fatalf("%q: %v", name, err)
	}
	return r.GetStatus()
}

// TestHealthFollowsLife walks a server through its states on the plain listener, the
// rpc listener and HTTP.
func TestHealthFollowsLife(t *testing.T) {
	r := start(t, func(o *Options, _ *Deps) { o.DrainNotice = 3 * time.Second })
	plain := healthpb.NewHealthClient(r.dial(t, r.options.HealthAddress))
	both := []healthpb.HealthClient{plain, healthpb.NewHealthClient(r.general(t))}
	web := r.http()
	names := []string{"", Readiness, "kinegate.v1.ParticleService", "kinegate.v1.SelectionService", "grpc.health.v1.Health"}
	states := func(want healthpb.HealthCheckResponse_ServingStatus, code int) {
		t.Helper()
		for _, client := range both {
			for _, name := range names {
				if got := check(t, client, name); got != want {
					t.Errorf("%q is %v, want %v", name, got, want)
				}
			}
			if got := check(t, client, Liveness); got != healthpb.HealthCheckResponse_SERVING {
				t.Errorf("liveness is %v", got)
			}
		}
		for path, want := range map[string]int{"/livez": 200, "/readyz": code} {
			if got, _ := get(t, web, path); got != want {
				t.Errorf("%s gives %d, want %d", path, got, want)
			}
		}
	}
	states(healthpb.HealthCheckResponse_SERVING, 200)
	if _, err := plain.Check(t.Context(), &healthpb.HealthCheckRequest{Service: "no.Such"}); err == nil {
		t.Error("an unknown service is healthy")
	} else {
		wantReason(t, err, api.ServiceNotFound)
	}
	list, err := plain.List(t.Context(), &healthpb.HealthListRequest{})
	if err != nil || list.GetStatuses()[Readiness].GetStatus() != healthpb.HealthCheckResponse_SERVING {
		t.Errorf("list %v %v", list, err)
	}
	watch, err := plain.Watch(t.Context(), &healthpb.HealthCheckRequest{Service: "kinegate.v1.InfoService"})
	if err != nil {
		t.Fatal(err)
	}
	seen := func() healthpb.HealthCheckResponse_ServingStatus {
		t.Helper()
		m, err := watch.Recv()
		if err != nil {
			t.Fatal(err)
		}
		return m.GetStatus()
	}
	if s := seen(); s != healthpb.HealthCheckResponse_SERVING {
		t.Errorf("watch begins with %v", s)
	}
	done := make(chan error)
	go func() { done <- r.Shutdown(t.Context()) }()
	if s := seen(); s != healthpb.HealthCheckResponse_NOT_SERVING {
		t.Errorf("watch goes on with %v", s)
	}
	told := time.Now()
	eventually(t, "the other surface", func() bool { code, _ := get(t, web, "/readyz"); return code == http.StatusServiceUnavailable })
	if apart := time.Since(told); apart > bound(100*time.Millisecond) {
		t.Errorf("the surfaces change %v apart", apart)
	} else {
		figure(t, "H1 the two surfaces change at most %.1f ms apart", ms(apart))
	}
	states(healthpb.HealthCheckResponse_NOT_SERVING, 503)
	// During the notice, calls are answered as before.
	if _, err := kinegatev1.NewInfoServiceClient(r.general(t)).GetInfo(t.Context(), &kinegatev1.GetInfoRequest{}); err != nil {
		t.Errorf("a call during the notice: %v", err)
	}
	if _, err := watch.Recv(); err == nil {
		t.Error("the watch goes on")
	} else {
		wantReason(t, err, api.ServerDraining)
	}
	if err := <-done; err != nil {
		t.Errorf("Shutdown: %v", err)
	}
}

func TestHealthWatchOfUnknownService(t *testing.T) {
	r := start(t)
	ctx, cancel := context.WithCancel(t.Context())
	defer cancel()
	watch, err := healthpb.NewHealthClient(r.dial(t, r.options.HealthAddress)).Watch(ctx, &healthpb.HealthCheckRequest{Service: "no"})
	if err != nil {
		t.Fatal(err)
	}
	if m, err := watch.Recv(); err != nil || m.GetStatus() != healthpb.HealthCheckResponse_SERVICE_UNKNOWN {
		t.Errorf("%v %v", m, err)
	}
}

func TestHealthListenerHasNothingElse(t *testing.T) {
	r := start(t)
	conn := r.dial(t, r.options.HealthAddress)
	for _, method := range append(methods(r), reflectionpb.ServerReflection_ServerReflectionInfo_FullMethodName) {
		wantReason(t, rawly(t.Context(), conn, method, nil), api.MethodUnknown)
	}
}

func TestReflection(t *testing.T) {
	for _, on := range []bool{true, false} {
		r := start(t, func(o *Options, _ *Deps) { o.Reflection = on })
		conn := r.general(t)
		s, err := reflectionpb.NewServerReflectionClient(conn).ServerReflectionInfo(t.Context())
		if err != nil {
			t.Fatal(err)
		}
		_ = s.Send(&reflectionpb.ServerReflectionRequest{
			MessageRequest: &reflectionpb.ServerReflectionRequest_ListServices{},
		})
		m, err := s.Recv()
		if !on {
			wantReason(t, err, api.MethodUnknown)
			continue
		}
		if err != nil || !strings.Contains(m.String(), "kinegate.v1.ReactionService") {
			t.Errorf("%v %v", m, err)
		}
		_ = s.CloseSend()
		if _, err := s.Recv(); !errors.Is(err, io.EOF) {
			t.Errorf("end of reflection: %v", err)
		}
		a, err := reflectionalphapb.NewServerReflectionClient(conn).ServerReflectionInfo(t.Context())
		if err != nil {
			t.Fatal(err)
		}
		//nolint:staticcheck // deprecated, and what older clients still speak
		_ = a.Send(&reflectionalphapb.ServerReflectionRequest{
			MessageRequest: &reflectionalphapb.ServerReflectionRequest_ListServices{},
		})
		if m, err := a.Recv(); err != nil || !strings.Contains(m.String(), "kinegate.v1.ReactionService") {
			t.Errorf("v1alpha: %v %v", m, err)
		}
		_ = a.CloseSend()
	}
}

// http returns a client of the HTTP listeners in memory; the host of a URL is the name
// of the listener's address.
func (r *running) http() *http.Client {
	return &http.Client{Transport: &http.Transport{
		DisableKeepAlives: true,
		DialContext: func(ctx context.Context, _, where string) (net.Conn, error) {
			if where == "metrics:80" {
				where = r.options.MetricsAddress
			} else {
				where = r.options.DebugAddress
			}
			return r.network.dial(ctx, where)
		},
	}}
}

// get fetches a path of the metrics listener.
func get(t *testing.T, client *http.Client, path string) (int, string) {
	t.Helper()
	return fetch(t, client, "http://metrics"+path, "")
}

func fetch(t *testing.T, client *http.Client, url, accept string) (int, string) {
	t.Helper()
	request, err := http.NewRequestWithContext(t.Context(), http.MethodGet, url, nil)
	if err != nil {
		t.Fatal(err)
	}
	if accept != "" {
		request.Header.Set("Accept", accept)
	}
	response, err := client.Do(request)
	if err != nil {
		t.Fatal(err)
	}
	defer func() { _ = response.Body.Close() }()
	body, err := io.ReadAll(response.Body)
	if err != nil {
		t.Fatal(err)
	}
	return response.StatusCode, string(body)
}

func TestDebugListener(t *testing.T) {
	r := start(t, func(o *Options, _ *Deps) { o.DebugAddress = "127.0.0.1:8479" })
	client := r.http()
	if code, body := fetch(t, client, "http://debug/debug/pprof/", ""); code != 200 || !strings.Contains(body, "goroutine") {
		t.Errorf("profiles: %d", code)
	}
	if code, _ := get(t, client, "/debug/pprof/"); code != 404 {
		t.Errorf("profiles beside the metrics: %d", code)
	}
	ask := func(where string) (*channelzpb.GetServersResponse, error) {
		return channelzpb.NewChannelzClient(r.dial(t, where)).GetServers(t.Context(), &channelzpb.GetServersRequest{})
	}
	if _, err := ask(r.options.GeneralAddress); status.Code(err) != codes.Unimplemented {
		t.Errorf("channelz beside the rpcs: %v", err)
	}
	servers, err := ask(r.options.DebugAddress)
	if err != nil {
		t.Fatal(err)
	}
	started := int64(0)
	for _, s := range servers.GetServer() {
		started += s.GetData().GetCallsStarted()
	}
	if len(servers.GetServer()) < len(r.fronts) || started == 0 {
		t.Errorf("channelz knows %v", servers)
	}
}

func TestOwnGoroutinesAreContained(t *testing.T) {
	r := start(t)
	r.contained("a task", func() { panic("boom") })
	if r.metric(t, "kinegate_panics_total") != 1 || !strings.Contains(r.log.String(), "boom") {
		t.Errorf("log %s", r.log)
	}
}
