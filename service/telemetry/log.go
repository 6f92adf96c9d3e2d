package telemetry

import (
	"io"
	"time"

	"github.com/rs/zerolog"
)

// burstPeriod is the time that a burst of lines is counted in. Lines kept beyond the
// burst of calls that went well are bounded by another burst, so that no flood writes more
// than four bursts in it.
const burstPeriod = time.Second

// Sampling says how many lines of finished calls are written. Above the burst some
// lines of calls that went well are kept, and none of those that failed: metrics count
// every call, lines are for examples.
type Sampling struct {
	// Burst is how many lines of each kind are written in a second before any is held
	// back.
	Burst int
	// KeepOneIn is how many lines of calls that went well are held back for each that
	// is kept.
	KeepOneIn int
}

// NewLogger returns a logger that writes JSON lines to w, from the given level up.
// The level is one of debug, info, warn, error.
func NewLogger(w io.Writer, level string) (zerolog.Logger, error) {
	parsed, err := zerolog.ParseLevel(level)
	if err != nil {
		return zerolog.Nop(), err
	}
	return zerolog.New(w).Level(parsed).With().Timestamp().Logger(), nil
}

// CallLog writes one line for each finished call.
type CallLog struct {
	well, refused, failed zerolog.Logger
}

// NewCallLog returns a CallLog on a logger; dropped is called for each line of a
// failed call that was held back, and may be nil.
func NewCallLog(log zerolog.Logger, sampling Sampling, dropped func()) *CallLog {
	if dropped == nil {
		dropped = func() {}
	}
	burst := func(then zerolog.Sampler) zerolog.Logger {
		return log.Sample(&zerolog.BurstSampler{Burst: uint32(sampling.Burst), Period: burstPeriod, NextSampler: then}) //nolint:gosec // at most 1<<30
	}
	return &CallLog{
		well: burst(both{
			&zerolog.BasicSampler{N: uint32(sampling.KeepOneIn)},                      //nolint:gosec // at most 1<<30
			&zerolog.BurstSampler{Burst: uint32(sampling.Burst), Period: burstPeriod}, //nolint:gosec // at most 1<<30
		}),
		refused: burst(held(dropped)),
		// Apart from the refused ones, so that a flood of those hides no fault of ours.
		failed: burst(held(dropped)),
	}
}

// Well starts the line of a call that was answered.
func (c *CallLog) Well() *zerolog.Event { return c.well.Info() } //nolint:zerologlint // the caller sends it

// Refused starts the line of a call that its caller must change or repeat.
func (c *CallLog) Refused() *zerolog.Event { return c.refused.Warn() } //nolint:zerologlint // the caller sends it

// Failed starts the line of a call that met a fault of ours.
func (c *CallLog) Failed() *zerolog.Event { return c.failed.Error() } //nolint:zerologlint // the caller sends it

// both keeps what its first sampler keeps and its second does too.
type both [2]zerolog.Sampler

// Sample asks the second for what the first keeps.
func (b both) Sample(level zerolog.Level) bool { return b[0].Sample(level) && b[1].Sample(level) }

// held is a sampler that keeps nothing and counts.
type held func()

// Sample counts a line held back.
func (h held) Sample(zerolog.Level) bool {
	h()
	return false
}
