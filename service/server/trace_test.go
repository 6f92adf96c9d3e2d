package server

import (
	"strings"
	"syscall"
	"testing"
	"time"

	"google.golang.org/grpc"
	"google.golang.org/grpc/metadata"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// Parts of the examples in the W3C's recommendation Trace Context, section 3.2.
const (
	traceID = "4bf92f3577b34da6a3ce929d0e0e4736"
	spanID  = "00f067aa0ba902b7"
)

func TestParseTraceparent(t *testing.T) {
	zeros := strings.Repeat("0", 32)
	for text, want := range map[string]struct {
		id      string
		sampled bool
	}{
		"00-" + traceID + "-" + spanID + "-01":                  {traceID, true},
		"00-" + traceID + "-" + spanID + "-00":                  {traceID, false},
		"00-" + traceID + "-" + spanID + "-03":                  {traceID, true},
		"cc-" + traceID + "-" + spanID + "-01-what-comes-later": {traceID, true},
		"cc-" + traceID + "-" + spanID + "-01.":                 {},
		"00-" + traceID + "-" + spanID + "-01-more":             {},
		"ff-" + traceID + "-" + spanID + "-01":                  {},
		"00-" + zeros + "-" + spanID + "-01":                    {},
		"00-" + traceID + "-" + zeros[:16] + "-01":              {},
		"00-" + strings.ToUpper(traceID) + "-" + spanID + "-01": {},
		"00-" + traceID + "-" + spanID + "-0x":                  {},
		"00-" + traceID + spanID + "--01":                       {},
		"00-" + traceID + "-" + spanID:                          {},
		"":                                                      {},
		strings.Repeat("-", 55):                                 {},
	} {
		if id, sampled := parseTraceparent(text); id != want.id || sampled != want.sampled {
			t.Errorf("%q: %q %v", text, id, sampled)
		}
	}
}

// TestTraceJoins follows a trace id into the log, the reply and the metric.
func TestTraceJoins(t *testing.T) {
	r := start(t)
	client := kinegatev1.NewInfoServiceClient(r.general(t))
	ask := func(parent string) []string {
		t.Helper()
		ctx := metadata.AppendToOutgoingContext(t.Context(), "traceparent", parent)
		var header metadata.MD
		if _, err := client.GetInfo(ctx, &kinegatev1.GetInfoRequest{}, grpc.Header(&header)); err != nil {
			t.Fatal(err)
		}
		return header.Get("traceparent")
	}
	got := ask("00-" + traceID + "-" + spanID + "-01")
	if len(got) != 1 || !strings.HasPrefix(got[0], "00-"+traceID+"-") || strings.Contains(got[0], spanID) || !strings.HasSuffix(got[0], "-01") {
		t.Errorf("the reply has %q", got)
	}
	eventually(t, "the trace in the log", func() bool { return strings.Contains(r.log.String(), `"trace_id":"`+traceID+`"`) })
	_, text := fetch(t, r.http(), "http://metrics/metrics", "application/openmetrics-text; version=1.0.0")
	if !strings.Contains(text, `# {trace_id="`+traceID+`"}`) {
		t.Error("no metric names the trace")
	}
	own := ask("not a trace")
	if id, sampled := parseTraceparent(own[0]); id == "" || id == traceID || sampled {
		t.Errorf("a malformed trace is answered with %q", own)
	}
	var trailer metadata.MD
	ctx := metadata.AppendToOutgoingContext(t.Context(), "traceparent", "00-"+traceID+"-"+spanID+"-00")
	_, err := kinegatev1.NewParticleServiceClient(r.general(t)).GetParticle(ctx, &kinegatev1.GetParticleRequest{}, grpc.Trailer(&trailer))
	if got := trailer.Get("traceparent"); err == nil || len(got) != 1 || !strings.HasPrefix(got[0], "00-"+traceID+"-") {
		t.Errorf("a failure: %v, trailer %q", err, got)
	}
}

// TestTracesCostLittle compares what the trace of a call costs with what an
// ordinary call costs the server, taken as half of what it costs client and server together.
func TestTracesCostLittle(t *testing.T) {
	operations(t)
	r := start(t, onSockets)
	ctx := metadata.NewIncomingContext(t.Context(), metadata.Pairs(traceKey, "00-0af7651916cd43dd8448eb211c80319c-b7ad6b7169203331-01"))
	request, _ := seeds()[0].(*kinegatev1.DescribeReactionRequest)
	client := kinegatev1.NewReactionServiceClient(connect(t, r.Addr(General).String()))
	const calls = 20_000
	used := func() time.Duration {
		var u syscall.Rusage
		if err := syscall.Getrusage(syscall.RUSAGE_SELF, &u); err != nil {
			t.Fatal(err)
		}
		return time.Duration(u.Utime.Nano() + u.Stime.Nano())
	}
	const traces = 1_000_000
	before := used()
	for range traces {
		_ = metadata.MD{traceKey: {traceOf(ctx).header()}}
	}
	trace := (used() - before).Nanoseconds() / traces
	before = used()
	for range calls {
		if _, err := client.DescribeReaction(t.Context(), request); err != nil {
			t.Fatal(err)
		}
	}
	call := (used() - before).Nanoseconds() / calls / 2
	share := float64(trace) / float64(call)
	figure(t, "O8 the trace of a call takes %d ns of %d ns: %.1f %%", trace, call, 100*share)
	if share > 0.03 {
		t.Errorf("%.1f %%", 100*share)
	}
}
