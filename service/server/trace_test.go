package server

import (
	"strings"
	"testing"

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
