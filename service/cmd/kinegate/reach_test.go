package main

import (
	"testing"
	"time"
)

// TestWaitingForAServer asks at the address of a server that starts a little later.
func TestWaitingForAServer(t *testing.T) {
	s := serveAt(t)
	s.kill()
	later := time.AfterFunc(time.Second, s.start)
	defer later.Stop()
	code, _, errs := command(t, "particle", "K+", "--address", s.socket("general"), "--wait")
	if code != exitWell {
		t.Errorf("code %d, says %s", code, errs)
	}
	if code, _, errs = command(t, "particle", "K+", "--address", s.socket("none")); code != exitFailed {
		t.Errorf("where nobody listens: code %d, says %s", code, errs)
	}
}
