package main

import (
	"errors"
	"fmt"
	"os"
	"strconv"
	"time"

	"golang.org/x/sys/unix"
)

// shortSlice is the least that Linux grants.
const shortSlice = 100 * time.Microsecond

// keepSlicesShort asks the kernel to let every thread of the process run for a short while at
// a time, as often as before. A thread that wakes for a verdict or a refusal then waits behind
// bulk work, of this process or another, that much less: it may take the processor from a
// thread with longer slices at once. No privilege is needed; Linux before 6.12 takes no notice.
// Threads to come have it from those that start them.
func keepSlicesShort() error {
	const threads = "/proc/self/task"
	asked := map[string]bool{}
	for more := true; more; { // a thread may have started another before it was asked
		more = false
		list, err := os.ReadDir(threads)
		if err != nil {
			return fmt.Errorf("listing threads: %w", err)
		}
		for _, thread := range list {
			if asked[thread.Name()] {
				continue
			}
			asked[thread.Name()], more = true, true
			id, err := strconv.Atoi(thread.Name())
			if err == nil {
				err = keepShort(id)
			}
			if err != nil && !errors.Is(err, unix.ESRCH) { // it has ended
				return err
			}
		}
	}
	return nil
}

// keepShort asks for short slices for a thread that is scheduled as usual.
func keepShort(thread int) error {
	attributes, err := unix.SchedGetAttr(thread, 0)
	if err != nil {
		return fmt.Errorf("reading how a thread is scheduled: %w", err)
	}
	if attributes.Policy != unix.SCHED_NORMAL {
		return nil // somebody has decided
	}
	attributes.Runtime = uint64(shortSlice)
	if err := unix.SchedSetAttr(thread, attributes, 0); err != nil {
		return fmt.Errorf("changing how a thread is scheduled: %w", err)
	}
	return nil
}
