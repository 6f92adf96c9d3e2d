package main

import (
	"context"
	"net/http"
	"slices"
	"sync"
	"sync/atomic"
	"syscall"
	"testing"
	"time"

	"google.golang.org/genproto/googleapis/rpc/errdetails"
	healthpb "google.golang.org/grpc/health/grpc_health_v1"
	"google.golang.org/grpc/status"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/api"
)

// TestOverload offers real work at 1, 2, 5 and 10 times what a server on two processors
// can do, whether or not the answers come: goodput stays, what is admitted stays fast, what
// is not is refused at once, health never wavers, and the server recovers. The server does
// this work on one of the processors, and its callers have the other.
func TestOverload(t *testing.T) {
	operations(t)
	span := spanOf(t, "OVERLOAD_SPAN", 10*time.Second)
	p, where := startServing(t, "--drain-notice", "0s", "--caller-calls", "128", "--log-burst", "1")
	defer func() {
		_ = p.Process.Signal(syscall.SIGTERM)
		if code := exitCode(t, p.Wait()); code != 0 {
			t.Errorf("exit code %d", code)
		}
	}()
	var clients []kinegatev1.DecayServiceClient
	for range 4 {
		clients = append(clients, kinegatev1.NewDecayServiceClient(dial(t, where["general"])))
	}
	// Some 6 ms of computing, and little to receive: the figures are to show the server.
	request := &kinegatev1.TraceDalitzBoundaryRequest{
		Form: &kinegatev1.TraceDalitzBoundaryRequest_Process{Process: "omega -> pi+ pi- pi0"}, Resolution: 0.0015,
	}
	offer := func(rate float64, span time.Duration) overloaded {
		return offered(t, clients, request, rate, span)
	}
	// One after the other, as fast as they go: what the server can do.
	begun, calls := time.Now(), 0
	for ; time.Since(begun) < 3*time.Second; calls++ {
		if _, err := clients[0].TraceDalitzBoundary(t.Context(), request); err != nil {
			t.Fatal(err)
		}
	}
	saturation := float64(calls) / time.Since(begun).Seconds()
	idle := offer(0.1*saturation, 10*time.Second)
	base := quantile(idle.admitted, 0.99)
	t.Logf("FIGURE T2 saturation %.0f calls/s; idle: admitted p50 %.1f p99 %.1f ms", saturation, ms(quantile(idle.admitted, 0.5)), ms(base))
	probe := watchHealth(t, where)
	peak := 0.0
	for _, times := range []float64{1, 2, 5, 10} {
		got := offer(times*saturation, span)
		goodput := float64(len(got.admitted)) / span.Seconds()
		peak = max(peak, goodput)
		t.Logf("FIGURE T2 offered %gx: %.0f calls/s sent, goodput %.0f/s, admitted p50 %.1f p99 %.1f ms (%.1fx), rejected p50 %.2f p99 %.2f ms, other %d",
			times, float64(got.sent)/span.Seconds(), goodput, ms(quantile(got.admitted, 0.5)), ms(quantile(got.admitted, 0.99)),
			float64(quantile(got.admitted, 0.99))/float64(base), ms(quantile(got.rejected, 0.5)), ms(quantile(got.rejected, 0.99)), got.other)
		if times == 10 && goodput < 0.9*peak {
			t.Errorf("goodput %.0f of %.0f", goodput, peak)
		}
		if got.other > 0 {
			t.Errorf("%d calls neither answered nor refused as overload", got.other)
		}
	}
	looks, wavered := probe()
	t.Logf("FIGURE H3 liveness and readiness, by rpc and HTTP, looked at %d times under this load: %d not well", looks, wavered)
	if wavered > 0 {
		t.Errorf("health wavered %d times", wavered)
	}
	after := offer(0.1*saturation, 5*time.Second)
	t.Logf("FIGURE T2 after the load: %d of %d calls answered, p99 %.1f ms", len(after.admitted), after.sent, ms(quantile(after.admitted, 0.99)))
	if len(after.rejected) > after.sent/10 {
		t.Errorf("%d of %d calls refused after the load", len(after.rejected), after.sent)
	}
}

// watchHealth looks at both names on both surfaces until it is told to stop, and counts.
func watchHealth(t *testing.T, where map[string]string) (stop func() (looks, wavered int64)) {
	t.Helper()
	health := healthpb.NewHealthClient(dial(t, where["health"]))
	ctx, cancel := context.WithCancel(t.Context())
	var looks, wavered atomic.Int64
	var all sync.WaitGroup
	look := func(well func(ctx context.Context) bool) {
		all.Go(func() {
			for ctx.Err() == nil {
				bounded, done := context.WithTimeout(context.Background(), time.Second) // a probe has its own patience
				looks.Add(1)
				if !well(bounded) {
					wavered.Add(1)
				}
				done()
				time.Sleep(50 * time.Millisecond)
			}
		})
	}
	for _, name := range []string{"liveness", "readiness"} {
		look(func(ctx context.Context) bool {
			m, err := health.Check(ctx, &healthpb.HealthCheckRequest{Service: name})
			return err == nil && m.GetStatus() == healthpb.HealthCheckResponse_SERVING
		})
	}
	for _, path := range []string{"/livez", "/readyz"} {
		look(func(ctx context.Context) bool {
			request, err := http.NewRequestWithContext(ctx, http.MethodGet, "http://"+where["metrics"]+path, nil)
			if err != nil {
				return false
			}
			reply, err := http.DefaultClient.Do(request)
			if err != nil {
				return false
			}
			_ = reply.Body.Close()
			return reply.StatusCode == http.StatusOK
		})
	}
	return func() (int64, int64) {
		cancel()
		all.Wait()
		return looks.Load(), wavered.Load()
	}
}

func ms(d time.Duration) float64 { return float64(d) / float64(time.Millisecond) }

// quantile is the q-quantile of durations, which it sorts.
func quantile(d []time.Duration, q float64) time.Duration {
	if len(d) == 0 {
		return 0
	}
	slices.Sort(d)
	return d[min(int(q*float64(len(d))), len(d)-1)]
}

// overloaded is what came of offered calls.
type overloaded struct {
	sent, other        int
	admitted, rejected []time.Duration
}

// offered sends calls at a rate without waiting for answers.
func offered(t *testing.T, clients []kinegatev1.DecayServiceClient, request *kinegatev1.TraceDalitzBoundaryRequest, rate float64, span time.Duration) overloaded {
	t.Helper()
	var mu sync.Mutex
	var all sync.WaitGroup
	var o overloaded
	begun := time.Now()
	for time.Since(begun) < span {
		due := int(time.Since(begun).Seconds() * rate)
		for ; o.sent < due; o.sent++ {
			client := clients[o.sent%len(clients)]
			all.Go(func() {
				start := time.Now()
				_, err := client.TraceDalitzBoundary(t.Context(), request)
				took := time.Since(start)
				mu.Lock()
				defer mu.Unlock()
				switch {
				case err == nil:
					o.admitted = append(o.admitted, took)
				case isReason(err, api.ServerOverloaded):
					o.rejected = append(o.rejected, took)
				default:
					o.other++
				}
			})
		}
		time.Sleep(time.Millisecond)
	}
	all.Wait()
	return o
}

// isReason reports whether an error carries a reason.
func isReason(err error, want api.Reason) bool {
	for _, d := range status.Convert(err).Details() {
		if info, ok := d.(*errdetails.ErrorInfo); ok && info.GetReason() == string(want) {
			return true
		}
	}
	return false
}
