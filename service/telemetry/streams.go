package telemetry

import (
	"time"

	"github.com/prometheus/client_golang/prometheus"
)

// streamMetrics are the metrics of judge streams.
type streamMetrics struct {
	open    prometheus.Gauge
	closed  *prometheus.CounterVec
	events  *prometheus.CounterVec
	latency prometheus.Histogram
	credit  prometheus.Gauge
	passed  *prometheus.CounterVec
}

func newStreamMetrics() streamMetrics {
	return streamMetrics{
		open: prometheus.NewGauge(prometheus.GaugeOpts{
			Name: "kinegate_judge_streams_open",
			Help: "Judge streams that were opened and have not ended.",
		}),
		closed: prometheus.NewCounterVec(prometheus.CounterOpts{
			Name: "kinegate_judge_streams_closed_total",
			Help: "Judge streams that ended, by reason; done and draining are no failures.",
		}, []string{"reason"}),
		events: prometheus.NewCounterVec(prometheus.CounterOpts{
			Name: "kinegate_judge_events_total",
			Help: "Events answered, by verdict.",
		}, []string{"verdict"}),
		latency: prometheus.NewHistogram(prometheus.HistogramOpts{
			Name:                            "kinegate_judge_block_latency_seconds",
			Help:                            "Time from the receipt of an event block to its answer.",
			NativeHistogramBucketFactor:     bucketFactor,
			NativeHistogramMaxBucketNumber:  maxBuckets,
			NativeHistogramMinResetDuration: minReset,
		}),
		credit: prometheus.NewGauge(prometheus.GaugeOpts{
			Name: "kinegate_judge_credit_bytes",
			Help: "Byte credit handed out to open judge streams.",
		}),
		passed: prometheus.NewCounterVec(prometheus.CounterOpts{
			Name: "kinegate_judge_versions_passed_over_total",
			Help: "New versions of a selection that a stream which follows it could not take, by reason.",
		}, []string{"reason"}),
	}
}

func (s streamMetrics) all() []prometheus.Collector {
	return []prometheus.Collector{s.open, s.closed, s.events, s.latency, s.credit, s.passed}
}

// StreamOpened counts an accepted opening.
func (m *Metrics) StreamOpened() { m.streams.open.Inc() }

// StreamClosed counts the end of an opened stream.
func (m *Metrics) StreamClosed(reason string) {
	m.streams.open.Dec()
	m.streams.closed.WithLabelValues(reason).Inc()
}

// EventsJudged counts events by verdict.
func (m *Metrics) EventsJudged(verdict string, count int) {
	m.streams.events.WithLabelValues(verdict).Add(float64(count))
}

// BlockAnswered measures the time from the receipt of a block to its answer.
func (m *Metrics) BlockAnswered(latency time.Duration) {
	m.streams.latency.Observe(latency.Seconds())
}

// CreditHeld changes the sum of byte credits handed out by delta.
func (m *Metrics) CreditHeld(delta int64) { m.streams.credit.Add(float64(delta)) }

// VersionPassedOver counts a newer version that a stream could not take.
func (m *Metrics) VersionPassedOver(reason string) { m.streams.passed.WithLabelValues(reason).Inc() }
