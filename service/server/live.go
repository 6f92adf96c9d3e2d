package server

import (
	"context"
	"crypto/sha256"
	"errors"
	"fmt"
	"slices"
	"time"

	"github.com/rs/zerolog"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/service/telemetry"
)

// settingsPeriod is how often the settings and the access file are looked at. As with
// certificates, content decides.
const settingsPeriod = time.Second

// inUse is everything that a running server can take anew. A call keeps what it began
// with, so that no call sees half of a change.
type inUse struct {
	options Options
	access  *access // nil allows all
	sum     [sha256.Size]byte
	log     zerolog.Logger
	callLog *telemetry.CallLog
}

// reloadable are the settings that a running server takes anew. Certificates and
// selections are not among them: their files are watched under the same names.
func reloadable() []string {
	return []string{
		"access_file", "gate_streams", "general_streams", "caller_calls", "work_slots",
		"default_deadline", "longest_deadline", "log_level", "log_burst", "log_keep_one_in",
	}
}

// Reloads reports whether a running server takes a new value of the setting.
func (s Setting) Reloads() bool { return slices.Contains(reloadable(), s.Name) }

// prepare makes what a server would use with the options.
func (s *Server) prepare(o Options) (*inUse, error) {
	use := &inUse{options: o}
	if o.AccessFile != "" {
		var err error
		if use.access, err = readAccess(o.AccessFile); err != nil {
			return nil, err
		}
	}
	use.sum = sha256.Sum256(fmt.Appendf(nil, "%+v %+v", o, use.access))
	level, err := zerolog.ParseLevel(o.LogLevel)
	if err != nil {
		return nil, fmt.Errorf("log_level: %w", err)
	}
	use.log = s.deps.Log.Level(level)
	use.callLog = telemetry.NewCallLog(use.log, telemetry.Sampling{Burst: o.LogBurst, KeepOneIn: o.LogKeepOneIn}, s.deps.LogHeld)
	return use, nil
}

// log is the logger with the level in use.
func (s *Server) log() *zerolog.Logger { return &s.current.Load().log }

// Reload reads the settings again, through Deps.Settings, and the access file, and
// takes them into use at once if they are sound and differ only in settings that a
// running server can change. Otherwise the old ones stay. Streams whose callers have
// lost access end.
func (s *Server) Reload() error {
	s.reloading.Lock()
	defer s.reloading.Unlock()
	changed, err := s.reload()
	s.metrics.SettingsReloaded(err == nil, time.Now())
	text := ""
	if err != nil {
		text = err.Error()
	}
	switch {
	case err != nil && text != s.lastFault:
		s.log().Error().Err(err).Msg("settings are bad, the old ones stay in use")
	case changed:
		s.log().Info().Msg("settings have changed, the new ones are in use")
	}
	s.lastFault = text
	if changed {
		s.streams.look(time.Now())
	}
	return err
}

// reload is Reload without its report.
func (s *Server) reload() (changed bool, err error) {
	old := s.current.Load()
	options := old.options
	if s.deps.Settings != nil {
		if options, err = s.deps.Settings(); err != nil {
			return false, err
		}
		options.adoptMemoryLimit()
		if err := errors.Join(options.Validate(), fixedFaults(&old.options, &options).Err()); err != nil {
			return false, err
		}
	}
	use, err := s.prepare(options)
	if err != nil || use.sum == old.sum {
		return false, err
	}
	s.current.Store(use)
	s.metrics.WorkSlots(options.slots())
	return true, nil
}

// fixedFaults are the settings that differ and that only a new process takes.
func fixedFaults(old, options *Options) fault.List {
	var faults fault.List
	for _, setting := range Settings() {
		before, after := setting.In(old).String(), setting.In(options).String()
		if before != after && !setting.Reloads() {
			faults = append(faults, fault.New(fault.Invalid, setting.Name, after, before+", as the server was started with").
				Because("it changes with a restart only"))
		}
	}
	return faults
}

// watchSettings reloads until the context ends.
func (s *Server) watchSettings(ctx context.Context) {
	ticker := time.NewTicker(settingsPeriod)
	defer ticker.Stop()
	for {
		select {
		case <-ctx.Done():
			return
		case <-ticker.C:
			_ = s.Reload() // it has reported
		}
	}
}
