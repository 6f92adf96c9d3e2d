package telemetry

import (
	"fmt"
	"slices"
	"time"

	"github.com/prometheus/client_golang/prometheus"
)

// OtherMethod is the label of every method that is not registered, so that callers
// cannot add series by making up names.
const OtherMethod = "_OTHER"

// Shape of the native histograms. The factor gives buckets of 10 % width; the limit
// bounds the memory of one series whatever values come.
const (
	bucketFactor = 1.1
	maxBuckets   = 160
	minReset     = time.Hour
)

// Metrics are the metrics of one server. Labels hold a registered method, a code, a
// registered reason or a verdict: never a peer, an id or a text of a caller.
type Metrics struct {
	duration    *prometheus.HistogramVec
	calls       *prometheus.CounterVec
	inFlight    *prometheus.GaugeVec
	rejected    *prometheus.CounterVec
	panics      prometheus.Counter
	connections prometheus.Gauge
	draining    prometheus.Gauge
	expiry      *prometheus.GaugeVec
	reloaded    prometheus.Gauge
	selections  prometheus.Gauge
	settings    reloadMetrics
	work        workMetrics
	streams     streamMetrics
}

// NewMetrics returns the metrics of a server of the given version, registered on r.
// Two servers cannot share a registry.
func NewMetrics(r prometheus.Registerer, version string) (*Metrics, error) {
	m := &Metrics{
		duration: prometheus.NewHistogramVec(prometheus.HistogramOpts{
			Name: "rpc_server_call_duration_seconds",
			Help: "Time from the arrival of a call to its status, by method.",
			// The classic buckets are for scrapers without native histograms. Codes
			// stay on the counter, which keeps these few.
			Buckets:                         []float64{0.0005, 0.001, 0.0025, 0.005, 0.01, 0.025, 0.1, 0.5, 2.5, 10},
			NativeHistogramBucketFactor:     bucketFactor,
			NativeHistogramMaxBucketNumber:  maxBuckets,
			NativeHistogramMinResetDuration: minReset,
		}, []string{"method"}),
		calls: prometheus.NewCounterVec(prometheus.CounterOpts{
			Name: "rpc_server_calls_total",
			Help: "Finished calls, by method and code.",
		}, []string{"method", "code"}),
		inFlight: prometheus.NewGaugeVec(prometheus.GaugeOpts{
			Name: "rpc_server_calls_in_flight",
			Help: "Calls that have arrived and not finished, by method.",
		}, []string{"method"}),
		rejected: prometheus.NewCounterVec(prometheus.CounterOpts{
			Name: "rpc_server_rejected_total",
			Help: "Calls and connections refused before any work, by reason.",
		}, []string{"reason"}),
		panics: prometheus.NewCounter(prometheus.CounterOpts{
			Name: "kinegate_panics_total",
			Help: "Panics that were contained. Any is a fault of the program.",
		}),
		connections: prometheus.NewGauge(prometheus.GaugeOpts{
			Name: "rpc_server_connections",
			Help: "Open connections on the rpc listeners.",
		}),
		draining: prometheus.NewGauge(prometheus.GaugeOpts{
			Name: "kinegate_draining",
			Help: "1 from the moment the server was told to stop, else 0.",
		}),
		expiry: prometheus.NewGaugeVec(prometheus.GaugeOpts{
			Name: "kinegate_certificate_expiry_timestamp_seconds",
			Help: "End of validity of the earliest certificate in use, by use.",
		}, []string{"use"}),
		reloaded: prometheus.NewGauge(prometheus.GaugeOpts{
			Name: "kinegate_certificate_reload_success",
			Help: "1 if the certificate files were sound when last read, 0 if the old set is kept.",
		}),
		selections: prometheus.NewGauge(prometheus.GaugeOpts{
			Name: "kinegate_selection_reload_success",
			Help: "1 if every file of the folder of selections was sound when last read, 0 if an old version is kept.",
		}),
		settings: newReloadMetrics(),
		work:     newWorkMetrics(),
		streams:  newStreamMetrics(),
	}
	build := prometheus.NewGauge(prometheus.GaugeOpts{
		Name:        "kinegate_build_info",
		Help:        "Always 1; the label holds the version of the program.",
		ConstLabels: prometheus.Labels{"version": version},
	})
	build.Set(1)
	all := slices.Concat(m.streams.all(), m.work.all(), m.settings.all())
	all = append(all, m.duration, m.calls, m.inFlight, m.rejected, m.panics,
		m.connections, m.draining, m.expiry, m.reloaded, m.selections, build)
	for _, c := range all {
		if err := r.Register(c); err != nil {
			return nil, fmt.Errorf("registering a metric: %w", err)
		}
	}
	return m, nil
}

// CallStarted counts a call in.
func (m *Metrics) CallStarted(method string) { m.inFlight.WithLabelValues(method).Inc() }

// CallDone counts a call out. The trace, if there is one, becomes an example of calls
// that took as long.
func (m *Metrics) CallDone(method, code string, took time.Duration, trace string) {
	m.inFlight.WithLabelValues(method).Dec()
	m.calls.WithLabelValues(method, code).Inc()
	duration := m.duration.WithLabelValues(method)
	if exemplary, ok := duration.(prometheus.ExemplarObserver); ok && trace != "" {
		exemplary.ObserveWithExemplar(took.Seconds(), prometheus.Labels{"trace_id": trace})
		return
	}
	duration.Observe(took.Seconds())
}

// Rejected counts a call or connection refused before any work.
func (m *Metrics) Rejected(reason string) { m.rejected.WithLabelValues(reason).Inc() }

// Panicked counts a contained panic.
func (m *Metrics) Panicked() { m.panics.Inc() }

// Connections changes the number of open connections by delta.
func (m *Metrics) Connections(delta int) { m.connections.Add(float64(delta)) }

// Draining says that the server was told to stop.
func (m *Metrics) Draining() { m.draining.Set(1) }

// CertificateExpiry sets the end of validity for a use: "server" or "client_ca".
func (m *Metrics) CertificateExpiry(use string, end time.Time) {
	m.expiry.WithLabelValues(use).Set(float64(end.Unix()))
}

// CertificatesReloaded says whether the files were sound when last read.
func (m *Metrics) CertificatesReloaded(sound bool) {
	m.reloaded.Set(0)
	if sound {
		m.reloaded.Set(1)
	}
}

// SelectionsReloaded says whether the folder of selections was sound when last read.
func (m *Metrics) SelectionsReloaded(sound bool) {
	m.selections.Set(0)
	if sound {
		m.selections.Set(1)
	}
}

// CountDropped exports a count of lost log lines.
func CountDropped(r prometheus.Registerer, dropped func() uint64) error {
	err := r.Register(prometheus.NewCounterFunc(prometheus.CounterOpts{
		Name: "kinegate_log_lines_dropped_total",
		Help: "Log lines lost because nobody took them in time, or held back as too many.",
	}, func() float64 { return float64(dropped()) }))
	if err != nil {
		return fmt.Errorf("registering a metric: %w", err)
	}
	return nil
}
