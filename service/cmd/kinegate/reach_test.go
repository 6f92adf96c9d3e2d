package main

import (
	"testing"
	"time"
)

// TestWaitingForAServer asks at the address of a server that starts a little later.
func TestWaitingForAServer(t *testing.T) {
	s := serveAt(t)
	s.kill()
	started := make(chan struct{})
	time.AfterFunc(time.Second, func() {
		s.start()
		close(started)
	})
	code, _, errs := command(t, "particle", "K+", "--address", s.socket("general"), "--wait")
	<-started
	if code != exitWell {
		t.Errorf("code %d, says %s", code, errs)
	}
	if code, _, errs = command(t, "particle", "K+", "--address", s.socket("none")); code != exitFailed {
		t.Errorf("where nobody listens: code %d, says %s", code, errs)
	}
}
