package telemetry

import (
	"flag"
	"fmt"
	"math"
	"os"
	"slices"
	"strings"
	"testing"
	"time"

	"github.com/prometheus/client_golang/prometheus"
	"github.com/prometheus/client_golang/prometheus/testutil/promlint"
	dto "github.com/prometheus/client_model/go"
)

var update = flag.Bool("update", false, "rewrite testdata/metrics.txt and deploy/metrics.md")

// used returns metrics that have seen one of everything, with their registry.
func used(t *testing.T) (*Metrics, *prometheus.Registry) {
	t.Helper()
	registry := prometheus.NewRegistry()
	m, err := NewMetrics(registry, "1.2.3")
	if err != nil {
		t.Fatal(err)
	}
	if err := CountDropped(registry, func() uint64 { return 7 }); err != nil {
		t.Fatal(err)
	}
	m.CallStarted("/a/B")
	m.CallDone("/a/B", "OK", time.Millisecond, "")
	m.Rejected("SERVER_OVERLOADED")
	m.Panicked()
	m.Connections(1)
	m.Draining()
	m.CertificateExpiry("server", time.Unix(1, 0))
	m.CertificatesReloaded(true)
	m.SettingsReloaded(true, time.Unix(1, 0))
	m.WorkSlots(2)
	m.WorkInUse(0.5)
	m.WorkAdmitted(time.Millisecond)
	m.StreamOpened()
	m.StreamClosed("done")
	m.EventsJudged("accepted", 3)
	m.BlockAnswered(time.Millisecond)
	m.CreditHeld(4096)
	m.VersionPassedOver("REPLY_TOO_LARGE")
	return m, registry
}

// TestMetricsAreAContract compares names, types, labels and help with the golden list and
// the operator's page: alerts and dashboards rest on them.
func TestMetricsAreAContract(t *testing.T) {
	_, registry := used(t)
	families, err := registry.Gather()
	if err != nil {
		t.Fatal(err)
	}
	var page strings.Builder
	page.WriteString("<!-- Made by `go test ./service/telemetry -update`. -->\n# Metrics\n\n" +
		"What `/metrics` shows beside the metrics of the Go runtime, of the process and of the page itself.\n\n" +
		"| metric | type | labels | |\n| --- | --- | --- | --- |\n")
	var got []string
	for _, f := range families {
		var labels []string
		for _, l := range f.GetMetric()[0].GetLabel() {
			labels = append(labels, l.GetName())
			if slices.Contains([]string{"service", "job", "instance", "peer", "message"}, l.GetName()) {
				t.Errorf("%s has the label %s", f.GetName(), l.GetName())
			}
		}
		got = append(got, fmt.Sprintf("%s %s {%s}: %s", f.GetName(), strings.ToLower(f.GetType().String()),
			strings.Join(labels, ","), f.GetHelp()))
		fmt.Fprintf(&page, "| `%s` | %s | %s | %s |\n", f.GetName(), strings.ToLower(f.GetType().String()),
			strings.Join(labels, ", "), f.GetHelp())
	}
	for path, text := range map[string]string{"testdata/metrics.txt": strings.Join(got, "\n") + "\n", "../../deploy/metrics.md": page.String()} {
		if *update {
			if err := os.WriteFile(path, []byte(text), 0o600); err != nil {
				t.Fatal(err)
			}
		}
		golden, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		if text != string(golden) {
			t.Errorf("differs from %s:\n%s", path, text)
		}
	}
	problems, err := promlint.NewWithMetricFamilies(families).Lint()
	if err != nil || len(problems) > 0 {
		t.Errorf("lint: %v %v", problems, err)
	}
}

func TestTwoServersHaveTheirOwn(t *testing.T) {
	a, ra := used(t)
	_, rb := used(t)
	a.Panicked()
	if counter(t, ra, "kinegate_panics_total") != 2 || counter(t, rb, "kinegate_panics_total") != 1 {
		t.Error("two servers share a metric")
	}
	if _, err := NewMetrics(ra, "x"); err == nil {
		t.Error("two servers share a registry")
	}
}

func counter(t *testing.T, registry *prometheus.Registry, name string) float64 {
	t.Helper()
	return family(t, registry, name).GetMetric()[0].GetCounter().GetValue()
}

func family(t *testing.T, registry *prometheus.Registry, name string) *dto.MetricFamily {
	t.Helper()
	families, err := registry.Gather()
	if err != nil {
		t.Fatal(err)
	}
	for _, f := range families {
		if f.GetName() == name {
			return f
		}
	}
	t.Fatalf("no metric %s", name)
	return nil
}

// TestNativeHistogramsAreBounded feeds twelve decades.
func TestNativeHistogramsAreBounded(t *testing.T) {
	m, registry := used(t)
	for i := range 12000 {
		d := time.Duration(math.Pow(10, float64(i%12000)/1000) * float64(time.Nanosecond))
		m.CallStarted("/a/B")
		m.CallDone("/a/B", "OK", d, "")
		m.BlockAnswered(d)
	}
	for _, name := range []string{"rpc_server_call_duration_seconds", "kinegate_judge_block_latency_seconds"} {
		h := family(t, registry, name).GetMetric()[0].GetHistogram()
		buckets := len(h.GetPositiveDelta())
		if h.GetSampleCount() != 12001 || buckets == 0 || buckets > maxBuckets || len(h.GetPositiveSpan()) == 0 {
			t.Errorf("%s: %d samples in %d buckets", name, h.GetSampleCount(), buckets)
		}
	}
	if n := len(family(t, registry, "rpc_server_call_duration_seconds").GetMetric()[0].GetHistogram().GetBucket()); n < 5 {
		t.Errorf("%d classic buckets", n)
	}
}
