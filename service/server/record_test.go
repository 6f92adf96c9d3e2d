package server

import (
	"encoding/json"
	"fmt"
	"maps"
	"os"
	"slices"
	"strings"
	"testing"
	"time"

	"google.golang.org/grpc/codes"
	"google.golang.org/grpc/metadata"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/api"
)

// TestLogLines holds every line against the schema, and looks for what callers sent.
func TestLogLines(t *testing.T) {
	r := start(t)
	conn := r.general(t)
	const secret = "xyzzy-secret"
	ctx := metadata.AppendToOutgoingContext(t.Context(), "authorization", secret, "x-request-id", "id-1")
	particles := kinegatev1.NewParticleServiceClient(conn)
	_, _ = particles.GetParticle(ctx, &kinegatev1.GetParticleRequest{Key: &kinegatev1.GetParticleRequest_Name{Name: "p"}})
	_, err := particles.GetParticle(ctx, &kinegatev1.GetParticleRequest{Key: &kinegatev1.GetParticleRequest_Name{Name: secret}})
	wantReason(t, err, api.ParticleNotFound)
	_ = rawly(ctx, conn, "/no.Such/"+strings.Repeat("m", 500), nil)
	_ = rawly(ctx, conn, kinegatev1.SelectionService_Judge_FullMethodName, nil)
	eventually(t, "five lines", func() bool { return strings.Count(r.log.String(), "\n") == 5 })
	if strings.Contains(r.log.String(), secret) {
		t.Errorf("the log holds what a caller sent: %s", r.log)
	}
	want := []string{"level", "method", "code", "duration_ms", "received_count", "received_bytes", "sent_count",
		"sent_bytes", "identity", "request_id", "reference", "trace_id", "span_id", "message"}
	codes := map[string]int{}
	for text := range strings.Lines(r.log.String()) {
		var line map[string]any
		if err := json.Unmarshal([]byte(text), &line); err != nil {
			t.Errorf("%q: %v", text, err)
			continue
		}
		if line["message"] == "stream" {
			continue
		}
		code, _ := line["code"].(string)
		codes[code]++
		keys := slices.Sorted(maps.Keys(line))
		expected := slices.Clone(want)
		if code != "OK" {
			expected = append(expected, "reason")
		}
		slices.Sort(expected)
		if !slices.Equal(keys, expected) {
			t.Errorf("keys %v, want %v", keys, expected)
		}
		if line["request_id"] != "id-1" || len(line["method"].(string)) > maxMethod+3 {
			t.Errorf("line %v", line)
		}
	}
	if !maps.Equal(codes, map[string]int{"OK": 1, "NOT_FOUND": 1, "UNIMPLEMENTED": 1, "FAILED_PRECONDITION": 1}) {
		t.Errorf("codes %v", codes)
	}
}

func TestCodeNames(t *testing.T) {
	seen := map[string]bool{}
	for c := codes.OK; c <= codes.Unauthenticated; c++ {
		// UnmarshalJSON of gRPC knows the names of the specification.
		var back codes.Code
		if err := back.UnmarshalJSON([]byte(`"` + codeName(c) + `"`)); err != nil || back != c || seen[codeName(c)] {
			t.Errorf("code %d is named %q", c, codeName(c))
		}
		seen[codeName(c)] = true
	}
	if codeName(99) != "CODE_99" {
		t.Error(codeName(99))
	}
}

// TestHostileLabels: callers cannot add series.
func TestHostileLabels(t *testing.T) {
	r := start(t)
	conn := r.general(t)
	scrape := func() int {
		t.Helper()
		code, body := get(t, r.http(), "/metrics")
		if code != 200 {
			t.Fatal(code)
		}
		n := 0
		for line := range strings.Lines(body) {
			if !strings.HasPrefix(line, "#") {
				n++
			}
		}
		return n
	}
	methods := 500
	if os.Getenv("LONG_TESTS") != "" {
		methods = 10_000
	}
	flood := func() {
		t.Helper()
		for i := range methods {
			ctx := metadata.AppendToOutgoingContext(t.Context(), "x-request-id", fmt.Sprint("client", i%1000))
			_ = rawly(ctx, conn, fmt.Sprintf("/made.Up%d/Method%d", i, i), nil)
		}
	}
	flood()
	begun := time.Now()
	first := scrape()
	took := time.Since(begun)
	flood()
	// The scrape itself counts in the second pass: it is a series of the handler.
	if second := scrape(); second > first+3 || first > 1000 {
		t.Errorf("%d series, then %d", first, second)
	}
	figure(t, "O2 %d series after %d made-up methods of 1,000 clients, scraped in %.1f ms", first, methods, ms(took))
	if took > bound(50*time.Millisecond) {
		t.Errorf("the scrape took %v", took)
	}
	if n := r.metric(t, "rpc_server_calls_total", "_OTHER", "UNIMPLEMENTED"); n != float64(2*methods) {
		t.Errorf("%g calls of other methods", n)
	}
}

func TestScrapeFormats(t *testing.T) {
	r := start(t)
	if err := rawly(t.Context(), r.general(t), kinegatev1.InfoService_GetInfo_FullMethodName, nil); err != nil {
		t.Fatal(err)
	}
	client := r.http()
	_, text := get(t, client, "/metrics")
	for _, want := range []string{
		`rpc_server_call_duration_seconds_bucket{method="/kinegate.v1.InfoService/GetInfo",le="+Inf"} 1`,
		`rpc_server_calls_total{code="OK",method="/kinegate.v1.InfoService/GetInfo"} 1`,
		`kinegate_build_info{version="test"} 1`, "go_goroutines", "process_open_fds",
	} {
		if !strings.Contains(text, want) {
			t.Errorf("the text lacks %s", want)
		}
	}
	_, binary := fetch(t, client, "http://metrics/metrics",
		"application/vnd.google.protobuf;proto=io.prometheus.client.MetricFamily;encoding=delimited")
	if !strings.Contains(binary, "rpc_server_call_duration_seconds") || strings.Contains(binary, "# HELP") {
		t.Error("no binary form")
	}
}
