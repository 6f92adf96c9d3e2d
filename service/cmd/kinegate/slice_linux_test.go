package main

import (
	"fmt"
	"os"
	"strconv"
	"testing"
	"time"

	"golang.org/x/sys/unix"
)

// TestSlicesAreShort holds that every thread of a server runs for a short while at a time,
// where the kernel grants that.
func TestSlicesAreShort(t *testing.T) {
	if !granted(t) {
		t.Skip("this kernel takes no wishes for slices")
	}
	p, where := startServing(t, "--drain-notice", "0s")
	defer func() {
		_ = p.Process.Kill()
		_ = p.Wait() // it was killed
	}()
	metrics(t, where["metrics"]) // it has answered
	threads, err := os.ReadDir(fmt.Sprintf("/proc/%d/task", p.Process.Pid))
	if err != nil {
		t.Fatal(err)
	}
	if len(threads) < 2 {
		t.Fatalf("only %d threads", len(threads))
	}
	for _, thread := range threads {
		id, err := strconv.Atoi(thread.Name())
		if err != nil {
			t.Fatal(err)
		}
		attributes, err := unix.SchedGetAttr(id, 0)
		if err != nil {
			t.Fatal(err)
		}
		if got := time.Duration(attributes.Runtime); got != shortSlice {
			t.Errorf("thread %d has slices of %v", id, got)
		}
	}
}

// granted reports whether the kernel grants slices, as Linux does since 6.12: it then says
// how long those of a thread are.
func granted(t *testing.T) bool {
	t.Helper()
	attributes, err := unix.SchedGetAttr(0, 0)
	if err != nil {
		t.Fatal(err)
	}
	return attributes.Policy == unix.SCHED_NORMAL && attributes.Runtime > 0
}
