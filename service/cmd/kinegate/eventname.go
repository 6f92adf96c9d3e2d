package main

import (
	"errors"
	"fmt"
	"io"
	"slices"
	"strconv"
	"strings"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/cmd/kinegate/internal/eventfile"
)

// eventName is an event as --explain names it; run is nil for any.
type eventName struct {
	run   *int64
	event int64
}

// parseEventName reads EVENT or RUN:EVENT.
func parseEventName(text string) (eventName, error) {
	run, event, both := strings.Cut(text, ":")
	if !both {
		run, event = "", text
	}
	bad := badInput("--explain %q: EVENT or RUN:EVENT is needed, in whole numbers, such as 4 or 12:4", text)
	var n eventName
	var err error
	if n.event, err = strconv.ParseInt(strings.TrimSpace(event), 10, 64); err != nil {
		return n, bad
	}
	if !both {
		return n, nil
	}
	number, err := strconv.ParseInt(strings.TrimSpace(run), 10, 64)
	if err != nil {
		return n, bad
	}
	n.run = &number
	return n, nil
}

// foundEvent is where an event of a run stands first, and how often the run has it.
type foundEvent struct {
	run   int64
	block *kinegatev1.EventBlock
	at    int
	count int
}

// find finds the event in every run that has it.
func (n *eventName) find(next func() (*batch[eventfile.Event], error)) ([]*foundEvent, error) {
	var found []*foundEvent
	for {
		b, err := next()
		if errors.Is(err, io.EOF) {
			return found, nil
		}
		if err != nil {
			return nil, err
		}
		for at, e := range b.events {
			if e.ID != n.event || n.run != nil && e.Run != *n.run {
				continue
			}
			i := slices.IndexFunc(found, func(f *foundEvent) bool { return f.run == e.Run })
			if i < 0 {
				i = len(found)
				found = append(found, &foundEvent{run: e.Run, block: b.block, at: at})
			}
			found[i].count++
		}
	}
}

// runNames lists the runs that have an event, no more than can be read.
func runNames(found []*foundEvent) string {
	const most = 5
	var names []string
	for i, f := range found {
		if i == most {
			names = append(names, fmt.Sprintf("%d more", len(found)-most))
			break
		}
		names = append(names, fmt.Sprintf("run %d", f.run))
	}
	last := len(names) - 1
	return strings.Join(names[:last], ", ") + " and " + names[last]
}
