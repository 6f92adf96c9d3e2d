package server

import (
	"context"
	"errors"
	"sync"
	"time"
)

// ErrCut says that what was still open was cut: the time to drain was over, or there was a
// second signal.
var ErrCut = errors.New("what was still open was cut: the time to drain was over or there was a second signal")

// Shutdown stops the server in the steps that lose no call of a client that watches
// health: NOT_SERVING, then service as before for the notice, then the end of watches
// and streams, then a wait for calls to finish. When drain_time is over or ctx ends,
// connections are cut; it then returns ErrCut. It returns when everything is closed.
// A second call waits for the first.
func (s *Server) Shutdown(ctx context.Context) error {
	s.mu.Lock()
	first := !s.shutting
	s.shutting = true
	s.mu.Unlock()
	if !first {
		<-s.stopped
		return nil
	}
	defer close(s.stopped)
	s.metrics.Draining()
	s.health.setReady(false)
	pause(ctx, s.options.DrainNotice)
	close(s.leaving)
	ctx, cancel := context.WithTimeout(ctx, s.options.DrainTime)
	defer cancel()
	drained := make(chan struct{})
	go func() {
		defer close(drained)
		var both sync.WaitGroup
		both.Go(s.fronts[Gate].server.GracefulStop)
		both.Go(s.fronts[General].server.GracefulStop)
		both.Wait()
	}()
	var err error
	select {
	case <-drained:
	case <-ctx.Done():
		err = ErrCut
	}
	s.stop()
	return err
}

// stop closes everything and waits for handlers, at most for the margin: a handler that
// does not return then cannot hold up the end of the process.
func (s *Server) stop() {
	done := make(chan struct{})
	go func() {
		defer close(done)
		var all sync.WaitGroup
		for _, f := range s.fronts {
			all.Go(f.server.Stop)
		}
		for _, w := range s.webs {
			all.Go(func() { _ = w.Close() })
		}
		all.Wait()
		// Those that were never served are still open; closing the others again does
		// no harm.
		s.mu.Lock()
		defer s.mu.Unlock()
		for _, l := range s.listeners {
			_ = l.Close()
		}
	}()
	margin := time.NewTimer(s.options.StopMargin)
	defer margin.Stop()
	select {
	case <-done:
	case <-margin.C:
		s.log().Error().Msg("a handler did not return after its connection was cut")
	}
}

// pause waits for a time or the end of the context.
func pause(ctx context.Context, d time.Duration) {
	timer := time.NewTimer(d)
	defer timer.Stop()
	select {
	case <-timer.C:
	case <-ctx.Done():
	}
}
