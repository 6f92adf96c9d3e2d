package telemetry

import (
	"time"

	"github.com/prometheus/client_golang/prometheus"
)

// workMetrics are the metrics of admission by cost.
type workMetrics struct {
	slots, inUse prometheus.Gauge
	queued       prometheus.Histogram
}

func newWorkMetrics() workMetrics {
	return workMetrics{
		slots: prometheus.NewGauge(prometheus.GaugeOpts{
			Name: "kinegate_work_slots",
			Help: "Work that the general listener does at a time, in processors kept busy.",
		}),
		inUse: prometheus.NewGauge(prometheus.GaugeOpts{
			Name: "kinegate_work_slots_in_use",
			Help: "Work under way on the general listener, in the same measure; cheap calls take parts of a slot.",
		}),
		queued: prometheus.NewHistogram(prometheus.HistogramOpts{
			Name:                            "kinegate_work_queue_seconds",
			Help:                            "Time that admitted work waited for a slot.",
			NativeHistogramBucketFactor:     bucketFactor,
			NativeHistogramMaxBucketNumber:  maxBuckets,
			NativeHistogramMinResetDuration: minReset,
		}),
	}
}

func (w workMetrics) all() []prometheus.Collector {
	return []prometheus.Collector{w.slots, w.inUse, w.queued}
}

// WorkSlots says how much work is done at a time.
func (m *Metrics) WorkSlots(slots int) { m.work.slots.Set(float64(slots)) }

// WorkInUse says how much work is under way, in slots.
func (m *Metrics) WorkInUse(slots float64) { m.work.inUse.Set(slots) }

// WorkAdmitted measures how long work waited.
func (m *Metrics) WorkAdmitted(waited time.Duration) { m.work.queued.Observe(waited.Seconds()) }

// reloadMetrics tell how reading the settings again went.
type reloadMetrics struct {
	success, when prometheus.Gauge
}

func newReloadMetrics() reloadMetrics {
	return reloadMetrics{
		success: prometheus.NewGauge(prometheus.GaugeOpts{
			Name: "kinegate_config_reload_success",
			Help: "1 if settings and access file were sound when last read, 0 if the old ones are kept.",
		}),
		when: prometheus.NewGauge(prometheus.GaugeOpts{
			Name: "kinegate_config_reload_success_timestamp_seconds",
			Help: "When settings and access file were last read and found sound.",
		}),
	}
}

func (r reloadMetrics) all() []prometheus.Collector {
	return []prometheus.Collector{r.success, r.when}
}

// SettingsReloaded says whether settings and access file were sound when read at a time.
func (m *Metrics) SettingsReloaded(sound bool, at time.Time) {
	if !sound {
		m.settings.success.Set(0)
		return
	}
	m.settings.success.Set(1)
	m.settings.when.Set(float64(at.UnixNano()) / float64(time.Second))
}
